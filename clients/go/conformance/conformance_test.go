package conformance_test

import (
	"errors"
	"io"
	"net"
	"path/filepath"
	"strings"
	"testing"

	"google.golang.org/grpc"
	"google.golang.org/protobuf/reflect/protoreflect"
	"google.golang.org/protobuf/reflect/protoregistry"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/conformance"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

const folder = "../../../testdata/rpc"

// against returns the scripts for clients or for servers.
func against(t *testing.T, whom string) []*conformance.Script {
	t.Helper()
	all, err := conformance.Scripts(folder)
	if err != nil {
		t.Fatal(err)
	}
	var some []*conformance.Script
	for _, s := range all {
		if s.Against == whom || s.Against == "both" {
			some = append(some, s)
		}
	}
	return some
}

// play starts a double of the server and returns its address.
func play(t *testing.T, s *conformance.Script) (double *conformance.Double, address string) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "s")
	listener, err := (&net.ListenConfig{}).Listen(t.Context(), "unix", path)
	if err != nil {
		t.Fatal(err)
	}
	double = conformance.NewDouble(s)
	server := grpc.NewServer()
	kinegatev1.RegisterSelectionServiceServer(server, double)
	go func() { _ = server.Serve(listener) }()
	t.Cleanup(server.Stop)
	return double, "unix:" + path
}

// TestClientKeepsTheRules plays every script against this client.
func TestClientKeepsTheRules(t *testing.T) {
	t.Parallel()
	for _, s := range against(t, "client") {
		t.Run(s.Name, func(t *testing.T) {
			t.Parallel()
			double, address := play(t, s)
			client, err := kinegate.Dial(address, kinegate.Options{})
			if err != nil {
				t.Fatal(err)
			}
			defer client.Close() //nolint:errcheck // it has nothing else to do
			verdicts, outlines, failed := run(t, client, s)
			if err := double.Result(); err != nil {
				t.Error(err)
			}
			if err := s.CheckVerdicts(verdicts, failed); err != nil {
				t.Fatal(err)
			}
			if err := s.CheckOutlines(outlines); err != nil {
				t.Error(err)
			}
		})
	}
}

// run pushes the blocks of a script and returns what came back.
func run(
	t *testing.T, client *kinegate.Client, s *conformance.Script,
) (verdicts []*kinegatev1.VerdictBlock, outlines []*kinegatev1.SelectionOutline, failed bool) {
	t.Helper()
	options := kinegate.JudgeOptions{Queue: len(s.Blocks)}
	if s.Late == "reject" {
		options.Late = kinegate.RejectLate
	}
	stream, err := client.Judge(t.Context(), s.Open(), options)
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	blocks, err := s.Events()
	if err != nil {
		t.Fatal(err)
	}
	for _, b := range blocks {
		if err := stream.Send(b); err != nil {
			t.Fatal(err)
		}
	}
	_ = stream.CloseSend()
	for {
		v, err := stream.Recv()
		if err != nil {
			return verdicts, outlines, !errors.Is(err, io.EOF)
		}
		verdicts, outlines = append(verdicts, v), append(outlines, stream.Outline(v))
	}
}

// TestEveryCallHasACase: each rpc but the judge stream, which has its scripts.
func TestEveryCallHasACase(t *testing.T) {
	t.Parallel()
	calls, err := conformance.Calls(folder)
	if err != nil {
		t.Fatal(err)
	}
	has := map[string]bool{"SelectionService.Judge": true}
	for _, c := range calls {
		has[c.Method] = true
	}
	protoregistry.GlobalFiles.RangeFilesByPackage("kinegate.v1", func(file protoreflect.FileDescriptor) bool {
		for i := range file.Services().Len() {
			service := file.Services().Get(i)
			for k := range service.Methods().Len() {
				if name := string(service.Name()) + "." + string(service.Methods().Get(k).Name()); !has[name] {
					t.Errorf("%s has no case", name)
				}
			}
		}
		return true
	})
}

// TestBreachesAreNamed plays the scripts against clients that break one rule each.
func TestBreachesAreNamed(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		script, rule string
		faulty       faulty
	}{
		{"order", "", faulty{}},
		{"resume", "", faulty{}},
		{"draining", "", faulty{}},
		{"credit-of-blocks", "", faulty{}},
		{"late-accept", "", faulty{}},
		{"late-reject", "", faulty{}},
		{"resume-before-any-verdict", "", faulty{}},
		{"resume-refused", "", faulty{}},
		{"resume-when-overloaded", "", faulty{}},
		{"order", "end", faulty{neverEnds: true}},
		{"order", "order", faulty{swaps: true}},
		{"order", "order", faulty{skips: true}},
		{"order-of-verdicts", "order", faulty{takesAnyVerdict: true}},
		{"credit-of-blocks", "credit", faulty{ignoresCredit: true}},
		{"credit-of-bytes", "credit", faulty{ignoresCredit: true}},
		{"resume", "resume", faulty{resumesFromStart: true}},
		{"resume", "resume", faulty{resumesAfterSent: true}},
		{"resume", "resume", faulty{forgetsDigest: true}},
		{"resume-with-another-selection", "digest", faulty{takesAnyDigest: true}},
		{"draining", "draining", faulty{ignoresDraining: true}},
		{"heartbeat", "heartbeat", faulty{neverBeats: true}},
		{"late-accept", "late policy", faulty{leavesLate: true}},
		{"late-reject", "late policy", faulty{acceptsLate: true}},
		{"resume-before-any-verdict", "resume", faulty{resumesAfterSent: true}},
		{"resume-refused", "resume", faulty{comesAgain: true}},
		{"resume-when-overloaded", "resume", faulty{givesUp: true}},
		// It waits for ever.
		{"silence", "silence", faulty{}},
		{"stuck", "stuck", faulty{}},
	} {
		t.Run(c.script+" "+c.faulty.name(), func(t *testing.T) {
			t.Parallel()
			s := named(t, c.script)
			double, address := play(t, s)
			verdicts, failed := c.faulty.run(t, address, s)
			err := double.Result()
			if err == nil {
				err = s.CheckVerdicts(verdicts, failed)
			}
			var breach *conformance.BreachError
			switch {
			case c.rule == "" && err != nil:
				t.Errorf("a client that keeps the rules: %v", err)
			case c.rule != "" && (!errors.As(err, &breach) || breach.Rule != c.rule || !strings.HasPrefix(err.Error(), c.rule+": ")):
				t.Errorf("%v, want rule %s named", err, c.rule)
			}
		})
	}
}

func named(t *testing.T, name string) *conformance.Script {
	t.Helper()
	for _, s := range against(t, "client") {
		if s.Name == name {
			return s
		}
	}
	t.Fatalf("there is no script %s", name)
	return nil
}
