package main

import (
	"math"
	"strconv"
	"strings"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
)

// resolution is what is assumed of objects whose file states no covariances: the standard
// deviation of a momentum as a part of it, and that of a direction, across it, in rad.
type resolution struct {
	relative, angle float64
}

// parseResolution reads PART:ANGLE, such as "1.5 %:1 mrad" or "0.015:0.001 rad".
func parseResolution(text string) (*resolution, error) {
	part, direction, found := strings.Cut(text, ":")
	if !found {
		return nil, badInput(`--assume-resolution %q: PART:ANGLE is needed, such as "1.5 %%:1 mrad"`, text)
	}
	number, percent := strings.CutSuffix(strings.TrimSpace(part), "%")
	relative, err := strconv.ParseFloat(strings.TrimSpace(number), 64)
	if percent {
		relative /= 100
	}
	if err != nil || !(relative > 0 && relative < 1) {
		return nil, badInput("--assume-resolution %q: a part of the momentum above 0 and below 1 is needed", text)
	}
	angle, err := quantity.Parse(direction, quantity.Angle)
	if err != nil {
		return nil, badInput("--assume-resolution %q: %w", text, err)
	}
	if !(angle > 0 && angle < 1) {
		return nil, badInput("--assume-resolution %q: an angle above 0 and below 1 rad is needed", text)
	}
	return &resolution{relative, angle}, nil
}

// fill gives a block without covariances those of the resolution, evaluated at the measured
// values: with r and a its two parts, p the momentum and n its direction
//
//	components:  (r p)^2 n n' + (a p)^2 (1 - n n')
//	angles:      (r p)^2,  a^2,  (a/sin theta)^2
//	transverse:  pt^2 (r^2 + a^2 sinh^2 eta),  -pt a^2 sinh eta cosh eta,  (a cosh eta)^2,  (a cosh eta)^2
func (r *resolution) fill(block *kinegatev1.EventBlock) error {
	var columns [3][]float64
	read := func(raw ...[]byte) (err error) {
		for k := range columns {
			if columns[k], err = column.Float64s(raw[k]); err != nil {
				return err
			}
		}
		return nil
	}
	var row func(a, b, c float64) [6]float64
	var err error
	switch {
	case block.GetMomentumMass() != nil:
		x := block.GetMomentumMass()
		row, err = r.components, read(x.GetPxGev(), x.GetPyGev(), x.GetPzGev())
	case block.GetEnergyMomentum() != nil:
		x := block.GetEnergyMomentum()
		row, err = r.components, read(x.GetPxGev(), x.GetPyGev(), x.GetPzGev())
	case block.GetMomentumAngles() != nil:
		x := block.GetMomentumAngles()
		row, err = r.angles, read(x.GetMomentumGev(), x.GetThetaRad(), x.GetPhiRad())
	case block.GetTransverseMomentum() != nil:
		x := block.GetTransverseMomentum()
		row, err = r.transverse, read(x.GetTransverseMomentumGev(), x.GetPseudorapidity(), x.GetPhiRad())
	default:
		return badInput("--assume-resolution: the coordinates of these events are not among those it can be assumed for")
	}
	if err != nil {
		return err
	}
	packed := make([]float64, 0, 6*len(columns[0]))
	for i := range columns[0] {
		v := row(columns[0][i], columns[1][i], columns[2][i])
		packed = append(packed, v[:]...)
	}
	block.Covariance = &kinegatev1.CovarianceColumn{Elements: column.Float64(packed)}
	return nil
}

func (r *resolution) components(x, y, z float64) [6]float64 {
	along, across := r.relative*r.relative-r.angle*r.angle, r.angle*r.angle
	square := across * (x*x + y*y + z*z)
	return [6]float64{along*x*x + square, along * x * y, along * x * z, along*y*y + square, along * y * z, along*z*z + square}
}

func (r *resolution) angles(p, theta, _ float64) [6]float64 {
	phi := r.angle / math.Sin(theta)
	return [6]float64{r.relative * p * r.relative * p, 0, 0, r.angle * r.angle, 0, phi * phi}
}

func (r *resolution) transverse(pt, eta, _ float64) [6]float64 {
	sinh, cosh := math.Sinh(eta), math.Cosh(eta)
	square := r.angle * r.angle
	return [6]float64{
		pt * pt * (r.relative*r.relative + square*sinh*sinh), -pt * square * sinh * cosh, 0, square * cosh * cosh, 0, square * cosh * cosh,
	}
}
