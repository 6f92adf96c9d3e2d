package api

import (
	"slices"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// columnWriter encodes columns one behind the other in memory that is used again. What it
// returns is valid until reset.
type columnWriter struct{ arena []byte }

func (w *columnWriter) reset() { w.arena = w.arena[:0] }

// since is the column from start to the end of the arena. Should the arena move, earlier
// columns stay where they were.
func (w *columnWriter) since(start int) []byte { return w.arena[start:len(w.arena):len(w.arena)] }

func (w *columnWriter) float64s(xs []float64) []byte {
	start := len(w.arena)
	w.arena = column.AppendFloat64(w.arena, xs)
	return w.since(start)
}

func (w *columnWriter) int64s(xs []int64) []byte {
	start := len(w.arena)
	w.arena = column.AppendInt64(w.arena, xs)
	return w.since(start)
}

func (w *columnWriter) int32s(xs []int32) []byte {
	start := len(w.arena)
	w.arena = column.AppendInt32(w.arena, xs)
	return w.since(start)
}

func (w *columnWriter) int16s(xs []int16) []byte {
	start := len(w.arena)
	w.arena = column.AppendInt16(w.arena, xs)
	return w.since(start)
}

func (w *columnWriter) bools(xs []bool) []byte {
	flags := w.room(len(xs))
	for i, x := range xs {
		if x {
			flags[i] = 1
		}
	}
	return flags
}

// room is a column of n zero bytes.
func (w *columnWriter) room(n int) []byte {
	start := len(w.arena)
	w.arena = slices.Grow(w.arena, n)[:start+n]
	clear(w.arena[start:])
	return w.since(start)
}

// momenta encodes four columns in one pass.
func (w *columnWriter) momenta(xs []momentum.Four) *kinegatev1.EnergyMomentumColumns {
	const size = 8
	m := &kinegatev1.EnergyMomentumColumns{
		EnergyGev: w.room(size * len(xs)), PxGev: w.room(size * len(xs)),
		PyGev: w.room(size * len(xs)), PzGev: w.room(size * len(xs)),
	}
	e, x, y, z := m.GetEnergyGev(), m.GetPxGev(), m.GetPyGev(), m.GetPzGev()
	for i := range xs {
		p := &xs[i]
		column.PutFloat64(e, i, p.E)
		column.PutFloat64(x, i, p.P.X)
		column.PutFloat64(y, i, p.P.Y)
		column.PutFloat64(z, i, p.P.Z)
	}
	return m
}

func (w *columnWriter) positions(p *event.Positions) *kinegatev1.PositionColumns {
	return &kinegatev1.PositionColumns{XM: w.float64s(p.X), YM: w.float64s(p.Y), ZM: w.float64s(p.Z)}
}

// truth converts simulated events.
func (w *columnWriter) truth(t *event.Truth) *kinegatev1.TruthColumns {
	return &kinegatev1.TruthColumns{
		EventIds: w.int64s(t.EventIDs), Channels: w.int16s(t.Channel), Weights: w.float64s(t.Weight),
		InitialState: w.momenta(t.Initial), Vertex: w.positions(&t.Vertex),
		ParticleOffsets: w.int32s(t.Offsets), ParticleNumbers: w.int64s(t.Number), Momentum: w.momenta(t.Momentum),
		MassGev: w.float64s(t.Mass), Parents: w.int16s(t.Parent), Decayed: w.bools(t.Decayed),
		Origin: w.positions(&t.Origin), ProperTimeS: w.float64s(t.ProperTimeS),
		BeamOffsets: w.int32s(t.BeamOffsets), BeamEnergyGev: w.float64s(t.BeamEnergyGeV), BeamTimeNs: w.float64s(t.BeamTimeNS),
		Polarisation: w.polarisation(t.Polarisation),
	}
}

// block converts measured events to the message that eventBlock reads.
func (w *columnWriter) block(b *event.Block) *kinegatev1.EventBlock {
	m := &kinegatev1.EventBlock{
		EventIds: w.int64s(b.EventIDs), RunNumber: b.RunNumber, ObjectOffsets: w.int32s(b.ObjectOffsets),
		ObjectClasses: column.Uint8(b.Class),
	}
	w.coordinates(m, &b.Coordinates)
	if x := b.Measured; x != nil {
		m.MeasuredMask = &kinegatev1.MeasuredMaskColumn{Masks: x.Bits}
	}
	if x := b.Species; x != nil {
		m.SpeciesMask = &kinegatev1.SpeciesMaskColumn{Masks: x.Bits}
	}
	if x := b.Covariance; x != nil {
		m.Covariance = &kinegatev1.CovarianceColumn{Elements: w.float64s(x.Packed)}
	}
	if x := b.Beam; x != nil {
		m.Beam = &kinegatev1.BeamColumns{
			Offsets: w.int32s(x.Offsets), EnergyGev: w.float64s(x.EnergyGeV),
			SigmaGev: w.float64s(x.SigmaGeV), TimeNs: w.float64s(x.TimeNS),
		}
	}
	if x := b.Vertex; x != nil {
		m.Vertex = &kinegatev1.VertexColumns{
			XM: w.float64s(x.X), YM: w.float64s(x.Y), ZM: w.float64s(x.Z), CovarianceM2: w.covariance(x.Covariance),
		}
	}
	if x := b.Groups; x != nil {
		m.VertexGroup = &kinegatev1.VertexGroupColumns{
			Groups: w.int32s(x.OfObject), Offsets: w.int32s(x.Offsets),
			XM: w.float64s(x.Position.X), YM: w.float64s(x.Position.Y), ZM: w.float64s(x.Position.Z),
			CovarianceM2: w.covariance(x.Covariance),
		}
	}
	if x := b.Clusters; x != nil {
		m.ClusterPosition = &kinegatev1.ClusterPositionColumns{XM: w.float64s(x.X), YM: w.float64s(x.Y), ZM: w.float64s(x.Z)}
	}
	m.Polarisation = w.polarisation(b.Polarisation)
	return m
}

func (w *columnWriter) polarisation(p *event.Polarisation) *kinegatev1.PolarisationColumns {
	if p == nil {
		return nil
	}
	return &kinegatev1.PolarisationColumns{
		LinearDegree: w.float64s(p.Linear), PlaneRad: w.float64s(p.PlaneRad), CircularDegree: w.float64s(p.Circular),
	}
}

// covariance encodes an optional column; nil is absent, empty is not.
func (w *columnWriter) covariance(c *event.Covariance) []byte {
	if c == nil {
		return nil
	}
	return w.float64s(c.Packed)
}

// coordinates encodes the coordinate set.
func (w *columnWriter) coordinates(m *kinegatev1.EventBlock, x *event.Coordinates) {
	var c [len(x.Columns)][]byte
	for i := range x.Kind.Columns() {
		c[i] = w.float64s(x.Columns[i])
	}
	switch x.Kind {
	case event.EnergyMomentum:
		m.Coordinates = &kinegatev1.EventBlock_EnergyMomentum{EnergyMomentum: &kinegatev1.EnergyMomentumColumns{
			PxGev: c[0], PyGev: c[1], PzGev: c[2], EnergyGev: c[3],
		}}
	case event.MomentumMass:
		m.Coordinates = &kinegatev1.EventBlock_MomentumMass{MomentumMass: &kinegatev1.MomentumMassColumns{
			PxGev: c[0], PyGev: c[1], PzGev: c[2], MassGev: c[3],
		}}
	case event.TransverseMomentum:
		m.Coordinates = &kinegatev1.EventBlock_TransverseMomentum{TransverseMomentum: &kinegatev1.TransverseMomentumColumns{
			TransverseMomentumGev: c[0], Pseudorapidity: c[1], PhiRad: c[2], MassGev: c[3],
		}}
	case event.MomentumAngles:
		m.Coordinates = &kinegatev1.EventBlock_MomentumAngles{MomentumAngles: &kinegatev1.MomentumAnglesColumns{
			MomentumGev: c[0], ThetaRad: c[1], PhiRad: c[2],
		}}
	case event.MomentumSlopes:
		m.Coordinates = &kinegatev1.EventBlock_MomentumSlopes{MomentumSlopes: &kinegatev1.MomentumSlopesColumns{
			MomentumGev: c[0], SlopeX: c[1], SlopeY: c[2],
		}}
	}
}
