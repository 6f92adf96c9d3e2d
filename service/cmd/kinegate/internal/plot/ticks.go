package plot

import (
	"math"
	"strconv"

	"gonum.org/v1/plot"
)

// ticks places the ticks of an axis: at decades on logarithmic axes, at steps of 1, 2
// or 5 times a power of ten on linear ones.
type ticks struct{ axis *Axis }

// most is the largest number of labels.
const most = 8

// Ticks returns the ticks between two ends.
func (t ticks) Ticks(low, high float64) []plot.Tick {
	if t.axis.Log && low > 0 && high/low > 8 {
		return t.decades(low, high)
	}
	return t.steps(low, high)
}

func (t ticks) label(x float64) string {
	if t.axis.Tick != nil {
		return t.axis.Tick(x)
	}
	if x != 0 && (math.Abs(x) >= 1e5 || math.Abs(x) < 1e-3) {
		return strconv.FormatFloat(x, 'g', 4, 64)
	}
	return strconv.FormatFloat(x, 'f', -1, 64)
}

// decades are the powers of ten, with 2 to 9 times them unlabelled if they are few.
func (t ticks) decades(low, high float64) []plot.Tick {
	first, last := int(math.Ceil(math.Log10(low)-1e-9)), int(math.Floor(math.Log10(high)+1e-9))
	every := 1 + (last-first)/most
	var list []plot.Tick
	for n := first - 1; n <= last; n++ {
		decade := math.Pow10(n)
		if n >= first {
			label := ""
			if (n-first)%every == 0 {
				label = t.label(decade)
			}
			list = append(list, plot.Tick{Value: decade, Label: label})
		}
		for k := 2.0; k < 10 && every == 1; k++ {
			if x := k * decade; x > low && x < high {
				list = append(list, plot.Tick{Value: x})
			}
		}
	}
	return list
}

// steps are even steps.
func (t ticks) steps(low, high float64) []plot.Tick {
	step := t.axis.Step
	if step == 0 {
		step = stepOf((high - low) / most)
	}
	var list []plot.Tick
	for n := math.Ceil(low/step - 1e-9); n <= math.Floor(high/step+1e-9); n++ {
		// Rounded so that 3 x 0.1 is labelled 0.3; 0 is added so that -0 is 0.
		x, err := strconv.ParseFloat(strconv.FormatFloat(n*step+0, 'g', 10, 64), 64)
		if err != nil {
			continue
		}
		list = append(list, plot.Tick{Value: x, Label: t.label(x)})
	}
	return list
}

// stepOf is the smallest of 1, 2, 5 times a power of ten that is at least x.
func stepOf(x float64) float64 {
	decade := math.Pow10(int(math.Floor(math.Log10(x))))
	for _, k := range []float64{1, 2, 5} {
		if k*decade >= x*(1-1e-9) {
			return k * decade
		}
	}
	return 10 * decade
}
