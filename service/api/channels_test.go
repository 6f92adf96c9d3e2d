package api

import (
	"context"
	"errors"
	"slices"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func openChannels(t *testing.T, request *kinegatev1.ListOpenChannelsRequest) (*kinegatev1.ListOpenChannelsResponse, error) {
	t.Helper()
	return (&reactionService{table: newTestTable(t)}).ListOpenChannels(t.Context(), request)
}

func channelTexts(channels []*kinegatev1.OpenChannel) []string {
	var texts []string
	for _, c := range channels {
		texts = append(texts, strings.Join(c.GetProducts(), " "))
	}
	return texts
}

// TestListOpenChannels lists the two-body channels of a photon on a proton below and above
// the threshold of K+ Lambda, 0.911 GeV (common knowledge of the trade).
func TestListOpenChannels(t *testing.T) {
	request := &kinegatev1.ListOpenChannelsRequest{InitialParticles: []string{"gamma", "p"}, InitialState: onTarget(0.9)}
	below, err := openChannels(t, request)
	if err != nil {
		t.Fatal(err)
	}
	texts := channelTexts(below.GetChannels())
	for _, want := range []string{"gamma p", "pi0 p", "pi+ n", "eta p"} {
		if !slices.Contains(texts, want) {
			t.Errorf("%q is not among %v", want, texts)
		}
	}
	next := below.GetNextToOpen()
	if !slices.Equal(next.GetProducts(), []string{"K+", "Lambda"}) || next.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_CLOSED ||
		next.GetExcessEnergyGev() >= 0 || !near(next.GetThreshold().GetTotalEnergyGev(), 0.911, 1e-3) {
		t.Errorf("next %v", next)
	}
	if !below.GetComplete() || below.GetCompleteBodyCount() != 2 || below.GetNextPageToken() != "" ||
		below.GetChannelCount() != int64(len(texts)) || len(below.GetProducts()) < 20 {
		t.Errorf("%v", below)
	}
	request.InitialState = onTarget(0.92)
	above, err := openChannels(t, request)
	if err != nil || !slices.Contains(channelTexts(above.GetChannels()), "K+ Lambda") {
		t.Errorf("%v, %v", channelTexts(above.GetChannels()), err)
	}
}

// TestTwoRealPhotonsMakeNoSpinOne asks with and without the rules of spin, C and Bose
// symmetry (L. D. Landau; C. N. Yang).
func TestTwoRealPhotonsMakeNoSpinOne(t *testing.T) {
	for _, rules := range []bool{false, true} {
		m, err := openChannels(t, &kinegatev1.ListOpenChannelsRequest{
			InitialParticles: []string{"gamma", "gamma"}, InitialState: atSqrtS(0.78266), Products: []string{"omega", "eta"},
			MinBodyCount: 1, MaxBodyCount: 1, WithSpinCBose: rules,
		})
		if err != nil {
			t.Fatal(err)
		}
		if got := slices.Contains(channelTexts(m.GetChannels()), "omega"); got == rules {
			t.Errorf("rules %v: %v", rules, m.GetChannels())
		}
	}
}

// TestOpenChannelsPages walks pages of several sizes with one service, which searches once,
// and with a new one for every page.
func TestOpenChannelsPages(t *testing.T) {
	request := &kinegatev1.ListOpenChannelsRequest{
		InitialParticles: []string{"gamma", "p"}, InitialState: onTarget(3), MaxBodyCount: 3, PageSize: 1000,
	}
	whole, err := openChannels(t, request)
	if err != nil || len(whole.GetChannels()) < 50 {
		t.Fatalf("%d channels, %v", len(whole.GetChannels()), err)
	}
	want := channelTexts(whole.GetChannels())
	shared := &reactionService{table: newTestTable(t)}
	for _, size := range []int32{7, 50, int32(len(want))} {
		for _, fresh := range []bool{false, true} {
			request.PageSize, request.PageToken = size, ""
			var got []string
			for {
				s := shared
				if fresh {
					s = &reactionService{table: newTestTable(t)}
				}
				page, err := s.ListOpenChannels(t.Context(), request)
				if err != nil {
					t.Fatal(err)
				}
				got = append(got, channelTexts(page.GetChannels())...)
				if request.PageToken = page.GetNextPageToken(); request.GetPageToken() == "" {
					break
				}
			}
			if !slices.Equal(got, want) {
				t.Errorf("pages of %d: %d channels, want %d", size, len(got), len(want))
			}
		}
	}
	request.PageSize, request.PageToken = 7, ""
	page, err := shared.ListOpenChannels(t.Context(), request)
	if err != nil {
		t.Fatal(err)
	}
	request.PageToken, request.MaxBodyCount = page.GetNextPageToken(), 4
	_, err = shared.ListOpenChannels(t.Context(), request)
	refused(t, err, PageTokenInvalid)
}

// TestOpenChannelsBound has more work than is done: the reply says how far it got.
func TestOpenChannelsBound(t *testing.T) {
	if testing.Short() {
		t.Skip("seconds of search")
	}
	table := newTestTable(t)
	request := &kinegatev1.ListOpenChannelsRequest{
		InitialParticles: []string{"gamma", "p"}, InitialState: onTarget(100), MaxBodyCount: 5, PageSize: 1,
	}
	for _, p := range table.List() {
		request.Products = append(request.Products, p.Name)
	}
	m, err := openChannels(t, request)
	if err != nil || m.GetComplete() || m.GetCompleteBodyCount() != 4 || m.GetChannelCount() < 100_000 {
		t.Errorf("complete to %d bodies with %d channels, %v", m.GetCompleteBodyCount(), m.GetChannelCount(), err)
	}
}

func TestListOpenChannelsRefuses(t *testing.T) {
	with := func(change func(*kinegatev1.ListOpenChannelsRequest)) *kinegatev1.ListOpenChannelsRequest {
		r := &kinegatev1.ListOpenChannelsRequest{InitialParticles: []string{"gamma", "p"}, InitialState: onTarget(1)}
		change(r)
		return r
	}
	type request = kinegatev1.ListOpenChannelsRequest
	cases := []struct {
		name    string
		request *request
		reason  Reason
		field   string
	}{
		{"no names", with(func(r *request) { r.InitialParticles = nil }), FieldInvalid, "initial_particles"},
		{"three names", with(func(r *request) { r.InitialParticles = []string{"p", "p", "p"} }), FieldInvalid, "initial_particles"},
		{"unknown", with(func(r *request) { r.InitialParticles[1] = "protn" }), NameUnknown, "initial_particles[1]"},
		{"unknown product", with(func(r *request) { r.Products = []string{"p", "pi9"} }), NameUnknown, "products[1]"},
		{"no state", with(func(r *request) { r.InitialState = nil }), FieldInvalid, "initial_state"},
		{"beam", with(func(r *request) { r.InitialState = onTarget(-2) }), FieldInvalid, "initial_state.beam_on_target.beam.total_energy_gev"},
		{"bodies", with(func(r *request) { r.MaxBodyCount = 6 }), FieldInvalid, "max_body_count"},
		{"negative bodies", with(func(r *request) { r.MinBodyCount = -1 }), FieldInvalid, "min_body_count"},
		{"bodies crossed", with(func(r *request) { r.MinBodyCount = 3 }), FieldInvalid, "min_body_count"},
		{"law", with(func(r *request) { r.IgnoredLaws = []kinegatev1.ConservationLaw{0} }), FieldInvalid, "ignored_laws[0]"},
		{"law beyond", with(func(r *request) { r.IgnoredLaws = []kinegatev1.ConservationLaw{99} }), FieldInvalid, "ignored_laws[0]"},
		{"page size", with(func(r *request) { r.PageSize = -1 }), FieldInvalid, "page_size"},
		{"token", with(func(r *request) { r.PageToken = "AAAA" }), PageTokenInvalid, "page_token"},
		{"too many", with(func(r *request) { r.Products = make([]string, 513) }), FieldInvalid, "products"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := openChannels(t, c.request)
			if m := refused(t, err, c.reason); m["field"] != c.field {
				t.Errorf("field %q, want %q: %v", m["field"], c.field, err)
			}
		})
	}
	t.Run("cancelled", func(t *testing.T) {
		ctx, cancel := context.WithCancel(t.Context())
		cancel()
		_, err := (&reactionService{table: newTestTable(t)}).ListOpenChannels(ctx, with(func(*request) {}))
		if refused(t, err, CallCancelled); !errors.Is(err, context.Canceled) {
			t.Errorf("%v", err)
		}
	})
}

