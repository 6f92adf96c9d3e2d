package kinegate_test

import (
	"context"
	"errors"
	"fmt"
	"io"
	"time"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

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

// Two events through the gate: sending and receiving run side by side, since the queue
// between them is bounded.
func ExampleClient_Judge() {
	server := startServer()
	defer server.stop()
	client, err := kinegate.Dial(server.gate, kinegate.Options{})
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

// A budget that no block can keep, and a gate that drops what is late.
func ExampleRejectLate() {
	server := startServer()
	defer server.stop()
	client, err := kinegate.Dial(server.gate, kinegate.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer client.Close() //nolint:errcheck // the stream is over
	stream, err := client.Judge(context.Background(), &kinegatev1.JudgeOpen{
		Selection: pions(), LatencyBudgetS: new(1e-9),
	}, kinegate.JudgeOptions{Late: kinegate.RejectLate})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer stream.Close()
	events := kinegate.NewBuilder(kinegate.MomentumAngles)
	events.Add(1, twoPhotons(0.095), nil)
	if err := stream.Send(events.Take()); err != nil {
		fmt.Println(err)
		return
	}
	block, err := stream.Recv()
	if err != nil {
		fmt.Println(err)
		return
	}
	verdicts, err := kinegate.ReadVerdicts(block)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(verdicts.Statuses[0], verdicts.Gate(0), stream.LateCount())
	// Output: EVENT_STATUS_EXPIRED false 1
}

// A stream whose server is replaced goes on by itself: the selection is that of the first
// opening, and each block has one verdict.
func ExampleJudgeStream_reconnect() {
	server := startServer()
	defer server.stop()
	client, err := kinegate.Dial(server.gate, kinegate.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer client.Close() //nolint:errcheck // the stream is over
	breaks := make(chan error, 1)
	stream, err := client.Judge(context.Background(), &kinegatev1.JudgeOpen{Selection: pions(), FirstSequence: 100}, kinegate.JudgeOptions{
		GiveUp: 20 * time.Second, // the time in which a server must be there again
		Broken: func(err error) { breaks <- err },
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer stream.Close()
	for i := range int64(2) {
		if i == 1 {
			server.restart()
			fmt.Println("the stream broke:", <-breaks != nil)
		}
		events := kinegate.NewBuilder(kinegate.MomentumAngles)
		events.Add(i, twoPhotons(0.095), nil)
		if err := stream.Send(events.Take()); err != nil {
			fmt.Println(err)
			return
		}
		block, err := stream.Recv()
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Println("block", block.GetSequence(), "has its verdict")
	}
	// Output:
	// block 100 has its verdict
	// the stream broke: true
	// block 101 has its verdict
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
