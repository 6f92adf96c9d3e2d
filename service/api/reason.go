package api

import (
	"google.golang.org/grpc/codes"

	"example.org/kinegate/kinematics/fault"
)

// Domain is the domain of every ErrorInfo that the service sends.
const Domain = "kinegate.example.org"

// Reason says why a call, or a block of a stream, was refused. The list is closed:
// Reasons returns all of them. A reason has one code and one retry meaning for ever.
type Reason string

// The registered reasons.
const (
	// FieldInvalid marks a field that is malformed or out of its range.
	FieldInvalid Reason = "FIELD_INVALID"
	// NameUnknown marks a name inside a text or structure that nothing is known by.
	NameUnknown Reason = "NAME_UNKNOWN"
	// LawBroken marks a process that a conservation law forbids.
	LawBroken Reason = "LAW_BROKEN"
	// OutsideRegion marks a point outside the physical region.
	OutsideRegion Reason = "OUTSIDE_REGION"
	// ConditionsInfeasible marks conditions that no solution meets together.
	ConditionsInfeasible Reason = "CONDITIONS_INFEASIBLE"
	// PageTokenInvalid marks a page token that was not made for these arguments.
	PageTokenInvalid Reason = "PAGE_TOKEN_INVALID"
	// SelectionInvalid marks a selection with faults.
	SelectionInvalid Reason = "SELECTION_INVALID"
	// BlockInvalid marks an event block whose structure is unsound.
	BlockInvalid Reason = "BLOCK_INVALID"
	// MessageUndecodable marks bytes that are not the message of the method.
	MessageUndecodable Reason = "MESSAGE_UNDECODABLE"

	// ParticleNotFound marks a particle asked for that the table does not have.
	ParticleNotFound Reason = "PARTICLE_NOT_FOUND"
	// SelectionNotFound marks a selection asked for that the server does not have.
	SelectionNotFound Reason = "SELECTION_NOT_FOUND"
	// ServiceNotFound marks a service that the health check does not know.
	ServiceNotFound Reason = "SERVICE_NOT_FOUND"

	// ChannelClosed marks work on a channel that the energy does not open.
	ChannelClosed Reason = "CHANNEL_CLOSED"
	// NotConverged marks an answer whose iteration did not reach its bound.
	NotConverged Reason = "NOT_CONVERGED"
	// DigestGone marks a selection digest that is no longer available.
	DigestGone Reason = "DIGEST_GONE"
	// StreamProtocolBroken marks a frame that the stream's protocol does not allow.
	StreamProtocolBroken Reason = "STREAM_PROTOCOL_BROKEN"

	// MessageTooLarge marks a message over the transport's limit.
	MessageTooLarge Reason = "MESSAGE_TOO_LARGE"
	// HeadersTooLarge marks a request whose headers are over their limit.
	HeadersTooLarge Reason = "HEADERS_TOO_LARGE"
	// MessageTooCostly marks a message that would need too much memory decoded.
	MessageTooCostly Reason = "MESSAGE_TOO_COSTLY"
	// ReplyTooLarge marks a request whose reply could pass the transport's limit.
	ReplyTooLarge Reason = "REPLY_TOO_LARGE"
	// WorkBudgetUsed marks work over the budget that the request may have.
	WorkBudgetUsed Reason = "WORK_BUDGET_USED"
	// QuotaExceeded marks a caller over its quota.
	QuotaExceeded Reason = "QUOTA_EXCEEDED"

	// ServerOverloaded marks a replica with no room left; another may have some.
	ServerOverloaded Reason = "SERVER_OVERLOADED"
	// ServerDraining marks a replica that is about to leave.
	ServerDraining Reason = "SERVER_DRAINING"
	// StreamStalled marks a stream whose reader took nothing for too long.
	StreamStalled Reason = "STREAM_STALLED"

	// DeadlinePassed marks a call that outlived its deadline.
	DeadlinePassed Reason = "DEADLINE_PASSED"
	// StreamIdle marks a stream without a frame or heartbeat for too long.
	StreamIdle Reason = "STREAM_IDLE"
	// CallCancelled marks a call that its caller gave up.
	CallCancelled Reason = "CALL_CANCELLED"

	// CallerUnknown marks a caller without an identity.
	CallerUnknown Reason = "CALLER_UNKNOWN"
	// CallerNotAllowed marks a caller whose identity may not call the method.
	CallerNotAllowed Reason = "CALLER_NOT_ALLOWED"

	// MethodUnknown marks a method that the listener does not serve.
	MethodUnknown Reason = "METHOD_UNKNOWN"
	// CompressionUnsupported marks a compressed message.
	CompressionUnsupported Reason = "COMPRESSION_UNSUPPORTED"
	// Unsupported marks a sound request that nothing here answers.
	Unsupported Reason = "UNSUPPORTED"

	// InternalFault marks a fault of the service itself.
	InternalFault Reason = "INTERNAL_FAULT"
)

