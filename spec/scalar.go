package spec

import (
	"errors"
	"fmt"
	"math/big"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"lotproof/spec/expression"
)

const (
	maxName = 100   // characters of a name or an identifier
	maxLine = 255   // characters of a text of one line
	maxText = 10000 // characters of a longer text
)

// scalar returns the text of a single value.
func (r *reader) scalar(f field) (string, bool) {
	switch {
	case isNull(f.node) && f.node.Value != "":
		r.wrongAt(f.at, fmt.Sprintf("%s is %s, which means no value", f.name, f.node.Value),
			"write a value; if the word itself is meant, put it between quotation marks")
	case isNull(f.node), f.node.Kind == scalarNode && strings.TrimSpace(f.node.Value) == "":
		r.wrongAt(f.at, f.name+" is empty", "write a value, or take the key out")
	case f.node.Kind != scalarNode:
		r.wrongAt(f.at, f.name+" must be a single value",
			"write it behind the colon, without a list and without further keys")
	default:
		return f.node.Value, true
	}
	return "", false
}

// is says whether the value is the word.
func (f field) is(word string) bool { return f.node.Kind == scalarNode && f.node.Value == word }

// text returns a text, of one or several lines.
func (r *reader) text(f field) (string, bool) {
	value, ok := r.scalar(f)
	if !ok {
		return "", false
	}
	value = strings.TrimRight(value, "\n") // a text in block style ends with a line feed
	if strings.TrimSpace(value) != value {
		r.wrongAt(f.at, f.name+" begins or ends with a blank", "take the blank out")
		return "", false
	}
	if n := utf8.RuneCountInString(value); n > maxText {
		r.wrongAt(f.at, fmt.Sprintf("%s has %d characters", f.name, n), fmt.Sprintf("write at most %d", maxText))
		return "", false
	}
	return value, true
}

// line returns a text of one line with at most most characters.
func (r *reader) line(f field, most int) (string, bool) {
	value, ok := r.text(f)
	if !ok {
		return "", false
	}
	if strings.ContainsAny(value, "\n\t") {
		r.wrongAt(f.at, f.name+" holds a line break or a tab", "write it on one line, with blanks")
		return "", false
	}
	if n := utf8.RuneCountInString(value); n > most {
		r.wrongAt(f.at, fmt.Sprintf("%s has %d characters", f.name, n), fmt.Sprintf("write at most %d", most))
		return "", false
	}
	return value, true
}

// choice returns one of a few words. later are words of a later version.
func (r *reader) choice(f field, words []string, later ...string) (string, bool) {
	value, ok := r.scalar(f)
	if !ok {
		return "", false
	}
	if slices.Contains(words, value) {
		return value, true
	}
	fix := "write " + choices(words)
	if slices.Contains(later, value) {
		r.wrongAt(f.at, fmt.Sprintf("%s %q is not available in this version", f.name, value), fix)
		return "", false
	}
	if near := expression.Nearest(value, words); near != "" {
		fix = fmt.Sprintf("did you mean %q? ", near) + fix
	}
	r.wrongAt(f.at, fmt.Sprintf("%s %q is not known", f.name, quotable(value)), fix)
	return "", false
}

// yes returns a yes or no.
func (r *reader) yes(f field) (yes, ok bool) {
	value, ok := r.scalar(f)
	if !ok {
		return false, false
	}
	switch value {
	case "yes", "true":
		return true, true
	case "no", "false":
		return false, true
	}
	r.wrongAt(f.at, fmt.Sprintf("%s %q is neither yes nor no", f.name, quotable(value)), "write yes or no")
	return false, false
}

var (
	decimal      = regexp.MustCompile(`^-?(0|[1-9][0-9]*)(\.[0-9]+)?([eE][+-]?[0-9]{1,3})?$`)
	wholeNumber  = regexp.MustCompile(`^(0|[1-9][0-9]*)$`)
	commaDecimal = regexp.MustCompile(`^-?[0-9]+,[0-9]+$`)
	leadingZeros = regexp.MustCompile(`^-?0+[0-9]`)
	pointFirst   = regexp.MustCompile(`^-?\.[0-9]+$`)
	pointLast    = regexp.MustCompile(`^-?[0-9]+\.$`)
)

// mostDigits bounds the length of a written number, so that exact arithmetic with it stays small.
const mostDigits = 40

