package kinegate

import (
	"context"
	"fmt"
	"strings"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	"google.golang.org/grpc/status"
)

// UnreachableError tells that no server could be asked.
type UnreachableError struct {
	// Address is what was dialled.
	Address string
	// Reason is why there is no connection.
	Reason string
}

// Error names the address and the reason.
func (e *UnreachableError) Error() string {
	return "no server answers at " + e.Address + ": " + e.Reason
}

// Reach connects now and returns once a server answers, whatever it answers. Calls wait
// for a server that is not there yet; Reach returns at once if the connection is refused,
// with an *UnreachableError, for people who have mistyped an address.
func (c *Client) Reach(ctx context.Context) error {
	_, err := healthpb.NewHealthClient(c.conn).Check(ctx, &healthpb.HealthCheckRequest{}, grpc.WaitForReady(false))
	s := status.Convert(err)
	switch {
	case s.Code() == codes.Unavailable && len(s.Details()) == 0:
		return &UnreachableError{c.conn.Target(), plainReason(s.Message())}
	case s.Code() == codes.DeadlineExceeded && ctx.Err() != nil:
		return &UnreachableError{c.conn.Target(), "nothing came back in time"}
	case ctx.Err() != nil:
		return context.Cause(ctx)
	}
	return nil
}

// unreachable tells why nobody answered an opening in time: how gRPC failed to connect where
// that is known.
func (c *Client) unreachable(err error, limit time.Duration) *UnreachableError {
	reason := fmt.Sprintf("nothing came back in %v", limit)
	if _, last, found := strings.Cut(err.Error(), "connection error: "); found {
		reason = plainReason(last)
	}
	return &UnreachableError{c.conn.Target(), reason}
}

// plainReason is the innermost reason of a transport's error, without its frames.
func plainReason(message string) string {
	for _, frame := range []string{`desc = "`, "transport: ", "Error while dialing: "} {
		if _, inner, found := strings.Cut(message, frame); found {
			message = inner
		}
	}
	return strings.TrimSuffix(message, `"`)
}
