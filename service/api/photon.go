package api

import (
	"context"
	"errors"
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/photon"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// maxPhotonValues bounds the entries of all lists of one request: its reply stays
// below half of a message.
const maxPhotonValues = 10000

// photonService answers for processes with real photons and for fields of photons.
type photonService struct {
	kinegatev1.UnsafePhotonServiceServer

	table *particle.Table
	turns *turns
}

// DescribePhotonProcess describes one process.
func (s *photonService) DescribePhotonProcess(
	ctx context.Context, request *kinegatev1.DescribePhotonProcessRequest,
) (*kinegatev1.DescribePhotonProcessResponse, error) {
	m := &kinegatev1.DescribePhotonProcessResponse{TableVersion: s.table.Version()}
	work := s.turns.begin(ctx)
	defer work.end()
	var err error
	switch process := request.GetProcess().(type) {
	case *kinegatev1.DescribePhotonProcessRequest_PairCreation:
		err = s.pairCreation(work, m, process.PairCreation)
	case *kinegatev1.DescribePhotonProcessRequest_Compton:
		err = s.compton(work, m, process.Compton)
	case *kinegatev1.DescribePhotonProcessRequest_Backscatter:
		err = s.backscatter(work, m, process.Backscatter)
	case *kinegatev1.DescribePhotonProcessRequest_Annihilation:
		err = s.annihilation(work, m, process.Annihilation)
	case *kinegatev1.DescribePhotonProcessRequest_FieldPair:
		err = s.fieldPair(m, process.FieldPair)
	default:
		err = fault.New(fault.Invalid, "process", "", "pair_creation, compton, backscatter, annihilation or field_pair").
			Because("none is set")
	}
	if err != nil {
		return nil, err
	}
	return m, nil
}

// lepton reads the name of a charged lepton.
func (s *photonService) lepton(field, name string) (particle.Particle, error) {
	p, err := s.named(field, name)
	if err != nil {
		return p, err
	}
	if !isChargedLepton(&p) {
		return p, fault.New(fault.Invalid, field, name, "e-, mu- or tau-, of either charge")
	}
	return p, nil
}

// pairOf reads the name of a particle that photons create in pairs.
func (s *photonService) pairOf(field, name string) (particle.Particle, photon.PairSpin, error) {
	p, err := s.named(field, name)
	switch {
	case err != nil:
		return p, 0, err
	case isChargedLepton(&p):
		return p, photon.Lepton, nil
	case p.TwiceSpin == 0 && (p.ChargeThirds() == chargeUnit || p.ChargeThirds() == -chargeUnit) && !p.IsNucleus():
		return p, photon.Scalar, nil
	}
	return p, 0, fault.New(fault.Invalid, field, name, "a charged lepton, or a particle of spin 0 and unit charge such as pi+")
}

// named reads the name of a particle with a mass.
func (s *photonService) named(field, name string) (particle.Particle, error) {
	if name == "" {
		return particle.Particle{}, fault.New(fault.Invalid, field, "", "the name of a particle, such as e-").Because("none is given")
	}
	p, err := s.table.Named(name)
	if err != nil {
		return p, atField(field, Explain(err))
	}
	if p.Mass <= 0 {
		return p, fault.New(fault.Invalid, field, name, "a particle with a mass")
	}
	return p, nil
}

func isChargedLepton(p *particle.Particle) bool {
	switch p.Number {
	case 11, -11, 13, -13, 15, -15:
		return true
	}
	return false
}

// atFields returns a fault of the core with the path of the request's field in place
// of the core's name for it. A field that is not listed belongs to the member at.
func atFields(err error, at string, paths map[string]string) error {
	e, ok := errors.AsType[*fault.Error](err)
	if !ok {
		return err
	}
	c := *e
	if c.Field = at + "." + e.Field; paths[e.Field] != "" {
		c.Field = at + "." + paths[e.Field]
	}
	return &c
}

// tooMany refuses lists of more entries than one reply holds.
func tooMany(at string, counts ...int) error {
	sum := 0
	for _, n := range counts {
		sum += n
	}
	if sum <= maxPhotonValues {
		return nil
	}
	return fault.New(fault.Invalid, at, strconv.Itoa(sum)+" values", "at most "+strconv.Itoa(maxPhotonValues)+" in all lists together")
}

// cosinesFault refuses the first number that is no cosine.
func cosinesFault(field string, cosines []float64) error {
	for i, c := range cosines {
		if !(c >= -1 && c <= 1) {
			return fault.Number(index(field, i), c, "-1 <= cosine <= 1")
		}
	}
	return nil
}

// anglesFault refuses lists of more values than one reply holds, the first cosine that
// is none, and a largest |cosine| that is none; 0 where it is absent.
func anglesFault(at string, cosines []float64, maxCosine float64, totals []float64) error {
	if err := tooMany(at, len(cosines), len(totals)); err != nil {
		return err
	}
	if err := cosinesFault(at+".cosines", cosines); err != nil {
		return err
	}
	if !(maxCosine >= 0 && maxCosine <= 1) {
		return fault.Number(at+".max_cosine", maxCosine, "0 <= max_cosine <= 1")
	}
	return nil
}

// angleOf is the angle between two beams, head on where it is absent.
func angleOf(given bool, angle float64) float64 {
	if !given {
		return headOn
	}
	return angle
}

// corePhotonEnergy is the core's name for the energy of a photon.
const corePhotonEnergy = "photon_energy_gev"

// restEnergy is sqrt(s) of a pair of mass m each.
func restEnergy(e photon.PairEnergy, m float64) float64 { return 2 * m * math.Sqrt(e.Ratio()) }
