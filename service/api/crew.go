package api

import (
	"context"
	"sync"
	"sync/atomic"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/selection"
)

// eventsPerTurn is how many events are judged in one turn. Pair windows take about a
// microsecond an event, so that turns are short.
const eventsPerTurn = 64

// crew are the workers of one caller. They share the events of a block, and the
// verdicts come out in the order of the events whoever judged them.
type crew struct {
	turns   *turns
	program *selection.Program
	detail  selection.Detail
	members []*selection.Worker // the first always works, the others when turns are free
}

func newCrew(program *selection.Program, detail selection.Detail, turns *turns) crew {
	return crew{turns: turns, program: program, detail: detail, members: []*selection.Worker{program.NewWorker(detail)}}
}

// job is one block on the table. Turns are ranges of eventsPerTurn events.
type job struct {
	*crew

	block *event.Block
	late  func() bool
	out   *event.VerdictBlock
	// parts are the verdicts of turns that were not appended to out at once.
	parts []event.VerdictBlock
	next  atomic.Int64
}

// judge judges all events of a block into w.out. The error is that of the context or
// a contained panic.
func (c *crew) judge(ctx context.Context, block *event.Block, late func() bool, w *workspace) error {
	first := c.members[0]
	first.Reset(&w.out)
	count := (block.Events() + eventsPerTurn - 1) / eventsPerTurn
	for len(w.parts) < count {
		w.parts = append(w.parts, event.VerdictBlock{})
	}
	j := &job{crew: c, block: block, late: late, out: &w.out, parts: w.parts[:count]}
	helpers := min(c.turns.count(), count) - 1
	errs := make(chan error, max(helpers, 0))
	var together sync.WaitGroup
	for i := range helpers {
		if len(c.members) < i+2 {
			c.members = append(c.members, c.program.NewWorker(c.detail))
		}
		// A helper takes only turns that nobody waits for.
		if !c.turns.try() {
			break
		}
		member := c.members[i+1]
		together.Go(func() {
			if err := Contain(func() error { j.help(ctx, member); return nil }); err != nil {
				errs <- err
			}
		})
	}
	// Even if this goroutine panics: the helpers read the block.
	defer together.Wait()
	own, err := j.lead(ctx, first)
	together.Wait()
	if err != nil {
		return err
	}
	select {
	case err := <-errs:
		return err
	default:
	}
	for i := own; i < count; i++ {
		first.Append(j.out, &j.parts[i])
	}
	return ctx.Err()
}

// lead judges turns until there are no more. As long as all turns were its own, their
// verdicts go straight to out; it returns how many did.
func (j *job) lead(ctx context.Context, w *selection.Worker) (own int, err error) {
	s := j.spell(ctx, w)
	defer s.end()
	for {
		turn, more := j.claim()
		if !more {
			return own, nil
		}
		out := j.out
		if turn == own {
			own++
		} else {
			out = &j.parts[turn]
			w.Reset(out)
		}
		if err := s.take(); err != nil {
			return own, err
		}
		j.turn(w, turn, out)
		s.end()
		if err := ctx.Err(); err != nil {
			return own, err
		}
	}
}

// spell is the work of one member on the job. One event may have many assignments, so
// the member looks up within it too.
func (j *job) spell(ctx context.Context, w *selection.Worker) *spell {
	s := j.turns.begin(ctx)
	w.Stop = func() bool { return s.stop() || j.late() }
	return s
}

// help judges turns, the first of which was taken already, as long as turns are free.
func (j *job) help(ctx context.Context, w *selection.Worker) {
	s := j.spell(ctx, w)
	s.hold()
	defer s.end()
	for ctx.Err() == nil {
		turn, more := j.claim()
		if !more {
			return
		}
		w.Reset(&j.parts[turn])
		j.turn(w, turn, &j.parts[turn])
		s.end()
		if !j.turns.try() {
			return
		}
		s.hold()
	}
}

// claim takes the next turn off the table.
func (j *job) claim() (turn int, more bool) {
	turn = int(j.next.Add(1)) - 1
	return turn, turn < len(j.parts)
}

// turn appends the verdicts of one turn to out.
func (j *job) turn(w *selection.Worker, turn int, out *event.VerdictBlock) {
	from := turn * eventsPerTurn
	to := min(from+eventsPerTurn, j.block.Events())
	if j.late() {
		w.Expire(to-from, out)
		return
	}
	done := from + w.Judge(j.block, from, to, out)
	w.Expire(to-done, out)
}
