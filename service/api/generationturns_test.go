package api

import (
	"sync/atomic"
	"testing"
	"testing/synctest"
	"time"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// turnTaker is a caller who takes every turn of bulk work while it receives the first block,
// and gives them back a second later.
type turnTaker struct {
	sink

	turns *turns
	// during counts the blocks that came while the turns were taken.
	blocks, during int
	back           atomic.Bool
}

func (s *turnTaker) Send(m *kinegatev1.GenerateEventsResponse) error {
	if m.GetBlock() == nil {
		return nil
	}
	s.blocks++
	switch {
	case s.blocks == 1:
		for range s.turns.count() {
			if err := s.turns.take(s.ctx); err != nil {
				return err
			}
		}
		time.AfterFunc(time.Second, func() {
			s.back.Store(true)
			for range s.turns.count() {
				s.turns.giveBack()
			}
		})
	case !s.back.Load():
		s.during++
	}
	return nil
}

// TestGenerationTakesTurns: while others have all the turns, no block is begun or measured.
// One that was measured before may still come.
func TestGenerationTakesTurns(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		s := newServices(t)
		out := &turnTaker{sink: sink{ctx: t.Context()}, turns: s.generation.turns}
		if err := s.generation.GenerateEvents(&kinegatev1.GenerateEventsRequest{
			Generation: sample(), EventCount: 40, BlockEventCount: 1,
		}, out); err != nil {
			t.Fatal(err)
		}
		if out.blocks != 40 || out.during > 1 {
			t.Errorf("%d blocks, %d of them while others had the turns", out.blocks, out.during)
		}
	})
}
