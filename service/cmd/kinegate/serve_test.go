package main

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// asProgram makes the test binary behave as the program itself, for tests that need a
// process with signals and exit codes.
const asProgram = "KINEGATE_TEST_AS_PROGRAM"

func TestMain(m *testing.M) {
	if os.Getenv(asProgram) != "" {
		_ = os.Unsetenv(asProgram)
		main()
	}
	if order := os.Getenv(asFlood); order != "" {
		flood(order)
		return
	}
	os.Exit(m.Run()) //nolint:forbidigo // this is the main of the tests
}

// process prepares the program as a process of its own.
func process(t testing.TB, arguments ...string) *exec.Cmd {
	t.Helper()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	c := exec.CommandContext(t.Context(), self, arguments...) //nolint:gosec // the test binary itself
	c.Env = append(os.Environ(), asProgram+"=1")
	return c
}

// exitCode is the code a process ended with.
func exitCode(t testing.TB, err error) int {
	t.Helper()
	if err == nil {
		return 0
	}
	exit, ok := errors.AsType[*exec.ExitError](err)
	if !ok {
		t.Fatal(err)
	}
	return exit.ExitCode()
}

// output runs the program within this process.
func output(t *testing.T, environ []string, arguments ...string) (out, errs string, code int) {
	t.Helper()
	var o, e bytes.Buffer
	code = run(t.Context(), program{in: strings.NewReader(""), out: &o, err: &e, environ: environ}, arguments)
	return o.String(), e.String(), code
}

// onLoopback are arguments that let the system choose every port.
func onLoopback(more ...string) []string {
	return append([]string{
		"serve", "--gate-address", "127.0.0.1:0", "--general-address", "127.0.0.1:0",
		"--health-address", "127.0.0.1:0", "--metrics-address", "127.0.0.1:0",
	}, more...)
}

