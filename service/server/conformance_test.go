package server

import (
	"encoding/json"
	"errors"
	"flag"
	"io"
	"os"
	"path/filepath"
	"testing"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/conformance"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// conformanceFolder holds the cases that every client plays too.
const conformanceFolder = "../../testdata/rpc"

// updateCalls writes the replies of this server into the cases.
var updateCalls = flag.Bool("update-calls", false, "write the replies into testdata/rpc/calls")

// conforming is a server with the selection of the scripts.
func conforming(t *testing.T) *running {
	t.Helper()
	return start(t, func(o *Options, _ *Deps) { o.SelectionFiles = []string{conformanceFolder + "/pairs.yaml"} })
}

// TestConformingCalls makes every call of the cases, over a plain connection and over
// that of the Go client.
func TestConformingCalls(t *testing.T) {
	r := conforming(t)
	calls, err := conformance.Calls(conformanceFolder)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range calls {
		t.Run(c.Name, func(t *testing.T) {
			reply, err := c.Invoke(t.Context(), r.general(t))
			if *updateCalls && err == nil && c.Failure == nil {
				writeCall(t, c, reply)
			}
			if err := c.Check(reply, err); err != nil {
				t.Error(err)
			}
		})
	}
}

func writeCall(t *testing.T, c *conformance.Call, reply []byte) {
	t.Helper()
	var members any
	if err := json.Unmarshal(reply, &members); err != nil {
		t.Fatal(err)
	}
	unpin(members)
	var err error
	if c.Reply, err = json.Marshal(members); err != nil {
		t.Fatal(err)
	}
	text, err := json.MarshalIndent(c, "", "  ")
	if err != nil {
		t.Fatal(err)
	}
	name := filepath.Join(conformanceFolder, "calls", c.Name+".json")
	if err := os.WriteFile(name, append(text, '\n'), 0o644); err != nil { //nolint:gosec // for everybody to read
		t.Fatal(err)
	}
}

// unpin leaves out what changes with versions and not with the contract.
func unpin(members any) {
	switch x := members.(type) {
	case map[string]any:
		for name, value := range x {
			switch name {
			case "selection_digest", "generation_digest", "request_digest", "digests", "table_version", "table_digest",
				"numerics_version", "version", "largest_reply_byte_count":
				delete(x, name)
			}
			unpin(value)
		}
	case []any:
		for _, value := range x {
			unpin(value)
		}
	}
}

// TestCallsCanFail: a case with another number, member, length or failure does not hold.
func TestCallsCanFail(t *testing.T) {
	r := conforming(t)
	for name, c := range map[string]conformance.Call{
		"number":      {Reply: json.RawMessage(`{"particle": {"mass_gev": 0.9382721}}`)},
		"text":        {Reply: json.RawMessage(`{"particle": {"name": "n"}}`)},
		"not absent":  {Reply: json.RawMessage(`{"particle": {"mass_gev": null}}`)},
		"not there":   {Reply: json.RawMessage(`{"particle": {"colour": "red"}}`)},
		"no failure":  {Failure: &conformance.Failure{Code: "NOT_FOUND", Reason: "PARTICLE_NOT_FOUND"}},
		"not a list":  {Reply: json.RawMessage(`{"particle": []}`)},
		"other value": {Reply: json.RawMessage(`{"particle": {"number": "2213"}}`)},
	} {
		c.Method, c.Request = "ParticleService.GetParticle", json.RawMessage(`{"name": "p"}`)
		reply, err := c.Invoke(t.Context(), r.general(t))
		if c.Check(reply, err) == nil {
			t.Errorf("%s: the case holds", name)
		}
	}
}

// TestConformingStreams plays the client's side of the scripts.
func TestConformingStreams(t *testing.T) {
	scripts, err := conformance.Scripts(conformanceFolder)
	if err != nil {
		t.Fatal(err)
	}
	for _, s := range scripts {
		if s.Against == "client" {
			continue
		}
		t.Run(s.Name, func(t *testing.T) {
			r := conforming(t)
			if err := s.Play(t.Context(), kinegatev1.NewSelectionServiceClient(r.dial(t, r.options.GateAddress))); err != nil {
				t.Error(err)
			}
			if s.Against == "both" {
				judgeScript(t, r, s)
			}
		})
	}
}

// judgeScript has the Go client judge the blocks of a script with this server.
func judgeScript(t *testing.T, r *running, s *conformance.Script) {
	t.Helper()
	blocks, err := s.Events()
	if err != nil {
		t.Fatal(err)
	}
	stream, err := r.client(t).Judge(t.Context(), s.Open(), kinegate.JudgeOptions{Queue: len(blocks)})
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	for _, b := range blocks {
		if err := stream.Send(b); err != nil {
			t.Fatal(err)
		}
	}
	_ = stream.CloseSend()
	var verdicts []*kinegatev1.VerdictBlock
	for err == nil {
		var v *kinegatev1.VerdictBlock
		if v, err = stream.Recv(); err == nil {
			verdicts = append(verdicts, v)
		}
	}
	if err := s.CheckVerdicts(verdicts, !errors.Is(err, io.EOF)); err != nil {
		t.Error(err)
	}
}
