package api

import (
	"context"

	"example.org/kinegate/kinematics"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// infoService describes the running server.
type infoService struct {
	kinegatev1.UnsafeInfoServiceServer

	deps Deps
}

// GetInfo returns versions, limits, selections and the caution.
func (s *infoService) GetInfo(context.Context, *kinegatev1.GetInfoRequest) (*kinegatev1.GetInfoResponse, error) {
	return &kinegatev1.GetInfoResponse{
		Version:         s.deps.Version,
		NumericsVersion: kinematics.NumericsVersion,
		TableVersion:    s.deps.Table.Version(),
		TableDigest:     s.deps.Table.Digest(),
		Caution:         Caution,
		Limits:          s.deps.Limits.blocks().message(),
		Selections:      s.deps.Library.list(),
	}, nil
}