func TestPrintConfig(t *testing.T) {
	file := filepath.Join(t.TempDir(), "kinegate.yaml")
	if err := os.WriteFile(file, []byte("credit_blocks: 12\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	out, errs, code := output(t, []string{"KINEGATE_LOG_LEVEL=warn"},
		"serve", "--config", file, "--reflection=false", "--connections", "77", "--print-config")
	if code != 0 || errs != "" {
		t.Fatalf("code %d: %s", code, errs)
	}
	for _, text := range []string{
		"from file, kinegate.yaml\ncredit_blocks: \"12\"", "from environment, KINEGATE_LOG_LEVEL\nlog_level: warn",
		"from flag, --reflection\nreflection: \"false\"", "from flag, --connections\nconnections: \"77\"", "from default",
	} {
		if !strings.Contains(out, text) {
			t.Errorf("lacks %q", text)
		}
	}
}

func TestBadConfigurationExitsWithUsage(t *testing.T) {
	missing := filepath.Join(t.TempDir(), "none")
	for name, c := range map[string]struct {
		environ   []string
		arguments []string
		holds     string
	}{
		"unknown flag":            {nil, []string{"serve", "--no-such"}, "--no-such"},
		"unknown variable":        {[]string{"KINEGATE_NO_SUCH=1"}, []string{"serve"}, "no_such"},
		"bad value":               {nil, []string{"serve", "--connections", "many"}, "connections"},
		"argument":                {nil, []string{"serve", "now"}, "now"},
		"no file":                 {nil, []string{"serve", "--config", missing}, "config"},
		"two settings that clash": {nil, []string{"serve", "--drain-time", "50s"}, "termination_grace"},
		"plaintext":               {nil, onLoopback("--general-address", "0.0.0.0:0"), "--unsafe-plaintext-on-the-network"},
		"plaintext, validated":    {nil, onLoopback("--gate-address", ":0", "--validate-config"), "--unsafe-plaintext-on-the-network"},
		"plaintext, printed":      {nil, onLoopback("--gate-address", ":0", "--print-config"), "--unsafe-plaintext-on-the-network"},
		"particle file":           {nil, onLoopback("--particle-files", missing, "--validate-config"), "particle_files"},
		"selection file":          {nil, onLoopback("--selection-files", missing, "--validate-config"), "selection_files"},
		"certificate":             {nil, onLoopback("--certificate-file", missing, "--key-file", missing), "certificate_file"},
		"unknown command":         {nil, []string{"sevre"}, "sevre"},
	} {
		t.Run(name, func(t *testing.T) {
			begun := time.Now()
			_, errs, code := output(t, c.environ, c.arguments...)
			if code != exitUsage || !strings.Contains(errs, c.holds) {
				t.Errorf("code %d: %s", code, errs)
			}
			if took := time.Since(begun); took > 5*time.Second {
				t.Errorf("took %v", took)
			}
		})
	}
	if out, errs, code := output(t, nil, onLoopback("--validate-config")...); code != 0 || errs != "" || strings.Count(out, "\n") != 1 {
		t.Errorf("a sound configuration: code %d: %s%s", code, out, errs)
	}
}

func TestAddressInUseFails(t *testing.T) {
	var config net.ListenConfig
	busy, err := config.Listen(t.Context(), "tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = busy.Close() }()
	_, errs, code := output(t, nil, onLoopback("--gate-address", busy.Addr().String())...)
	if code != exitFailed || !strings.Contains(errs, busy.Addr().String()) {
		t.Errorf("code %d: %s", code, errs)
	}
}

func TestHelpHoldsTheCaution(t *testing.T) {
	out, _, code := output(t, nil, "--help")
	if code != 0 || !strings.Contains(out, "never a safety system") {
		t.Errorf("code %d: %s", code, out)
	}
	if out, _, code := output(t, nil, "version"); code != 0 || !strings.Contains(out, "particle table") {
		t.Errorf("code %d: %s", code, out)
	}
}

// addresses reads from the log where a server listens.
func addresses(t testing.TB, log io.Reader) map[string]string {
	t.Helper()
	found := map[string]string{}
	lines := bufio.NewScanner(log)
	for len(found) < 4 && lines.Scan() {
		var line struct{ Message string }
		if err := json.Unmarshal(lines.Bytes(), &line); err != nil {
			t.Fatalf("%q: %v", lines.Text(), err)
		}
		if rest, ok := strings.CutPrefix(line.Message, "listening for "); ok {
			name, where, _ := strings.Cut(rest, " at ")
			found[name] = where
		}
	}
	if len(found) < 4 {
		t.Fatalf("only %v", found)
	}
	go func() { _, _ = io.Copy(io.Discard, log) }()
	return found
}

// dial connects in plaintext.
func dial(t *testing.T, where string) *grpc.ClientConn {
	t.Helper()
	conn, err := grpc.NewClient(where, grpc.WithTransportCredentials(insecure.NewCredentials()),
		grpc.WithDefaultCallOptions(grpc.WaitForReady(true)))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = conn.Close() })
	return conn
}

// startServing starts a server on loopback ports and returns its process and addresses.
func startServing(t testing.TB, arguments ...string) (p *exec.Cmd, where map[string]string) {
	t.Helper()
	p = process(t, onLoopback(arguments...)...)
	log, err := p.StderrPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := p.Start(); err != nil {
		t.Fatal(err)
	}
	return p, addresses(t, log)
}

// TestProcessLife starts a real process, calls it, and ends it with signals.
func TestProcessLife(t *testing.T) {
	for _, c := range []struct {
		name    string
		notice  string
		signals []os.Signal
		most    time.Duration
	}{
		{"one signal drains", "100ms", []os.Signal{syscall.SIGTERM}, 6 * time.Second},
		{"a second stops at once", "10m", []os.Signal{syscall.SIGTERM, os.Interrupt}, 6 * time.Second},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, where := startServing(t, "--drain-notice", c.notice, "--termination-grace", "1h")
			conn := dial(t, where["general"])
			reply, err := kinegatev1.NewReactionServiceClient(conn).DescribeReaction(t.Context(), &kinegatev1.DescribeReactionRequest{
				Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: "gamma p -> K+ Lambda"},
			})
			if err != nil || reply.GetThreshold().GetTotalEnergyGev() < 0.9 {
				t.Errorf("%v %v", reply, err)
			}
			watch, err := healthpb.NewHealthClient(dial(t, where["health"])).Watch(t.Context(), &healthpb.HealthCheckRequest{})
			if err != nil {
				t.Fatal(err)
			}
			for {
				m, err := watch.Recv()
				if err != nil {
					t.Fatal(err)
				}
				if m.GetStatus() == healthpb.HealthCheckResponse_SERVING {
					break
				}
			}
			begun := time.Now()
			for _, s := range c.signals {
				if err := p.Process.Signal(s); err != nil {
					t.Fatal(err)
				}
				if m, err := watch.Recv(); err == nil && m.GetStatus() != healthpb.HealthCheckResponse_NOT_SERVING {
					t.Errorf("health %v", m.GetStatus())
				}
			}
			if code := exitCode(t, p.Wait()); code != 0 {
				t.Errorf("exit code %d", code)
			}
			if took := time.Since(begun); took > c.most {
				t.Errorf("took %v", took)
			}
		})
	}
}

