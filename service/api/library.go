package api

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
	"sync"

	"example.org/kinegate/kinematics/particle"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Library holds the selections that callers may name. It is safe for concurrent
// use, and a stream keeps what it got from it even after a change.
type Library struct {
	table *particle.Table

	mu     sync.Mutex
	byName map[string][]*compiledSelection // newest first
}

// keptDigests is how many versions of a name stay available, so that a stream
// broken during a change can be resumed.
const keptDigests = 4

// NewLibrary returns an empty library over a particle table.
func NewLibrary(table *particle.Table) *Library {
	return &Library{table: table, byName: map[string][]*compiledSelection{}}
}

// Version is one version of a named selection, ready to judge with.
type Version struct{ compiled *compiledSelection }

// Name is the name of the selection.
func (v Version) Name() string { return v.compiled.message.GetName() }

// Digest is the digest of this version in hexadecimal.
func (v Version) Digest() string { return v.compiled.digest }

// Read reads the text of a selection file. The error is a *Failure that lists every
// fault.
func (l *Library) Read(text string) (Version, error) {
	message, c, faults := readSelection(text, l.table)
	if len(faults) > 0 {
		return Version{}, selectionError(message.GetName(), faults)
	}
	return Version{c}, nil
}

// Take makes versions the newest of their names, all at once.
func (l *Library) Take(versions ...Version) {
	l.mu.Lock()
	defer l.mu.Unlock()
	for _, v := range versions {
		name, c := v.Name(), v.compiled
		old := slices.DeleteFunc(slices.Clone(l.byName[name]), func(o *compiledSelection) bool { return o.digest == c.digest })
		l.byName[name] = append([]*compiledSelection{c}, old[:min(len(old), keptDigests-1)]...)
	}
}

// Add reads the text of a selection file and makes it the newest of its name. With
// faults the library stays as it was.
func (l *Library) Add(text string) (Version, error) {
	v, err := l.Read(text)
	if err == nil {
		l.Take(v)
	}
	return v, err
}

// find returns a selection by name and digest, the newest for an empty digest.
func (l *Library) find(ref *kinegatev1.SelectionReference) (*compiledSelection, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	versions := l.byName[ref.GetName()]
	if len(versions) == 0 {
		known := strings.Join(l.namesLocked(), ", ")
		return nil, Refuse(SelectionNotFound,
			fmt.Sprintf("no selection is named %q; known: %s", ref.GetName(), cmp.Or(known, "none")),
			"name", ref.GetName(), "known", known)
	}
	if ref.GetSelectionDigest() == "" {
		return versions[0], nil
	}
	for _, c := range versions {
		if c.digest == ref.GetSelectionDigest() {
			return c, nil
		}
	}
	return nil, Refuse(DigestGone, "this version of the selection is no longer available",
		"name", ref.GetName(), "selection_digest", ref.GetSelectionDigest(), "newest_digest", versions[0].digest)
}

// list returns what there is, by name.
func (l *Library) list() []*kinegatev1.NamedSelection {
	l.mu.Lock()
	defer l.mu.Unlock()
	var list []*kinegatev1.NamedSelection
	for _, name := range l.namesLocked() {
		named := &kinegatev1.NamedSelection{Name: name, Description: l.byName[name][0].message.GetDescription()}
		for _, c := range l.byName[name] {
			named.Digests = append(named.Digests, c.digest)
		}
		list = append(list, named)
	}
	return list
}

func (l *Library) namesLocked() []string {
	names := make([]string, 0, len(l.byName))
	for name := range l.byName {
		names = append(names, name)
	}
	slices.Sort(names)
	return names
}
