// Package parquet writes tables in the Apache Parquet format (the specification of
// apache/parquet-format, version 1 data pages): plain values without compression or
// dictionaries, columns of one value or of a list of values a row. That is all that
// simulated events need, at a hundredth of the size of a general library.
package parquet

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
)

// Kind is the type of a column's values.
type Kind int

// The kinds, by their numbers in the format.
const (
	Int64  Kind = 2
	Double Kind = 5
	Text   Kind = 6
)

// Column describes a column.
type Column struct {
	Name string
	Kind Kind
	// List columns have any number of values a row, others exactly one.
	List bool
}

// Numbers of the format.
const (
	required, repeated         = 0, 2
	encodingPlain, encodingRLE = 0, 3
	convertedUTF8              = 0
	magic                      = "PAR1"
	rowsPerGroup               = 16384
)

// Writer writes rows. The zero value is not usable.
type Writer struct {
	w       io.Writer
	offset  int64
	columns []Column
	open    []chunk
	rows    int64 // of the open group
	total   int64
	groups  []group
}

// chunk is the values of a column in the open group.
type chunk struct {
	values []byte
	// first and there are a bit a value of a list column: the first of its row, and
	// not the mark of an empty row.
	first, there []bool
	count        int // values of the open row
}

// group is a finished group of rows.
type group struct {
	rows, bytes int64
	chunks      []written
}

// written is a column of a finished group.
type written struct{ offset, bytes, values int64 }

// NewWriter starts a file.
func NewWriter(w io.Writer, columns []Column) (*Writer, error) {
	p := &Writer{w: w, columns: columns, open: make([]chunk, len(columns))}
	return p, p.write([]byte(magic))
}

func (p *Writer) write(data []byte) error {
	n, err := p.w.Write(data)
	p.offset += int64(n)
	if err != nil {
		return fmt.Errorf("parquet: %w", err)
	}
	return nil
}

// value notes one more value in the open row.
func (p *Writer) value(column int) *chunk {
	c := &p.open[column]
	c.first, c.there = append(c.first, c.count == 0), append(c.there, true)
	c.count++
	return c
}

// Int64 adds a value to a column of the open row.
func (p *Writer) Int64(column int, x int64) {
	c := p.value(column)
	c.values = binary.LittleEndian.AppendUint64(c.values, uint64(x)) //nolint:gosec // the bits are two's complement
}

// Double adds a value to a column of the open row.
func (p *Writer) Double(column int, x float64) {
	c := p.value(column)
	c.values = binary.LittleEndian.AppendUint64(c.values, math.Float64bits(x))
}

// Text adds a value to a column of the open row.
func (p *Writer) Text(column int, x string) {
	c := p.value(column)
	c.values = binary.LittleEndian.AppendUint32(c.values, uint32(len(x))) //nolint:gosec // names are short
	c.values = append(c.values, x...)
}

var errRow = errors.New("parquet: a row must have one value in each column that is no list")

// EndRow closes the row.
func (p *Writer) EndRow() error {
	for i := range p.open {
		c := &p.open[i]
		switch {
		case p.columns[i].List && c.count == 0:
			c.first, c.there = append(c.first, true), append(c.there, false)
		case !p.columns[i].List && c.count != 1:
			return errRow
		}
		c.count = 0
	}
	p.rows++
	if p.rows == rowsPerGroup {
		return p.flush()
	}
	return nil
}

