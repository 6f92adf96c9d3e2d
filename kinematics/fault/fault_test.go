package fault_test

import (
	"errors"
	"fmt"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
)

func TestErrorText(t *testing.T) {
	cases := []struct {
		name string
		err  *fault.Error
		want string
	}{
		{"kind only", &fault.Error{Kind: fault.NotFound}, "not found"},
		{"number", fault.Number("beam.energy_gev", -1.5, "> 0").In("reaction.New"),
			`reaction.New: beam.energy_gev "-1.5": invalid, allowed: > 0`},
		{"value alone", fault.New(fault.Invalid, "", "x", ""), `"x": invalid`},
		{"field alone", fault.New(fault.Infeasible, "masses", "", ""), "masses: infeasible"},
		{"column", fault.New(fault.NotFound, "particle", "Lamda", "").At(0, 14).Because("unknown particle"),
			`column 14: particle "Lamda": unknown particle`},
		{"line and nearest", &fault.Error{
			Kind: fault.NotFound, Field: "particle", Value: "Lamda", Line: 3, Column: 2,
			Problem: "unknown particle", Nearest: []string{"Lambda", "Lambda_b"},
		}, `line 3 column 2: particle "Lamda": unknown particle, nearest: Lambda, Lambda_b`},
		{"law", fault.New(fault.Forbidden, "charge", "left +1, right 0", "equal sums").Because("not conserved in a -> b"),
			"charge is not conserved in a -> b: left +1, right 0, allowed: equal sums"},
		{"law at a path", fault.New(fault.Forbidden, "charge", "left +1, right 0", "equal sums").Because("not conserved in a -> b").
			Move("channels[0].reaction").Move("generation.channels[0].reaction"),
			"generation.channels[0].reaction: charge is not conserved in a -> b: left +1, right 0, allowed: equal sums"},
		{"value at a path", fault.Number("x", 1, "< 1").Move("a.x"), `a.x "1": invalid, allowed: < 1`},
		{"cause", &fault.Error{Kind: fault.Invalid, Field: "table", Err: errors.New("short read")},
			"table: invalid: short read"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			if got := c.err.Error(); got != c.want {
				t.Errorf("got  %s\nwant %s", got, c.want)
			}
		})
	}
}

func TestKindsAreClosedAndNamed(t *testing.T) {
	seen := map[string]bool{}
	for _, k := range fault.Kinds() {
		text := k.Error()
		if strings.HasPrefix(text, "fault.Kind(") || seen[text] {
			t.Errorf("kind %d has no name of its own: %q", k, text)
		}
		seen[text] = true
	}
	for _, k := range []fault.Kind{0, fault.Unsupported + 1} {
		if !strings.HasPrefix(k.Error(), "fault.Kind(") {
			t.Errorf("kind %d is outside the list and has the name %q", k, k.Error())
		}
	}
}

func TestMatchingThroughWrapping(t *testing.T) {
	cause := errors.New("cause")
	inner := &fault.Error{Kind: fault.BelowThreshold, Field: "channel", Err: cause}
	err := fmt.Errorf("outer: %w", inner)
	if !errors.Is(err, fault.BelowThreshold) || errors.Is(err, fault.Invalid) {
		t.Error("errors.Is does not tell the kind")
	}
	if !errors.Is(err, cause) {
		t.Error("the cause is lost")
	}
	var got *fault.Error
	if !errors.As(err, &got) || got.Field != "channel" {
		t.Error("errors.As does not find the fault")
	}
	if k, ok := fault.KindOf(err); !ok || k != fault.BelowThreshold {
		t.Errorf("KindOf gives %v, %v", k, ok)
	}
	if _, ok := fault.KindOf(cause); ok {
		t.Error("KindOf finds a kind in a foreign error")
	}
}

func TestList(t *testing.T) {
	if (fault.List{}).Err() != nil {
		t.Error("an empty list is an error")
	}
	list := make(fault.List, 0, 19)
	for range 18 {
		list = append(list, fault.Number("x", 1, "< 1"))
	}
	list = append(list, fault.New(fault.NotFound, "y", "", ""))
	err := list.Err()
	if !errors.Is(err, fault.NotFound) || !errors.Is(err, fault.Invalid) {
		t.Error("errors.Is does not look through the list")
	}
	lines := strings.Split(err.Error(), "\n")
	if len(lines) != 17 || lines[16] != "and 3 more" {
		t.Errorf("got %d lines, the last is %q", len(lines), lines[len(lines)-1])
	}
}
