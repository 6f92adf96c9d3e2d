// Package text lays out what the commands print: tables, histograms and bars.
package text

import (
	"fmt"
	"io"
	"strings"
	"unicode/utf8"
)

// Table is a table of text with a heading. Columns are as wide as their widest
// cell; numbers belong into right-aligned columns.
type Table struct {
	heading []string
	right   []bool
	rows    [][]string
	indent  string
}

// NewTable returns a table with a heading. A heading that starts with ">" makes its
// column right-aligned; the mark itself is not printed.
func NewTable(heading ...string) *Table {
	t := &Table{}
	for _, h := range heading {
		name, right := strings.CutPrefix(h, ">")
		t.heading = append(t.heading, name)
		t.right = append(t.right, right)
	}
	return t
}

// Under lets the table stand under text that is indented by some spaces more than a table
// is by itself, and returns it.
func (t *Table) Under(spaces int) *Table {
	t.indent = strings.Repeat(" ", spaces)
	return t
}

// Row adds a row; cells beyond the heading are dropped and missing ones are empty.
func (t *Table) Row(cells ...string) {
	row := make([]string, len(t.heading))
	copy(row, cells)
	t.rows = append(t.rows, row)
}

// Rows is the number of rows.
func (t *Table) Rows() int { return len(t.rows) }

// Write prints the table, every line indented by two spaces, or more if Under says so.
func (t *Table) Write(w io.Writer) error {
	widths := make([]int, len(t.heading))
	for _, row := range append([][]string{t.heading}, t.rows...) {
		for i, cell := range row {
			widths[i] = max(widths[i], utf8.RuneCountInString(cell))
		}
	}
	rule := make([]string, len(widths))
	for i, width := range widths {
		rule[i] = strings.Repeat("-", width)
	}
	lines := [][]string{t.heading, rule}
	if strings.Join(t.heading, "") == "" {
		lines = nil
	}
	for _, row := range append(lines, t.rows...) {
		if _, err := fmt.Fprintln(w, t.line(row, widths)); err != nil {
			return err
		}
	}
	return nil
}

func (t *Table) line(row []string, widths []int) string {
	var b strings.Builder
	b.WriteString(t.indent)
	for i, cell := range row {
		b.WriteString("  ")
		pad := strings.Repeat(" ", widths[i]-utf8.RuneCountInString(cell))
		if t.right[i] {
			b.WriteString(pad + cell)
		} else {
			b.WriteString(cell + pad)
		}
	}
	return strings.TrimRight(b.String(), " ")
}
