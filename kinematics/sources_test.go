package kinematics_test

import (
	"fmt"
	"go/ast"
	"go/importer"
	"go/parser"
	"go/token"
	"go/types"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// exactMath lists what the core may use of package math: functions whose result is exact or
// correctly rounded, and so the same on every processor, and the constants.
var exactMath = []string{
	"Sqrt", "FMA", "Abs", "Floor", "Ceil", "Trunc", "Round", "RoundToEven", "Copysign", "Signbit",
	"Inf", "IsInf", "IsNaN", "NaN", "Frexp", "Ldexp", "Modf", "Max", "Min", "Nextafter",
	"Float64bits", "Float64frombits", "Float32bits", "Float32frombits",
}

// source is one package with its syntax and types.
type source struct {
	files *token.FileSet
	trees []*ast.File
	info  *types.Info
}

// finding is one offence against the rules of the numerics.
type finding struct {
	position token.Position
	text     string
}

// parseSource parses and checks one package; exports opens the export data of its imports.
func parseSource(path string, files *token.FileSet, trees []*ast.File, exports importer.Lookup) (source, error) {
	info := &types.Info{Types: map[ast.Expr]types.TypeAndValue{}, Uses: map[*ast.Ident]types.Object{}}
	checker := types.Config{Importer: importer.ForCompiler(files, "gc", exports)}

	if _, err := checker.Check(path, files, trees, info); err != nil {
		return source{}, fmt.Errorf("checking %s: %w", path, err)
	}

	return source{files: files, trees: trees, info: info}, nil
}

// exportsOf lists the packages that match the patterns, with all that they import, and returns
// a lookup of their export data.
func exportsOf(t *testing.T, patterns ...string) ([]listed, importer.Lookup) {
	t.Helper()

	packages := listPackages(t, append([]string{"-export", "-deps"}, patterns...)...)
	exports := make(map[string]string, len(packages))

	for _, one := range packages {
		exports[one.ImportPath] = one.Export
	}

	return packages, func(path string) (io.ReadCloser, error) { return os.Open(exports[path]) }
}

// float tells whether an expression is a floating-point value that is not a constant.
func (s source) float(expression ast.Expr) bool {
	typed := s.info.Types[expression]
	if typed.Type == nil || typed.Value != nil {
		return false
	}

	basic, ok := typed.Type.Underlying().(*types.Basic)

	return ok && basic.Info()&types.IsFloat != 0
}

// bareProduct tells whether an expression is a floating-point product that nothing rounds:
// brackets and signs do not.
func (s source) bareProduct(expression ast.Expr) bool {
	switch e := expression.(type) {
	case *ast.ParenExpr:
		return s.bareProduct(e.X)
	case *ast.UnaryExpr:
		return s.bareProduct(e.X)
	case *ast.BinaryExpr:
		return e.Op == token.MUL && s.float(e)
	default:
		return false
	}
}

// findings returns every offence in the package. A sum may not stand on the line of a call of
// math.FMA, since the scan of the assembly knows its instructions by their lines.
func (s source) findings() []finding {
	var all []finding

	add := func(node ast.Node, text string) {
		all = append(all, finding{s.files.Position(node.Pos()), text})
	}

	type line struct {
		file   string
		number int
	}

	lineOf := func(at token.Pos) line {
		position := s.files.Position(at)

		return line{position.Filename, position.Line}
	}

	joined := map[line]bool{}

	var sums []*ast.BinaryExpr

	for _, tree := range s.trees {
		ast.Inspect(tree, func(node ast.Node) bool {
			switch n := node.(type) {
			case *ast.BinaryExpr:
				if (n.Op == token.ADD || n.Op == token.SUB) && (s.bareProduct(n.X) || s.bareProduct(n.Y)) {
					add(n, "a product feeds + or -: write float64(a*b) or math.FMA")
				}

				if (n.Op == token.ADD || n.Op == token.SUB) && s.float(n) {
					sums = append(sums, n)
				}
			case *ast.AssignStmt:
				if (n.Tok == token.ADD_ASSIGN || n.Tok == token.SUB_ASSIGN) && s.bareProduct(n.Rhs[0]) {
					add(n, "a product feeds += or -=: write float64(a*b) or math.FMA")
				}
			case *ast.RangeStmt:
				if kind := s.info.Types[n.X].Type; kind != nil {
					if _, isMap := kind.Underlying().(*types.Map); isMap {
						add(n, "the order of a map differs from run to run: range over slices.Sorted(maps.Keys(m))")
					}
				}
			case *ast.GoStmt:
				add(n, "goroutines finish in any order: the callers of the core decide what runs at once")
			case *ast.Ident:
				use, ok := s.info.Uses[n].(*types.Func)

				switch {
				case !ok || use.Pkg() == nil || use.Pkg().Path() != "math":
				case use.Name() == "FMA":
					joined[lineOf(n.Pos())] = true
				case !slices.Contains(exactMath, use.Name()):
					add(n, "math."+use.Name()+" is not exact: use kinematics/num")
				}
			}

			return true
		})
	}

	for _, sum := range sums {
		if joined[lineOf(sum.OpPos)] {
			add(sum, "a sum on the line of math.FMA: give each a line of its own")
		}
	}

	return all
}

// TestNumericsRules reads every non-test file of the core.
func TestNumericsRules(t *testing.T) {
	t.Parallel()

	packages, exports := exportsOf(t, "./kinematics/...")
	read := 0

	for _, one := range packages {
		if !within(one.ImportPath, module) || within(one.ImportPath, module+"/kinematics/internal") {
			continue
		}

		files := token.NewFileSet()
		trees := make([]*ast.File, 0, len(one.GoFiles))

		for _, name := range one.GoFiles {
			tree, err := parser.ParseFile(files, filepath.Join(one.Dir, name), nil, parser.SkipObjectResolution)
			if err != nil {
				t.Fatal(err)
			}

			trees = append(trees, tree)
			read++
		}

		checked, err := parseSource(one.ImportPath, files, trees, exports)
		if err != nil {
			t.Error(err)

			continue
		}

		for _, found := range checked.findings() {
			t.Errorf("%s: %s", found.position, found.text)
		}
	}

	if read == 0 {
		t.Fatal("no file was read")
	}

	t.Logf("%d files read", read)
}

// offences is a package with one offence on each line that ends in "offence", and none elsewhere.
const offences = `package seeded

import "math"

const two = 2.0

type row struct{ a, b float64 }

func sums(a, b, c float64, n, m int, r *row) (float64, int) {
	x := a*b + c // offence
	x = c - a*b // offence
	x = -(a * b) + c // offence
	x += a * b // offence
	x -= (r.a * r.b) // offence
	x = math.FMA(a, b, c + a*b) // offence
	p := a * b
	x = math.FMA(a, b, c) - p // offence
	x = c + float64(a*b)
	x = c + two*two + float64(a*(b+c))
	y := n*m + n
	y += n * m
	return x, y
}

func functions(x float64) float64 {
	f := math.Exp // offence
	return f(x) + math.Hypot(x, x) + math.Sqrt(math.Pi*x) // offence
}

func order(m map[int]float64, s []float64) (sum float64) {
	for _, v := range m { // offence
		sum += v
	}
	for _, v := range s {
		sum += v
	}
	go functions(sum) // offence
	return sum
}
`

func TestNumericsRulesSeeOffences(t *testing.T) {
	t.Parallel()

	files := token.NewFileSet()

	tree, err := parser.ParseFile(files, "seeded.go", offences, parser.SkipObjectResolution)
	if err != nil {
		t.Fatal(err)
	}

	_, exports := exportsOf(t, "math")

	seeded, err := parseSource("seeded", files, []*ast.File{tree}, exports)
	if err != nil {
		t.Fatal(err)
	}

	found := map[int]bool{}
	for _, one := range seeded.findings() {
		found[one.position.Line] = true
	}

	for i, line := range strings.Split(offences, "\n") {
		if want := strings.HasSuffix(line, "offence"); found[i+1] != want {
			t.Errorf("line %d %q: found %t, want %t", i+1, line, found[i+1], want)
		}
	}
}
