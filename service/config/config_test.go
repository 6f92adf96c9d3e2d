package config

import (
	"errors"
	"maps"
	"slices"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/service/server"
)

// other is an allowed value of a setting that is not its default, made anew for each
// step so that the sources can be told apart.
func other(s server.Setting, step int) string {
	switch s.Kind() {
	case "bool":
		return []string{"false", "true", "false"}[step]
	case "word":
		return []string{"debug", "warn", "error"}[step]
	case "number":
		return []string{"129", "130", "131"}[step]
	case "size":
		return []string{"257KiB", "258KiB", "259KiB"}[step]
	case "time":
		return []string{"11s", "12s", "13s"}[step]
	case "list":
		return []string{"a", "a,b", "c"}[step]
	}
	return []string{"127.0.0.1:7001", "127.0.0.1:7002", "127.0.0.1:7003"}[step]
}

// load loads with sources and returns the value of one setting. Faults between settings
// are expected here, as one setting at a time is changed; faults of the value are not.
func load(t *testing.T, name string, s Sources) Effective {
	t.Helper()
	_, all, err := Load(s)
	if list, ok := errors.AsType[fault.List](err); ok {
		for _, e := range list {
			if !errors.Is(e, fault.Infeasible) && e.Field == name {
				t.Fatal(err)
			}
		}
	}
	i := slices.IndexFunc(all, func(e Effective) bool { return e.Setting.Name == name })
	return all[i]
}

// TestPrecedence goes through every setting and every combination of sources that give
// it: flag over environment over file over default.
func TestPrecedence(t *testing.T) {
	for _, s := range server.Settings() {
		t.Run(s.Name, func(t *testing.T) {
			givers := []struct {
				origin Origin
				place  string
				value  string
			}{
				{File, "k.yaml", other(s, 0)}, {Environment, VariableName(s.Name), other(s, 1)}, {Flag, FlagName(s.Name), other(s, 2)},
			}
			for given := range 1 << len(givers) {
				sources := Sources{
					Flags: map[string]string{}, Environ: []string{"KINEGATE_CONFIG=/etc/k.yaml", "PATH=/bin"},
					ReadFile: func(string) ([]byte, error) {
						if given&1 == 0 {
							return nil, nil
						}
						return []byte(s.Name + ": \"" + givers[0].value + "\"\n"), nil
					},
				}
				if given&2 != 0 {
					sources.Environ = append(sources.Environ, VariableName(s.Name)+"="+givers[1].value)
				}
				if given&4 != 0 {
					sources.Flags[s.Name] = givers[2].value
				}
				want := Effective{Value: s.Default, Origin: Default}
				for i, g := range givers {
					if given&(1<<i) != 0 {
						want = Effective{Value: g.value, Origin: g.origin, Place: g.place}
					}
				}
				if e := load(t, s.Name, sources); e.Value != want.Value || e.Origin != want.Origin || e.Place != want.Place {
					t.Errorf("given %03b: %q from %s, %s; want %q from %s, %s", given, e.Value, e.Origin, e.Place, want.Value, want.Origin, want.Place)
				}
			}
		})
	}
}

func TestFileOfTheFlagWins(t *testing.T) {
	_, all, err := Load(Sources{
		Flags: map[string]string{FileKey: "flag.yaml"}, Environ: []string{"KINEGATE_CONFIG=variable.yaml"},
		ReadFile: func(path string) ([]byte, error) {
			if path != "flag.yaml" {
				return nil, errors.New("the other file")
			}
			return []byte("particle_files: [a.csv, b.csv]\nreflection: false\ncredit_blocks: 16\n"), nil
		},
	})
	if err != nil {
		t.Fatal(err)
	}
	got := map[string]string{}
	for _, e := range all {
		if e.Origin == File {
			got[e.Setting.Name] = e.Value
		}
	}
	want := map[string]string{"particle_files": "a.csv,b.csv", "reflection": "false", "credit_blocks": "16"}
	if !maps.Equal(got, want) {
		t.Errorf("got %v", got)
	}
}

func TestFaultsAreAllReported(t *testing.T) {
	text := "gate_addr: x\ncredit_blocks: many\nreflection: yes\ncredit_pool: 1MiB\nlog_level: info\nlog_level: warn\n"
	_, _, err := Load(Sources{
		Flags:    map[string]string{FileKey: "k.yaml", "no_such_flag": "1", "connections": "0"},
		Environ:  []string{"KINEGATE_LOG_LEVEL=loud", "KINEGATE_NO_SUCH=1"},
		ReadFile: func(string) ([]byte, error) { return []byte(text), nil },
	})
	var list fault.List
	if !errors.As(err, &list) {
		t.Fatalf("got %v", err)
	}
	got := map[string]int{}
	for _, e := range list {
		got[e.Field]++
	}
	want := map[string]int{
		"gate_addr": 1, "credit_blocks": 1, "reflection": 1, "credit_limit": 1, "log_level": 2,
		"no_such_flag": 1, "connections": 1, "no_such": 1,
	}
	if !maps.Equal(got, want) {
		t.Errorf("got  %v\nwant %v\n%v", got, want, err)
	}
	for _, text := range []string{"k.yaml: line 1 column 1", "--no-such-flag", "KINEGATE_LOG_LEVEL", "debug, info, warn, error"} {
		if !strings.Contains(err.Error(), text) {
			t.Errorf("%q lacks %q", err, text)
		}
	}
}

