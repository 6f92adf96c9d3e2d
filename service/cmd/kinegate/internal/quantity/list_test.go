package quantity_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
)

func TestParseList(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		text string
		want []float64
	}{
		{"1.5 m", []float64{1.5}},
		{"10, 20, 30 cm", []float64{0.1, 0.2, 0.3}},
		{"10cm,20cm", []float64{0.1, 0.2}},
		{"1 mm, 2, 3 m", []float64{0.001, 2, 3}},
		{"0 to 3 by 1 m", []float64{0, 1, 2, 3}},
		{"0 m to 35 cm by 10 cm", []float64{0, 0.1, 0.2, 0.30000000000000004}},
		{"0 to 0.3 by 0.1 m", []float64{0, 0.1, 0.2, 0.3}},
		{"-1 to 0 by 1 m, 5 km", []float64{-1, 0, 5000}},
		{"2 to 2 by 1 m", []float64{2}},
		{"1e-3, 2E3 m", []float64{0.001, 2000}},
	} {
		if got, err := quantity.ParseList(c.text, quantity.Length); err != nil || !slices.Equal(got, c.want) {
			t.Errorf("%q is %v, %v; want %v", c.text, got, err, c.want)
		}
	}
	for text, message := range map[string]string{
		"":                   "not a number with a unit",
		"1, 2":               "not a number with a unit",
		"1 m, 2":             "not a number with a unit",
		"1 m, 2 deg":         "quantity of angle",
		"0 to 4 m":           "no step",
		"0 to 4 by 0 m":      "a step above 0",
		"4 to 0 by 1 m":      "a step above 0",
		"0 to 1 by 1e-9 m":   "a step above 0",
		"0 to 4 by 1 m by 2": "not a number with a unit",
		"1 m 2 m":            "not a number with a unit",
	} {
		if got, err := quantity.ParseList(text, quantity.Length); err == nil || !strings.Contains(err.Error(), message) {
			t.Errorf("%q: %v, %v, want %q", text, got, err, message)
		}
	}
}

func TestParseNumbers(t *testing.T) {
	t.Parallel()
	if got, err := quantity.ParseNumbers("-1 to 1 by 0.5, 0.25"); err != nil || !slices.Equal(got, []float64{-1, -0.5, 0, 0.5, 1, 0.25}) {
		t.Errorf("%v, %v", got, err)
	}
	for _, text := range []string{"", "one", "1 deg", "NaN", "Inf", "1 2"} {
		if got, err := quantity.ParseNumbers(text); err == nil {
			t.Errorf("%q is %v", text, got)
		}
	}
}

func TestParseRange(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		text     string
		from, to float64
	}{
		{"5 to 20 cm", 0.05, 0.2}, {"5 mm to 2 m", 0.005, 2}, {"20 cm on", 0.2, math.Inf(1)},
	} {
		if from, to, err := quantity.ParseRange(c.text, quantity.Length); err != nil || from != c.from || to != c.to {
			t.Errorf("%q is %v to %v, %v", c.text, from, to, err)
		}
	}
	for _, text := range []string{"", "5 cm", "5 to", "to 5 cm", "5 to 20", "1 deg to 2 deg"} {
		if from, to, err := quantity.ParseRange(text, quantity.Length); err == nil {
			t.Errorf("%q is %v to %v", text, from, to)
		}
	}
}
