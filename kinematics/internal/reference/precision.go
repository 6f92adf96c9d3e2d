package reference

import (
	"encoding/json"
	"fmt"
	"math"
	"testing"
)

// Output is the answer of the function under test: the names of the case's
// outputs with float64, []float64, bool or int values. Names that the case does
// not have are ignored.
type Output map[string]any

// flatBound is the relative error that closed-form answers meet.
const flatBound = 4e-15

// untestedAbove is the bound beyond which a case says nothing.
const untestedAbove = 1e-3

// flat lists the functions whose answers are rational or square-root expressions
// of the inputs: they meet flatBound whatever the condition number.
func flat(fn string) bool {
	switch fn {
	case "kallen", "two_body_momentum", "two_body_momentum_s", "threshold",
		"invariant_mass_E", "invariant_mass_m", "photon_pair_mass",
		"t_range", "dalitz_limits", "laser_edge", "collider_sqrt_s":
		return true
	}
	return false
}

// tally counts what one test compared.
type tally struct {
	cases, values, untested, failed int
	worst, worstRatio               float64
	worstAt, worstRatioAt           string
}

func (s *tally) note(at string, relative, bound float64) {
	s.values++
	if relative > s.worst {
		s.worst, s.worstAt = relative, at
	}
	if ratio := relative / bound; ratio > s.worstRatio {
		s.worstRatio, s.worstRatioAt = ratio, at
	}
}

// Precision runs f over every case of fn and compares its answers with the
// 25-digit ones. f returns the outputs and the refusal: "" or the name that the
// case's error has ("below_threshold", "outside_region").
//
// The bound of a relative error is max(4e-15, cond*4*2^-52), and 4e-15 whatever
// cond for rational and square-root answers; for numerical integrals the accuracy that
// own-cases.json states takes the place of 4e-15. A value whose bound exceeds 1e-3 is
// counted as untested. A zero must be exactly zero; whole numbers and truth values
// must be equal.
func Precision(t *testing.T, fn string, f func(Input) (Output, string)) {
	t.Helper()
	var sum tally
	for _, c := range loadPrecision(t) {
		if c.Fn != fn {
			continue
		}
		sum.cases++
		in := Input{ID: c.ID, Tags: c.Tags, tb: t, fields: c.In}
		got, refusal := f(in)
		if refusal != c.Error {
			sum.failed++
			t.Errorf("%s %v: refused with %q, want %q", c.ID, c.Tags, refusal, c.Error)
			continue
		}
		if c.Error != "" {
			sum.values++
			continue
		}
		for name, raw := range c.Out {
			if err := sum.compare(c, name, got[name], raw); err != nil {
				sum.failed++
				t.Errorf("%s %v: %v", c.ID, c.Tags, err)
			}
		}
	}
	if sum.cases == 0 {
		t.Fatalf("no precision case of %q", fn)
	}
	if sum.values == 0 {
		t.Errorf("%s: nothing was compared", fn)
	}
	t.Logf("%s: %d cases, %d values compared, %d untested, %d failed; worst error %.3g (%s), worst error over bound %.3g (%s)",
		fn, sum.cases, sum.values, sum.untested, sum.failed, sum.worst, sum.worstAt, sum.worstRatio, sum.worstRatioAt)
	report(t, fn, sum)
}

// compare compares one named output of any kind.
func (s *tally) compare(c precisionCase, name string, got any, raw json.RawMessage) error {
	switch got := got.(type) {
	case float64:
		var want string
		if err := json.Unmarshal(raw, &want); err != nil {
			return fmt.Errorf("%s: got a number, want %s", name, raw)
		}
		return s.compareFloat(c, name, got, want)
	case []float64:
		var want []string
		if err := json.Unmarshal(raw, &want); err != nil {
			return fmt.Errorf("%s: got a list, want %s", name, raw)
		}
		if len(got) != len(want) {
			return fmt.Errorf("%s: got %d values %v, want %v", name, len(got), got, want)
		}
		for i := range got {
			if err := s.compareFloat(c, fmt.Sprintf("%s[%d]", name, i), got[i], want[i]); err != nil {
				return err
			}
		}
		return nil
	case bool, int:
		s.values++
		if text := fmt.Sprint(got); text != string(raw) {
			return fmt.Errorf("%s: got %s, want %s", name, text, raw)
		}
		return nil
	}
	return fmt.Errorf("%s: missing or of type %T, want %s", name, got, raw)
}

// compareFloat compares one number at its bound.
func (s *tally) compareFloat(c precisionCase, name string, got float64, text string) error {
	want, err := parse(text)
	if err != nil {
		return err
	}
	bound := c.accuracy
	if cond := c.Cond[name]; cond != nil && !flat(c.Fn) {
		bound = math.Max(bound, *cond*4*0x1p-52)
	}
	if bound > untestedAbove {
		s.untested++
		return nil
	}
	relative := relativeError(got, want)
	s.note(c.ID+" "+name, relative, bound)
	if !(relative <= bound) {
		return fmt.Errorf("%s: got %.17g, want %s: relative error %.3g, bound %.3g", name, got, text, relative, bound)
	}
	return nil
}
