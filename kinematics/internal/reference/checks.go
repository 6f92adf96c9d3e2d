package reference

import (
	"fmt"
	"strings"
	"testing"
)

// Check is one entry of checks.json. Its inputs are read like those of a
// precision case.
type Check struct {
	Input

	// Quantity says in words what is asked for.
	Quantity string
	// Unit is the unit of the answer, "1" for none.
	Unit string
}

// Checks runs f over every check of the class and compares its answers with the
// recomputed value at the recomputed tolerance and with the printed value at the
// printed one, unless the file says that the printed value does not agree.
//
// f returns a float64 in the check's unit, or a string where the tolerance is
// exact; ok false says that the check belongs to another package, which is
// counted and listed.
func Checks(t *testing.T, class string, f func(Check) (value any, ok bool)) {
	t.Helper()
	compared, disagreeing := 0, 0
	worst, worstAt := 0.0, ""
	var elsewhere []string
	for _, record := range loadChecks(t) {
		if record.Class != class {
			continue
		}
		check := Check{
			Input:    Input{ID: record.ID, tb: t, fields: record.Inputs},
			Quantity: record.Quantity,
			Unit:     record.Recomputed.Unit,
		}
		value, ok := f(check)
		if !ok {
			elsewhere = append(elsewhere, record.ID)
			continue
		}
		compared++
		relative, err := within(value, record.Recomputed.Value, record.Recomputed.Tolerance)
		if err != nil {
			t.Errorf("%s (%s): against the recomputed value: %v", record.ID, record.Quantity, err)
		}
		if relative > worst {
			worst, worstAt = relative, record.ID
		}
		if record.Agrees != nil && !*record.Agrees {
			disagreeing++
			continue
		}
		if _, err := within(value, record.Expected.Value, record.Tolerance); err != nil {
			t.Errorf("%s (%s): against the printed value: %v", record.ID, record.Quantity, err)
		}
	}
	if compared == 0 {
		t.Fatalf("no check of class %q was compared", class)
	}
	t.Logf("%s: %d checks compared, worst relative error %.3g (%s), %d printed values disagree by the file's word, %d elsewhere %v",
		class, compared, worst, worstAt, disagreeing, len(elsewhere), elsewhere)
}

// within compares one value and returns its relative error.
func within(value any, text string, limit tolerance) (relative float64, err error) {
	if limit.Exact {
		if got := fmt.Sprint(value); got != text {
			return 0, fmt.Errorf("got %s, want %s", got, text)
		}
		return 0, nil
	}
	got, ok := value.(float64)
	if !ok {
		return 0, fmt.Errorf("got a %T, want a float64", value)
	}
	want, err := parse(text)
	if err != nil {
		return 0, err
	}
	relative = relativeError(got, want)
	switch {
	case limit.Rel != "":
		bound, err := parse(limit.Rel)
		if err != nil {
			return relative, err
		}
		if most, _ := bound.Float64(); !(relative <= most) {
			return relative, fmt.Errorf("got %.17g, want %s: relative error %.3g, tolerance %s", got, text, relative, limit.Rel)
		}
	case limit.Abs != "":
		bound, err := parse(strings.TrimSpace(limit.Abs))
		if err != nil {
			return relative, err
		}
		if got != got || absoluteError(got, want).Cmp(bound) > 0 {
			return relative, fmt.Errorf("got %.17g, want %s within %s", got, text, limit.Abs)
		}
	default:
		return relative, fmt.Errorf("no tolerance for %s", text)
	}
	return relative, nil
}
