package server

import (
	"strconv"
	"strings"
	"time"

	"github.com/rs/zerolog"
	"google.golang.org/grpc/codes"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
)

// write finishes the log line of a call. Nothing that a caller sent is in it but the
// method, a plain request id and the identity of a checked certificate.
func (f *front) write(line *zerolog.Event, c *call, code string, took time.Duration) {
	line.Str("method", printable(c.method)).
		Str("code", code).
		Dur("duration_ms", took).
		Func(c.writeSizes).
		Func(c.writeOrigin).
		Msg("call")
}

// writeSizes adds what went to and fro so far.
func (c *call) writeSizes(line *zerolog.Event) {
	line.Int64("received_count", c.received.Load()).
		Int64("received_bytes", c.receivedBytes.Load()).
		Int64("sent_count", c.sent.Load()).
		Int64("sent_bytes", c.sentBytes.Load())
}

// writeOrigin adds who called and what joins the line to others.
func (c *call) writeOrigin(line *zerolog.Event) {
	line.Str("identity", c.identity()).
		Str("request_id", c.requestID).
		Str("reference", c.reference).
		Str("trace_id", c.trace.id).
		Str("span_id", c.trace.span)
}

// writeOpened writes the line of a stream that begins; its other line comes when it
// ends, which may be in hours.
func (f *front) writeOpened(c *call) {
	c.use.callLog.Well().
		Str("method", printable(c.method)).
		Func(c.writeOrigin).
		Msg("stream")
}

// writeSummary writes the line of a stream that goes on.
func (f *front) writeSummary(c *call, open time.Duration) {
	f.current.Load().callLog.Well().
		Str("method", printable(c.method)).
		Dur("duration_ms", open).
		Func(c.writeSizes).
		Func(c.writeOrigin).
		Msg("stream goes on")
}

// isHealth reports whether a method belongs to the health check.
func isHealth(method string) bool {
	return strings.HasPrefix(method, "/"+healthpb.Health_ServiceDesc.ServiceName+"/")
}

// maxMethod bounds how much of an unknown method's name is logged.
const maxMethod = 120

// printable cuts an unknown method's name to a length.
func printable(method string) string {
	if len(method) > maxMethod {
		return strings.ToValidUTF8(method[:maxMethod], "") + "..."
	}
	return method
}

// codeName is the name of a code as the gRPC specification writes it.
func codeName(code codes.Code) string {
	names := [...]string{
		"OK", "CANCELLED", "UNKNOWN", "INVALID_ARGUMENT", "DEADLINE_EXCEEDED", "NOT_FOUND", "ALREADY_EXISTS",
		"PERMISSION_DENIED", "RESOURCE_EXHAUSTED", "FAILED_PRECONDITION", "ABORTED", "OUT_OF_RANGE",
		"UNIMPLEMENTED", "INTERNAL", "UNAVAILABLE", "DATA_LOSS", "UNAUTHENTICATED",
	}
	if int(code) < len(names) {
		return names[code]
	}
	return "CODE_" + strconv.Itoa(int(code))
}
