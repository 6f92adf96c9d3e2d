package selection_test

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/selection"
)

// The fitted vertex of simulated events in a long target, for directions seen from where
// the photon was born and from the centre, with the vertex measured and not: its pull has
// mean 0 and width 1 and the probabilities are flat, since clusters were where they were
// whatever their directions are said to be seen from. Bounds are five standard errors.
func TestVertexOfSimulatedEvents(t *testing.T) {
	for _, c := range []struct {
		name       string
		fromCentre bool
		sigmaZ     float64 // 0 for an event without a vertex
		treatment  selection.VertexTreatment
	}{
		{"from the centre, not measured, free", true, 0, selection.FreeVertexZ},
		{"from the centre, measured, free", true, 0.01, selection.FreeVertexZ},
		{"from the centre, measured", true, 0.01, selection.MeasuredVertex},
		{"from their origins, measured, free", false, 0.01, selection.FreeVertexZ},
		{"from their origins, measured", false, 0.01, selection.MeasuredVertex},
		{"from their origins, measured well", false, 0.001, selection.MeasuredVertex},
	} {
		t.Run(c.name, func(t *testing.T) {
			const n = 800
			h := taggedFit(2)
			h.Fit.Vertex = c.treatment
			config := fineHall(1)
			config.Calorimeter.FromCentre = c.fromCentre
			if c.sigmaZ > 0 {
				// The fit takes the vertex across z as exact.
				config.Vertex = &detector.Vertex{SigmaXM: 1e-6, SigmaYM: 1e-6, SigmaZM: c.sigmaZ}
			}
			s := simulateFrom(t, h.Reaction, config, generation.Config{
				Initial: onProtons(t, flatBeam()), Target: generation.Region{LengthM: 0.1},
			}, n)
			w := compile(t, h).NewWorker(selection.AllEntries)
			pulls := &moments{}
			var probabilities []float64
			for i := range n {
				if first, end := s.block.Objects(i); end-first != 4 {
					continue // a photon flew out of the acceptance
				}
				for _, x := range w.Explain(&s.block, i, 10).Hypotheses[0].Assignments {
					if !s.isTrue(i, x.Objects) {
						continue
					}
					if x.Fit.Result.Status != constraint.Converged {
						t.Fatalf("event %d: the fit is %v", i, x.Fit.Result.Status)
					}
					pulls.add((x.Fit.VertexZ - s.truth.Vertex.Z[i]) / x.Fit.VertexSigma)
					probabilities = append(probabilities, x.Fit.Result.Probability)
				}
			}
			if len(probabilities) < n*9/10 {
				t.Fatalf("%d of %d events have their true assignment", len(probabilities), n)
			}
			flat(t, probabilities)
			if math.Abs(pulls.mean())*math.Sqrt(pulls.n) > 5 || math.Abs(pulls.width()-1)*math.Sqrt(2*pulls.n) > 5 {
				t.Errorf("pull of z: mean %.3f, width %.3f", pulls.mean(), pulls.width())
			}
			t.Logf("%.0f vertices, pull of z: mean %.3f, width %.3f", pulls.n, pulls.mean(), pulls.width())
		})
	}
}
