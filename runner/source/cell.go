package source

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// plainNumber says whether text has the one form of a number that files may use:
// an optional sign, digits, and after them optionally a point with digits, and e with an optional sign and digits.
func plainNumber(text string) bool {
	i := 0
	digits := func() bool {
		start := i
		for i < len(text) && '0' <= text[i] && text[i] <= '9' {
			i++
		}
		return i > start
	}
	sign := func() {
		if i < len(text) && (text[i] == '+' || text[i] == '-') {
			i++
		}
	}
	sign()
	if !digits() {
		return false
	}
	if i < len(text) && text[i] == '.' {
		i++
		if !digits() {
			return false
		}
	}
	if i < len(text) && (text[i] == 'e' || text[i] == 'E') {
		i++
		sign()
		if !digits() {
			return false
		}
	}
	return i == len(text)
}

// number reads a trimmed cell of a number column. If it holds no number, problem says why, without the name of the
// column, and fix what to do. −0 is read as 0.
func number(text string) (value float64, problem, fix string) {
	if !plainNumber(text) {
		problem, fix = notNumber(text)
		return math.NaN(), problem, fix
	}
	value, err := strconv.ParseFloat(text, 64)
	if err != nil { // the form is right, so the value is out of range
		return math.NaN(), quote(text) + " is too large for a number", "use a larger unit"
	}
	if value == 0 {
		mantissa, _, _ := strings.Cut(strings.ToLower(text), "e")
		if strings.ContainsAny(mantissa, "123456789") {
			return math.NaN(), quote(text) + " is too small for a number and would be read as 0", "use a smaller unit"
		}
		value = 0
	}
	return value, "", ""
}

// noValues are texts that laboratories write where there is no value. They are recognised for a better message only:
// the plan says which texts mean no value.
var noValues = []string{"na", "n/a", "n.a.", "#n/a", "nan", "null", "nil", "none", "missing", "blank", "-", "--", "–",
	"—", ".", "?", "nd", "n.d.", "inf", "+inf", "-inf", "infinity", "void"}

// otherMinus turns signs that look like a minus into the minus of the keyboard.
var otherMinus = strings.NewReplacer("\u2212", "-", "\u2010", "-", "\u2011", "-", "\u2012", "-", "\u2013", "-",
	"\u2014", "-", "\uff0d", "-")

func notNumber(text string) (problem, fix string) {
	quoted := quote(text)
	if slices.Contains(noValues, strings.ToLower(text)) {
		return quoted + " is not a number",
			fmt.Sprintf("if it means that there is no value, write missing: [%s] in the source", strconv.Quote(text))
	}
	if plain := otherMinus.Replace(text); plain != text && plainNumber(plain) {
		return quoted + " has a minus sign that is not the one of the keyboard", "write " + plain
	}
	switch first := text[0]; {
	case first == '<':
		return quoted + " is a value below a reporting limit", "such values are not available in this version"
	case first == '>':
		return quoted + " is a value above a limit", "such values are not available in this version"
	}
	if body, found := strings.CutSuffix(text, "%"); found && plainNumber(strings.TrimSpace(body)) {
		return quoted + " is a percentage", fmt.Sprintf("write %s and give the column the unit "+
			"%%", strings.TrimSpace(body))
	}
	if plainNumber(strings.NewReplacer(",", "", ".", "").Replace(text)) && strings.Contains(text, ",") {
		return quoted + " has a comma", "write decimals with a point and thousands without a separator"
	}
	if body := strings.NewReplacer("_", "", " ", "", "'", "", "’", "", "\u00a0", "", "\u202f", "", "\u2009", "").
		Replace(text); body != text && plainNumber(body) {
		return quoted + " has a separator between its digits", "write " + body
	}
	switch {
	case text[0] == '.' && plainNumber("0"+text):
		return quoted + " has no digit before the point", "write 0" + text
	case (strings.HasPrefix(text, "-.") || strings.HasPrefix(text, "+.")) && plainNumber(text[:1]+"0"+text[1:]):
		return quoted + " has no digit before the point", "write " + text[:1] + "0" + text[1:]
	case strings.HasSuffix(text, ".") && plainNumber(text+"0"):
		return quoted + " has no digit after the point", "write " + text + "0"
	}
	return quoted + " is not a number",
		"write digits with a decimal point, or list the text under missing of the source if it means no value"
}
