package kinegate_test

import (
	"context"
	"errors"
	"net"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"

	kinegate "example.org/kinegate/clients/go"
)

// TestReach tells a dead port, a missing socket and a server that says nothing from one
// that answers, be it that it knows no such method.
func TestReach(t *testing.T) {
	listen := func() net.Listener {
		var config net.ListenConfig
		l, err := config.Listen(t.Context(), "tcp", "127.0.0.1:0")
		if err != nil {
			t.Fatal(err)
		}
		return l
	}
	dead, silent, alive := listen(), listen(), listen()
	if err := dead.Close(); err != nil {
		t.Fatal(err)
	}
	defer silent.Close() //nolint:errcheck // nobody writes to it
	server := grpc.NewServer()
	go func() { _ = server.Serve(alive) }()
	defer server.Stop()
	for _, c := range []struct {
		name, address string
		limit         time.Duration
		want          string // in the reason; empty for an answer
	}{
		{"dead port", dead.Addr().String(), 5 * time.Second, "connection refused"},
		{"no socket", "unix:" + filepath.Join(t.TempDir(), "none"), 5 * time.Second, "no such file"},
		{"silent", silent.Addr().String(), 300 * time.Millisecond, "in time"},
		{"alive", alive.Addr().String(), 5 * time.Second, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			client, err := kinegate.Dial(c.address, kinegate.Options{})
			if err != nil {
				t.Fatal(err)
			}
			defer client.Close() //nolint:errcheck // nothing was sent
			ctx, cancel := context.WithTimeout(t.Context(), c.limit)
			defer cancel()
			begun := time.Now()
			err = client.Reach(ctx)
			if took := time.Since(begun); took > 2*time.Second {
				t.Errorf("took %v", took)
			}
			if c.want == "" {
				if err != nil {
					t.Error(err)
				}
				return
			}
			unreachable, ok := errors.AsType[*kinegate.UnreachableError](err)
			if !ok || unreachable.Address != c.address || !strings.Contains(unreachable.Reason, c.want) {
				t.Errorf("%v, want %q at %s", err, c.want, c.address)
			}
		})
	}
}
