package server

import (
	"context"
	"net"
	"runtime"
	"strconv"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func TestStrikes(t *testing.T) {
	now := time.Unix(0, 0)
	full := func() *strikes {
		s := &strikes{}
		for i := range mostStrikes {
			if s.note(true, now) {
				t.Fatalf("call %d is one too many", i)
			}
		}
		return s
	}
	s := full()
	if !s.note(true, now) {
		t.Error("not bounded")
	}
	if s.note(true, now) {
		t.Error("told twice")
	}
	if s.weight(time.Minute) != abuseWeight {
		t.Error("what was closed counts as nothing")
	}
	if fresh := (&strikes{}); fresh.weight(0) != 1 || fresh.weight(fruitless) != 0 {
		t.Error("not the time decides for one without calls")
	}
	s = full()
	now = now.Add(time.Second)
	for i := range strikesPerSecond {
		if s.note(true, now) {
			t.Fatalf("a second later, call %d is one too many", i)
		}
	}
	if !s.note(true, now) {
		t.Error("a second later, not bounded")
	}
	var patient strikes
	for i := range 10 * mostStrikes {
		if patient.note(i%2 == 0, now) {
			t.Fatal("half of the calls given up are too many")
		}
	}
	if patient.weight(0) != 0 {
		t.Error("a connection with calls came to nothing")
	}
}

// TestCallsGivenUp: a connection that gives up call after call is closed, and one that
// makes many calls is not.
func TestCallsGivenUp(t *testing.T) {
	r := start(t, onSockets)
	client := kinegatev1.NewInfoServiceClient(connect(t, r.Addr(General).String()))
	for range 2 * mostStrikes {
		if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
			t.Fatal(err)
		}
	}
	impatient := connect(t, r.Addr(General).String())
	eventually(t, "the end of the connection", func() bool {
		for range mostStrikes {
			ctx, cancel := context.WithCancel(t.Context())
			_, _ = impatient.NewStream(ctx, &grpc.StreamDesc{ClientStreams: true}, kinegatev1.InfoService_GetInfo_FullMethodName)
			cancel()
		}
		return r.metric(t, "rpc_server_rejected_total", connectionAbused) >= 1
	})
	if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
		t.Errorf("another connection: %v", err)
	}
}

// connect connects to an address in plaintext.
func connect(t *testing.T, where string) *grpc.ClientConn {
	t.Helper()
	conn, err := grpc.NewClient(where, grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = conn.Close() })
	return conn
}

func TestSuspects(t *testing.T) {
	now := time.Unix(0, 0)
	s := &suspects{known: map[string]*fading{}}
	for i := range mostFruitless {
		if s.refused("a", now) {
			t.Fatalf("refused after %d", i)
		}
		if tooMany := s.note("a", 1, now); tooMany != (i == mostFruitless-1) {
			t.Fatalf("connection %d: too many %v", i, tooMany)
		}
	}
	if !s.refused("a", now) || s.refused("b", now) {
		t.Error("not a alone is refused")
	}
	for range 100 {
		s.note("a", abuseWeight, now)
	}
	// Counted no further than one that was thrown out takes it.
	span := time.Second * (abuseWeight + 1) / fruitlessPerSecond
	if !s.refused("a", now.Add(span/2)) || s.refused("a", now.Add(span)) {
		t.Error("not let in again when it should be")
	}
	for i := range 3 * mostAddresses {
		s.note(strconv.Itoa(i), 1, now)
		if len(s.known) > mostAddresses {
			t.Fatalf("%d addresses", len(s.known))
		}
	}
	s.note("", 1, now)
	s.note("idle", 0, now)
	if s.known[""] != nil || s.known["idle"] != nil {
		t.Error("counted without a cause")
	}
}

func TestWhose(t *testing.T) {
	for _, c := range []struct{ address, user, want string }{
		{"192.0.2.7:80", "", "192.0.2.7"},
		{"[::ffff:192.0.2.7]:80", "", "192.0.2.7"},
		{"[2001:db8:1:2:3:4:5:6]:80", "", "2001:db8:1:2::/64"},
		{"[2001:db8:1:2:7:7:7:7]:81", "", "2001:db8:1:2::/64"},
		{"[fe80::1%eth0]:80", "", "fe80::/64"},
		{"@", "1000", "user 1000"},
		{"@", "", ""},
		{"bufconn", "", ""},
	} {
		if got := whose(named(c.address), c.user); got != c.want {
			t.Errorf("%s of %q: %q, want %q", c.address, c.user, got, c.want)
		}
	}
}

// named is an address by its text.
type named string

func (named) Network() string  { return "" }
func (n named) String() string { return string(n) }

// TestConnectionsThatComeToNothing: an address whose connections end at once without a
// call finds no place for a while; behind a proxy it does, and so does whose calls are
// answered.
func TestConnectionsThatComeToNothing(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("only Linux has all of 127.0.0.0/8")
	}
	const connections = 4 * mostFruitless
	const other, worker = "127.0.0.2", "127.0.0.3"
	for _, proxied := range []bool{false, true} {
		t.Run("behind a proxy "+strconv.FormatBool(proxied), func(t *testing.T) {
			r := start(t, func(o *Options, d *Deps) {
				onSockets(o, d)
				o.BehindProxy = proxied
			})
			where := r.Addr(General).String()
			from := func(address string) net.Dialer {
				return net.Dialer{LocalAddr: &net.TCPAddr{IP: net.ParseIP(address)}}
			}
			ask := func(address string) error {
				conn, err := grpc.NewClient(where, grpc.WithTransportCredentials(insecure.NewCredentials()),
					grpc.WithContextDialer(func(ctx context.Context, where string) (net.Conn, error) {
						d := from(address)
						return d.DialContext(ctx, "tcp", where)
					}))
				if err != nil {
					return err
				}
				defer func() { _ = conn.Close() }()
				_, err = kinegatev1.NewInfoServiceClient(conn).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
				return err
			}
			for range connections {
				if err := ask(worker); err != nil {
					t.Fatalf("one call a connection: %v", err)
				}
			}
			hasty := from(other)
			comeToNothing := func() {
				for range connections {
					conn, err := hasty.DialContext(t.Context(), "tcp", where)
					if err != nil {
						t.Fatal(err)
					}
					_ = conn.Close()
				}
			}
			refused := func() float64 { return r.metric(t, "rpc_server_rejected_total", connectionAbused) }
			comeToNothing()
			if proxied {
				if err := ask(other); err != nil || refused() != 0 {
					t.Errorf("refused: %v", err)
				}
				return
			}
			// A server that is late to see that connections have ended lets in more of the
			// first ones; of those that come when it has seen enough it refuses most.
			eventually(t, "an address refused", func() bool { return refused() > 0 })
			before := refused()
			comeToNothing()
			eventually(t, "most connections refused", func() bool { return refused()-before >= connections/2 })
			if err := ask(other); err == nil {
				t.Error("there was a place")
			}
			if err := ask(worker); err != nil {
				t.Errorf("another address: %v", err)
			}
			if !strings.Contains(r.log.String(), `"reason":"CONNECTION_ABUSED","peer":"`+other+`"`) {
				t.Error("no line says who")
			}
			eventually(t, "a place again", func() bool { return ask(other) == nil })
		})
	}
}
