package server

import (
	"context"
	"crypto/rand"
	"encoding/hex"
	"strings"

	"google.golang.org/grpc/metadata"
)

// traceKey is the metadata of the W3C's trace context. The service makes no spans: it
// joins its log lines and metrics to the caller's trace, or to one of its own.
const traceKey = "traceparent"

// Sizes of the parts of a traceparent of version 00, in hexadecimal digits.
const (
	traceDigits = 32
	spanDigits  = 16
	flagDigits  = 2
)

// trace is where a call stands in a trace.
type trace struct {
	id, span string // hexadecimal
	sampled  bool
}

// traceOf continues the trace of a caller, or begins one if there is none or it is
// malformed.
func traceOf(ctx context.Context) trace {
	t := trace{span: randomHex(spanDigits / 2)}
	if values := metadata.ValueFromIncomingContext(ctx, traceKey); len(values) == 1 {
		t.id, t.sampled = parseTraceparent(values[0])
	}
	if t.id == "" {
		t.id = randomHex(traceDigits / 2)
	}
	return t
}

// header is the trace with the span of this call, for the reply.
func (t trace) header() string {
	flags := "00"
	if t.sampled {
		flags = "01"
	}
	return "00-" + t.id + "-" + t.span + "-" + flags
}

// parseTraceparent returns the trace id of a header and whether it is sampled; the id is
// empty for one that is malformed. Later versions may have more after the flags.
func parseTraceparent(text string) (id string, sampled bool) {
	const length = 2 + 1 + traceDigits + 1 + spanDigits + 1 + flagDigits
	if len(text) < length || len(text) > length && (text[:2] == "00" || text[length] != '-') {
		return "", false
	}
	parts := strings.Split(text[:length], "-")
	if len(parts) != 4 || len(parts[0]) != 2 || len(parts[1]) != traceDigits || len(parts[2]) != spanDigits {
		return "", false
	}
	for _, p := range parts {
		if strings.Trim(p, "0123456789abcdef") != "" {
			return "", false
		}
	}
	if parts[0] == "ff" || strings.Trim(parts[1], "0") == "" || strings.Trim(parts[2], "0") == "" {
		return "", false
	}
	flags, err := hex.DecodeString(parts[3])
	return parts[1], err == nil && flags[0]&1 == 1
}

// randomHex returns random bytes in hexadecimal.
func randomHex(n int) string {
	b := make([]byte, n)
	_, _ = rand.Read(b) // it never fails
	return hex.EncodeToString(b)
}
