package strictyaml_test

import (
	"fmt"
	"strings"
	"testing"

	"google.golang.org/protobuf/encoding/protojson"
	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api/strictyaml"
)

const sound = `# A selection of two hypotheses.
name: eta
hypotheses:
  - name: eta
    reaction: "gamma p -> p eta, eta -> gamma gamma"
    also_conjugate: false
    extra_objects: {none: {}}
    condition:
      all_of:
        - window: {invariant_mass: {products: [eta], min_gev: 0.5, max_gev: 6e-1}}
        - none_of:
          - window: {opening_angle: {first: "gamma[0]", second: "gamma[1]", max_rad: 0.1}}
    role: ROLE_SHADOW
    prescale_count: 10
assignment_budget_count: "1000"
`

func TestUnmarshalReadsTheJSONForm(t *testing.T) {
	t.Parallel()
	var got, want kinegatev1.Selection
	positions, faults := strictyaml.Unmarshal([]byte(sound), &got)
	if len(faults) > 0 {
		t.Fatalf("faults: %+v", faults)
	}
	asJSON := `{"name":"eta","hypotheses":[{"name":"eta","reaction":"gamma p -> p eta, eta -> gamma gamma",
	 "extra_objects":{"none":{}},"condition":{"all_of":[
	  {"window":{"invariant_mass":{"products":["eta"],"min_gev":0.5,"max_gev":0.6}}},
	  {"none_of":[{"window":{"opening_angle":{"first":"gamma[0]","second":"gamma[1]","max_rad":0.1}}}]}]},
	 "role":"ROLE_SHADOW","prescale_count":"10"}],"assignment_budget_count":"1000"}`
	if err := protojson.Unmarshal([]byte(asJSON), &want); err != nil {
		t.Fatal(err)
	}
	if !proto.Equal(&got, &want) {
		t.Errorf("got %v\nwant %v", &got, &want)
	}
	if at := positions.Find("hypotheses[0].condition.all_of[0].window.invariant_mass.max_gev"); at.Line != 10 || at.Column < 50 {
		t.Errorf("max_gev at %+v, want line 10", at)
	}
	if at := positions.Find("hypotheses[0].nothing.here"); at.Line != 4 {
		t.Errorf("an unset field is placed at %+v, want the line of the hypothesis", at)
	}
}

// TestUnmarshalNamesEachFault holds one offence a row, with the place and a part
// of the message.
func TestUnmarshalNamesEachFault(t *testing.T) {
	t.Parallel()
	deep := strings.Repeat("{none_of: [", 80) + "{}" + strings.Repeat("]}", 80)
	for _, c := range []struct{ name, text, line, field, message string }{
		{"empty", "", "1:1", "", "empty"},
		{"not YAML", "name: [", "1:1", "", "not YAML: a bracket"},
		{"a list", "- name", "1:1", "", "a set of fields is needed"},
		{"second document", "name: a\n---\nname: b\n", "2:1", "", "second document"},
		{"unknown field", "name: a\nhypothesis: []\n", "2:1", "hypothesis", "unknown field"},
		{"camel case", "assignmentBudgetCount: 3\n", "1:1", "assignmentBudgetCount", "unknown field"},
		{"doubled field", "name: a\nname: b\n", "2:1", "name", "set twice"},
		{"alias", "name: a\ngroups: &g []\nhypotheses: *g\n", "3:13", "hypotheses", "aliases"},
		{"anchor", "name: &n a\n", "1:7", "name", "anchors"},
		{"tag", "name: !!str 5\n", "1:7", "name", "tags"},
		{"merge key", "<<: {name: a}\n", "1:1", "", "field name"},
		{"null", "name:\n", "1:6", "name", "empty"},
		{"old boolean as text", "name: yes\n", "1:7", "name", "quotes"},
		{"old boolean as truth", "hypotheses: [{also_conjugate: on}]\n", "1:31", "hypotheses[0].also_conjugate", "true or false"},
		{"number as text", "name: 5\n", "1:7", "name", "text is needed"},
		{"text as number", "assignment_budget_count: many\n", "1:26", "assignment_budget_count", "whole number"},
		{"octal", "assignment_budget_count: 010\n", "1:26", "assignment_budget_count", "whole number"},
		{"underscore", "assignment_budget_count: 1_000\n", "1:26", "assignment_budget_count", "whole number"},
		{"too many bits", "assignment_budget_count: 9223372036854775808\n", "1:26", "assignment_budget_count", "whole number"},
		{"infinite", "hypotheses: [{condition: {window: {energy: {max_gev: .inf}}}}]\n", "1:54", "hypotheses[0].condition.window.energy.max_gev", "finite"},
		{"overflow", "hypotheses: [{condition: {window: {energy: {max_gev: 1e999}}}}]\n", "1:54", "hypotheses[0].condition.window.energy.max_gev", "finite"},
		{"enum by number", "hypotheses: [{role: 2}]\n", "1:21", "hypotheses[0].role", "ROLE_GATE, ROLE_SHADOW"},
		{"unspecified enum", "hypotheses: [{role: ROLE_UNSPECIFIED}]\n", "1:21", "hypotheses[0].role", "ROLE_GATE"},
		{"two of a oneof", "hypotheses: [{beam: {tagged: {}, fixed: {}}}]\n", "1:34", "hypotheses[0].beam.fixed", "only one of tagged and fixed"},
		{"list for one", "name: [a]\n", "1:7", "name", "one value is needed, found a list"},
		{"one for list", "hypotheses: a\n", "1:13", "hypotheses", "a list is needed"},
		{"too deep", "hypotheses: [{condition: " + deep + "}]\n", "", "", "levels deep"},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Parallel()
			_, faults := strictyaml.Unmarshal([]byte(c.text), &kinegatev1.Selection{})
			want := 1
			if c.name == "alias" {
				want = 2 // the anchor it needs is a fault of its own
			}
			if len(faults) != want {
				t.Fatalf("%d faults, want %d: %+v", len(faults), want, faults)
			}
			f := faults[want-1]
			if at := fmt.Sprintf("%d:%d", f.Line, f.Column); c.line != "" && at != c.line {
				t.Errorf("at %s, want %s", at, c.line)
			}
			if c.field != "" && f.Field != c.field {
				t.Errorf("field %q, want %q", f.Field, c.field)
			}
			if !strings.Contains(strings.ReplaceAll(f.Message, "needed here", "needed"), c.message) {
				t.Errorf("message %q lacks %q", f.Message, c.message)
			}
		})
	}
}

