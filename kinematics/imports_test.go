package kinematics_test

import (
	"slices"
	"strings"
	"testing"
)

// coreLayer tells how high each package of the core lies; a package imports only from lower
// layers. A folder below one of these belongs to it.
var coreLayer = map[string]int{
	"":           0, // The root: the version of the numerics.
	"num":        1,
	"fault":      1,
	"momentum":   2,
	"particle":   2,
	"event":      3,
	"reaction":   4,
	"decay":      4,
	"photon":     4,
	"constraint": 4,
	"selection":  5,
	"generation": 5,
	"detector":   5,
	"planning":   6,
}

// serviceLayer does the same for the service: wiring above the configuration, that above the server,
// and the server above its handlers and its metrics.
var serviceLayer = map[string]int{"api": 1, "telemetry": 1, "server": 2, "config": 3, "cmd": 4}

// outsideTheCore are packages of the standard library that would bring a clock, a log, the
// outside, random numbers of another stream or functions whose last bit depends on the processor.
var outsideTheCore = []string{"log", "time", "os", "net", "syscall", "unsafe", "runtime", "math/rand", "math/cmplx"}

// homes tells, for modules from outside, which folders may import them in their non-test files;
// the longest matching path holds. A module that is not listed is refused everywhere.
var homes = map[string][]string{
	"google.golang.org":           {"proto", "service", "clients"},
	"github.com/prometheus":       {"service/telemetry", "service/server", "service/cmd"},
	"github.com/rs/zerolog":       {"service/telemetry", "service/server", "service/cmd"},
	"github.com/spf13":            {"service/cmd"},
	"golang.org/x/net":            {}, // Tests send raw frames.
	"golang.org/x/term":           {"service/cmd"},
	"golang.org/x/sys":            {"service"},
	"go.yaml.in/yaml":             {"service"},
	"gonum.org/v1/gonum":          {"service/cmd/kinegate/internal/plot"},
	"gonum.org/v1/plot":           {"service/cmd/kinegate/internal/plot"},
	"github.com/google/go-cmp":    {},
	"google.golang.org/grpc/test": {},
	"github.com/prometheus/client_golang/prometheus/testutil": {},
}

// testHomes tells which modules the test files of any folder may import besides.
var testHomes = []string{"gonum.org/v1/gonum", "github.com/google/go-cmp"}

// within tells whether a path is the folder or lies below it.
func within(path, folder string) bool {
	return path == folder || strings.HasPrefix(path, folder+"/")
}

// split cuts the module's name and the first folder off an import path.
func split(path string) (top, rest string) {
	top, rest, _ = strings.Cut(strings.TrimPrefix(strings.TrimPrefix(path, module), "/"), "/")

	return top, rest
}

// refusal says why a package may not import another, and is empty where it may. Test files
// may reach further: a client is tested against the real server.
func refusal(importer, imported string, test bool) string {
	if within(imported, module) {
		return insideRefusal(importer, imported, test)
	}

	first, _, _ := strings.Cut(imported, "/")
	if !strings.Contains(first, ".") {
		return standardRefusal(importer, imported, test)
	}

	folder := strings.TrimPrefix(importer, module+"/")
	if test && slices.ContainsFunc(testHomes, func(home string) bool { return within(imported, home) }) {
		return ""
	}

	longest, allowed := "", []string(nil)

	for path, folders := range homes {
		if within(imported, path) && len(path) > len(longest) {
			longest, allowed = path, folders
		}
	}

	switch {
	case longest == "":
		return "no rule names this module"
	case test && !within(folder, "kinematics"), slices.ContainsFunc(allowed, func(home string) bool { return within(folder, home) }):
		return ""
	default:
		return "only these folders may: " + strings.Join(allowed, ", ")
	}
}

// standardRefusal is refusal for a package of the standard library.
func standardRefusal(importer, imported string, test bool) string {
	top, rest := split(importer)
	if top != "kinematics" || test || within(rest, "internal") {
		return ""
	}

	if slices.ContainsFunc(outsideTheCore, func(path string) bool { return within(imported, path) }) {
		return "the core has no clock, no log, no outside and no foreign random numbers"
	}

	return ""
}

// insideRefusal is refusal between two packages of this module.
func insideRefusal(importer, imported string, test bool) string {
	from, fromRest := split(importer)
	to, toRest := split(imported)

	switch {
	case from == "kinematics" && to == "kinematics":
		return coreRefusal(fromRest, toRest, test)
	case from == "service" && to == "service":
		return serviceRefusal(fromRest, toRest)
	case from == to && slices.Contains([]string{"proto", "clients"}, from),
		from == "service" && (to == "kinematics" || to == "proto"),
		from == "clients" && to == "proto",
		from == "service" && to == "clients" && (test || within(fromRest, "cmd")),
		from == "clients" && to == "service" && test:
		return ""
	default:
		return "clients -> proto <- service -> kinematics, and nothing else; only commands use clients"
	}
}

// coreRefusal is refusal between two packages of the core.
func coreRefusal(importer, imported string, test bool) string {
	if within(imported, "internal") {
		if test {
			return ""
		}

		return "only tests import kinematics/internal"
	}

	from, _, _ := strings.Cut(importer, "/")
	to, _, _ := strings.Cut(imported, "/")
	low, known := coreLayer[to]

	switch {
	case !known:
		return "kinematics/" + to + " has no layer"
	case within(importer, "internal"):
		if low <= coreLayer["num"] {
			return ""
		}

		return "the helpers of the tests import the lowest layer only, so that all tests can use them"
	}

	high, known := coreLayer[from]

	switch {
	case !known:
		return "kinematics/" + from + " has no layer"
	case from == to, low < high, test && low == high: // tests select events that were generated
		return ""
	default:
		return "imports go down the layers only"
	}
}

