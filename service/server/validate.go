package server

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
)

// memoryShare is the part of the memory limit that event blocks in flight and flow
// control may fill together: the rest is for decoded events, verdicts and the
// runtime's own slack.
const memoryShare = 0.5

// Validate reports every fault of the options at once, as a fault.List whose fields
// are names of settings. It opens no file.
func (o *Options) Validate() error {
	var faults fault.List
	for _, s := range Settings() {
		if e := s.In(o).Check(); e != nil {
			e.Field = s.Name
			faults = append(faults, e)
		}
	}
	faults = append(faults, o.addressFaults()...)
	faults = append(faults, o.credentialFaults()...)
	faults = append(faults, o.sizeFaults()...)
	faults = append(faults, o.timeFaults()...)
	return faults.Err()
}

// clash is a fault of two settings that do not fit together.
func clash(name, value, allowed, problem string) *fault.Error {
	return fault.New(fault.Infeasible, name, value, allowed).Because(problem)
}

func (o *Options) addressFaults() fault.List {
	var faults fault.List
	seen := map[string]string{}
	for _, a := range []struct {
		name, value        string
		required, loopback bool
	}{
		{"gate_address", o.GateAddress, true, false},
		{"general_address", o.GeneralAddress, true, false},
		{"health_address", o.HealthAddress, false, false},
		{"metrics_address", o.MetricsAddress, false, false},
		{"debug_address", o.DebugAddress, false, true},
	} {
		if a.value == "" && !a.required {
			continue
		}
		address, e := parseAddress(a.value)
		switch {
		case e != nil:
			e.Field = a.name
			faults = append(faults, e)
		case a.loopback && !address.local():
			faults = append(faults, fault.New(fault.Invalid, a.name, a.value,
				"a loopback address or a unix socket").Because("profiles show the inside of the process"))
		case address.fixed() && seen[a.value] != "":
			faults = append(faults, clash(a.name, a.value, "an address of its own",
				"the address is that of "+seen[a.value]))
		default:
			seen[a.value] = a.name
		}
	}
	return faults
}

func (o *Options) credentialFaults() fault.List {
	var faults fault.List
	if (o.CertificateFile == "") != (o.KeyFile == "") {
		faults = append(faults, clash("key_file", o.KeyFile, "both or neither of certificate_file and key_file",
			"a certificate and its key go together"))
	}
	if o.ClientCAFile != "" && o.CertificateFile == "" {
		faults = append(faults, clash("client_ca_file", o.ClientCAFile, "only with certificate_file",
			"callers show certificates over TLS only"))
	}
	if o.AccessFile != "" && o.ClientCAFile == "" {
		faults = append(faults, clash("access_file", o.AccessFile, "only with client_ca_file",
			"without certificates of callers nobody could be told apart"))
	}
	if o.CertificateFile != "" || o.UnsafePlaintext {
		return faults
	}
	for _, a := range []struct{ name, value string }{
		{"gate_address", o.GateAddress}, {"general_address", o.GeneralAddress},
	} {
		if address, e := parseAddress(a.value); e == nil && !address.local() {
			faults = append(faults, clash(a.name, a.value,
				"a loopback address, a unix socket, or certificate_file and key_file",
				"rpcs would cross the network without TLS; --unsafe-plaintext-on-the-network allows that"))
		}
	}
	return faults
}

func (o *Options) sizeFaults() fault.List {
	var faults fault.List
	most := func(name string, value Bytes, limitName string, limit Bytes) {
		if value > limit {
			faults = append(faults, clash(name, value.String(), "at most "+limitName+", "+limit.String(),
				"it is above "+limitName))
		}
	}
	most("block_limit", o.BlockLimit, "message_limit", o.MessageLimit)
	most("block_limit", o.BlockLimit, "credit_limit", o.CreditLimit)
	most("message_limit", o.MessageLimit, "decoded_limit", o.DecodedLimit)
	most("credit_limit", o.CreditLimit, "credit_pool", o.CreditPool)
	most("gate_stream_window", o.GateStreamWindow, "gate_connection_window", o.GateConnectionWindow)
	most("general_stream_window", o.GeneralStreamWindow, "general_connection_window", o.GeneralConnectionWindow)
	if o.MemoryLimit > 0 {
		filled := Bytes(o.GateStreams)*o.GateStreamWindow +
			Bytes(o.GeneralStreams)*o.GeneralStreamWindow + o.CreditPool
		share := Bytes(memoryShare * float64(o.MemoryLimit))
		if filled > share {
			faults = append(faults, clash("credit_pool", o.CreditPool.String(),
				"gate_streams x gate_stream_window + general_streams x general_stream_window + credit_pool at most "+
					share.String()+", half of memory_limit",
				"together they are "+filled.String()))
		}
	}
	if o.ConnectionStreams > o.GeneralStreams {
		faults = append(faults, clash("connection_streams", strconv.Itoa(o.ConnectionStreams),
			"at most general_streams, "+strconv.Itoa(o.GeneralStreams),
			"one connection could take every place of general_streams"))
	}
	if o.CallerCalls > o.ConnectionStreams {
		faults = append(faults, clash("caller_calls", strconv.Itoa(o.CallerCalls),
			"at most connection_streams, "+strconv.Itoa(o.ConnectionStreams),
			"calls over connection_streams would wait in the caller, where nobody sees them, before any is refused"))
	}
	return faults
}

func (o *Options) timeFaults() fault.List {
	var faults fault.List
	if sum := o.DrainNotice + o.DrainTime + o.StopMargin; sum > o.TerminationGrace {
		faults = append(faults, clash("termination_grace", o.TerminationGrace.String(),
			"at least drain_notice + drain_time + stop_margin, "+sum.String(),
			"the process would be killed while it drains"))
	}
	if o.DefaultDeadline > o.LongestDeadline {
		faults = append(faults, clash("default_deadline", o.DefaultDeadline.String(),
			"at most longest_deadline, "+o.LongestDeadline.String(), "it is above longest_deadline"))
	}
	if o.LongestDeadline > o.ConnectionAgeGrace {
		faults = append(faults, clash("longest_deadline", o.LongestDeadline.String(),
			"at most connection_age_grace, "+o.ConnectionAgeGrace.String(), "calls would be cut with their connection"))
	}
	if o.ClientPingAdvice < o.ClientPingMinimum {
		faults = append(faults, clash("client_ping_advice", o.ClientPingAdvice.String(),
			"at least client_ping_minimum, "+o.ClientPingMinimum.String(), "the server would cut off such clients"))
	}
	if o.PingTimeout > o.PingInterval {
		faults = append(faults, clash("ping_timeout", o.PingTimeout.String(),
			"at most ping_interval, "+o.PingInterval.String(), "pings would overlap"))
	}
	return faults
}
