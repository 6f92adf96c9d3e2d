package api

import (
	"context"
	"errors"
	"maps"
	"strconv"
	"strings"
	"time"

	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"

	"example.org/kinegate/kinematics/fault"
)

// Failure is why a call was refused, before it is put into gRPC's form. It is an
// error; its text reaches the caller unless the reason is InternalFault.
type Failure struct {
	// Reason is the registered reason.
	Reason Reason
	// Message is one sentence for people.
	Message string
	// Violations are the fields at fault, the first found first.
	Violations []Violation
	// Metadata are values of this request under keys in snake_case.
	Metadata map[string]string
	// RetryAfter is when to try again; 0 says nothing about it.
	RetryAfter time.Duration
	// Cause is the error behind, for the log only.
	Cause error
}

// Violation is one field at fault.
type Violation struct {
	// Field is the path of the field in the request; for a fault of a text it is
	// the field that holds the text.
	Field string
	// Value is what was found there.
	Value string
	// Allowed says what would be allowed.
	Allowed string
	// Problem is a sentence that says what is wrong, position included.
	Problem string
	// Nearest are known names near to an unknown one.
	Nearest []string
}

// Refuse returns a Failure for a reason with a sentence for people. Pairs of key
// and value in keyed go to the metadata.
func Refuse(reason Reason, message string, keyed ...string) *Failure {
	f := &Failure{Reason: reason, Message: message}
	for i := 0; i+1 < len(keyed); i += 2 {
		f.set(keyed[i], keyed[i+1])
	}
	return f
}

// OverLimit returns a Failure that names a limit, what was found, and what to do
// instead, with both numbers in the metadata.
func OverLimit(reason Reason, what string, actual, limit int64, instead string) *Failure {
	found, most := strconv.FormatInt(actual, 10), strconv.FormatInt(limit, 10)
	return Refuse(reason, what+" "+found+" is over the limit "+most+"; "+instead,
		"limit", most, "actual", found)
}

// Because returns the failure that Explain finds in err under another reason: the
// caller's context decides, for instance, whether an unknown name is NotFound.
func Because(reason Reason, err error) *Failure {
	f := *Explain(err)
	f.Reason = reason
	return &f
}

// In returns the failure that Explain finds in err with prefix in front of every
// field path, and in its sentence where one field is at fault. A fault without a field
// of its own gets the prefix as its field.
func In(prefix string, err error) *Failure {
	_, explained := errors.AsType[*Failure](err)
	if e, ok := errors.AsType[*fault.Error](err); ok && !explained && e.Column == 0 {
		return Explain(e.Move(join(prefix, e.Path())))
	}
	f := *Explain(err)
	f.Violations = append([]Violation(nil), f.Violations...)
	for i := range f.Violations {
		f.Violations[i].Field = join(prefix, f.Violations[i].Field)
	}
	return &f
}

// join puts a path in front of a field; either may be empty, and the field an index.
func join(prefix, field string) string {
	switch {
	case prefix == "":
		return field
	case field == "":
		return prefix
	case strings.HasPrefix(field, "["):
		return prefix + field
	}
	return prefix + "." + field
}

// atField returns the failure with one field path in place of the core's names.
func atField(field string, f *Failure) *Failure {
	c := *f
	c.Violations = append([]Violation(nil), f.Violations...)
	for i := range c.Violations {
		c.Violations[i].Field = field
	}
	return &c
}

// moved returns the fault of the core with another field path, in its sentence too.
func moved(err error, field string) error {
	e, ok := errors.AsType[*fault.Error](err)
	if !ok {
		return atField(field, Explain(err))
	}
	return e.Move(field)
}

// Error returns the message.
func (f *Failure) Error() string { return string(f.Reason) + ": " + f.Message }

// Unwrap returns the cause.
func (f *Failure) Unwrap() error { return f.Cause }

// set puts a value into the metadata.
func (f *Failure) set(key, value string) {
	if f.Metadata == nil {
		f.Metadata = map[string]string{}
	}
	f.Metadata[key] = value
}

