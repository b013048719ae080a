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
var exact = []string{
	"Sqrt", "Abs", "Floor", "Ceil", "Trunc", "Round", "RoundToEven", "Frexp", "Ldexp", "Modf", "Mod", "Max", "Min",
	"Nextafter", "Inf", "NaN", "IsNaN", "IsInf", "Float64bits", "Float64frombits", "Signbit",
	"MaxFloat64", "SmallestNonzeroFloat64", "MaxInt64", "MaxInt32", "MaxInt", "MinInt64", "MaxUint32",
	"Sqrt2", "Pi", "Ln2", "Ln10",
}

// mistakes returns what a file of runner or spec must not use: functions that differ between processors, a clock,
// random numbers that are not those of a plan, and libraries whose sums change with the machine.
func mistakes(path string, file *ast.File) []string {
	var found []string
	for _, i := range file.Imports {
		name, _ := strconv.Unquote(i.Path.Value)
		switch {
		case slices.Contains([]string{"math/rand", "math/rand/v2", "math/cmplx", "crypto/rand", "hash/maphash"}, name),
			strings.HasPrefix(name, "gonum.org/"):
			found = append(found, "imports "+name)
		case name == "time" && !strings.HasPrefix(path, "../spec/"):
			found = append(found, "imports time")
		case (name == "math" || name == "time") && i.Name != nil:
			found = append(found, "imports "+name+" under another name")
		}
	}
	ast.Inspect(file, func(n ast.Node) bool {
		s, ok := n.(*ast.SelectorExpr)
		if !ok {
			return true
		}
		switch x, _ := s.X.(*ast.Ident); {
		case x == nil:
		case x.Name == "math" && !slices.Contains(exact, s.Sel.Name):
			found = append(found, "uses math."+s.Sel.Name+", which is not on the list of exact functions")
		case x.Name == "time" && !slices.Contains([]string{"Parse", "DateOnly"}, s.Sel.Name):
			found = append(found, "uses time."+s.Sel.Name+"; a plan needs dates to be read, and nothing else of a calendar")
		}
		return true
	})
	return found
}

// Nothing on the way to a result uses anything but exact arithmetic.
func TestOnlyExactArithmetic(t *testing.T) {
	files := 0
	for _, root := range []string{".", "../spec"} {
		err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
			if err != nil {
				return err
			}
			if d.IsDir() && d.Name() == "internal" {
				return filepath.SkipDir // for tests only
			}
			if !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
				return nil
			}
			files++
			file, err := parser.ParseFile(token.NewFileSet(), path, nil, 0)
			if err != nil {
				return err
			}
			for _, m := range mistakes(filepath.ToSlash(path), file) {
				t.Errorf("%s %s", path, m)
			}
			return nil
		})
		must(t, err)
	}
	if files < 30 {
		t.Errorf("only %d files were looked at", files)
	}
}

// The search finds what it is for: each of these ways round it is one mistake, and what is allowed is none.
func TestInexactArithmeticIsFound(t *testing.T) {
	tests := []struct {
		path, code string
		want       int
	}{
		{"draw/a.go", `import "math"; var x = math.Sqrt(2)`, 0},
		{"../spec/a.go", `import "time"; var x, err = time.Parse(time.DateOnly, "2041-02-03")`, 0},
		{"draw/a.go", `import "math"; var x = math.Exp(2)`, 1},
		{"draw/a.go", `import "math"; var f = math.FMA`, 1},
		{"draw/a.go", `import m "math"; var x = m.Exp(2)`, 1},
		{"draw/a.go", `import . "math"; var x = Exp(2)`, 1},
		{"draw/a.go", `import "time"`, 1},
		{"draw/a.go", `import clock "time"; var x = clock.Now()`, 1},
		{"../spec/a.go", `import "time"; var x = time.Now()`, 1},
		{"../spec/a.go", `import clock "time"; var x = clock.Now()`, 1},
		{"draw/a.go", `import "math/rand"`, 1},
		{"draw/a.go", `import "math/rand/v2"`, 1},
		{"draw/a.go", `import "crypto/rand"`, 1},
		{"draw/a.go", `import "gonum.org/v1/gonum/stat"`, 1},
	}
	for _, tt := range tests {
		file, err := parser.ParseFile(token.NewFileSet(), tt.path, "package a; "+tt.code, 0)
		must(t, err)
		if got := mistakes(tt.path, file); len(got) != tt.want {
			t.Errorf("%s, %s: found %q, want %d", tt.path, tt.code, got, tt.want)
		}
	}
}