// TestIgnoredLaws checks that every law of the contract is that of the core: ignoring it
// lets a channel in that breaks it alone.
func TestIgnoredLaws(t *testing.T) {
	for law, c := range map[kinegatev1.ConservationLaw]struct{ initial, products string }{
		kinegatev1.ConservationLaw_CONSERVATION_LAW_CHARGE:          {"gamma p", "p pi+"},
		kinegatev1.ConservationLaw_CONSERVATION_LAW_BARYON_NUMBER:   {"gamma p", "pi0 pi+"},
		kinegatev1.ConservationLaw_CONSERVATION_LAW_ELECTRON_NUMBER: {"e- p", "pi- p"},
		kinegatev1.ConservationLaw_CONSERVATION_LAW_MUON_NUMBER:     {"mu- p", "pi- p"},
		kinegatev1.ConservationLaw_CONSERVATION_LAW_TAU_NUMBER:      {"tau- p", "pi- p"},
		kinegatev1.ConservationLaw_CONSERVATION_LAW_STRANGENESS:     {"gamma p", "pi0 Sigma+"},
		kinegatev1.ConservationLaw_CONSERVATION_LAW_CHARM:           {"gamma p", "p D0"},
		kinegatev1.ConservationLaw_CONSERVATION_LAW_BOTTOMNESS:      {"gamma p", "p B0"},
	} {
		t.Run(law.String(), func(t *testing.T) {
			request := &kinegatev1.ListOpenChannelsRequest{
				InitialParticles: strings.Fields(c.initial), InitialState: onTarget(100), Products: strings.Fields(c.products),
			}
			before, err := openChannels(t, request)
			if err != nil {
				t.Fatal(err)
			}
			request.IgnoredLaws = []kinegatev1.ConservationLaw{law}
			after, err := openChannels(t, request)
			if err != nil {
				t.Fatal(err)
			}
			has := func(m *kinegatev1.ListOpenChannelsResponse) bool {
				for _, channel := range m.GetChannels() {
					names, want := slices.Sorted(slices.Values(channel.GetProducts())), slices.Sorted(slices.Values(strings.Fields(c.products)))
					if slices.Equal(names, want) {
						return true
					}
				}
				return false
			}
			if has(before) || !has(after) {
				t.Errorf("before %v, after %v", channelTexts(before.GetChannels()), channelTexts(after.GetChannels()))
			}
		})
	}
}
