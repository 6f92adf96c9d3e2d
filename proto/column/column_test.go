package column_test

import (
	"errors"
	"math"
	"slices"
	"testing"

	"example.org/kinegate/proto/column"
)

func TestColumnsReadBackWhatWasWritten(t *testing.T) {
	t.Parallel()
	floats := []float64{0, math.Copysign(0, -1), 1.5, -math.MaxFloat64, math.Inf(1), 5e-324}
	if got, err := column.Float64s(column.Float64(floats)); err != nil || !slices.EqualFunc(got, floats, sameBits) {
		t.Errorf("float64: %v, %v", got, err)
	}
	longs := []int64{0, -1, math.MinInt64, math.MaxInt64}
	if got, err := column.Int64s(column.Int64(longs)); err != nil || !slices.Equal(got, longs) {
		t.Errorf("int64: %v, %v", got, err)
	}
	ints := []int32{0, -1, math.MinInt32, math.MaxInt32}
	if got, err := column.Int32s(column.Int32(ints)); err != nil || !slices.Equal(got, ints) {
		t.Errorf("int32: %v, %v", got, err)
	}
	shorts := []int16{0, -1, math.MinInt16, math.MaxInt16}
	if got, err := column.Int16s(column.Int16(shorts)); err != nil || !slices.Equal(got, shorts) {
		t.Errorf("int16: %v, %v", got, err)
	}
	if got := column.Uint8s[uint8](column.Uint8([]uint8{0, 255})); !slices.Equal(got, []uint8{0, 255}) {
		t.Errorf("uint8: %v", got)
	}
}

// TestByteOrder pins the wire form with bytes written by hand from IEEE 754.
func TestByteOrder(t *testing.T) {
	t.Parallel()
	if got := column.Float64([]float64{-2}); !slices.Equal(got, []byte{0, 0, 0, 0, 0, 0, 0, 0xc0}) {
		t.Errorf("-2 is % x", got)
	}
	if got := column.Int32([]int32{258}); !slices.Equal(got, []byte{2, 1, 0, 0}) {
		t.Errorf("258 is % x", got)
	}
}

func TestBrokenLengthIsAnError(t *testing.T) {
	t.Parallel()
	_, err := column.Float64s(make([]byte, 9))
	var length *column.LengthError
	if !errors.As(err, &length) || length.Bytes != 9 || length.Size != 8 {
		t.Errorf("got %v", err)
	}
}

func TestBit(t *testing.T) {
	t.Parallel()
	bits := []byte{0b10000001, 0b1}
	for i, want := range map[int]bool{0: true, 1: false, 7: true, 8: true, 9: false, 16: false, -1: false} {
		if column.Bit(bits, i) != want {
			t.Errorf("bit %d is not %v", i, want)
		}
	}
}

func sameBits(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) }
