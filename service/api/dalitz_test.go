package api

import (
	"context"
	"math"
	"testing"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func trace(t *testing.T, request *kinegatev1.TraceDalitzBoundaryRequest) (*kinegatev1.TraceDalitzBoundaryResponse, error) {
	t.Helper()
	return (&decayService{table: newTestTable(t)}).TraceDalitzBoundary(t.Context(), request)
}

func dalitzOf(text string) *kinegatev1.TraceDalitzBoundaryRequest {
	return &kinegatev1.TraceDalitzBoundaryRequest{Form: &kinegatev1.TraceDalitzBoundaryRequest_Process{Process: text}}
}

func columnOf(t *testing.T, raw []byte) []float64 {
	t.Helper()
	xs, err := column.Float64s(raw)
	if err != nil {
		t.Fatal(err)
	}
	return xs
}

// TestTraceDalitzBoundary checks the closed curve of a decay: the three masses squared of
// every point add up, stay inside their ranges, reach their ends, and neighbours are as
// near as asked for, the last and the first too.
func TestTraceDalitzBoundary(t *testing.T) {
	for _, resolution := range []float64{0, 0.05, 0.002} {
		request := dalitzOf("omega -> pi+ pi- pi0")
		request.Resolution = resolution
		m, err := trace(t, request)
		if err != nil {
			t.Fatal(err)
		}
		b := m.GetBoundaries()[0]
		m01, m12, m02 := columnOf(t, b.GetFirstSecondGev2()), columnOf(t, b.GetSecondThirdGev2()), columnOf(t, b.GetFirstThirdGev2())
		if len(m01) < 20 || len(m12) != len(m01) || len(m02) != len(m01) || b.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_OPEN {
			t.Fatalf("%d points, %v", len(m01), b.GetState())
		}
		total := b.GetSqrtSGev() * b.GetSqrtSGev()
		for _, mass := range m.GetMassesGev() {
			total += mass * mass
		}
		step := resolution
		if step == 0 {
			step = 0.01
		}
		r01, r12 := b.GetFirstSecond(), b.GetSecondThird()
		least, most := math.Inf(1), 0.0
		for i := range m01 {
			k := (i + 1) % len(m01)
			if !near(m01[i]+m12[i]+m02[i], total, 1e-14) {
				t.Errorf("point %d: the masses squared add up to %g, want %g", i, m01[i]+m12[i]+m02[i], total)
			}
			if m01[i] < r01.GetMinGev2() || m01[i] > r01.GetMaxGev2() || m12[i] < r12.GetMinGev2() || m12[i] > r12.GetMaxGev2() {
				t.Errorf("point %d is outside", i)
			}
			least, most = min(least, m01[i]), max(most, m01[i])
			dx := (m01[k] - m01[i]) / (r01.GetMaxGev2() - r01.GetMinGev2())
			dy := (m12[k] - m12[i]) / (r12.GetMaxGev2() - r12.GetMinGev2())
			if math.Hypot(dx, dy) > step*(1+1e-12) {
				t.Errorf("resolution %g: step %g after point %d of %d", step, math.Hypot(dx, dy), i, len(m01))
			}
		}
		if !near(least, r01.GetMinGev2(), 1e-14) || !near(most, r01.GetMaxGev2(), 1e-14) {
			t.Errorf("%g to %g, want %v", least, most, r01)
		}
	}
}

// TestDalitzBands asks for the band of the rho0 by both orders of its pions, and for one
// outside.
func TestDalitzBands(t *testing.T) {
	const square = 0.4
	request := dalitzOf("phi -> pi+ pi- pi0")
	request.Bands = []*kinegatev1.DalitzBandRequest{
		{Products: []string{"pi+", "pi-"}, MassSquaredGev2: square}, {Products: []string{"pi-", "pi+"}, MassSquaredGev2: square},
		{Products: []string{"pi-", "pi0"}, MassSquaredGev2: 9},
	}
	m, err := trace(t, request)
	if err != nil {
		t.Fatal(err)
	}
	bands := m.GetBoundaries()[0].GetBands()
	from, to := bands[0].GetStart(), bands[0].GetEnd()
	if !bands[0].GetInside() || from.GetFirstSecondGev2() != square || from.GetFirstThirdGev2() >= to.GetFirstThirdGev2() {
		t.Errorf("%v", bands[0])
	}
	if swapped := bands[1]; swapped.GetStart().GetFirstThirdGev2() != to.GetFirstThirdGev2() || swapped.GetEnd().GetSecondThirdGev2() != from.GetSecondThirdGev2() {
		t.Errorf("%v, want the ends of %v exchanged", bands[1], bands[0])
	}
	if bands[2].GetInside() || bands[2].GetStart() != nil {
		t.Errorf("outside: %v", bands[2])
	}
}

func TestDalitzOfReactions(t *testing.T) {
	request := dalitzOf("gamma p -> p pi+ pi-")
	request.SqrtSGev = []float64{1.1, 1.3, 2}
	m, err := trace(t, request)
	if err != nil {
		t.Fatal(err)
	}
	states := []kinegatev1.ChannelState{
		kinegatev1.ChannelState_CHANNEL_STATE_CLOSED, kinegatev1.ChannelState_CHANNEL_STATE_OPEN, kinegatev1.ChannelState_CHANNEL_STATE_OPEN,
	}
	for i, b := range m.GetBoundaries() {
		closed := states[i] == kinegatev1.ChannelState_CHANNEL_STATE_CLOSED
		if b.GetState() != states[i] || b.GetSqrtSGev() != request.GetSqrtSGev()[i] || closed != (len(b.GetFirstSecondGev2()) == 0) ||
			closed != (b.GetExcessEnergyGev() < 0) {
			t.Errorf("%g: %v, excess %g", b.GetSqrtSGev(), b.GetState(), b.GetExcessEnergyGev())
		}
	}
	request.SqrtSGev, request.InitialState = nil, onTarget(1.5)
	if m, err = trace(t, request); err != nil || len(m.GetBoundaries()) != 1 || !near(m.GetBoundaries()[0].GetSqrtSGev(), 1.9218, 1e-3) {
		t.Errorf("%v", err)
	}
	// At threshold the region is a point: here M^2 of the pair of equal masses.
	massless, err := trace(t, dalitzOf("mu- -> e- anti-nu_e nu_mu"))
	if err != nil || massless.GetBoundaries()[0].GetFirstThird().GetMinGev2() <= 0 {
		t.Errorf("massless bodies: %v, %v", massless, err)
	}
}

func TestTraceDalitzBoundaryRefuses(t *testing.T) {
	type request = kinegatev1.TraceDalitzBoundaryRequest
	with := func(change func(*request)) *request {
		r := dalitzOf("gamma p -> p pi+ pi-")
		r.SqrtSGev = []float64{2}
		change(r)
		return r
	}
	decay := func(change func(*request)) *request {
		r := dalitzOf("omega -> pi+ pi- pi0")
		change(r)
		return r
	}
	band := func(square float64, products ...string) func(*request) {
		return func(r *request) {
			r.Bands = []*kinegatev1.DalitzBandRequest{{Products: products, MassSquaredGev2: square}}
		}
	}
	many := make([]float64, 65)
	fine := make([]float64, 64)
	for i := range fine {
		fine[i] = 2
	}
	cases := []struct {
		name    string
		request *request
		reason  Reason
		field   string
	}{
		{"no form", &request{}, FieldInvalid, "form"},
		{"two bodies", dalitzOf("Lambda -> p pi-"), FieldInvalid, "process"},
		{"four bodies", dalitzOf("gamma p -> p pi+ pi- pi0"), FieldInvalid, "process"},
		{"no left side", dalitzOf("-> p pi+ pi-"), FieldInvalid, "process"},
		{"typo", dalitzOf("omega -> pi+ pi- pi9"), FieldInvalid, "process"},
		{"resolution", with(func(r *request) { r.Resolution = 1e-5 }), FieldInvalid, "resolution"},
		{"resolution that is none", with(func(r *request) { r.Resolution = math.NaN() }), FieldInvalid, "resolution"},
		{"energy of a decay", decay(func(r *request) { r.SqrtSGev = []float64{1} }), FieldInvalid, "sqrt_s_gev"},
		{"no energy", with(func(r *request) { r.SqrtSGev = nil }), FieldInvalid, "sqrt_s_gev"},
		{"energies", with(func(r *request) { r.SqrtSGev = many }), FieldInvalid, "sqrt_s_gev"},
		{"energy below the initial masses", with(func(r *request) { r.SqrtSGev = []float64{2, 0.5} }), FieldInvalid, "sqrt_s_gev[1]"},
		{"energy that is none", with(func(r *request) { r.SqrtSGev = []float64{math.NaN()} }), FieldInvalid, "sqrt_s_gev[0]"},
		{"both", with(func(r *request) { r.InitialState = onTarget(2) }), FieldInvalid, "initial_state"},
		{"band of one", decay(band(0.1, "pi+")), FieldInvalid, "bands[0].products"},
		{"band of one twice", decay(band(0.1, "pi+", "pi+")), FieldInvalid, "bands[0].products[1]"},
		{"band of an unknown", decay(band(0.1, "pi+", "eta")), FieldInvalid, "bands[0].products[1]"},
		{"band that is none", decay(band(math.NaN(), "pi+", "pi-")), FieldInvalid, "bands[0].mass_squared_gev2"},
		{"bands", decay(func(r *request) { r.Bands = make([]*kinegatev1.DalitzBandRequest, 65) }), FieldInvalid, "bands"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := trace(t, c.request)
			if m := refused(t, err, c.reason); m["field"] != c.field {
				t.Errorf("field %q, want %q: %v", m["field"], c.field, err)
			}
		})
	}
	t.Run("too many points", func(t *testing.T) {
		_, err := trace(t, with(func(r *request) { r.SqrtSGev, r.Resolution = fine, 0.0005 }))
		if m := refused(t, err, ReplyTooLarge); m["limit"] != "100000" {
			t.Errorf("%v", m)
		}
	})
	t.Run("cancelled", func(t *testing.T) {
		ctx, cancel := context.WithCancel(t.Context())
		cancel()
		_, err := (&decayService{table: newTestTable(t)}).TraceDalitzBoundary(ctx, with(func(*request) {}))
		refused(t, err, CallCancelled)
	})
}
