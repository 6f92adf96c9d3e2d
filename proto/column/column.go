// Package column writes and reads the columns of event and verdict blocks:
// little-endian arrays in bytes fields. A column may start at any address within
// its message, so numbers are put together byte by byte, which compiles to plain
// loads, and never viewed in place.
package column

import (
	"encoding/binary"
	"fmt"
	"math"
	"slices"
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
func Float64(xs []float64) []byte { return AppendFloat64([]byte{}, xs) }

// AppendFloat64 appends the encoded numbers.
func AppendFloat64(b []byte, xs []float64) []byte {
	b, tail := space(b, sizeFloat64*len(xs))
	for _, x := range xs {
		binary.LittleEndian.PutUint64(tail, math.Float64bits(x))
		tail = tail[sizeFloat64:]
	}
	return b
}

// PutFloat64 writes number i of a column that has room for it.
func PutFloat64(column []byte, i int, x float64) {
	binary.LittleEndian.PutUint64(column[sizeFloat64*i:], math.Float64bits(x))
}

// Int64 encodes whole numbers of 64 bits.
func Int64(xs []int64) []byte { return AppendInt64([]byte{}, xs) }

// AppendInt64 appends the encoded whole numbers of 64 bits.
func AppendInt64(b []byte, xs []int64) []byte {
	b, tail := space(b, sizeInt64*len(xs))
	for _, x := range xs {
		binary.LittleEndian.PutUint64(tail, uint64(x)) //nolint:gosec // the bits are two's complement
		tail = tail[sizeInt64:]
	}
	return b
}

// Int32 encodes whole numbers of 32 bits.
func Int32(xs []int32) []byte { return AppendInt32([]byte{}, xs) }

// AppendInt32 appends the encoded whole numbers of 32 bits.
func AppendInt32(b []byte, xs []int32) []byte {
	b, tail := space(b, sizeInt32*len(xs))
	for _, x := range xs {
		binary.LittleEndian.PutUint32(tail, uint32(x)) //nolint:gosec // the bits are two's complement
		tail = tail[sizeInt32:]
	}
	return b
}

// Int16 encodes whole numbers of 16 bits.
func Int16(xs []int16) []byte { return AppendInt16([]byte{}, xs) }

// AppendInt16 appends the encoded whole numbers of 16 bits.
func AppendInt16(b []byte, xs []int16) []byte {
	b, tail := space(b, sizeInt16*len(xs))
	for _, x := range xs {
		binary.LittleEndian.PutUint16(tail, uint16(x)) //nolint:gosec // the bits are two's complement
		tail = tail[sizeInt16:]
	}
	return b
}

// Uint8 encodes values of one byte, such as a status.
func Uint8[T ~uint8](xs []T) []byte { return AppendUint8([]byte{}, xs) }

// AppendUint8 appends the encoded values of one byte.
func AppendUint8[T ~uint8](b []byte, xs []T) []byte {
	b, tail := space(b, len(xs))
	for i, x := range xs {
		tail[i] = byte(x)
	}
	return b
}

// space lengthens b by n bytes and returns it with those.
func space(b []byte, n int) (all, tail []byte) {
	all = slices.Grow(b, n)[:len(b)+n]
	return all, all[len(b):]
}

// Float64s decodes numbers.
func Float64s(column []byte) ([]float64, error) { return AppendFloat64s([]float64{}, column) }

// AppendFloat64s appends the decoded numbers.
func AppendFloat64s(xs []float64, column []byte) ([]float64, error) {
	xs, tail, err := room(xs, column, sizeFloat64)
	for i := range tail {
		tail[i] = math.Float64frombits(binary.LittleEndian.Uint64(column))
		column = column[sizeFloat64:]
	}
	return xs, err
}

// Int64s decodes whole numbers of 64 bits.
func Int64s(column []byte) ([]int64, error) { return AppendInt64s([]int64{}, column) }

// AppendInt64s appends the decoded whole numbers of 64 bits.
func AppendInt64s(xs []int64, column []byte) ([]int64, error) {
	xs, tail, err := room(xs, column, sizeInt64)
	for i := range tail {
		tail[i] = int64(binary.LittleEndian.Uint64(column)) //nolint:gosec // the bits are two's complement
		column = column[sizeInt64:]
	}
	return xs, err
}

// Int32s decodes whole numbers of 32 bits.
func Int32s(column []byte) ([]int32, error) { return AppendInt32s([]int32{}, column) }

// AppendInt32s appends the decoded whole numbers of 32 bits.
func AppendInt32s(xs []int32, column []byte) ([]int32, error) {
	xs, tail, err := room(xs, column, sizeInt32)
	for i := range tail {
		tail[i] = int32(binary.LittleEndian.Uint32(column)) //nolint:gosec // the bits are two's complement
		column = column[sizeInt32:]
	}
	return xs, err
}

// Int16s decodes whole numbers of 16 bits.
func Int16s(column []byte) ([]int16, error) { return AppendInt16s([]int16{}, column) }

// AppendInt16s appends the decoded whole numbers of 16 bits.
func AppendInt16s(xs []int16, column []byte) ([]int16, error) {
	xs, tail, err := room(xs, column, sizeInt16)
	for i := range tail {
		tail[i] = int16(binary.LittleEndian.Uint16(column)) //nolint:gosec // the bits are two's complement
		column = column[sizeInt16:]
	}
	return xs, err
}

// Uint8s decodes values of one byte.
func Uint8s[T ~uint8](column []byte) []T { return AppendUint8s([]T{}, column) }

// AppendUint8s appends the decoded values of one byte.
func AppendUint8s[T ~uint8](xs []T, column []byte) []T {
	xs, tail, _ := room(xs, column, 1)
	for i := range tail {
		tail[i] = T(column[i])
	}
	return xs
}

// room lengthens xs by the entries of a column, none where the length does not fit,
// and returns it with that part of it.
func room[T any](xs []T, column []byte, size int) (all, tail []T, err error) {
	if len(column)%size != 0 {
		return xs, nil, &LengthError{Bytes: len(column), Size: size}
	}
	n := len(column) / size
	all = slices.Grow(xs, n)[:len(xs)+n]
	return all, all[len(xs):], nil
}

// Bit reports bit i of a bit column, least significant bit of byte 0 first; false
// beyond its end.
func Bit(column []byte, i int) bool {
	const bitsPerByte = 8
	byteIndex := i / bitsPerByte
	return i >= 0 && byteIndex < len(column) && column[byteIndex]>>(i%bitsPerByte)&1 == 1
}
