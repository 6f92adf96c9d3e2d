package api

import (
	"sync"

	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// keptReactions bounds how many texts are kept read. The largest takes some 30 KB.
const keptReactions = 256

// parsedReaction is a reaction with what replies say about it whatever the energy. It
// is shared between replies and never changes.
type parsedReaction struct {
	*reaction.Reaction

	text       string
	structured *kinegatev1.Reaction
	decays     []*kinegatev1.DecayNote
	remainder  *kinegatev1.InclusiveRemainder
}

// newParsedReaction prepares what replies say about a reaction.
func newParsedReaction(r *reaction.Reaction) *parsedReaction {
	return &parsedReaction{
		Reaction: r, text: r.String(), structured: specMessage(r.Spec()),
		decays: decayNotes(r.Decays), remainder: remainderMessage(r.Remainder),
	}
}

// reactionTexts keeps reactions by the text they were read from: callers ask about the
// same few at many energies, and reading one takes longer than answering. When it is
// full it starts anew. The zero value is ready for use, from several goroutines.
type reactionTexts struct {
	mu     sync.Mutex
	byText map[string]*parsedReaction
}

// read returns the reaction of a request.
func (k *reactionTexts) read(table *particle.Table, form processForm) (*parsedReaction, error) {
	k.mu.Lock()
	known := k.byText[form.text]
	k.mu.Unlock()
	if known != nil && form.structured == nil {
		return known, nil
	}
	r, err := form.read(table)
	if err != nil {
		return nil, err
	}
	p := newParsedReaction(r)
	if form.structured != nil {
		return p, nil
	}
	k.mu.Lock()
	defer k.mu.Unlock()
	if k.byText == nil || len(k.byText) >= keptReactions {
		k.byText = make(map[string]*parsedReaction, keptReactions)
	}
	k.byText[form.text] = p
	return p, nil
}
