package api

import (
	"context"
	"reflect"
	"strings"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Sizes of a page of particles.
const (
	defaultPage = 100
	largestPage = 500
)

// particleService answers from the particle table.
type particleService struct {
	kinegatev1.UnsafeParticleServiceServer

	table    *particle.Table
	messages []*kinegatev1.Particle // of the whole table, in its order
	byNumber map[int64]int
}

// newParticleService converts the table once: it does not change. The standard table
// tells which rows are built in.
func newParticleService(table, standard *particle.Table) *particleService {
	s := &particleService{table: table, byNumber: map[int64]int{}}
	for i, p := range table.List() {
		s.byNumber[p.Number] = i
		s.messages = append(s.messages, particleMessage(p, table, originOf(p, standard)))
	}
	return s
}

// GetParticle returns one particle.
func (s *particleService) GetParticle(_ context.Context, request *kinegatev1.GetParticleRequest) (*kinegatev1.GetParticleResponse, error) {
	var p particle.Particle
	var err error
	field := "name"
	switch key := request.GetKey().(type) {
	case *kinegatev1.GetParticleRequest_Name:
		if key.Name == "" {
			return nil, fault.New(fault.Invalid, "name", "", "a name or an alias, such as K+")
		}
		p, err = s.table.Named(key.Name)
	case *kinegatev1.GetParticleRequest_ParticleNumber:
		field = "particle_number"
		p, err = s.table.Numbered(key.ParticleNumber)
	case nil:
		return nil, fault.New(fault.Invalid, "key", "", "name or particle_number").Because("neither is set")
	}
	if err != nil {
		return nil, atField(field, Because(ParticleNotFound, err))
	}
	return &kinegatev1.GetParticleResponse{
		Particle: s.messages[s.byNumber[p.Number]], TableVersion: s.table.Version(),
	}, nil
}

// ListParticles returns one page of the table.
func (s *particleService) ListParticles(_ context.Context, request *kinegatev1.ListParticlesRequest) (*kinegatev1.ListParticlesResponse, error) {
	size, err := pageSize(request.GetPageSize(), defaultPage, largestPage)
	if err != nil {
		return nil, err
	}
	binding := pageBinding("ListParticles", s.table.Digest(), request.GetNameContains())
	next, err := binding.position(request.GetPageToken(), len(s.messages))
	if err != nil {
		return nil, err
	}
	response := &kinegatev1.ListParticlesResponse{TableVersion: s.table.Version()}
	for ; next < len(s.messages); next++ {
		if !nameContains(s.messages[next], request.GetNameContains()) {
			continue
		}
		if len(response.GetParticles()) == size {
			response.NextPageToken = binding.token(next)
			break
		}
		response.Particles = append(response.Particles, s.messages[next])
	}
	return response, nil
}

// nameContains reports whether the name or an alias has the text in it.
func nameContains(p *kinegatev1.Particle, text string) bool {
	if strings.Contains(p.GetName(), text) {
		return true
	}
	for _, alias := range p.GetAliases() {
		if strings.Contains(alias, text) {
			return true
		}
	}
	return false
}

// originOf says whether a row is built in.
func originOf(p particle.Particle, standard *particle.Table) kinegatev1.ParticleOrigin {
	built, err := standard.Numbered(p.Number)
	switch {
	case err != nil:
		return kinegatev1.ParticleOrigin_PARTICLE_ORIGIN_ADDED
	case reflect.DeepEqual(built, p):
		return kinegatev1.ParticleOrigin_PARTICLE_ORIGIN_TABLE
	}
	return kinegatev1.ParticleOrigin_PARTICLE_ORIGIN_OVERRIDDEN
}

// particleMessage converts a row of the table.
func particleMessage(p particle.Particle, table *particle.Table, origin kinegatev1.ParticleOrigin) *kinegatev1.Particle {
	m := &kinegatev1.Particle{
		ParticleNumber:     p.Number,
		Name:               p.Name,
		Aliases:            p.Aliases(),
		Description:        p.Title,
		MassGev:            p.Mass,
		MassUncertaintyGev: known(p.MassError),
		Stable:             p.Stable(),
		ChargeThirds:       int32Of(p.ChargeThirds()),
		Parity:             sign(p.Parity),
		CParity:            sign(p.CParity),
		BaryonNumberThirds: int32Of(p.Numbers.BaryonThirds),
		ElectronNumber:     int32Of(p.Numbers.Electron),
		MuonNumber:         int32Of(p.Numbers.Muon),
		TauNumber:          int32Of(p.Numbers.Tau),
		Strangeness:        int32Of(p.Numbers.Strangeness),
		Charm:              int32Of(p.Numbers.Charm),
		Bottomness:         int32Of(p.Numbers.Bottomness),
		Topness:            int32Of(p.Numbers.Topness),
		AntiparticleNumber: p.AntiNumber,
		Source:             p.Source,
		Origin:             origin,
		NotBreitWigner:     p.NotBreitWigner != "",
	}
	// Every particle of a table has its antiparticle there.
	if anti, err := table.Conjugate(p); err == nil {
		m.AntiparticleName = anti.Name
	}
	if p.TwiceSpin >= 0 {
		m.SpinDoubled = int32Of(p.TwiceSpin)
	}
	switch p.Life {
	case particle.LifeStable:
		m.WidthGev = new(float64)
	case particle.LifeWidth, particle.LifeMeanLife:
		m.WidthGev, m.WidthUncertaintyGev = &p.Width, known(p.WidthError)
		m.MeanLifeS, m.MeanLifeUncertaintyS = &p.MeanLife, known(p.MeanLifeError)
	case particle.LifeUnknown:
	}
	return m
}

// known is a pointer to an uncertainty, nil for 0, which stands for none stated.
func known(x float64) *float64 {
	if x == 0 {
		return nil
	}
	return &x
}

// sign is a pointer to a parity, nil for 0, which stands for none.
func sign(x int) *int32 {
	if x == 0 {
		return nil
	}
	return new(int32Of(x))
}

// int32Of converts a small number: quantum numbers and counts within one reaction.
func int32Of(x int) int32 { return int32(x) } //nolint:gosec // far below 2^31
