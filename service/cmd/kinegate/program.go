package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"runtime/debug"

	"github.com/spf13/cobra"

	"example.org/kinegate/service/api"
)

// program is what the commands get from outside.
type program struct {
	in       io.Reader
	out, err io.Writer
	environ  []string
	signals  <-chan os.Signal // for serve; those of the process if nil
}

// Exit codes that scripts can rely on.
const (
	exitWell   = 0 // done
	exitFailed = 1 // tried and failed
	exitUsage  = 2 // not tried: arguments, input or configuration are at fault
	exitNo     = 3 // the answer is no: a closed channel, a faulty selection
)

// usageError is a fault of arguments or configuration.
type usageError struct{ cause error }

func (u usageError) Error() string { return u.cause.Error() }
func (u usageError) Unwrap() error { return u.cause }

// run runs one command and returns the exit code.
func run(ctx context.Context, p program, arguments []string) int {
	root := rootCommand(p)
	root.SetArgs(arguments)
	err := root.ExecuteContext(ctx)
	if err == nil {
		return exitWell
	}
	text, code := explain(err)
	if text != "" {
		// There is nobody to tell if the error cannot be written.
		_, _ = fmt.Fprintln(p.err, "kinegate:", text)
	}
	return code
}

// rootCommand holds the commands together. Each has a file of its own.
func rootCommand(p program) *cobra.Command {
	root := &cobra.Command{
		Use:   "kinegate",
		Short: "Relativistic kinematics for the event selection of photon-beam experiments",
		Long: "kinegate answers which channels are open at a beam energy and where their products go,\n" +
			"and judges measured events against reaction hypotheses, as a gRPC server and on the\n" +
			"command line.\n\n" + api.Caution,
		Version:           version(),
		SilenceErrors:     true,
		SilenceUsage:      true,
		Args:              func(_ *cobra.Command, arguments []string) error { return unknownCommand(arguments) },
		RunE:              func(command *cobra.Command, _ []string) error { return command.Help() },
		CompletionOptions: cobra.CompletionOptions{HiddenDefaultCmd: false},
	}
	root.SetIn(p.in)
	root.SetOut(p.out)
	root.SetErr(p.err)
	root.SetFlagErrorFunc(func(_ *cobra.Command, err error) error { return usageError{err} })
	root.AddCommand(commands(p)...)
	return root
}

// commands lists the commands in the order of their help.
func commands(p program) []*cobra.Command {
	return []*cobra.Command{
		particleCommand(p),
		reactionCommand(p),
		twoBodyCommand(p),
		channelsCommand(p),
		decayCommand(p),
		generateCommand(p),
		boundCommand(p),
		photonCommand(p),
		photonFieldCommand(p),
		dalitzCommand(p),
		motionCommand(p),
		checkCommand(p),
		judgeCommand(p),
		demoCommand(p),
		serveCommand(p),
		healthCommand(p),
		versionCommand(p),
	}
}

// unknownCommand is the fault of a word that is no command.
func unknownCommand(arguments []string) error {
	if len(arguments) == 0 {
		return nil
	}
	return usageError{fmt.Errorf("there is no command %q; kinegate --help lists them", arguments[0])}
}

// usage makes a cobra argument check report its faults as faults of usage.
func usage(check cobra.PositionalArgs) cobra.PositionalArgs {
	return func(command *cobra.Command, arguments []string) error {
		if err := check(command, arguments); err != nil {
			return usageError{err}
		}
		return nil
	}
}

// version is the version of the module, or of the source where it is known, or devel.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "devel"
	}
	if v := info.Main.Version; v != "" && v != "(devel)" {
		return v
	}
	for _, s := range info.Settings {
		if s.Key == "vcs.revision" && len(s.Value) >= 12 {
			return "devel-" + s.Value[:12]
		}
	}
	return "devel"
}
