package main

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode"

	"google.golang.org/protobuf/encoding/protojson"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

const (
	pionsSelection = "../../../testdata/selections/two-pions.yaml"
	pionsEvents    = "../../../testdata/simulated/two-pions.kgb"
	leptonsFit     = "../../../testdata/selections/four-lepton-fit.yaml"
	leptonsEvents  = "../../../testdata/open/4mu_2011.csv"
)

func TestJudgeExplain(t *testing.T) {
	t.Parallel()
	judgePions := "judge --selection " + pionsSelection + " " + pionsEvents
	for _, c := range []struct {
		arguments string
		code      int
		says      string
	}{
		{judgePions + " --explain 4", exitWell, "fit converged: chi-square"},
		{judgePions + " --explain 4", exitWell, "OUTSIDE"},
		{judgePions + " --explain 1", exitWell, "passes, the best"},
		{judgePions + " --explain 4 --assignments 1", exitWell, "\n    window  "},
		{judgePions + " --explain 0", exitWell, "the rule on extra objects forbids the difference"},
		{judgePions + " --explain 999", exitUsage, "no event 999"},
		{judgePions + " --explain 4 --assignments 0", exitUsage, "1 to 1000"},
		{judgePions + ` --histogram "two-pions/M=0 GeV:2 GeV:4"`, exitWell, "two-pions/M: accepted entries\n"},
		{"judge --selection " + leptonsFit + " " + leptonsEvents + ` --assume-resolution "1.5 %:1 mrad" --explain 34442568`, exitWell, "mass of mu+[0] mu-[0]"},
		{"judge --selection " + leptonsFit + " " + leptonsEvents + " --explain 34442568", exitUsage, "state them with --assume-resolution"},
		{"judge --selection " + leptonsFit + " " + leptonsEvents, exitUsage, "state them with --assume-resolution"},
		{"judge --selection " + leptonsFit + " " + leptonsEvents + " --assume-resolution 0.015", exitUsage, "PART:ANGLE"},
		{"judge --selection " + leptonsFit + " " + leptonsEvents + ` --assume-resolution "2:1 mrad"`, exitUsage, "below 1"},
		{"judge --selection " + leptonsFit + " " + leptonsEvents + ` --assume-resolution "0.01:1 GeV"`, exitUsage, "--assume-resolution"},
	} {
		wantCommand(t, c.arguments, c.code, c.says)
	}
	code, out, errs := command(t, "judge", "--selection", pionsSelection, pionsEvents, "--explain", "4", "--json")
	var reply kinegatev1.ExplainVerdictResponse
	if err := protojson.Unmarshal([]byte(out), &reply); err != nil || code != exitWell || reply.GetEventId() != 4 {
		t.Errorf("code %d, %v, %s", code, err, errs)
	}
}

// TestExplainChoosesAmongRuns: an id that several runs have is explained only where the run
// is named, and nothing that was asked for is passed over in silence.
func TestExplainChoosesAmongRuns(t *testing.T) {
	t.Parallel()
	selection := write(t, "pair.yaml", `name: pair
hypotheses:
  - name: pair
    reaction: "gamma p -> p gamma gamma"
    measurements: [{product: p, measurement: MEASUREMENT_MISSING}]
    beam: {tagged: {}}
    extra_objects: {any: {}}
`)
	const photons = ",photon,1,0.5,0,photon,1,0.4,1\n"
	head := "run,event,class1,p1,theta1,phi1,class2,p2,theta2,phi2\n"
	file := write(t, "runs.csv", head+"1,4"+photons+"-2,4"+photons+"-2,4"+photons+"3,5"+photons)
	many := write(t, "many.csv", head+"1,4"+photons+"2,4"+photons+"3,4"+photons+"4,4"+photons+"5,4"+photons+"6,4"+photons+"7,4"+photons)
	judge := "judge --selection " + selection + " " + file
	for _, c := range []struct {
		arguments string
		code      int
		says      string
	}{
		{judge + " --explain 4", exitUsage, "run 1 and run -2 have an event of that number; choose one, such as --explain 1:4"},
		{"judge --selection " + selection + " " + many + " --explain 4", exitUsage, "run 4, run 5 and 2 more have an event"},
		{judge + " --explain 1:4", exitWell, "run 1, event 4: judged"},
		{judge + " --explain -2:4", exitWell, "the files have run -2, event 4 2 times; this is the first\nrun -2, event 4: judged"},
		{judge + " --explain 5", exitWell, "run 3, event 5: judged"},
		{judge + " --explain 1:5", exitUsage, "no event 1:5 in"},
		{judge + " --explain abc", exitUsage, `--explain "abc": EVENT or RUN:EVENT is needed`},
		{judge + " --explain 1:2:3", exitUsage, "EVENT or RUN:EVENT is needed"},
		{judge + ` --explain ""`, exitUsage, "EVENT or RUN:EVENT is needed"},
		{judge + " --explain 5", exitWell, "does not accept the event: the events have no beam columns"},
		{judge, exitWell, "no assignment: the events have no beam columns"},
		{"judge --selection " + pionsSelection + " " + pionsEvents + ` --assume-resolution "1 %:1 mrad"`, exitUsage, "two-pions.kgb have covariances of their own"},
		{"judge --selection " + pionsSelection + " " + pionsEvents + " --block-events 500", exitWell, "the blocks of .kgb files are judged as they are"},
		{"judge --selection " + pionsSelection + " " + pionsEvents + " --block-events 50", exitUsage, "--block-events allows 50"},
	} {
		wantCommand(t, c.arguments, c.code, c.says)
	}
	for rate, want := range map[float64]string{0.034: "0.034", 9.94: "9.9", 10.4: "10", 48731: "48731"} {
		if got := rateText(rate); got != want {
			t.Errorf("%g a second are %q, want %q", rate, got, want)
		}
	}
}

