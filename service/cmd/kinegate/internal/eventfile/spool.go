package eventfile

import (
	"bufio"
	"encoding/gob"
	"errors"
	"io"
	"os"

	kinegate "example.org/kinegate/clients/go"
)

// Spool keeps events in a temporary file until all are known: the number of columns
// depends on the largest of them. It takes no more memory for more events.
type Spool struct {
	file    *os.File
	buffer  *bufio.Writer
	encoder *gob.Encoder
	shape   shape
	count   int
}

// NewSpool opens a temporary file, which Close removes.
func NewSpool() (*Spool, error) {
	file, err := os.CreateTemp("", "kinegate-*.events")
	if err != nil {
		return nil, err
	}
	buffer := bufio.NewWriter(file)
	return &Spool{file: file, buffer: buffer, encoder: gob.NewEncoder(buffer)}, nil
}

// Add keeps an event.
func (s *Spool) Add(e *Event) error {
	if s.count == 0 {
		s.shape.names(e)
	}
	s.count++
	s.shape.widen(e)
	return s.encoder.Encode(e)
}

// Write writes the events as the function Write does.
func (s *Spool) Write(w io.Writer, comment string, coordinates kinegate.Coordinates) error {
	if err := s.buffer.Flush(); err != nil {
		return err
	}
	if _, err := s.file.Seek(0, io.SeekStart); err != nil {
		return err
	}
	out, err := newLines(w, comment, coordinates, s.shape)
	if err != nil {
		return err
	}
	decoder := gob.NewDecoder(bufio.NewReader(s.file))
	for range s.count {
		var e Event
		if err := decoder.Decode(&e); err != nil {
			return err
		}
		if err := out.add(&e); err != nil {
			return err
		}
	}
	return out.finish()
}

// Close removes the file.
func (s *Spool) Close() error { return errors.Join(s.file.Close(), os.Remove(s.file.Name())) }
