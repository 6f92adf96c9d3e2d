package main

import (
	"bytes"
	"context"
	"fmt"
	"math/rand/v2"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/resolver"
	"google.golang.org/grpc/resolver/manual"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/proto"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// stop ends a replica and looks at how.
func (r *replica) stop(t *testing.T) {
	t.Helper()
	_ = r.process.Process.Signal(syscall.SIGTERM)
	if code := exitCode(t, r.process.Wait()); code != 0 {
		t.Errorf("exit code %d", code)
	}
}

// TestStreamsOutliveConnections keeps 100 judge streams on three servers whose connections
// live for 5 s, for two minutes: no stream sees an error or anything of UNAVAILABLE, and
// the servers share the events evenly. AGE_SPAN is another time than two minutes.
func TestStreamsOutliveConnections(t *testing.T) {
	operations(t)
	const servers, streams = 3, 100
	var replicas [servers]replica
	var state resolver.State
	for i := range replicas {
		replicas[i].ports = freePorts(t)
		replicas[i].start(t, "--connection-age", "5s", "--connection-age-grace", "8s", "--longest-deadline", "8s", "--default-deadline", "8s",
			"--gate-streams", "128", "--credit-pool", "512MiB")
		defer replicas[i].stop(t)
		state.Addresses = append(state.Addresses, resolver.Address{Addr: "127.0.0.1:" + strconv.Itoa(replicas[i].ports[0])})
	}
	names := manual.NewBuilderWithScheme("aging")
	names.InitialState(state)
	client, err := kinegate.Dial("aging:///gates", kinegate.Options{DialOptions: []grpc.DialOption{grpc.WithResolvers(names)}})
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = client.Close() }()
	const perBlock, pace = 20, 100 * time.Millisecond
	span := spanOf(t, "AGE_SPAN", 2*time.Minute)
	known, err := history.LearnSample(t.Context(), client, history.AllEntries(), perBlock*int(span/pace))
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithTimeout(t.Context(), span)
	defer cancel()
	var handed, unavailable, blocks, failed atomic.Int64
	var all sync.WaitGroup
	for range streams {
		all.Go(func() {
			stream, err := client.Judge(t.Context(), history.AllEntries(), kinegate.JudgeOptions{Broken: func(err error) {
				handed.Add(1)
				if status.Code(err) == codes.Unavailable {
					unavailable.Add(1)
					t.Logf("broken: %v", err)
				}
			}})
			if err != nil {
				failed.Add(1)
				t.Error(err)
				return
			}
			defer stream.Close()
			c := known.Another(history.AllEntries())
			for sequence := int64(0); ctx.Err() == nil; sequence++ {
				block := history.Photons(int(sequence)*perBlock, perBlock)
				block.Sequence = sequence
				c.Sent(block)
				var v *kinegatev1.VerdictBlock
				err := stream.Send(block)
				if err == nil {
					v, err = stream.Recv()
				}
				if err != nil {
					failed.Add(1)
					t.Error(err)
					return
				}
				c.Answered(v)
				blocks.Add(1)
				time.Sleep(pace)
			}
			if faults := c.Faults(true); len(faults) > 0 {
				t.Error(faults)
			}
		})
	}
	all.Wait()
	var shares []float64
	total := 0.0
	for _, r := range replicas {
		n := sumOf(t, "127.0.0.1:"+strconv.Itoa(r.ports[3]), "kinegate_judge_events_total")
		shares = append(shares, n)
		total += n
	}
	var text []string
	for _, n := range shares {
		share := n / total * servers
		text = append(text, fmt.Sprintf("%.2f", share))
		if share < 0.8 || share > 1.2 {
			t.Errorf("a server has %.2f of its share", share)
		}
	}
	t.Logf("FIGURE L5 %d streams, %d blocks, handed over %d times, %d failed, %d UNAVAILABLE; shares %s",
		streams, blocks.Load(), handed.Load(), failed.Load(), unavailable.Load(), strings.Join(text, " "))
	if handed.Load() < streams || unavailable.Load() > 0 {
		t.Errorf("%d hand-overs, %d UNAVAILABLE", handed.Load(), unavailable.Load())
	}
}

