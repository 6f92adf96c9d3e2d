package particle

import (
	"bytes"
	"encoding/csv"
	"errors"
	"io"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
)

// MaxFileBytes bounds the size of one particle file.
const MaxFileBytes = 1 << 20

// parse reads a particle file: comma-separated values (RFC 4180) whose first line
// names the columns, in any order. Empty cells say nothing. Lines that start with #
// are comments. All faults are reported, each with its line and column.
func parse(data []byte) ([]row, fault.List) {
	if len(data) > MaxFileBytes {
		return nil, fault.List{fault.New(fault.Invalid, "file", strconv.Itoa(len(data))+" bytes",
			"at most "+strconv.Itoa(MaxFileBytes)+" bytes").In("particle.New")}
	}
	reader := csv.NewReader(bytes.NewReader(bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))))
	reader.FieldsPerRecord = -1
	reader.Comment = '#'
	reader.TrimLeadingSpace = true
	var (
		rows   []row
		list   fault.List
		header []column
	)
	for {
		record, err := reader.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			list = append(list, csvFault(err))
			if header == nil {
				return nil, list
			}
			continue
		}
		if header == nil {
			header, list = readHeader(reader, record)
			if len(list) > 0 {
				return nil, list
			}
			continue
		}
		r, e := readRow(reader, header, record)
		if e != nil {
			list = append(list, e)
			continue
		}
		rows = append(rows, r)
	}
	if header == nil {
		list = append(list, fault.New(fault.Invalid, "file", "", "a first line with the names of the columns").
			In("particle.New").At(1, 1).Because("no columns"))
	}
	return rows, list
}

// csvFault turns an error of the CSV reader into a fault.
func csvFault(err error) *fault.Error {
	e := fault.New(fault.Invalid, "file", "", "comma-separated values as in RFC 4180").In("particle.New")
	if parseError, ok := errors.AsType[*csv.ParseError](err); ok {
		return e.At(parseError.Line, parseError.Column).Because(parseError.Err.Error())
	}
	return e.Because(err.Error())
}

// readHeader maps the first line's names to columns.
func readHeader(reader *csv.Reader, record []string) ([]column, fault.List) {
	names := columnNames()
	header := make([]column, len(record))
	var seen [columnCount]bool
	var list fault.List
	for i, text := range record {
		line, col := reader.FieldPos(i)
		header[i] = columnCount
		for c, name := range names {
			if strings.TrimSpace(text) == name {
				header[i] = column(c)
			}
		}
		switch {
		case header[i] == columnCount:
			list = append(list, fault.New(fault.Invalid, "column", text, strings.Join(names[:], ", ")).
				In("particle.New").At(line, col).Because("unknown column"))
		case seen[header[i]]:
			list = append(list, fault.New(fault.Invalid, "column", text, "").
				In("particle.New").At(line, col).Because("column named twice"))
		default:
			seen[header[i]] = true
		}
	}
	return header, list
}

// readRow takes the cells of one line.
func readRow(reader *csv.Reader, header []column, record []string) (row, *fault.Error) {
	var r row
	line, _ := reader.FieldPos(0)
	r.line = line
	if len(record) != len(header) {
		return r, fault.New(fault.Invalid, "row", strconv.Itoa(len(record))+" values",
			strconv.Itoa(len(header))+" values, as many as columns").In("particle.New").At(line, 1)
	}
	for i, text := range record {
		l, c := reader.FieldPos(i)
		r.cells[header[i]] = cell{text: strings.TrimSpace(text), line: l, column: c}
	}
	return r, nil
}

// number returns the particle number of a row: stated, or from Z and A of a nucleus.
func (r *row) number(list *fault.List) (int64, bool) {
	before := len(*list)
	number, stated := r.integer(colNumber, 1, lastNucleus, list)
	z, hasZ := r.integer(colZ, 1, 999, list)
	a, hasA := r.integer(colA, 2, 999, list)
	switch {
	case len(*list) > before:
		return 0, false
	case hasZ != hasA:
		*list = append(*list, r.fault(colZ, "nucleus_z and nucleus_a together"))
	case hasZ && z > a:
		*list = append(*list, r.fault(colZ, "nucleus_z <= nucleus_a"))
	case hasZ && stated && !isNucleus(number, int(z), int(a)):
		*list = append(*list, r.fault(colNumber, "empty, or the number of a nucleus with this nucleus_z and nucleus_a"))
	case stated:
		return number, true
	case hasZ:
		return nucleusNumber(int(z), int(a)), true
	default:
		*list = append(*list, r.fault(colNumber, "a particle number > 0, or nucleus_z and nucleus_a"))
	}
	return 0, false
}
