package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"runtime/debug"
	"slices"
	"strings"
	"syscall"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"example.org/kinegate/service/config"
	"example.org/kinegate/service/server"
	"example.org/kinegate/service/telemetry"
)

// serveCommand runs the server.
func serveCommand(p program) *cobra.Command {
	s := &serving{program: p, flags: map[string]string{}}
	command := &cobra.Command{
		Use:   "serve",
		Short: "Run the gRPC server until SIGTERM or SIGINT",
		Long: "serve runs the gRPC server. Each setting is a flag, a variable of the environment\n" +
			"(KINEGATE_ and its name in capitals) or a key of the file named by --config; the first\n" +
			"of these that gives it wins.\n\n" +
			"The file, the access file, certificates and the folder of selections are read again when\n" +
			"they change, the first two also on SIGHUP; what is not sound stays as it was.\n\n" +
			"SIGTERM and SIGINT drain it: health turns NOT_SERVING, calls are answered until the\n" +
			"notice and the time to drain are over, then it exits with 0. A second signal stops it\n" +
			"at once. The end of standard input drains it too with --until-input-ends, so that a server\n" +
			"ends with the process that started it. Faults of the configuration exit with 2, a server\n" +
			"that fails with 1.",
		Args: usage(cobra.NoArgs),
		RunE: func(command *cobra.Command, _ []string) error { return s.run(command.Context()) },
	}
	f := command.Flags()
	f.SortFlags = false
	for _, setting := range server.Settings() {
		s.flag(f, setting.Name, setting.Doc, setting.Default, setting.Kind())
	}
	s.flag(f, config.FileKey, "YAML file with settings.", "", "text")
	f.BoolVar(&s.printOnly, "print-config", false, "Print the settings with where each came from, and exit.")
	f.BoolVar(&s.validateOnly, "validate-config", false, "Check the settings and the files they name, and exit.")
	return command
}

// serving is one run of the command.
type serving struct {
	program

	flags                   map[string]string
	printOnly, validateOnly bool
}

// flag adds the flag of a setting, whose text is kept for config to read.
func (s *serving) flag(f *pflag.FlagSet, name, doc, standard, kind string) {
	flag := f.VarPF(given{s.flags, name, standard, kind}, config.FlagName(name)[2:], "", doc)
	if kind == "bool" {
		flag.NoOptDefVal = "true"
	}
}

// given is a flag that keeps the text it is given.
type given struct {
	flags                map[string]string
	name, standard, kind string
}

// Set keeps the text.
func (g given) Set(text string) error { g.flags[g.name] = text; return nil }

// String is the default, for the help.
func (g given) String() string { return g.standard }

// Type is the kind of value, for the help.
func (g given) Type() string { return g.kind }

// run finds the settings and does what was asked with them.
func (s *serving) run(ctx context.Context) error {
	options, all, err := s.settings()
	if s.printOnly {
		if printErr := config.Print(s.out, all); printErr != nil {
			return printErr
		}
	}
	if err != nil {
		return usageError{err}
	}
	if s.printOnly && !s.validateOnly {
		return nil
	}
	lines := telemetry.NewWriter(s.err)
	defer lines.Close()
	log, err := telemetry.NewLogger(lines, options.LogLevel)
	if err != nil {
		return usageError{err}
	}
	s.keepMemory(&options)
	registry := prometheus.NewRegistry()
	if err := telemetry.CountDropped(registry, lines.Dropped); err != nil {
		return err
	}
	server, err := server.New(options, server.Deps{
		Version: version(), Log: log, LogHeld: lines.Drop, Registry: registry,
		Settings: func() (server.Options, error) {
			options, _, err := s.settings()
			return options, err
		},
	})
	if err != nil {
		return usageError{err}
	}
	if s.validateOnly {
		_, err := fmt.Fprintln(s.out, "the settings and the files that they name are sound")
		return err
	}
	if err := keepSlicesShort(); err != nil {
		log.Info().Err(err).Msg("slices of the processor stay as they are: verdicts may wait longer beside other work")
	}
	until := context.Background()
	if options.UntilInputEnds {
		until = s.whileInput(until)
	}
	return s.serve(ctx, until, server, func(text string) { log.Info().Msg(text) })
}

// settings reads the settings from all their sources.
func (s *serving) settings() (server.Options, []config.Effective, error) {
	return config.Load(config.Sources{Flags: s.flags, Environ: s.environ, ReadFile: os.ReadFile})
}

// keepMemory makes the runtime work harder before it passes the memory limit, unless
// the environment tells it to do otherwise.
func (s *serving) keepMemory(options *server.Options) {
	told := slices.ContainsFunc(s.environ, func(line string) bool { return strings.HasPrefix(line, "GOMEMLIMIT=") })
	if limit := options.HeapLimit(); limit > 0 && !told && !s.validateOnly {
		debug.SetMemoryLimit(limit)
	}
}

// whileInput returns a context that ends with standard input.
func (s *serving) whileInput(ctx context.Context) context.Context {
	ctx, cancel := context.WithCancel(ctx)
	go func() {
		_, _ = io.Copy(io.Discard, s.in) // input that cannot be read has ended too
		cancel()
	}()
	return ctx
}

// stopped waits for a signal to stop, or for ctx or the server to end before one comes.
// SIGHUP is a signal to read the settings again.
func (s *serving) stopped(ctx context.Context, running *server.Server, failed <-chan error) error {
	for {
		select {
		case err := <-failed:
			return err
		case <-ctx.Done():
			return nil
		case signal := <-s.signals:
			if signal != syscall.SIGHUP {
				return nil
			}
			_ = running.Reload() // it has reported
		}
	}
}

// serve runs the server until a signal has stopped it, until has ended or it fails.
func (s *serving) serve(ctx, until context.Context, running *server.Server, say func(string)) error {
	if err := running.Listen(ctx); err != nil {
		return err
	}
	if s.signals == nil {
		// Only here: other commands end by a signal at once. Before it is said that it
		// listens, since who reads that may send one. A burst of signals beyond the second
		// says nothing new.
		signals := make(chan os.Signal, 2)
		signal.Notify(signals, os.Interrupt, syscall.SIGTERM, syscall.SIGHUP)
		defer signal.Stop(signals)
		s.signals = signals
	}
	for _, name := range []server.Listener{server.Gate, server.General, server.Health, server.Metrics, server.Debug} {
		if a := running.Addr(name); a != nil {
			say(fmt.Sprintf("listening for %s at %s", name, a))
		}
	}
	failed := make(chan error, 1)
	go func() { failed <- running.Serve(ctx) }()
	if err := s.stopped(until, running, failed); err != nil {
		return err
	}
	say("draining")
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	go func() {
		_ = s.stopped(ctx, running, nil) // a second signal
		cancel()
	}()
	if err := running.Shutdown(ctx); errors.Is(err, server.ErrCut) {
		say(err.Error())
	} else if err != nil {
		return err
	}
	say("stopped")
	return <-failed
}
