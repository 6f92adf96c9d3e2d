package particle

import (
	"math"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
)

// column is one column of a particle file.
type column int

// The columns of a particle file. Every file names the ones it has in its first line.
const (
	colNumber column = iota
	colZ
	colA
	colName
	colAliases
	colAntiAliases
	colMass
	colMassError
	colWidth
	colWidthError
	colMeanLife
	colMeanLifeError
	colCharge
	colSpin
	colParity
	colCParity
	colAntiNumber
	colSource
	colNotBreitWigner
	columnCount
)

// columnNames are the names of the columns in the first line of a file.
func columnNames() [columnCount]string {
	return [columnCount]string{
		"particle_number", "nucleus_z", "nucleus_a", "name", "aliases", "anti_aliases",
		"mass_gev", "mass_err_gev", "width_gev", "width_err_gev",
		"mean_life_s", "mean_life_err_s", "charge_thirds", "J", "P", "C",
		"antiparticle_number", "source", "not_breit_wigner",
	}
}

const (
	maxMass      = 1e6 // GeV, the largest mass the closed forms are tested with
	maxNameBytes = 64
	stableWord   = "stable"
)

// cell is one value of a row with its position.
type cell struct {
	text         string
	line, column int
}

// row holds the non-empty cells of one particle, merged over files.
type row struct {
	cells [columnCount]cell
	// line is where the newest part of the row starts.
	line int
}

// fault returns an Invalid fault at a cell of the row, or at the row's start if the
// cell is empty.
func (r *row) fault(c column, allowed string) *fault.Error {
	at := r.cells[c]
	e := fault.New(fault.Invalid, columnNames()[c], at.text, allowed).In("particle.New")
	if at.line == 0 {
		return e.At(r.line, 1)
	}
	return e.At(at.line, at.column)
}

// merge lays the non-empty cells of over on top of r. Width and mean life state the
// same quantity, so either one with its error replaces both.
func (r *row) merge(over row) {
	life := []column{colWidth, colWidthError, colMeanLife, colMeanLifeError}
	if over.cells[colWidth].text != "" || over.cells[colMeanLife].text != "" {
		for _, c := range life {
			r.cells[c] = cell{}
		}
	}
	for c, value := range over.cells {
		if value.text != "" {
			r.cells[c] = value
		}
	}
	r.line = over.line
}

// decimal reads a number in a range, or 0 if the cell is empty.
func (r *row) decimal(c column, maximum float64, list *fault.List) float64 {
	text := r.cells[c].text
	if text == "" {
		return 0
	}
	x, err := strconv.ParseFloat(text, 64)
	if err != nil || strings.ContainsAny(text, "xXpP_") || !(x >= 0 && x <= maximum) {
		*list = append(*list, r.fault(c, "a decimal number from 0 to "+fault.Text(maximum)))
		return 0
	}
	return x
}

// integer reads an integer; ok is false if the cell is empty or faulty.
func (r *row) integer(c column, least, most int64, list *fault.List) (value int64, ok bool) {
	text := r.cells[c].text
	if text == "" {
		return 0, false
	}
	n, err := strconv.ParseInt(text, 10, 64)
	if err != nil || n < least || n > most {
		*list = append(*list, r.fault(c, "an integer from "+strconv.FormatInt(least, 10)+
			" to "+strconv.FormatInt(most, 10)))
		return 0, false
	}
	return n, true
}

// twiceSpin reads a spin such as 0, 1 or 3/2, and -1 for an empty cell.
func (r *row) twiceSpin(list *fault.List) int {
	text := r.cells[colSpin].text
	if text == "" {
		return -1
	}
	half, isHalf := strings.CutSuffix(text, "/2")
	n, err := strconv.ParseUint(half, 10, 8)
	if err != nil || (isHalf && n%2 == 0) {
		*list = append(*list, r.fault(colSpin, "a spin such as 0, 1/2, 1 or 3/2"))
		return -1
	}
	if isHalf {
		return int(n)
	}
	return 2 * int(n)
}

// sign reads + or -, and 0 for an empty cell.
func (r *row) sign(c column, list *fault.List) int {
	switch r.cells[c].text {
	case "":
		return 0
	case "+":
		return 1
	case "-":
		return -1
	}
	*list = append(*list, r.fault(c, "+ or -"))
	return 0
}

// names reads a list of names separated by "|".
func (r *row) names(c column, list *fault.List) []string {
	if r.cells[c].text == "" {
		return nil
	}
	names := strings.Split(r.cells[c].text, "|")
	for i, name := range names {
		names[i] = strings.TrimSpace(name)
		if !validName(names[i]) {
			*list = append(*list, r.fault(c, nameRule))
			return nil
		}
	}
	return names
}

// nameRule says which names a particle may have.
const nameRule = `names separated by "|", each of 1 to 64 printable ASCII characters other than ` +
	`blanks , [ ] > | and no integer; "X" stands for what is left over`

// validName keeps the characters that structure a reaction's text out of names.
func validName(name string) bool {
	if name == "" || len(name) > maxNameBytes || name == "X" {
		return false
	}
	if _, err := strconv.ParseInt(name, 10, 64); err == nil {
		return false
	}
	for _, b := range []byte(name) {
		if b <= ' ' || b > '~' || strings.IndexByte(",[]>|", b) >= 0 {
			return false
		}
	}
	return true
}

// life fills width and mean life of p from the row: one is stated and the other is
// hbar over it, with the same relative error.
func (r *row) life(p *Particle, list *fault.List) {
	width, life := r.cells[colWidth].text, r.cells[colMeanLife].text
	p.Width = r.decimal(colWidth, maxMass, list)
	p.WidthError = r.decimal(colWidthError, maxMass, list)
	if life == stableWord {
		if p.Width != 0 || p.WidthError != 0 || r.cells[colMeanLifeError].text != "" {
			*list = append(*list, r.fault(colMeanLife, "no width and no errors beside stable"))
		}
		p.Life, p.Width, p.WidthError, p.MeanLife = LifeStable, 0, 0, math.Inf(1)
		return
	}
	p.MeanLife = r.decimal(colMeanLife, math.MaxFloat64, list)
	p.MeanLifeError = r.decimal(colMeanLifeError, math.MaxFloat64, list)
	switch {
	case width != "" && life != "":
		*list = append(*list, r.fault(colMeanLife, "a width or a mean life, not both"))
	case p.Width > 0:
		p.Life = LifeWidth
		p.MeanLife = HBar / p.Width
		p.MeanLifeError = p.MeanLife * (p.WidthError / p.Width)
	case p.MeanLife > 0:
		p.Life = LifeMeanLife
		p.Width = HBar / p.MeanLife
		p.WidthError = p.Width * (p.MeanLifeError / p.MeanLife)
	case width != "":
		*list = append(*list, r.fault(colWidth, "> 0, or 0 beside the mean life "+stableWord))
	case life != "":
		*list = append(*list, r.fault(colMeanLife, "> 0 or "+stableWord))
	case p.WidthError != 0:
		*list = append(*list, r.fault(colWidthError, "empty without a width"))
	case p.MeanLifeError != 0:
		*list = append(*list, r.fault(colMeanLifeError, "empty without a mean life"))
	}
	if tiny := math.IsInf(p.MeanLife, 1) || math.IsInf(p.Width, 1); tiny && len(*list) == 0 {
		*list = append(*list, r.fault(colWidth, "large enough for a finite mean life"))
	}
}
