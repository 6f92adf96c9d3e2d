package server

import (
	"context"
	"crypto/rand"
	"encoding/hex"
	"errors"
	"strconv"
	"strings"
	"sync/atomic"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials"
	"google.golang.org/grpc/metadata"
	"google.golang.org/grpc/peer"
	"google.golang.org/grpc/tap"

	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// pushback is when a caller may try again after a refusal for lack of room. It is
// long against a call and short against a person.
const pushback = 200 * time.Millisecond

// desk is what the fronts of one server share.
type desk struct {
	limits          api.Limits
	metrics         *telemetry.Metrics
	callLog         *telemetry.CallLog
	authorise       func(identity, method string) error
	defaultDeadline time.Duration
	longestDeadline time.Duration
	leaving         <-chan struct{}

	nonce string
	calls atomic.Uint64
}

// newNonce returns what tells the references of one server from those of another.
func newNonce() string {
	var b [4]byte
	// Read never fails.
	_, _ = rand.Read(b[:])
	return hex.EncodeToString(b[:])
}

// reference returns a reference that this server has not given before.
func (d *desk) reference() string {
	return d.nonce + "-" + strconv.FormatUint(d.calls.Add(1), 10)
}

// front answers the calls of one listener. It registers services on the listener's
// gRPC server with itself around every method.
type front struct {
	*desk

	server *grpc.Server
	most   int64
	open   atomic.Int64
}

// RegisterService adds a service. Every method becomes a stream of any number of
// messages, so that answer is around all of them and call counts the messages.
func (f *front) RegisterService(desc *grpc.ServiceDesc, impl any) {
	wrapped := *desc
	wrapped.Methods, wrapped.Streams = nil, nil
	add := func(name string, single bool, body func(srv any, c *call) error) {
		method := "/" + desc.ServiceName + "/" + name
		wrapped.Streams = append(wrapped.Streams, grpc.StreamDesc{
			StreamName: name, ClientStreams: true, ServerStreams: true,
			Handler: func(srv any, stream grpc.ServerStream) error {
				c := f.begin(method, method, stream)
				c.single = single
				return f.answer(c, func() error { return body(srv, c) })
			},
		})
	}
	for _, m := range desc.Methods {
		add(m.MethodName, true, func(srv any, c *call) error { return f.unary(c, srv, m.Handler) })
	}
	for _, s := range desc.Streams {
		add(s.StreamName, !s.ClientStreams, func(srv any, c *call) error {
			f.writeOpened(c)
			return s.Handler(srv, c)
		})
	}
	f.server.RegisterService(&wrapped, impl)
}

// answer is around every call. Its lines are the layers, outermost first.
func (f *front) answer(c *call, body func() error) error {
	err := api.Contain(func() error {
		if f.authorise != nil {
			if err := f.authorise(c.identity, c.method); err != nil {
				return err
			}
		}
		if err := f.admit(c); err != nil {
			return err
		}
		defer f.release(c)
		return body()
	})
	return f.end(c, err)
}

// unary is the body of a method with one message each way. A deadline is all that keeps
// a handler from working for a caller who has long given up.
func (f *front) unary(c *call, srv any, handler grpc.MethodHandler) error {
	deadline, ok := c.ctx.Deadline()
	limit := f.longestDeadline
	if !ok {
		limit = f.defaultDeadline
	}
	if !ok || deadline.Sub(c.begun) > limit {
		ctx, cancel := context.WithTimeout(c.ctx, limit)
		defer cancel()
		c.ctx = ctx
	}
	reply, err := handler(srv, c.ctx, c.RecvMsg, nil)
	if err != nil {
		return err
	}
	return c.SendMsg(reply)
}

// unknown answers calls of methods that are not registered.
func (f *front) unknown(_ any, stream grpc.ServerStream) error {
	method, _ := grpc.MethodFromServerStream(stream)
	return f.answer(f.begin(method, telemetry.OtherMethod, stream), func() error { return unknownMethod(method) })
}

// unknownMethod is the failure of a method that is not registered.
func unknownMethod(method string) *api.Failure {
	return api.Refuse(api.MethodUnknown, "this listener does not serve "+strconv.Quote(method), "method", method)
}

// tapped refuses paths that are not /service/method before gRPC does so without an
// ErrorInfo.
func (f *front) tapped(ctx context.Context, info *tap.Info) (context.Context, error) {
	if rest, ok := strings.CutPrefix(info.FullMethodName, "/"); ok && strings.Contains(rest, "/") {
		return ctx, nil
	}
	f.metrics.Rejected(string(api.MethodUnknown))
	return ctx, unknownMethod(info.FullMethodName).Status(f.reference()).Err()
}

// begin starts the record of a call.
func (f *front) begin(method, label string, stream grpc.ServerStream) *call {
	ctx := stream.Context()
	c := &call{
		ServerStream: stream, ctx: ctx, method: method, label: label, begun: time.Now(),
		limits: f.limits, reference: f.reference(), identity: identity(ctx),
	}
	if c.requestID = plainID(ctx); c.requestID == "" {
		c.requestID = c.reference
	}
	f.metrics.CallStarted(label)
	return c
}

// admit takes a place on the listener or refuses before any work. Health is never
// refused: it is how a full server is told from a dead one.
func (f *front) admit(c *call) error {
	if isHealth(c.label) {
		return nil
	}
	select {
	case <-f.leaving:
		return f.refuse(api.Refuse(api.ServerDraining, "this server is about to leave; another one will answer"))
	default:
	}
	if open := f.open.Add(1); open > f.most {
		f.open.Add(-1)
		return f.refuse(api.OverLimit(api.ServerOverloaded, "the number of open calls,", open, f.most,
			"try again later or elsewhere"))
	}
	return nil
}

// refuse counts a refusal for lack of room and says when to come back.
func (f *front) refuse(failure *api.Failure) error {
	f.metrics.Rejected(string(failure.Reason))
	failure.RetryAfter = pushback
	return failure
}

// release gives the place of an admitted call back.
func (f *front) release(c *call) {
	if !isHealth(c.label) {
		f.open.Add(-1)
	}
}

// end finishes the record of a call and returns its status.
func (f *front) end(c *call, err error) error {
	took := time.Since(c.begun)
	failure := api.Explain(err)
	if failure == nil {
		f.metrics.CallDone(c.label, "OK", took)
		f.write(f.callLog.Well(), c, "OK", took)
		return nil
	}
	if c.requestID != c.reference {
		failure = failure.With("request_id", c.requestID)
	}
	if failure.RetryAfter > 0 {
		c.SetTrailer(metadata.Pairs(pushbackKey, strconv.FormatInt(failure.RetryAfter.Milliseconds(), 10)))
	}
	s := failure.Status(c.reference)
	code := codeName(s.Code())
	f.metrics.CallDone(c.label, code, took)
	line := f.callLog.Refused()
	if failure.Reason == api.InternalFault {
		line = f.callLog.Failed()
		if p, ok := errors.AsType[*api.PanicError](err); ok {
			f.metrics.Panicked()
			line = line.Bytes("stack", p.Stack)
		}
		line = line.AnErr("cause", failure.Cause)
	}
	f.write(line.Str("reason", string(failure.Reason)), c, code, took)
	return s.Err()
}

// identity is the first URI or DNS name of the caller's certificate.
func identity(ctx context.Context) string {
	p, ok := peer.FromContext(ctx)
	if !ok {
		return ""
	}
	info, ok := p.AuthInfo.(credentials.TLSInfo)
	if !ok || len(info.State.PeerCertificates) == 0 {
		return ""
	}
	certificate := info.State.PeerCertificates[0]
	if len(certificate.URIs) > 0 {
		return certificate.URIs[0].String()
	}
	if len(certificate.DNSNames) > 0 {
		return certificate.DNSNames[0]
	}
	return ""
}
