package api

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"example.org/kinegate/kinematics"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

var update = flag.Bool("update", false, "rewrite testdata/golden/generated.txt, after the version of the numerics was raised")

// TestGoldenGenerateEvents compares simulated and measured events, weighted and not, with
// digests that are the same on every architecture. The slices that they are asked for in
// are other ones at each run of the loop, and the digest is not.
func TestGoldenGenerateEvents(t *testing.T) {
	file := filepath.Join("testdata", "golden", "generated.txt")
	weighted := sample()
	weighted.Weighted = true
	weighted.Channels = weighted.GetChannels()[1:2]
	weighted.Channels[0].Energy = &kinegatev1.EnergyDependence{
		Kind: &kinegatev1.EnergyDependence_PhaseSpace{PhaseSpace: &kinegatev1.PhaseSpaceRate{}},
	}
	weighted.Channels[0].Angle = &kinegatev1.ProductionAngle{
		Product: "K+", Polar: &kinegatev1.ProductionAngle_SlopePerGev2{SlopePerGev2: 2}, BeamAsymmetry: -0.6,
	}
	s := newServices(t)
	var lines strings.Builder
	_, _ = fmt.Fprintf(&lines, "numerics %d\n", kinematics.NumericsVersion)
	for _, c := range []struct {
		name       string
		generation *kinegatev1.Generation
	}{{"mixture", sample()}, {"weighted", weighted}} {
		const events = 1200
		digest := ""
		for _, slice := range []int64{events, 400, 171} {
			var blocks []*kinegatev1.GeneratedBlock
			for first := int64(0); first < events; first += slice {
				blocks = append(blocks, mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{
					Generation: c.generation, FirstEvent: first, EventCount: min(slice, events-first),
				}).blocks()...)
			}
			got := contentDigest(t, blocks...)
			if digest != "" && got != digest {
				t.Errorf("%s in slices of %d: digest %s, want %s", c.name, slice, got, digest)
			}
			digest = got
		}
		_, _ = fmt.Fprintf(&lines, "%s %d events %s\n", c.name, events, digest)
	}
	text := lines.String()
	if *update {
		if err := os.MkdirAll(filepath.Dir(file), 0o750); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(file, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(file)
	if err != nil || text != string(want) {
		t.Errorf("got %swant %s%v", text, want, err)
	}
}

// TestDisplacedDecaysAreMeasured: a Lambda's tracks carry the vertex that they come from.
func TestDisplacedDecaysAreMeasured(t *testing.T) {
	g := sample()
	g.Channels = g.GetChannels()[1:2]
	out := mustGenerate(t, newServices(t), &kinegatev1.GenerateEventsRequest{Generation: g, EventCount: 500})
	groups, pairs := 0, 0
	for _, m := range out.blocks() {
		block, err := eventBlock(m.GetEvents(), &columns{})
		if err != nil {
			t.Fatal(err)
		}
		groups += len(block.Groups.Position.X)
		for i := range block.Events() {
			first, end := block.Objects(i)
			for _, group := range block.Groups.OfObject[first:end] {
				if group > 0 {
					pairs++
				}
			}
		}
	}
	if groups < 100 || pairs != 2*groups {
		t.Errorf("%d displaced vertices with %d tracks", groups, pairs)
	}
}
