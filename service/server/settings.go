package server

import "time"

// Setting describes one option: the one table that flags, environment, file, checks
// and the operator's page are made from.
type Setting struct {
	// Name is the key in snake_case: gate_address is the flag --gate-address, the
	// variable KINEGATE_GATE_ADDRESS and the key gate_address of the file.
	Name string
	// Default is the value where none is given, as it would be typed.
	Default string
	// Doc says what it does, in one sentence.
	Doc string

	in func(*Options) Value
}

// In returns the setting's value within options, to be read or set.
func (s Setting) In(o *Options) Value { return s.in(o) }

// Kind is the kind of value, in one word.
func (s Setting) Kind() string { return s.in(new(Options)).Type() }

// Allowed says which values are allowed, as a range or a list.
func (s Setting) Allowed() string { return s.in(new(Options)).Allowed() }

// Values that several settings share.
const (
	kibi   = Bytes(1) << 10
	mebi   = Bytes(1) << 20
	gibi   = Bytes(1) << 30
	day    = 24 * time.Hour
	minute = time.Minute

	tenSeconds = "10s"
)

// Settings returns the table, in the order of its documentation.
func Settings() []Setting {
	var all []Setting
	all = append(all, addressSettings()...)
	all = append(all, sizeSettings()...)
	all = append(all, timeSettings()...)
	return append(all, contentSettings()...)
}

// Defaults returns the options where nothing is given.
func Defaults() Options {
	var o Options
	for _, s := range Settings() {
		// Defaults parse; a test holds that.
		_ = s.In(&o).Set(s.Default)
	}
	return o
}

func addressSettings() []Setting {
	return []Setting{
		{"gate_address", "127.0.0.1:8470", "Address of the listener for judge streams: host:port, or unix:path.",
			func(o *Options) Value { return text(&o.GateAddress) }},
		{"general_address", "127.0.0.1:8471", "Address of the listener for all other rpcs: host:port, or unix:path.",
			func(o *Options) Value { return text(&o.GeneralAddress) }},
		{"health_address", "127.0.0.1:8472", "Address of the plaintext listener with grpc.health.v1 alone; empty for none.",
			func(o *Options) Value { return text(&o.HealthAddress) }},
		{"metrics_address", "127.0.0.1:8473", "Address of HTTP with /metrics, /livez and /readyz; empty for none.",
			func(o *Options) Value { return text(&o.MetricsAddress) }},
		{"debug_address", "", "Loopback address of HTTP with profiles and, in plaintext HTTP/2, grpc.channelz.v1; empty for none.",
			func(o *Options) Value { return text(&o.DebugAddress) }},
		{"certificate_file", "", "PEM file with the server's certificate chain; empty for plaintext.",
			func(o *Options) Value { return text(&o.CertificateFile) }},
		{"key_file", "", "PEM file with the key of the certificate.",
			func(o *Options) Value { return text(&o.KeyFile) }},
		{"client_ca_file", "", "PEM file with the authorities that callers' certificates must come from; empty asks for none.",
			func(o *Options) Value { return text(&o.ClientCAFile) }},
		{"access_file", "", "File that says which identity may call which methods; empty allows every caller that the listener lets in.",
			func(o *Options) Value { return text(&o.AccessFile) }},
		{"unsafe_plaintext_on_the_network", "false", "Serve rpcs without TLS beyond this machine. Anybody on the way can read and change them.",
			func(o *Options) Value { return truth(&o.UnsafePlaintext) }},
	}
}

