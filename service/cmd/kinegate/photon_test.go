package main

import (
	"path/filepath"
	"strings"
	"testing"

	"google.golang.org/protobuf/encoding/protojson"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestPhotonExitCodes holds a command, its code and a part of what it says, a row.
func TestPhotonExitCodes(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		arguments string
		code      int
		says      string
	}{
		{`photon`, exitWell, "backscatter"},
		{`photon nonsense`, exitUsage, "there is no command"},
		{`photon pair --sqrt-s "1.45 MeV" --cosine 0,0.5 --max-cosine 0.5`, exitWell, "per sr at cos 0.5"},
		{`photon pair --photon "1 TeV" --photon2 "500 nm"`, exitWell, "OPEN"},
		{`photon pair mu- --photon "1 TeV" --photon2 "1 eV"`, exitNo, "11.16369 PeV"},
		{`photon pair pi+ --sqrt-s "300 MeV"`, exitWell, "gamma gamma -> pi+ pi-"},
		{`photon pair p --sqrt-s "300 MeV"`, exitUsage, "spin 0"},
		{`photon pair --photon "1 TeV"`, exitUsage, "--photon2 is required"},
		{`photon pair --sqrt-s "1 MeV" --photon "1 TeV"`, exitUsage, "in place of photons"},
		{`photon pair --sqrt-s "2 MeV" --plot picture.pdf`, exitUsage, "must end in .svg or .png"},
		{`photon pair --sqrt-s "2 MeV" --cosine 2`, exitUsage, "cosines[0]"},
		{`photon compton --photon "661.657 keV" --theta "180 deg"`, exitWell, "477.3340 keV"},
		{`photon compton --photon "1 eV" --beam "1 GeV" --theta "1 mrad"`, exitWell, "in flight"},
		{`photon compton --photon "1 eV" --phi "10 deg" --theta "1 mrad"`, exitUsage, "phi_rad"},
		{`photon compton --photon "0 eV" --plot picture.svg`, exitUsage, "needs a photon with an energy"},
		{`photon backscatter --beam "6 GeV" --light "1.79 eV"`, exitWell, "847.6719 MeV"},
		{`photon backscatter --beam "6 GeV" --light "1.79 eV" --window "1 GeV"`, exitUsage, "write LOW:HIGH"},
		{`photon backscatter --light "1.79 eV"`, exitUsage, "--beam is required"},
		{`photon backscatter --beam "6 GeV" --light "1.79 eV" --energy "5 GeV"`, exitUsage, "energies_gev[0]"},
		{`photon backscatter --beam "6 GeV" --light "1.79 eV" --energy "800 MeV" --circular 1`, exitWell, "circular"},
		{`photon annihilation --beam-kinetic "0 eV"`, exitWell, "infinite"},
		{`photon annihilation --sqrt-s "10 GeV" --max-cosine 0.8 --cosine 0`, exitWell, "with no mass"},
		{`photon annihilation`, exitUsage, "give one of"},
		{`photon annihilation --sqrt-s "1 MeV"`, exitUsage, "below the mass of the pair"},
		{`photon field-pair --target e-`, exitWell, "2.043996 MeV"},
		{`photon field-pair --target-mass "0 GeV"`, exitUsage, "target_mass_gev"},
		{`photon field-pair`, exitUsage, "give one of"},
		{`photon-field --temperature "2.7255 K" --photon "2 PeV" --distance "8 kpc"`, exitWell, "7.087772 kpc"},
		{`photon-field --temperature "0 K" --photon "2 PeV" --distance "8 kpc"`, exitWell, "no absorption"},
		{`photon-field --temperature "0 K" --plot picture.svg`, exitUsage, "nothing to draw"},
		{`photon-field --min-energy "0.01 eV" --max-energy "10 eV" --density "1 /cm3"`, exitWell, "26.11199 GeV"},
		{`photon-field --min-energy "0.01 eV"`, exitUsage, "give --temperature"},
		{`photon-field --temperature "3 K" --index 2`, exitUsage, "give one field"},
		{`photon-field --temperature "3 GeV"`, exitUsage, "temperature is needed"},
	} {
		t.Run(c.arguments, func(t *testing.T) {
			t.Parallel()
			code, out, errs := command(t, shellWords(c.arguments)...)
			if code != c.code || !strings.Contains(out+errs, c.says) {
				t.Errorf("code %d, want %d with %q; says\n%s%s", code, c.code, c.says, out, errs)
			}
		})
	}
}

// TestPhotonJSON reads what --json prints beside a picture as the reply's own message.
func TestPhotonJSON(t *testing.T) {
	t.Parallel()
	name := filepath.Join(t.TempDir(), "picture.png")
	code, out, _ := command(t, "photon-field", "--temperature", "2.7255 K", "--photon", "2 PeV", "--json", "--plot", name)
	var reply kinegatev1.DescribePhotonFieldResponse
	if err := protojson.Unmarshal([]byte(out), &reply); err != nil || code != exitWell {
		t.Fatalf("code %d, %v", code, err)
	}
	if len(reply.GetAbsorptions()) != 1 || reply.GetStrongest() == nil {
		t.Errorf("reply %v", &reply)
	}
}
