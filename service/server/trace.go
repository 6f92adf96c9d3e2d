package server

import (
	"context"
	"encoding/binary"
	"encoding/hex"
	"math/rand/v2"

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
	t := trace{span: randomHex(spanDigits)}
	if values := metadata.ValueFromIncomingContext(ctx, traceKey); len(values) == 1 {
		t.id, t.sampled = parseTraceparent(values[0])
	}
	if t.id == "" {
		t.id = randomHex(traceDigits)
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

// Where the parts of a traceparent of version 00 begin, and its length.
const (
	idAt              = 3
	spanAt            = idAt + traceDigits + 1
	flagsAt           = spanAt + spanDigits + 1
	traceparentLength = flagsAt + flagDigits
)

// parseTraceparent returns the trace id of a header and whether it is sampled; the id is
// empty for one that is malformed. Later versions may have more after the flags.
func parseTraceparent(text string) (id string, sampled bool) {
	if len(text) < traceparentLength || text[:2] == "ff" ||
		len(text) > traceparentLength && (text[:2] == "00" || text[traceparentLength] != '-') {
		return "", false
	}
	if text[idAt-1] != '-' || text[spanAt-1] != '-' || text[flagsAt-1] != '-' {
		return "", false
	}
	id, span, flags := text[idAt:spanAt-1], text[spanAt:flagsAt-1], text[flagsAt:traceparentLength]
	for _, part := range [...]string{text[:2], id, span, flags} {
		if !lowerHex(part) {
			return "", false
		}
	}
	if id == noTrace || span == noTrace[:spanDigits] {
		return "", false
	}
	bits, err := hex.DecodeString(flags)
	return id, err == nil && bits[0]&1 == 1
}

// noTrace is the id that stands for none.
const noTrace = "00000000000000000000000000000000"

// lowerHex reports whether a text is of hexadecimal digits in lower case alone.
func lowerHex(text string) bool {
	for _, b := range []byte(text) {
		if (b < '0' || b > '9') && (b < 'a' || b > 'f') {
			return false
		}
	}
	return true
}

// randomHex returns so many random hexadecimal digits, a multiple of 16. Ids must differ;
// they are no secret.
func randomHex(digits int) string {
	var raw [traceDigits / 2]byte
	var text [traceDigits]byte
	for at := 0; at < digits/2; at += 8 {
		binary.BigEndian.PutUint64(raw[at:], rand.Uint64()) //nolint:gosec // see above
	}
	hex.Encode(text[:], raw[:digits/2])
	return string(text[:digits])
}
