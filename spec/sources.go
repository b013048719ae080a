package spec

import (
	"cmp"
	"fmt"
	"path"
	"regexp"
	"slices"
	"strings"

	"lotproof/spec/expression"
)

var (
	sourceKeys      = []string{"file", "sheet", "sha256", "missing", "columns", "exclude", "derive"}
	laterSourceKeys = []string{"database", "query"}
	columnKeys      = []string{"type", "unit", "decimals", "levels", "shape"}
	laterColumnKeys = []string{"nondetect"}
	excludeKeys     = []string{"where", "because", "by"}
	deriveKeys      = []string{"formula", "unit", "decimals"}
	columnTypes     = []string{string(TypeNumber), string(TypeCategory), string(TypeText)}
	shapes          = []string{"normal", "symmetric", "skewed", "lognormal", "unknown"}
)

func (r *reader) sources(f field) {
	r.broken = map[string]bool{}
	m := r.open(f, nil, nil)
	if m == nil {
		return
	}
	if len(m.keys) == 0 {
		r.wrongAt(f.at, "sources holds no source", "write a name of your choice with file: and columns: below it")
	}
	for _, name := range m.keys {
		s := Source{Name: name, Missing: []string{}, Columns: []Column{}, Exclude: []Exclusion{}, Derive: []Derived{}}
		at := m.fields[name]
		if problem := wrongName(name); problem != "" {
			r.wrongAt(at.at, fmt.Sprintf("source name %q %s", quotable(name), problem), "choose a short plain name")
		}
		at.name = "source " + quotable(name)
		r.source(at, &s)
		r.plan.Sources = append(r.plan.Sources, s)
	}
	slices.SortFunc(r.plan.Sources, func(a, b Source) int { return cmp.Compare(a.Name, b.Name) })
}

// wrongName says what is wrong with a name that the plan chooses, if anything.
func wrongName(name string) string {
	switch {
	case len([]rune(name)) > maxName:
		return fmt.Sprintf("has more than %d characters", maxName)
	case strings.TrimSpace(name) != name:
		return "begins or ends with a blank"
	case strings.ContainsAny(name, "\n\t"):
		return "holds a line break or a tab"
	}
	return ""
}

func (r *reader) source(f field, s *Source) {
	m := r.open(f, sourceKeys, laterSourceKeys)
	if m == nil {
		r.broken[s.Name] = true
		return
	}
	if f, given := m.need("file", "write file: and the path of the data file as seen from the plan"); given {
		s.File = r.dataFile(f)
	}
	if f, given := m.has("sheet"); given {
		s.Sheet, _ = r.line(f, maxLine)
		if s.File != "" && !strings.EqualFold(path.Ext(s.File), ".xlsx") {
			r.wrongAt(f.at, fmt.Sprintf("a sheet is named, and %s is not a workbook", s.File),
				"take sheet out, or name an .xlsx file")
		}
	}
	if f, given := m.has("sha256"); given {
		s.SHA256 = r.sha256(f)
	}
	if f, given := m.has("missing"); given {
		for _, item := range r.items(f, true) {
			text, ok := r.line(item, maxLine)
			if ok && slices.Contains(s.Missing, text) {
				r.wrongAt(item.at, fmt.Sprintf("missing mark %q is given twice", text), "keep one")
			} else if ok {
				s.Missing = append(s.Missing, text)
			}
		}
	}
	r.broken[s.Name] = true
	if f, given := m.need("columns", "write columns: and below it, for each, its heading and {type: number}, category or "+
		"text"); given {
		before := len(r.mistakes)
		r.columns(f, s)
		if f, given := m.has("derive"); given {
			r.derive(f, s, len(r.mistakes) > before)
		}
		r.broken[s.Name] = len(r.mistakes) > before
		slices.SortFunc(s.Columns, func(a, b Column) int { return cmp.Compare(a.Name, b.Name) })
		slices.SortFunc(s.Derive, func(a, b Derived) int { return cmp.Compare(a.Name, b.Name) })
	}
	if f, given := m.has("exclude"); given {
		for i, item := range r.items(f, false) {
			item.name = fmt.Sprintf("exclusion %d of source %s", i+1, s.Name)
			r.exclusion(item, s)
		}
	}
}