func sizeSettings() []Setting {
	return []Setting{
		{"message_limit", "4MiB", "Largest message, both ways.",
			func(o *Options) Value { return size(&o.MessageLimit, 64*kibi, 64*mebi) }},
		{"block_limit", "2MiB", "Largest encoded event block.",
			func(o *Options) Value { return size(&o.BlockLimit, 64*kibi, 64*mebi) }},
		{"decoded_limit", "16MiB", "Most memory that one message may need once decoded.",
			func(o *Options) Value { return size(&o.DecodedLimit, 64*kibi, gibi) }},
		{"header_limit", "16KiB", "Largest list of request headers.",
			func(o *Options) Value { return size(&o.HeaderLimit, 4*kibi, mebi) }},
		{"credit_blocks", "8", "Event blocks that a judge stream may have unanswered.",
			func(o *Options) Value { return count(&o.CreditBlocks, 1024) }},
		{"credit_limit", "4MiB", "Bytes of event blocks that a judge stream may have unanswered.",
			func(o *Options) Value { return size(&o.CreditLimit, 64*kibi, gibi) }},
		{"credit_pool", "64MiB", "Byte credit of all judge streams together; a stream that finds none left is refused.",
			func(o *Options) Value { return size(&o.CreditPool, 64*kibi, 64*gibi) }},
		{"memory_limit", "0", "Memory of the process: calls above 85 % of it, and large requests above a sixteenth, are refused; 0 takes the control group's.",
			func(o *Options) Value { return size(&o.MemoryLimit, 0, 1024*gibi) }},
		{"connections", "1024", "Most open connections on the two rpc listeners together.",
			func(o *Options) Value { return count(&o.Connections, 1<<20) }},
		{"connection_streams", "128", "Most concurrent calls of one connection; more wait in the client.",
			func(o *Options) Value { return count(&o.ConnectionStreams, 1<<16) }},
		{"gate_streams", "64", "Most concurrent calls on the gate listener; more are refused.",
			func(o *Options) Value { return count(&o.GateStreams, 1<<20) }},
		{"general_streams", "512", "Most concurrent calls on the general listener; more are refused.",
			func(o *Options) Value { return count(&o.GeneralStreams, 1<<20) }},
		{"caller_calls", "100", "Most open calls of one caller, told by its certificate and address or, on a unix socket, by its user; more are refused.",
			func(o *Options) Value { return count(&o.CallerCalls, 1<<16) }},
		{"work_slots", "0", "Work done at a time on the general listener, in processors kept busy; 0 takes one fewer than there are, and at least one.",
			func(o *Options) Value { return countFromZero(&o.WorkSlots, 1<<12) }},
		{"gate_stream_window", "512KiB", "Flow control of one stream on the gate listener.",
			func(o *Options) Value { return size(&o.GateStreamWindow, 64*kibi, gibi) }},
		{"gate_connection_window", "4MiB", "Flow control of one connection on the gate listener.",
			func(o *Options) Value { return size(&o.GateConnectionWindow, 64*kibi, gibi) }},
		{"general_stream_window", "64KiB", "Flow control of one stream on the general listener.",
			func(o *Options) Value { return size(&o.GeneralStreamWindow, 64*kibi, gibi) }},
		{"general_connection_window", "1MiB", "Flow control of one connection on the general listener.",
			func(o *Options) Value { return size(&o.GeneralConnectionWindow, 64*kibi, gibi) }},
	}
}

