package reaction

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/fault"
)

// wantFault checks the kind and the field of a fault.
func wantFault(t *testing.T, err error, kind fault.Kind, field string) {
	t.Helper()
	var f *fault.Error
	if !errors.As(err, &f) {
		t.Fatalf("got error %v, want a fault", err)
	}
	if f.Kind != kind || f.Field != field {
		t.Errorf("got %v of %q, want %v of %q (%v)", f.Kind, f.Field, kind, field, err)
	}
}

// collisionOf fails the test where no collision could be made, and productsOf where no
// products could.
func collisionOf(t *testing.T) func(Collision, error) Collision {
	t.Helper()
	return func(c Collision, err error) Collision {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return c
	}
}

func productsOf(t *testing.T, c Collision, first, second float64) TwoBody {
	t.Helper()
	r, err := c.TwoBody(first, second)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func near(got, want, relative float64) bool {
	return math.Abs(got-want) <= relative*math.Abs(want)
}

// TestSpecialCases are closed answers from the laws themselves.
func TestSpecialCases(t *testing.T) {
	const m = 0.93827208943
	t.Run("elastic, equal masses: right angle without relativity", func(t *testing.T) {
		r := productsOf(t, collisionOf(t)(OnTarget(Body{Mass: m, Given: ByKinetic, Value: 1e-15}, m)), m, m)
		b := solve(t, &r, CMAngle, 0, 1)[0]
		if sum := b.Products[0].LabAngle + b.Products[1].LabAngle; !near(sum, math.Pi/2, 1e-14) {
			t.Errorf("angle between the two is %v, want pi/2", sum)
		}
		limits := r.Limits()
		if limits.MaxAngle[0] != math.Pi/2 || limits.TwoBranch[0] {
			t.Errorf("largest angle %v, two branches %v", limits.MaxAngle[0], limits.TwoBranch[0])
		}
	})
	t.Run("backward product at rest", func(t *testing.T) {
		r := productsOf(t, collisionOf(t)(OnTarget(Body{Mass: m, Value: 1}, m)), m, m)
		p := solve(t, &r, CMCosine, 0, -1)[0].Products
		if p[0].LabMomentum != 0 || p[0].LabKinetic != 0 || p[0].LabAngle != math.Pi/2 || p[0].CMPerLab != 0 || !math.IsInf(p[0].LabPerCM, 1) {
			t.Errorf("product at rest: %+v", p[0])
		}
		if p[1].LabMomentum != 1 || p[1].LabAngle != 0 {
			t.Errorf("the other one takes all: %+v", p[1])
		}
	})
	t.Run("massless on massless in the centre of mass", func(t *testing.T) {
		r := productsOf(t, collisionOf(t)(AtMass(0, 0, 2)), 0, 0)
		b := solve(t, &r, CMAngle, 0, math.Pi/3)[0]
		if !near(b.T, -1, 1e-15) || !near(b.U, -3, 1e-15) || b.Products[0].LabEnergy != 1 || b.Products[0].CMPerLab != 1 {
			t.Errorf("got %+v", b)
		}
		if limits := r.Limits(); limits.MaxAngle[0] != math.Pi || limits.Transfer[0] != (TransferLimits{0, -4}) {
			t.Errorf("got %+v", limits)
		}
	})
	t.Run("Compton scattering backward", func(t *testing.T) {
		const k, me = 3.0, 0.00051099895069
		r := productsOf(t, collisionOf(t)(OnTarget(Body{Value: k}, me)), 0, me)
		b := solve(t, &r, LabAngle, 0, math.Pi)
		if len(b) != 1 || !near(b[0].Products[0].LabEnergy, k/(1+2*k/me), 1e-15) || b[0].Products[0].LabAngle != math.Pi {
			t.Errorf("got %+v", b)
		}
	})
	t.Run("at threshold exactly", func(t *testing.T) {
		r := productsOf(t, collisionOf(t)(OnTarget(Body{Given: ByTotal, Value: 4}, 1)), 1, 2) // s = 9
		limits := r.Limits()
		if limits.Excess != 0 || limits.FinalMomentum != 0 || limits.MaxAngle != [2]float64{} {
			t.Fatalf("got %+v", limits)
		}
		b := solve(t, &r, LabAngle, 0, 0)
		if len(b) != 1 || !near(b[0].Products[0].LabMomentum, 4.0/3, 1e-15) || !math.IsInf(b[0].Products[0].CMPerLab, 1) {
			t.Errorf("got %+v", b)
		}
		if b := solve(t, &r, LabAngle, 0, 0.1); len(b) != 0 {
			t.Errorf("off the line of flight: %+v", b)
		}
	})
	t.Run("exothermic at rest", func(t *testing.T) {
		r := productsOf(t, collisionOf(t)(OnTarget(Body{Mass: 2}, 3)), 1, 1)
		if limits := r.Limits(); !near(limits.FinalMomentum, math.Sqrt(21)/2, 1e-15) || limits.MaxAngle[0] != math.Pi {
			t.Errorf("got %+v", limits)
		}
	})
	t.Run("largest angle itself", func(t *testing.T) {
		r := productsOf(t, collisionOf(t)(OnTarget(Body{Mass: 3.7, Value: 2}, m)), 3.7, m)
		limit := r.Limits().MaxAngle[0]
		if b := solve(t, &r, LabAngle, 0, limit); len(b) == 0 {
			t.Error("no branch at the largest angle")
		}
		if b := solve(t, &r, LabAngle, 0, math.Nextafter(limit, 4)); len(b) != 0 {
			t.Errorf("%d branches beyond the largest angle", len(b))
		}
	})
	t.Run("excess of 1e-12 GeV on 1 TeV", func(t *testing.T) {
		c := collisionOf(t)(AtExcess(0, m, 1e-12, 1000, m))
		c = collisionOf(t)(c.SeenFromTarget())
		r := productsOf(t, c, 1000, m)
		limits := r.Limits()
		want := math.Sqrt(2 * 1e-12 * 1000 * m / (1000 + m)) // to first order in the excess
		if limits.Excess != 1e-12 || !near(limits.FinalMomentum, want, 1e-11) {
			t.Errorf("got %+v, want momentum %v", limits, want)
		}
	})
}

// TestFrames holds one collision, seen in three frames, together: t does not change.
func TestFrames(t *testing.T) {
	const m1, m2, m3, m4 = 0.13957039, 0.93827208943, 0.497611, 1.115683
	onTarget := collisionOf(t)(OnTarget(Body{Mass: m1, Value: 2.5}, m2))
	s := onTarget.CentreOfMass().S
	atRest := collisionOf(t)(AtSquare(m1, m2, s))
	p := atRest.CentreOfMass().InitialMomentum
	headOn := collisionOf(t)(HeadOn(Body{Mass: m1, Value: p}, Body{Mass: m2, Value: p}))
	want := productsOf(t, onTarget, m3, m4)
	for name, c := range map[string]Collision{"square": atRest, "head on": headOn, "target": collisionOf(t)(atRest.SeenFromTarget())} {
		r := productsOf(t, c, m3, m4)
		for _, cosine := range []float64{-1, -0.3, 0.9, 1} {
			a, b := solve(t, &want, CMCosine, 0, cosine)[0], solve(t, &r, CMCosine, 0, cosine)[0]
			if !near(a.T, b.T, 1e-13) || !near(a.U, b.U, 1e-13) {
				t.Errorf("%s at %v: t %v and %v, u %v and %v", name, cosine, a.T, b.T, a.U, b.U)
			}
		}
	}
}

// TestBackwardLaboratory has the second beam outrun the first.
func TestBackwardLaboratory(t *testing.T) {
	light, heavy := Body{Mass: 0.000511, Value: 27.5}, Body{Mass: 0.938, Value: 920}
	forward := productsOf(t, collisionOf(t)(HeadOn(heavy, light)), 0.938, 0.000511)
	backward := productsOf(t, collisionOf(t)(HeadOn(light, heavy)), 0.000511, 0.938)
	for _, theta := range []float64{1e-9, 0.3, 1.5, 3} {
		a := solve(t, &forward, LabAngle, 1, theta)
		b := solve(t, &backward, LabAngle, 0, math.Pi-theta)
		if len(a) != 1 || len(b) != 1 {
			t.Fatalf("branches %d and %d", len(a), len(b))
		}
		if !near(a[0].Products[1].LabMomentum, b[0].Products[0].LabMomentum, 1e-12) || !near(a[0].Products[0].LabAngle, math.Pi-b[0].Products[1].LabAngle, 1e-12) {
			t.Errorf("at %v: %+v and %+v", theta, a[0].Products[1], b[0].Products[0])
		}
	}
}

// TestRoundTrips takes seeded random reactions from one variable to all others and back
// to the same branch, and checks the laws: conservation, mass shells, s + t + u, the
// inverse Jacobians against a difference quotient.
func TestRoundTrips(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 1)) //nolint:gosec // seeded on purpose
	logUniform := func(low, high float64) float64 { return low * math.Pow(high/low, random.Float64()) }
	for range 400 {
		mass := [4]float64{}
		for i := range mass {
			if random.Float64() < 0.8 || i == 1 {
				mass[i] = logUniform(1e-3, 10)
			}
		}
		c := collisionOf(t)(OnTarget(Body{Mass: mass[0], Value: logUniform(1e-2, 1e3)}, mass[1]))
		r, err := c.TwoBody(mass[2], mass[3])
		if err != nil {
			wantFault(t, err, fault.BelowThreshold, "sqrt_s_gev")
			continue
		}
		total := c.CentreOfMass()
		b := solve(t, &r, CMAngle, 0, random.Float64()*math.Pi)[0]
		checkLaws(t, mass, total, b)
		for product := range 2 {
			p := b.Products[product]
			values := map[Variable]float64{
				LabAngle: p.LabAngle, CMAngle: p.CMAngle, CMCosine: p.CMCosine, LabTotal: p.LabEnergy,
				LabKinetic: p.LabKinetic, LabMomentum: p.LabMomentum, Transfer: [2]float64{b.T, b.U}[product],
				TransferPrime: [2]float64{b.TPrime, b.UPrime}[product],
			}
			for v, x := range values {
				found := false
				for _, again := range solve(t, &r, v, product, x) {
					found = found || near(again.Products[product].LabEnergy, p.LabEnergy, 1e-9)
				}
				if !found {
					t.Errorf("masses %v, P %v: variable %d of product %d at %v does not lead back to %+v", mass, total.Momentum, v, product, x, p)
				}
			}
		}
	}
}

