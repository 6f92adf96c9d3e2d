package generation

import (
	"math"
	"sort"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// Spectrum is the distribution of a beam's energy. Its implementations are the
// spectra of this package.
type Spectrum interface {
	// Range returns the lowest and the highest energy in GeV.
	Range() (low, high float64)
	// faults lists what is wrong with the spectrum.
	faults(field string) fault.List
	// sampler prepares drawing. The spectrum has no faults.
	sampler() sampler
}

// sampler draws an energy. Its tables are read only.
type sampler interface {
	draw(s *random.Stream) float64
}

// Fixed is a beam of one energy.
type Fixed struct {
	EnergyGeV float64
}

// Range returns the one energy twice.
func (f Fixed) Range() (low, high float64) { return f.EnergyGeV, f.EnergyGeV }

func (f Fixed) faults(field string) fault.List {
	return positive(nil, field+".energy_gev", f.EnergyGeV)
}
func (f Fixed) sampler() sampler              { return f }
func (f Fixed) draw(_ *random.Stream) float64 { return f.EnergyGeV }

// Flat is a beam whose energies are equally likely from Low to High.
type Flat struct {
	LowGeV, HighGeV float64
}

// Range returns the limits.
func (f Flat) Range() (low, high float64) { return f.LowGeV, f.HighGeV }

func (f Flat) faults(field string) fault.List { return interval(nil, field, f.LowGeV, f.HighGeV) }
func (f Flat) sampler() sampler               { return f }
func (f Flat) draw(s *random.Stream) float64  { return between(f.LowGeV, f.HighGeV, s.Uniform()) }

// Bremsstrahlung is the spectrum of photons radiated by electrons of energy E
// in a thin radiator, from Low to High, with y = k/E:
//
//	dN/dk = 1/k                          or, with complete screening,
//	dN/dk = (4/3 - 4/3 y + y^2)/k.
//
// Domain: 0 < Low < High <= E. Source of the second form: Y.-S. Tsai, Rev. Mod.
// Phys. 46 (1974) 815, complete screening without its small last term, as the
// Review of Particle Physics prints it in "Passage of particles through
// matter" (from memory).
type Bremsstrahlung struct {
	ElectronGeV       float64
	LowGeV, HighGeV   float64
	CompleteScreening bool
}

// Range returns the limits.
func (b Bremsstrahlung) Range() (low, high float64) { return b.LowGeV, b.HighGeV }

func (b Bremsstrahlung) faults(field string) fault.List {
	list := interval(nil, field, b.LowGeV, b.HighGeV)
	if !(b.ElectronGeV >= b.HighGeV && b.ElectronGeV <= math.MaxFloat64) {
		list = append(list, fault.Number(field+".electron_gev", b.ElectronGeV, ">= max_gev and finite"))
	}
	return list
}

func (b Bremsstrahlung) sampler() sampler {
	return &radiator{Bremsstrahlung: b, ratio: num.Log(b.HighGeV / b.LowGeV)}
}

// Integral is the integral of dN/dk from low to high, in the units above:
// logarithm for 1/k, and with screening
//
//	4/3 ln(high/low) - 4/3 (high - low)/E + (high^2 - low^2)/(2 E^2).
func (b Bremsstrahlung) Integral(low, high float64) float64 {
	logarithm := num.Log(high / low)
	if !b.CompleteScreening {
		return logarithm
	}
	y := (high - low) / b.ElectronGeV
	mean := (high + low) / (2 * b.ElectronGeV)
	return float64(4.0/3*logarithm) - float64(y*(4.0/3-mean))
}

// radiator draws from a Bremsstrahlung: 1/k by its inverse, the screening by
// rejection, which accepts at least 2/3.
type radiator struct {
	Bremsstrahlung

	ratio float64
}

func (r *radiator) draw(s *random.Stream) float64 {
	for {
		k := r.LowGeV * num.Exp(float64(s.Uniform()*r.ratio))
		k = min(k, r.HighGeV) // the rounding of Exp may pass the end by an ulp
		if !r.CompleteScreening {
			return k
		}
		y := k / r.ElectronGeV
		if s.Uniform()*(4.0/3) < 4.0/3-float64(y*(4.0/3-y)) {
			return k
		}
	}
}

// Channels divides a spectrum into n tagger channels of equal width, with the
// integral of each as its content: the flux is then uniform inside a channel.
func (b Bremsstrahlung) Channels(n int) Histogram {
	h := Histogram{}
	if n < 1 || len(b.faults("")) > 0 {
		return h
	}
	h.EdgesGeV = make([]float64, n+1)
	h.Contents = make([]float64, n)
	for i := range h.EdgesGeV {
		h.EdgesGeV[i] = between(b.LowGeV, b.HighGeV, float64(i)/float64(n))
	}
	for i := range h.Contents {
		h.Contents[i] = b.Integral(h.EdgesGeV[i], h.EdgesGeV[i+1])
	}
	return h
}

// Histogram is a flux in channels, uniform inside each.
type Histogram struct {
	// EdgesGeV are the increasing channel edges, one more than channels.
	EdgesGeV []float64
	// Contents is the flux of each channel, not negative, in any unit.
	Contents []float64
}

// Range returns the outer edges, or zeros without any.
func (h Histogram) Range() (low, high float64) {
	if len(h.EdgesGeV) == 0 {
		return 0, 0
	}
	return h.EdgesGeV[0], h.EdgesGeV[len(h.EdgesGeV)-1]
}

func (h Histogram) faults(field string) fault.List {
	var list fault.List
	if len(h.Contents) == 0 || len(h.EdgesGeV) != len(h.Contents)+1 {
		return append(list, fault.New(fault.Invalid, field+".edges_gev.length", strconv.Itoa(len(h.EdgesGeV)),
			"one more than contents, at least 2"))
	}
	for i, edge := range h.EdgesGeV {
		if low := 0.0; i == 0 {
			if !(edge >= low) {
				list = append(list, fault.Number(field+".edges_gev[0]", edge, ">= 0"))
			}
		} else if low = h.EdgesGeV[i-1]; !(edge > low && edge <= math.MaxFloat64) {
			list = append(list, fault.Number(field+".edges_gev["+strconv.Itoa(i)+"]", edge, "> "+fault.Text(low)+" and finite"))
		}
	}
	return contents(list, field+".contents", h.Contents)
}

func (h Histogram) sampler() sampler { return &channels{edges: h.EdgesGeV, sums: cumulate(h.Contents)} }

// channels draws from a Histogram: the channel and the place in it come from
// the same number.
type channels struct {
	edges, sums []float64
}

func (c *channels) draw(s *random.Stream) float64 {
	i, u := choose(c.sums, s.Uniform())
	return between(c.edges[i], c.edges[i+1], u)
}

// cumulate returns the running sums of the contents, the last of them 1.
func cumulate(contents []float64) []float64 {
	sums := make([]float64, len(contents))
	sum := 0.0
	for i, c := range contents {
		sum += c
		sums[i] = sum
	}
	for i := range sums {
		sums[i] /= sum
	}
	return sums
}

// choose returns the index i with sums[i-1] <= u < sums[i] and how far u lies
// through that interval, from 0 to 1. Empty intervals are never chosen.
func choose(sums []float64, u float64) (i int, rest float64) {
	i = min(sort.Search(len(sums), func(k int) bool { return sums[k] > u }), len(sums)-1)
	low := 0.0
	if i > 0 {
		low = sums[i-1]
	}
	return i, (u - low) / (sums[i] - low)
}

// between is the point a fraction u of the way from low to high.
func between(low, high, u float64) float64 { return low + float64((high-low)*u) }

// positive appends a fault unless v is positive and finite.
func positive(list fault.List, field string, v float64) fault.List {
	if !(v > 0 && v <= math.MaxFloat64) {
		list = append(list, fault.Number(field, v, "> 0 and finite"))
	}
	return list
}

// interval appends faults unless 0 < low < high, both finite.
func interval(list fault.List, field string, low, high float64) fault.List {
	list = positive(list, field+".min_gev", low)
	if !(high > low && high <= math.MaxFloat64) {
		list = append(list, fault.Number(field+".max_gev", high, "> min_gev and finite"))
	}
	return list
}

// contents appends faults unless all are finite and not negative and one is
// positive.
func contents(list fault.List, field string, values []float64) fault.List {
	sum := 0.0
	for i, v := range values {
		if !(v >= 0 && v <= math.MaxFloat64) {
			list = append(list, fault.Number(field+"["+strconv.Itoa(i)+"]", v, ">= 0 and finite"))
		}
		sum += v
	}
	if !(sum > 0 && sum <= math.MaxFloat64) {
		list = append(list, fault.Number(field, sum, "a sum > 0 and finite"))
	}
	return list
}
