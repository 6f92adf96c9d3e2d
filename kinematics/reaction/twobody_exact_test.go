package reaction

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/fault"
)

// Textbook forms in 900-bit arithmetic, where their subtractions do no harm: the exact
// answers for the double inputs.

const exactBits = 900

type exact struct{ *big.Float }

func ex(x float64) exact          { return exact{new(big.Float).SetPrec(exactBits).SetFloat64(x)} }
func fresh() *big.Float           { return new(big.Float).SetPrec(exactBits) }
func (a exact) add(b exact) exact { return exact{fresh().Add(a.Float, b.Float)} }
func (a exact) sub(b exact) exact { return exact{fresh().Sub(a.Float, b.Float)} }
func (a exact) mul(b exact) exact { return exact{fresh().Mul(a.Float, b.Float)} }
func (a exact) div(b exact) exact { return exact{fresh().Quo(a.Float, b.Float)} }
func (a exact) square() exact     { return a.mul(a) }
func (a exact) double() exact     { return a.add(a) }
func (a exact) sqrt() exact       { return exact{fresh().Sqrt(a.Float)} }
func (a exact) abs() exact        { return exact{fresh().Abs(a.Float)} }
func (a exact) relative(x float64) float64 {
	// What is exactly 0 comes out as a rounding of 1e-250; nothing else is so small.
	if size, _ := a.abs().Float64(); size < 1e-200 || math.IsInf(x, 0) || math.IsNaN(x) {
		if x == 0 {
			return 0
		}
		return math.Inf(1)
	}
	r, _ := ex(x).sub(a).div(a).abs().Float64()
	return r
}

// exactTwoBody holds the exact answers of one reaction at one cosine.
type exactTwoBody struct {
	excess, final, energy, kinetic       exact
	labMomentum, labEnergy, labKinetic   exact
	t, forward, backward, jacobian, over exact
	turning                              bool
}

func exactAnswers(mass [4]float64, p1, cosine float64) exactTwoBody {
	m1, m2, m3, m4, p, c := ex(mass[0]), ex(mass[1]), ex(mass[2]), ex(mass[3]), ex(p1), ex(cosine)
	e1 := p.square().add(m1.square()).sqrt()
	s := m1.square().add(m2.square()).add(m2.mul(e1).double())
	w, e := s.sqrt(), e1.add(m2)
	momentum := func(a, b exact) exact {
		x := s.sub(a.square()).sub(b.square())
		return x.square().sub(a.mul(b).double().square()).sqrt().div(w.double())
	}
	energy := func(a, b exact) exact { return s.add(a.square()).sub(b.square()).div(w.double()) }
	var r exactTwoBody
	r.over = s.sub(m3.add(m4).square())
	if r.over.Sign() < 0 {
		return r
	}
	r.excess = w.sub(m3).sub(m4)
	r.final, r.energy = momentum(m3, m4), energy(m3, m4)
	r.kinetic = r.energy.sub(m3)
	along := e.mul(r.final).mul(c).add(p.mul(r.energy)).div(w)
	across := r.final.square().mul(ex(1).sub(c.square()))
	r.labMomentum = along.square().add(across).sqrt()
	r.labEnergy = e.mul(r.energy).add(p.mul(r.final).mul(c)).div(w)
	r.labKinetic = r.labEnergy.sub(m3)
	slope := e.mul(r.final).add(p.mul(r.energy).mul(c))
	r.turning = slope.Sign() == 0 || r.final.Sign() == 0
	if !r.turning {
		r.jacobian = r.labMomentum.square().mul(r.labMomentum).mul(w).div(r.final.square().mul(slope.abs()))
	}
	initial, first := momentum(m1, m2), energy(m1, m2)
	difference := first.sub(r.energy).square()
	r.forward = difference.sub(initial.sub(r.final).square())
	r.backward = difference.sub(initial.add(r.final).square())
	r.t = r.forward.sub(initial.mul(r.final).double().mul(ex(1).sub(c)))
	return r
}

