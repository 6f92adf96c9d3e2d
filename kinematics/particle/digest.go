package particle

import (
	"crypto/sha256"
	"encoding/hex"
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
)

// StandardVersion names the embedded table. It is raised whenever the table's digest
// changes.
const StandardVersion = "2"

// Version returns the version of the table: the standard table's, followed by "+" and
// twelve hexadecimal digits of the digest where files have been laid over it.
func (t *Table) Version() string {
	if t.additions {
		return StandardVersion + "+" + t.digest[:12]
	}
	return StandardVersion
}

// Digest returns the SHA-256, in hexadecimal, of the table's canonical form. The form
// has one line for each particle, antiparticles included, by the magnitude of the
// particle number and a particle before its antiparticle. A line is
//
//	number TAB antiparticle number TAB name TAB aliases TAB mass TAB its error TAB
//	width TAB its error TAB mean life TAB its error TAB charge in thirds TAB 2J TAB
//	P TAB C TAB B or N LF
//
// with doubles in the shortest decimal that reads back as the same double (+Inf for
// the mean life of a stable state), aliases sorted by bytes and joined by "|", unknown
// 2J as -1, unknown parities as 0, and N for a state that is no Breit-Wigner. Titles
// and sources change no answer and are left out, as are quantum numbers, which follow
// from the number.
func (t *Table) Digest() string { return t.digest }

// digest hashes the canonical form of sorted particles.
func digest(particles []Particle) string {
	var text strings.Builder
	for _, p := range particles {
		aliases := p.Aliases()
		slices.Sort(aliases)
		shape := "B"
		if p.NotBreitWigner != "" {
			shape = "N"
		}
		fields := []string{
			strconv.FormatInt(p.Number, 10), strconv.FormatInt(p.AntiNumber, 10),
			p.Name, strings.Join(aliases, "|"),
			fault.Text(p.Mass), fault.Text(p.MassError), fault.Text(p.Width), fault.Text(p.WidthError),
			fault.Text(p.MeanLife), fault.Text(p.MeanLifeError),
			strconv.Itoa(p.ChargeThirds()), strconv.Itoa(p.TwiceSpin),
			strconv.Itoa(p.Parity), strconv.Itoa(p.CParity), shape,
		}
		text.WriteString(strings.Join(fields, "\t"))
		text.WriteByte('\n')
	}
	sum := sha256.Sum256([]byte(text.String()))
	return hex.EncodeToString(sum[:])
}