func checkLaws(t *testing.T, mass [4]float64, total CentreOfMass, b Branch) {
	t.Helper()
	x, y := b.Products[0], b.Products[1]
	if !near(x.LabEnergy+y.LabEnergy, total.Energy, 1e-14) || !near(x.CMEnergy+y.CMEnergy, total.SqrtS, 1e-14) {
		t.Errorf("energy is not conserved: %+v", b)
	}
	along := x.LabMomentum*math.Cos(x.LabAngle) + y.LabMomentum*math.Cos(y.LabAngle)
	across := x.LabMomentum*math.Sin(x.LabAngle) - y.LabMomentum*math.Sin(y.LabAngle)
	if math.Abs(along-total.Momentum) > 1e-14*total.Energy || math.Abs(across) > 1e-14*total.Energy {
		t.Errorf("momentum is not conserved: %v, %v against %v", along, across, total.Momentum)
	}
	sum := mass[0]*mass[0] + mass[1]*mass[1] + mass[2]*mass[2] + mass[3]*mass[3]
	if math.Abs(total.S+b.T+b.U-sum) > 1e-14*(total.S+sum) {
		t.Errorf("s + t + u = %v, want %v", total.S+b.T+b.U, sum)
	}
	for i, p := range b.Products {
		m := mass[2+i]
		if !near(p.LabEnergy*p.LabEnergy, p.LabMomentum*p.LabMomentum+m*m, 1e-14) || !near(p.LabKinetic+m, p.LabEnergy, 1e-14) {
			t.Errorf("product %d is off its mass shell: %+v", i, p)
		}
		if p.CMPerLab > 0 && !math.IsInf(p.CMPerLab, 1) && !near(p.CMPerLab*p.LabPerCM, 1, 1e-15) {
			t.Errorf("Jacobians are not inverse: %v, %v", p.CMPerLab, p.LabPerCM)
		}
	}
}