// TestJudgeWithoutBudget reads what is said of events whose work budget ends, and of the best
// assignment of one that fails.
func TestJudgeWithoutBudget(t *testing.T) {
	t.Parallel()
	yaml, err := os.ReadFile(pionsSelection)
	if err != nil {
		t.Fatal(err)
	}
	name := filepath.Join(t.TempDir(), "selection.yaml")
	short := "assignment_budget_count: 2\n" + strings.Replace(string(yaml), "fit_probability: {min: 0.01}", "fit_probability: {min: 0.99}", 1)
	if err := os.WriteFile(name, []byte(short), 0o600); err != nil {
		t.Fatal(err)
	}
	wantCommand(t, "judge --selection "+name+" "+pionsEvents, exitWell, "events judged in part: the work budget was used up before all was tried")
	wantCommand(t, "judge --selection "+name+" "+pionsEvents+" --explain 4", exitWell, ": fails; the best that was possible")
	const veto = `
  - {name: cosmic, reaction: "-> gamma", role: ROLE_VETO, extra_objects: {any: {}}}
  - {name: late, reaction: "-> gamma gamma", extra_objects: {any: {}}}
`
	for _, c := range []struct{ more, budget, says string }{
		{"", "2", "event 4: budget used; the gate accepts it: a hypothesis that opens it accepts or was not finished"},
		{"", "2", "does not accept the event; the work budget was used up before all was tried; 2 assignments tried"},
		{veto, "3", "event 4: budget used; the gate does not accept it"},
		{veto, "3", "does not accept the event: the work budget was used up before this hypothesis"},
	} {
		text := strings.Replace(strings.TrimRight(short, "\n")+c.more, "count: 2", "count: "+c.budget, 1)
		wantCommand(t, "judge --selection "+write(t, "short.yaml", text)+" "+pionsEvents+" --explain 4", exitWell, c.says)
	}
}

// TestJudgeOfNoText gives a file that is no text another ending than its own.
func TestJudgeOfNoText(t *testing.T) {
	t.Parallel()
	raw, err := os.ReadFile(pionsEvents)
	if err != nil {
		t.Fatal(err)
	}
	name := filepath.Join(t.TempDir(), "events.parquet")
	for _, start := range []string{"", "PAR1\"\x15\x00", "PAR1\x15\x04\x15\x90\n"} {
		if err := os.WriteFile(name, append([]byte(start), raw...), 0o600); err != nil {
			t.Fatal(err)
		}
		code, _, errs := command(t, "judge", "--selection", pionsSelection, name)
		if code != exitUsage || !strings.Contains(errs, "end in .csv, or in .kgb") || strings.ContainsFunc(strings.TrimSpace(errs), unicode.IsControl) {
			t.Errorf("code %d, says %q", code, errs)
		}
	}
}

// TestAssumedResolution holds the covariances of every coordinate set against those of the
// components of one momentum: the standard deviation along it and across it.
func TestAssumedResolution(t *testing.T) {
	t.Parallel()
	const relative, angle = 0.02, 0.003
	r := &resolution{relative, angle}
	const x, y, z = 0.3, -0.4, 1.2
	p := math.Sqrt(x*x + y*y + z*z)
	pt := math.Hypot(x, y)
	block := &kinegatev1.EventBlock{Coordinates: &kinegatev1.EventBlock_MomentumMass{MomentumMass: &kinegatev1.MomentumMassColumns{
		PxGev: column.Float64([]float64{x}), PyGev: column.Float64([]float64{y}), PzGev: column.Float64([]float64{z}),
	}}}
	if err := r.fill(block); err != nil {
		t.Fatal(err)
	}
	v, err := column.Float64s(block.GetCovariance().GetElements())
	if err != nil || len(v) != 6 {
		t.Fatalf("%v, %v", v, err)
	}
	quadratic := func(a, b, c float64) float64 {
		return v[0]*a*a + v[3]*b*b + v[5]*c*c + 2*(v[1]*a*b+v[2]*a*c+v[4]*b*c)
	}
	theta, phi := math.Atan2(pt, z), math.Atan2(y, x)
	angles, transverse := r.angles(p, theta, phi), r.transverse(pt, math.Asinh(z/pt), phi)
	along := quadratic(x/p, y/p, z/p)
	polar := quadratic(z*x/(p*pt), z*y/(p*pt), -pt/p) / (p * p)
	azimuth := quadratic(-y/pt, x/pt, 0) / (pt * pt)
	across := quadratic(x/pt, y/pt, 0)
	// d eta = -d theta/sin theta
	for name, pair := range map[string][2]float64{
		"momentum": {along, angles[0]}, "theta": {polar, angles[3]}, "phi": {azimuth, angles[5]},
		"transverse momentum": {across, transverse[0]}, "pseudorapidity": {polar * p * p / (pt * pt), transverse[3]}, "its phi": {azimuth, transverse[5]},
		"pt with eta": {-polar * p / pt * z, transverse[1]},
	} {
		if math.Abs(pair[0]-pair[1]) > 1e-12*math.Abs(pair[0]) {
			t.Errorf("%s: %g by components, %g", name, pair[0], pair[1])
		}
	}
}
