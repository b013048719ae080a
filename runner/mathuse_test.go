package runner_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// exact lists what of package math gives the same bits on every processor: exactly rounded or exact operations, tests
// and constants.
var exact = []string{"Sqrt", "Abs", "Floor", "Ceil", "Trunc", "Round", "RoundToEven", "Frexp", "Ldexp", "Modf", "Mod", "Max", "Min",
	"Nextafter", "Inf", "NaN", "IsNaN", "IsInf", "Float64bits", "Float64frombits", "Signbit", "Copysign",
	"MaxFloat64", "SmallestNonzeroFloat64", "MaxInt64", "MaxInt32", "MaxInt", "MinInt64", "Sqrt2", "Pi", "Ln2", "Ln10", "MaxUint32"}

// Nothing on the way to a result uses a function that differs between processors, a clock, or random numbers of its own.
func TestOnlyExactArithmetic(t *testing.T) {
	forbidden := []string{"math/rand", "math/rand/v2", "math/cmplx"}
	files := 0
	for _, root := range []string{".", "../spec"} {
		err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
			if err != nil || d.IsDir() && d.Name() == "internal" {
				if d != nil && d.IsDir() && d.Name() == "internal" {
					return filepath.SkipDir // for tests only
				}
				return err
			}
			if !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
				return nil
			}
			files++
			file, err := parser.ParseFile(token.NewFileSet(), path, nil, 0)
			if err != nil {
				return err
			}
			for _, i := range file.Imports {
				name, _ := strconv.Unquote(i.Path.Value)
				if slices.Contains(forbidden, name) || strings.HasPrefix(name, "gonum.org/") {
					t.Errorf("%s imports %s", path, name)
				}
				if name == "math" && i.Name != nil {
					t.Errorf("%s imports math under another name", path)
				}
			}
			ast.Inspect(file, func(n ast.Node) bool {
				if s, ok := n.(*ast.SelectorExpr); ok {
					x, ok := s.X.(*ast.Ident)
					if ok && x.Name == "time" && slices.Contains([]string{"Now", "Since", "Until"}, s.Sel.Name) {
						t.Errorf("%s reads the clock", path)
					}
					if ok && x.Name == "math" && !slices.Contains(exact, s.Sel.Name) {
						t.Errorf("%s uses math.%s, which is not on the list of exact functions", path, s.Sel.Name)
					}
				}
				return true
			})
			return nil
		})
		must(t, err)
	}
	if files < 30 {
		t.Errorf("only %d files were looked at", files)
	}
}
