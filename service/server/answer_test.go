package server

import (
	"context"
	"errors"
	"io"
	"strconv"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/metadata"
	"google.golang.org/protobuf/encoding/protowire"
	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// methods are all methods of our own services.
func methods(r *running) []string {
	var all []string
	for service, info := range r.fronts[General].server.GetServiceInfo() {
		if !strings.HasPrefix(service, "kinegate.") {
			continue
		}
		for _, m := range info.Methods {
			all = append(all, "/"+service+"/"+m.Name)
		}
	}
	return all
}

// TestEveryFailureCarriesAReason sends each class of failure to each method.
func TestEveryFailureCarriesAReason(t *testing.T) {
	r := start(t)
	conn := r.general(t)
	all := methods(r)
	if len(all) < 7 {
		t.Fatalf("only %d methods: %v", len(all), all)
	}
	limit := int(r.options.MessageLimit)
	for _, method := range all {
		t.Run(method[1:], func(t *testing.T) {
			t.Run("undecodable", func(t *testing.T) {
				wantReason(t, rawly(t.Context(), conn, method, []byte{0xff, 0xff, 0xff}), api.MessageUndecodable)
			})
			t.Run("text that is not UTF-8", func(t *testing.T) {
				// Field 1 as a string of one broken byte; where it is none, the wire
				// form is malformed.
				err := rawly(t.Context(), conn, method, []byte{0x0a, 0x01, 0xff})
				if err != nil {
					reasonOf(t, err)
				}
			})
			t.Run("over the limit by one", func(t *testing.T) {
				m := wantReason(t, rawly(t.Context(), conn, method, make([]byte, limit+1)), api.MessageTooLarge)
				if m["limit"] != strconv.Itoa(limit) || m["actual"] != strconv.Itoa(limit+1) {
					t.Errorf("metadata %v", m)
				}
			})
			t.Run("no message", func(t *testing.T) {
				err := rawly(t.Context(), conn, method)
				if strings.HasSuffix(method, "/Judge") {
					wantReason(t, err, api.StreamProtocolBroken)
					return
				}
				wantReason(t, err, api.MessageUndecodable)
			})
			t.Run("two messages", func(t *testing.T) {
				err := rawly(t.Context(), conn, method, nil, nil)
				if strings.HasSuffix(method, "/Judge") {
					wantReason(t, err, api.StreamProtocolBroken)
					return
				}
				wantReason(t, err, api.MessageUndecodable)
			})
			t.Run("empty message", func(t *testing.T) {
				if err := rawly(t.Context(), conn, method, nil); err != nil {
					reasonOf(t, err)
				}
			})
		})
	}
	for _, method := range []string{"/kinegate.v1.ParticleService/No", "/no.Service/No", "/a/b/c"} {
		t.Run("unknown "+method, func(t *testing.T) {
			m := wantReason(t, rawly(t.Context(), conn, method, nil), api.MethodUnknown)
			if m["method"] != method {
				t.Errorf("metadata %v", m)
			}
		})
	}
	if n := r.metric(t, "rpc_server_calls_total", "UNKNOWN"); n != 0 {
		t.Errorf("%g calls ended UNKNOWN", n)
	}
	if n := r.metric(t, "rpc_server_calls_in_flight"); n != 0 {
		t.Errorf("%g calls still in flight", n)
	}
	if n := r.metric(t, "kinegate_panics_total"); n != 0 {
		t.Errorf("%g panics", n)
	}
}

// malformed paths never reach a handler; gRPC-Go's client sends them as they are.
func TestMalformedPaths(t *testing.T) {
	r := start(t)
	conn := r.general(t)
	for _, path := range []string{"kinegate.v1.InfoService/GetInfo", "/GetInfo", "x"} {
		t.Run(path, func(t *testing.T) {
			stream, err := conn.NewStream(t.Context(), &grpc.StreamDesc{ServerStreams: true}, path, grpc.ForceCodec(raw{}))
			if err == nil {
				_ = stream.SendMsg([]byte(nil))
				_ = stream.CloseSend()
				err = stream.RecvMsg(new([]byte))
			}
			// The client completes a path without its slash; both forms must be refused.
			if err == nil {
				return
			}
			reasonOf(t, err)
		})
	}
}

// hooked replaces the answer of GetInfo with one of the test's.
type hooked struct {
	kinegatev1.UnimplementedInfoServiceServer
	kinegatev1.UnimplementedSelectionServiceServer

	answer func(context.Context) (*kinegatev1.GetInfoResponse, error)
	judge  func(grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]) error
}

func (h *hooked) GetInfo(ctx context.Context, _ *kinegatev1.GetInfoRequest) (*kinegatev1.GetInfoResponse, error) {
	return h.answer(ctx)
}

func (h *hooked) Judge(s grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]) error {
	return h.judge(s)
}