func TestJacobianIsTheDerivative(t *testing.T) {
	r := productsOf(t, collisionOf(t)(OnTarget(Body{Value: 3}, 0.938)), 0.494, 1.116)
	for product := range 2 {
		for _, cosine := range []float64{-0.9, -0.2, 0.4, 0.95} {
			const step = 1e-5
			at := func(x float64) Outgoing { return solve(t, &r, CMCosine, product, x)[0].Products[product] }
			slope := 2 * step / (math.Cos(at(cosine+step).LabAngle) - math.Cos(at(cosine-step).LabAngle))
			if got := at(cosine).CMPerLab; !near(got, math.Abs(slope), 1e-7) {
				t.Errorf("product %d at %v: %v, difference quotient %v", product, cosine, got, math.Abs(slope))
			}
		}
	}
}

// TestExtremes takes reactions from all over the magnitudes that are allowed: every
// answer is a finite number (or a Jacobian's limit) and keeps to the laws.
func TestExtremes(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2)) //nolint:gosec // seeded on purpose
	pick := func() float64 {
		switch random.IntN(4) {
		case 0:
			return 0
		case 1:
			return []float64{smallest, largest, 1}[random.IntN(3)]
		}
		return math.Pow(10, 60*random.Float64()-30)
	}
	open := 0
	for range 3000 {
		mass := [4]float64{pick(), math.Max(smallest, pick()), pick(), pick()}
		c, err := OnTarget(Body{Mass: mass[0], Value: pick()}, mass[1])
		if err != nil {
			t.Fatal(err)
		}
		r, err := c.TwoBody(mass[2], mass[3])
		if err != nil {
			continue
		}
		open++
		for v := range Variable(8) {
			solutions, err := r.Solve(Query{Variable: v, Product: random.IntN(2), Values: []float64{0, 1e-10, 0.5, 1}})
			if err != nil {
				wantFault(t, err, fault.Unsupported, "query.variable")
			}
			for _, solution := range solutions {
				for _, b := range solution.Branches {
					checkLaws(t, mass, c.CentreOfMass(), b)
					for _, x := range []float64{b.T, b.U, b.TPrime, b.UPrime, b.Products[0].LabAngle, b.Products[1].LabAngle, b.Products[0].CMCosine} {
						if math.IsNaN(x) || math.IsInf(x, 0) {
							t.Fatalf("masses %v: %+v", mass, b)
						}
					}
				}
			}
		}
	}
	if open < 500 {
		t.Errorf("only %d open channels", open)
	}
}

