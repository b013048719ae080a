package expression

import (
	"errors"
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"

	"github.com/expr-lang/expr/ast"
	"github.com/expr-lang/expr/file"
	"github.com/expr-lang/expr/parser"
)

// Compile reads an expression over the given columns, which must yield want: Number for a formula, Condition for a
// condition. The error is nil or an *Error.
func Compile(text string, columns []Column, want Type, f Functions) (*Program, error) {
	c, top, err := compile(text, columns, f)
	if err != nil {
		return nil, err
	}
	if top.kind != want {
		return nil, c.mismatch(top, want)
	}
	return &Program{columns: slices.Sorted(maps.Keys(c.used)), number: top.number, truth: top.truth}, nil
}

func compile(text string, columns []Column, f Functions) (*compiler, term, *Error) {
	s, e := words(text, columns)
	if e != nil {
		return nil, term{}, e
	}
	tree, err := parser.Parse(text)
	if err != nil {
		return nil, term{}, s.syntax(err)
	}
	c := &compiler{scan: s, functions: f, byName: make(map[string]Column, len(columns)), used: map[string]int{}}
	for _, column := range columns {
		if id := Identifier(column.Name); Reserved(id) == "" && Writable(id) {
			c.byName[id] = column
			c.names = append(c.names, id)
		}
	}
	// The places of the used columns in Columns are known only when all are found, so there are two passes.
	if _, e := c.node(tree.Node, 0); e != nil {
		return nil, term{}, e
	}
	for i, name := range slices.Sorted(maps.Keys(c.used)) {
		c.used[name] = i
	}
	c.nodes = 0
	top, e := c.node(tree.Node, 0)
	return c, top, e
}

// A compiler turns the tree into functions, inside out.
type compiler struct {
	*scan
	functions Functions
	byName    map[string]Column // by identifier
	names     []string          // the identifiers, in the order given
	used      map[string]int    // name in the plan → place in Program.Columns
	nodes     int
}

// A term is a compiled part of an expression. One of number, text and truth is set, according to kind.
type term struct {
	kind    Type
	from    int // place in the text
	number  func(*run) float64
	text    func(*run) string
	truth   func(*run) bool
	literal bool   // a number or text as written
	value   string // of a literal text
	column  *Column
}

func (c *compiler) node(n ast.Node, depth int) (term, *Error) {
	if n == nil {
		return term{}, c.at(0, "the expression cannot be read", "")
	}
	from := n.Location().From
	c.nodes++
	if depth > maxDepth || c.nodes > maxNodes {
		return term{}, c.at(from, "the expression is too deep or too long", "divide it, for instance with a derived column")
	}
	switch n := n.(type) {
	case *ast.IntegerNode, *ast.FloatNode:
		v, known := c.numbers[from]
		if !known {
			return term{}, c.at(from, "the number cannot be read", "")
		}
		return term{kind: Number, from: from, literal: true, number: func(*run) float64 { return v }}, nil
	case *ast.StringNode:
		v := n.Value
		return term{kind: Text, from: from, literal: true, value: v, text: func(*run) string { return v }}, nil
	case *ast.IdentifierNode:
		return c.column(n.Value, from)
	case *ast.UnaryNode:
		return c.unary(n, depth)
	case *ast.BinaryNode:
		switch n.Operator {
		case "and", "or":
			return c.junction(n, depth)
		case "in":
			return c.in(n, depth)
		case "&&": // written by the library for a chain such as 1 < x < 2
			return term{}, c.at(from, "comparisons cannot be chained", "join two with and, as in 1 < x and x < 2")
		}
		return c.binary(n, depth)
	case *ast.BuiltinNode:
		return c.call(n.Name, n.Arguments, from, depth)
	case *ast.CallNode:
		if callee, plain := n.Callee.(*ast.IdentifierNode); plain {
			return c.call(callee.Value, n.Arguments, from, depth)
		}
	case *ast.ArrayNode:
		return term{}, c.at(from, "a list can only follow in", `write it as in lot in ["A", "B"]`)
	case *ast.MemberNode, *ast.ChainNode, *ast.SliceNode:
		return term{}, c.at(from, "a part of a value cannot be taken", `a list follows in, as in lot in ["A", "B"]`)
	}
	return term{}, c.at(from, "this is not available in an expression", "")
}

func (c *compiler) column(id string, from int) (term, *Error) {
	column, known := c.byName[id]
	if !known {
		if e := c.unwritable(id, from); e != nil {
			return term{}, e
		}
		fix := "columns here: " + List(c.names)
		switch near := Nearest(id, c.names); {
		case len(c.names) == 0:
			fix = "no column can be used here"
		case near != "":
			fix = fmt.Sprintf("did you mean %q? ", near) + fix
		}
		return term{}, c.at(from, fmt.Sprintf("there is no column %q to be used here", id), fix)
	}
	at := c.used[column.Name]
	c.used[column.Name] = at
	t := term{kind: column.Type, from: from, column: &column}
	if column.Type == Number {
		t.number = func(r *run) float64 { return r.row.Numbers[at] }
	} else {
		t.text = func(r *run) string { return r.row.Texts[at] }
	}
	return t, nil
}

