package api

import (
	"context"
	"sync"
	"time"

	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// judging judges the blocks of one caller, one after the other.
type judging struct {
	service  *selectionService
	compiled *compiledSelection
	detail   selection.Detail
	limits   blockLimits
	// follow names the selection whose newest version takes over; empty for none.
	follow string
	// room books room for larger replies; a judging that follows has it.
	room func(largestReply int64) error
	// passedOver is the digest of the version that it last said it cannot take.
	passedOver string
	crew       crew
}

// newJudging finds and compiles the selection of a caller, whose blocks keep the
// limits. A selection whose replies could pass the limit of the transport is refused.
func (s *selectionService) newJudging(
	source *kinegatev1.SelectionSource, entries kinegatev1.EntryDetail, limits blockLimits, follow bool,
) (*judging, error) {
	f := &former{}
	j := &judging{service: s, detail: enumForm[selection.Detail](f, "entries", entries), limits: limits}
	if err := f.faults.Err(); err != nil {
		return nil, err
	}
	var c *compiledSelection
	var err error
	switch x := source.GetSource().(type) {
	case *kinegatev1.SelectionSource_Given:
		if follow {
			return nil, fault.New(fault.Invalid, "open.follow", "true", "false for a selection sent along, which no other takes over")
		}
		if c, err = compile(x.Given, s.deps.Table); err != nil {
			return nil, selectionError(x.Given.GetName(), In("selection.given", err))
		}
	case *kinegatev1.SelectionSource_Named:
		if c, err = s.library.find(x.Named); err != nil {
			return nil, err
		}
		if follow {
			j.follow = x.Named.GetName()
		}
	default:
		f.need("selection", "empty", "given or named")
		return nil, f.faults
	}
	if err := j.fits(c); err != nil {
		return nil, err
	}
	j.use(c)
	return j, nil
}

// fits refuses a selection whose replies could pass the limit of the transport.
func (j *judging) fits(c *compiledSelection) error {
	if largest, limit := c.largestReply(j.limits, j.detail), j.limits.messageBytes; largest > limit {
		return OverLimit(ReplyTooLarge, "the largest possible reply in bytes", largest, limit,
			"promise smaller blocks, ask for fewer entries or record fewer observables")
	}
	return nil
}

// use makes a selection the one that judges.
func (j *judging) use(c *compiledSelection) {
	j.compiled = c
	j.crew = newCrew(c.program, j.detail, j.service.turns)
}

// largestReply is the bound of a reply on a block within the limits.
func (j *judging) largestReply() int64 { return j.compiled.largestReply(j.limits, j.detail) }

// workspace is the memory in which one block is judged.
type workspace struct {
	columns columns
	out     event.VerdictBlock
	verdict verdictColumns
	parts   []event.VerdictBlock
}

// workspaces are shared by all callers, so that a stream which waits holds none.
//
//nolint:gochecknoglobals // a pool of memory has no state that anyone could see
var workspaces = sync.Pool{New: func() any { return new(workspace) }}

// block judges a block of a stream and returns its verdict, which shares the memory
// of w. Structural faults make a rejected verdict; the error is the end of the
// context.
func (j *judging) block(ctx context.Context, m *kinegatev1.EventBlock, bytes int64, deadline time.Time, w *workspace) (*kinegatev1.VerdictBlock, error) {
	j.catchUp()
	block, err := convertBlock(m, bytes, j.limits, w)
	if err == nil {
		err = j.compiled.accepts(block)
	}
	if err != nil {
		return rejection(m.GetSequence(), j.compiled.digest, err), nil
	}
	return j.events(ctx, m.GetSequence(), block, deadline, w)
}

// events judges a sound block. Events left when the deadline passes are EXPIRED;
// the zero deadline is none.
func (j *judging) events(
	ctx context.Context, sequence int64, block *event.Block, deadline time.Time, w *workspace,
) (*kinegatev1.VerdictBlock, error) {
	late := func() bool { return !deadline.IsZero() && j.service.deps.Now().After(deadline) }
	if err := j.crew.judge(ctx, block, late, w); err != nil {
		return nil, err
	}
	return w.verdict.block(sequence, j.compiled.digest, &w.out), nil
}

// catchUp takes a newer version of a followed selection at a block boundary. One
// whose replies could pass the limit of the transport, or for which there is no room,
// is left alone: the digest shows it to the caller, and the observer hears of it once.
func (j *judging) catchUp() {
	if j.follow == "" {
		return
	}
	newest, err := j.service.library.find(&kinegatev1.SelectionReference{Name: j.follow})
	if err != nil || newest.digest == j.compiled.digest {
		return
	}
	err = j.fits(newest)
	if err == nil {
		err = j.room(newest.largestReply(j.limits, j.detail))
	}
	switch {
	case err == nil:
		j.use(newest)
	case newest.digest != j.passedOver:
		j.passedOver = newest.digest
		j.service.deps.Observer.VersionPassedOver(j.follow, newest.digest, Explain(err).Reason)
	}
}

// convertBlock reads a block within the limits into the memory of w.
func convertBlock(m *kinegatev1.EventBlock, bytes int64, limits blockLimits, w *workspace) (*event.Block, error) {
	// The size comes first, so that a block over it costs nothing.
	if bytes > limits.bytes {
		return nil, limits.over("the size of the block in bytes", bytes, limits.bytes)
	}
	block, err := eventBlock(m, &w.columns)
	if err != nil {
		return nil, Because(BlockInvalid, err)
	}
	return block, limits.check(bytes, block)
}

// rejection is the verdict on a block whose structure is unsound.
func rejection(sequence int64, digest string, err error) *kinegatev1.VerdictBlock {
	f := Explain(err)
	r := &kinegatev1.Rejection{Reason: string(f.Reason), Message: clip(f.Message, maxMessage)}
	if len(f.Violations) > 0 {
		r.Field = clip(f.Violations[0].Field, maxTextBytes)
	}
	return &kinegatev1.VerdictBlock{Sequence: sequence, SelectionDigest: digest, Rejected: r}
}

// blockBytes is the encoded size of a block.
func blockBytes(m *kinegatev1.EventBlock) int64 { return int64(proto.Size(m)) }
