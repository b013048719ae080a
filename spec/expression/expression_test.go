package expression

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"
)

var columns = []Column{
	{Name: "strength", Type: Number}, {Name: "width", Type: Number}, {Name: "age weeks", Type: Number},
	{Name: "arm", Type: Text, Levels: []string{"fresh", "aged"}}, {Name: "note", Type: Text},
	{Name: "Größe", Type: Number}, {Name: "strength (N)", Type: Number},
}

// standard uses the functions of package math; the programme gives its own.
var standard = Functions{Exp: math.Exp, Log: math.Log, Log10: math.Log10}

func must(t testing.TB, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

// row returns a row with strength 2, width 8, age weeks 12, arm aged, note "void", Größe 3.
func row(p *Program) Row {
	numbers := map[string]float64{"strength": 2, "width": 8, "age weeks": 12, "Größe": 3}
	texts := map[string]string{"arm": "aged", "note": "void"}
	var r Row
	for _, name := range p.Columns() {
		r.Numbers = append(r.Numbers, numbers[name])
		r.Texts = append(r.Texts, texts[name])
	}
	return r
}

// Values by mental arithmetic. The numbers are exact in binary, so the results are compared exactly.
func TestNumber(t *testing.T) {
	for _, tt := range []struct {
		text string
		want float64
	}{
		{"strength", 2}, {"strength - 1.20", 2 - 1.20}, {"15 * strength / width", 3.75}, {"-strength + 3", 1}, {"+width", 8},
		{"2 + 3 * 4", 14}, {"(2 + 3) * 4", 20}, {"10 - 2 - 3", 5}, {"16 / 4 / 2", 2}, {"7 / 2", 3.5}, {"-(2 + 3) * 2", -10},
		{"abs(1 - width)", 7}, {"sqrt(width * strength)", 4}, {"min(width, strength, 5)", 2}, {"max(width, strength, 5)", 8},
		{"age_weeks / 4", 3}, {"Größe * 2", 6}, {"1e3 + 1.5e-1", 1000.15}, {"9007199254740993", 9007199254740992},
		{"exp(0) + log(1) + log10(1000)", 4}, {"strength\n- 1", 1}, {"0.1 + 0.2", 0.30000000000000004}, {"0", 0},
	} {
		p, err := Compile(tt.text, columns, Number, standard)
		if err != nil {
			t.Errorf("%s: %v", tt.text, err)
			continue
		}
		if got, err := p.Number(row(p)); err != nil || got != tt.want {
			t.Errorf("%s = %.17g, %v; want %.17g", tt.text, got, err, tt.want)
		}
	}
}

func TestCondition(t *testing.T) {
	for _, tt := range []struct {
		text string
		want bool
	}{
		{`arm == "aged"`, true}, {`arm != 'aged'`, false}, {`"fresh" == arm`, false}, {"strength > 2", false},
		{"strength >= 2", true},
		{"2 < width", true}, {"width <= 8", true}, {"width < 8", false}, {"width == 8.0", true}, {"width != 8", false},
		{`note in ["void", "doubtful"]`, true}, {`note not in ["void"]`, false}, {"width in [1, 8]", true},
		{"width in [-8]", false},
		{`not (arm == "fresh")`, true}, {`arm == "fresh" or strength > 1 and width > 9`, false},
		{`arm == "aged" or strength > 1 and width > 9`, true}, {`(arm == "aged" or strength > 1) and width > 9`, false},
		{"strength + 1 > 2.5 and width / 2 == 4", true}, {`not not (width > 1)`, true}, {`arm == note`, false},
	} {
		p, err := Compile(tt.text, columns, Condition, standard)
		if err != nil {
			t.Errorf("%s: %v", tt.text, err)
			continue
		}
		if got, err := p.Condition(row(p)); err != nil || got != tt.want {
			t.Errorf("%s = %v, %v; want %v", tt.text, got, err, tt.want)
		}
	}
}

// What has no finite value says why, even where a larger expression would hide it: 1/∞ is 0.
func TestNoValue(t *testing.T) {
	for _, tt := range []struct {
		text string
		want error
	}{
		{"1 / (strength - 2)", ErrZeroDivisor}, {"0 / (strength - 2)", ErrZeroDivisor}, {"sqrt(1 - strength)", ErrRoot},
		{"log(strength - 2)", ErrLogarithm}, {"log10(-strength)", ErrLogarithm}, {"exp(1000)", ErrTooLarge},
		{"1 / (1e308 * 10)", ErrTooLarge}, {"1e308 + 1e308", ErrTooLarge}, {"-1e308 - 1e308", ErrTooLarge},
		{"1e308 / 1e-10", ErrTooLarge}, {"min(1, 1 / (width - 8))", ErrZeroDivisor},
	} {
		p, err := Compile(tt.text, columns, Number, standard)
		must(t, err)
		if got, err := p.Number(row(p)); !errors.Is(err, tt.want) {
			t.Errorf("%s = %v, %v; want %v", tt.text, got, err, tt.want)
		}
		p, err = Compile(tt.text+" > 0", columns, Condition, standard)
		must(t, err)
		if got, err := p.Condition(row(p)); !errors.Is(err, tt.want) {
			t.Errorf("%s > 0 = %v, %v; want %v", tt.text, got, err, tt.want)
		}
	}
}

// The right side of and, or is not computed where the left side decides, so that a division can be guarded.
func TestGuard(t *testing.T) {
	p, err := Compile("strength != 2 and 1 / (strength - 2) > 1", columns, Condition, standard)
	must(t, err)
	if got, err := p.Condition(row(p)); got || err != nil {
		t.Errorf("got %v, %v; want false, nil", got, err)
	}
}

func TestColumns(t *testing.T) {
	p, err := Compile("width > 1 and strength > 1 and age_weeks > width", columns, Condition, standard)
	must(t, err)
	if got, want := p.Columns(), []string{"age weeks", "strength", "width"}; !slices.Equal(got, want) {
		t.Errorf("columns %q, want %q", got, want)
	}
}

// Every message whole. The texts of the messages are our own; what must be refused is the package's own rule.
func TestMistakes(t *testing.T) {
	const columnsHere = "columns here: strength, width, age_weeks, arm, note, Größe"
	const functionsHere = "functions here: abs, sqrt, min, max, exp, log, log10"
	for _, tt := range []struct {
		want    Type
		text    string
		message string
	}{
		{Condition, "", "1:1: the expression is empty; write one, or take the key out"},
		{Condition, "strength",
			"1:1: a condition is wanted, and this is a number; compare it with something, as in x > 1"},
		{Number, "strength > 1",
			"1:1: a number is wanted, and this is a condition; write a formula over number columns, as in x - 1"},
		{Number, "note", "1:1: a number is wanted, and this is a text; write a formula over number columns, as in x - 1"},
		{Number, "strength ** 2", `1:10: "**" is not available in an expression; write a product, as in x * x`},
		{Number, "strength ^ 2", `1:10: "^" is not available in an expression; write a product, as in x * x`},
		{Number, "strength % 2", `1:10: "%" is not available in an expression`},
		{Number, "strength ?? 1", `1:10: "??" is not available in an expression`},
		{Condition, "strength > 1 ? 1 : 2", `1:14: "?" is not available in an expression`},
		{Condition, "strength in 1..3", `1:14: ".." is not available in an expression; list the values, as in [1, 2, 3]`},
		{Condition, "strength | abs()", `1:10: "|" is not available in an expression; write or`},
		{Condition, "map([1], # + 1)", `1:1: there is no function "map"; did you mean "max"? ` + functionsHere},
		{Condition, "note.length", `1:5: "." is not available in an expression`},
		{Condition, "note?.length", `1:5: "?." is not available in an expression`},
		{Condition, "let x = 1; x", `1:1: "let" is not available in an expression`},
		{Condition, "if strength > 1 {1} else {2}", `1:1: "if" is not available in an expression`},
		{Condition, `note matches "v"`, `1:6: "matches" is not available in an expression; write ==, or in with a list`},
		{Condition, `note contains "v"`, `1:6: "contains" is not available in an expression; write ==, or in with a list`},
		{Condition, `note startsWith "v"`,
			`1:6: "startsWith" is not available in an expression; write ==, or in with a list`},
		{Condition, `note endsWith "v"`, `1:6: "endsWith" is not available in an expression; write ==, or in with a list`},
		{Condition, `not note contains "v"`,
			`1:10: "contains" is not available in an expression; write ==, or in with a list`},
		{Condition, "3 > 2 > 1", "1:7: comparisons cannot be chained; join two with and, as in 1 < x and x < 2"},
		{Condition, "1 < strength < 3", "1:14: comparisons cannot be chained; join two with and, as in 1 < x and x < 2"},
		{Condition, "1 < strength == 3",
			"1:14: == compares a condition with a number; join conditions with and, or, not; put parentheses " +
				"round each"},
		{Condition, `arm == "aged" == true`,
			`1:18: "true" is not available in an expression; write the comparison alone, as in x > 1`},
		{Condition, "strength == width == 2",
			"1:19: == compares a condition with a number; join conditions with and, or, not; put parentheses " +
				"round each"},
		{Condition, "(strength > 1) == (width > 1)",
			"1:16: == compares a condition with a condition; join conditions with and, or, not; put " +
				"parentheses round each"},
		{Condition, "true", `1:1: "true" is not available in an expression; write the comparison alone, as in x > 1`},
		{Condition, "false", `1:1: "false" is not available in an expression; write not, as in not (x > 1)`},
		{Condition, "nil", `1:1: "nil" is not available in an expression`},
		{Condition, "strength = 2", `1:10: "=" is not available in an expression; write == to compare`},
		{Condition, "strength => 1", `1:10: "=>" is not available in an expression; write >=`},
		{Condition, "strength =< 1", `1:10: "=<" is not available in an expression; write <=`},
		{Condition, "strength <> 1", `1:10: "<>" is not available in an expression; write !=`},
		{Condition, "strength ≥ 1", `1:10: "≥" has no meaning in an expression; write >=`},
		{Condition, "arm == “aged”", `1:8: "“" has no meaning in an expression; write "`},
		{Number, "strength − 1", `1:10: "−" has no meaning in an expression; write -`},
		{Condition, "strength > 1 && width > 2", `1:14: "&&" is not available in an expression; write and`},
		{Condition, "strength > 1 || width > 2", `1:14: "||" is not available in an expression; write or`},
		{Condition, "!(strength > 1)", `1:1: "!" is not available in an expression; write not, as in not (x > 1)`},
		{Condition, "not strength > 1",
			"1:1: not stands before a number; write parentheses round the condition, as in not (x > 1)"},
		{Condition, `not arm == "aged"`,
			"1:1: not stands before a text; write parentheses round the condition, as in not (x > 1)"},
		{Number, "-note", "1:1: - stands before a text; write it before a number only"},
		{Number, "not strength",
			"1:1: not stands before a number; write parentheses round the condition, as in not (x > 1)"},
		{Condition, `arm == "agged"`,
			`1:8: "agged" is not a level of column arm; did you mean "aged"? levels: fresh, aged`},
		{Condition, `arm in ["aged", "new"]`, `1:17: "new" is not a level of column arm; levels: fresh, aged`},
		{Condition, `"worn" != arm`, `1:1: "worn" is not a level of column arm; levels: fresh, aged`},
		{Condition, "arm == 1",
			"1:5: == compares a text with a number; write the value between quotation marks, as it stands in the data"},
		{Condition, `strength == "2"`, "1:10: == compares a number with a text; write the number without quotation marks"},
		{Condition, `note == arm == "x"`,
			"1:13: == compares a condition with a text; join conditions with and, or, not; put parentheses round each"},
		{Condition, `note < "x"`, "1:6: < puts texts in order; compare texts with ==, != or in"},
		{Number, "strength + note", "1:10: + joins a number and a text; compute with numbers only"},
		{Number, "note * 2", "1:6: * joins a text and a number; compute with numbers only"},
		{Number, "0x10", `1:1: "0x10" is not a plain decimal number; write it as in 0.5, 12 or 1.5e-3`},
		{Number, "010", `1:1: "010" is not a plain decimal number; write it as in 0.5, 12 or 1.5e-3`},
		{Number, "1_000", `1:1: "1_000" is not a plain decimal number; write it as in 0.5, 12 or 1.5e-3`},
		{Number, ".5", `1:1: ".5" is not a plain decimal number; write it as in 0.5, 12 or 1.5e-3`},
		{Number, "5.", `1:1: "5." is not a plain decimal number; write it as in 0.5, 12 or 1.5e-3`},
		{Number, "1e400", `1:1: "1e400" is too large`},
		{Number, "99999999999999999999",
			`1:1: "99999999999999999999" has too many digits; write it with a power of ten, as in 1e20`},
		{Number, "1e-400", `1:1: "1e-400" is too small to be told from 0; write 0, or another unit`},
		{Number, "12abc", "1:3: a number runs into a letter; write a decimal number, and a sign before what follows"},
		{Number, "strength // 2",
			`1:10: "//" begins a remark, which an expression cannot hold; take it out, or write one / to divide`},
		{Number, "strength /* half */ / 2",
			`1:10: "/*" begins a remark, which an expression cannot hold; take it out, or write one / to divide`},
		{Number, "strength /* half", "1:17: an expression cannot hold a remark; take it out, or write one / to divide"},
		{Condition, "strength # 2", `1:10: "#" is not available in an expression`},
		{Condition, `b"x" == note`, "1:1: a letter stands before a text; write the text between quotation marks alone"},
		{Condition, `"open`, "1:6: a text does not end; put a quotation mark at its end"},
		{Condition, `note == "\q"`, `1:11: a backslash in a text is not understood; write \\ for one backslash`},
		{Number, "now()", `1:1: there is no function "now"; ` + functionsHere},
		{Number, "sqr(1)", `1:1: there is no function "sqr"; did you mean "sqrt"? ` + functionsHere},
		{Number, "sqrt", `1:1: "sqrt" is a function; write it as in sqrt(x)`},
		{Number, "sqrt(1, 2)", "1:1: sqrt has the wrong number of values, 2; write it as in sqrt(x)"},
		{Number, "min(1)", "1:1: min has the wrong number of values, 1; write it as in min(x, y)"},
		{Number, "abs()", "1:1: abs has the wrong number of values, 0; write it as in abs(x)"},
		{Number, "abs(note)", "1:5: abs takes numbers, and this is a text; write it as in abs(x)"},
		{Number, "len(note)", `1:1: there is no function "len"; ` + functionsHere},
		{Number, "::abs(1)", `1:1: "::" is not available in an expression`},
		{Number, "strength.abs()", `1:9: "." is not available in an expression`},
		{Condition, "strength > ", "1:12: the expression ends too early; write what follows, or close the parenthesis"},
		{Condition, "(strength > 1", "1:14: the expression ends too early; write what follows, or close the parenthesis"},
		{Condition, "strength > 1)", `1:13: ")" is not expected here; see what is missing before it, or take it out`},
		{Condition, "strength width", `1:10: "width" is not expected here; see what is missing before it, or take it out`},
		{Condition, `"a" "b"`, `1:5: "b" is not expected here; see what is missing before it, or take it out`},
		{Condition, "strength > 1 and",
			"1:17: the expression ends too early; write what follows, or close the parenthesis"},
		{Condition, "and", `1:1: "and" is not expected here; see what is missing before it, or take it out`},
		{Condition, "not", "1:4: the expression ends too early; write what follows, or close the parenthesis"},
		{Condition, "in", `1:1: "in" is not expected here; see what is missing before it, or take it out`},
		{Condition, "not in", `1:5: "in" is not expected here; see what is missing before it, or take it out`},
		{Condition, "strength not > 1", `1:14: ">" is not expected here; see what is missing before it, or take it out`},
		{Condition, "strength in []", `1:10: in wants a list of values; write it as in lot in ["A", "B"]`},
		{Condition, "strength in [width]",
			"1:14: a list holds values only; list numbers, or texts between quotation marks"},
		{Condition, `strength in ["a"]`,
			"1:14: the list holds a text here, and in looks for a number; list values of the type of the column"},
		{Condition, "strength in width", `1:10: in wants a list of values; write it as in lot in ["A", "B"]`},
		{Condition, "(strength > 1) in [1]", `1:16: in stands after a condition; write it as in lot in ["A", "B"]`},
		{Condition, "[1, 2]", `1:1: a list can only follow in; write it as in lot in ["A", "B"]`},
		{Condition, "note[0]", `1:5: a part of a value cannot be taken; a list follows in, as in lot in ["A", "B"]`},
		{Condition, "{a: 1}", `1:1: "{" is not available in an expression`},
		{Condition, "strength > 1; width > 1", `1:13: ";" is not available in an expression`},
		{Condition, "strength @ 2", `1:10: "@" has no meaning in an expression; take it out`},
		{Condition, "§", `1:1: "§" has no meaning in an expression; take it out`},
		{Condition, "strength > 1 and width",
			"1:18: and joins conditions, and this is a number; compare it with something on either side, as " +
				"in x > 1 and x < 2"},
		{Condition, "width or strength > 1",
			"1:1: or joins conditions, and this is a number; compare it with something on either side, as in " +
				"x > 1 and x < 2"},
		{Number, "max(1,,2)", `1:7: "," is not expected here; see what is missing before it, or take it out`},
		{Condition, "strenght > 1",
			`1:1: there is no column "strenght" to be used here; did you mean "strength"? ` + columnsHere},
		{Condition, "Width > 1", `1:1: there is no column "Width" to be used here; did you mean "width"? ` + columnsHere},
		{Condition, `lot == "A"`, `1:1: there is no column "lot" to be used here; ` + columnsHere},
		{Condition, "strength (N) > 1",
			`1:1: column "strength (N)" cannot be written in an expression; rename it in the data and in the ` +
				`plan, with letters, digits and _`},
		{Condition, "strength\n  > 1 and\n foo > 1", `3:2: there is no column "foo" to be used here; ` + columnsHere},
	} {
		_, err := Compile(tt.text, columns, tt.want, Functions{})
		if err == nil {
			t.Errorf("%s: accepted", tt.text)
		} else if err.Error() != tt.message {
			t.Errorf("%s:\n got %s\nwant %s", tt.text, err, tt.message)
		}
	}
}

// Length, number of parts and depth are bounded; what is just within the bounds is accepted.
func TestBounds(t *testing.T) {
	for _, tt := range []struct {
		name, text string
		good       bool
	}{
		{"1000 characters", strings.Repeat(" ", 999) + "1", true},
		{"1001 characters", strings.Repeat(" ", 1000) + "1", false},
		{"50 signs", strings.Repeat("-", 50) + "1", true},
		{"51 signs", strings.Repeat("-", 51) + "1", false},
		{"51 numbers added", strings.Repeat("1+", 50) + "1", true},
		{"52 numbers added", strings.Repeat("1+", 51) + "1", false},
		{"a wide call", "max(" + strings.Repeat("1,", 497) + "1)", true},
		{"too many parts", "max(" + strings.Repeat("1,", 497) + "1)-1", false},
	} {
		_, err := Compile(tt.text, columns, Number, standard)
		if got := err == nil; got != tt.good {
			t.Errorf("%s: accepted %v, want %v: %v", tt.name, got, tt.good, err)
		}
	}
}

func TestNames(t *testing.T) {
	for _, tt := range []struct {
		name, identifier, reserved string
		writable                   bool
	}{
		{"age weeks", "age_weeks", "", true}, {"and", "and", "a word", true}, {"log10", "log10", "a function", true},
		{"1st", "1st", "", false}, {"strength (N)", "strength_(N)", "", false}, {"Größe2", "Größe2", "", true}, {"",
			"", "", false},
	} {
		if got := Identifier(tt.name); got != tt.identifier {
			t.Errorf("Identifier(%q) = %q, want %q", tt.name, got, tt.identifier)
		}
		if got := Reserved(tt.name); got != tt.reserved {
			t.Errorf("Reserved(%q) = %q, want %q", tt.name, got, tt.reserved)
		}
		if got := Writable(tt.name); got != tt.writable {
			t.Errorf("Writable(%q) = %v, want %v", tt.name, got, tt.writable)
		}
	}
}

func TestNearest(t *testing.T) {
	candidates := []string{"statistic", "status", "of", "lower_at_least"}
	for _, tt := range []struct{ name, want string }{
		{"statstic", "statistic"}, {"Statistic", "statistic"}, {"lower at least", "lower_at_least"}, {"fo", ""},
		{"sttaus", "status"},
		{"median", ""}, {"", ""},
	} {
		if got := Nearest(tt.name, candidates); got != tt.want {
			t.Errorf("Nearest(%q) = %q, want %q", tt.name, got, tt.want)
		}
	}
}
