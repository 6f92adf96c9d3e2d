package api

import (
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"google.golang.org/grpc/codes"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/particle"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func newTestTable(t *testing.T, files ...particle.File) *particle.Table {
	t.Helper()
	table, err := particle.New(files...)
	if err != nil {
		t.Fatal(err)
	}
	return table
}

// refused checks the reason and code of an error and returns its metadata.
func refused(t *testing.T, err error, reason Reason) map[string]string {
	t.Helper()
	if err == nil {
		t.Fatalf("no error, want %s", reason)
	}
	f := Explain(err)
	if f.Reason != reason {
		t.Fatalf("got %s (%v), want %s", f.Reason, err, reason)
	}
	return detailsOf(t, f.Status("")).info[0].GetMetadata()
}

func TestGetParticle(t *testing.T) {
	table := newTestTable(t)
	s := newParticleService(table, table)
	byName := func(name string) *kinegatev1.GetParticleRequest {
		return &kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_Name{Name: name}}
	}
	byNumber := func(n int64) *kinegatev1.GetParticleRequest {
		return &kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_ParticleNumber{ParticleNumber: n}}
	}
	t.Run("stable", func(t *testing.T) {
		r, err := s.GetParticle(t.Context(), byName("p"))
		if err != nil {
			t.Fatal(err)
		}
		p := r.GetParticle()
		if p.GetParticleNumber() != 2212 || !p.GetStable() || p.MeanLifeS != nil || p.WidthGev == nil || *p.WidthGev != 0 ||
			p.GetBaryonNumberThirds() != 3 || p.GetChargeThirds() != 3 || p.GetSpinDoubled() != 1 || p.GetParity() != 1 ||
			p.GetAntiparticleNumber() != -2212 || p.GetOrigin() != kinegatev1.ParticleOrigin_PARTICLE_ORIGIN_TABLE {
			t.Errorf("proton: %v", p)
		}
		if r.GetTableVersion() != table.Version() {
			t.Errorf("version %q", r.GetTableVersion())
		}
	})
	t.Run("unstable by number", func(t *testing.T) {
		r, err := s.GetParticle(t.Context(), byNumber(-3122))
		if err != nil {
			t.Fatal(err)
		}
		p := r.GetParticle()
		// hbar over the mean life is the width.
		if p.GetStrangeness() != 1 || p.GetMeanLifeS() <= 0 || p.GetStable() ||
			p.GetWidthGev()*p.GetMeanLifeS()/particle.HBar-1 > 1e-12 {
			t.Errorf("antilambda: %v", p)
		}
	})
	t.Run("photon is exact", func(t *testing.T) {
		r, err := s.GetParticle(t.Context(), byName("gamma"))
		if err != nil || r.GetParticle().MassUncertaintyGev != nil || r.GetParticle().Parity == nil {
			t.Errorf("%v %v", r, err)
		}
	})
	t.Run("unknown name", func(t *testing.T) {
		_, err := s.GetParticle(t.Context(), byName("Lamda"))
		m := refused(t, err, ParticleNotFound)
		if m["field"] != "name" || m["value"] != "Lamda" || !strings.Contains(m["nearest"], "Lambda") {
			t.Errorf("metadata %v", m)
		}
		if MeaningOf(Explain(err).Reason).Code != codes.NotFound {
			t.Error("not NOT_FOUND")
		}
	})
	t.Run("unknown number", func(t *testing.T) {
		_, err := s.GetParticle(t.Context(), byNumber(424242))
		if m := refused(t, err, ParticleNotFound); m["field"] != "particle_number" || m["value"] != "424242" {
			t.Errorf("metadata %v", m)
		}
	})
	for name, bad := range map[string]*kinegatev1.GetParticleRequest{"no key": {}, "empty name": byName("")} {
		t.Run(name, func(t *testing.T) {
			_, err := s.GetParticle(t.Context(), bad)
			refused(t, err, FieldInvalid)
		})
	}
}

