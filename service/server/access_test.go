package server

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials"
	reflectionpb "google.golang.org/grpc/reflection/grpc_reflection_v1"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

func TestAccessFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "access")
	writeFile(t, path, []byte("# who may what\nspiffe://a/x  p.S/M p.T # and no more\n\nb.example.org *\nspiffe://a/x p.U/N\n"))
	a, err := readAccess(path)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		names   string
		method  string
		allowed bool
	}{
		{"spiffe://a/x", "/p.S/M", true}, {"spiffe://a/x", "/p.S/N", false}, {"spiffe://a/x", "/p.T/Any", true},
		{"spiffe://a/x", "/p.Tx/Any", false}, {"spiffe://a/x", "/p.U/N", true}, {"spiffe://a/xy", "/p.S/M", false},
		{"SPIFFE://a/x", "/p.S/M", false}, {"b.example.org", "/q.V/W", true}, {"c.example.org", "/q.V/W", false},
		{"c.example.org b.example.org", "/q.V/W", true}, {"*", "/q.V/W", false}, {"", "/p.S/M", false},
	} {
		if err := a.check(strings.Fields(c.names), c.method); (err == nil) != c.allowed {
			t.Errorf("%q for %s: %v", c.names, c.method, err)
		}
	}
	for name, text := range map[string]string{
		"nothing allowed": "spiffe://a/x\n", "leading slash": "a /p.S/M\n", "no method": "a p.S/\n",
		"pattern": "a p.S/*\n", "pattern of services": "a p.*\n", "deeper": "a p.S/M/N\n",
	} {
		writeFile(t, path, []byte("b *\n"+text))
		if _, err := readAccess(path); err == nil || !strings.Contains(err.Error(), "access_file") || !strings.Contains(err.Error(), "line 2") {
			t.Errorf("%s: %v", name, err)
		}
	}
	writeFile(t, path, nil)
	if a, err = readAccess(path); err != nil || a.check([]string{"a"}, "/p.S/M") == nil {
		t.Errorf("an empty file allows something: %v", err)
	}
}

// TestAccessIsWithdrawn removes an identity while it has streams open: new calls are
// denied and the streams end, also one that waits for the caller.
func TestAccessIsWithdrawn(t *testing.T) {
	a := newAuthority(t)
	f := a.files(t)
	path := filepath.Join(t.TempDir(), "access")
	writeFile(t, path, []byte("spiffe://example.org/trigger *\nspiffe://example.org/shift kinegate.v1.InfoService/GetInfo\n"))
	r := start(t, onSockets, f.mutual, func(o *Options, _ *Deps) { o.AccessFile = path })
	dial := func(uri string) *grpc.ClientConn {
		chain, key := a.issue(t, uri, time.Hour)
		conn, err := grpc.NewClient(r.Addr(General).String(), grpc.WithTransportCredentials(credentials.NewTLS(a.trusting(t, chain, key))))
		if err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { _ = conn.Close() })
		return conn
	}
	ask := func(conn *grpc.ClientConn) error {
		_, err := kinegatev1.NewInfoServiceClient(conn).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
		return err
	}
	trigger, shift, stranger := dial("spiffe://example.org/trigger"), dial("spiffe://example.org/shift"), dial("spiffe://example.org/x")
	if err := ask(trigger); err != nil {
		t.Fatal(err)
	}
	if err := ask(shift); err != nil {
		t.Fatal(err)
	}
	wantReason(t, ask(stranger), api.CallerNotAllowed)
	_, err := kinegatev1.NewParticleServiceClient(shift).ListParticles(t.Context(), &kinegatev1.ListParticlesRequest{})
	wantReason(t, err, api.CallerNotAllowed)
	reflecting, err := reflectionpb.NewServerReflectionClient(trigger).ServerReflectionInfo(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	list := &reflectionpb.ServerReflectionRequest{MessageRequest: &reflectionpb.ServerReflectionRequest_ListServices{}}
	if err := reflecting.Send(list); err != nil {
		t.Fatal(err)
	}
	if _, err := reflecting.Recv(); err != nil {
		t.Fatal(err)
	}
	denied, err := reflectionpb.NewServerReflectionClient(shift).ServerReflectionInfo(t.Context())
	if err == nil {
		_, err = denied.Recv()
	}
	wantReason(t, err, api.CallerNotAllowed)
	judging := idleJudge(t, trigger)

	begun := time.Now()
	// Renamed over the old one, as an orchestrator does.
	writeFile(t, path+".new", []byte("spiffe://example.org/shift kinegate.v1.InfoService/GetInfo\n"))
	if err := os.Rename(path+".new", path); err != nil {
		t.Fatal(err)
	}
	_, err = reflecting.Recv()
	wantReason(t, err, api.CallerNotAllowed)
	for err = nil; err == nil; {
		_, err = judging.Recv() // heartbeats may be under way
	}
	wantReason(t, err, api.CallerNotAllowed)
	took := time.Since(begun)
	if took > 6*time.Second {
		t.Errorf("the streams lived for %v", took)
	}
	t.Logf("FIGURE X4 streams ended %v after the file changed", took.Round(10*time.Millisecond))
	wantReason(t, ask(trigger), api.CallerNotAllowed)
	if err := ask(shift); err != nil {
		t.Errorf("another caller: %v", err)
	}
}

// idleJudge opens a judge stream that waits for blocks.
func idleJudge(t *testing.T, conn *grpc.ClientConn) grpc.BidiStreamingClient[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse] {
	t.Helper()
	stream, err := kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	open := &kinegatev1.JudgeOpen{Selection: given(pairSelection())}
	if err := stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: open}}); err != nil {
		t.Fatal(err)
	}
	if m, err := stream.Recv(); err != nil || m.GetOpened() == nil {
		t.Fatalf("%v %v", m, err)
	}
	return stream
}
