package config

import (
	"fmt"
	"io"
	"strings"

	"go.yaml.in/yaml/v3"
)

// Print writes the effective values as a file that Load reads back, each with what it
// does, its kind, what is allowed and where the value came from. No setting holds a
// secret: keys are named by their file.
func Print(w io.Writer, all []Effective) error {
	var b strings.Builder
	for i, e := range all {
		if i > 0 {
			b.WriteByte('\n')
		}
		origin := string(e.Origin)
		if e.Place != "" {
			origin += ", " + e.Place
		}
		kind := e.Setting.Kind()
		if allowed := e.Setting.Allowed(); allowed != "any" {
			kind += ", " + allowed
		}
		fmt.Fprintf(&b, "# %s\n# %s; from %s\n", e.Setting.Doc, kind, origin)
		line, err := yaml.Marshal(map[string]string{e.Setting.Name: e.Value})
		if err != nil {
			return fmt.Errorf("printing %s: %w", e.Setting.Name, err)
		}
		b.Write(line)
	}
	_, err := io.WriteString(w, b.String())
	if err != nil {
		return fmt.Errorf("printing the configuration: %w", err)
	}
	return nil
}
