package kinegate_test

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"time"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/server"
)

// startServer starts a server in this process on unix sockets, as "kinegate serve" does in
// one of its own, and returns their addresses.
func startServer() (general, gate string, stop func()) {
	folder, err := os.MkdirTemp("", "kg")
	if err != nil {
		panic(err)
	}
	options := server.Defaults()
	options.GeneralAddress = "unix:" + filepath.Join(folder, "general.sock")
	options.GateAddress = "unix:" + filepath.Join(folder, "gate.sock")
	options.HealthAddress, options.MetricsAddress, options.DebugAddress, options.DrainNotice = "", "", "", 0
	s, err := server.New(options, server.Deps{Version: "example"})
	if err != nil {
		panic(err)
	}
	ctx := context.Background()
	if err := s.Listen(ctx); err != nil {
		panic(err)
	}
	served := make(chan error, 1)
	go func() { served <- s.Serve(ctx) }()
	return options.GeneralAddress, options.GateAddress, func() {
		_ = s.Shutdown(ctx)
		<-served //nolint:errcheck // only its end matters
		_ = os.RemoveAll(folder)
	}
}

// pions accepts pairs of photons with about the mass of a neutral pion.
func pions() *kinegatev1.SelectionSource {
	return &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: &kinegatev1.Selection{
		Name: "pions",
		Hypotheses: []*kinegatev1.Hypothesis{{
			Name: "pi0", Reaction: "pi0 -> gamma gamma",
			Condition: &kinegatev1.Condition{Window: &kinegatev1.Window{
				Name: "mass", Observable: &kinegatev1.Window_InvariantMass{InvariantMass: &kinegatev1.MassWindow{
					Products: []string{"gamma[0]", "gamma[1]"}, MinGev: new(0.11), MaxGev: new(0.16),
				}},
			}},
			Record: []*kinegatev1.Window{{
				Name: "mass", Observable: &kinegatev1.Window_InvariantMass{InvariantMass: &kinegatev1.MassWindow{
					Products: []string{"gamma[0]", "gamma[1]"},
				}},
			}},
		}},
	}}}
}

// twoPhotons is an event of two photons at a right angle.
func twoPhotons(energyGeV float64) []kinegate.Object {
	const halfPi = 1.5707963267948966
	photon := kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON
	return []kinegate.Object{
		{Class: photon, Values: [4]float64{energyGeV, halfPi, 0}},
		{Class: photon, Values: [4]float64{energyGeV, halfPi, halfPi}},
	}
}

// A question over a unix socket.
func ExampleDial() {
	address, _, stop := startServer()
	defer stop()
	client, err := kinegate.Dial(address, kinegate.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer client.Close() //nolint:errcheck // every answer is there
	answer, err := client.Reactions.DescribeReaction(context.Background(), &kinegatev1.DescribeReactionRequest{
		Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: "gamma p -> K+ Lambda"},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("open from a photon energy of %.4f GeV on\n", answer.GetThreshold().GetTotalEnergyGev())
	// Output: open from a photon energy of 0.9111 GeV on
}

// Where nobody listens, Reach says so at once, and Dial alone does not.
func ExampleClient_Reach() {
	client, err := kinegate.Dial("unix:/no/such.sock", kinegate.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer client.Close() //nolint:errcheck // nothing was sent
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	if unreachable, ok := errors.AsType[*kinegate.UnreachableError](client.Reach(ctx)); ok {
		fmt.Println(unreachable.Address, "does not answer")
	}
	// Output: unix:/no/such.sock does not answer
}

// Two events through the gate: sending and receiving run side by side, since the queue
// between them is bounded.
func ExampleClient_Judge() {
	_, gate, stop := startServer()
	defer stop()
	client, err := kinegate.Dial(gate, kinegate.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer client.Close() //nolint:errcheck // the stream is over
	stream, err := client.Judge(context.Background(), &kinegatev1.JudgeOpen{
		Selection: pions(), Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ACCEPTED,
		LatencyBudgetS: new(5.0),
	}, kinegate.JudgeOptions{
		Late:   kinegate.AcceptLate, // what is not judged in time passes; this is the default
		Broken: func(err error) { fmt.Println("resumed after", err) },
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer stream.Close()
	go func() {
		events := kinegate.NewBuilder(kinegate.MomentumAngles)
		events.Add(1, twoPhotons(0.095), nil)
		events.Add(2, twoPhotons(0.5), nil)
		if stream.Send(events.Take()) == nil {
			_ = stream.CloseSend() // Recv tells if the stream ended otherwise
		}
	}()
	for {
		block, err := stream.Recv()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			fmt.Println(err)
			return
		}
		verdicts, err := kinegate.ReadVerdicts(block)
		if err != nil {
			fmt.Println(err)
			return
		}
		for i := range verdicts.Statuses {
			fmt.Print("event ", i+1, ": accepted ", verdicts.Gate(i))
			for _, entry := range verdicts.Entries(i) {
				fmt.Printf(", mass %.4f GeV", entry.Observables[0])
			}
			fmt.Println()
		}
	}
	// Output:
	// event 1: accepted true, mass 0.1344 GeV
	// event 2: accepted false
}

// A block and what it holds.
func ExampleReadEvents() {
	events := kinegate.NewBuilder(kinegate.MomentumAngles)
	events.RunNumber = 7
	events.Add(1, twoPhotons(0.095), []kinegate.BeamCandidate{{Energy: 1.2, Sigma: 0.002, Time: 0.5}})
	_, list, err := kinegate.ReadEvents(events.Take())
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, e := range list {
		fmt.Println("event", e.ID, "has", len(e.Objects), "objects and a beam candidate of", e.Beam[0].Energy, "GeV")
	}
	// Output: event 1 has 2 objects and a beam candidate of 1.2 GeV
}

// Faults carry the field, the value and what is allowed.
func ExampleClient_refusal() {
	address, _, stop := startServer()
	defer stop()
	client, err := kinegate.Dial(address, kinegate.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer client.Close() //nolint:errcheck // every answer is there
	_, err = client.Reactions.DescribeReaction(context.Background(), &kinegatev1.DescribeReactionRequest{
		Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: "gamma p -> K+ Lamda"},
	})
	fmt.Println(strings.Contains(err.Error(), "Lambda"))
	// Output: true
}
