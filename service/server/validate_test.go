package server

import (
	"errors"
	"slices"
	"strings"
	"testing"
	"time"

	"example.org/kinegate/kinematics/fault"
)

func TestSettingsTable(t *testing.T) {
	seen := map[string]bool{}
	o := Defaults()
	for _, s := range Settings() {
		t.Run(s.Name, func(t *testing.T) {
			if seen[s.Name] {
				t.Error("twice in the table")
			}
			seen[s.Name] = true
			if !strings.HasSuffix(s.Doc, ".") || s.Kind() == "" {
				t.Errorf("doc %q, kind %q", s.Doc, s.Kind())
			}
			if got := s.In(&o).String(); got != s.Default && got != normal(s) {
				t.Errorf("the default %q reads back as %q", s.Default, got)
			}
			if e := s.In(&o).Check(); e != nil {
				t.Errorf("the default is not allowed: %v", e)
			}
			// Each setting has a place of its own.
			var a, b Options
			value := map[string]string{
				"text": "x", "word": "debug", "bool": "true", "list": "a,b", "size": "17KiB", "number": "17", "time": "17m0s",
			}[s.Kind()]
			if e := s.In(&a).Set(value); e != nil {
				t.Fatal(e)
			}
			if got := s.In(&a).String(); got != value {
				t.Errorf("%q reads back as %q", value, got)
			}
			changed := 0
			for _, other := range Settings() {
				if other.In(&a).String() != other.In(&b).String() {
					changed++
				}
			}
			if changed != 1 {
				t.Errorf("setting it changes %d settings", changed)
			}
		})
	}
	if err := o.Validate(); err != nil {
		t.Errorf("the defaults do not fit together: %v", err)
	}
}

// normal is the default in the form that the value prints.
func normal(s Setting) string {
	var o Options
	_ = s.In(&o).Set(s.Default)
	return s.In(&o).String()
}

func TestValuesRefuseOtherText(t *testing.T) {
	var o Options
	for _, s := range Settings() {
		for _, bad := range map[string][]string{
			"bool": {"", "yes", "True", "1"}, "size": {"", "x", "-1", "1.5MiB", "4MB", "9999999999GiB"},
			"number": {"", "x", "1.5", "99999999999999999999"}, "time": {"", "5", "x"}, "word": {"", "trace"},
		}[s.Kind()] {
			if e := s.In(&o).Set(bad); e == nil || e.Allowed == "" {
				t.Errorf("%s takes %q", s.Name, bad)
			}
		}
	}
}

