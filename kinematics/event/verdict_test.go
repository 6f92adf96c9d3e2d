package event_test

import (
	"slices"
	"testing"

	"example.org/kinegate/kinematics/event"
)

func TestBits(t *testing.T) {
	bits := event.NewBits(11)
	if len(bits) != 2 {
		t.Fatalf("11 bits take %d bytes", len(bits))
	}
	bits.Set(0)
	bits.Set(10)
	if bits[0] != 1 || bits[1] != 4 {
		t.Errorf("bits 0 and 10 give % x, want 01 04", []byte(bits))
	}
	bits.Clear(10)
	if !bits.Get(0) || bits.Get(10) || bits.Get(9) {
		t.Error("bits do not read back")
	}
}

func TestEntriesReadBack(t *testing.T) {
	var e event.Entries
	for range 2 { // the second round runs in kept memory
		e.Reset(false, false)
		e.Append(event.Entry{Hypothesis: 1, BeamRow: -1, Weight: 1, Observables: []float64{3, 4}, Assignment: []int16{0, -1, 2}})
		e.EndEvent()
		e.EndEvent()
		e.Append(event.Entry{Hypothesis: 0, BeamRow: 2, Weight: -0.5, Assignment: []int16{5}})
		e.EndEvent()
	}
	if !slices.Equal(e.Offsets, []int32{0, 1, 1, 2}) || e.Len() != 2 {
		t.Fatalf("offsets %v, %d entries", e.Offsets, e.Len())
	}
	first, second := e.Row(0), e.Row(1)
	if first.Hypothesis != 1 || !slices.Equal(first.Observables, []float64{3, 4}) || !slices.Equal(first.Assignment, []int16{0, -1, 2}) {
		t.Errorf("first entry reads back as %+v", first)
	}
	if second.BeamRow != 2 || second.Weight != -0.5 || len(second.Observables) != 0 || !slices.Equal(second.Assignment, []int16{5}) {
		t.Errorf("second entry reads back as %+v", second)
	}
}
