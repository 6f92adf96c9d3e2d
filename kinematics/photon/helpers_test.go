package photon_test

import (
	"errors"
	"math"
	"testing"

	"example.org/kinegate/kinematics/fault"
)

// must unwraps the answer to valid input; the test run stops where it is refused.
func must[T any](value T, err error) T {
	if err != nil {
		panic(err)
	}
	return value
}

// near fails unless got is within the relative bound of want.
func near(t *testing.T, what string, got, want, bound float64) {
	t.Helper()
	if got == want {
		return
	}
	if relative := math.Abs(got-want) / math.Abs(want); !(relative <= bound) {
		t.Errorf("%s: got %.17g, want %.17g: relative error %.3g, bound %.3g", what, got, want, relative, bound)
	}
}

// refused fails unless err is a fault of the kind that names the field.
func refused(t *testing.T, err error, kind fault.Kind, field string) {
	t.Helper()
	var found *fault.Error
	if !errors.As(err, &found) || found.Kind != kind || found.Field != field {
		t.Errorf("got %v, want a fault %q of field %s", err, kind, field)
		return
	}
	if found.Op == "" {
		t.Errorf("the fault %v names no operation", err)
	}
}