// TestReplicasAgree sends 10,000 requests to two processes and repeats every tenth: all
// replies to a request are the same bytes.
func TestReplicasAgree(t *testing.T) {
	operations(t)
	const requests = 10_000
	var replicas [2]replica
	var clients [2]*kinegate.Client
	for i := range replicas {
		replicas[i].ports = freePorts(t)
		replicas[i].start(t)
		defer replicas[i].stop(t)
		client, err := kinegate.Dial("127.0.0.1:"+strconv.Itoa(replicas[i].ports[1]), kinegate.Options{})
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = client.Close() }()
		clients[i] = client
	}
	var differ, refused, replies atomic.Int64
	var all sync.WaitGroup
	for worker := range 4 {
		all.Go(func() {
			for i := worker; i < requests; i += 4 {
				ask := question(i)
				first := ask(t.Context(), clients[0])
				others := [][]byte{ask(t.Context(), clients[1])}
				if i%10 == 0 {
					others = append(others, ask(t.Context(), clients[i/10%2]))
				}
				if strings.HasPrefix(string(first), refusedPrefix) {
					refused.Add(1)
				}
				for _, other := range others {
					replies.Add(1)
					if !bytes.Equal(first, other) {
						differ.Add(1)
						t.Errorf("request %d: %d bytes, then %d", i, len(first), len(other))
					}
				}
			}
		})
	}
	all.Wait()
	t.Logf("FIGURE A6 %d requests to two processes, a tenth of them again: %d pairs compared, %d differ; %d were refused by both",
		requests, replies.Load(), differ.Load(), refused.Load())
	if refused.Load() > requests/2 {
		t.Errorf("%d of %d refused", refused.Load(), requests)
	}
}

// refusedPrefix marks what stands for a refusal among the replies.
const refusedPrefix = "refused: "

// question is the request of a number, made from it alone.
func question(i int) func(ctx context.Context, c *kinegate.Client) []byte {
	r := rand.New(rand.NewPCG(11, uint64(i))) //nolint:gosec // a sample needs a seed, no secret
	bytesOf := func(m proto.Message, err error) []byte {
		if err != nil {
			return []byte(refusedPrefix + status.Code(err).String())
		}
		wire, err := proto.MarshalOptions{Deterministic: true}.Marshal(m)
		if err != nil {
			return []byte(err.Error())
		}
		return wire
	}
	reactions := []string{"gamma p -> K+ Lambda, Lambda -> p pi-", "gamma p -> p omega, omega -> pi+ pi- pi0", "gamma p -> p eta", "gamma gamma -> e+ e-"}
	reaction := reactions[r.IntN(len(reactions))]
	sqrtS := &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: 1.2 + 3*r.Float64()}}
	seed, from := r.Int64(), r.IntN(100_000)
	switch i % 5 {
	case 0:
		return func(ctx context.Context, c *kinegate.Client) []byte {
			return bytesOf(c.Reactions.DescribeReaction(ctx, &kinegatev1.DescribeReactionRequest{
				Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: reaction}, InitialState: sqrtS,
			}))
		}
	case 1:
		angles := []float64{0.1 + r.Float64(), 1 + r.Float64()}
		return func(ctx context.Context, c *kinegate.Client) []byte {
			return bytesOf(c.Reactions.SolveTwoBody(ctx, &kinegatev1.SolveTwoBodyRequest{
				Form: &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: "gamma p -> K+ Lambda"}, Product: "Lambda",
				InitialState: sqrtS, LaboratoryAnglesRad: angles,
			}))
		}
	case 2:
		rigidity := 10 * r.Float64()
		return func(ctx context.Context, c *kinegate.Client) []byte {
			return bytesOf(c.Reactions.ConvertMotion(ctx, &kinegatev1.ConvertMotionRequest{
				Body:  &kinegatev1.ConvertMotionRequest_Particle{Particle: "pi+"},
				Value: &kinegatev1.ConvertMotionRequest_RigidityGv{RigidityGv: rigidity}, DistancesM: []float64{3}, RefractiveIndices: []float64{1.33},
			}))
		}
	case 3:
		return func(ctx context.Context, c *kinegate.Client) []byte {
			return bytesOf(c.Selections.JudgeBlock(ctx, &kinegatev1.JudgeBlockRequest{
				Selection: history.AllEntries().GetSelection(), Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL, Block: history.Photons(from, 50),
			}))
		}
	}
	return func(ctx context.Context, c *kinegate.Client) []byte {
		request := manyEvents()
		request.EventCount, request.FirstEvent, request.Generation.Seed = 20, int64(from), seed
		stream, err := c.Generation.GenerateEvents(ctx, request)
		var all []byte
		for err == nil {
			var m *kinegatev1.GenerateEventsResponse
			if m, err = stream.Recv(); err == nil && m.GetProgress() == nil {
				all = append(all, bytesOf(m, nil)...)
			}
		}
		if strings.Contains(err.Error(), "EOF") {
			return all
		}
		return bytesOf(nil, err)
	}
}
