package main

import (
	"context"
	"fmt"
	"net"
	"os"
	"time"

	"github.com/spf13/cobra"
	"golang.org/x/term"
	"google.golang.org/protobuf/proto"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/service/cmd/kinegate/internal/jsonform"
	"example.org/kinegate/service/server"
)

// badInput is a fault of the arguments or of a file that they name.
func badInput(format string, args ...any) error { return usageError{fmt.Errorf(format, args...)} }

// environment is what the commands that ask a server share.
type environment struct {
	program

	// terminal says that a person watches the standard error.
	terminal bool
	json     bool
	address  string
	options  kinegate.Options
	timeout  time.Duration
	// wait lets a call wait for a server that is not there yet.
	wait bool
}

func newEnvironment(p program) *environment {
	e := &environment{program: p}
	if f, ok := p.err.(*os.File); ok {
		e.terminal = term.IsTerminal(int(f.Fd()))
	}
	return e
}

// flags adds the flags that say which server to ask.
func (e *environment) flags(c *cobra.Command) {
	f := c.Flags()
	f.StringVar(&e.address, "address", "", `server to ask, as "host:port" or "unix:/path"; without it the command starts one of its own`)
	f.BoolVar(&e.options.TLS, "tls", false, "use TLS towards --address")
	f.StringVar(&e.options.CAFile, "ca", "", "PEM file with the authorities to trust; those of the system if empty")
	f.StringVar(&e.options.CertFile, "certificate", "", "PEM file with the own certificate, for servers that ask for one")
	f.StringVar(&e.options.KeyFile, "key", "", "PEM file with the key of --certificate")
	f.StringVar(&e.options.ServerName, "server-name", "", "name that the server's certificate must carry, if not that of --address")
	f.BoolVar(&e.json, "json", false, "print the reply in its JSON form, columns as arrays")
	f.DurationVar(&e.timeout, "timeout", 10*time.Second, "time to wait for an answer")
	f.BoolVar(&e.wait, "wait", false, "wait up to --timeout for a server at --address that is not there yet")
}

// connect returns a client of the server at --address, or of one that it starts in
// this process on a loopback port.
func (e *environment) connect(ctx context.Context) (client *kinegate.Client, closeClient func(), err error) {
	client, _, closeClient, err = e.connectGate(ctx, "")
	return client, closeClient, err
}

// connectGate is connect for commands that open a judge stream: it returns a client
// for calls and one for the stream, which has a listener of its own.
func (e *environment) connectGate(ctx context.Context, gateAddress string) (calls, gate *kinegate.Client, closeBoth func(), err error) {
	if e.address == "" && gateAddress != "" {
		return nil, nil, nil, badInput("--gate-address needs --address")
	}
	general, stop := e.address, func() {}
	if general == "" {
		own, err := startOwn(ctx)
		if err != nil {
			return nil, nil, nil, err
		}
		general, gateAddress, stop = own.general, own.gate, own.stop
	}
	if gateAddress == "" {
		gateAddress = general
	}
	if calls, err = kinegate.Dial(general, e.options); err == nil {
		gate, err = kinegate.Dial(gateAddress, e.options)
	}
	if err != nil {
		stop()
		return nil, nil, nil, usageError{err}
	}
	if e.address != "" {
		err = e.reach(ctx, general, calls)
		if err == nil && gateAddress != general {
			err = e.reach(ctx, gateAddress, gate)
		}
		if err != nil {
			_ = calls.Close()
			_ = gate.Close()
			return nil, nil, nil, err
		}
	}
	return calls, gate, func() {
		_ = calls.Close()
		_ = gate.Close()
		stop()
	}, nil
}

// Times of reaching a server.
const (
	// quietReach is how long nothing is said: a server on the same network is there by then.
	quietReach = 300 * time.Millisecond
	// reachAgain is the time between two attempts with --wait.
	reachAgain = 200 * time.Millisecond
)

// reach tries to connect, says what it tries if that takes a moment, and fails at once
// where nobody listens, unless it is to wait.
func (e *environment) reach(ctx context.Context, address string, client *kinegate.Client) error {
	ctx, cancel := e.calling(ctx)
	defer cancel()
	reached := make(chan error, 1)
	go func() { reached <- e.tryUntil(ctx, client) }()
	quiet := time.NewTimer(quietReach)
	defer quiet.Stop()
	select {
	case err := <-reached:
		return err
	case <-quiet.C:
	}
	_, _ = fmt.Fprintf(e.err, "kinegate: waiting for a server at %s, up to %s\n", address, e.timeout)
	return <-reached
}

// tryUntil connects, again and again if it is to wait; the last reason before the time was
// over counts.
func (e *environment) tryUntil(ctx context.Context, client *kinegate.Client) error {
	err := client.Reach(ctx)
	again := time.NewTicker(reachAgain)
	defer again.Stop()
	for err != nil && e.wait {
		select {
		case <-again.C:
		case <-ctx.Done():
			return err
		}
		if latest := client.Reach(ctx); ctx.Err() == nil {
			err = latest
		}
	}
	return err
}

// ownServer is a server in this process.
type ownServer struct {
	gate, general string // addresses
	stop          func()
}

// startOwn starts a server with default settings on loopback ports that the system
// chooses.
func startOwn(ctx context.Context) (*ownServer, error) {
	options := server.Defaults()
	options.GateAddress, options.GeneralAddress = "127.0.0.1:0", "127.0.0.1:0"
	options.HealthAddress, options.MetricsAddress, options.DebugAddress = "", "", ""
	options.DrainNotice = 0
	s, err := server.New(options, server.Deps{Version: version()})
	if err != nil {
		return nil, err
	}
	if err := s.Listen(ctx); err != nil {
		return nil, err
	}
	served := make(chan error, 1)
	go func() { served <- s.Serve(ctx) }()
	address := func(l server.Listener) string { return addressText(s.Addr(l)) }
	return &ownServer{
		gate: address(server.Gate), general: address(server.General),
		stop: func() {
			stopping, cancel := context.WithTimeout(context.WithoutCancel(ctx), time.Second)
			defer cancel()
			_ = s.Shutdown(stopping)
			<-served //nolint:errcheck // only its end matters
		},
	}, nil
}

func addressText(a net.Addr) string {
	if a == nil {
		return ""
	}
	return a.String()
}

// asking lets f ask a server within the time that a person waits, and marks the place
// in text that an answer finds fault with.
func (e *environment) asking(
	ctx context.Context, text string, f func(ctx context.Context, client *kinegate.Client) error,
) error {
	client, closeClient, err := e.connect(ctx)
	if err != nil {
		return err
	}
	defer closeClient()
	ctx, cancel := e.calling(ctx)
	defer cancel()
	return underline(f(ctx, client), text)
}

// tell prints a reply: in its JSON form if that was asked for, else by words, which may
// be nil.
func (e *environment) tell(m proto.Message, words func() error) error {
	switch {
	case !e.json && words == nil:
		return nil
	case !e.json:
		return words()
	}
	text, err := jsonform.Marshal(m)
	if err != nil {
		return err
	}
	_, err = fmt.Fprintf(e.out, "%s\n", text)
	return err
}

// calling bounds a unary call.
func (e *environment) calling(ctx context.Context) (context.Context, context.CancelFunc) {
	return context.WithTimeout(ctx, e.timeout)
}

// print writes a line; a broken pipe shows at the end, when the buffer is flushed.
func (e *environment) print(format string, args ...any) {
	_, _ = fmt.Fprintf(e.out, format+"\n", args...)
}
