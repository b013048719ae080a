package expression

import (
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"unicode"

	"github.com/expr-lang/expr/file"
	"github.com/expr-lang/expr/parser/lexer"
)

const (
	maxLength = 1000 // characters of an expression
	maxNodes  = 500  // columns, numbers, texts, operators and calls in it
	maxDepth  = 50   // nested parentheses and operators
)

// decimal is how a number is written: no leading zeros, no hexadecimal digits, no _ between digits.
var decimal = regexp.MustCompile(`^(0|[1-9][0-9]*)(\.[0-9]+)?([eE][+-]?[0-9]+)?$`)

// A scan holds the text of an expression and its words.
type scan struct {
	text    []rune
	columns []Column
	numbers map[int]float64 // place of the first character → value
}

// at makes a mistake at a character of the text, counted from 0.
func (s *scan) at(i int, problem, fix string) *Error {
	i = max(0, min(i, len(s.text)))
	e := &Error{Line: 1, Column: 1, Problem: problem, Fix: fix}
	for _, r := range s.text[:i] {
		if r == '\n' {
			e.Line++
			e.Column = 1
		} else {
			e.Column++
		}
	}
	return e
}

// foreign says what to do instead of a word or sign that the library knows and this language does not.
var foreign = map[string]string{
	"**": "write a product, as in x * x",
	"^":  "write a product, as in x * x",
	"%":  "",
	"??": "", "?": "", "?.": "", ":": "", "::": "", "..": "list the values, as in [1, 2, 3]", ".": "",
	"|": "write or", "||": "write or", "&": "write and", "&&": "write and", "!": "write not, as in not (x > 1)",
	"=": "write == to compare", "=>": "write >=", "=<": "write <=", "<>": "write !=", ";": "", "{": "", "}": "", "#": "",
	"let": "", "if": "", "else": "", "matches": "write ==, or in with a list",
	"contains": "write ==, or in with a list", "startsWith": "write ==, or in with a list",
	"endsWith": "write ==, or in with a list",
	"true":     "write the comparison alone, as in x > 1", "false": "write not, as in not (x > 1)", "nil": "",
}

var operators = []string{"+", "-", "*", "/", "==", "!=", "<", "<=", ">", ">=", "and", "or", "not", "in", ","}

// words reads the text word by word and refuses what the language does not have, before the library makes a tree of it.
func words(text string, columns []Column) (*scan, *Error) {
	s := &scan{text: []rune(text), columns: columns, numbers: map[int]float64{}}
	if len(s.text) > maxLength {
		return nil, s.at(maxLength, fmt.Sprintf("the expression has %d characters, more than %d", len(s.text), maxLength),
			"divide it, for instance with a derived column")
	}
	tokens, err := lexer.Lex(file.NewSource(text))
	if err != nil {
		return nil, s.lexical(err)
	}
	if len(tokens) == 1 {
		return nil, s.at(0, "the expression is empty", "write one, or take the key out")
	}
	if len(tokens) > 2*maxNodes {
		return nil, s.at(tokens[maxNodes].From, "the expression is too long", "divide it, for instance with a derived column")
	}
	end := 0
	for i, token := range tokens {
		if token.Kind == lexer.EOF {
			token.From = len(s.text)
		}
		if e := s.gap(end, token.From); e != nil {
			return nil, e
		}
		end = token.To
		if e := s.word(tokens, i); e != nil {
			return nil, e
		}
	}
	return s, nil
}

// gap refuses a remark between two words: the library would drop it in silence, and 1 // 2 is more likely a slip.
func (s *scan) gap(from, to int) *Error {
	for i := from; i < to; i++ {
		if !unicode.IsSpace(s.text[i]) {
			return s.at(i, fmt.Sprintf("%q begins a remark, which an expression cannot hold", string(s.text[i:i+2])),
				"take it out, or write one / to divide")
		}
	}
	return nil
}

func (s *scan) word(tokens []lexer.Token, i int) *Error {
	token := tokens[i]
	raw := string(s.text[token.From:min(token.To, len(s.text))])
	unavailable := func() *Error {
		return s.at(token.From, fmt.Sprintf("%q is not available in an expression", raw), foreign[raw])
	}
	switch token.Kind {
	case lexer.Number:
		if !decimal.MatchString(raw) {
			return s.at(token.From, fmt.Sprintf("%q is not a plain decimal number", raw), "write it as in 0.5, 12 or 1.5e-3")
		}
		v, err := strconv.ParseFloat(raw, 64)
		if err != nil {
			return s.at(token.From, fmt.Sprintf("%q is too large", raw), "")
		}
		if mantissa, _, _ := strings.Cut(strings.ToLower(raw), "e"); v == 0 && strings.ContainsAny(mantissa, "123456789") {
			return s.at(token.From, fmt.Sprintf("%q is too small to be told from 0", raw), "write 0, or another unit")
		}
		if _, err := strconv.ParseInt(raw, 10, 64); err != nil && !slices.ContainsFunc([]rune(raw), notDigit) {
			return s.at(token.From, fmt.Sprintf("%q has too many digits", raw), "write it with a power of ten, as in 1e20")
		}
		s.numbers[token.From] = v
	case lexer.Operator:
		if next := tokens[i+1]; next.From == token.To && next.To <= len(s.text) {
			if two := string(s.text[token.From:next.To]); two == "<>" || two == "=>" || two == "=<" {
				raw = two
				return unavailable()
			}
		}
		if !slices.Contains(operators, token.Value) {
			return unavailable()
		}
	case lexer.Bracket:
		if raw == "{" || raw == "}" {
			return unavailable()
		}
	case lexer.Bytes:
		return s.at(token.From, "a letter stands before a text", "write the text between quotation marks alone")
	case lexer.String:
		if raw[0] == '`' {
			return s.at(token.From, "a text stands between back quotes", `write it between " or '`)
		}
	case lexer.Identifier:
		if raw == "true" || raw == "false" || raw == "nil" {
			return unavailable()
		}
		_, known := functions[raw]
		call := tokens[i+1].Is(lexer.Bracket, "(")
		if call && !known {
			if e := s.unwritable(raw, token.From); e != nil {
				return e
			}
			fix := "functions here: " + List(functionNames)
			if near := Nearest(raw, functionNames); near != "" {
				fix = fmt.Sprintf("did you mean %q? ", near) + fix
			}
			return s.at(token.From, fmt.Sprintf("there is no function %q", raw), fix)
		}
		if !call && known {
			return s.at(token.From, fmt.Sprintf("%q is a function", raw), "write it as in "+functions[raw].usage)
		}
	}
	return nil
}

// unwritable says that a name is the beginning of a column that an expression cannot write, or returns nil.
func (s *scan) unwritable(id string, from int) *Error {
	for _, c := range s.columns {
		if !Writable(c.Name) && strings.HasPrefix(Identifier(c.Name), id) {
			return s.at(from, fmt.Sprintf("column %q cannot be written in an expression", c.Name),
				"rename it in the data and in the plan, with letters, digits and _")
		}
	}
	return nil
}

func notDigit(r rune) bool { return r < '0' || r > '9' }
