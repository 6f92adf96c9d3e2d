package main

import (
	"context"
	"fmt"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"
	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Calls of one run to each of the two servers, after those that warm them up.
const (
	callsPerRun = 3000
	callsBefore = 500
)

// describing compares DescribeReaction of the program with a bare echo. Both servers are
// processes of their own on loopback, and this one is their client; calls alternate, so
// that both see the same machine.
type describing struct{ asked int }

// ratio returns the ratio of the median latencies for a reaction. The beam energy changes
// from call to call. Without a text, each call has one that no call had before.
func (d *describing) ratio(text string) measure {
	return func(ctx context.Context) (float64, error) {
		folder, err := os.MkdirTemp("", "bench")
		if err != nil {
			return 0, err
		}
		defer os.RemoveAll(folder) //nolint:errcheck // left to the system otherwise
		ours, stop, err := startProgram(ctx, folder)
		if err != nil {
			return 0, err
		}
		defer stop()
		reply, err := ours.DescribeReaction(ctx, d.question(text), grpc.WaitForReady(true))
		if err != nil {
			return 0, err
		}
		bare, stopEcho, err := startEcho(ctx, reply)
		if err != nil {
			return 0, err
		}
		defer stopEcho()
		if _, err := d.latencies(ctx, text, callsBefore, ours, bare); err != nil {
			return 0, err
		}
		took, err := d.latencies(ctx, text, callsPerRun, ours, bare)
		if err != nil {
			return 0, err
		}
		return median(took[0]) / median(took[1]), nil
	}
}

// question is the next request.
func (d *describing) question(text string) *kinegatev1.DescribeReactionRequest {
	d.asked++
	if text == "" {
		// Spaces are nothing to the reaction and make another text of it.
		text = "gamma p ->" + strings.Repeat(" ", 1+d.asked%64) + "K+ Lambda," + strings.Repeat(" ", 1+d.asked/64%64) + "Lambda -> p pi-"
	}
	energy := 1 + float64(d.asked%1000)/1000
	return &kinegatev1.DescribeReactionRequest{
		Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text},
		InitialState: &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_BeamOnTarget{BeamOnTarget: &kinegatev1.BeamOnTarget{
			Beam: &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: energy}},
		}}},
	}
}

// latencies times calls to both servers by turns, in nanoseconds.
func (d *describing) latencies(
	ctx context.Context, text string, calls int, servers ...kinegatev1.ReactionServiceClient,
) ([][]float64, error) {
	took := make([][]float64, len(servers))
	for range calls {
		request := d.question(text)
		for i, server := range servers {
			begun := time.Now()
			if _, err := server.DescribeReaction(ctx, request, grpc.WaitForReady(true)); err != nil {
				return nil, err
			}
			took[i] = append(took[i], float64(time.Since(begun)))
		}
	}
	return took, nil
}

// startProgram builds the program, starts it and returns a client.
func startProgram(ctx context.Context, folder string) (client kinegatev1.ReactionServiceClient, stop func(), err error) {
	program := filepath.Join(folder, "kinegate")
	//nolint:gosec // the folder is our own
	if output, err := exec.CommandContext(ctx, "go", "build", "-o", program, "./service/cmd/kinegate").CombinedOutput(); err != nil {
		return nil, nil, fmt.Errorf("building the program: %w: %s", err, lastLine(string(output)))
	}
	address, err := freeAddress(ctx)
	if err != nil {
		return nil, nil, err
	}
	// Its log goes to the null device, which costs the server a write for each line.
	//nolint:gosec // the program is our own
	command := exec.CommandContext(ctx, program, "serve", "--general-address", address, "--gate-address", "127.0.0.1:0",
		"--health-address", "", "--metrics-address", "", "--drain-notice", "0s")
	if err := command.Start(); err != nil {
		return nil, nil, err
	}
	return connect(address, command)
}

// startEcho starts the echo as a process and returns a client.
func startEcho(
	ctx context.Context, reply *kinegatev1.DescribeReactionResponse,
) (client kinegatev1.ReactionServiceClient, stop func(), err error) {
	wire, err := proto.Marshal(reply)
	if err != nil {
		return nil, nil, err
	}
	self, err := os.Executable()
	if err != nil {
		return nil, nil, err
	}
	command := exec.CommandContext(ctx, self, echoCommand) //nolint:gosec // this very program
	in, err := command.StdinPipe()
	if err != nil {
		return nil, nil, err
	}
	out, err := command.StdoutPipe()
	if err != nil {
		return nil, nil, err
	}
	if err := command.Start(); err != nil {
		return nil, nil, err
	}
	if _, err := in.Write(wire); err != nil {
		return nil, nil, err
	}
	if err := in.Close(); err != nil {
		return nil, nil, err
	}
	var address string
	if _, err := fmt.Fscanln(out, &address); err != nil {
		return nil, nil, fmt.Errorf("the echo did not start: %w", err)
	}
	return connect(address, command)
}

// connect returns a client of a process and what ends both.
func connect(address string, command *exec.Cmd) (client kinegatev1.ReactionServiceClient, stop func(), err error) {
	conn, err := grpc.NewClient(address, grpc.WithTransportCredentials(insecure.NewCredentials()))
	kill := func() {
		_ = command.Process.Kill()
		_ = command.Wait() // it was killed
	}
	if err != nil {
		kill()
		return nil, nil, err
	}
	return kinegatev1.NewReactionServiceClient(conn), func() {
		_ = conn.Close()
		kill()
	}, nil
}

// freeAddress is a loopback address that was free a moment ago.
func freeAddress(ctx context.Context) (string, error) {
	var config net.ListenConfig
	l, err := config.Listen(ctx, "tcp", "127.0.0.1:0")
	if err != nil {
		return "", err
	}
	return l.Addr().String(), l.Close()
}