// flush writes the open group: one page a column.
func (p *Writer) flush() error {
	if p.rows == 0 {
		return nil
	}
	g := group{rows: p.rows}
	for i := range p.open {
		c := &p.open[i]
		var page []byte
		if p.columns[i].List {
			// A level of repetition is 0 for the first value of a row, one of definition 0 for
			// an empty row.
			page = appendLevels(page, c.first, 0)
			page = appendLevels(page, c.there, 1)
		}
		page = append(page, c.values...)
		if len(page) > math.MaxInt32 {
			return fmt.Errorf("parquet: %d bytes of column %s are too many for one page", len(page), p.columns[i].Name)
		}
		start := p.offset
		if err := p.write(pageHeader(len(page), len(c.first))); err != nil {
			return err
		}
		if err := p.write(page); err != nil {
			return err
		}
		g.chunks = append(g.chunks, written{offset: start, bytes: p.offset - start, values: int64(len(c.first))})
		g.bytes += p.offset - start
		*c = chunk{values: c.values[:0], first: c.first[:0], there: c.there[:0]}
	}
	p.groups = append(p.groups, g)
	p.total += p.rows
	p.rows = 0
	return nil
}

// appendLevels appends levels of one bit in the hybrid form, as one bit-packed run behind
// its length. A bit that is set stands for the level set, the others for the other one.
func appendLevels(page []byte, bits []bool, set byte) []byte {
	groups := (len(bits) + 7) / 8
	body := binary.AppendUvarint(nil, uint64(groups)<<1|1)
	start := len(body)
	body = append(body, make([]byte, groups)...)
	for i, b := range bits {
		level := 1 - set
		if b {
			level = set
		}
		body[start+i/8] |= level << (i % 8)
	}
	page = binary.LittleEndian.AppendUint32(page, uint32(len(body))) //nolint:gosec // far smaller than a page
	return append(page, body...)
}

func pageHeader(size, values int) []byte {
	var c compact
	c.begin()
	c.i32(1, 0) // data page
	c.i32(2, size)
	c.i32(3, size)
	c.field(5, typeStruct)
	c.begin()
	c.i32(1, values)
	c.i32(2, encodingPlain)
	c.i32(3, encodingRLE)
	c.i32(4, encodingRLE)
	c.end()
	c.end()
	return c.data
}

// Close writes what is left and the description of the file. It does not close the
// underlying writer.
func (p *Writer) Close(createdBy string) error {
	if err := p.flush(); err != nil {
		return err
	}
	footer := p.footer(createdBy)
	footer = binary.LittleEndian.AppendUint32(footer, uint32(len(footer))) //nolint:gosec // small
	return p.write(append(footer, magic...))
}

func (p *Writer) footer(createdBy string) []byte {
	var c compact
	c.begin()
	c.i32(1, 1)
	c.list(2, typeStruct, len(p.columns)+1)
	c.begin()
	c.text(4, "events")
	c.i32(5, len(p.columns))
	c.end()
	for _, column := range p.columns {
		c.begin()
		c.i32(1, int(column.Kind))
		if column.List {
			c.i32(3, repeated)
		} else {
			c.i32(3, required)
		}
		c.text(4, column.Name)
		if column.Kind == Text {
			c.i32(6, convertedUTF8)
		}
		c.end()
	}
	c.i64(3, p.total)
	c.list(4, typeStruct, len(p.groups))
	for _, g := range p.groups {
		c.begin()
		c.list(1, typeStruct, len(p.columns))
		for i, w := range g.chunks {
			c.begin()
			c.i64(2, w.offset)
			c.field(3, typeStruct)
			p.chunk(&c, i, w)
			c.end()
		}
		c.i64(2, g.bytes)
		c.i64(3, g.rows)
		c.end()
	}
	c.text(6, createdBy)
	c.end()
	return c.data
}

func (p *Writer) chunk(c *compact, i int, w written) {
	c.begin()
	c.i32(1, int(p.columns[i].Kind))
	c.list(2, typeI32, 2)
	c.zigzag(encodingPlain)
	c.zigzag(encodingRLE)
	c.list(3, typeBinary, 1)
	c.bare(p.columns[i].Name)
	c.i32(4, 0) // uncompressed
	c.i64(5, w.values)
	c.i64(6, w.bytes)
	c.i64(7, w.bytes)
	c.i64(9, w.offset)
	c.end()
}
