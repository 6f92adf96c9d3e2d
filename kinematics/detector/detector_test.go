package detector_test

import (
	"errors"
	"math"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

const degree = math.Pi / 180

// hall is the detector of the invented Marrow Hall. Every number is invented.
func hall() detector.Config {
	edges := make([]float64, 241)
	for i := range edges {
		edges[i] = 1.2 + float64(0.005*float64(i))
	}
	return detector.Config{
		Seed: 9,
		Calorimeter: &detector.Calorimeter{
			Theta: detector.Polar{MinRad: 6 * degree, MaxRad: 150 * degree}, RadiusM: 1,
			Stochastic: 0.028, Constant: 0.012, ThetaSigmaRad: 0.01, PhiSigmaRad: 0.01,
			ThresholdGeV: 0.03, Efficiency: 0.97, MergeAngleRad: 5 * degree,
			SplitOff: &detector.SplitOff{Probability: 0.02, MinShare: 0.03, MaxShare: 0.2, MinAngleRad: 5 * degree, MaxAngleRad: 15 * degree},
			Noise:    &detector.Noise{Probability: 0.01, MeanGeV: 0.05},
		},
		Tracker: &detector.Tracker{
			Theta: detector.Polar{MinRad: 10 * degree, MaxRad: 140 * degree}, MinMomentumGeV: 0.15,
			Constant: 0.015, PerGeV: 0.01, AngleSigmaRad: 0.003, Efficiency: 0.92, Identify: true,
			Confusions: []detector.Confusion{
				{Species: event.SpeciesProton, TakenFor: event.SpeciesPion, Probability: 0.05},
				{Species: event.SpeciesPion, TakenFor: event.SpeciesProton, Probability: 0.05},
			},
		},
		Recoil: &detector.Recoil{
			Theta: detector.Polar{MinRad: 10 * degree, MaxRad: 140 * degree}, MinMomentumGeV: 0.15, AngleSigmaRad: 0.008, Efficiency: 0.8,
		},
		Tagger: &detector.Tagger{EdgesGeV: edges, TimeSigmaNS: 1.5},
	}
}

// particle is a true particle at the origin of the test events.
type particle struct {
	number int64
	p      momentum.Three
	mass   float64
}

// truthOf writes n events, each with the particles that each returns.
func truthOf(n int, each func(i int) []particle) *event.Truth {
	truth := &event.Truth{}
	truth.Reset()
	for i := range n {
		truth.EventIDs = append(truth.EventIDs, int64(i))
		for _, p := range each(i) {
			truth.Number = append(truth.Number, p.number)
			truth.Momentum = append(truth.Momentum, momentum.WithMass(p.p, p.mass))
			truth.Mass = append(truth.Mass, p.mass)
			truth.Parent = append(truth.Parent, event.NoParent)
			truth.Decayed = append(truth.Decayed, false)
			truth.Origin.Append(0, 0, 0)
			truth.ProperTimeS = append(truth.ProperTimeS, 0)
		}
		truth.Vertex.Append(0, 0, 0)
		truth.Offsets = append(truth.Offsets, int32(len(truth.Number)))
		truth.BeamEnergyGeV = append(truth.BeamEnergyGeV, 1.2+float64(1.2*(float64(i)+0.5)/float64(n)))
		truth.BeamTimeNS = append(truth.BeamTimeNS, 0)
		truth.BeamOffsets = append(truth.BeamOffsets, int32(i+1))
	}
	return truth
}

func at(size, theta, phi float64) momentum.Three {
	sinT, cosT := num.Sincos(theta)
	sinP, cosP := num.Sincos(phi)
	return momentum.Three{X: size * sinT * cosP, Y: size * sinT * sinP, Z: size * cosT}
}

func measure(t *testing.T, c detector.Config, truth *event.Truth) (*event.Block, *detector.Labels) {
	t.Helper()
	d, err := detector.New(c)
	if err != nil {
		t.Fatal(err)
	}
	block, labels := &event.Block{}, &detector.Labels{}
	d.Measure(truth, block, labels)
	if truth.Events() <= event.MaxEvents {
		if err := block.Validate(); err != nil {
			t.Fatal(err)
		}
	}
	if len(labels.Particle) != block.Rows() {
		t.Fatalf("%d labels for %d objects", len(labels.Particle), block.Rows())
	}
	return block, labels
}

// near fails unless k of n agrees with the probability p within five standard
// deviations.
func near(t *testing.T, what string, k, n int, p float64) {
	t.Helper()
	spread := math.Sqrt(float64(n) * p * (1 - p))
	if d := (float64(k) - float64(n)*p) / spread; math.Abs(d) > 5 {
		t.Errorf("%s: %d of %d, want a share of %v: %.1f standard deviations", what, k, n, p, d)
	}
}

// Pulls against the true value with the covariance at the measured one. The
// angles' resolution is constant, so theirs are standard normal to the change
// of sin(theta) within a resolution; those of the energy are skewed by the
// change of sigma within itself, sigma'(E), at most 1.4 % here.
func TestPulls(t *testing.T) {
	for name, values := range pullsBetween(t, hall(), 30, 120) {
		t.Run(name, func(t *testing.T) {
			checkNormal(t, values)
		})
	}
}

// Forward the azimuth's spread s/sin(theta) changes much within the resolution s of theta: its pull
// has the square (sin theta' / sin theta)^2 z^2 with the measured theta', of the mean 1 + s^2/theta^2
// to s^4/theta^4 and theta^2. Over even angles from a to b that is 1 + s^2/(a b). The other pulls
// are those of other angles.
func TestForwardPulls(t *testing.T) {
	const low, high = 3, 12
	c := hall()
	c.Calorimeter.Theta.MinRad, c.Tracker.Theta.MinRad = 0.1*degree, 0.1*degree
	for name, values := range pullsBetween(t, c, low, high) {
		t.Run(name, func(t *testing.T) {
			sigma := map[string]float64{"photon phi": c.Calorimeter.ThetaSigmaRad, "track phi": c.Tracker.AngleSigmaRad}[name]
			if sigma == 0 {
				checkNormal(t, values)
				return
			}
			want := 1 + float64(sigma*sigma/(low*degree*high*degree))
			sum, square := 0.0, 0.0
			for _, v := range values {
				sum += v
				square += float64(v * v)
			}
			n := float64(len(values))
			if m := sum / n; math.Abs(m) > 5*math.Sqrt(want/n) {
				t.Errorf("mean %.4f", m)
			}
			// Five standard errors and the next order, at most (s/a)^4 of a tenth of the angles.
			room := 5*math.Sqrt(2/n)*want + 0.1*math.Pow(sigma/(low*degree), 4)
			if v := square / n; math.Abs(v-want) > room {
				t.Errorf("variance %.4f, want %.4f to %.4f", v, want, room)
			}
		})
	}
}

// pullsBetween are the pulls of photons and tracks between two polar angles in degrees.
func pullsBetween(t *testing.T, c detector.Config, low, high float64) map[string][]float64 {
	t.Helper()
	c.Calorimeter.Efficiency, c.Tracker.Efficiency = 1, 1
	c.Calorimeter.SplitOff, c.Calorimeter.Noise = nil, nil
	const n = 60_000
	truth := truthOf(n, func(i int) []particle {
		s := random.New(1, random.Generation, int64(i))
		direction := func(size float64) momentum.Three {
			return at(size, (low+float64((high-low)*s.Uniform()))*degree, 2*math.Pi*s.Uniform()-math.Pi)
		}
		return []particle{
			{number: 22, p: direction(0.2 + s.Uniform())},
			{number: 211, p: direction(0.3 + s.Uniform()), mass: 0.13957}, {number: -211, p: direction(0.5), mass: 0.13957},
		}
	})
	block, labels := measure(t, c, truth)
	pulls := map[string][]float64{}
	for i := range block.EventIDs {
		first, end := block.Objects(i)
		base, _ := truth.Particles(i)
		for row := first; row < end; row++ {
			p := truth.Momentum[base+int(labels.Particle[row])].P
			cov := block.Covariance.Row(row)
			kind := "track "
			if block.Class[row] == event.Photon {
				kind = "photon "
			}
			x := block.Coordinates.Columns
			pulls[kind+"size"] = append(pulls[kind+"size"], (x[0][row]-p.Norm())/math.Sqrt(cov[0]))
			pulls[kind+"theta"] = append(pulls[kind+"theta"], (x[1][row]-p.Theta())/math.Sqrt(cov[3]))
			pulls[kind+"phi"] = append(pulls[kind+"phi"], math.Remainder(x[2][row]-p.Phi(), 2*math.Pi)/math.Sqrt(cov[5]))
		}
	}
	return pulls
}

// checkNormal tests mean, variance and tails of the whole, and the mean and
// variance of halves and sevenths, at six standard errors and an allowance of
// 2 % of a standard deviation, 2 % of the variance and 10 % of the tails for the
// resolution's change within itself.
func checkNormal(t *testing.T, values []float64) {
	t.Helper()
	for _, parts := range []int{1, 2, 7} {
		for k := range parts {
			count, sum, square := 0.0, 0.0, 0.0
			for i := k; i < len(values); i += parts {
				count++
				sum += values[i]
				square += values[i] * values[i]
			}
			if m := sum / count; math.Abs(m) > 6/math.Sqrt(count)+0.02 {
				t.Errorf("part %d of %d: mean %.4f", k, parts, m)
			}
			if v := square / count; math.Abs(v-1) > 6*math.Sqrt(2/count)+0.02 {
				t.Errorf("part %d of %d: variance %.4f", k, parts, v)
			}
		}
	}
	beyond := 0
	for _, v := range values {
		if math.Abs(v) > 3 {
			beyond++
		}
	}
	want := float64(len(values)) * math.Erfc(3/math.Sqrt2)
	if d := math.Abs(float64(beyond) - want); d > 6*math.Sqrt(want)+0.1*want {
		t.Errorf("%d beyond three standard deviations, want %.0f", beyond, want)
	}
}

func TestRates(t *testing.T) {
	const n = 20_000
	c := hall()
	c.Recoil = nil
	truth := truthOf(n, func(int) []particle {
		return []particle{
			{number: 22, p: at(0.5, 50*degree, 0)}, {number: 22, p: at(0.5, 90*degree, 2)},
			{number: 2212, p: at(0.6, 40*degree, -2), mass: 0.938}, {number: -211, p: at(0.4, 60*degree, 3), mass: 0.1396},
		}
	})
	block, labels := measure(t, c, truth)
	photons, splits, noises, protons, wrong := 0, 0, 0, 0, 0
	seen := map[int]map[int16]int{}
	for i := range block.EventIDs {
		first, end := block.Objects(i)
		seen[i] = map[int16]int{}
		for row := first; row < end; row++ {
			label := labels.Particle[row]
			seen[i][label]++
			switch {
			case label == detector.NoParticle:
				noises++
			case block.Class[row] == event.Photon:
				photons++
				if seen[i][label] > 1 {
					splits++
				}
			case label == 2:
				protons++
				if block.Class[row] != event.Positive {
					t.Fatal("a proton is not positive")
				}
				if block.Species.Bits[row] == event.SpeciesPion {
					wrong++
				} else if block.Species.Bits[row] != event.SpeciesProton {
					t.Fatalf("a proton is taken for %d", block.Species.Bits[row])
				}
			}
		}
	}
	near(t, "protons found", protons, n, 0.92)
	near(t, "protons taken for pions", wrong, protons, 0.05)
	near(t, "noise", noises, n, 0.01)
	near(t, "both parts of a split photon", splits, 2*n, 0.02*0.97*0.97)
	// One or two clusters for each photon, each found with the efficiency; the
	// smaller part of a split may fall below threshold: 0.5 GeV x 3 % to 20 %.
	lost := 0.02 * (0.06 - 0.03) / (0.2 - 0.03)
	if share := float64(photons) / (2 * n); math.Abs(share-0.97*(1.02-lost)) > 0.005 {
		t.Errorf("%v clusters for a photon", share)
	}
}

func TestAcceptanceAndThreshold(t *testing.T) {
	const n = 2000
	c := hall()
	c.Calorimeter.Noise, c.Calorimeter.SplitOff, c.Recoil = nil, nil, nil
	cases := []struct {
		name string
		of   particle
		want float64
	}{
		{"forward photon", particle{number: 22, p: at(0.5, 5.9*degree, 1)}, 0},
		{"photon just inside", particle{number: 22, p: at(0.5, 6.1*degree, 1)}, 0.97},
		{"backward photon", particle{number: 22, p: at(0.5, 151*degree, 1)}, 0},
		{"soft photon", particle{number: 22, p: at(0.001, 60*degree, 1)}, 0},
		{"forward track", particle{number: 211, p: at(0.5, 9*degree, 1), mass: 0.14}, 0},
		{"soft track", particle{number: 211, p: at(0.149, 60*degree, 1), mass: 0.14}, 0},
		{"track", particle{number: -321, p: at(0.151, 60*degree, 1), mass: 0.494}, 0.92},
		{"neutron without a detector for it", particle{number: 2112, p: at(0.5, 60*degree, 1), mass: 0.94}, 0},
		{"neutrino", particle{number: 12, p: at(0.5, 60*degree, 1)}, 0},
	}
	for _, k := range cases {
		t.Run(k.name, func(t *testing.T) {
			block, _ := measure(t, c, truthOf(n, func(int) []particle { return []particle{k.of} }))
			if k.want == 0 {
				if block.Rows() != 0 {
					t.Errorf("%d objects", block.Rows())
				}
				return
			}
			near(t, "found", block.Rows(), n, k.want)
		})
	}
}

func TestMerging(t *testing.T) {
	c := hall()
	c.Calorimeter.Efficiency, c.Calorimeter.Noise, c.Calorimeter.SplitOff = 1, nil, nil
	c.Calorimeter.Stochastic, c.Calorimeter.Constant = 1e-9, 0
	c.Calorimeter.ThetaSigmaRad, c.Calorimeter.PhiSigmaRad = 1e-9, 1e-9
	for _, gap := range []float64{4.9, 5.1} {
		truth := truthOf(10, func(int) []particle {
			return []particle{{number: 22, p: at(0.3, 60*degree, 1)}, {number: 22, p: at(0.7, (60+gap)*degree, 1)}}
		})
		block, labels := measure(t, c, truth)
		if gap > 5 {
			if block.Rows() != 20 {
				t.Errorf("%v degrees apart: %d clusters of 20", gap, block.Rows())
			}
			continue
		}
		if block.Rows() != 10 {
			t.Fatalf("%v degrees apart: %d clusters, want 10", gap, block.Rows())
		}
		if e := block.Coordinates.Columns[0][0]; math.Abs(e-1) > 1e-7 {
			t.Errorf("merged energy %v, want 1", e)
		}
		// Weighted by energy: 0.7 of the way, to third order in the gap.
		if theta := block.Coordinates.Columns[1][0] / degree; math.Abs(theta-60-0.7*gap) > 0.01 {
			t.Errorf("merged theta %v", theta)
		}
		if labels.Particle[0] != 1 {
			t.Errorf("label %d, want the more energetic photon", labels.Particle[0])
		}
	}
}

func TestRecoil(t *testing.T) {
	const n = 5000
	proton := particle{number: 2212, p: at(0.6, 40*degree, -2), mass: 0.938}
	neutral := truthOf(n, func(int) []particle { return []particle{proton} })
	block, _ := measure(t, hall(), neutral)
	found := 0
	for row := range block.Class {
		if block.Class[row] == event.Positive {
			found++
			cov := block.Covariance.Row(row)
			if block.MeasuredMask(row) != event.DirectionMeasured || cov[0] != 0 || cov[3] != 0.008*0.008 {
				t.Fatalf("mask %d, covariance %v", block.MeasuredMask(row), cov)
			}
		}
	}
	near(t, "recoil protons", found, n, 0.8)
	block, _ = measure(t, hall(), truthOf(n, func(int) []particle {
		return []particle{proton, {number: 211, p: at(0.4, 60*degree, 3), mass: 0.1396}}
	}))
	for row := range block.Class {
		if block.MeasuredMask(row) != event.AllMeasured {
			t.Fatal("a proton beside another track is not tracked")
		}
	}
}

func TestTagger(t *testing.T) {
	const n = 3000
	block, _ := measure(t, hall(), truthOf(n, func(int) []particle { return nil }))
	if len(block.Beam.EnergyGeV) != n {
		t.Fatalf("%d candidates of %d", len(block.Beam.EnergyGeV), n)
	}
	for i, e := range block.Beam.EnergyGeV {
		truth := 1.2 + 1.2*(float64(i)+0.5)/n
		if math.Abs(e-truth) > 0.0025*(1+1e-9) || math.Abs(block.Beam.SigmaGeV[i]-0.005/math.Sqrt(12)) > 1e-12 {
			t.Fatalf("energy %v +- %v for a true %v", e, block.Beam.SigmaGeV[i], truth)
		}
	}
	scaled := make([]float64, n)
	for i, v := range block.Beam.TimeNS {
		scaled[i] = v / 1.5
	}
	checkNormal(t, scaled)
	truth := truthOf(3, func(int) []particle { return nil })
	truth.BeamEnergyGeV = []float64{1.1999, 1.2, 2.5}
	block, _ = measure(t, hall(), truth)
	if !slices.Equal(block.Beam.Offsets, []int32{0, 0, 1, 1}) {
		t.Errorf("offsets %v: below, at and above the edges", block.Beam.Offsets)
	}
}

func TestFromCentre(t *testing.T) {
	c := hall()
	c.Calorimeter.Efficiency, c.Calorimeter.Noise, c.Calorimeter.SplitOff = 1, nil, nil
	c.Calorimeter.FromCentre, c.Calorimeter.SpreadZM = true, 0.05/math.Sqrt(12)
	const n = 40_000
	truth := truthOf(n, func(int) []particle { return []particle{{number: 22, p: at(0.5, 70*degree, 0.5)}} })
	for i := range truth.Origin.Z {
		truth.Origin.Z[i] = 0.05 * ((float64(i)+0.5)/n - 0.5)
	}
	block, _ := measure(t, c, truth)
	sum, expected := 0.0, 0.0
	for row := range block.Class {
		d := block.Coordinates.Columns[1][row] - 70*degree
		sum += d * d
		expected += block.Covariance.Row(row)[3]
		hit := momentum.Three{X: block.Clusters.X[row], Y: block.Clusters.Y[row], Z: block.Clusters.Z[row]}
		if math.Abs(hit.Norm()-1) > 1e-14 {
			t.Fatalf("a hit at radius %v", hit.Norm())
		}
	}
	// The variance of a variance of about normal deviates, five times, and one
	// per cent for the change of sin(theta) over the target.
	if math.Abs(sum/expected-1) > 5*math.Sqrt(2.0/n)+0.01 {
		t.Errorf("spread of theta %v, stated %v", sum/n, expected/n)
	}
}

func TestValidateListsEveryFault(t *testing.T) {
	if _, err := detector.New(hall()); err != nil {
		t.Fatal(err)
	}
	if _, err := detector.New(detector.Config{}); err != nil {
		t.Fatalf("a detector of nothing: %v", err)
	}
	c := hall()
	c.Calorimeter.Efficiency = 1.1
	c.Calorimeter.Theta.MaxRad = 0.01
	c.Calorimeter.ThresholdGeV = math.NaN()
	c.Calorimeter.SplitOff.MaxShare = 0.01
	c.Tracker.AngleSigmaRad = 0
	c.Tracker.Confusions[0].Species = 3
	c.Tracker.Confusions = append(c.Tracker.Confusions, detector.Confusion{Species: event.SpeciesPion, TakenFor: event.SpeciesKaon, Probability: 0.96})
	c.Recoil.Theta.MinRad = -1
	c.Tagger.EdgesGeV[7] = 0
	c.Vertex = &detector.Vertex{SigmaZM: math.Inf(1)}
	c.Displaced = &detector.Displaced{MinDistanceM: -1, SigmaXM: 1, SigmaYM: 1, Efficiency: 2}
	_, err := detector.New(c)
	var list fault.List
	if !errors.As(err, &list) {
		t.Fatalf("got %v", err)
	}
	got := make([]string, 0, len(list))
	for _, f := range list {
		got = append(got, f.Field)
	}
	want := []string{
		"calorimeter.theta.max_rad", "calorimeter.threshold_gev", "calorimeter.efficiency", "calorimeter.split_off.max_share",
		"tracker.angle_sigma_rad", "tracker.confusions[0].species", "tracker.confusions[2].probability",
		"recoil.theta.min_rad", "tagger.edges_gev[7]", "vertex.sigma_z_m",
		"displaced.min_distance_m", "displaced.sigma_z_m", "displaced.efficiency",
	}
	if !slices.Equal(got, want) {
		t.Errorf("faults\n%v, want\n%v", got, want)
	}
}

// events is a sample with a bit of everything, for the digests.
func events(n int) *event.Truth {
	return truthOf(n, func(i int) []particle {
		s := random.New(3, random.Generation, int64(i))
		direction := func(size float64) momentum.Three {
			return at(size, math.Pi*s.Uniform(), math.Pi*(s.Uniform()-0.5))
		}
		list := []particle{{number: 2212, p: direction(s.Uniform()), mass: 0.938}}
		for range s.Below(4) {
			list = append(list, particle{number: 22, p: direction(s.Uniform())})
		}
		for range s.Below(3) {
			list = append(list, particle{number: 211, p: direction(s.Uniform()), mass: 0.1396})
		}
		return list
	})
}

func TestAnyPartitionIsTheSame(t *testing.T) {
	truth := events(50)
	whole, _ := measure(t, hall(), truth)
	first, _ := measure(t, hall(), truth)
	if !slices.Equal(whole.Coordinates.Columns[2], first.Coordinates.Columns[2]) {
		t.Error("measuring twice differs")
	}
	// The last ten events alone.
	part := events(50)
	cut := int(part.Offsets[40])
	part.EventIDs = part.EventIDs[40:]
	part.Offsets = slices.Clone(part.Offsets[40:])
	for i := range part.Offsets {
		part.Offsets[i] -= int32(cut)
	}
	part.Number, part.Momentum, part.Mass, part.Decayed = part.Number[cut:], part.Momentum[cut:], part.Mass[cut:], part.Decayed[cut:]
	part.BeamOffsets = part.BeamOffsets[40:]
	block, _ := measure(t, hall(), part)
	at := int(whole.ObjectOffsets[40])
	for k := range 3 {
		if !slices.Equal(block.Coordinates.Columns[k], whole.Coordinates.Columns[k][at:]) {
			t.Errorf("column %d of the last events differs when they are measured alone", k)
		}
	}
}

func TestGoldenMeasured(t *testing.T) {
	block, labels := measure(t, hall(), events(2000))
	golden.Check(t, "measured", func(d *golden.Digest) {
		d.Section("objects")
		for k := range 3 {
			d.Float(block.Coordinates.Columns[k]...)
		}
		for i, label := range labels.Particle {
			d.Int(int64(label), int64(block.Class[i]), int64(block.Species.Bits[i]))
		}
		d.Section("covariances")
		d.Float(block.Covariance.Packed...)
		d.Section("beam")
		d.Float(block.Beam.EnergyGeV...)
		d.Float(block.Beam.TimeNS...)
	})
}

func TestNoAllocationPerEvent(t *testing.T) {
	d, err := detector.New(hall())
	if err != nil {
		t.Fatal(err)
	}
	block := &event.Block{}
	one, many := events(1), events(1000)
	d.Measure(many, block, nil)
	allocations := func(truth *event.Truth) float64 {
		return testing.AllocsPerRun(5, func() { d.Measure(truth, block, nil) })
	}
	// The working memory of a call grows to that of its largest event, in a few
	// doublings.
	if few, some := allocations(one), allocations(many); some > few+8 {
		t.Errorf("%v allocations for an event, %v for a thousand", few, some)
	}
}

func BenchmarkMeasure(b *testing.B) {
	d, err := detector.New(hall())
	if err != nil {
		b.Fatal(err)
	}
	truth, block := events(1000), &event.Block{}
	b.ReportAllocs()
	for b.Loop() {
		d.Measure(truth, block, nil)
	}
}
