package main

import (
	"encoding/json"
	"testing"

	"google.golang.org/protobuf/encoding/protojson"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestAnswers holds the commands with closed-form answers, a row each.
func TestAnswers(t *testing.T) {
	t.Parallel()
	const kaon = `two-body "gamma p -> K+ Lambda" `
	for _, c := range []struct {
		arguments string
		code      int
		says      string
	}{
		{kaon + `--beam "1.5 GeV"`, exitWell, "34.83925 deg, two momenta below"},
		{kaon + `--beam "1.5 GeV" --lab-angle "0 to 30 by 10 deg"`, exitWell, "67.02264 deg"},
		{kaon + `--beam "1.5 GeV" --product Lambda --lab-angle "20 deg"`, exitWell, "165.4858 deg"},
		{kaon + `--beam "1.5 GeV" --product Lambda --lab-angle "50 deg"`, exitNo, "none"},
		{kaon + `--beam "0.9 GeV"`, exitNo, "11.08172 MeV"},
		{kaon + `--beam "1.5 GeV" --cm-cosine "-1 to 1 by 0.5"`, exitWell, "cosine (c.m.)"},
		{kaon + `--beam "1.5 GeV" --cm-angle "90 deg"`, exitWell, "angle (c.m.)"},
		{kaon + `--beam "1.5 GeV" --energy "1.2 GeV"`, exitWell, "energy (lab)"},
		{kaon + `--beam "1.5 GeV" --kinetic "0.5 GeV"`, exitWell, "kinetic (lab)"},
		{kaon + `--beam "1.5 GeV" --momentum "1 GeV"`, exitWell, "momentum (lab)"},
		{kaon + `--beam "1.5 GeV" --t "-0.5 GeV^2"`, exitWell, "-0.5 GeV^2"},
		{kaon + `--beam "1.5 GeV" --t-prime "0.1 GeV^2"`, exitWell, "0.1 GeV^2"},
		{kaon + `--beam "1.5 GeV" --t "1 GeV"`, exitUsage, "energy squared is needed"},
		{kaon + `--beam "1.5 GeV" --t "-0.5 GeV^2" --cm-angle "1 deg"`, exitUsage, "both list values"},
		{kaon + `--beam "1.5 GeV" --cm-cosine "2"`, exitUsage, "centre_of_mass_cosines[0]"},
		{kaon + `--beam "1.5 GeV" --product eta --lab-angle "1 deg"`, exitUsage, "product"},
		{kaon, exitUsage, "say how the initial particles move"},
		{`two-body "gamma gamma -> e+ e-" --beam "1 GeV" --beam2 "1 GeV" --angle "60 deg" --cm-angle "10 deg"`, exitWell, " -  "},
		{`channels gamma p --beam "0.9 GeV"`, exitWell, "K+ Lambda"},
		{`channels gamma p --beam "3 GeV" --bodies 3 --limit 5`, exitWell, "5 of "},
		{`channels gamma p --beam "1 MeV" --products "p n pi0 pi+"`, exitNo, "pi0 p"},
		{`channels gamma p --beam "1 GeV" --products "p pi9"`, exitUsage, "products[1]"},
		{`channels gamma p --beam "5 GeV" --products "p K0" --ignore strangeness`, exitWell, "K0 p"},
		{`channels gamma p --beam "5 GeV" --ignore gravity`, exitUsage, "there is no law"},
		{`channels gamma p`, exitUsage, "say how the initial particles move"},
		{`channels gamma gamma --sqrt-s "958 MeV" --bodies 1 --products "eta' omega" --spin-rules`, exitWell, "eta'"},
		{`motion K+ --momentum "1.2 GeV" --distance "3 m" --index 1.05`, exitWell, "813.7396 ps"},
		{`motion pi+ --momentum "1.2 GeV" --index "0.9, 1.33"`, exitWell, "40.80411 deg"},
		{`motion gamma --wavelength "351.1 nm"`, exitWell, "3.531307 eV"},
		{`motion gamma --frequency "853.8663 THz"`, exitWell, "351.1000 nm"},
		{`motion --mass "2.8 GeV" --charge 2 --rigidity "1.5 GV"`, exitWell, "3.000000 GeV"},
		{`motion --mass "1 GeV" --charge -1/3 --gamma 2`, exitWell, "charge -1/3"},
		{`motion --mass "1 GeV" --charge 0.4 --gamma 2`, exitUsage, "--charge"},
		{`motion p --beta 1`, exitUsage, ">= 0 and < 1"},
		{`motion p`, exitUsage, "say how fast it is"},
		{`motion p --beta 0.5 --gamma 2`, exitUsage, "give one"},
		{`motion p --charge 1 --beta 0.5`, exitUsage, "has its own"},
		{`motion --beta 0.5`, exitUsage, "name a particle or give --mass"},
		{`motion n --rigidity "1 GV"`, exitUsage, "a neutral particle has no rigidity"},
		{`motion p --kinetic "0 GeV" --distance "1 m"`, exitWell, "-"},
		{`motion p --beta 0.9 --index 0`, exitUsage, "refractive_indices[0]"},
		{`dalitz "omega -> pi+ pi- pi0" --points --resolution 0.3`, exitWell, "0.0779196     0.295908     0.295908"},
		{`dalitz "gamma p -> p pi+ pi-" --sqrt-s "1.2 to 2.2 by 0.5 GeV" --band "pi+ pi- at 775 MeV"`, exitWell, "outside"},
		{`dalitz "gamma p -> p pi+ pi-" --sqrt-s "1.1 GeV"`, exitNo, "CLOSED"},
		{`dalitz "gamma p -> p pi+ pi-" --sqrt-s "1.1 GeV" --beam "2 GeV"`, exitUsage, "in place of beams"},
		{`dalitz "gamma p -> p pi+ pi-"`, exitUsage, "say how the initial particles move"},
		{`dalitz "gamma p -> p pi+ pi-" --beam "1.5 GeV" --band "pi+ pi-"`, exitUsage, "write a pair and a mass"},
		{`dalitz "Lambda -> p pi-"`, exitUsage, "three bodies"},
		{`decay "Lambda -> p pi-" --parent-momentum "1 GeV" --between "5 to 20 cm" --between "20 cm on"`, exitWell, "0.432953"},
		{`decay "Lambda -> p pi-" --parent-momentum "1 GeV" --lab-angle "3, 60 deg"`, exitWell, "157.9458 deg"},
		{`decay "Lambda -> p pi-" --parent-momentum "1 GeV" --rest-cosine "-1, 1"`, exitWell, "cosine -1"},
		{`decay "Lambda -> p pi-" --between "5 cm"`, exitUsage, "is no range"},
		{`decay "Lambda -> p pi-" --opening-angle "5 deg"`, exitUsage, "two photons"},
		{`decay "pi0 -> gamma gamma" --parent "2 GeV" --opening-angle "8 deg"`, exitWell, "0.253503"},
		{`decay "Sigma0 -> Lambda gamma, Lambda -> p pi-" --parent "2 GeV"`, exitWell, "74.4705 per GeV"},
		{`decay "omega -> rho0 pi0, rho0 -> pi+ pi-"`, exitWell, "OPEN THROUGH WIDTH"},
		{`reaction "gamma p -> p pi+ pi-" --beam "2 GeV" --t "beam, pi+ pi-" --volume`, exitWell, "1.543063 GeV^2"},
		{`reaction "gamma p -> p pi+ pi-" --beam "2 GeV" --t "foo, p"`, exitUsage, "write \"beam\" or \"target\""},
		{`reaction "gamma p -> p eta" --beam "680 MeV" --nucleus d --fermi "250 MeV"`, exitWell, "627.8766 MeV"},
		{`reaction "gamma p -> p eta" --beam "600 MeV" --nucleus d --fermi "250 MeV"`, exitNo, "630.7523 MeV"},
		{`reaction "gamma p -> p eta" --nucleus d`, exitUsage, "need each other"},
		{`reaction "gamma p -> K+ X" --beam "2 GeV"`, exitWell, "0 to 684.25 MeV"},
	} {
		wantCommand(t, c.arguments, c.code, c.says)
	}
}

// TestAnswersAsJSON reads what --json prints.
func TestAnswersAsJSON(t *testing.T) {
	t.Parallel()
	code, out, _ := command(t, "two-body", "gamma p -> K+ Lambda", "--beam", "1.5 GeV", "--cm-angle", "30 deg", "--json")
	var reply kinegatev1.SolveTwoBodyResponse
	if err := protojson.Unmarshal([]byte(out), &reply); err != nil || code != exitWell || len(reply.GetSolutions()) != 1 {
		t.Errorf("code %d, %v, %v", code, err, &reply)
	}
	code, out, _ = command(t, "dalitz", "omega -> pi+ pi- pi0", "--json")
	var boundary struct {
		Boundaries []struct {
			Points []float64 `json:"first_second_gev2"`
		} `json:"boundaries"`
	}
	if err := json.Unmarshal([]byte(out), &boundary); err != nil || code != exitWell || len(boundary.Boundaries[0].Points) < 100 {
		t.Errorf("code %d, %v", code, err)
	}
}
