package main

import (
	"bufio"
	"encoding/csv"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"example.org/kinegate/service/cmd/kinegate/internal/parquet"
)

// outTable writes rows of cells, in the order of the columns, to a .csv or .parquet file.
type outTable struct {
	file    *os.File
	buffer  *bufio.Writer
	csv     *csv.Writer     // nil for Parquet
	parquet *parquet.Writer // nil for CSV
	cells   []string        // of the row being written to CSV
	column  int
	rows    int
}

// newOutTable opens the file of --out by its extension.
func newOutTable(name string, columns []parquet.Column) (*outTable, error) {
	extension := strings.ToLower(filepath.Ext(name))
	if extension != ".csv" && extension != ".parquet" {
		return nil, badInput("--out %q: names end in .csv or .parquet", name)
	}
	file, err := os.Create(name)
	if err != nil {
		return nil, badInput("--out: %w", err)
	}
	t := &outTable{file: file, buffer: bufio.NewWriter(file)}
	if extension == ".parquet" {
		t.parquet, err = parquet.NewWriter(t.buffer, columns)
		return t, err
	}
	t.csv = csv.NewWriter(t.buffer)
	for _, c := range columns {
		t.cells = append(t.cells, c.Name)
	}
	return t, t.flush()
}

// flush writes the cells as a line.
func (t *outTable) flush() error {
	err := t.csv.Write(t.cells)
	t.cells = t.cells[:0]
	return err
}

// whole adds a whole number to the row.
func (t *outTable) whole(x int64) {
	if t.parquet != nil {
		t.parquet.Int64(t.column, x)
	} else {
		t.cells = append(t.cells, strconv.FormatInt(x, 10))
	}
	t.column++
}

// number adds a number to the row; one that is NaN leaves a cell empty.
func (t *outTable) number(x float64) {
	switch {
	case t.parquet != nil:
		t.parquet.Double(t.column, x)
	case math.IsNaN(x):
		t.cells = append(t.cells, "")
	default:
		t.cells = append(t.cells, strconv.FormatFloat(x, 'g', -1, 64))
	}
	t.column++
}

// word adds a text to the row.
func (t *outTable) word(s string) {
	if t.parquet != nil {
		t.parquet.Text(t.column, s)
	} else {
		t.cells = append(t.cells, s)
	}
	t.column++
}

// end closes the row.
func (t *outTable) end() error {
	t.column = 0
	t.rows++
	if t.parquet != nil {
		return t.parquet.EndRow()
	}
	return t.flush()
}

// close writes what is left.
func (t *outTable) close() error {
	var err error
	if t.parquet != nil {
		err = t.parquet.Close("kinegate " + version())
	} else {
		t.csv.Flush()
		err = t.csv.Error()
	}
	return errors.Join(err, t.buffer.Flush(), t.file.Close())
}
