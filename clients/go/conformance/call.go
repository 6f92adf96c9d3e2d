package conformance

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/encoding/protojson"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"
	"google.golang.org/protobuf/reflect/protoregistry"
)

// Call is one request and what it must be answered with: a reply or a failure.
type Call struct {
	// Name is the name of the file, without its ending.
	Name string `json:"-"`
	// Method is the rpc, such as "ReactionService.DescribeReaction".
	Method string `json:"method"`
	// Request is the request in its JSON form.
	Request json.RawMessage `json:"request"`
	// Reply is what the reply must hold, in part; that of a stream is the list of its messages.
	Reply json.RawMessage `json:"reply,omitempty"`
	// Failure is how the call must fail.
	Failure *Failure `json:"failure,omitempty"`
	// Tolerance is the relative tolerance of numbers; 0 means DefaultTolerance.
	Tolerance float64 `json:"tolerance,omitempty"`
}

// Failure is how a call or a stream fails.
type Failure struct {
	// Code is the code of gRPC, such as "INVALID_ARGUMENT".
	Code string `json:"code"`
	// Reason is the registered reason.
	Reason string `json:"reason"`
	// Field is the path of a field at fault, empty for any.
	Field string `json:"field,omitempty"`
}

// DefaultTolerance is the relative accuracy that the core promises for closed forms.
const DefaultTolerance = 4e-15

// Read reads every file of a folder strictly into a value of its own.
func Read[T any](folder string, named func(*T, string)) ([]*T, error) {
	names, err := filepath.Glob(filepath.Join(folder, "*.json"))
	if err != nil {
		return nil, err
	}
	if len(names) == 0 {
		return nil, fmt.Errorf("%s holds no cases", folder)
	}
	var all []*T
	for _, name := range names {
		text, err := os.ReadFile(name) //nolint:gosec // the caller names the folder of cases
		if err != nil {
			return nil, err
		}
		one := new(T)
		d := json.NewDecoder(bytes.NewReader(text))
		d.DisallowUnknownFields()
		if err := d.Decode(one); err != nil {
			return nil, fmt.Errorf("%s: %w", name, err)
		}
		named(one, strings.TrimSuffix(filepath.Base(name), ".json"))
		all = append(all, one)
	}
	return all, nil
}

// Calls reads the calls of testdata/rpc.
func Calls(folder string) ([]*Call, error) {
	return Read(filepath.Join(folder, "calls"), func(c *Call, name string) { c.Name = name })
}

// Invoke makes the call over a connection and returns the reply in its JSON form; that of a
// stream is the list of its messages.
func (c *Call) Invoke(ctx context.Context, conn grpc.ClientConnInterface) ([]byte, error) {
	service, method, _ := strings.Cut(c.Method, ".")
	d, err := protoregistry.GlobalFiles.FindDescriptorByName(protoreflect.FullName("kinegate.v1." + service))
	if err != nil {
		return nil, err
	}
	s, ok := d.(protoreflect.ServiceDescriptor)
	if !ok || s.Methods().ByName(protoreflect.Name(method)) == nil {
		return nil, fmt.Errorf("there is no method %s", c.Method)
	}
	m := s.Methods().ByName(protoreflect.Name(method))
	request, err := message(m.Input())
	if err != nil {
		return nil, err
	}
	if err := protojson.Unmarshal(c.Request, request); err != nil {
		return nil, fmt.Errorf("the request of the case: %w", err)
	}
	path := "/" + string(s.FullName()) + "/" + method
	if m.IsStreamingServer() {
		return stream(ctx, conn, path, request, m.Output())
	}
	reply, err := message(m.Output())
	if err != nil {
		return nil, err
	}
	if err := conn.Invoke(ctx, path, request, reply); err != nil {
		return nil, err
	}
	return form(reply)
}

// stream makes the call of a stream of replies.
func stream(
	ctx context.Context, conn grpc.ClientConnInterface, path string, request proto.Message, output protoreflect.MessageDescriptor,
) ([]byte, error) {
	s, err := conn.NewStream(ctx, &grpc.StreamDesc{ServerStreams: true}, path)
	if err != nil {
		return nil, err
	}
	if err := s.SendMsg(request); err != nil {
		return nil, err
	}
	if err := s.CloseSend(); err != nil {
		return nil, err
	}
	var replies []json.RawMessage
	for {
		reply, err := message(output)
		if err != nil {
			return nil, err
		}
		if err := s.RecvMsg(reply); errors.Is(err, io.EOF) {
			return json.Marshal(replies)
		} else if err != nil {
			return nil, err
		}
		text, err := form(reply)
		if err != nil {
			return nil, err
		}
		replies = append(replies, text)
	}
}

// message makes an empty message of a type.
func message(d protoreflect.MessageDescriptor) (proto.Message, error) {
	t, err := protoregistry.GlobalTypes.FindMessageByName(d.FullName())
	if err != nil {
		return nil, err
	}
	return t.New().Interface(), nil
}

// form is the JSON form in which messages are compared.
func form(m proto.Message) ([]byte, error) {
	return protojson.MarshalOptions{UseProtoNames: true, EmitUnpopulated: true}.Marshal(m)
}

// Check compares what Invoke returned with what is due.
func (c *Call) Check(reply []byte, err error) error {
	if c.Failure != nil {
		return c.Failure.check(err)
	}
	if err != nil {
		return fmt.Errorf("it failed: %w", err)
	}
	tolerance := c.Tolerance
	if tolerance == 0 {
		tolerance = DefaultTolerance
	}
	return compare(c.Reply, reply, tolerance)
}

// check compares a failure.
func (f *Failure) check(err error) error {
	if err == nil {
		return errors.New("it went well")
	}
	s, ok := status.FromError(err)
	if !ok {
		return fmt.Errorf("no failure of an rpc: %w", err)
	}
	code, unknown := f.code()
	if unknown != nil {
		return unknown
	}
	var reason string
	named := f.Field == ""
	for _, d := range s.Details() {
		switch x := d.(type) {
		case *errdetails.ErrorInfo:
			reason = x.GetReason()
		case *errdetails.BadRequest:
			for _, v := range x.GetFieldViolations() {
				named = named || v.GetField() == f.Field
			}
		}
	}
	if s.Code() != code || reason != f.Reason || !named {
		return fmt.Errorf("it failed with %s and %q, not %+v: %w", s.Code(), reason, *f, err)
	}
	return nil
}

// code reads the name of the code.
func (f *Failure) code() (code codes.Code, err error) {
	if err := code.UnmarshalJSON([]byte(strconv.Quote(f.Code))); err != nil {
		return code, fmt.Errorf("the code of the case: %w", err)
	}
	return code, nil
}
