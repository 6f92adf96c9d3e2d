package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestPictures draws every kind of picture and looks for the names of axes and curves.
func TestPictures(t *testing.T) {
	t.Parallel()
	for _, c := range []struct{ arguments, says string }{
		{`two-body "gamma p -> K+ Lambda" --beam "1.5 GeV" --lab-angle "10, 20 deg"`, "angle in the laboratory (deg)"},
		{`two-body "gamma gamma -> e+ e-" --sqrt-s "2 MeV"`, "total energy in the laboratory (MeV)"},
		{`channels gamma p --beam "1.2 GeV"`, "K+ Lambda (911.1 MeV)"},
		{`channels gamma gamma --sqrt-s "1 GeV" --bodies 3 --limit 0`, "energy in the centre of mass, sqrt(s) (GeV)"},
		{`dalitz "omega -> pi+ pi- pi0"`, "mass squared of pi+ pi- (GeV^2)"},
		{`dalitz "gamma p -> p pi+ pi-" --sqrt-s "1.6 to 2.2 by 0.2 GeV" --band "pi+ pi- at 775 MeV"`, "pi+ pi- at 775 MeV"},
		{`decay "pi0 -> gamma gamma" --parent "1 GeV"`, "opening angle in the laboratory (deg)"},
		{`decay "pi0 -> gamma gamma" --parent "1 TeV"`, "opening angle in the laboratory (mrad)"},
		{`photon pair --sqrt-s "1.45 MeV"`, "cross-section per solid angle (mb/sr)"},
		{`photon pair --sqrt-s "1 MeV"`, "energy in the centre of mass, sqrt(s) (MeV)"},
		{`photon pair --sqrt-s "100 GeV" --max-cosine 0.9`, "opposite helicities"},
		{`photon compton --photon "661.657 keV"`, "Thomson"},
		{`photon compton --photon "1 eV" --beam "1 GeV"`, "from the lepton in flight (deg)"},
		{`photon backscatter --beam "3 GeV" --light "351.1 nm"`, "spectrum (mb/MeV)"},
		{`photon backscatter --beam "3 GeV" --light "351.1 nm" --linear 0.5`, "linear (degree)"},
		{`photon annihilation --sqrt-s "10 GeV"`, "cosine of a photon"},
		{`photon annihilation --beam-kinetic "0 eV"`, "energy in the centre of mass"},
		{`photon-field --temperature "2.7255 K" --photon "1 EeV" --distance "8 kpc"`, "the distance, 8 kpc"},
		{`photon-field --min-energy "0.01 eV" --max-energy "10 eV" --density "1 /cm3"`, "energy of the photon"},
	} {
		t.Run(c.arguments, func(t *testing.T) {
			t.Parallel()
			name := filepath.Join(t.TempDir(), "picture.svg")
			code, _, errs := command(t, append(shellWords(c.arguments), "--plot", name)...)
			text, err := os.ReadFile(name)
			if err != nil || !strings.Contains(string(text), c.says) {
				t.Fatalf("code %d, %v: no %q in %d bytes\n%s", code, err, c.says, len(text), errs)
			}
		})
	}
}

// TestPicturesRefused holds what has no picture.
func TestPicturesRefused(t *testing.T) {
	t.Parallel()
	for _, c := range []struct{ arguments, says string }{
		{`two-body "gamma p -> K+ Lambda" --beam "0.9 GeV"`, "the channel is closed"},
		{`two-body "gamma gamma -> e+ e-" --beam "1 GeV" --beam2 "1 GeV" --angle "90 deg"`, "leave the laboratory angle open"},
		{`dalitz "gamma p -> p pi+ pi-" --sqrt-s "1.1 GeV"`, "closed at every energy"},
		{`decay "pi0 -> gamma gamma"`, "decays in flight to two photons"},
		{`decay "omega -> pi+ pi- pi0" --parent "1 GeV"`, "decays in flight to two photons"},
	} {
		t.Run(c.arguments, func(t *testing.T) {
			t.Parallel()
			name := filepath.Join(t.TempDir(), "picture.svg")
			code, _, errs := command(t, append(shellWords(c.arguments), "--plot", name)...)
			if code != exitUsage || !strings.Contains(errs, c.says) {
				t.Errorf("code %d: %s", code, errs)
			}
			if _, err := os.Stat(name); err == nil {
				t.Error("a picture was written")
			}
		})
	}
}