// serviceRefusal is refusal between two packages of the service.
func serviceRefusal(importer, imported string) string {
	from, _, _ := strings.Cut(importer, "/")
	to, _, _ := strings.Cut(imported, "/")
	high, knownFrom := serviceLayer[from]
	low, knownTo := serviceLayer[to]

	switch {
	case !knownFrom || !knownTo:
		return "one of the two has no layer"
	case from == to, low < high:
		return ""
	default:
		return "imports go cmd -> config -> server -> api, telemetry"
	}
}

func TestImportDirection(t *testing.T) {
	t.Parallel()

	packages := listPackages(t, "./...")
	if len(packages) == 0 {
		t.Fatal("go list found no package")
	}

	edges := 0

	for _, one := range packages {
		for _, group := range []struct {
			imports []string
			test    bool
		}{{one.Imports, false}, {one.TestImports, true}, {one.XTestImports, true}} {
			for _, imported := range group.imports {
				edges++

				if why := refusal(one.ImportPath, imported, group.test); why != "" {
					t.Errorf("%s (test files: %t) may not import %s: %s", one.ImportPath, group.test, imported, why)
				}
			}
		}
	}

	t.Logf("%d packages, %d imports", len(packages), edges)
}

func TestImportDirectionSeesOffences(t *testing.T) {
	t.Parallel()

	for _, row := range []struct {
		importer, imported string
		test, refused      bool
	}{
		{"kinematics/num", "math", false, false},
		{"kinematics/num", "math/rand/v2", false, true},
		{"kinematics/num", "math/rand/v2", true, false},
		{"kinematics/num", "kinematics/fault", false, true},
		{"kinematics/momentum", "kinematics/num", false, false},
		{"kinematics/num", "kinematics/momentum", false, true},
		{"kinematics/momentum", "kinematics/particle", false, true},
		{"kinematics/event", "kinematics/particle", false, false},
		{"kinematics/reaction", "kinematics/reaction/internal/text", false, false},
		{"kinematics/reaction", "kinematics/selection", false, true},
		{"kinematics/selection", "kinematics/generation", false, true},
		{"kinematics/selection", "kinematics/generation", true, false},
		{"kinematics/selection", "kinematics/planning", true, true},
		{"kinematics/reaction", "kinematics/unheard", false, true},
		{"kinematics/reaction", "kinematics/internal/golden", false, true},
		{"kinematics/reaction", "kinematics/internal/golden", true, false},
		{"kinematics/internal/golden", "os", false, false},
		{"kinematics/internal/golden", "kinematics/num", false, false},
		{"kinematics/internal/golden", "kinematics/momentum", false, true},
		{"kinematics/planning", "time", false, true},
		{"kinematics/planning", "log/slog", false, true},
		{"kinematics/planning", "service/api", false, true},
		{"kinematics/planning", "proto/kinegate/v1", false, true},
		{"kinematics/planning", "proto/kinegate/v1", true, true},
		{"kinematics/planning", "google.golang.org/grpc/codes", false, true},
		{"kinematics/planning", "google.golang.org/grpc/codes", true, true},
		{"kinematics/planning", "gonum.org/v1/gonum/stat", false, true},
		{"kinematics/planning", "gonum.org/v1/gonum/stat", true, false},
		{"service/api", "kinematics/planning", false, false},
		{"service/api", "proto/kinegate/v1", false, false},
		{"service/api", "service/server", false, true},
		{"service/api", "clients/go", false, true},
		{"service/api", "github.com/rs/zerolog", false, true},
		{"service/api", "github.com/prometheus/client_golang/prometheus", false, true},
		{"service/telemetry", "github.com/prometheus/client_golang/prometheus", false, false},
		{"service/server", "service/telemetry", false, false},
		{"service/server", "service/cmd/kinegate", false, true},
		{"service/server", "github.com/google/go-cmp/cmp", false, true},
		{"service/server", "github.com/google/go-cmp/cmp", true, false},
		{"service/server", "github.com/nobody/nothing", false, true},
		{"service/cmd/kinegate", "clients/go", false, false},
		{"service/cmd/kinegate", "github.com/spf13/cobra", false, false},
		{"service/server", "github.com/spf13/cobra", false, true},
		{"service/server", "golang.org/x/net/http2", false, true},
		{"service/server", "golang.org/x/net/http2", true, false},
		{"clients/go", "proto/kinegate/v1", false, false},
		{"clients/go", "kinematics/num", false, true},
		{"clients/go", "service/server", false, true},
		{"clients/go", "service/server", true, false},
		{"proto/kinegate/v1", "kinematics", false, true},
		{"tools/anything", "kinematics", false, true},
	} {
		imported := row.imported
		if first, _ := split(imported); slices.Contains([]string{"kinematics", "service", "proto", "clients"}, first) {
			imported = module + "/" + imported
		}

		why := refusal(module+"/"+row.importer, imported, row.test)
		if (why != "") != row.refused {
			t.Errorf("%s -> %s (test files: %t): refused %q, want refused: %t", row.importer, imported, row.test, why, row.refused)
		}
	}
}