// With returns a copy of the failure with a value added to its metadata.
func (f *Failure) With(key, value string) *Failure {
	c := *f
	c.Metadata = maps.Clone(f.Metadata)
	c.set(key, value)
	return &c
}

// Explain finds the failure in an error: a Failure as it is, a fault of the core by
// its kind, the end of a context, a status of gRPC by its code. Everything else is
// InternalFault with err as the cause. It returns nil for nil.
func Explain(err error) *Failure {
	if err == nil {
		return nil
	}
	if f, ok := errors.AsType[*Failure](err); ok {
		return f
	}
	if list, ok := errors.AsType[fault.List](err); ok && len(list) > 0 {
		return explainFaults(list, err)
	}
	if e, ok := errors.AsType[*fault.Error](err); ok {
		return explainFaults(fault.List{e}, err)
	}
	switch {
	case errors.Is(err, context.DeadlineExceeded):
		return &Failure{Reason: DeadlinePassed, Message: "the deadline of the call has passed", Cause: err}
	case errors.Is(err, context.Canceled):
		return &Failure{Reason: CallCancelled, Message: "the caller has cancelled the call", Cause: err}
	}
	if s, ok := status.FromError(err); ok {
		return explainStatus(s, err)
	}
	return &Failure{Reason: InternalFault, Message: "a fault of the service", Cause: err}
}

// explainFaults joins faults of the core to one failure. The first fault decides
// the reason.
func explainFaults(list fault.List, cause error) *Failure {
	reason, ok := reasonOfKind(list[0].Kind)
	if !ok {
		return &Failure{Reason: InternalFault, Message: "a fault of an unknown kind", Cause: cause}
	}
	f := &Failure{Reason: reason, Message: sentence(list[0]), Cause: cause}
	if len(list) > 1 {
		f.Message += " (and " + strconv.Itoa(len(list)-1) + " more)"
	}
	for _, e := range list {
		f.Violations = append(f.Violations, Violation{
			Field: e.Field, Value: e.Value, Allowed: e.Allowed, Problem: sentence(e), Nearest: e.Nearest,
		})
	}
	if list[0].Column > 0 {
		f.set("column", strconv.Itoa(list[0].Column))
	}
	if list[0].Line > 0 {
		f.set("line", strconv.Itoa(list[0].Line))
	}
	return f
}

// sentence is the text of a fault without the core's operation and cause, which
// say nothing to a caller.
func sentence(e *fault.Error) string {
	c := *e
	c.Op, c.Err = "", nil
	return c.Error()
}

// explainStatus finds the reason for a status that gRPC itself or one of its own
// services made.
func explainStatus(s *status.Status, cause error) *Failure {
	reason, message := InternalFault, "a fault of the service"
	switch s.Code() {
	case codes.InvalidArgument, codes.OutOfRange:
		reason, message = FieldInvalid, s.Message()
	case codes.NotFound:
		reason, message = ServiceNotFound, s.Message()
	case codes.FailedPrecondition, codes.Aborted, codes.AlreadyExists:
		reason, message = StreamProtocolBroken, s.Message()
	case codes.ResourceExhausted:
		reason, message = MessageTooLarge, s.Message()
	case codes.Unimplemented:
		reason, message = Unsupported, s.Message()
	case codes.Unavailable:
		reason, message = ServerOverloaded, s.Message()
	case codes.DeadlineExceeded:
		reason, message = DeadlinePassed, s.Message()
	case codes.Canceled:
		reason, message = CallCancelled, s.Message()
	case codes.Unauthenticated:
		reason, message = CallerUnknown, s.Message()
	case codes.PermissionDenied:
		reason, message = CallerNotAllowed, s.Message()
	case codes.OK, codes.Unknown, codes.Internal, codes.DataLoss:
	}
	return &Failure{Reason: reason, Message: message, Cause: cause}
}