func (r *reader) exclusion(f field, s *Source) {
	m := r.open(f, excludeKeys, nil)
	if m == nil {
		return
	}
	var e Exclusion
	if f, given := m.need("where", "write the condition that such rows fulfil"); given {
		e.Where = r.condition(f, s)
	}
	if f, given := m.need("because", "state the reason; no row is taken out without one"); given {
		e.Because, _ = r.text(f)
	}
	if f, given := m.need("by", "state who, or which function, decided it"); given {
		e.By, _ = r.line(f, maxLine)
	}
	s.Exclude = append(s.Exclude, e)
}

func (r *reader) columns(f field, s *Source) {
	m := r.open(f, nil, nil)
	if m == nil {
		return
	}
	if len(m.keys) == 0 {
		r.wrongAt(f.at, "columns names no column", "write below it the heading of each column that the study uses")
	}
	for _, name := range m.keys {
		f := m.fields[name]
		key := r.keyAt(m, name)
		if !r.columnName(key, name, s) {
			continue
		}
		f.name = "column " + quotable(name)
		c := Column{Name: name, Decimals: -1, Levels: []string{}}
		r.column(f, &c)
		s.Columns = append(s.Columns, c)
	}
}

// columnName refuses a name that an expression could not tell from something else.
func (r *reader) columnName(at Position, name string, s *Source) bool {
	problem, fix := "", "rename the column in the data and here"
	if problem = wrongName(name); problem == "" {
		switch expression.Reserved(name) {
		case "a word":
			problem = "is a word of conditions and formulas"
		case "a function":
			problem = "is a function of conditions and formulas"
		}
	}
	id := expression.Identifier(name)
	for _, c := range s.Columns {
		if problem == "" && c.Name == name {
			problem = "is given twice"
		} else if problem == "" && expression.Identifier(c.Name) == id {
			problem = fmt.Sprintf("reads like column %q, because blanks are written _ in conditions", c.Name)
		}
	}
	for _, d := range s.Derive {
		if problem == "" && expression.Identifier(d.Name) == id {
			problem = fmt.Sprintf("reads like derived column %q, because blanks are written _ in conditions", d.Name)
		}
	}
	if problem != "" {
		r.wrongAt(at, fmt.Sprintf("column name %q %s", quotable(name), problem), fix)
	}
	return problem == ""
}

func (r *reader) column(f field, c *Column) {
	if f.node.Kind == scalarNode && slices.Contains(columnTypes, f.node.Value) {
		r.wrongAt(f.at, f.name+" must hold keys with values", fmt.Sprintf("write {type: %s}", f.node.Value))
		return
	}
	m := r.open(f, columnKeys, laterColumnKeys)
	if m == nil {
		return
	}
	if f, given := m.need("type", "write type: number, category or text"); given {
		f.name = "type"
		c.Type = ColumnType(r.columnType(f))
	}
	for _, only := range []struct {
		key string
		of  ColumnType
	}{{"unit", TypeNumber}, {"decimals", TypeNumber}, {"shape", TypeNumber}, {"levels", TypeCategory}} {
		if f, given := m.has(only.key); given && c.Type != "" && c.Type != only.of {
			r.wrongAt(f.at, fmt.Sprintf("%s is given for a column of type %s", only.key, c.Type),
				fmt.Sprintf("take it out, or write type: %s", only.of))
		}
	}
	if f, given := m.has("unit"); given {
		c.Unit, _ = r.line(f, maxName)
	}
	c.Decimals = m.decimals()
	if c.Type == TypeNumber {
		c.Shape = "unknown"
	}
	if f, given := m.has("shape"); given {
		c.Shape, _ = r.choice(f, shapes)
	}
	if f, given := m.has("levels"); given {
		f.name = "levels"
		for _, item := range r.items(f, false) {
			item.name = "level"
			text, ok := r.line(item, maxLine)
			if ok && slices.Contains(c.Levels, text) {
				r.wrongAt(item.at, fmt.Sprintf("level %q is given twice", text), "keep one")
			} else if ok {
				c.Levels = append(c.Levels, text)
			}
		}
	}
}