// TestTwoBodyAgainstExactArithmetic draws reactions over the whole domain (masses 0 and
// 1e-12..1e6 GeV, beam momenta to 1e12 GeV), elastic, with equal masses, massless, and
// near threshold by shifting a product's mass until the excess is 1e-12 of sqrt(s) or
// less, at cosines up to +-1, and holds every rational and square-root answer to 4e-15
// whatever its condition number.
func TestTwoBodyAgainstExactArithmetic(t *testing.T) {
	random := rand.New(rand.NewPCG(11, 3)) //nolint:gosec // seeded on purpose
	worst, worstAt, values, closed := 0.0, "", 0, 0
	for range 4000 {
		mass, p1 := drawReaction(random)
		cosine := []float64{-1, 1, 0, 2*random.Float64() - 1, 1 - math.Pow(10, -16*random.Float64()), -1 + math.Pow(10, -16*random.Float64())}[random.IntN(6)]
		want := exactAnswers(mass, p1, cosine)
		c := collisionOf(t)(OnTarget(Body{Mass: mass[0], Value: p1}, mass[1]))
		r, err := c.TwoBody(mass[2], mass[3])
		if want.over.Sign() < 0 {
			wantFault(t, err, fault.BelowThreshold, "sqrt_s_gev")
			closed++
			continue
		}
		if err != nil {
			t.Fatalf("%v %v: %v", mass, p1, err)
		}
		limits := r.Limits()
		b := solve(t, &r, CMCosine, 0, cosine)[0]
		p := b.Products[0]
		for _, row := range []struct {
			name string
			got  float64
			want exact
		}{
			{"excess", limits.Excess, want.excess}, {"p*", limits.FinalMomentum, want.final},
			{"E*", p.CMEnergy, want.energy}, {"T*", p.CMKinetic, want.kinetic},
			{"p", p.LabMomentum, want.labMomentum}, {"E", p.LabEnergy, want.labEnergy}, {"T", p.LabKinetic, want.labKinetic},
			{"forward", limits.Transfer[0].Forward, want.forward}, {"backward", limits.Transfer[0].Backward, want.backward},
			{"t", b.T, want.t}, {"Jacobian", p.CMPerLab, want.jacobian},
		} {
			if row.want.Float == nil {
				continue
			}
			values++
			relative := row.want.relative(row.got)
			if relative > worst {
				worst, worstAt = relative, row.name
			}
			if !(relative <= 4e-15) {
				t.Errorf("%s of %v at p1 = %v, cos = %v: got %v, want %s: relative error %.2g",
					row.name, mass, p1, cosine, row.got, row.want.Text('g', 20), relative)
			}
		}
	}
	t.Logf("%d values, %d closed channels; worst relative error %.3g (%s)", values, closed, worst, worstAt)
	if values < 20000 || closed < 100 {
		t.Errorf("too few open or closed channels: %d values, %d closed", values, closed)
	}
}

// drawReaction returns masses and a beam momentum.
func drawReaction(random *rand.Rand) (mass [4]float64, p1 float64) {
	logUniform := func(low, high float64) float64 { return low * math.Pow(high/low, random.Float64()) }
	pick := func() float64 {
		if random.Float64() < 0.15 {
			return 0
		}
		return logUniform(1e-12, 1e6)
	}
	mass = [4]float64{pick(), logUniform(1e-12, 1e6), pick(), pick()}
	p1 = logUniform(1e-12, 1e12)
	switch random.IntN(5) {
	case 0: // elastic
		mass[2], mass[3] = mass[0], mass[1]
	case 1: // equal masses
		mass[0], mass[2], mass[3] = mass[1], mass[1], mass[1]
	case 2: // exchanged
		mass[2], mass[3] = mass[1], mass[0]
	case 3: // near threshold, on either side by a few of the last bits
		e1 := math.Hypot(p1, mass[0])
		w := math.Sqrt(mass[0]*mass[0] + mass[1]*mass[1] + 2*mass[1]*e1)
		share := random.Float64()
		mass[2], mass[3] = share*w, (1-share)*w*(1-logUniform(1e-17, 1e-11))
	}
	return mass, p1
}
