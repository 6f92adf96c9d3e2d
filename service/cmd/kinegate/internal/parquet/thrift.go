package parquet

import "encoding/binary"

// compact writes the compact form of Thrift, in which the format's headers are: fields in
// rising order, each with the distance from the one before and its type.
type compact struct {
	data []byte
	last []int // number of the last field, of each open structure
}

// Types of the compact form.
const (
	typeI32    = 5
	typeI64    = 6
	typeBinary = 8
	typeList   = 9
	typeStruct = 12
)

func (c *compact) varint(n uint64) { c.data = binary.AppendUvarint(c.data, n) }

// zigzag writes a signed number.
func (c *compact) zigzag(n int64) { c.varint(uint64(n<<1) ^ uint64(n>>63)) } //nolint:gosec // the bits are meant

func (c *compact) begin() { c.last = append(c.last, 0) }

func (c *compact) end() {
	c.last = c.last[:len(c.last)-1]
	c.data = append(c.data, 0)
}

// field writes the head of a field. The format's own numbers are at most 15 apart.
func (c *compact) field(number, kind int) {
	top := len(c.last) - 1
	c.data = append(c.data, byte((number-c.last[top])<<4|kind)) //nolint:gosec // two numbers of four bits
	c.last[top] = number
}

func (c *compact) i32(number int, value int) {
	c.field(number, typeI32)
	c.zigzag(int64(value))
}

func (c *compact) i64(number int, value int64) {
	c.field(number, typeI64)
	c.zigzag(value)
}

func (c *compact) text(number int, value string) {
	c.field(number, typeBinary)
	c.bare(value)
}

// bare writes a text without a head, as within lists.
func (c *compact) bare(value string) {
	c.varint(uint64(len(value)))
	c.data = append(c.data, value...)
}

// list writes the head of a list of n elements.
func (c *compact) list(number, kind, n int) {
	c.field(number, typeList)
	const short = 15
	if n < short {
		c.data = append(c.data, byte(n<<4|kind)) //nolint:gosec // two numbers of four bits
		return
	}
	c.data = append(c.data, byte(short<<4|kind)) //nolint:gosec // two numbers of four bits
	c.varint(uint64(n))
}