func (r *reader) columnType(f field) string {
	value, ok := r.scalar(f)
	if !ok {
		return ""
	}
	if slices.Contains(columnTypes, value) || expression.Nearest(value, columnTypes) != "" {
		value, _ = r.choice(f, columnTypes)
		return value
	}
	r.wrongAt(f.at, fmt.Sprintf("type %q is not available in this version", quotable(value)),
		"write "+choices(columnTypes))
	return ""
}

// derive reads the derived columns, whose formulas use the number columns of the file.
func (r *reader) derive(f field, s *Source, columnsWrong bool) {
	m := r.open(f, nil, nil)
	if m == nil {
		return
	}
	columns := r.fileColumns(s)
	for _, name := range m.keys {
		f := m.fields[name]
		if !r.columnName(r.keyAt(m, name), name, s) {
			continue
		}
		f.name = "derived column " + quotable(name)
		d := Derived{Name: name, Decimals: -1}
		formula := f
		if f.node.Kind == mappingNode {
			m := r.open(f, deriveKeys, nil)
			if m == nil {
				continue
			}
			if f, given := m.has("unit"); given {
				d.Unit, _ = r.line(f, maxName)
			}
			d.Decimals = m.decimals()
			var given bool
			if formula, given = m.need("formula",
				"write formula: and how the column is computed, as in strength - 1.2"); !given {
				continue
			}
		}
		d.Formula = r.expression(formula, columns, expression.Number, columnsWrong)
		s.Derive = append(s.Derive, d)
	}
}

var sha256Text = regexp.MustCompile(`^[0-9A-Fa-f]{64}$`)

func (r *reader) sha256(f field) string {
	text, ok := r.line(f, maxLine)
	if !ok {
		return ""
	}
	if !sha256Text.MatchString(text) {
		r.wrongAt(f.at, fmt.Sprintf("sha256 %q is not a digest of 64 hexadecimal digits", quotable(text)),
			"copy the SHA-256 of the data file, or take the key out")
		return ""
	}
	return strings.ToLower(text)
}

var (
	fileEndings      = []string{".csv", ".tsv", ".xlsx"}
	laterFileEndings = []string{".jsonl", ".parquet", ".sqlite"}
)

// dataFile returns a path below the plan's folder that means the same file on every system.
func (r *reader) dataFile(f field) string {
	name, ok := r.line(f, maxLine)
	if !ok {
		return ""
	}
	wrong := func(problem, fix string) string {
		r.wrongAt(f.at, fmt.Sprintf("file %q %s", name, problem), fix)
		return ""
	}
	const travel = "a plan must travel together with its data"
	clean := path.Clean(name)
	switch {
	case strings.Contains(name, `\`) && !strings.Contains(name, ":"):
		return wrong("holds a backslash", "write forward slashes, which every system reads: "+strings.ReplaceAll(name,
			`\`, "/"))
	case strings.HasPrefix(name, "/"), strings.HasPrefix(name, "~"), len(name) > 1 && name[1] == ':':
		return wrong("is an absolute path", "write it as seen from the plan, in its folder or below: "+travel)
	case strings.ContainsAny(name, `<>:"|?*\`):
		return wrong(`holds one of the characters < > : " | ? *`, "rename the file: not every system can have it")
	case clean == ".." || strings.HasPrefix(clean, "../"):
		return wrong("leads out of the plan's folder", "put the file into it or below: "+travel)
	case clean != name:
		return wrong("takes a detour", "write "+clean)
	}
	for _, part := range strings.Split(name, "/") {
		if devices.MatchString(part) || strings.HasSuffix(part, ".") || strings.HasSuffix(part, " ") {
			return wrong(fmt.Sprintf("has the part %q, which is no file name on Windows", part), "rename it")
		}
	}
	ending := strings.ToLower(path.Ext(name))
	switch {
	case slices.Contains(fileEndings, ending):
		return name
	case slices.Contains(laterFileEndings, ending):
		return wrong(fmt.Sprintf("ends with %s, which is not available in this version", ending),
			"write the data as "+choices(fileEndings))
	}
	return wrong("has none of the known endings", "name a file that ends with "+choices(fileEndings))
}
