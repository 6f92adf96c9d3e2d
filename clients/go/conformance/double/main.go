// Command double plays a script of testdata/rpc/streams as a server, for clients in
// other languages:
//
//	double SCRIPT.json ADDRESS
//
// It says "listening" when it is there, plays until SIGTERM, and then says "held", or
// which rule the client broke and how, and exits with 1.
package main

import (
	"context"
	"fmt"
	"net"
	"os"
	"os/signal"
	"path/filepath"
	"strings"
	"syscall"

	"google.golang.org/grpc"

	"example.org/kinegate/clients/go/conformance"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func main() {
	const arguments, usage = 3, 2
	if len(os.Args) != arguments {
		fmt.Fprintln(os.Stderr, "usage: double SCRIPT.json ADDRESS")
		os.Exit(usage)
	}
	if err := run(os.Args[1], os.Args[2]); err != nil {
		_, _ = fmt.Fprintln(os.Stdout, err)
		os.Exit(1)
	}
	_, _ = fmt.Fprintln(os.Stdout, "held")
}

func run(name, address string) error {
	ctx, stop := signal.NotifyContext(context.Background(), syscall.SIGTERM, syscall.SIGINT)
	defer stop()
	folder := filepath.Dir(filepath.Dir(name))
	scripts, err := conformance.Scripts(folder)
	if err != nil {
		return err
	}
	for _, s := range scripts {
		if s.Name+".json" == filepath.Base(name) {
			return play(ctx, s, address)
		}
	}
	return fmt.Errorf("there is no script %s", name)
}

func play(ctx context.Context, s *conformance.Script, address string) error {
	network := "tcp"
	if path, unix := strings.CutPrefix(address, "unix:"); unix {
		network, address = "unix", path
	}
	listener, err := (&net.ListenConfig{}).Listen(ctx, network, address)
	if err != nil {
		return err
	}
	double := conformance.NewDouble(s)
	server := grpc.NewServer()
	kinegatev1.RegisterSelectionServiceServer(server, double)
	go func() { _ = server.Serve(listener) }() // Stop ends it
	_, _ = fmt.Fprintln(os.Stdout, "listening")
	<-ctx.Done()
	server.Stop()
	return double.Result()
}