// TestServerEndsWithItsInput: a server that is told so ends with the pipe that it was given as
// input, gracefully; another does not read its input.
func TestServerEndsWithItsInput(t *testing.T) {
	// It takes some 10 ms to end; the other is given the time to show that it does not.
	for told, wait := range map[bool]time.Duration{true: 2 * time.Second, false: 300 * time.Millisecond} {
		t.Run(fmt.Sprint("told ", told), func(t *testing.T) {
			p := process(t, onLoopback("--drain-notice", "0s", fmt.Sprint("--until-input-ends=", told))...)
			log, err := p.StderrPipe()
			if err != nil {
				t.Fatal(err)
			}
			input, err := p.StdinPipe()
			if err != nil {
				t.Fatal(err)
			}
			if err := p.Start(); err != nil {
				t.Fatal(err)
			}
			client := kinegatev1.NewInfoServiceClient(dial(t, addresses(t, log)["general"]))
			ask := func() {
				t.Helper()
				if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
					t.Error(err)
				}
			}
			if _, err := input.Write([]byte("what is written does not matter\n")); err != nil {
				t.Error(err)
			}
			ask()
			_ = input.Close()
			ended := make(chan error, 1)
			go func() { ended <- p.Wait() }()
			select {
			case err := <-ended:
				if code := exitCode(t, err); !told || code != 0 {
					t.Errorf("ended with code %d", code)
				}
			case <-time.After(wait):
				if told {
					t.Error("the server outlives its input")
				}
				ask()
				_ = p.Process.Signal(syscall.SIGTERM)
				if code := exitCode(t, <-ended); code != 0 {
					t.Errorf("code %d", code)
				}
			}
		})
	}
}

// TestBlockedLogPipe: nobody reads the log, and calls are answered all the same.
func TestBlockedLogPipe(t *testing.T) {
	reader, log := io.Pipe()
	defer func() { _ = reader.Close() }()
	lines := bufio.NewReader(reader)
	signals := make(chan os.Signal, 2)
	ended := make(chan int, 1)
	go func() {
		ended <- run(context.Background(), program{ // it ends by its signal
			in: strings.NewReader(""), out: io.Discard, err: log, signals: signals,
		}, onLoopback("--drain-notice", "0s"))
	}()
	where := map[string]string{}
	for len(where) < 4 {
		line, err := lines.ReadString('\n')
		if err != nil {
			t.Fatal(err)
		}
		if _, rest, ok := strings.Cut(line, "listening for "); ok {
			name, at, _ := strings.Cut(rest, " at ")
			where[name] = strings.TrimRight(at, "\"}\n")
		}
	}
	// From here on nobody reads.
	client := kinegatev1.NewInfoServiceClient(dial(t, where["general"]))
	var all sync.WaitGroup
	for range 4 {
		all.Go(func() {
			for range 500 {
				if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
					t.Error(err)
					return
				}
			}
		})
	}
	all.Wait()
	signals <- syscall.SIGTERM
	select {
	case code := <-ended:
		if code != 0 {
			t.Errorf("code %d", code)
		}
	case <-time.After(20 * time.Second):
		t.Error("the blocked pipe holds up the end")
	}
}
