package api

import (
	"cmp"
	"errors"
	"fmt"
	"slices"
	"strings"

	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api/canonical"
	"example.org/kinegate/service/api/strictyaml"
)

// compiledSelection is a selection ready to judge with. It is immutable.
type compiledSelection struct {
	message *kinegatev1.Selection
	program *selection.Program
	digest  string
	outline *kinegatev1.SelectionOutline
}

// compile checks a selection as a whole. The error is a fault.List, or an unknown
// field that a newer client has set.
func compile(m *kinegatev1.Selection, table *particle.Table) (*compiledSelection, error) {
	digest, err := canonical.Digest(m, table.Digest())
	if err != nil {
		return nil, fault.New(fault.Unsupported, "", "", "").Because(err.Error())
	}
	form, faults := selectionForm(m)
	program, err := selection.Compile(&form, table)
	if compiling, ok := errors.AsType[fault.List](err); ok {
		faults = append(faults, beyond(faults, compiling)...)
	}
	if len(faults) > 0 {
		return nil, faults
	}
	if err != nil {
		return nil, err
	}
	c := &compiledSelection{
		message: m, program: program, digest: digest, outline: &kinegatev1.SelectionOutline{SelectionDigest: digest},
	}
	for _, g := range m.GetGroups() {
		c.outline.Groups = append(c.outline.Groups, g.GetName())
	}
	for _, o := range program.Outlines() {
		outline := &kinegatev1.HypothesisOutline{
			Name: o.Name, Reaction: o.Reaction, Products: o.Products, Observables: o.Observables,
		}
		if o.DegreesOfFreedom != selection.NoFit {
			outline.DegreesOfFreedom = new(int32(o.DegreesOfFreedom)) //nolint:gosec // below a hundred
		}
		c.outline.Hypotheses = append(c.outline.Hypotheses, outline)
	}
	return c, nil
}

// accepts refuses a block that lacks a column which a fit of the selection needs.
func (c *compiledSelection) accepts(block *event.Block) error {
	if err := c.program.Accepts(block); err != nil {
		return Because(BlockInvalid, err)
	}
	return nil
}

// largestReply is the bound of an encoded reply on a block within the limits: the verdict
// block with the outline beside it, as a unary call returns them and as a stream sends them
// where a newer selection takes over.
func (c *compiledSelection) largestReply(limits blockLimits, detail selection.Detail) int64 {
	// Two members of a message, each with its tag and length.
	const framing = 16
	return c.program.LargestReplyBytes(limits.form(), detail) + int64(proto.Size(c.outline)) + framing
}

// readSelection reads the text of a selection file and compiles it. The faults are
// those of the text and of what it says, with their places. The message holds what
// could be read.
func readSelection(text string, table *particle.Table) (*kinegatev1.Selection, *compiledSelection, fault.List) {
	m := &kinegatev1.Selection{}
	var c *compiledSelection
	err := readFile(text, m, func() (err error) {
		c, err = compile(m, table)
		return err
	})
	return m, c, faultsOf(err)
}

// readFile reads the text of a file into a message and compiles that. The error is a
// fault.List of what is wrong with the text and with what it says, each with its place,
// or whatever else compiling returns.
func readFile(text string, m proto.Message, compile func() error) error {
	positions, textFaults := strictyaml.Unmarshal([]byte(text), m)
	var faults fault.List
	for _, f := range textFaults {
		faults = append(faults, fault.New(fault.Invalid, f.Field, "", "").Because(f.Message).At(f.Line, f.Column))
	}
	if positions == nil {
		return faults.Err() // all that it would say is missing
	}
	err := compile()
	found := faultsOf(err)
	if err != nil && len(found) == 0 {
		return err
	}
	for _, f := range beyond(faults, found) {
		if misnamed(f.Field, textFaults, positions) {
			continue
		}
		at := positions.Find(f.Field)
		faults = append(faults, f.At(at.Line, at.Column))
	}
	slices.SortStableFunc(faults, func(a, b *fault.Error) int {
		return cmp.Or(cmp.Compare(a.Line, b.Line), cmp.Compare(a.Column, b.Column))
	})
	return faults.Err()
}

// misnamed tells that a field is not in the text while a field beside it has a name that does
// not exist, which may be this one mistyped.
func misnamed(field string, textFaults []strictyaml.Fault, positions strictyaml.Positions) bool {
	parent, missing := field, false
	for parent != "" {
		if _, ok := positions[parent]; ok {
			break
		}
		parent, missing = parentOf(parent), true
	}
	return missing && slices.ContainsFunc(textFaults, func(f strictyaml.Fault) bool {
		_, known := positions[f.Field]
		return !known && f.Field != "" && parentOf(f.Field) == parent
	})
}

// parentOf is the path of the field around a field; empty for the file.
func parentOf(field string) string { return field[:max(strings.LastIndexAny(field, ".["), 0)] }

// faultsOf is the list of faults that an error holds.
func faultsOf(err error) fault.List {
	if list, ok := errors.AsType[fault.List](err); ok {
		return list
	}
	if e, ok := errors.AsType[*fault.Error](err); ok {
		return fault.List{e}
	}
	return nil
}

// beyond returns the faults that are not just the consequence of one in seen: a
// field that could not be read is also missing.
func beyond(seen, faults fault.List) fault.List {
	within := func(a, b string) bool { return a == b || strings.HasPrefix(a, b+".") || strings.HasPrefix(a, b+"[") }
	var news fault.List
	for _, f := range faults {
		if !slices.ContainsFunc(seen, func(s *fault.Error) bool { return within(f.Field, s.Field) || within(s.Field, f.Field) }) {
			news = append(news, f)
		}
	}
	return news
}

// fieldFaults converts faults for the caller. The position stands in fields of
// its own and not in the message.
func fieldFaults(faults fault.List) []*kinegatev1.FieldFault {
	var messages []*kinegatev1.FieldFault
	for _, f := range faults {
		bare := *f
		bare.Field, bare.Line, bare.Column = "", 0, 0
		reason, ok := reasonOfKind(f.Kind)
		if !ok {
			reason = FieldInvalid
		}
		messages = append(messages, &kinegatev1.FieldFault{
			Field: f.Field, Message: sentence(&bare), Reason: string(reason),
			Line: int32(f.Line), Column: int32(f.Column), //nolint:gosec // texts are below 4 MiB
		})
	}
	return messages
}

// selectionError is the refusal of a selection that cannot be used.
func selectionError(name string, err error) error {
	f := Because(SelectionInvalid, err)
	f.Message = fmt.Sprintf("selection %q: %s", name, f.Message)
	return f
}
