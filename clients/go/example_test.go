package kinegate_test

import (
	"context"
	"errors"
	"fmt"
	"strings"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// A question over a unix socket.
func ExampleDial() {
	server := startServer()
	defer server.stop()
	client, err := kinegate.Dial(server.general, kinegate.Options{})
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

// The same by the bare stub, without any help: unless the caller gives one, it has no
// deadline.
func ExampleDial_bareStub() {
	server := startServer()
	defer server.stop()
	conn, err := grpc.NewClient(server.general, grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		fmt.Println(err)
		return
	}
	defer conn.Close() //nolint:errcheck // every answer is there
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	answer, err := kinegatev1.NewReactionServiceClient(conn).DescribeReaction(ctx, &kinegatev1.DescribeReactionRequest{
		Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: "gamma p -> K+ Lambda"},
	}, grpc.WaitForReady(true))
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("open from a photon energy of %.4f GeV on\n", answer.GetThreshold().GetTotalEnergyGev())
	// Output: open from a photon energy of 0.9111 GeV on
}

// A connection of one's own, with the deadlines and repeats of Dial by its service config.
// What Dial sets beside it, message limits and pings, is then the caller's matter.
func ExampleNewClient() {
	server := startServer()
	defer server.stop()
	conn, err := grpc.NewClient(server.general,
		grpc.WithTransportCredentials(insecure.NewCredentials()),
		grpc.WithDefaultServiceConfig(kinegate.ServiceConfig),
		grpc.WithUserAgent("shift-display/2"),
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	client := kinegate.NewClient(conn)
	defer client.Close() //nolint:errcheck // every answer is there
	answer, err := client.Particles.GetParticle(context.Background(), &kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_Name{Name: "K+"}})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(answer.GetParticle().GetName(), "has a mass of", answer.GetParticle().GetMassGev(), "GeV")
	// Output: K+ has a mass of 0.493677 GeV
}

// A server with a certificate, which asks callers for one of theirs. The name is that in the
// server's certificate, where it is not the one that was dialled.
func ExampleDial_tls() {
	server := startTLSServer()
	defer server.stop()
	client, err := kinegate.Dial(server.general, kinegate.Options{
		TLS:        true,
		CAFile:     server.certificate, // whom to trust; without it, whom the system trusts
		CertFile:   server.certificate, // who we are, for servers that ask
		KeyFile:    server.key,
		ServerName: "localhost",
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer client.Close() //nolint:errcheck // every answer is there
	answer, err := client.Info.GetInfo(context.Background(), &kinegatev1.GetInfoRequest{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println("version", answer.GetVersion())
	// Output: version example
}

// Faults carry the field, the value and what is allowed.
func ExampleClient_refusal() {
	server := startServer()
	defer server.stop()
	client, err := kinegate.Dial(server.general, kinegate.Options{})
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
