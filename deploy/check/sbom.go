package main

import (
	"crypto/sha256"
	"debug/buildinfo"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
)

// bom is the part of CycloneDX 1.6 that says which modules a program was built from.
// It has no serial number and no time: the same program gives the same bytes.
type bom struct {
	Format     string      `json:"bomFormat"`
	Spec       string      `json:"specVersion"`
	Version    int         `json:"version"`
	Metadata   metadata    `json:"metadata"`
	Components []component `json:"components"`
}

type metadata struct {
	Component component `json:"component"`
}

type component struct {
	Type    string `json:"type"`
	Name    string `json:"name"`
	Version string `json:"version,omitempty"`
	PURL    string `json:"purl,omitempty"`
	Hashes  []hash `json:"hashes,omitempty"`
}

type hash struct {
	Algorithm string `json:"alg"`
	Content   string `json:"content"`
}

// writeSBOM writes the modules that the linker noted in a program.
func writeSBOM(w io.Writer, path string) error {
	info, err := buildinfo.ReadFile(path)
	if err != nil {
		return err
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	sum := sha256.Sum256(data)
	b := bom{Format: "CycloneDX", Spec: "1.6", Version: 1, Metadata: metadata{component{
		Type: "application", Name: info.Main.Path, Hashes: []hash{{"SHA-256", hex.EncodeToString(sum[:])}},
	}}}
	b.Components = append(b.Components, component{
		Type: "library", Name: "std", Version: info.GoVersion, PURL: "pkg:golang/std@" + info.GoVersion[2:],
	})
	for _, m := range info.Deps {
		if m.Replace != nil {
			m = m.Replace
		}
		if m.Version == "" {
			return fmt.Errorf("module %s has no version", m.Path)
		}
		b.Components = append(b.Components, component{
			Type: "library", Name: m.Path, Version: m.Version, PURL: "pkg:golang/" + m.Path + "@" + m.Version,
		})
	}
	if len(info.Deps) == 0 {
		return errors.New("the program names no modules")
	}
	encoder := json.NewEncoder(w)
	encoder.SetIndent("", "  ")
	return encoder.Encode(b)
}
