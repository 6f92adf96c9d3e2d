package main

import (
	"crypto/sha256"
	"debug/buildinfo"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"regexp"
)

// statement is the part of an in-toto statement, version 1, with SLSA's build provenance,
// version 1, that says what a program was built from and how. It has no time and is not
// signed: whoever publishes the program signs it with a key of their own.
type statement struct {
	Type          string     `json:"_type"`
	Subject       []resource `json:"subject"`
	PredicateType string     `json:"predicateType"`
	Predicate     provenance `json:"predicate"`
}

type resource struct {
	Name   string            `json:"name,omitempty"`
	URI    string            `json:"uri,omitempty"`
	Digest map[string]string `json:"digest,omitempty"`
}

type provenance struct {
	BuildDefinition buildDefinition `json:"buildDefinition"`
	RunDetails      runDetails      `json:"runDetails"`
}

type buildDefinition struct {
	BuildType            string            `json:"buildType"`
	ExternalParameters   map[string]string `json:"externalParameters"`
	ResolvedDependencies []resource        `json:"resolvedDependencies"`
}

type runDetails struct {
	Builder struct {
		ID string `json:"id"`
	} `json:"builder"`
}

// Names that the statement uses. The build type is the Dockerfile's build.
const (
	statementType  = "https://in-toto.io/Statement/v1"
	provenanceType = "https://slsa.dev/provenance/v1"
	buildType      = "https://kinegate.example.org/build/dockerfile/v1"
	defaultBuilder = "https://kinegate.example.org/builder/unspecified"
)

var commitForm = regexp.MustCompile(`^[0-9a-f]{40}$`)

// writeProvenance writes the statement for a program built from a commit. The toolchain
// and the sums of the modules are those that the linker noted in the program itself.
func writeProvenance(w io.Writer, path, commit, builder string) error {
	if !commitForm.MatchString(commit) {
		return fmt.Errorf("commit %q is not 40 hexadecimal digits", commit)
	}
	if builder == "" {
		builder = defaultBuilder
	}
	info, err := buildinfo.ReadFile(path)
	if err != nil {
		return err
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	sum := sha256.Sum256(data)
	s := statement{
		Type: statementType, PredicateType: provenanceType,
		Subject: []resource{{Name: filepath.Base(path), Digest: map[string]string{"sha256": hex.EncodeToString(sum[:])}}},
	}
	d := &s.Predicate.BuildDefinition
	d.BuildType, d.ExternalParameters = buildType, map[string]string{"package": info.Path, "goVersion": info.GoVersion}
	for _, setting := range info.Settings {
		if setting.Key != "vcs" {
			d.ExternalParameters[setting.Key] = setting.Value
		}
	}
	d.ResolvedDependencies = append(d.ResolvedDependencies,
		resource{Name: "source", URI: info.Main.Path, Digest: map[string]string{"gitCommit": commit}},
		resource{Name: "go", URI: "pkg:golang/std@" + info.GoVersion[2:]})
	for _, m := range info.Deps {
		if m.Sum == "" {
			return fmt.Errorf("module %s has no sum", m.Path)
		}
		d.ResolvedDependencies = append(d.ResolvedDependencies, resource{
			Name: m.Path, URI: "pkg:golang/" + m.Path + "@" + m.Version, Digest: map[string]string{"dirHash1": m.Sum},
		})
	}
	s.Predicate.RunDetails.Builder.ID = builder
	encoder := json.NewEncoder(w)
	encoder.SetIndent("", "  ")
	return encoder.Encode(s)
}