// TestHintsOnCommonSlips has slips that people make, with what the message must say to help.
func TestHintsOnCommonSlips(t *testing.T) {
	t.Parallel()
	const window = "hypotheses:\n  - condition: {window: {invariant_mass: {products: [pi0], min_gev: 0.1}}}\n"
	for _, c := range []struct{ name, old, new, line, message string }{
		{"a letter wrong", "invariant", "invarient", "2:26", "nearest: invariant_mass"},
		{"camel case", "invariant_mass", "invariantMass", "2:26", "nearest: invariant_mass"},
		{"another unit", "min_gev", "min_mev", "2:60", "nearest: min_gev"},
		{"a unit in the value", "0.1}", "0.1 GeV}", "2:69", "the unit is that of the field's name"},
		{"a comma in a number", "0.1}", "0,1}", "2:71", "the decimal sign is a point"},
		{"nothing before the point", "0.1}", ".1}", "2:69", "both sides of the point"},
		{"a typographic minus", "0.1}", "\u22120.1}", "2:69", "the minus sign is written -"},
		{"typographic quotes", "[pi0]", "[\u201cpi0\u201d]", "2:54", "quotes are written"},
		{"no window around", "{window: {invariant_mass: {products: [pi0], min_gev: 0.1}}}", "{invariant_mass: {products: [pi0]}}", "2:17", "it stands inside window"},
		{"a list of one", "[pi0]", "pi0", "2:53", "a list of one is written [pi0]"},
		{"a list for a set", "{window: {invariant_mass: {products: [pi0], min_gev: 0.1}}}", "[{}]", "2:16", "its fields are all_of, any_of, none_of, window"},
		{"a word for a set", "- condition:", "- extra_objects: any\n    condition:", "2:20", "write {any: {}}"},
		{"a set for a list", "hypotheses:\n  - condition:", "hypotheses:\n    condition:", "2:5", `each entry starts with "-"`},
		{"a tab", "  - condition", "\t- condition", "2:1", "plain blanks, found '\\t'"},
		{"a wide blank", "  - condition", "  - name: a\n\u00a0\u00a0  condition", "3:1", `plain blanks, found '\u00a0'`},
		{"a brace open", "0.1}}}", "0.1}}", "2:1", "is not closed"},
		{"a dash lacking", "  - condition", "  name: a\n    condition", "3:1", `a "-" may be missing`},
		{"a unit lacking", "min_gev", "min", "2:60", "nearest: min_gev"},
		{"a unit too many", "invariant_mass: {products: [pi0], min_gev: 0.1}", "fit_probability: {min_gev: 0.1}", "2:44", "nearest: min"},
		{"a percentage", "0.1}", "1%}", "2:69", "such as 0.01"},
		{"a word for a value", "- condition:", "- role: veto\n    condition:", "2:11", "write ROLE_VETO"},
		{"a quote open", "[pi0]", "[\"pi0]", "2:1", "a quote that opens here"},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Parallel()
			text := strings.Replace(window, c.old, c.new, 1)
			if text == window {
				t.Fatal("the slip changes nothing")
			}
			_, faults := strictyaml.Unmarshal([]byte(text), &kinegatev1.Selection{})
			if len(faults) != 1 {
				t.Fatalf("%d faults: %+v", len(faults), faults)
			}
			f := faults[0]
			if at := fmt.Sprintf("%d:%d", f.Line, f.Column); at != c.line || !strings.Contains(f.Message, c.message) {
				t.Errorf("%s: %s, want %s: ... %s", at, f.Message, c.line, c.message)
			}
		})
	}
}

func TestUnmarshalReportsAllFaultsAtOnce(t *testing.T) {
	t.Parallel()
	text := "name: no\nwrong: 1\nhypotheses:\n  - role: 7\n    name: [x]\n"
	_, faults := strictyaml.Unmarshal([]byte(text), &kinegatev1.Selection{})
	if len(faults) != 4 {
		t.Errorf("%d faults, want 4: %+v", len(faults), faults)
	}
}

func FuzzUnmarshal(f *testing.F) {
	f.Add([]byte(sound))
	f.Add([]byte("name: &a [*a]"))
	f.Add([]byte("? {a: b}\n: c"))
	f.Fuzz(func(t *testing.T, text []byte) {
		var m kinegatev1.Selection
		if _, faults := strictyaml.Unmarshal(text, &m); len(faults) > 0 {
			return
		}
		// What was read without a fault survives a trip through the JSON form,
		// which is YAML too.
		asJSON, err := protojson.MarshalOptions{UseProtoNames: true}.Marshal(&m)
		if err != nil {
			t.Skip("text that is not UTF-8 has no JSON form")
		}
		var again kinegatev1.Selection
		if err := protojson.Unmarshal(asJSON, &again); err != nil || !proto.Equal(&m, &again) {
			t.Errorf("%q read as %v, again as %v (%v)", text, &m, &again, err)
		}
	})
}