// startHooked runs a server whose general listener has the test's services instead of
// the real ones.
func startHooked(t *testing.T, h *hooked, change ...func(*Options, *Deps)) (*running, kinegatev1.InfoServiceClient, *grpc.ClientConn) {
	t.Helper()
	r := prepare(t, change...)
	old := r.fronts[General]
	old.server.Stop() // it would keep its workers
	f := newFront(old.desk, old.rules, r.serverOptions(r.options.GeneralStreamWindow, r.options.GeneralConnectionWindow))
	kinegatev1.RegisterInfoServiceServer(f, h)
	kinegatev1.RegisterSelectionServiceServer(f, h)
	r.fronts[General] = f
	r.serve(t)
	conn := r.general(t)
	return r, kinegatev1.NewInfoServiceClient(conn), conn
}

func TestDeadlines(t *testing.T) {
	left := make(chan time.Duration, 1)
	h := &hooked{answer: func(ctx context.Context) (*kinegatev1.GetInfoResponse, error) {
		end, ok := ctx.Deadline()
		if !ok {
			return nil, errors.New("no deadline")
		}
		left <- time.Until(end)
		return &kinegatev1.GetInfoResponse{}, nil
	}}
	_, client, _ := startHooked(t, h)
	for _, c := range []struct {
		name            string
		ask, least, top time.Duration
	}{
		{"none sent", 0, 9 * time.Second, 10 * time.Second},
		{"longer than the cap", time.Hour, 59 * time.Second, time.Minute},
		{"short", 5 * time.Second, 4 * time.Second, 5 * time.Second},
	} {
		t.Run(c.name, func(t *testing.T) {
			ctx := t.Context()
			if c.ask > 0 {
				var cancel func()
				ctx, cancel = context.WithTimeout(ctx, c.ask)
				defer cancel()
			}
			if _, err := client.GetInfo(ctx, &kinegatev1.GetInfoRequest{}); err != nil {
				t.Fatal(err)
			}
			if got := <-left; got < c.least || got > c.top {
				t.Errorf("the handler had %v", got)
			}
		})
	}
}

func TestDefaultDeadlinePasses(t *testing.T) {
	h := &hooked{answer: func(ctx context.Context) (*kinegatev1.GetInfoResponse, error) {
		<-ctx.Done()
		return nil, ctx.Err()
	}}
	_, client, _ := startHooked(t, h, func(o *Options, _ *Deps) { o.DefaultDeadline = 20 * time.Millisecond })
	_, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
	wantReason(t, err, api.DeadlinePassed)
}

func TestPanicsAreContained(t *testing.T) {
	h := &hooked{
		answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) { panic("secret unary") },
		judge: func(s grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]) error {
			if _, err := s.Recv(); err != nil && !errors.Is(err, io.EOF) {
				return err
			}
			done := make(chan error)
			go func() { done <- api.Contain(func() error { panic("secret goroutine") }) }()
			return <-done
		},
	}
	r, client, conn := startHooked(t, h)
	_, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
	m := wantReason(t, err, api.InternalFault)
	if strings.Contains(err.Error(), "secret") || m["reference"] == "" {
		t.Errorf("got %v %v", err, m)
	}
	err = rawly(t.Context(), conn, kinegatev1.SelectionService_Judge_FullMethodName, nil)
	n := wantReason(t, err, api.InternalFault)
	if n["reference"] == m["reference"] {
		t.Error("two calls share a reference")
	}
	eventually(t, "both panics in log and metrics", func() bool {
		log := r.log.String()
		return r.metric(t, "kinegate_panics_total") == 2 && strings.Contains(log, "secret unary") &&
			strings.Contains(log, "secret goroutine") && strings.Contains(log, m["reference"]) &&
			strings.Contains(log, n["reference"]) && strings.Contains(log, `"stack"`)
	})
}

func TestOverloadIsRefusedBeforeWork(t *testing.T) {
	enter, leave := make(chan bool), make(chan bool)
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		enter <- true
		<-leave
		return &kinegatev1.GetInfoResponse{}, nil
	}}
	r, client, conn := startHooked(t, h, func(o *Options, _ *Deps) { o.GeneralStreams, o.ConnectionStreams, o.CallerCalls = 2, 2, 2 })
	done := make(chan error, 2)
	for range 2 {
		go func() {
			_, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
			done <- err
		}()
		<-enter
	}
	// A connection of its own: calls over the limit of one connection wait in the client.
	other := kinegatev1.NewInfoServiceClient(r.general(t))
	var trailer metadata.MD
	_, err := other.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}, grpc.Trailer(&trailer))
	m := wantReason(t, err, api.ServerOverloaded)
	if m["limit"] != "2" || m["actual"] != "3" || trailer.Get("grpc-retry-pushback-ms")[0] != "200" {
		t.Errorf("metadata %v, trailer %v", m, trailer)
	}
	if r.metric(t, "rpc_server_rejected_total", string(api.ServerOverloaded)) != 1 {
		t.Error("the refusal is not counted")
	}
	leave <- true
	leave <- true
	for range 2 {
		if err := <-done; err != nil {
			t.Error(err)
		}
	}
	go func() { <-enter; leave <- true }()
	if _, err := kinegatev1.NewInfoServiceClient(conn).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
		t.Errorf("after the load: %v", err)
	}
}