func TestFilesThatAreRefused(t *testing.T) {
	for name, text := range map[string]string{
		"sequence": "- a\n", "scalar": "a\n", "anchor": "log_level: &a info\n", "alias": "a: &x 1\nb: *x\n",
		"tag": "log_level: !!str info\n", "null": "log_level: null\n", "nested": "log_level:\n  a: b\n",
		"two documents": "log_level: info\n---\nlog_level: info\n", "broken": "log_level: [\n", "not UTF-8": "log_level: \xff\n",
		"list of lists": "particle_files: [[a]]\n", "comma in a list": "particle_files: [\"a,b\"]\n",
		"merge": "<<: {log_level: info}\n", "too long": strings.Repeat("#", maxFileBytes+1),
		"key is a list": "? [a]\n: b\n",
	} {
		t.Run(name, func(t *testing.T) {
			_, _, err := Load(Sources{
				Flags: map[string]string{FileKey: "k.yaml"}, ReadFile: func(string) ([]byte, error) { return []byte(text), nil },
			})
			if err == nil {
				t.Error("taken")
			}
		})
	}
	for name, text := range map[string]string{"empty": "", "comment": "# nothing\n", "null": "null\n", "blank": " \n\n"} {
		t.Run(name, func(t *testing.T) {
			_, _, err := Load(Sources{
				Flags: map[string]string{FileKey: "k.yaml"}, ReadFile: func(string) ([]byte, error) { return []byte(text), nil },
			})
			if err != nil {
				t.Error(err)
			}
		})
	}
	_, _, err := Load(Sources{
		Flags: map[string]string{FileKey: "k.yaml"}, ReadFile: func(string) ([]byte, error) { return nil, errors.New("no such file") },
	})
	if err == nil || !strings.Contains(err.Error(), "no such file") {
		t.Errorf("an unreadable file: %v", err)
	}
}

// TestLinkedVariables: what orchestrators add for services of our name is no setting.
func TestLinkedVariables(t *testing.T) {
	lines := []string{
		"KINEGATE_PORT=tcp://10.0.0.1:8471", "KINEGATE_SERVICE_HOST=10.0.0.1", "KINEGATE_SERVICE_PORT=8471",
		"KINEGATE_SERVICE_PORT_GRPC=8471", "KINEGATE_PORT_8471_TCP=tcp://10.0.0.1:8471",
		"KINEGATE_PORT_8471_TCP_PROTO=tcp", "KINEGATE_PORT_8471_TCP_PORT=8471", "KINEGATE_PORT_8471_TCP_ADDR=10.0.0.1",
		"KINEGATE_GATE_PORT=tcp://10.0.0.1:8470", "KINEGATE_GATE_SERVICE_HOST=10.0.0.1",
	}
	if _, _, err := Load(Sources{Environ: lines}); err != nil {
		t.Error(err)
	}
	for _, s := range server.Settings() {
		if linked.MatchString(strings.TrimPrefix(VariableName(s.Name), Prefix)) {
			t.Errorf("%s would not be looked at", s.Name)
		}
	}
	if _, _, err := Load(Sources{Environ: []string{"KINEGATE_GATE_PORTS=1"}}); err == nil {
		t.Error("a misspelt variable is not looked at")
	}
}

// TestPrintReadsBack: the printed configuration is a file that gives the same options.
func TestPrintReadsBack(t *testing.T) {
	options, all, err := Load(Sources{
		Flags:   map[string]string{"credit_blocks": "16", "selection_files": "a.yaml,b.yaml"},
		Environ: []string{"KINEGATE_CONNECTION_AGE=30m"},
	})
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	if err := Print(&b, all); err != nil {
		t.Fatal(err)
	}
	for _, text := range []string{"from flag, --credit-blocks\n", "from environment, KINEGATE_CONNECTION_AGE\n", "from default\n", "1 to 1024"} {
		if !strings.Contains(b.String(), text) {
			t.Errorf("lacks %q", text)
		}
	}
	again, _, err := Load(Sources{
		Flags: map[string]string{FileKey: "x"}, ReadFile: func(string) ([]byte, error) { return []byte(b.String()), nil },
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, s := range server.Settings() {
		if got, want := s.In(&again).String(), s.In(&options).String(); got != want {
			t.Errorf("%s is %q, was %q", s.Name, got, want)
		}
	}
	if err := Print(broken{}, all); err == nil {
		t.Error("a failed write goes unnoticed")
	}
}

type broken struct{}

func (broken) Write([]byte) (int, error) { return 0, errors.New("broken pipe") }

func FuzzFile(f *testing.F) {
	f.Add("gate_address: 127.0.0.1:1\nparticle_files: [a, b]\n")
	f.Add("a: &x 1\nb: *x\n<<: {c: d}\n? [a]\n: b\n---\n")
	f.Fuzz(func(t *testing.T, text string) {
		options, _, err := Load(Sources{
			Flags: map[string]string{FileKey: "k.yaml"}, ReadFile: func(string) ([]byte, error) { return []byte(text), nil },
		})
		if err == nil && options.Validate() != nil {
			t.Error("options that do not hold were taken")
		}
	})
}