// Meaning is what a reason tells the caller to do.
type Meaning struct {
	// Reason is the reason.
	Reason Reason
	// Code is the gRPC code it is sent with.
	Code codes.Code
	// Retryable says that the same call may succeed on another replica or later,
	// without a change by the caller. It holds exactly for code UNAVAILABLE.
	Retryable bool
}

// Reasons returns the registry in its order.
func Reasons() []Meaning {
	return []Meaning{
		{FieldInvalid, codes.InvalidArgument, false},
		{NameUnknown, codes.InvalidArgument, false},
		{LawBroken, codes.InvalidArgument, false},
		{OutsideRegion, codes.InvalidArgument, false},
		{ConditionsInfeasible, codes.InvalidArgument, false},
		{PageTokenInvalid, codes.InvalidArgument, false},
		{SelectionInvalid, codes.InvalidArgument, false},
		{BlockInvalid, codes.InvalidArgument, false},
		{MessageUndecodable, codes.InvalidArgument, false},
		{ParticleNotFound, codes.NotFound, false},
		{SelectionNotFound, codes.NotFound, false},
		{ServiceNotFound, codes.NotFound, false},
		{ChannelClosed, codes.FailedPrecondition, false},
		{NotConverged, codes.FailedPrecondition, false},
		{DigestGone, codes.FailedPrecondition, false},
		{StreamProtocolBroken, codes.FailedPrecondition, false},
		{MessageTooLarge, codes.ResourceExhausted, false},
		{HeadersTooLarge, codes.ResourceExhausted, false},
		{MessageTooCostly, codes.ResourceExhausted, false},
		{ReplyTooLarge, codes.ResourceExhausted, false},
		{WorkBudgetUsed, codes.ResourceExhausted, false},
		{QuotaExceeded, codes.ResourceExhausted, false},
		{ServerOverloaded, codes.Unavailable, true},
		{ServerDraining, codes.Unavailable, true},
		{StreamStalled, codes.Unavailable, true},
		{DeadlinePassed, codes.DeadlineExceeded, false},
		{StreamIdle, codes.DeadlineExceeded, false},
		{CallCancelled, codes.Canceled, false},
		{CallerUnknown, codes.Unauthenticated, false},
		{CallerNotAllowed, codes.PermissionDenied, false},
		{MethodUnknown, codes.Unimplemented, false},
		{CompressionUnsupported, codes.Unimplemented, false},
		{Unsupported, codes.Unimplemented, false},
		{InternalFault, codes.Internal, false},
	}
}

// MeaningOf returns the meaning of a reason; that of InternalFault for one that is
// not registered.
func MeaningOf(reason Reason) Meaning {
	var last Meaning
	for _, last = range Reasons() {
		if last.Reason == reason {
			break
		}
	}
	return last
}

// reasonOfKind joins the kinds of the core's faults to the reasons; ok is false for
// a kind outside the closed list.
func reasonOfKind(kind fault.Kind) (reason Reason, ok bool) {
	switch kind {
	case fault.Invalid:
		return FieldInvalid, true
	case fault.NotFound:
		return NameUnknown, true
	case fault.Forbidden:
		return LawBroken, true
	case fault.BelowThreshold:
		return ChannelClosed, true
	case fault.Outside:
		return OutsideRegion, true
	case fault.Infeasible:
		return ConditionsInfeasible, true
	case fault.NotConverged:
		return NotConverged, true
	case fault.Exhausted:
		return WorkBudgetUsed, true
	case fault.Unsupported:
		return Unsupported, true
	}
	return InternalFault, false
}
