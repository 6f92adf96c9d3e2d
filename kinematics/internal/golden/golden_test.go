package golden

import (
	"math"
	"path/filepath"
	"strings"
	"testing"

	"example.org/kinegate/kinematics"
)

// digestOf returns the sections of two fixed parts, the second of the given values.
func digestOf(values ...float64) []section {
	var d Digest

	d.Section("first")
	d.Int(1, -1)
	d.Section("second")
	d.Float(values...)
	d.Text("end")
	d.end()

	return d.sections
}

func TestCompareSeesOneBit(t *testing.T) {
	t.Parallel()

	const version = kinematics.NumericsVersion

	committed := digestOf(1, 2)

	for _, row := range []struct {
		name      string
		computed  []section
		version   int64
		problem   string
		noRewrite bool
	}{
		{"the same", digestOf(1, 2), version, "", false},
		{"one bit", digestOf(1, math.Nextafter(2, 3)), version, "second moved", true},
		{"sign of zero", digestOf(1, math.Copysign(0, -1)), version, "second moved", true},
		{"one bit, new version", digestOf(1, math.Nextafter(2, 3)), version - 1, "numerics version", false},
		{"part missing", digestOf(1, 2)[:1], version, "second is no longer computed", false},
		{"nothing", nil, version, "nothing was computed", false},
		{"more values", digestOf(1, 2, 3), version, "second moved", false},
	} {
		t.Run(row.name, func(t *testing.T) {
			t.Parallel()

			problems := strings.Join(compare(row.computed, row.version, committed), "; ")
			if row.problem == "" && problems != "" || !strings.Contains(problems, row.problem) {
				t.Errorf("compare says %q, want %q", problems, row.problem)
			}

			if refused := len(refusals(row.computed, row.version, committed)) > 0; refused != row.noRewrite {
				t.Errorf("rewriting refused: %t, want %t", refused, row.noRewrite)
			}
		})
	}
}

func TestFileThereAndBack(t *testing.T) {
	t.Parallel()

	path := filepath.Join(t.TempDir(), "golden", "x.txt")
	if err := write(path, digestOf(1, 2)); err != nil {
		t.Fatal(err)
	}

	version, sections, err := read(path)
	if err != nil {
		t.Fatal(err)
	}

	if problems := compare(digestOf(1, 2), version, sections); len(problems) > 0 {
		t.Error(problems)
	}
}

func TestSourceRanges(t *testing.T) {
	t.Parallel()

	source := NewSource(1)
	signs := map[float64]int{}

	for range 1000 {
		if x := source.Magnitude(-3, 5); x < 0.125 || x >= 32 {
			t.Errorf("magnitude %g outside [1/8, 32)", x)
		}

		if x := source.Between(-1, 1); x < -1 || x > 1 {
			t.Errorf("%g outside [-1, 1]", x)
		}

		signs[source.Sign()]++
	}

	if len(signs) != 2 || signs[1] < 400 || signs[-1] < 400 {
		t.Errorf("signs %v, want about 500 of each", signs)
	}
}
