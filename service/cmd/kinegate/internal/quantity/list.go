package quantity

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// maxListed bounds the values that one list may stand for.
const maxListed = 10_000

// ParseList reads several quantities of a dimension: quantities with commas between them,
// and stretches "A to B by STEP", which hold both ends where the steps meet them. A number
// without a unit has that of the next one with a unit:
//
//	"10, 20, 30 deg"    "0 to 40 by 10 deg"    "5 deg, 0.2 rad"
func ParseList(text string, dimension Dimension) ([]float64, error) {
	return list(text, func(s string) (float64, error) { return Parse(s, dimension) })
}

// ParseNumbers reads several plain numbers, in the manner of ParseList.
func ParseNumbers(text string) ([]float64, error) { return list(text, ParseNumber) }

// ParseNumber reads a plain number.
func ParseNumber(text string) (float64, error) {
	var x float64
	var rest string
	if n, _ := fmt.Sscanf(strings.TrimSpace(text), "%g%s", &x, &rest); n != 1 || math.IsNaN(x) || math.IsInf(x, 0) {
		return 0, fmt.Errorf("%q is not a number", text)
	}
	return x, nil
}

// ParseRange reads "A to B", or "A on" for a range without an end, which is then +Inf.
func ParseRange(text string, dimension Dimension) (from, to float64, err error) {
	if begin, ok := strings.CutSuffix(strings.TrimSpace(text), " on"); ok {
		from, err = Parse(begin, dimension)
		return from, math.Inf(1), err
	}
	words := inheritUnits(text)
	begin, end, ok := strings.Cut(words, " to ")
	if !ok {
		return 0, 0, fmt.Errorf("%q is no range; write for example %q or %q", text, "5 to 20 cm", "20 cm on")
	}
	if from, err = Parse(begin, dimension); err != nil {
		return 0, 0, err
	}
	to, err = Parse(end, dimension)
	return from, to, err
}

// list reads the parts of a list with one function for each number.
func list(text string, read func(string) (float64, error)) ([]float64, error) {
	var all []float64
	for part := range strings.SplitSeq(inheritUnits(text), ",") {
		begin, rest, isRange := strings.Cut(part, " to ")
		first, err := read(begin)
		if err != nil {
			return nil, err
		}
		if !isRange {
			all = append(all, first)
			continue
		}
		end, by, ok := strings.Cut(rest, " by ")
		if !ok {
			return nil, fmt.Errorf("%q has no step; write for example %q", strings.TrimSpace(part), "0 to 40 by 10 deg")
		}
		last, err := read(end)
		if err != nil {
			return nil, err
		}
		step, err := read(by)
		if err != nil {
			return nil, err
		}
		// The last step may miss the end by its rounding, far below any step.
		count := math.Floor((last-first)/step*(1+1e-12)) + 1
		if !(step > 0) || !(count >= 1) || count > maxListed {
			return nil, fmt.Errorf("%q: a step above 0 must lead from the first to the last value in at most %d steps",
				strings.TrimSpace(part), maxListed)
		}
		for i := range int(count) {
			all = append(all, min(first+float64(i)*step, last))
		}
	}
	return all, nil
}

// inheritUnits gives every number without a unit that of the next number with one.
func inheritUnits(text string) string {
	words := strings.FieldsFunc(strings.ReplaceAll(text, ",", " , "), func(r rune) bool { return r == ' ' })
	isNumber := func(w string) bool { _, err := ParseNumber(w); return err == nil }
	isWord := func(w string) bool { return w == "to" || w == "by" || w == "," }
	unit := ""
	var out []string
	for i := range slices.Backward(words) {
		switch {
		case isWord(words[i]):
		case isNumber(words[i]):
			if i+1 == len(words) || isWord(words[i+1]) {
				out = append(out, unit)
			}
		case !strings.ContainsAny(words[i][:1], "+-.0123456789"):
			unit = words[i]
		default: // a number with its unit, such as 10deg
			unit = strings.TrimLeft(words[i], "+-.0123456789")
		}
		out = append(out, words[i])
	}
	slices.Reverse(out)
	return strings.ReplaceAll(strings.Join(strings.Fields(strings.Join(out, " ")), " "), " ,", ",")
}