// TestValidate breaks the defaults in one way per case.
func TestValidate(t *testing.T) {
	cases := []struct {
		name   string
		change func(*Options)
		field  string
		holds  []string
	}{
		{"no gate", func(o *Options) { o.GateAddress = "" }, "gate_address", nil},
		{"no port", func(o *Options) { o.GeneralAddress = "localhost" }, "general_address", []string{"host:port"}},
		{"bad port", func(o *Options) { o.HealthAddress = "127.0.0.1:99999" }, "health_address", nil},
		{"empty port", func(o *Options) { o.HealthAddress = "127.0.0.1:" }, "health_address", nil},
		{"empty path", func(o *Options) { o.MetricsAddress = "unix:" }, "metrics_address", nil},
		{"shared address", func(o *Options) { o.GeneralAddress = o.GateAddress }, "general_address", []string{"gate_address"}},
		{"profiles for all", func(o *Options) { o.DebugAddress = "0.0.0.0:1" }, "debug_address", []string{"loopback"}},
		{"certificate without key", func(o *Options) { o.CertificateFile = "x" }, "key_file", []string{"certificate_file"}},
		{"key without certificate", func(o *Options) { o.KeyFile = "x" }, "key_file", []string{"certificate_file"}},
		{"authority without TLS", func(o *Options) { o.ClientCAFile = "x" }, "client_ca_file", []string{"certificate_file"}},
		{"message too small", func(o *Options) { o.MessageLimit = 1 }, "message_limit", []string{"64KiB"}},
		{"block over message", func(o *Options) { o.BlockLimit = 5 * mebi }, "block_limit", []string{"message_limit"}},
		{"credit under block", func(o *Options) { o.CreditLimit = mebi }, "block_limit", []string{"credit_limit"}},
		{"decoded under message", func(o *Options) { o.DecodedLimit = mebi }, "message_limit", []string{"decoded_limit"}},
		{"pool under credit", func(o *Options) { o.CreditPool = mebi }, "credit_limit", []string{"credit_pool"}},
		{"gate window", func(o *Options) { o.GateConnectionWindow = 64 * kibi }, "gate_stream_window", []string{"gate_connection_window"}},
		{"general window", func(o *Options) { o.GeneralStreamWindow = 2 * mebi }, "general_stream_window", []string{"general_connection_window"}},
		{"memory", func(o *Options) { o.MemoryLimit = 128 * mebi }, "credit_pool", []string{"memory_limit", "gate_streams", "gate_stream_window"}},
		{"streams of one connection", func(o *Options) { o.GeneralStreams = 100 }, "connection_streams", []string{"general_streams"}},
		{"access without authority", func(o *Options) { o.AccessFile = "x" }, "access_file", []string{"client_ca_file"}},
		{"calls of one caller", func(o *Options) { o.CallerCalls = 129 }, "caller_calls", []string{"connection_streams"}},
		{"pings of clients in use", func(o *Options) { o.ClientPingMinimum = 30 * time.Second }, "client_ping_advice", []string{"client_ping_minimum"}},
		{"slots", func(o *Options) { o.WorkSlots = -1 }, "work_slots", []string{"0 to 4096"}},
		{"lines", func(o *Options) { o.LogBurst = 0 }, "log_burst", nil},
		{"sampling", func(o *Options) { o.LogKeepOneIn = 0 }, "log_keep_one_in", nil},
		{"no credit", func(o *Options) { o.CreditBlocks = 0 }, "credit_blocks", nil},
		{"no connections", func(o *Options) { o.Connections = 0 }, "connections", nil},
		{"headers", func(o *Options) { o.HeaderLimit = 1 }, "header_limit", nil},
		{"notice", func(o *Options) { o.DrainNotice = -1 }, "drain_notice", nil},
		{"grace", func(o *Options) { o.DrainTime = time.Minute }, "termination_grace", []string{"drain_notice", "drain_time", "stop_margin"}},
		{"deadlines", func(o *Options) { o.DefaultDeadline = time.Hour }, "default_deadline", []string{"longest_deadline"}},
		{"calls outlive connections", func(o *Options) { o.LongestDeadline = 2 * time.Minute }, "longest_deadline", []string{"connection_age_grace"}},
		{"pings", func(o *Options) { o.PingTimeout = time.Minute }, "ping_timeout", []string{"ping_interval"}},
		{"pings of clients", func(o *Options) { o.ClientPingMinimum = 0 }, "client_ping_minimum", nil},
		{"age", func(o *Options) { o.ConnectionAge = 0 }, "connection_age", nil},
		{"idle", func(o *Options) { o.ConnectionIdle = 0 }, "connection_idle", nil},
		{"stream idle", func(o *Options) { o.StreamIdle = 0 }, "stream_idle", nil},
		{"handshake", func(o *Options) { o.HandshakeTimeout = time.Hour }, "handshake_timeout", nil},
		{"level", func(o *Options) { o.LogLevel = "loud" }, "log_level", []string{"debug, info, warn, error"}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			o := Defaults()
			c.change(&o)
			err := o.Validate()
			if !slices.Contains(faultNames(err), c.field) {
				t.Fatalf("got %v", err)
			}
			for _, text := range append(c.holds, c.field) {
				if !strings.Contains(err.Error(), text) {
					t.Errorf("%q lacks %q", err, text)
				}
			}
			if _, err := New(o, Deps{}); !errors.Is(err, fault.Invalid) && !errors.Is(err, fault.Infeasible) {
				t.Errorf("New: %v", err)
			}
		})
	}
	t.Run("all at once", func(t *testing.T) {
		o := Defaults()
		for _, c := range cases[1:3] {
			c.change(&o)
		}
		if names := faultNames(o.Validate()); len(names) != 2 {
			t.Errorf("got %v", names)
		}
	})
}

// TestPlaintextMatrix: address x TLS x flag.
func TestPlaintextMatrix(t *testing.T) {
	for address, local := range map[string]bool{
		"127.0.0.1:1": true, "127.9.9.9:1": true, "localhost:1": true, "[::1]:1": true, "[::ffff:127.0.0.1]:1": true,
		"unix:/run/kinegate.sock": true, "0.0.0.0:1": false, ":1": false, "[::]:1": false, "10.0.0.1:1": false,
		"192.168.1.1:1": false, "[fe80::1]:1": false, "daq.example.org:1": false, "localhost.example.org:1": false,
		"[::ffff:10.0.0.1]:1": false,
	} {
		for _, listener := range []string{"gate_address", "general_address"} {
			for _, secured := range []bool{false, true} {
				for _, unsafe := range []bool{false, true} {
					o := Defaults()
					if listener == "gate_address" {
						o.GateAddress = address
					} else {
						o.GeneralAddress = address
					}
					o.UnsafePlaintext = unsafe
					if secured {
						o.CertificateFile, o.KeyFile = "c", "k"
					}
					err := o.Validate()
					if want := local || secured || unsafe; (err == nil) != want {
						t.Errorf("%s %s, TLS %v, flag %v: %v", listener, address, secured, unsafe, err)
					}
					if err != nil && !strings.Contains(err.Error(), "--unsafe-plaintext-on-the-network") {
						t.Errorf("the fault does not name the flag: %v", err)
					}
				}
			}
		}
	}
	// Health and metrics may be plain wherever they are.
	o := Defaults()
	o.HealthAddress, o.MetricsAddress = ":1", ":2"
	if err := o.Validate(); err != nil {
		t.Error(err)
	}
}
