package main

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"sync/atomic"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
)

// eventSource reads event files into blocks: lines of text are put together into blocks,
// files of blocks are read as they are.
type eventSource struct {
	files    []string
	perBlock int
	// read counts the bytes read so far.
	read atomic.Int64

	file   *os.File
	reader *eventfile.Reader
	blocks *eventfile.BlockReader // in place of reader
	held   *sourced               // read, but of the next block
}

// sourced is an event with the coordinate set of its file.
type sourced struct {
	eventfile.Event

	coordinates kinegate.Coordinates
}

// size is the size of all files, 0 where one is not known.
func (s *eventSource) size() int64 {
	var total int64
	for _, name := range s.files {
		info, err := os.Stat(name)
		if err != nil {
			return 0
		}
		total += info.Size()
	}
	return total
}

// next returns the next block, io.EOF after the last. All events of a block share a
// run and a coordinate set.
func (s *eventSource) next() (*batch[eventfile.Event], error) {
	for s.held == nil && s.reader == nil {
		if s.blocks == nil {
			if err := s.openNext(); err != nil {
				return nil, err
			}
			continue
		}
		if b, err := s.nextBlock(); !errors.Is(err, io.EOF) {
			return b, err
		}
	}
	first, err := s.event()
	if err != nil {
		return nil, err
	}
	builder := kinegate.NewBuilder(first.coordinates)
	builder.RunNumber = first.Run
	b := &batch[eventfile.Event]{}
	for e := first; ; {
		builder.Add(e.ID, e.Objects, e.Beam)
		b.events = append(b.events, e.Event)
		if len(b.events) == s.perBlock {
			break
		}
		if e, err = s.event(); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			return nil, err
		}
		if e.Run != first.Run || e.coordinates != first.coordinates {
			s.held = &e
			break
		}
	}
	b.block = builder.Take()
	return b, nil
}

// nextBlock returns the next block of a file of blocks, io.EOF after its last.
func (s *eventSource) nextBlock() (*batch[eventfile.Event], error) {
	block, events, err := s.blocks.Next()
	if err != nil {
		name := s.file.Name()
		_ = s.file.Close() // only read
		s.blocks = nil
		if errors.Is(err, io.EOF) {
			return nil, io.EOF
		}
		return nil, badInput("%s: %w", name, err)
	}
	if len(events) > s.perBlock {
		return nil, badInput("%s: a block of %d events; --block-events allows %d", s.file.Name(), len(events), s.perBlock)
	}
	return &batch[eventfile.Event]{block: block, events: events}, nil
}

// event returns the next event of the files of lines, io.EOF at the first file of
// blocks.
func (s *eventSource) event() (sourced, error) {
	if s.held != nil {
		e := *s.held
		s.held = nil
		return e, nil
	}
	for {
		if s.reader == nil && s.blocks == nil {
			if err := s.openNext(); err != nil {
				return sourced{}, err
			}
		}
		if s.blocks != nil {
			return sourced{}, io.EOF
		}
		e, err := s.reader.Next()
		if err == nil {
			return sourced{e, s.reader.Coordinates}, nil
		}
		name := s.file.Name()
		_ = s.file.Close() // only read
		s.reader = nil
		if !errors.Is(err, io.EOF) {
			return sourced{}, badInput("%s: %w", name, err)
		}
	}
}

// openNext opens the next file, or returns io.EOF.
func (s *eventSource) openNext() error {
	if len(s.files) == 0 {
		return io.EOF
	}
	name := s.files[0]
	s.files = s.files[1:]
	file, err := os.Open(name)
	if err != nil {
		return badInput("%w", err)
	}
	s.file = file
	if isBlockFile(name) {
		s.blocks = eventfile.NewBlockReader(counted{file, &s.read})
		return nil
	}
	if s.reader, err = eventfile.NewReader(counted{file, &s.read}); err != nil {
		return badInput("%s: %w", name, err)
	}
	return nil
}

// isBlockFile reports whether a file is one of blocks by its name.
func isBlockFile(name string) bool { return strings.EqualFold(filepath.Ext(name), eventfile.Extension) }

// counted counts the bytes read.
type counted struct {
	io.Reader

	bytes *atomic.Int64
}

func (c counted) Read(p []byte) (int, error) {
	n, err := c.Reader.Read(p)
	c.bytes.Add(int64(n))
	return n, err
}
