package conformance

import (
	"encoding/json"
	"fmt"
	"path/filepath"
	"time"

	"google.golang.org/protobuf/encoding/protojson"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Script is a judge stream over one or several connections: the frames of both sides.
type Script struct {
	// Name is the name of the file, without its ending.
	Name string `json:"-"`
	// About says what it shows.
	About string `json:"about"`
	// Against is who can be tested: "client", "server" or "both".
	Against string `json:"against"`
	// Late is the client's policy for late events: "accept" or "reject".
	Late string `json:"late"`
	// FirstSequence is that of the stream.
	FirstSequence int64 `json:"first_sequence"`
	// Follow says that the caller lets reloaded selections take over.
	Follow bool `json:"follow,omitempty"`
	// Blocks are what the caller pushes at once.
	Blocks []json.RawMessage `json:"blocks"`
	// Connections are what happens on each, one after the other.
	Connections [][]Step `json:"connections"`
	// Verdicts are what the client must hand to its caller, in part; Rule is what it
	// breaks otherwise.
	Verdicts []json.RawMessage `json:"verdicts"`
	// Outlines are what the client must say of the selection of each verdict, in part; none
	// where that is free.
	Outlines []json.RawMessage `json:"outlines,omitempty"`
	// Rule names what a client breaks that hands out other verdicts.
	Rule string `json:"rule"`
	// Fails says that the client must tell its caller that the stream failed.
	Fails bool `json:"fails,omitempty"`
}

// Step is one thing that happens. Exactly one of its first members is set.
type Step struct {
	// Client is a frame that the client must send next, in part.
	Client json.RawMessage `json:"client,omitempty"`
	// Finish says that the client must end its sending.
	Finish bool `json:"finish,omitempty"`
	// QuietS is for how long the client must send no block.
	QuietS float64 `json:"quiet_s,omitempty"`
	// Server is a frame that the server sends next.
	Server json.RawMessage `json:"server,omitempty"`
	// Unknown is a frame of a newer server, encoded.
	Unknown []byte `json:"unknown,omitempty"`
	// End ends the rpc: "ok", "cut" as by the transport, or "left": the server does
	// nothing until the client leaves.
	End string `json:"end,omitempty"`
	// Failure ends the rpc with a failure.
	Failure *Failure `json:"failure,omitempty"`

	// WithinS is the time for what the client must do; 0 means 5 s.
	WithinS float64 `json:"within_s,omitempty"`
	// Rule names what a client breaks that does something else.
	Rule string `json:"rule,omitempty"`
}

// Scripts reads the streams of testdata/rpc.
func Scripts(folder string) ([]*Script, error) {
	return Read(filepath.Join(folder, "streams"), func(s *Script, name string) { s.Name = name })
}

// Events returns the blocks that the caller pushes.
func (s *Script) Events() ([]*kinegatev1.EventBlock, error) {
	var blocks []*kinegatev1.EventBlock
	for i, raw := range s.Blocks {
		b := &kinegatev1.EventBlock{}
		if err := protojson.Unmarshal(raw, b); err != nil {
			return nil, fmt.Errorf("block %d of the script: %w", i, err)
		}
		blocks = append(blocks, b)
	}
	return blocks, nil
}

// Open returns the opening of the caller: the selection "pairs" of the server.
func (s *Script) Open() *kinegatev1.JudgeOpen {
	return &kinegatev1.JudgeOpen{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Named{
			Named: &kinegatev1.SelectionReference{Name: "pairs"},
		}},
		FirstSequence: s.FirstSequence,
		Entries:       kinegatev1.EntryDetail_ENTRY_DETAIL_NONE,
		Follow:        s.Follow,
	}
}

// CheckVerdicts compares what a client handed to its caller, and whether it failed.
func (s *Script) CheckVerdicts(verdicts []*kinegatev1.VerdictBlock, failed bool) error {
	if failed != s.Fails {
		return &BreachError{s.Rule, fmt.Sprintf("the stream failed: %v; due: %v", failed, s.Fails)}
	}
	if len(verdicts) != len(s.Verdicts) {
		return &BreachError{s.Rule, fmt.Sprintf("%d verdicts came where %d are due", len(verdicts), len(s.Verdicts))}
	}
	for i, v := range verdicts {
		came, err := form(v)
		if err != nil {
			return err
		}
		if err := compare(s.Verdicts[i], came, DefaultTolerance); err != nil {
			return &BreachError{s.Rule, fmt.Sprintf("verdict %d: %v", i, err)}
		}
	}
	return nil
}

// CheckOutlines compares what a client said of the selections of its verdicts.
func (s *Script) CheckOutlines(outlines []*kinegatev1.SelectionOutline) error {
	for i, due := range s.Outlines {
		came, err := form(outlines[i])
		if err != nil {
			return err
		}
		if err := compare(due, came, DefaultTolerance); err != nil {
			return &BreachError{s.Rule, fmt.Sprintf("outline of verdict %d: %v", i, err)}
		}
	}
	return nil
}

// BreachError says which rule was broken, and how.
type BreachError struct {
	// Rule is the rule's name.
	Rule string
	// How says what happened.
	How string
}

// Error names the rule first.
func (e *BreachError) Error() string { return e.Rule + ": " + e.How }

// within is the time for what a client must do.
func (s *Step) within() time.Duration {
	if s.WithinS == 0 {
		const patience = 5 * time.Second
		return patience
	}
	return time.Duration(s.WithinS * float64(time.Second))
}
