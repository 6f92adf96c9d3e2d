package api

import (
	"fmt"

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
	outline []*kinegatev1.HypothesisOutline
}

// compile checks a selection as a whole. The error is a fault.List, or an unknown
// field that a newer client has set.
func compile(m *kinegatev1.Selection, table *particle.Table) (*compiledSelection, error) {
	digest, err := canonical.Digest(m, table.Digest())
	if err != nil {
		return nil, fault.New(fault.Unsupported, "", "", "").Because(err.Error())
	}
	form, faults := selectionForm(m)
	if len(faults) > 0 {
		return nil, faults
	}
	program, err := selection.Compile(&form, table)
	if err != nil {
		return nil, err
	}
	c := &compiledSelection{message: m, program: program, digest: digest}
	for _, o := range program.Outlines() {
		c.outline = append(c.outline, &kinegatev1.HypothesisOutline{
			Name: o.Name, Reaction: o.Reaction, Products: o.Products, Observables: o.Observables,
		})
	}
	return c, nil
}

// largestReply is the bound of an encoded verdict block on a block within the
// limits.
func (c *compiledSelection) largestReply(limits blockLimits, detail selection.Detail) int64 {
	return c.program.LargestReplyBytes(limits.form(), detail)
}

// readSelection reads the text of a selection file. The faults are those of the
// text alone.
func readSelection(text string) (*kinegatev1.Selection, strictyaml.Positions, []*kinegatev1.SelectionFault) {
	m := &kinegatev1.Selection{}
	positions, faults := strictyaml.Unmarshal([]byte(text), m)
	var messages []*kinegatev1.SelectionFault
	for _, f := range faults {
		messages = append(messages, &kinegatev1.SelectionFault{
			Field: f.Field, Message: f.Message, Line: int32(f.Line), Column: int32(f.Column), //nolint:gosec // texts are below 4 MiB
		})
	}
	return m, positions, messages
}

// selectionFaults converts the faults that compiling found, with their places in
// the text where there was one.
func selectionFaults(err error, positions strictyaml.Positions) []*kinegatev1.SelectionFault {
	var messages []*kinegatev1.SelectionFault
	for _, v := range Explain(err).Violations {
		at := positions.Find(v.Field)
		messages = append(messages, &kinegatev1.SelectionFault{
			Field: v.Field, Message: v.Problem, Line: int32(at.Line), Column: int32(at.Column), //nolint:gosec // as above
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