func TestParticleOrigins(t *testing.T) {
	table := newTestTable(t, particle.File{Name: "mine.csv", Data: []byte(
		"particle_number,aliases,mass_gev,charge_thirds,J\n111,,0.135,,\n1000260560,iron,52.0898,,0\n")})
	s := newParticleService(table, newTestTable(t))
	for name, want := range map[string]kinegatev1.ParticleOrigin{
		"pi0": kinegatev1.ParticleOrigin_PARTICLE_ORIGIN_OVERRIDDEN, "iron": kinegatev1.ParticleOrigin_PARTICLE_ORIGIN_ADDED,
		"pi+": kinegatev1.ParticleOrigin_PARTICLE_ORIGIN_TABLE,
	} {
		r, err := s.GetParticle(t.Context(), &kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_Name{Name: name}})
		if err != nil || r.GetParticle().GetOrigin() != want {
			t.Errorf("%s: %v, %v", name, r.GetParticle().GetOrigin(), err)
		}
	}
}

// TestListParticlesWalks holds for page sizes of every kind that the pages together
// are the whole table once, in order.
func TestListParticlesWalks(t *testing.T) {
	table := newTestTable(t)
	s := newParticleService(table, table)
	random := rand.New(rand.NewPCG(3, 4)) //nolint:gosec // a fixed seed for a test
	for _, contains := range []string{"", "pi", "K", "no such"} {
		var want []int64
		for _, m := range s.messages {
			if nameContains(m, contains) {
				want = append(want, m.GetParticleNumber())
			}
		}
		for range 20 {
			var got []int64
			request := &kinegatev1.ListParticlesRequest{NameContains: contains, PageSize: random.Int32N(60)}
			for {
				r, err := s.ListParticles(t.Context(), request)
				if err != nil {
					t.Fatal(err)
				}
				limit := int(request.GetPageSize())
				if limit == 0 {
					limit = defaultPage
				}
				if len(r.GetParticles()) > limit {
					t.Fatalf("%d particles on a page of %d", len(r.GetParticles()), limit)
				}
				for _, p := range r.GetParticles() {
					got = append(got, p.GetParticleNumber())
				}
				if r.GetNextPageToken() == "" {
					break
				}
				request.PageToken = r.GetNextPageToken()
				request.PageSize = random.Int32N(60) // a size may change in between
			}
			if !slices.Equal(got, want) {
				t.Fatalf("%q: %d particles, want %d", contains, len(got), len(want))
			}
		}
	}
}

func TestListParticlesRefuses(t *testing.T) {
	table := newTestTable(t)
	s := newParticleService(table, table)
	first, err := s.ListParticles(t.Context(), &kinegatev1.ListParticlesRequest{PageSize: 3})
	if err != nil {
		t.Fatal(err)
	}
	whole, err := s.ListParticles(t.Context(), &kinegatev1.ListParticlesRequest{PageSize: 1 << 30})
	if err != nil || len(whole.GetParticles()) != min(table.Len(), largestPage) {
		t.Errorf("a page size above the largest gives %d particles, %v", len(whole.GetParticles()), err)
	}
	for name, c := range map[string]struct {
		request *kinegatev1.ListParticlesRequest
		reason  Reason
		field   string
	}{
		"negative size":    {&kinegatev1.ListParticlesRequest{PageSize: -1}, FieldInvalid, "page_size"},
		"changed argument": {&kinegatev1.ListParticlesRequest{NameContains: "K", PageToken: first.GetNextPageToken()}, PageTokenInvalid, "page_token"},
		"garbage token":    {&kinegatev1.ListParticlesRequest{PageToken: "!"}, PageTokenInvalid, "page_token"},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := s.ListParticles(t.Context(), c.request)
			if m := refused(t, err, c.reason); m["field"] != c.field {
				t.Errorf("metadata %v", m)
			}
		})
	}
	if proto.Size(whole) > DefaultLimits().MessageBytes/4 {
		t.Errorf("the largest page has %d bytes", proto.Size(whole))
	}
}