func (c *compiler) unary(n *ast.UnaryNode, depth int) (term, *Error) {
	from := n.Location().From
	x, e := c.node(n.Node, depth+1)
	if e != nil {
		return term{}, e
	}
	if n.Operator == "not" {
		if x.kind != Condition {
			return term{}, c.at(from, "not stands before a "+string(x.kind),
				"write parentheses round the condition, as in not (x > 1)")
		}
		return term{kind: Condition, from: from, truth: func(r *run) bool { return !x.truth(r) }}, nil
	}
	if x.kind != Number {
		return term{}, c.at(from, fmt.Sprintf("%s stands before a %s", n.Operator, x.kind), "write it before a number only")
	}
	if n.Operator == "+" {
		return term{kind: Number, from: from, literal: x.literal, number: x.number}, nil
	}
	return term{kind: Number, from: from, literal: x.literal, number: func(r *run) float64 { return -x.number(r) }}, nil
}

func (c *compiler) binary(n *ast.BinaryNode, depth int) (term, *Error) {
	from := n.Location().From
	a, e := c.node(n.Left, depth+1)
	if e != nil {
		return term{}, e
	}
	b, e := c.node(n.Right, depth+1)
	if e != nil {
		return term{}, e
	}
	wrong := func(problem, fix string) (term, *Error) { return term{}, c.at(from, problem, fix) }
	op := n.Operator
	if a.kind == Number && b.kind == Number {
		if f := arithmetic(op, a.number, b.number); f != nil {
			return term{kind: Number, from: from, number: f}, nil
		}
		if f := comparison(op, a.number, b.number); f != nil {
			return term{kind: Condition, from: from, truth: f}, nil
		}
		return wrong(fmt.Sprintf("%q is not available in an expression", op), foreign[op])
	}
	switch op {
	case "+", "-", "*", "/":
		return wrong(fmt.Sprintf("%s joins a %s and a %s", op, a.kind, b.kind), "compute with numbers only")
	}
	if a.kind == Condition || b.kind == Condition {
		return wrong(fmt.Sprintf("%s compares a %s with a %s", op, a.kind, b.kind),
			"join conditions with and, or, not; put parentheses round each")
	}
	if a.kind != b.kind {
		fix := "compare numbers with numbers, texts with texts"
		for _, t := range [][2]term{{a, b}, {b, a}} {
			if column, other := t[0], t[1]; column.column != nil && column.kind == Text && other.literal {
				fix = "write the value between quotation marks, as it stands in the data"
			} else if column.column != nil && column.kind == Number && other.literal {
				fix = "write the number without quotation marks"
			}
		}
		return wrong(fmt.Sprintf("%s compares a %s with a %s", op, a.kind, b.kind), fix)
	}
	switch op {
	case "==", "!=":
		for _, t := range [][2]term{{a, b}, {b, a}} {
			if e := c.level(t[0], t[1]); e != nil {
				return term{}, e
			}
		}
		if op == "==" {
			return term{kind: Condition, from: from, truth: func(r *run) bool { return a.text(r) == b.text(r) }}, nil
		}
		return term{kind: Condition, from: from, truth: func(r *run) bool { return a.text(r) != b.text(r) }}, nil
	}
	return wrong(fmt.Sprintf("%s puts texts in order", op), "compare texts with ==, != or in")
}

// level refuses the comparison of a category with a text that is none of its levels: it would never be true.
func (c *compiler) level(column, value term) *Error {
	if column.column == nil || !value.literal || len(column.column.Levels) == 0 ||
		slices.Contains(column.column.Levels, value.value) {
		return nil
	}
	fix := "levels: " + List(column.column.Levels)
	if near := Nearest(value.value, column.column.Levels); near != "" {
		fix = fmt.Sprintf("did you mean %q? ", near) + fix
	}
	return c.at(value.from, fmt.Sprintf("%q is not a level of column %s", value.value, column.column.Name), fix)
}

func (c *compiler) junction(n *ast.BinaryNode, depth int) (term, *Error) {
	from := n.Location().From
	var sides [2]term
	for i, side := range []ast.Node{n.Left, n.Right} {
		t, e := c.node(side, depth+1)
		if e != nil {
			return term{}, e
		}
		if t.kind != Condition {
			return term{}, c.at(t.from, fmt.Sprintf("%s joins conditions, and this is a %s", n.Operator, t.kind),
				"compare it with something on either side, as in x > 1 and x < 2")
		}
		sides[i] = t
	}
	a, b := sides[0].truth, sides[1].truth
	if n.Operator == "and" {
		return term{kind: Condition, from: from, truth: func(r *run) bool { return a(r) && b(r) }}, nil
	}
	return term{kind: Condition, from: from, truth: func(r *run) bool { return a(r) || b(r) }}, nil
}

