package generation

import (
	_ "embed" // for the table
	"encoding/csv"
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
)

//go:embed branching.csv
var branchingTable string

// BranchingFraction is one row of the table of branching fractions.
type BranchingFraction struct {
	// Parent is the Monte Carlo particle number of the decaying particle.
	Parent int64
	// Daughters are the daughters' numbers in rising order.
	Daughters []int64
	Fraction  float64
	Source    string
}

// BranchingFractions returns the table: a small choice of decays, each with its
// source. A particle's table holds for the antiparticle with all numbers
// conjugated. What the table lacks is not known and counts as 1, with a remark of
// ProductsOf; any entry can be overridden.
func BranchingFractions() ([]BranchingFraction, error) {
	records, err := csv.NewReader(strings.NewReader(branchingTable)).ReadAll()
	if err != nil {
		return nil, &fault.Error{Op: "generation.BranchingFractions", Kind: fault.Invalid, Field: "branching.csv", Err: err}
	}
	table := make([]BranchingFraction, 0, len(records))
	for i, record := range records[1:] {
		row, err := branchingRow(record)
		if err != nil {
			return nil, &fault.Error{
				Op: "generation.BranchingFractions", Kind: fault.Invalid, Field: "branching.csv", Line: i + 2, Column: 1, Err: err,
			}
		}
		table = append(table, row)
	}
	return table, nil
}

func branchingRow(record []string) (BranchingFraction, error) {
	parent, err := strconv.ParseInt(record[0], 10, 64)
	if err != nil {
		return BranchingFraction{}, err //nolint:wrapcheck // the caller adds the place
	}
	row := BranchingFraction{Parent: parent, Source: record[3]}
	for text := range strings.FieldsSeq(record[1]) {
		number, err := strconv.ParseInt(text, 10, 64)
		if err != nil {
			return BranchingFraction{}, err //nolint:wrapcheck // the caller adds the place
		}
		row.Daughters = append(row.Daughters, number)
	}
	slices.Sort(row.Daughters)
	row.Fraction, err = strconv.ParseFloat(record[2], 64)
	return row, err //nolint:wrapcheck // the caller adds the place
}

// lookUp returns the fraction of a decay, and 0 for one that the table lacks.
func lookUp(table []BranchingFraction, parent int64, daughters []int64) float64 {
	sorted := slices.Clone(daughters)
	slices.Sort(sorted)
	for _, row := range table {
		if row.Parent == parent && slices.Equal(row.Daughters, sorted) {
			return row.Fraction
		}
	}
	return 0
}
