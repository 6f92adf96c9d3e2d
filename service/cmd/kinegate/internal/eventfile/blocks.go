package eventfile

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"math"

	"google.golang.org/protobuf/encoding/protodelim"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Extension is the ending of files of event blocks.
const Extension = ".kgb"

// maxBlockBytes is the size that a server takes of one block.
const maxBlockBytes = 2 << 20

// BlockReader reads files of event blocks, each behind its length as a varint. A block
// keeps what lines of text have no room for: covariances, vertices, clusters.
type BlockReader struct {
	from  *bufio.Reader
	count int
}

// NewBlockReader reads blocks.
func NewBlockReader(r io.Reader) *BlockReader { return &BlockReader{from: bufio.NewReader(r)} }

// Next returns the next block and its events, io.EOF after the last.
func (r *BlockReader) Next() (*kinegatev1.EventBlock, []Event, error) {
	block := &kinegatev1.EventBlock{}
	err := protodelim.UnmarshalOptions{MaxSize: maxBlockBytes}.UnmarshalFrom(r.from, block)
	if errors.Is(err, io.EOF) {
		return nil, nil, io.EOF
	}
	r.count++
	if err != nil {
		return nil, nil, fmt.Errorf("block %d: this is no event block, or not all of one: %w", r.count, err)
	}
	_, measured, err := kinegate.ReadEvents(block)
	if err != nil {
		return nil, nil, fmt.Errorf("block %d: %w", r.count, err)
	}
	events := make([]Event, len(measured))
	for i, m := range measured {
		if math.IsNaN(m.Weight) || math.IsInf(m.Weight, 0) {
			return nil, nil, fmt.Errorf("block %d, event %d: the weight is not finite", r.count, m.ID)
		}
		events[i] = Event{
			Run: block.GetRunNumber(), ID: m.ID, Objects: m.Objects, Beam: m.Beam,
			Weight: m.Weight, Weighted: block.GetWeight() != nil,
		}
	}
	return block, events, nil
}
