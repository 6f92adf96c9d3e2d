// Package golden holds seeded computations to committed digests, so that a change of one bit of
// a result, or a processor that disagrees, fails a test. CI runs every test whose name starts
// with TestGolden on amd64, on amd64 with fused instructions allowed, and on emulated arm64.
package golden

import (
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"errors"
	"flag"
	"fmt"
	"hash"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/kinematics"
)

// update rewrites the golden files; without a raised numerics version it only adds sections.
//
//nolint:gochecknoglobals // A flag of the test binary has to exist before its main parses the flags.
var update = flag.Bool("update", false, "rewrite the golden files (raise kinematics.NumericsVersion first)")

// preamble heads every golden file.
const preamble = `# Digests of seeded computations, the same on every processor: section, values, SHA-256.
# Never edit this file to fit a change. A change of bits raises kinematics.NumericsVersion;
# then ".ci/golden --update" rewrites it.
`

// Digest collects the values of one computation, in sections that are compared one by one, so
// that a failure says which part moved. Values enter with all their bits; the bits of a NaN are
// no result (processors differ in them), so a computation that yields NaN says so by Text.
type Digest struct {
	sections []section
	hash     hash.Hash
}

// section is the digest of one part.
type section struct {
	name   string
	values int64
	sum    string
}

// Section ends the part before and begins another. The name has no spaces.
func (d *Digest) Section(name string) {
	d.end()

	d.sections = append(d.sections, section{name: name})
	d.hash = sha256.New()
}

// Float adds floating-point values.
func (d *Digest) Float(values ...float64) {
	for _, value := range values {
		d.Bits(math.Float64bits(value))
	}
}

// Int adds whole numbers.
func (d *Digest) Int(values ...int64) {
	for _, value := range values {
		d.Bits(uint64(value)) //nolint:gosec // The bits are what is wanted.
	}
}

// Text adds a text, with its length.
func (d *Digest) Text(text string) {
	d.Int(int64(len(text)))
	d.hash.Write([]byte(text))
}

// Bits adds the bits of one value, lowest byte first.
func (d *Digest) Bits(bits uint64) {
	d.hash.Write(binary.LittleEndian.AppendUint64(nil, bits))
	d.sections[len(d.sections)-1].values++
}

// end closes the current section, if one is open.
func (d *Digest) end() {
	if len(d.sections) > 0 {
		d.sections[len(d.sections)-1].sum = hex.EncodeToString(d.hash.Sum(nil))
	}
}

// Check runs a computation and compares its digests with testdata/golden/NAME.txt beside the
// test. The computation must begin with a Section.
func Check(t *testing.T, name string, compute func(d *Digest)) {
	t.Helper()

	var digest Digest

	compute(&digest)
	digest.end()

	path := filepath.Join("testdata", "golden", name+".txt")

	version, committed, err := read(path)
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		t.Fatalf("golden %s: %v", name, err)
	}

	problems := compare(digest.sections, version, committed)
	if *update {
		problems = refusals(digest.sections, version, committed)
	}

	for _, problem := range problems {
		t.Errorf("golden %s: %s", name, problem)
	}

	if *update && len(problems) == 0 {
		if err := write(path, digest.sections); err != nil {
			t.Fatalf("golden %s: %v", name, err)
		}
	}

	t.Logf("golden %s: %d sections compared", name, len(digest.sections))
}

// compare returns what differs between the computed and the committed sections.
func compare(computed []section, version int64, committed []section) []string {
	var problems []string

	if version != kinematics.NumericsVersion {
		problems = append(problems, fmt.Sprintf("the file is of numerics version %d, the core of %d: run with -update",
			version, kinematics.NumericsVersion))
	}

	if len(computed) == 0 {
		problems = append(problems, "nothing was computed")
	}

	for _, one := range computed {
		if before, ok := find(committed, one.name); !ok {
			problems = append(problems, one.name+" is new: run with -update")
		} else if before != one {
			problems = append(problems, fmt.Sprintf("%s moved: %d values with digest %s, committed %d with %s",
				one.name, one.values, one.sum, before.values, before.sum))
		}
	}

	for _, before := range committed {
		if _, ok := find(computed, before.name); !ok {
			problems = append(problems, before.name+" is no longer computed")
		}
	}

	return problems
}

// refusals returns why -update may not rewrite the file: bits moved, but the version did not.
func refusals(computed []section, version int64, committed []section) []string {
	if version != kinematics.NumericsVersion {
		return nil
	}

	var problems []string

	for _, one := range computed {
		if before, ok := find(committed, one.name); ok && before.values == one.values && before != one {
			problems = append(problems, one.name+" moved: raise kinematics.NumericsVersion, or find out why")
		}
	}

	return problems
}

// find returns the section of a name.
func find(sections []section, name string) (section, bool) {
	for _, one := range sections {
		if one.name == name {
			return one, true
		}
	}

	return section{}, false
}

// read parses a golden file.
func read(path string) (version int64, sections []section, err error) {
	text, err := os.ReadFile(path) //nolint:gosec // The path is made of the name that the test gives.
	if err != nil {
		return 0, nil, fmt.Errorf("reading digests: %w", err)
	}

	for number, line := range strings.Split(string(text), "\n") {
		fields := strings.Fields(line)

		switch {
		case len(fields) == 0, strings.HasPrefix(line, "#"):
			continue
		case len(fields) == 2 && fields[0] == "numerics_version":
			version, err = strconv.ParseInt(fields[1], 10, 64)
		case len(fields) == 3:
			var values int64

			values, err = strconv.ParseInt(fields[1], 10, 64)
			sections = append(sections, section{name: fields[0], values: values, sum: fields[2]})
		default:
			err = strconv.ErrSyntax
		}

		if err != nil {
			return 0, nil, fmt.Errorf("%s:%d: %q: %w", path, number+1, line, err)
		}
	}

	return version, sections, nil
}

// write makes a golden file.
func write(path string, sections []section) error {
	var text strings.Builder

	text.WriteString(preamble)
	fmt.Fprintf(&text, "numerics_version %d\n", kinematics.NumericsVersion)

	for _, one := range sections {
		fmt.Fprintf(&text, "%s %d %s\n", one.name, one.values, one.sum)
	}

	if err := os.MkdirAll(filepath.Dir(path), 0o750); err != nil {
		return fmt.Errorf("folder of digests: %w", err)
	}

	if err := os.WriteFile(path, []byte(text.String()), 0o600); err != nil {
		return fmt.Errorf("writing digests: %w", err)
	}

	return nil
}
