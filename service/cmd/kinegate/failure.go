package main

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"

	"example.org/kinegate/service/api"
)

// errNo ends a command whose answer is no and has been printed.
var errNo = errors.New("no")

// explain turns what a command returned into the text to print and the code to end
// with.
func explain(err error) (text string, code int) {
	if errors.Is(err, errNo) {
		return "", exitNo
	}
	if _, ok := errors.AsType[usageError](err); ok {
		return err.Error(), exitUsage
	}
	s, ok := status.FromError(err)
	if !ok {
		return err.Error(), exitFailed
	}
	if reasonOf(s) == string(api.ChannelClosed) {
		return describeStatus(s), exitNo
	}
	switch s.Code() { //nolint:exhaustive // all other codes are failures of the work
	case codes.InvalidArgument, codes.NotFound, codes.FailedPrecondition, codes.OutOfRange:
		return describeStatus(s), exitUsage
	case codes.Unimplemented:
		if reasonOf(s) == string(api.Unsupported) { // a question that nothing answers, not a server that is too old
			return describeStatus(s), exitUsage
		}
	case codes.Unavailable, codes.DeadlineExceeded:
		if reasonOf(s) == "" { // no server of ours has answered
			return "no server answers in time: " + s.Message() + hint(s), exitFailed
		}
	}
	return describeStatus(s), exitFailed
}

// reasonOf is the registered reason of a status, empty for none.
func reasonOf(s *status.Status) string {
	for _, d := range s.Details() {
		if info, ok := d.(*errdetails.ErrorInfo); ok {
			return info.GetReason()
		}
	}
	return ""
}

// hint says what may be behind the words of the transport.
func hint(s *status.Status) string {
	if strings.Contains(s.Message(), "server preface") {
		return "\n  the server may want TLS: --tls, with --ca for an authority of your own"
	}
	return ""
}

// byFlag puts the flag of a command in place of the field that it fills, where a sentence
// begins with that. Longer paths are those of files.
func byFlag(sentence string) string {
	for _, p := range [][2]string{
		{"beam.total_energy_gev", "--beam in GeV"}, {"beam.kinetic_energy_gev", "--beam-kinetic in GeV"}, {"beam.momentum_gev", "--beam-momentum in GeV"},
		{"beam1.total_energy_gev", "--beam in GeV"}, {"beam1.kinetic_energy_gev", "--beam-kinetic in GeV"},
		{"beam1.momentum_gev", "--beam-momentum in GeV"}, {"beam2.total_energy_gev", "--beam2 in GeV"},
		{"beam2.kinetic_energy_gev", "--beam2-kinetic in GeV"}, {"beam2.momentum_gev", "--beam2-momentum in GeV"},
		{"parent.total_energy_gev", "--parent in GeV"}, {"parent.kinetic_energy_gev", "--parent-kinetic in GeV"},
		{"parent.momentum_gev", "--parent-momentum in GeV"}, {"angle_between_beams_rad", "--angle in rad"}, {"sqrt_s_gev", "--sqrt-s in GeV"},
		{"opening_angles_rad", "--opening-angle in rad"}, {"rest_frame_cosines", "--rest-cosine"}, {"laboratory_angles_rad", "--lab-angle in rad"},
	} {
		if rest, ok := strings.CutPrefix(sentence, p[0]); ok && strings.IndexAny(rest+" ", " :[") == 0 {
			return p[1] + rest
		}
	}
	return sentence
}

// describeStatus prints a status of the server: its sentence, the other fields at
// fault, and a mark under the place in the text where there is one.
func describeStatus(s *status.Status) string {
	lines := []string{byFlag(s.Message())}
	for _, d := range s.Details() {
		if detail, ok := d.(*errdetails.BadRequest); ok {
			for _, v := range detail.GetFieldViolations() {
				if v.GetDescription() != "" && !strings.Contains(s.Message(), v.GetDescription()) {
					lines = append(lines, "  "+v.GetField()+": "+v.GetDescription())
				}
			}
		}
	}
	return strings.Join(slices.Compact(lines), "\n")
}

// underline shows the place of a fault in a text that the user typed.
func underline(err error, text string) error {
	if err == nil {
		return nil
	}
	s, ok := status.FromError(err)
	if !ok {
		return err
	}
	for _, d := range s.Details() {
		info, ok := d.(*errdetails.ErrorInfo)
		if !ok {
			continue
		}
		var column int
		if _, scanErr := fmt.Sscan(info.GetMetadata()["column"], &column); scanErr != nil || column < 1 || column > len(text)+1 {
			continue
		}
		shown := describeStatus(s) + "\n  " + text + "\n  " + strings.Repeat(" ", column-1) + "^"
		return usageError{errors.New(shown)}
	}
	return err
}
