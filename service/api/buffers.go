package api

import "google.golang.org/grpc/mem"

// Buffers are those of frames. The sizes grow by a quarter and less, since a block
// is charged for what it holds and not for the buffer it came in: the pool of gRPC
// would put one of 33 KiB into a buffer of a mebibyte.
//
//nolint:gochecknoglobals // a pool of memory has no state that anyone could see
var Buffers = newBuffers()

func newBuffers() mem.BufferPool {
	const (
		smallest, largest = 4 << 10, 8 << 20
		steps             = 4
	)
	var sizes []int
	for octave := smallest; octave < largest; octave *= 2 {
		for step := range steps {
			sizes = append(sizes, octave+octave*step/steps)
		}
	}
	return mem.NewTieredBufferPool(sizes...)
}
