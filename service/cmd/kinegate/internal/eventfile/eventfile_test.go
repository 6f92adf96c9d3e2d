package eventfile_test

import (
	"errors"
	"io"
	"os"
	"slices"
	"strings"
	"testing"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
)

func all(t *testing.T, r io.Reader) ([]eventfile.Event, *eventfile.Reader) {
	t.Helper()
	reader, err := eventfile.NewReader(r)
	if err != nil {
		t.Fatal(err)
	}
	var events []eventfile.Event
	for {
		e, err := reader.Next()
		if errors.Is(err, io.EOF) {
			return events, reader
		}
		if err != nil {
			t.Fatal(err)
		}
		events = append(events, e)
	}
}

// TestMeasuredFiles reads the open measured events; their numbers are stated beside
// them in testdata/open/README.md.
func TestMeasuredFiles(t *testing.T) {
	t.Parallel()
	for name, want := range map[string]struct{ events, objects int }{
		"dimuon_2011A.csv": {3000, 2}, "4mu_2011.csv": {18, 4}, "4e_2011.csv": {7, 4}, "2e2mu_2011.csv": {13, 4},
	} {
		f, err := os.Open("../../../../../testdata/open/" + name)
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close() //nolint:errcheck // only read
		events, reader := all(t, f)
		if len(events) != want.events || reader.Coordinates != kinegate.MomentumMass {
			t.Errorf("%s: %d events in set %d", name, len(events), reader.Coordinates)
		}
		for _, e := range events {
			if len(e.Objects) != want.objects || e.Other["M"] == "" || e.Beam != nil {
				t.Fatalf("%s: event %d: %+v", name, e.ID, e)
			}
		}
	}
}

func TestForms(t *testing.T) {
	t.Parallel()
	events, reader := all(t, strings.NewReader(`# invented
Event,class1,p1,theta1,phi1,direction1,class2,p2,theta2,phi2,direction2,beam_energy1,beam_sigma1,beam_time1,note
7,photon,1.5,0.3,-2,,positive,0,0.9,1,1,1.2,0.002,-3.5,first
8,neutral,0,1,1,1,,,,,,,,,second
`))
	if reader.Coordinates != kinegate.MomentumAngles || len(events) != 2 {
		t.Fatalf("%d events in set %d", len(events), reader.Coordinates)
	}
	first, second := events[0], events[1]
	if first.ID != 7 || len(first.Objects) != 2 || len(first.Beam) != 1 || first.Other["note"] != "first" {
		t.Errorf("first event: %+v", first)
	}
	if o := first.Objects[1]; o.Class != kinegatev1.ObjectClass_OBJECT_CLASS_POSITIVE || o.Measured != 6 || o.Values[1] != 0.9 {
		t.Errorf("second object: %+v", o)
	}
	if first.Beam[0] != (kinegate.BeamCandidate{Energy: 1.2, Sigma: 0.002, Time: -3.5}) {
		t.Errorf("beam: %+v", first.Beam)
	}
	if len(second.Objects) != 1 || second.Beam == nil || len(second.Beam) != 0 {
		t.Errorf("second event: %+v", second)
	}
}

func TestWriteReadsBack(t *testing.T) {
	t.Parallel()
	events := []eventfile.Event{
		{
			Run: 3, ID: 1, Other: map[string]string{"channel": "p pi0"},
			Objects: []kinegate.Object{
				{Values: [4]float64{0.1, 1.0 / 3, -2}, Class: kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON},
				{Values: [4]float64{2, 1, 0}, Class: kinegatev1.ObjectClass_OBJECT_CLASS_POSITIVE, Species: 0b10100, Measured: 6},
			},
			Beam: []kinegate.BeamCandidate{{Energy: 1.2, Sigma: 0.001, Time: -3.25}},
		},
		{Run: 3, ID: 2, Other: map[string]string{"channel": "noise"}, Beam: []kinegate.BeamCandidate{}},
	}
	var b strings.Builder
	if err := eventfile.Write(&b, "Invented.", kinegate.MomentumAngles, events); err != nil {
		t.Fatal(err)
	}
	got, _ := all(t, strings.NewReader(b.String()))
	if len(got) != 2 || !slices.Equal(got[0].Objects, events[0].Objects) || !slices.Equal(got[0].Beam, events[0].Beam) ||
		got[0].Other["channel"] != "p pi0" || got[1].ID != 2 || len(got[1].Objects) != 0 || got[1].Beam == nil {
		t.Errorf("got %+v from\n%s", got, b.String())
	}
}

func TestFaultsNameColumnAndLine(t *testing.T) {
	t.Parallel()
	for _, c := range []struct{ name, text, message string }{
		{"empty", "", "the file is empty"},
		{"no objects", "a,b\n1,2\n", "no object columns"},
		{"twice", "px1,PX1,py1,pz1,q1\n", "twice"},
		{"not a number", "px1,py1,pz1,q1\n1,x,3,1\n", `line 2: column py1: "x" is not a number`},
		{"part", "px1,py1,pz1,q1\n1,,3,1\n", "line 2: column px1 and those beside it are filled in part"},
		{"class", "px1,py1,pz1,class1\n1,2,3,muon\n", `column class1: "muon" is no class`},
		{"pid", "px1,py1,pz1,pid1\n1,2,3,e\n", "no particle number"},
		{"event", "event,px1,py1,pz1,q1\nx,1,2,3,1\n", "column event"},
		{"short line", "px1,py1,pz1,q1\n1,2\n", "wrong number of fields"},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Parallel()
			reader, err := eventfile.NewReader(strings.NewReader(c.text))
			if err == nil {
				_, err = reader.Next()
			}
			if err == nil || !strings.Contains(err.Error(), c.message) {
				t.Errorf("%v, want %q", err, c.message)
			}
		})
	}
}
