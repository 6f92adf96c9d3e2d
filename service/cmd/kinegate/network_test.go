package main

import (
	"fmt"
	"os"
	"os/exec"
	"strconv"
	"strings"
	"sync/atomic"
	"testing"
	"time"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// remote is a server in a network namespace of its own, whose packets can be lost.
type remote struct {
	t         testing.TB
	namespace string
	gate      string
}

// serveRemote makes a namespace with one line to this one and starts a server there. It
// skips where the user may not, which is everyone but root.
func serveRemote(t testing.TB) *remote {
	t.Helper()
	if os.Geteuid() != 0 {
		t.Skip("network namespaces need root")
	}
	n := os.Getpid() % (1 << 14) // neighbours on one machine get networks of their own
	r := &remote{t: t, namespace: "gate" + strconv.Itoa(n)}
	near, far := "gn"+strconv.Itoa(n), "gf"+strconv.Itoa(n)
	network := fmt.Sprintf("10.%d.%d.", 64+n>>8, n&255)
	if out, err := exec.CommandContext(t.Context(), "ip", "netns", "add", r.namespace).CombinedOutput(); err != nil { //nolint:gosec // our own name
		t.Skipf("no network namespaces here: %v: %s", err, out)
	}
	// The test's context has ended by then, and the line goes with the namespace.
	t.Cleanup(func() { _ = exec.Command("ip", "netns", "delete", r.namespace).Run() }) //nolint:gosec // see above
	r.must("ip", "link", "add", near, "type", "veth", "peer", "name", far, "netns", r.namespace)
	r.must("ip", "address", "add", network+"1/24", "dev", near)
	r.must("ip", "link", "set", near, "up")
	r.must("ip", "-n", r.namespace, "address", "add", network+"2/24", "dev", far)
	r.must("ip", "-n", r.namespace, "link", "set", far, "up")
	p := process(t, "serve", "--gate-address", network+"2:0", "--general-address", network+"2:0",
		"--health-address", network+"2:0", "--metrics-address", network+"2:0", "--unsafe-plaintext-on-the-network")
	inside := exec.CommandContext(t.Context(), "ip", append([]string{"netns", "exec", r.namespace, p.Path}, p.Args[1:]...)...) //nolint:gosec // this very program
	inside.Env = p.Env
	log, err := inside.StderrPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := inside.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		_ = inside.Process.Kill()
		_ = inside.Wait()
	})
	r.gate = addresses(t, log)["gate"]
	return r
}

func (r *remote) must(name string, arguments ...string) {
	r.t.Helper()
	if out, err := exec.CommandContext(r.t.Context(), name, arguments...).CombinedOutput(); err != nil { //nolint:gosec // those of the tests
		r.t.Fatalf("%s %s: %v: %s", name, strings.Join(arguments, " "), err, out)
	}
}

// filter changes the packet filter of the server's side by one rule.
func (r *remote) filter(rule string) {
	r.t.Helper()
	r.must("ip", append([]string{"netns", "exec", r.namespace, "iptables"}, strings.Fields(rule)...)...)
}

// TestHistoryAcrossNetworkFaults loses packets between client and server: a line that
// falls silent in one or both directions is found within 3.5 s, the stream is back within
// 5 s of its healing, and whatever happens each event is answered exactly once, in order,
// with its bits. With LONG_TESTS=1, as root.
func TestHistoryAcrossNetworkFaults(t *testing.T) {
	if !long() {
		t.Skip("long: set LONG_TESTS, or run .ci/long")
	}
	const (
		perBlock, sample = 100, 6000
		outage           = 5 * time.Second
	)
	r := serveRemote(t)
	client, err := kinegate.Dial(r.gate, kinegate.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer client.Close() //nolint:errcheck // the streams are over
	c, err := history.LearnSample(t.Context(), client, history.AllEntries(), sample)
	if err != nil {
		t.Fatal(err)
	}
	for _, fault := range []struct {
		name  string
		rules []string
		found bool // the stream must notice
	}{
		{"silent both ways", []string{"-A INPUT -j DROP", "-A OUTPUT -j DROP"}, true},
		{"silent towards the server", []string{"-A INPUT -j DROP"}, true},
		{"silent towards the client", []string{"-A OUTPUT -j DROP"}, true},
		{"reset", []string{"-A INPUT -p tcp -j REJECT --reject-with tcp-reset"}, true},
		{"1 % of packets lost", []string{"-A INPUT -m statistic --mode random --probability 0.01 -j DROP"}, false},
		{"5 % of packets lost", []string{"-A OUTPUT -m statistic --mode random --probability 0.05 -j DROP"}, false},
	} {
		t.Run(fault.name, func(t *testing.T) {
			var begun, found, healed, back atomic.Int64 // in ns; 0 is not yet
			healing := make(chan struct{})
			err := c.Check(t.Context(), history.Run{
				Client: client, Open: history.AllEntries(), Events: sample, PerBlock: perBlock,
				Options: kinegate.JudgeOptions{Broken: func(error) { found.CompareAndSwap(0, time.Now().UnixNano()) }},
				Before: func(from int) {
					time.Sleep(20 * time.Millisecond)
					if from != sample/2 {
						return
					}
					begun.Store(time.Now().UnixNano())
					for _, rule := range fault.rules {
						r.filter(rule)
					}
					time.AfterFunc(outage, func() {
						defer close(healing)
						r.filter("-F")
						healed.Store(time.Now().UnixNano())
					})
				},
				Answered: func(*kinegatev1.VerdictBlock) {
					if healed.Load() > 0 {
						back.CompareAndSwap(0, time.Now().UnixNano())
					}
				},
			})
			if err != nil {
				t.Error(err)
			}
			<-healing
			c.Again()
			if !fault.found {
				return
			}
			noticed, recovered := time.Duration(found.Load()-begun.Load()), time.Duration(back.Load()-healed.Load())
			t.Logf("FIGURE S6 %s: noticed after %v, back %v after healing", fault.name, noticed, recovered)
			if noticed <= 0 || noticed > 3500*time.Millisecond {
				t.Errorf("noticed after %v", noticed)
			}
			if recovered <= 0 || recovered > 5*time.Second {
				t.Errorf("back %v after healing", recovered)
			}
		})
	}
}
