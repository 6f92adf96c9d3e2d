package photon

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// PowerLaw is a field whose photons follow a power of their energy between two limits:
//
//	n(e) = N (1 - p) e^-p / (max^(1-p) - min^(1-p)),  min <= e <= max
//
// and N/(e ln(max/min)) for p = 1.
type PowerLaw struct {
	// Index is p, -20 to 20: positive for a falling spectrum.
	Index float64
	// MinGeV and MaxGeV are the limits, 1e-100 <= MinGeV < MaxGeV <= 1e30 with
	// (MaxGeV/MinGeV)^(|p| + 1) <= e^600.
	MinGeV, MaxGeV float64
	// PerCubicMetre is N, the number of photons per cubic metre between the limits, 0
	// or above.
	PerCubicMetre float64
}

const steepestIndex = 20

// widestPower bounds the logarithm of the powers of max/min, which stay within the
// range of doubles.
const widestPower = 600

func (p PowerLaw) check(op string) error {
	if err := first(
		within(op, "index", p.Index, -steepestIndex, steepestIndex, "-20 <= index <= 20"),
		within(op, "min_gev", p.MinGeV, 1e-100, greatestFieldEnergy, "1e-100 <= min_gev <= 1e30"),
		within(op, "max_gev", p.MaxGeV, 1e-100, greatestFieldEnergy, "1e-100 <= max_gev <= 1e30"),
		notNegative(op, "per_cubic_metre", p.PerCubicMetre),
	); err != nil {
		return err
	}
	if p.MinGeV >= p.MaxGeV {
		return fault.Number("max_gev", p.MaxGeV, "> min_gev").In(op)
	}
	if (math.Abs(p.Index)+1)*num.Log(p.MaxGeV/p.MinGeV) > widestPower {
		return fault.Number("max_gev", p.MaxGeV, "(max/min)^(|index| + 1) <= e^600").In(op)
	}
	return nil
}

// DensityPerGeV returns n(e), the number of photons per cubic metre and GeV at the
// energy energyGeV, 0 outside the limits. Domain: see PowerLaw, else a fault.
// Accuracy: 2e-15 times |p| ln(e/min) above 1.
func (p PowerLaw) DensityPerGeV(energyGeV float64) (float64, error) {
	if err := p.check("photon.PowerLaw.DensityPerGeV"); err != nil {
		return 0, err
	}
	if !(energyGeV >= p.MinGeV && energyGeV <= p.MaxGeV) {
		return 0, nil
	}
	falling := num.Exp(-p.Index * num.Log(energyGeV/p.MinGeV))
	return p.PerCubicMetre * falling / (p.MinGeV * powerIntegral(p.Index-1, num.Log(p.MaxGeV/p.MinGeV))), nil
}

// powerIntegral returns the integral of exp(-j t) dt over 0 <= t <= length,
//
//	(1 - exp(-j length))/j, or length for j = 0,
//
// which is the integral of (e/min)^(-j-1) de/min up to e = min exp(length).
func powerIntegral(j, length float64) float64 {
	if j == 0 {
		return length
	}
	return -num.Expm1(-j*length) / j
}

// opacity is kappa/(pi r^2) of Absorb. Let q = p + 1, v the excess y - 1 and v1, v2 its
// values for head-on collisions with the softest and hardest photons of the field.
//
//	F(e) = (N/min^2) (max(e, min)/min)^-q G(q, ln(max/max(e, min)))/G(p - 1, ln(max/min))
//	ln(max/e) = ln(1 + (v2 - v)/(1 + v)),  G = powerIntegral
//
// F is constant up to v1, where it has a corner, and falls to 0 at v2; the two ranges
// are integrated apart. v2 is formed without loss near the threshold.
func (p PowerLaw) opacity(energyGeV, massGeV float64) float64 {
	if p.PerCubicMetre == 0 {
		return 0
	}
	low, high := headOnRatio(energyGeV, p.MinGeV, massGeV), headOnRatio(energyGeV, p.MaxGeV, massGeV)
	softest, hardest := low.SubFloat(1).Float(), high.SubFloat(1).Float()
	if hardest <= 0 {
		return 0
	}
	q := p.Index + 1
	shape := func(excess float64) float64 { // (e/min)^-q G(q, ln(max/e))
		up := num.Log1p((hardest - excess) / (1 + excess))
		down := num.Log((1 + excess) / low.Float())
		return num.Exp(-q*down) * powerIntegral(q, math.Max(0, up))
	}
	// F varies over v of order 1/(|q| + 1) near the threshold, or up to v2.
	sum, from := 0.0, lowestShare*math.Min(hardest, 1/(1+math.Abs(q)))
	if softest > 0 {
		from = softest
		flat := weightedPairs(lowestShare*softest, softest, func(float64) float64 { return 1 })
		sum = float64(shape(softest) * flat)
	}
	sum += weightedPairs(from, hardest, shape)
	ratio := massGeV / energyGeV * (massGeV / p.MinGeV)
	norm := powerIntegral(p.Index-1, num.Log(p.MaxGeV/p.MinGeV))
	return 2 * p.PerCubicMetre * (ratio * ratio) * (sum / norm)
}

// headOnRatio returns E e/m^2, y of a head-on collision.
func headOnRatio(energy, soft, mass float64) num.DD {
	return num.Quo2(energy, mass).Mul(num.Quo2(soft, mass))
}