// digits returns the text of a number, which has been found to be one.
func (r *reader) digits(f field, whole bool) (string, bool) {
	value, ok := r.scalar(f)
	if !ok {
		return "", false
	}
	wanted, form := "number", decimal
	if whole {
		wanted, form = "whole number", wholeNumber
	}
	if f.node.Style != 0 {
		fix := "write it without quotation marks"
		if !form.MatchString(value) {
			fix = "write digits, without quotation marks"
		}
		r.wrongAt(f.at, fmt.Sprintf("%s must be a %s, and %q is marked as a text", f.name, wanted, quotable(value)), fix)
		return "", false
	}
	if form.MatchString(value) && len(value) <= mostDigits {
		return value, true
	}
	r.wrongAt(f.at, fmt.Sprintf("%s %q is not a %s", f.name, quotable(value), wanted), r.digitsFix(value, whole))
	return "", false
}

// digitsFix says how to write a number that is written in another way.
func (r *reader) digitsFix(value string, whole bool) string {
	plain := strings.NewReplacer("_", "", " ", "", "'", "").Replace(value)
	switch {
	case len(value) > mostDigits:
		return fmt.Sprintf("write at most %d digits", mostDigits)
	case strings.HasPrefix(value, "+") && decimal.MatchString(value[1:]):
		return "write " + value[1:] + " without the sign"
	case commaDecimal.MatchString(value):
		return "write decimals with a point: " + strings.Replace(value, ",", ".", 1)
	case leadingZeros.MatchString(plain) && strings.TrimLeft(strings.TrimPrefix(plain, "-"), "0.123456789") == "":
		return "write it without leading zeros"
	case pointFirst.MatchString(value):
		return "write " + strings.Replace(value, ".", "0.", 1)
	case pointLast.MatchString(value):
		return "write " + strings.TrimSuffix(value, ".")
	case plain != value && decimal.MatchString(plain):
		return "write " + plain
	case whole && decimal.MatchString(value):
		return "write digits only, without a sign, a point or an exponent"
	}
	if share := percent(value); share != "" && !whole {
		return "write " + share
	}
	if whole {
		return "write digits only"
	}
	return "write digits, as in 1.25"
}

// percent returns "0.95 for 95 %" for a percentage from 0 to 100, with the sign or without it, else "".
func percent(value string) string {
	value = strings.TrimSpace(strings.TrimSuffix(value, "%"))
	exact, ok := new(big.Rat).SetString(value)
	if !decimal.MatchString(value) || strings.ContainsAny(value, "eE") || len(value) > mostDigits/2 || !ok ||
		exact.Sign() <= 0 || exact.Cmp(big.NewRat(100, 1)) >= 0 {
		return ""
	}
	share := exact.Quo(exact, big.NewRat(100, 1)).FloatString(mostDigits/2 + 2)
	return strings.TrimRight(share, "0") + " for " + value + " %"
}

// number returns a decimal number.
func (r *reader) number(f field) (Number, bool) {
	text, ok := r.digits(f, false)
	if !ok {
		return Number{}, false
	}
	value, err := strconv.ParseFloat(text, 64)
	if err != nil || value == 0 && strings.ContainsAny(mantissa(text), "123456789") {
		r.wrongAt(f.at, fmt.Sprintf("%s %s is too large or too small to be represented", f.name, text),
			"choose a unit in which numbers are of usual size")
		return Number{}, false
	}
	return Number{Text: text, Value: value}, true
}

func mantissa(text string) string {
	text, _, _ = strings.Cut(strings.ToLower(text), "e")
	return text
}

// whole returns a whole number from least to most.
func (r *reader) whole(f field, least, most uint64) (uint64, bool) {
	text, ok := r.digits(f, true)
	if !ok {
		return 0, false
	}
	value, err := strconv.ParseUint(text, 10, 64)
	if errors.Is(err, strconv.ErrRange) || value < least || value > most {
		r.wrongAt(f.at, fmt.Sprintf("%s %s is out of range", f.name, text), fmt.Sprintf("write a whole number from %d to %d",
			least, most))
		return 0, false
	}
	return value, true
}

// maxDecimals is how many decimals a result can be shown with: a 64-bit number has no more than 15 or 16 sure digits.
const maxDecimals = 15

// decimals returns the value of the key "decimals", or -1.
func (m *mapping) decimals() int {
	if f, given := m.has("decimals"); given {
		if n, ok := m.r.whole(f, 0, maxDecimals); ok {
			return int(n)
		}
	}
	return -1
}
