package particle_test

import (
	"testing"

	"example.org/kinegate/kinematics/particle"
)

// standardDigest belongs to StandardVersion 2. A change of the embedded table changes
// it, and then StandardVersion must be raised with it.
const standardDigest = "adc40e76766e94dc955abccd1411c1e066c2d94ec492d2c0acf0bd2ce84dfe90"

func TestStandardDigest(t *testing.T) {
	tab := table(t)
	if tab.Version() != "2" || tab.Digest() != standardDigest {
		t.Errorf("version %s has digest %s", tab.Version(), tab.Digest())
	}
}

// TestDigestCoversValues changes one value at a time.
func TestDigestCoversValues(t *testing.T) {
	seen := map[string]string{table(t).Digest(): "the standard table"}
	for _, cells := range []string{
		"mass_gev\n221,0.5", "mass_err_gev\n221,0.5", "width_gev\n221,0.5", "width_err_gev\n221,0.5",
		"aliases\n221,eta|h", "aliases\n221,h|eta", "not_breit_wigner\n221,guess", "P\n221,+", "C\n221,-",
	} {
		digest := table(t, file("particle_number,"+cells)).Digest()
		if other, taken := seen[digest]; taken {
			t.Errorf("%q has the digest of %q", cells, other)
		}
		seen[digest] = cells
	}
	if got := table(t, file("particle_number,source,name\n221,me,my eta")).Digest(); got != standardDigest {
		t.Error("a source or a title changes the digest")
	}
	if table(t, file("particle_number,mass_gev\n221,0.547862")).Version() == particle.StandardVersion {
		t.Error("a table with a file has the standard version")
	}
}
