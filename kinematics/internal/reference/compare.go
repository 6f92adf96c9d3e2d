package reference

import (
	"fmt"
	"math"
	"math/big"
)

// digits is the working precision of the comparison in bits, far beyond the 25
// digits of the answers.
const digits = 256

// parse reads a decimal number to the working precision.
func parse(text string) (*big.Float, error) {
	value, _, err := big.ParseFloat(text, 10, digits, big.ToNearestEven)
	if err != nil {
		return nil, fmt.Errorf("number %q: %w", text, err)
	}
	return value, nil
}

// relativeError returns |got-want|/|want|. Where want is zero, it is 0 for a zero
// got and +Inf for any other; NaN and infinities give +Inf.
func relativeError(got float64, want *big.Float) float64 {
	if math.IsNaN(got) || math.IsInf(got, 0) {
		return math.Inf(1)
	}
	difference := absoluteError(got, want)
	if want.Sign() == 0 {
		if got == 0 {
			return 0
		}
		return math.Inf(1)
	}
	quotient := new(big.Float).Quo(difference, new(big.Float).Abs(want))
	value, _ := quotient.Float64()
	return value
}

// absoluteError returns |got-want| for finite got.
func absoluteError(got float64, want *big.Float) *big.Float {
	exact := new(big.Float).SetPrec(digits).SetFloat64(got)
	return exact.Abs(exact.Sub(exact, want))
}