func TestReplyOverTheLimit(t *testing.T) {
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		return &kinegatev1.GetInfoResponse{Caution: strings.Repeat("x", 5<<20)}, nil
	}}
	_, client, _ := startHooked(t, h)
	_, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
	if m := wantReason(t, err, api.ReplyTooLarge); m["limit"] != strconv.Itoa(4<<20) {
		t.Errorf("metadata %v", m)
	}
	h.answer = func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		return &kinegatev1.GetInfoResponse{Caution: "\xff"}, nil
	}
	_, err = client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
	wantReason(t, err, api.InternalFault)
}

func TestRequestIDs(t *testing.T) {
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		return nil, api.Refuse(api.Unsupported, "no")
	}}
	r, client, _ := startHooked(t, h)
	for id, taken := range map[string]bool{
		"run-7.event_12": true, strings.Repeat("a", 65): false, "two words": false, "a\"b": false, "": false,
	} {
		ctx := metadata.AppendToOutgoingContext(t.Context(), "x-request-id", id)
		_, err := client.GetInfo(ctx, &kinegatev1.GetInfoRequest{})
		if m := wantReason(t, err, api.Unsupported); (m["request_id"] == id && id != "") != taken {
			t.Errorf("%q: metadata %v", id, m)
		}
	}
	eventually(t, "the id in the log", func() bool { return strings.Contains(r.log.String(), "run-7.event_12") })
	if strings.Contains(r.log.String(), "two words") {
		t.Error("an id that is not plain is in the log")
	}
}

// TestDecodedSizeIsBounded sends legal messages that are small on the wire and large
// once decoded.
func TestDecodedSizeIsBounded(t *testing.T) {
	r := start(t)
	conn := r.general(t)
	const wire = 4 << 20
	describe := kinegatev1.ReactionService_DescribeReaction_FullMethodName
	product := []byte{0x12, 0x00} // an empty product
	structured := protowire.AppendTag(nil, 2, protowire.BytesType)
	deep := []byte(nil)
	for range 5000 {
		deep = protowire.AppendBytes(protowire.AppendTag(nil, 2, protowire.BytesType), deep)
	}
	for name, c := range map[string]struct {
		method string
		bytes  []byte
		reason api.Reason
	}{
		"empty products": {describe, protowire.AppendBytes(structured, []byte(strings.Repeat(string(product), wire/2-8))), api.MessageTooCostly},
		"empty names":    {describe, protowire.AppendBytes(structured, []byte(strings.Repeat("\x0a\x00", wire/2-8))), api.MessageTooCostly},
		"unknown fields": {describe, []byte(strings.Repeat("\xf8\x07\x01", wire/3)), api.MessageTooCostly},
		"nested":         {describe, protowire.AppendBytes(structured, deep), api.MessageUndecodable},
		"short numbers": {kinegatev1.SelectionService_JudgeBlock_FullMethodName,
			[]byte(strings.Repeat("\x1a\x00", wire/2)), ""},
	} {
		t.Run(name, func(t *testing.T) {
			reason, _ := reasonOf(t, rawly(t.Context(), conn, c.method, c.bytes))
			if c.reason != "" && reason != c.reason {
				t.Errorf("got %s, want %s", reason, c.reason)
			}
		})
	}
}

// TestLargestHonestMessagesPass holds that the bound on decoded size refuses nothing
// that the limits allow.
func TestLargestHonestMessagesPass(t *testing.T) {
	column := make([]byte, 8*65536)
	block := &kinegatev1.EventBlock{
		EventIds: make([]byte, 8*4096), ObjectOffsets: make([]byte, 4*4097), ObjectClasses: make([]byte, 65536),
		Coordinates: &kinegatev1.EventBlock_MomentumAngles{MomentumAngles: &kinegatev1.MomentumAnglesColumns{
			MomentumGev: column, ThetaRad: column, PhiRad: column,
		}},
	}
	hypotheses := make([]*kinegatev1.Hypothesis, 64)
	for i := range hypotheses {
		hypotheses[i] = &kinegatev1.Hypothesis{Name: "h" + strconv.Itoa(i), Reaction: "gamma p -> p pi0, pi0 -> gamma gamma"}
	}
	for _, m := range []proto.Message{
		&kinegatev1.JudgeBlockRequest{Block: block},
		&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: &kinegatev1.JudgeOpen{
			Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{
				Given: &kinegatev1.Selection{Name: "s", Hypotheses: hypotheses},
			}},
		}}},
	} {
		wire, err := proto.Marshal(m)
		if err != nil {
			t.Fatal(err)
		}
		limits := api.DefaultLimits()
		if f := checkWire(wire, m.ProtoReflect().New().Interface(), int64(limits.DecodedBytes)); f != nil {
			t.Errorf("%T of %d bytes: %v", m, len(wire), f)
		}
	}
}
