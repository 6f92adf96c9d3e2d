// Command bench measures what the project promises about its speed. Each row is a ratio of
// two things measured in the same run, printed beside its limit and its aim; absolute
// numbers do not travel between machines. It reports and never fails: the exit code is 0
// whatever the ratios are.
//
//	go run ./service/bench [-json] [-runs 5] [-only TEXT]
package main

import (
	"context"
	"encoding/json"
	"flag"
	"fmt"
	"io"
	"os"
	"os/signal"
	"slices"
	"strings"
)

func main() {
	if len(os.Args) == 2 && os.Args[1] == echoCommand {
		exit(echo(os.Stdin, os.Stdout))
	}
	runs := flag.Int("runs", 5, "number of runs of each row; the median counts")
	asJSON := flag.Bool("json", false, "print one JSON object for each row")
	only := flag.String("only", "", "measure the rows with this text in their name")
	flag.Parse()
	if *runs < 1 || flag.NArg() > 0 {
		flag.Usage()
		os.Exit(2)
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	err := report(ctx, os.Stdout, rows(), *runs, *only, *asJSON)
	stop()
	exit(err)
}

// exit ends the program.
func exit(err error) {
	if err != nil {
		fmt.Fprintln(os.Stderr, "bench:", err)
		os.Exit(1)
	}
	os.Exit(0)
}

// row is one promise.
type row struct {
	name string
	// limit and aim bound the ratio; 0 where there is none and the row is shown beside
	// others.
	limit, aim float64
	// atLeast says that the ratio should be at least the limit, not at most.
	atLeast bool
	// measure returns the ratio of one run.
	measure func(ctx context.Context) (float64, error)
}

// result is a row with what was measured.
type result struct {
	Name    string    `json:"name"`
	Ratio   float64   `json:"ratio,omitempty"`
	Limit   float64   `json:"limit,omitempty"`
	Aim     float64   `json:"aim,omitempty"`
	AtLeast bool      `json:"at_least,omitempty"`
	Within  *bool     `json:"within,omitempty"`
	Runs    []float64 `json:"runs,omitempty"`
	Problem string    `json:"problem,omitempty"`
}

// report measures the rows and prints each when it is done.
func report(ctx context.Context, w io.Writer, rows []row, runs int, only string, asJSON bool) error {
	for _, r := range rows {
		if !strings.Contains(r.name, only) {
			continue
		}
		result := r.run(ctx, runs)
		if err := ctx.Err(); err != nil {
			return err
		}
		if err := result.print(w, asJSON); err != nil {
			return err
		}
	}
	return nil
}

// run measures a row several times.
func (r *row) run(ctx context.Context, runs int) result {
	out := result{Name: r.name, Limit: r.limit, Aim: r.aim, AtLeast: r.atLeast}
	for range runs {
		ratio, err := r.measure(ctx)
		if err != nil {
			out.Problem = err.Error()
			return out
		}
		out.Runs = append(out.Runs, ratio)
	}
	out.Ratio = median(out.Runs)
	if r.limit > 0 {
		out.Within = new(out.Ratio <= r.limit)
		if r.atLeast {
			out.Within = new(out.Ratio >= r.limit)
		}
	}
	return out
}

// print writes one line.
func (r *result) print(w io.Writer, asJSON bool) error {
	if asJSON {
		return json.NewEncoder(w).Encode(r)
	}
	text := fmt.Sprintf("%-58s", r.Name)
	switch {
	case r.Problem != "":
		text += "  not measured: " + r.Problem
	case r.Within == nil:
		text += fmt.Sprintf("  %6.2f", r.Ratio)
	default:
		sign := map[bool]string{true: ">=", false: "<="}[r.AtLeast]
		state := map[bool]string{true: "within", false: "OUTSIDE"}[*r.Within]
		text += fmt.Sprintf("  %6.2f  limit %s %.3g, aim %.3g: %s", r.Ratio, sign, r.Limit, r.Aim, state)
	}
	if len(r.Runs) > 1 && r.Problem == "" {
		text += fmt.Sprintf("  (%d runs: %.2f to %.2f)", len(r.Runs), slices.Min(r.Runs), slices.Max(r.Runs))
	}
	_, err := fmt.Fprintln(w, strings.TrimRight(text, " "))
	return err
}

// median returns the middle of a list that is not empty.
func median(list []float64) float64 {
	sorted := slices.Sorted(slices.Values(list))
	n := len(sorted)
	return (sorted[(n-1)/2] + sorted[n/2]) / 2
}