func timeSettings() []Setting {
	return []Setting{
		{"handshake_timeout", tenSeconds, "Time for a new connection to finish its handshake.",
			func(o *Options) Value { return span(&o.HandshakeTimeout, time.Second, 2*minute) }},
		{"client_ping_minimum", tenSeconds, "Least time between the pings of a client; more often ends its connection.",
			func(o *Options) Value { return span(&o.ClientPingMinimum, time.Second, 10*minute) }},
		{"client_ping_advice", "20s", "Time between the pings of the clients in use, 20s for those shipped; for the check of client_ping_minimum.",
			func(o *Options) Value { return span(&o.ClientPingAdvice, time.Second, day) }},
		{"ping_interval", "20s", "Silence after which the server pings a client.",
			func(o *Options) Value { return span(&o.PingInterval, time.Second, day) }},
		{"ping_timeout", tenSeconds, "Time for the answer to a ping before the connection is closed.",
			func(o *Options) Value { return span(&o.PingTimeout, time.Second, 10*minute) }},
		{"connection_idle", "5m", "Time without a call after which a connection is closed.",
			func(o *Options) Value { return span(&o.ConnectionIdle, time.Second, 30*day) }},
		{"connection_age", "10m", "Age, give or take a tenth, at which a connection takes no new calls.",
			func(o *Options) Value { return span(&o.ConnectionAge, time.Second, 30*day) }},
		{"connection_age_grace", "1m", "Time after that for the calls of the connection to end.",
			func(o *Options) Value { return span(&o.ConnectionAgeGrace, time.Second, 30*day) }},
		{"default_deadline", tenSeconds, "Deadline of a unary call that came without one.",
			func(o *Options) Value { return span(&o.DefaultDeadline, time.Millisecond, day) }},
		{"longest_deadline", "1m", "Longest deadline of a unary call; longer ones are cut to it.",
			func(o *Options) Value { return span(&o.LongestDeadline, time.Millisecond, day) }},
		{"stream_idle", "1m", "Time without a frame or heartbeat after which a judge stream is ended.",
			func(o *Options) Value { return span(&o.StreamIdle, time.Second, day) }},
		{"stall_limit", "5s", "Time without progress in sending to a stream after which it is ended.",
			func(o *Options) Value { return span(&o.StallLimit, time.Second, day) }},
		{"behind_proxy", "false", "Many callers share a connection or address: end a stalled stream alone, and hold what callers give up against neither.",
			func(o *Options) Value { return truth(&o.BehindProxy) }},
		{"until_input_ends", "false", "Drain as on SIGTERM once standard input ends, as a pipe does with the process that holds its other end.",
			func(o *Options) Value { return truth(&o.UntilInputEnds) }},
		{"drain_notice", "5s", "Time between NOT_SERVING and the end of service, for balancers to notice.",
			func(o *Options) Value { return span(&o.DrainNotice, 0, 10*minute) }},
		{"drain_time", "25s", "Time after the notice for calls and streams to end.",
			func(o *Options) Value { return span(&o.DrainTime, 0, 60*minute) }},
		{"stop_margin", tenSeconds, "Time after that for handlers that were cut to return and for logs to be written.",
			func(o *Options) Value { return span(&o.StopMargin, 0, 10*minute) }},
		{"termination_grace", "45s", "Time that whoever stops the process gives it; for the check of the three above.",
			func(o *Options) Value { return span(&o.TerminationGrace, 0, 120*minute) }},
	}
}

func contentSettings() []Setting {
	return []Setting{
		{"particle_files", "", "Comma-separated CSV files that add to or override the particle table.",
			func(o *Options) Value { return list(&o.ParticleFiles) }},
		{"selection_files", "", "Comma-separated YAML files of selections that callers may name.",
			func(o *Options) Value { return list(&o.SelectionFiles) }},
		{"selection_folder", "", "Folder of YAML files of selections that callers may name; reread when they change, a bad file keeps the old version.",
			func(o *Options) Value { return text(&o.SelectionFolder) }},
		{"reflection", "true", "Answer grpc.reflection v1 and v1alpha on the rpc listeners.",
			func(o *Options) Value { return truth(&o.Reflection) }},
		{"log_level", "info", "Least level of log lines.",
			func(o *Options) Value { return choice(&o.LogLevel, "debug", "info", "warn", "error") }},
		{"log_burst", "50", "Lines a second for calls that went well, that were refused, and that failed by a fault of ours, each; more are held back.",
			func(o *Options) Value { return count(&o.LogBurst, 1<<20) }},
		{"log_keep_one_in", "100", "Of the lines held back for calls that went well, one in so many is written after all.",
			func(o *Options) Value { return count(&o.LogKeepOneIn, 1<<30) }},
	}
}
