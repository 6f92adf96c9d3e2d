package server

import (
	"context"
	"crypto/rand"
	"encoding/hex"
	"errors"
	"net"
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
	limits     api.Limits
	streamIdle time.Duration
	metrics    *telemetry.Metrics
	current    *atomic.Pointer[inUse]
	streams    *openStreams
	pressure   *pressure
	holding    *holding
	leaving    <-chan struct{}

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
	rules  rules
	open   atomic.Int64
	work   *workQueue
	quota  quota
}

// rules are what a listener holds callers to.
type rules struct {
	// most is how many calls may be open.
	most func(*Options) int
	// private listeners ask callers who they are and may have an access file.
	private bool
	// shared listeners have callers of all kinds, whom quotas and costs keep apart. The
	// gate is not one: its streams have credit, and nothing else may delay them.
	shared bool
}

// RegisterService adds a service. Every method becomes a stream of any number of
// messages, so that answer is around all of them and call counts the messages.
func (f *front) RegisterService(desc *grpc.ServiceDesc, impl any) {
	wrapped := *desc
	wrapped.Methods, wrapped.Streams = nil, nil
	add := func(name string, stream, single bool, body func(srv any, c *call) error) {
		method := "/" + desc.ServiceName + "/" + name
		wrapped.Streams = append(wrapped.Streams, grpc.StreamDesc{
			StreamName: name, ClientStreams: true, ServerStreams: true,
			Handler: func(srv any, transport grpc.ServerStream) error {
				c := f.begin(method, method, transport)
				c.stream, c.single = stream, single
				return f.answer(c, func() error { return body(srv, c) })
			},
		})
	}
	for _, m := range desc.Methods {
		add(m.MethodName, false, true, func(srv any, c *call) error { return f.unary(c, srv, m.Handler) })
	}
	for _, s := range desc.Streams {
		add(s.StreamName, true, !s.ClientStreams, func(srv any, c *call) error {
			f.streams.add(c, f)
			defer f.streams.remove(c)
			c.waiting = time.AfterFunc(f.streamIdle, func() {
				c.cut(api.Refuse(api.StreamIdle, "no message came for "+f.streamIdle.String()))
			})
			defer c.waiting.Stop()
			f.writeOpened(c)
			return s.Handler(srv, c)
		})
	}
	f.server.RegisterService(&wrapped, impl)
}

// answer is around every call. Its lines are the layers, outermost first.
func (f *front) answer(c *call, body func() error) error {
	err := api.Contain(func() error {
		if err := f.authorise(c, c.use); err != nil {
			return err
		}
		if name := c.transport.RecvCompress(); name != "" && name != "identity" {
			return compressionRefused("this call").With("compression", name)
		}
		if err := f.admit(c); err != nil {
			return err
		}
		defer f.release(c)
		return body()
	})
	if why := c.cutFor.Load(); err != nil && why != nil {
		err = why
	}
	return f.end(c, err)
}

// authorise returns nil if the caller may call the method.
func (f *front) authorise(c *call, use *inUse) error {
	if !f.rules.private || use.access == nil {
		return nil
	}
	return use.access.check(c.names, c.method)
}

// unary is the body of a method with one message each way. A deadline is all that keeps
// a handler from working for a caller who has long given up.
func (f *front) unary(c *call, srv any, handler grpc.MethodHandler) error {
	deadline, ok := c.ctx.Deadline()
	limit := c.use.options.LongestDeadline
	if !ok {
		limit = c.use.options.DefaultDeadline
	}
	if !ok || deadline.Sub(c.begun) > limit {
		ctx, cancel := context.WithTimeout(c.ctx, limit)
		defer cancel()
		// The transport knows of the caller's own deadline only, and the message may
		// never come.
		defer context.AfterFunc(ctx, func() { c.cut(api.Explain(ctx.Err())) })()
		c.ctx = ctx
	}
	cost := 0
	receive := func(m any) error {
		if err := c.RecvMsg(m); err != nil {
			return err
		}
		price := f.price(c, m)
		if price == 0 {
			return nil
		}
		if err := f.work.enter(c.ctx, price, c.use.options.slots()); err != nil {
			return f.refuse(err)
		}
		cost = price
		return nil
	}
	defer func() {
		if cost > 0 {
			f.work.leave(cost)
		}
	}()
	reply, err := handler(srv, c.ctx, receive, nil)
	if err != nil {
		return err
	}
	return c.SendMsg(reply)
}

