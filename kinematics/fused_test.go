package kinematics_test

import (
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// target is a processor whose compiler joins a product and a sum into one instruction with one
// rounding wherever the source lets it.
type target struct {
	name        string
	environment []string
	// fused matches the mnemonics of these instructions.
	fused *regexp.Regexp
}

// targets returns the two processors for which Go 1.26 does so; on amd64 v1 it does not.
func targets() []target {
	return []target{
		{"arm64", []string{"GOOS=linux", "GOARCH=arm64", "CGO_ENABLED=0"}, regexp.MustCompile(`^FN?M(ADD|SUB)[SD]$`)},
		{"amd64-v3", []string{"GOOS=linux", "GOARCH=amd64", "GOAMD64=v3", "CGO_ENABLED=0"}, regexp.MustCompile(`^VFN?M(ADD|SUB)\w*$`)},
	}
}

// assemblyLine matches a line of the compiler's listing: byte offsets, the innermost position
// in the source (also for inlined code), the mnemonic, and its operands.
var assemblyLine = regexp.MustCompile(`^\t0x[0-9a-f]+ \d+ \(([^()]+):(\d+)\)\t([A-Z][A-Z0-9]*)\b`)

// assemblyFunction matches the head of a function in the listing.
var assemblyFunction = regexp.MustCompile(`^(\S.*?) STEXT `)

// scan reads a compiler's listing and returns every line of source that was compiled into a
// fused instruction without asking for it by math.FMA, with the function that it was compiled
// into, and the number of instructions that did ask.
func scan(listing string, fused *regexp.Regexp) (offences []string, asked, read int, err error) {
	sources := map[string][]string{}
	seen := map[string]bool{}
	function := ""

	for line := range strings.Lines(listing) {
		if head := assemblyFunction.FindStringSubmatch(line); head != nil {
			function = head[1]
		}

		match := assemblyLine.FindStringSubmatch(line)
		if match == nil {
			continue
		}

		read++

		file, mnemonic := match[1], match[3]
		if !fused.MatchString(mnemonic) {
			continue
		}

		number, err := strconv.Atoi(match[2])
		if err != nil {
			return nil, 0, 0, fmt.Errorf("line number in %q: %w", line, err)
		}

		if sources[file] == nil {
			text, err := os.ReadFile(file)
			if err != nil {
				return nil, 0, 0, fmt.Errorf("source of a listed instruction: %w", err)
			}

			sources[file] = strings.Split(string(text), "\n")
		}

		text := strings.TrimSpace(sources[file][number-1])
		if strings.Contains(text, "FMA(") {
			asked++

			continue
		}

		if offence := fmt.Sprintf("%s:%d: %s in %q, compiled into %s", file, number, mnemonic, text, function); !seen[offence] {
			seen[offence] = true
			offences = append(offences, offence)
		}
	}

	return offences, asked, read, nil
}

// TestNoUnaskedFusedInstructions compiles the core for each target and reads the assembly.
func TestNoUnaskedFusedInstructions(t *testing.T) {
	t.Parallel()

	for _, one := range targets() {
		t.Run(one.name, func(t *testing.T) {
			t.Parallel()

			_, listing := goCommand(t, one.environment, "build", "-gcflags=-S", "./kinematics/...")

			offences, asked, read, err := scan(listing, one.fused)
			if err != nil {
				t.Fatal(err)
			}

			for _, offence := range offences {
				t.Errorf("%s: round the product first, as float64(a*b), or join it by math.FMA", offence)
			}

			if asked == 0 {
				t.Error("no instruction of math.FMA was found, though num uses it: the scan does not see what it looks for")
			}

			t.Logf("%d instructions read, %d of math.FMA", read, asked)
		})
	}
}

// fusing is a program whose functions fuse: in plain sight, across statements, through inlining
// and in a generic function. The end of a line names the offence, and the one target that
// commits it where the other's compiler leaves differences alone.
const fusing = `package fusing

import "math"

func Plain(a, b, c float64) float64 {
	return a*b + c // offence
}

func Across(a, b, c float64) float64 {
	p := a * b
	return p - c // offence on arm64
}

func product(a, b float64) float64 { return a * b }

func Inlined(a, b, c float64) float64 {
	return c - product(a, b) // offence on arm64
}

func InlinedSum(a, b, c float64) float64 {
	return c + product(a, b) // offence
}

func Generic[F float32 | float64](a, b, c F) F {
	return c + a*b // offence
}

func Use(a, b, c float64) float64 {
	return Generic(a, b, c)
}

func Rounded(a, b, c float64) float64 {
	return float64(a*b) + c + float64(product(a, c))
}

func Asked(a, b, c float64) float64 {
	return math.FMA(a, b, c)
}
`

func TestFusedScanSeesOffences(t *testing.T) {
	t.Parallel()

	folder := t.TempDir()
	file := filepath.Join(folder, "fusing.go")

	if err := os.WriteFile(file, []byte(fusing), 0o600); err != nil {
		t.Fatal(err)
	}

	for _, one := range targets() {
		t.Run(one.name, func(t *testing.T) {
			t.Parallel()

			_, listing := goCommand(t, one.environment, "build", "-gcflags=-S", file)

			offences, asked, _, err := scan(listing, one.fused)
			if err != nil {
				t.Fatal(err)
			}

			if asked != 1 {
				t.Errorf("found %d instructions of math.FMA, want 1", asked)
			}

			all := strings.Join(offences, "\n")

			for i, line := range strings.Split(fusing, "\n") {
				want := strings.HasSuffix(line, "offence") || strings.HasSuffix(line, "offence on "+one.name)
				if found := strings.Contains(all, fmt.Sprintf("fusing.go:%d:", i+1)); found != want {
					t.Errorf("line %d %q: found %t, want %t", i+1, line, found, want)
				}
			}
		})
	}
}
