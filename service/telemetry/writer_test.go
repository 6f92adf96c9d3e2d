package telemetry

import (
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/rs/zerolog"
)

func TestWriterPassesLinesInOrder(t *testing.T) {
	var b bytes.Buffer
	w := NewWriter(&b)
	line := []byte("a\n")
	for range 100 {
		if n, err := w.Write(line); n != 2 || err != nil {
			t.Fatal(n, err)
		}
		line[0] = 'a' + (line[0]-'a'+1)%26 // the writer must have its own copy
	}
	w.Close()
	want := strings.Repeat("a\nb\nc\nd\ne\nf\ng\nh\ni\nj\nk\nl\nm\nn\no\np\nq\nr\ns\nt\nu\nv\nw\nx\ny\nz\n", 4)[:200]
	if b.String() != want || w.Dropped() != 0 {
		t.Errorf("%d bytes, %d dropped", b.Len(), w.Dropped())
	}
	if n, err := w.Write(line); n != 2 || err != nil || w.Dropped() != 1 {
		t.Errorf("after the end: %d %v, %d dropped", n, err, w.Dropped())
	}
}

// TestWriterNeverBlocks writes to a pipe that nobody reads.
func TestWriterNeverBlocks(t *testing.T) {
	reader, pipe := io.Pipe()
	w := NewWriter(pipe)
	begun := time.Now()
	var all sync.WaitGroup
	for range 8 {
		all.Go(func() {
			for range 20000 {
				_, _ = w.Write([]byte("line\n"))
			}
		})
	}
	all.Wait()
	if took := time.Since(begun); took > 10*time.Second {
		t.Errorf("160,000 lines took %v", took)
	}
	if d := w.Dropped(); d < 160000-queuedLines-8 {
		t.Errorf("%d dropped", d)
	}
	begun = time.Now()
	w.Close()
	if took := time.Since(begun); took < flushLimit || took > 5*flushLimit {
		t.Errorf("Close took %v", took)
	}
	_ = reader.Close() // ends the goroutine that waits in the pipe
	<-w.done
}

func TestWriterCountsFailedWrites(t *testing.T) {
	w := NewWriter(brokenPipe{})
	_, _ = w.Write([]byte("x\n"))
	w.Drop()
	w.Close()
	if w.Dropped() != 2 {
		t.Errorf("%d dropped", w.Dropped())
	}
}

type brokenPipe struct{}

func (brokenPipe) Write([]byte) (int, error) { return 0, errors.New("broken pipe") }

func TestCallLogIsBounded(t *testing.T) {
	var b bytes.Buffer
	held := 0
	const burst, keepOneIn = 50, 100
	log := NewCallLog(zerolog.New(&b), Sampling{Burst: burst, KeepOneIn: keepOneIn}, func() { held++ })
	for range 20000 {
		log.Well().Msg("call")
	}
	well := bytes.Count(b.Bytes(), []byte("\n"))
	b.Reset()
	for range 20000 {
		log.Refused().Msg("call")
	}
	refused := bytes.Count(b.Bytes(), []byte("\n"))
	b.Reset()
	log.Failed().Msg("call")
	// A burst and one of kept lines, or two of each when the second changes in between.
	if well < burst || well > 4*burst {
		t.Errorf("%d lines of calls that went well", well)
	}
	if refused < burst || refused > 2*burst || held < 20000-refused {
		t.Errorf("%d lines of refused calls, %d held", refused, held)
	}
}

func TestNewLogger(t *testing.T) {
	var b bytes.Buffer
	log, err := NewLogger(&b, "warn")
	if err != nil {
		t.Fatal(err)
	}
	log.Info().Msg("no")
	log.Warn().Str("a", "quote \" newline \n").Msg("yes")
	var line map[string]any
	if err := json.Unmarshal(b.Bytes(), &line); err != nil || line["message"] != "yes" || line["time"] == nil {
		t.Errorf("%q: %v", b.String(), err)
	}
	if _, err := NewLogger(&b, "loud"); err == nil {
		t.Error("an unknown level is taken")
	}
}