func TestTwoBodyRefusals(t *testing.T) {
	open := collisionOf(t)(OnTarget(Body{Value: 2}, 0.938))
	crossing := collisionOf(t)(CollideAtAngle(Body{Mass: 0.1, Value: 1}, Body{Mass: 0.1, Value: 1}, 2))
	still := collisionOf(t)(AtMass(0.1, 0.1, 3))
	query := func(c Collision, q Query) error {
		r := productsOf(t, c, 0.1, 0.2)
		_, err := r.Solve(q)
		return err
	}
	fails := func(_ any, err error) error { return err }
	for _, c := range []struct {
		name  string
		err   error
		kind  fault.Kind
		field string
	}{
		{"massless target", fails(OnTarget(Body{Value: 1}, 0)), fault.Invalid, "target.mass_gev"},
		{"negative mass", fails(OnTarget(Body{Mass: -1}, 1)), fault.Invalid, "beam.mass_gev"},
		{"mass that is no number", fails(OnTarget(Body{Mass: math.NaN()}, 1)), fault.Invalid, "beam.mass_gev"},
		{"infinite momentum", fails(OnTarget(Body{Value: math.Inf(1)}, 1)), fault.Invalid, "beam.momentum_gev"},
		{"total energy below the mass", fails(OnTarget(Body{Mass: 2, Given: ByTotal, Value: 1}, 1)), fault.Invalid, "beam.total_energy_gev"},
		{"angle", fails(CollideAtAngle(Body{Value: 1}, Body{Value: 1}, 4)), fault.Invalid, "angle_between_beams_rad"},
		{"parallel photons", fails(CollideAtAngle(Body{Value: 1}, Body{Value: 1}, 0)), fault.Invalid, "sqrt_s_gev"},
		{"too little for the initial bodies", fails(AtMass(1, 1, 1.5)), fault.BelowThreshold, "sqrt_s_gev"},
		{"frame of a photon", fails(collisionOf(t)(AtMass(1, 0, 2)).SeenFromTarget()), fault.Invalid, "target.mass_gev"},
		{"closed channel", fails(open.TwoBody(2, 2)), fault.BelowThreshold, "sqrt_s_gev"},
		{"product mass", fails(open.TwoBody(0.1, -2)), fault.Invalid, "products[1].mass_gev"},
		{"product number", query(open, Query{Product: 2}), fault.Invalid, "query.product"},
		{"variable", query(open, Query{Variable: 99}), fault.Invalid, "query.variable"},
		{"angle beyond pi", query(open, Query{Values: []float64{0, 4}}), fault.Invalid, "query.values[1]"},
		{"cosine beyond 1", query(open, Query{Variable: CMCosine, Values: []float64{1.5}}), fault.Invalid, "query.values[0]"},
		{"t that is no number", query(open, Query{Variable: Transfer, Values: []float64{math.NaN()}}), fault.Invalid, "query.values[0]"},
		{"laboratory angle of crossing beams", query(crossing, Query{Values: []float64{1}}), fault.Unsupported, "query.variable"},
		{"energy that is the same everywhere", query(still, Query{Variable: LabTotal, Values: []float64{1}}), fault.Unsupported, "query.variable"},
	} {
		t.Run(c.name, func(t *testing.T) { wantFault(t, c.err, c.kind, c.field) })
	}
	for _, q := range []Query{
		{Variable: Transfer, Values: []float64{1}}, {Variable: Transfer, Values: []float64{-100}},
		{Variable: TransferPrime, Values: []float64{-1}}, {Variable: LabTotal, Values: []float64{100}},
		{Variable: LabKinetic, Values: []float64{-1}}, {Variable: LabMomentum, Values: []float64{-1}},
	} {
		r := productsOf(t, open, 0.1, 0.2)
		if b := solve(t, &r, q.Variable, 0, q.Values[0]); len(b) != 0 {
			t.Errorf("variable %d at %v: %d branches, want none", q.Variable, q.Values[0], len(b))
		}
	}
}

var branchSink []Solution

func BenchmarkSolveTwoBody(b *testing.B) {
	c, err := OnTarget(Body{Value: 3}, 0.938)
	if err != nil {
		b.Fatal(err)
	}
	values := []float64{0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1}
	for name, v := range map[string]Variable{"LabAngle": LabAngle, "CMAngle": CMAngle, "Transfer": TransferPrime} {
		b.Run(name+"10", func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				r, err := c.TwoBody(0.494, 1.116)
				if err != nil {
					b.Fatal(err)
				}
				if branchSink, err = r.Solve(Query{Variable: v, Values: values}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
