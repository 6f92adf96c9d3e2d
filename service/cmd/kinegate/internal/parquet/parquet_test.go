package parquet_test

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"testing"

	"example.org/kinegate/service/cmd/kinegate/internal/parquet"
)

// table writes rows of a number, a text and a list.
func table(t *testing.T, rows int) []byte {
	t.Helper()
	var out bytes.Buffer
	w, err := parquet.NewWriter(&out, []parquet.Column{
		{Name: "n", Kind: parquet.Int64}, {Name: "t", Kind: parquet.Text}, {Name: "x", Kind: parquet.Double, List: true},
	})
	if err != nil {
		t.Fatal(err)
	}
	for i := range rows {
		w.Int64(0, int64(-i))
		w.Text(1, []string{"", "two", "pi0 -> gamma gamma"}[i%3])
		for k := range i % 4 {
			w.Double(2, float64(i)+float64(k)/8)
		}
		if err := w.EndRow(); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close("test"); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// TestWriter holds the bytes of two files that pyarrow 26.0.1 read back as the same
// rows: one without rows, and one of three groups, the last not full.
func TestWriter(t *testing.T) {
	for rows, want := range map[int]string{
		0:     "5f23556c34134b4b7889b02d8788c2f67f1d8436450d807b46c4bd48c07dd28b",
		40000: "b7e4e11c8604e4aa0ee2f4f093266e32d156e7291ed6defb16c24ea7116fc93c",
	} {
		sum := sha256.Sum256(table(t, rows))
		if got := hex.EncodeToString(sum[:]); got != want {
			t.Errorf("%d rows: %s", rows, got)
		}
	}
}

func TestWriterRefusesHalfRows(t *testing.T) {
	w, err := parquet.NewWriter(&bytes.Buffer{}, []parquet.Column{{Name: "n", Kind: parquet.Int64}})
	if err != nil {
		t.Fatal(err)
	}
	if err := w.EndRow(); err == nil {
		t.Error("a row without its value is written")
	}
}

// full is a disc without room.
type full struct{}

func (full) Write([]byte) (int, error) { return 0, errors.New("no room") }

func TestWriterReportsFailure(t *testing.T) {
	if _, err := parquet.NewWriter(full{}, nil); err == nil {
		t.Error("a failed write is not reported")
	}
}
