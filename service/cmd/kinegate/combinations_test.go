package main

import (
	"strings"
	"testing"
)

// TestBadCombinations starts the program with settings that are each allowed and do not fit
// together: it refuses with the code of usage and names both.
func TestBadCombinations(t *testing.T) {
	const one = "127.0.0.1:9001"
	addresses := []string{"gate_address", "general_address", "health_address", "metrics_address", "debug_address"}
	type combination struct {
		set   map[string]string
		names []string
	}
	var all []combination
	add := func(names string, set ...string) {
		c := combination{map[string]string{}, strings.Fields(names)}
		for _, s := range set {
			name, value, _ := strings.Cut(s, "=")
			c.set[name] = value
		}
		all = append(all, c)
	}
	for i, a := range addresses {
		for _, b := range addresses[i+1:] {
			add(a+" "+b, a+"="+one, b+"="+one)
		}
	}
	add("key_file certificate_file", "certificate_file=x")
	add("certificate_file key_file", "key_file=x")
	add("client_ca_file certificate_file", "client_ca_file=x")
	add("access_file client_ca_file", "access_file=x", "certificate_file=x", "key_file=x")
	add("gate_address certificate_file", "gate_address=0.0.0.0:9001")
	add("general_address certificate_file", "general_address=0.0.0.0:9001")
	add("block_limit message_limit", "block_limit=5MiB", "credit_limit=8MiB")
	add("block_limit credit_limit", "block_limit=3MiB", "credit_limit=2MiB")
	add("message_limit decoded_limit", "message_limit=8MiB", "decoded_limit=4MiB")
	add("credit_limit credit_pool", "credit_limit=65MiB")
	add("gate_stream_window gate_connection_window", "gate_stream_window=8MiB")
	add("general_stream_window general_connection_window", "general_stream_window=2MiB")
	add("credit_pool memory_limit", "memory_limit=1GiB", "credit_pool=512MiB")
	add("gate_streams memory_limit", "memory_limit=1GiB", "gate_streams=1024")
	add("gate_stream_window memory_limit", "memory_limit=1GiB", "gate_stream_window=8MiB", "gate_connection_window=8MiB")
	add("general_streams memory_limit", "memory_limit=1GiB", "general_streams=8192")
	add("general_stream_window memory_limit", "memory_limit=1GiB", "general_stream_window=1MiB")
	add("connection_streams general_streams", "general_streams=127")
	add("caller_calls connection_streams", "caller_calls=129")
	add("drain_notice termination_grace", "drain_notice=15s")
	add("drain_time termination_grace", "drain_time=35s")
	add("stop_margin termination_grace", "stop_margin=20s")
	add("termination_grace drain_time", "termination_grace=30s")
	add("default_deadline longest_deadline", "default_deadline=2m")
	add("longest_deadline connection_age_grace", "connection_age_grace=30s")
	add("client_ping_advice client_ping_minimum", "client_ping_minimum=30s")
	add("client_ping_minimum client_ping_advice", "client_ping_advice=5s")
	add("ping_timeout ping_interval", "ping_timeout=30s")
	if len(all) < 30 {
		t.Errorf("only %d combinations", len(all))
	}
	t.Logf("FIGURE C2 %d combinations", len(all))
	for _, c := range all {
		t.Run(strings.Join(c.names, " "), func(t *testing.T) {
			arguments := []string{"serve"}
			for name, value := range c.set {
				arguments = append(arguments, "--"+strings.ReplaceAll(name, "_", "-"), value)
			}
			_, errs, code := output(t, nil, arguments...)
			if code != exitUsage {
				t.Errorf("code %d: %s", code, errs)
			}
			for _, name := range c.names {
				if !strings.Contains(errs, name) && !strings.Contains(errs, strings.ReplaceAll(name, "_", "-")) {
					t.Errorf("%q does not name %s", errs, name)
				}
			}
		})
	}
}
