package api

import (
	"context"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// ExplainVerdict lays the verdict on one event open.
func (s *selectionService) ExplainVerdict(context.Context, *kinegatev1.ExplainVerdictRequest) (*kinegatev1.ExplainVerdictResponse, error) {
	return nil, Refuse(MethodUnknown, "this server cannot explain verdicts yet")
}
