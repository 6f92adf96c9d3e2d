package api

import (
	"context"
	"errors"
	"fmt"
	"strings"
	"testing"
	"time"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/fault"
)

// details are the details of a status by type.
type details struct {
	info  []*errdetails.ErrorInfo
	bad   []*errdetails.BadRequest
	retry []*errdetails.RetryInfo
}

func detailsOf(t *testing.T, s *status.Status) details {
	t.Helper()
	var d details
	for _, x := range s.Details() {
		switch x := x.(type) {
		case *errdetails.ErrorInfo:
			d.info = append(d.info, x)
		case *errdetails.BadRequest:
			d.bad = append(d.bad, x)
		case *errdetails.RetryInfo:
			d.retry = append(d.retry, x)
		default:
			t.Errorf("unexpected detail %T", x)
		}
	}
	if len(d.info) != 1 || len(d.bad) > 1 || len(d.retry) > 1 {
		t.Fatalf("details of one type must come once, ErrorInfo always: %v", s)
	}
	return d
}

func TestExplain(t *testing.T) {
	inText := fault.New(fault.NotFound, "particle", "Lamda", "").At(0, 14)
	inText.Nearest = []string{"Lambda"}
	cases := []struct {
		name   string
		err    error
		reason Reason
		code   codes.Code
	}{
		{"fault", fault.Number("x", 1, "> 2"), FieldInvalid, codes.InvalidArgument},
		{"wrapped fault", fmt.Errorf("outer: %w", fault.Number("x", 1, "> 2")), FieldInvalid, codes.InvalidArgument},
		{"unknown name in a text", inText, NameUnknown, codes.InvalidArgument},
		{"unknown thing asked for", Because(ParticleNotFound, inText), ParticleNotFound, codes.NotFound},
		{"list", fault.List{fault.New(fault.Forbidden, "charge", "", ""), inText}.Err(), LawBroken, codes.InvalidArgument},
		{"joined", errors.Join(inText, errors.New("x")), NameUnknown, codes.InvalidArgument},
		{"deadline", fmt.Errorf("x: %w", context.DeadlineExceeded), DeadlinePassed, codes.DeadlineExceeded},
		{"cancel", context.Canceled, CallCancelled, codes.Canceled},
		{"status of gRPC", status.Error(codes.NotFound, "unknown service"), ServiceNotFound, codes.NotFound},
		{"unknown status", status.Error(codes.Unknown, "boo"), InternalFault, codes.Internal},
		{"anything else", errors.New("secret"), InternalFault, codes.Internal},
		{"panic", Contain(func() error { var p *Failure; p.Message = ""; return nil }), InternalFault, codes.Internal},
		{"kind outside the list", &fault.Error{Kind: 200}, InternalFault, codes.Internal},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			f := Explain(c.err)
			s := f.Status("ref-1")
			d := detailsOf(t, s)
			if f.Reason != c.reason || s.Code() != c.code || d.info[0].GetReason() != string(c.reason) {
				t.Errorf("got %s %s: %v", f.Reason, s.Code(), s)
			}
			if d.info[0].GetDomain() != Domain {
				t.Errorf("domain %q", d.info[0].GetDomain())
			}
		})
	}
	if Explain(nil) != nil {
		t.Error("no error is explained")
	}
	for c := codes.Canceled; c <= codes.Unauthenticated; c++ {
		if f := Explain(status.Error(c, "x")); MeaningOf(f.Reason).Reason != f.Reason {
			t.Errorf("code %v has the unregistered reason %q", c, f.Reason)
		}
	}
}

func TestStatusNamesFieldValueAndAllowed(t *testing.T) {
	e := fault.New(fault.NotFound, "particle", "Lamda", "a name of the table").At(0, 14)
	e.Nearest = []string{"Lambda", "Lambda_b"}
	d := detailsOf(t, atField("reaction", Explain(e)).Status(""))
	want := map[string]string{
		"field": "reaction", "value": "Lamda", "allowed": "a name of the table",
		"nearest": "Lambda, Lambda_b", "column": "14", "violation_count": "1",
	}
	for k, v := range want {
		if got := d.info[0].GetMetadata()[k]; got != v {
			t.Errorf("metadata %s is %q, want %q", k, got, v)
		}
	}
	v := d.bad[0].GetFieldViolations()
	if len(v) != 1 || v[0].GetField() != "reaction" || !strings.Contains(v[0].GetDescription(), `"Lamda"`) {
		t.Errorf("violations %v", v)
	}
}

func TestStatusIsBounded(t *testing.T) {
	long := strings.Repeat("\u03c0\xff", 5000)
	var list fault.List
	for range 1000 {
		list = append(list, fault.New(fault.Invalid, long, long, long).Because(long))
	}
	f := Explain(list)
	f.RetryAfter = time.Second
	for _, key := range []string{"a", "b", "c"} {
		f = f.With(key, long)
	}
	s := f.Status("ref")
	if size := proto.Size(s.Proto()); size > maxStatusBytes || size < maxStatusBytes/2 {
		t.Errorf("the status has %d bytes", size)
	}
	d := detailsOf(t, s)
	if n := len(d.bad[0].GetFieldViolations()); n == 0 || n > maxViolations {
		t.Errorf("%d violations", n)
	}
	if got := d.info[0].GetMetadata()["violation_count"]; got != "1000" {
		t.Errorf("violation_count %s", got)
	}
	if d.retry[0].GetRetryDelay().AsDuration() != time.Second {
		t.Errorf("retry %v", d.retry)
	}
	short := fault.List{}
	for range 17 {
		short = append(short, fault.New(fault.Invalid, "a", "b", "c"))
	}
	if n := len(detailsOf(t, Explain(short).Status("")).bad[0].GetFieldViolations()); n != maxViolations {
		t.Errorf("%d violations of 17 short ones, want %d", n, maxViolations)
	}
}

func TestInternalFaultHidesItsCause(t *testing.T) {
	f := Explain(errors.New("secret"))
	f.Violations = []Violation{{Field: "secret"}}
	s := f.With("secret", "secret").Status("ref-7")
	if text := s.Proto().String(); strings.Contains(text, "secret") || !strings.Contains(text, "ref-7") {
		t.Errorf("got %s", text)
	}
	if !strings.Contains(f.Cause.Error(), "secret") {
		t.Error("the log loses the cause")
	}
}

func TestInPutsAPathInFront(t *testing.T) {
	for _, c := range []struct{ field, want string }{
		{"", "block"}, {"class", "block.class"}, {"[3].x", "block[3].x"},
	} {
		if got := In("block", fault.New(fault.Invalid, c.field, "", "")).Violations[0].Field; got != c.want {
			t.Errorf("%q becomes %q, want %q", c.field, got, c.want)
		}
	}
}

func TestContain(t *testing.T) {
	boom := errors.New("boom")
	if err := Contain(func() error { return boom }); !errors.Is(err, boom) {
		t.Errorf("got %v", err)
	}
	err := Contain(func() error { panic("boom") })
	p, ok := errors.AsType[*PanicError](err)
	if !ok || p.Value != "boom" || !strings.Contains(string(p.Stack), "TestContain") {
		t.Errorf("got %v", err)
	}
}
