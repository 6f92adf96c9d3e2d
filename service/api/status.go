package api

import (
	"fmt"
	"strconv"
	"strings"
	"unicode/utf8"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	spb "google.golang.org/genproto/googleapis/rpc/status"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/types/known/anypb"
	"google.golang.org/protobuf/types/known/durationpb"
)

// Bounds of a status. It travels in the trailers, base64-coded beside a second copy
// of the message, and clients refuse trailers above 8 KiB; 4 KiB of status stays
// below that.
const (
	maxStatusBytes = 4096
	maxViolations  = 16
	maxTextBytes   = 200 // of one field path, value or description
	maxMessage     = 480 // of the message, which percent-coding can treble
)

// Status puts the failure into gRPC's form. The reference is named to the caller of
// an InternalFault in place of the message; the log must hold it beside the cause.
func (f *Failure) Status(reference string) *status.Status {
	meaning := MeaningOf(f.Reason)
	info := &errdetails.ErrorInfo{Reason: string(meaning.Reason), Domain: Domain, Metadata: f.metadata()}
	message := clip(f.Message, maxMessage)
	if meaning.Reason == InternalFault {
		message = "internal fault, reference " + reference
		info.Metadata = map[string]string{"reference": reference}
	}
	details := []proto.Message{info}
	if f.RetryAfter > 0 {
		details = append(details, &errdetails.RetryInfo{RetryDelay: durationpb.New(f.RetryAfter)})
	}
	if meaning.Reason == QuotaExceeded {
		details = append(details, &errdetails.QuotaFailure{Violations: []*errdetails.QuotaFailure_Violation{{
			Subject: "caller:" + info.GetMetadata()["caller"], Description: message,
		}}})
	}
	if len(f.Violations) > 0 && meaning.Reason != InternalFault {
		details = append(details, badRequest(f.Violations))
	}
	s := &spb.Status{Code: int32(meaning.Code), Message: message} //nolint:gosec // codes are below 17
	for _, d := range details {
		packed, err := anypb.New(d)
		if err != nil {
			// Only text that is not UTF-8 fails to pack, and clip lets none through.
			continue
		}
		s.Details = append(s.Details, packed)
	}
	return status.FromProto(shrink(s))
}

// metadata is the metadata of the failure with what its first violation adds.
func (f *Failure) metadata() map[string]string {
	m := map[string]string{}
	for k, v := range f.Metadata {
		m[k] = clip(v, maxTextBytes)
	}
	if len(f.Violations) == 0 {
		return m
	}
	first := f.Violations[0]
	m["violation_count"] = strconv.Itoa(len(f.Violations))
	for k, v := range map[string]string{
		"field": first.Field, "value": first.Value, "allowed": first.Allowed,
		"nearest": strings.Join(first.Nearest, ", "),
	} {
		if v != "" {
			m[k] = clip(v, maxTextBytes)
		}
	}
	return m
}

// badRequest lists the first violations.
func badRequest(violations []Violation) *errdetails.BadRequest {
	b := &errdetails.BadRequest{}
	for _, v := range violations[:min(len(violations), maxViolations)] {
		b.FieldViolations = append(b.FieldViolations, &errdetails.BadRequest_FieldViolation{
			Field: clip(v.Field, maxTextBytes), Description: clip(v.describe(), maxTextBytes),
		})
	}
	return b
}

// describe says what is wrong with the field: the value and what is allowed.
func (v Violation) describe() string {
	if v.Problem != "" {
		return v.Problem
	}
	text := fmt.Sprintf("%q is not allowed", v.Value)
	if v.Allowed != "" {
		text += ", allowed: " + v.Allowed
	}
	return text
}

// shrink drops violations from the end until the status is small enough. The rest
// is bounded: the message, and metadata of a few keys of maxTextBytes each.
func shrink(s *spb.Status) *spb.Status {
	for proto.Size(s) > maxStatusBytes && len(s.GetDetails()) > 0 {
		last := s.GetDetails()[len(s.GetDetails())-1]
		b := &errdetails.BadRequest{}
		if last.UnmarshalTo(b) != nil || len(b.GetFieldViolations()) == 0 {
			break
		}
		b.FieldViolations = b.GetFieldViolations()[:len(b.GetFieldViolations())-1]
		if last.MarshalFrom(b) != nil {
			break
		}
	}
	return s
}

// clip shortens text to at most n bytes of valid UTF-8 and marks the cut.
func clip(text string, n int) string {
	text = strings.ToValidUTF8(text, "?")
	if len(text) <= n {
		return text
	}
	const mark = "..."
	cut := n - len(mark)
	for cut > 0 && !utf8.RuneStart(text[cut]) {
		cut--
	}
	return text[:cut] + mark
}
