package kinematics_test

import (
	"bytes"
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// mutation puts a textbook form, in plain doubles, in the place of a stable one.
type mutation struct {
	name         string
	file         string // below kinematics
	stable       string // text of the file, which stands there once
	textbook     string
	tests, where string // tests that must fail then, and their package below kinematics
}

// mutations are forms that lose digits by a subtraction. Each must be noticed by the tests
// that hold the answers against the reference.
var mutations = []mutation{
	{
		"Kallen function expanded", "momentum/breakup/doc.go",
		"return over.Mul(over.Add(a.Mul(b).Scale(2))).Sqrt().Div(w).Scale(-1)",
		"_ = over\n\tx, y, z := w.Float()*w.Float(), a.Float()*a.Float(), b.Float()*b.Float()\n\t" +
			"return num.FromFloat(x*x + y*y + z*z - 2*x*y - 2*x*z - 2*y*z).Sqrt().Div(w).Scale(-1)",
		"TestPrecisionTRange|TestPrecisionLabAngleSolutions", "reaction",
	},
	{
		"s rebuilt before the threshold is taken off", "reaction/collision.go",
		"if c.known == byBody && undecided(over.Hi, shift.Hi) {",
		"if c.known == byBody {\n\t\treturn num.FromFloat(c.sys.W.Float()*c.sys.W.Float() - sum.Float()*sum.Float())\n\t}\n\t" +
			"if c.known == byBody && undecided(over.Hi, shift.Hi) {",
		"TestTwoBodyAgainstExactArithmetic", "reaction",
	},
	{
		"backward momentum as a difference", "momentum/breakup/leg.go",
		"leg.back = carry.Mul(both).Div(sum.Mul(sys.W)).Scale(-1)",
		"_ = both\n\t\tleg.back = num.FromFloat((sys.P.Float()*leg.energy.Float() - sys.E.Float()*momentum.Float()) / sys.W.Float())",
		"TestTwoBodyAgainstExactArithmetic", "reaction",
	},
	{
		"kinetic energy as E - m", "momentum/breakup/leg.go",
		"lab.Kinetic = square.Div(energy.Add(l.mass))",
		"lab.Kinetic = num.FromFloat(energy.Float() - l.mass.Float())",
		"TestTwoBodyAgainstExactArithmetic", "reaction",
	},
	{
		"t from energies and momenta", "reaction/twobody_transfer.go",
		"forward:  better(forward, product.over(backward)).value,",
		"forward: num.FromFloat(m1.Float()*m1.Float() + m3.Float()*m3.Float() - 2*(m1.Square().Add(initial.Square()).Sqrt().Float()*" +
			"m3.Square().Add(final.Square()).Sqrt().Float()-initial.Float()*final.Float())),",
		"TestPrecisionTRange", "reaction",
	},
	{
		"lower Dalitz limit as a difference", "decay/dalitz.go",
		"return base.Add(top.Div(sum).Scale(1)), most",
		"_ = top\n\treturn base.Add(num.FromFloat((product.Float() - b2.Mul(d2).Sqrt().Float()) / (2 * s.Float()))), most",
		"TestPrecisionDalitzLimits", "decay",
	},
	{
		"smallest photon energy as (E - p)/2", "decay/photonpair.go",
		"least := g.parent.W.Square().Div(most).Scale(-2)",
		"least := num.FromFloat((g.parent.E.Float() - g.parent.P.Float()) / 2)",
		"TestPrecisionPhotonOpeningLimits", "decay",
	},
	{
		"opening angle by the arc cosine", "decay/opening.go",
		"return num.Atan2(cross.Float(), dot.Float())",
		"_ = cross\n\treturn num.Acos(dot.Float() / (first.Momentum.Float() * second.Momentum.Float()))",
		"TestPrecisionPhotonOpening", "decay",
	},
	{
		"decays between two distances as a difference of exponentials", "decay/flight.go",
		"return num.Exp(-f.lengths(from)) * -num.Expm1(-f.lengths(to-from)), nil",
		"return num.Exp(-f.lengths(from)) - num.Exp(-f.lengths(to)), nil",
		"TestFlight", "decay",
	},
}

// TestMutationsToTextbookFormsAreCaught compiles each mutation over the source and wants the
// named tests to fail, by themselves and not by the compiler.
func TestMutationsToTextbookFormsAreCaught(t *testing.T) {
	if testing.Short() {
		t.Skip("compiles and runs every mutation")
	}
	for _, m := range mutations {
		t.Run(m.name, func(t *testing.T) {
			output, err := runMutated(t, m)
			switch {
			case err == nil:
				t.Errorf("%s of %s still pass:\n%s", m.tests, m.where, output)
			case !strings.Contains(output, "--- FAIL: "):
				t.Errorf("the mutation does not run: %v\n%s", err, output)
			}
		})
	}
}

func runMutated(t *testing.T, m mutation) (string, error) {
	t.Helper()
	path, err := filepath.Abs(m.file)
	if err != nil {
		t.Fatal(err)
	}
	source, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if n := strings.Count(string(source), m.stable); n != 1 {
		t.Fatalf("%s has the stable form %d times, want once: %s", m.file, n, m.stable)
	}
	mutated := filepath.Join(t.TempDir(), "mutated.go")
	write(t, mutated, []byte(strings.Replace(string(source), m.stable, m.textbook, 1)))
	overlay, err := json.Marshal(map[string]map[string]string{"Replace": {path: mutated}})
	if err != nil {
		t.Fatal(err)
	}
	list := filepath.Join(t.TempDir(), "overlay.json")
	write(t, list, overlay)
	//nolint:gosec // the arguments are this file's own table
	command := exec.CommandContext(t.Context(), "go", "test", "-vet=off", "-overlay", list, "-run", "^("+m.tests+")$", "./"+m.where)
	var output bytes.Buffer
	command.Stdout, command.Stderr = &output, &output
	err = command.Run()
	return output.String(), err
}

func write(t *testing.T, path string, data []byte) {
	t.Helper()
	if err := os.WriteFile(path, data, 0o600); err != nil {
		t.Fatal(err)
	}
}
