package server

import (
	"context"
	"fmt"
	"net"
	"os"
	"sync"
	"sync/atomic"
	"time"

	"github.com/rs/zerolog"
	"google.golang.org/grpc/peer"

	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// Listener names one of the listeners of a server.
type Listener string

// The listeners.
const (
	Gate    Listener = "gate"
	General Listener = "general"
	Health  Listener = "health"
	Metrics Listener = "metrics"
	Debug   Listener = "debug"
)

// Reasons under which connections are counted that end without a call to answer.
const (
	connectionLimit  = "CONNECTION_LIMIT"
	connectionAbused = "CONNECTION_ABUSED"
)

// socketMode lets the owner and the group of a unix socket connect.
const socketMode = 0o660

// listenOS opens a listener of the operating system. The socket file of a process that
// died is taken over; that of one that lives is not.
func listenOS(ctx context.Context, network, where string) (net.Listener, error) {
	var config net.ListenConfig
	if network == unixNetwork && abandoned(ctx, where) {
		_ = os.Remove(where)
	}
	l, err := config.Listen(ctx, network, where)
	if err != nil {
		return nil, fmt.Errorf("listening: %w", err)
	}
	if network != unixNetwork {
		return l, nil
	}
	if err := os.Chmod(where, socketMode); err != nil {
		_ = l.Close()
		return nil, fmt.Errorf("opening the socket to its group: %w", err)
	}
	return l, nil
}

// abandoned reports whether there is a socket file that nobody listens on.
func abandoned(ctx context.Context, path string) bool {
	info, err := os.Lstat(path)
	if err != nil || info.Mode().Type() != os.ModeSocket {
		return false
	}
	var dialer net.Dialer
	conn, err := dialer.DialContext(ctx, unixNetwork, path)
	if err != nil {
		return true
	}
	_ = conn.Close()
	return false
}

// places bounds the connections of several listeners together.
type places struct {
	most     int64
	open     atomic.Int64
	metrics  *telemetry.Metrics
	suspects *suspects
	warn     func() *zerolog.Event // starts a bounded line
}

// bounded is a listener that closes connections over the limit at once, and those from
// addresses of suspects, so that they cost neither a handshake nor a goroutine.
type bounded struct {
	net.Listener

	places *places
}

// Accept returns the next connection that finds a place.
func (b bounded) Accept() (net.Conn, error) {
	for {
		conn, err := b.Listener.Accept()
		if err != nil {
			return nil, err //nolint:wrapcheck // gRPC looks for net.Error in it
		}
		placed, reason := b.places.take(conn)
		if reason == "" {
			return placed, nil
		}
		b.places.metrics.Rejected(reason)
		_ = conn.Close()
	}
}

// take takes a place for a connection, or says why there is none.
func (p *places) take(conn net.Conn) (taken *placed, reason string) {
	now, user := time.Now(), peerUser(conn)
	from := whose(conn.RemoteAddr(), user)
	if p.suspects.refused(from, now) {
		return nil, connectionAbused
	}
	if p.open.Add(1) > p.most {
		p.open.Add(-1)
		return nil, connectionLimit
	}
	p.metrics.Connections(1)
	return &placed{Conn: conn, places: p, since: now, user: user, from: from}, ""
}

// placed is a connection that gives its place back when it is closed.
type placed struct {
	net.Conn
	strikes

	places *places
	since  time.Time
	user   string // number of the user at the other end of a unix socket; empty where it cannot be told
	from   string // what it is counted against
	once   sync.Once
}

// RemoteAddr is the address of the peer, through which calls find their connection.
func (p *placed) RemoteAddr() net.Addr { return origin{p.Conn.RemoteAddr(), p} }

// origin is the address of a peer with the connection to it.
type origin struct {
	net.Addr

	conn *placed
}

// connectionOf tells a judge stream what it may know of its connection. Its life ends
// before the transport would cut it: calls that a connection still takes have the
// grace before them, whatever its age.
func (o *Options) connectionOf(ctx context.Context) api.Connection {
	p, ok := peer.FromContext(ctx)
	if !ok {
		return api.Connection{}
	}
	from, ok := p.Addr.(origin)
	if !ok {
		return api.Connection{}
	}
	const early, half = 0.85, 2 // the transport varies the age by a tenth
	left := time.Duration(early*float64(o.ConnectionAge)) - time.Since(from.conn.since)
	c := api.Connection{Life: max(left, o.ConnectionAgeGrace/half)}
	if !o.BehindProxy {
		c.Close = func() { _ = from.conn.Close() } // what it leads to is told by the stream
	}
	return c
}

// Close closes the connection.
func (p *placed) Close() error {
	p.once.Do(func() {
		p.places.open.Add(-1)
		p.places.metrics.Connections(-1)
		now := time.Now()
		if p.places.suspects.note(p.from, p.weight(now.Sub(p.since)), now) {
			p.places.warn().Str("reason", connectionAbused).Str("peer", p.from).
				Msg("too many connections from here came to nothing: more are refused for now")
		}
	})
	return p.Conn.Close() //nolint:wrapcheck // the connection's own error
}
