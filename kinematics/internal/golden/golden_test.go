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

// TestSource compares with the published output of the generator for seed 1234567 (Vigna's
// splitmix64.c, as quoted by Rosetta Code; from memory).
func TestSource(t *testing.T) {
	t.Parallel()

	source := NewSource(1234567)
	for i, want := range []uint64{6457827717110365317, 3203168211198807973, 9817491932198370423} {
		if got := source.Uint64(); got != want {
			t.Errorf("number %d is %d, want %d", i, got, want)
		}
	}

	for range 1000 {
		if x := source.Magnitude(-3, 5); x < 0.125 || x >= 32 {
			t.Errorf("magnitude %g outside [1/8, 32)", x)
		}

		if x := source.Between(-1, 1); x < -1 || x >= 1 {
			t.Errorf("%g outside [-1, 1)", x)
		}
	}
}
