package server

import (
	"fmt"
	"io"
	"os"
)

// maxFile bounds every file that settings name.
const maxFile = 4 * mebi

// readBounded reads a file without ever reading more than the bound of it.
func readBounded(path string) ([]byte, error) {
	f, err := os.Open(path) //nolint:gosec // the operator names the file
	if err != nil {
		return nil, fmt.Errorf("opening: %w", err)
	}
	defer func() { _ = f.Close() }() // it was only read
	data, err := io.ReadAll(io.LimitReader(f, int64(maxFile)+1))
	if err != nil {
		return nil, fmt.Errorf("reading: %w", err)
	}
	if Bytes(len(data)) > maxFile {
		return nil, fmt.Errorf("it is larger than %s", maxFile)
	}
	return data, nil
}