// price is the cost of a call of a listener that asks one; health costs nothing.
func (f *front) price(c *call, request any) int {
	if !f.rules.shared || isHealth(c.label) {
		return 0
	}
	return api.Cost(request)
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

// tapped refuses, as soon as the headers are read, what gRPC would refuse without an
// ErrorInfo: paths that are not /service/method, and lists of headers over the limit.
func (f *front) tapped(ctx context.Context, info *tap.Info) (context.Context, error) {
	var failure *api.Failure
	limit := int64(f.current.Load().options.HeaderLimit)
	rest, rooted := strings.CutPrefix(info.FullMethodName, "/")
	switch size := headerListBytes(info.Header); {
	case size > limit:
		failure = api.OverLimit(api.HeadersTooLarge, "the size of the request's headers in bytes,", size, limit,
			"send less metadata")
	case !rooted || !strings.Contains(rest, "/"):
		failure = unknownMethod(info.FullMethodName)
	default:
		return ctx, nil
	}
	f.metrics.Rejected(string(failure.Reason))
	return ctx, failure.Status(f.reference()).Err()
}

// headerListBytes is the size of a list of headers as HTTP/2 counts it: 32 bytes for each
// beside its name and value.
func headerListBytes(header metadata.MD) int64 {
	const each = 32
	size := 0
	for name, values := range header {
		for _, v := range values {
			size += len(name) + len(v) + each
		}
	}
	return int64(size)
}

// begin starts the record of a call.
func (f *front) begin(method, label string, stream grpc.ServerStream) *call {
	ctx := stream.Context()
	c := &call{
		ServerStream: stream, transport: transportOf(stream), ctx: ctx, method: method, label: label, begun: time.Now(),
		limits: f.limits, reference: f.reference(), use: f.current.Load(),
		names: names(ctx), trace: traceOf(ctx),
	}
	c.caller = caller(ctx, c.identity())
	if f.rules.shared {
		c.shared = f
	}
	if c.requestID = plainID(ctx); c.requestID == "" {
		c.requestID = c.reference
	}
	f.metrics.CallStarted(label)
	return c
}

// admit takes a place on the listener or refuses before any work. Health is never
// refused: it is how a full server is told from a dead one. A server that leaves refuses
// streams. It answers the few unary calls that arrive before their connections learn of
// it: a burst of refusals would use up the clients' retries.
func (f *front) admit(c *call) error {
	if isHealth(c.label) {
		return nil
	}
	if c.stream && f.gone() {
		return f.refuse(api.Refuse(api.ServerDraining, "this server is about to leave; another one will answer"))
	}
	most := int64(f.rules.most(&c.use.options))
	if open := f.open.Add(1); open > most {
		f.open.Add(-1)
		return f.refuse(api.OverLimit(api.ServerOverloaded, "the number of open calls,", open, most,
			"try again later or elsewhere"))
	}
	if err := f.admitShared(c); err != nil {
		f.open.Add(-1)
		return f.refuse(err)
	}
	return nil
}

// admitShared admits what a shared listener holds callers to. Work that could not even
// wait is refused here, before its message is read; so are streams that only send, which
// take turns with the calls later. Streams that receive have credit.
func (f *front) admitShared(c *call) error {
	if !f.rules.shared {
		return nil
	}
	if err := f.pressure.refusal(); err != nil {
		return err
	}
	if c.single {
		if err := f.work.full(c.use.options.slots()); err != nil {
			return err
		}
	}
	return f.quota.enter(c.caller, int64(c.use.options.CallerCalls))
}

// gone reports whether the notice of leaving is over.
func (f *front) gone() bool {
	select {
	case <-f.leaving:
		return true
	default:
		return false
	}
}

// refuse counts a refusal for lack of room and says when to come back. A call whose
// time is up while it waits for room is not refused.
func (f *front) refuse(err error) error {
	failure, ok := errors.AsType[*api.Failure](err)
	if !ok {
		return err
	}
	f.metrics.Rejected(string(failure.Reason))
	failure.RetryAfter = pushback
	return failure
}

// release gives the place of an admitted call back.
func (f *front) release(c *call) {
	if isHealth(c.label) {
		return
	}
	f.open.Add(-1)
	if f.rules.shared {
		f.quota.leave(c.caller)
		f.holding.leave(c.held)
	}
}

// end finishes the record of a call and returns its status.
func (f *front) end(c *call, err error) error {
	now := time.Now()
	took := now.Sub(c.begun)
	failure := api.Explain(err)
	f.judgeConnection(c, failure != nil && failure.Reason == api.CallCancelled, now)
	if failure == nil {
		f.metrics.CallDone(c.label, "OK", took, c.exemplar())
		f.write(c.use.callLog.Well(), c, "OK", took)
		return nil
	}
	if c.requestID != c.reference {
		failure = failure.With("request_id", c.requestID)
	}
	c.SetTrailer(metadata.MD{traceKey: {c.trace.header()}})
	if failure.RetryAfter > 0 {
		c.SetTrailer(metadata.Pairs(pushbackKey, strconv.FormatInt(failure.RetryAfter.Milliseconds(), 10)))
	}
	s := failure.Status(c.reference)
	code := codeName(s.Code())
	f.metrics.CallDone(c.label, code, took, c.exemplar())
	line := c.use.callLog.Refused()
	if failure.Reason == api.InternalFault {
		line = c.use.callLog.Failed()
		if p, ok := errors.AsType[*api.PanicError](err); ok {
			f.metrics.Panicked()
			line = line.Bytes("stack", p.Stack)
		}
		line = line.AnErr("cause", failure.Cause)
	}
	f.write(line.Str("reason", string(failure.Reason)), c, code, took)
	return s.Err()
}

// judgeConnection closes a connection that gives up too many calls. Behind a proxy many
// callers share one.
func (f *front) judgeConnection(c *call, givenUp bool, now time.Time) {
	p, ok := peer.FromContext(c.ctx)
	if !ok || c.use.options.BehindProxy {
		return
	}
	if from, ok := p.Addr.(origin); ok && from.conn.note(givenUp, now) {
		f.metrics.Rejected(connectionAbused)
		_ = from.conn.Close() // what it leads to is told by its calls
	}
}

// names are the URIs and DNS names of the caller's certificate.
func names(ctx context.Context) []string {
	p, ok := peer.FromContext(ctx)
	if !ok {
		return nil
	}
	info, ok := p.AuthInfo.(credentials.TLSInfo)
	if !ok || len(info.State.PeerCertificates) == 0 {
		return nil
	}
	certificate := info.State.PeerCertificates[0]
	var all []string
	for _, uri := range certificate.URIs {
		all = append(all, uri.String())
	}
	return append(all, certificate.DNSNames...)
}

// identity is the first name of the caller, by which logs call it; empty for none.
func (c *call) identity() string {
	if len(c.names) == 0 {
		return ""
	}
	return c.names[0]
}

// caller tells callers apart: those who share a certificate by their address, those of
// a unix socket by their user.
func caller(ctx context.Context, identity string) string {
	where := ""
	if p, ok := peer.FromContext(ctx); ok {
		where = p.Addr.String()
		if host, _, err := net.SplitHostPort(where); err == nil {
			where = host
		}
		if from, ok := p.Addr.(origin); ok && from.conn.user != "" {
			where = "user " + from.conn.user
		}
	}
	return strings.Trim(identity+" "+where, " ")
}

// exemplar is the trace that the duration of the call may name: one that its caller
// keeps.
func (c *call) exemplar() string {
	if c.trace.sampled {
		return c.trace.id
	}
	return ""
}