func (c *compiler) in(n *ast.BinaryNode, depth int) (term, *Error) {
	from := n.Location().From
	x, e := c.node(n.Left, depth+1)
	if e != nil {
		return term{}, e
	}
	if x.kind == Condition {
		return term{}, c.at(from, "in stands after a condition", `write it as in lot in ["A", "B"]`)
	}
	list, plain := n.Right.(*ast.ArrayNode)
	if !plain || len(list.Nodes) == 0 {
		return term{}, c.at(from, "in wants a list of values", `write it as in lot in ["A", "B"]`)
	}
	numbers, texts := map[float64]bool{}, map[string]bool{}
	for _, node := range list.Nodes {
		item, e := c.node(node, depth+1)
		if e != nil {
			return term{}, e
		}
		if !item.literal {
			return term{}, c.at(item.from, "a list holds values only", "list numbers, or texts between quotation marks")
		}
		if item.kind != x.kind {
			return term{}, c.at(item.from, fmt.Sprintf("the list holds a %s here, and in looks for a %s", item.kind, x.kind),
				"list values of the type of the column")
		}
		if item.kind == Number {
			numbers[item.number(nil)] = true
			continue
		}
		if e := c.level(x, item); e != nil {
			return term{}, e
		}
		texts[item.value] = true
	}
	t := term{kind: Condition, from: from}
	if x.kind == Number {
		t.truth = func(r *run) bool { return numbers[x.number(r)] }
	} else {
		t.truth = func(r *run) bool { return texts[x.text(r)] }
	}
	return t, nil
}

func (c *compiler) call(name string, arguments []ast.Node, from, depth int) (term, *Error) {
	f, known := functions[name]
	if !known {
		return term{}, c.at(from, fmt.Sprintf("there is no function %q", name), "functions here: "+List(functionNames))
	}
	var of []func(*run) float64
	for _, node := range arguments {
		x, e := c.node(node, depth+1)
		if e != nil {
			return term{}, e
		}
		if x.kind != Number {
			return term{}, c.at(x.from, fmt.Sprintf("%s takes numbers, and this is a %s", name, x.kind),
				"write it as in "+f.usage)
		}
		of = append(of, x.number)
	}
	if len(of) < f.least || len(of) > f.most {
		return term{}, c.at(from, fmt.Sprintf("%s has the wrong number of values, %d", name, len(of)),
			"write it as in "+f.usage)
	}
	return term{kind: Number, from: from, number: f.bind(c.functions, of)}, nil
}

// mismatch says that an expression as a whole is of the wrong kind.
func (c *compiler) mismatch(top term, want Type) *Error {
	fix := "compare it with something, as in x > 1"
	if want == Number {
		fix = "write a formula over number columns, as in x - 1"
	}
	return c.at(0, fmt.Sprintf("a %s is wanted, and this is a %s", map[Type]string{Condition: "condition",
		Number: "number"}[want], top.kind), fix)
}

// lexical words what the library says about a character or a text that does not end.
func (s *scan) lexical(err error) *Error {
	var e *file.Error
	if !errors.As(err, &e) {
		return s.at(0, "the expression cannot be read", "")
	}
	switch {
	case strings.Contains(e.Message, "not terminated"):
		return s.at(e.From, "a text does not end", "put a quotation mark at its end")
	case strings.Contains(e.Message, "comment"):
		return s.at(e.From, "an expression cannot hold a remark", "take it out, or write one / to divide")
	case strings.Contains(e.Message, "number"):
		return s.at(e.From, "a number runs into a letter", "write a decimal number, and a sign before what follows")
	case strings.Contains(e.Message, "escape"), strings.Contains(e.Message, "unescape"):
		return s.at(e.From, "a backslash in a text is not understood", `write \\ for one backslash`)
	}
	if e.From >= 0 && e.From < len(s.text) {
		c := string(s.text[e.From])
		fix := "take it out"
		if better := signs[c]; better != "" {
			fix = "write " + better
		}
		return s.at(e.From, fmt.Sprintf("%q has no meaning in an expression", c), fix)
	}
	return s.at(e.From, "the expression cannot be read", "")
}

// signs are typographic signs that word processors put, and what to write for them.
var signs = map[string]string{"≥": ">=", "≤": "<=", "≠": "!=", "“": `"`, "”": `"`, "„": `"`, "‘": "'", "’": "'",
	"«": `"`,
	"»": `"`, "−": "-", "–": "-", "×": "*", "·": "*", "÷": "/", "¬": "not", "∧": "and", "∨": "or", "∈": "in"}

// syntax words what the library says about words in a wrong order.
func (s *scan) syntax(err error) *Error {
	var e *file.Error
	if !errors.As(err, &e) {
		return s.at(0, "the expression cannot be read", "")
	}
	if e.From >= 0 && e.From < len(s.text) && !strings.Contains(e.Message, "token EOF") {
		word := string(s.text[e.From:min(max(e.To, e.From+1), len(s.text))])
		if !strings.ContainsAny(word, "\"'") {
			word = strconv.Quote(word)
		}
		return s.at(e.From, word+" is not expected here", "see what is missing before it, or take it out")
	}
	return s.at(len(s.text), "the expression ends too early", "write what follows, or close the parenthesis")
}
