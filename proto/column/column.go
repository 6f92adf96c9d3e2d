// Package column writes and reads the columns of event and verdict blocks:
// little-endian arrays in bytes fields. A column may start at any address within
// its message, so numbers are put together byte by byte, which compiles to plain
// loads, and never viewed in place.
package column

import (
	"encoding/binary"
	"fmt"
	"math"
)

// Sizes of one entry in bytes.
const (
	sizeInt16   = 2
	sizeInt32   = 4
	sizeInt64   = 8
	sizeFloat64 = 8
)

// LengthError reports a column that does not hold whole entries.
type LengthError struct {
	// Bytes is the length found.
	Bytes int
	// Size is the size of one entry.
	Size int
}

// Error names both numbers.
func (e *LengthError) Error() string {
	return fmt.Sprintf("a column of %d bytes does not hold whole entries of %d bytes", e.Bytes, e.Size)
}

// Float64 encodes numbers.
func Float64(xs []float64) []byte {
	b := make([]byte, 0, sizeFloat64*len(xs))
	for _, x := range xs {
		b = binary.LittleEndian.AppendUint64(b, math.Float64bits(x))
	}
	return b
}

// Int64 encodes whole numbers of 64 bits.
func Int64(xs []int64) []byte {
	b := make([]byte, 0, sizeInt64*len(xs))
	for _, x := range xs {
		b = binary.LittleEndian.AppendUint64(b, uint64(x)) //nolint:gosec // the bits are two's complement
	}
	return b
}

// Int32 encodes whole numbers of 32 bits.
func Int32(xs []int32) []byte {
	b := make([]byte, 0, sizeInt32*len(xs))
	for _, x := range xs {
		b = binary.LittleEndian.AppendUint32(b, uint32(x)) //nolint:gosec // the bits are two's complement
	}
	return b
}

// Int16 encodes whole numbers of 16 bits.
func Int16(xs []int16) []byte {
	b := make([]byte, 0, sizeInt16*len(xs))
	for _, x := range xs {
		b = binary.LittleEndian.AppendUint16(b, uint16(x)) //nolint:gosec // the bits are two's complement
	}
	return b
}

// Uint8 encodes values of one byte, such as a status.
func Uint8[T ~uint8](xs []T) []byte {
	b := make([]byte, len(xs))
	for i, x := range xs {
		b[i] = byte(x)
	}
	return b
}

// Float64s decodes numbers.
func Float64s(column []byte) ([]float64, error) {
	n, err := entries(column, sizeFloat64)
	xs := make([]float64, n)
	for i := range xs {
		xs[i] = math.Float64frombits(binary.LittleEndian.Uint64(column[sizeFloat64*i:]))
	}
	return xs, err
}

// Int64s decodes whole numbers of 64 bits.
func Int64s(column []byte) ([]int64, error) {
	n, err := entries(column, sizeInt64)
	xs := make([]int64, n)
	for i := range xs {
		xs[i] = int64(binary.LittleEndian.Uint64(column[sizeInt64*i:])) //nolint:gosec // the bits are two's complement
	}
	return xs, err
}

// Int32s decodes whole numbers of 32 bits.
func Int32s(column []byte) ([]int32, error) {
	n, err := entries(column, sizeInt32)
	xs := make([]int32, n)
	for i := range xs {
		xs[i] = int32(binary.LittleEndian.Uint32(column[sizeInt32*i:])) //nolint:gosec // the bits are two's complement
	}
	return xs, err
}

// Int16s decodes whole numbers of 16 bits.
func Int16s(column []byte) ([]int16, error) {
	n, err := entries(column, sizeInt16)
	xs := make([]int16, n)
	for i := range xs {
		xs[i] = int16(binary.LittleEndian.Uint16(column[sizeInt16*i:])) //nolint:gosec // the bits are two's complement
	}
	return xs, err
}

// Uint8s decodes values of one byte.
func Uint8s[T ~uint8](column []byte) []T {
	xs := make([]T, len(column))
	for i, x := range column {
		xs[i] = T(x)
	}
	return xs
}

// Bit reports bit i of a bit column, least significant bit of byte 0 first; false
// beyond its end.
func Bit(column []byte, i int) bool {
	const bitsPerByte = 8
	byteIndex := i / bitsPerByte
	return i >= 0 && byteIndex < len(column) && column[byteIndex]>>(i%bitsPerByte)&1 == 1
}

// entries counts the entries of a column; none where the length does not fit.
func entries(column []byte, size int) (int, error) {
	if len(column)%size != 0 {
		return 0, &LengthError{Bytes: len(column), Size: size}
	}
	return len(column) / size, nil
}
