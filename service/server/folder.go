package server

import (
	"context"
	"crypto/sha256"
	"errors"
	"fmt"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"sync"
	"time"

	"github.com/rs/zerolog"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// folderPeriod is how often the folder of selections is looked at. As with
// certificates, content decides.
const folderPeriod = time.Second

// maxFolderFiles bounds the files of a folder of selections.
const maxFolderFiles = 1024

// folder keeps a library up to date with the YAML files of a folder. A selection stays
// available when its file goes, for streams that judge with it.
type folder struct {
	path    string
	library *api.Library
	metrics *telemetry.Metrics
	log     func() *zerolog.Logger
	// taken are the names that selection files have, which no file of the folder may have.
	taken []string

	mu    sync.Mutex // guards the rest
	files map[string]*selectionFile
}

// selectionFile is a file of the folder as last looked at.
type selectionFile struct {
	// seen is the content at the last look. One that another look finds unchanged is
	// complete, and is read: a file that is being written in place may be sound and
	// lack its last hypotheses.
	seen, read [sha256.Size]byte
	// version is what was read and waits for its name to be free.
	version *api.Version
	// name is that of the version in use, which is the file's own until it goes or
	// has another.
	name string
	// bad says why the file is not in use as it is, told what was reported of it.
	bad, told error
}

// loadFolder reads the folder for the first time; taken are the names that selection
// files have already. Every file must be sound.
func loadFolder(path string, library *api.Library, taken []string, metrics *telemetry.Metrics, log func() *zerolog.Logger) (*folder, error) {
	f := &folder{path: path, library: library, metrics: metrics, log: log, taken: taken, files: map[string]*selectionFile{}}
	if _, err := f.reread(); err != nil {
		return nil, err
	}
	_, err := f.reread()
	return f, err
}

// watch rereads the folder until the context ends.
func (f *folder) watch(ctx context.Context) {
	ticker := time.NewTicker(folderPeriod)
	defer ticker.Stop()
	for {
		select {
		case <-ctx.Done():
			return
		case <-ticker.C:
			f.refresh()
		}
	}
}

// refresh rereads the folder once and tells what came of it.
func (f *folder) refresh() {
	changed, err := f.reread()
	if err != nil {
		f.log().Error().Err(err).Msg("a file of selections is bad, its old version stays in use")
	}
	for _, v := range changed {
		f.log().Info().Str("selection", v.Name()).Str("selection_digest", v.Digest()).Msg("a selection has changed, the new version is in use")
	}
}

// reread takes all files that have changed and are sound into use at once. Bad ones are
// reported once and keep the metric down until they are mended.
func (f *folder) reread() (changed []api.Version, err error) {
	f.mu.Lock()
	defer f.mu.Unlock()
	paths, err := f.paths()
	if err != nil {
		f.metrics.SelectionsReloaded(false)
		return nil, badFile("selection_folder", f.path, "a folder that can be read", err)
	}
	maps.DeleteFunc(f.files, func(path string, _ *selectionFile) bool { return !slices.Contains(paths, path) })
	for _, path := range paths {
		if f.files[path] == nil {
			f.files[path] = &selectionFile{}
		}
		f.look(path, f.files[path])
	}
	var faults []error
	sound := true
	for _, path := range paths {
		file := f.files[path]
		if version := f.claim(file); version != nil {
			changed = append(changed, *version)
		}
		if file.bad == nil {
			file.told = nil
			continue
		}
		sound = false
		if file.told == nil || file.told.Error() != file.bad.Error() {
			file.told = file.bad
			faults = append(faults, fmt.Errorf("%s: %w", path, file.bad))
		}
	}
	f.library.Take(changed...)
	f.metrics.SelectionsReloaded(sound)
	return changed, errors.Join(faults...)
}

// paths are those of the YAML files, sorted.
func (f *folder) paths() ([]string, error) {
	entries, err := os.ReadDir(f.path)
	if err != nil {
		return nil, err //nolint:wrapcheck // it names the operation and the path
	}
	var paths []string
	for _, e := range entries {
		if ext := filepath.Ext(e.Name()); (ext == ".yaml" || ext == ".yml") && e.Name()[0] != '.' {
			paths = append(paths, filepath.Join(f.path, e.Name()))
		}
	}
	if len(paths) > maxFolderFiles {
		return nil, fmt.Errorf("%d files: %d are allowed", len(paths), maxFolderFiles)
	}
	return paths, nil
}

// look reads a file whose content is new and complete.
func (f *folder) look(path string, file *selectionFile) {
	data, err := readFile("selection_folder", path)
	if err != nil {
		// It may be readable the next time though its content stays.
		*file = selectionFile{name: file.name, bad: err, told: file.told}
		return
	}
	sum := sha256.Sum256(data)
	complete := sum == file.seen
	file.seen = sum
	if !complete || sum == file.read {
		return
	}
	file.read, file.version, file.bad = sum, nil, nil
	version, err := f.library.Read(string(data))
	if err != nil {
		file.bad = err
		return
	}
	file.version = &version
	if file.name != version.Name() {
		file.name = ""
	}
}

// claim returns the version that a file waits to bring into use, if its name is free.
func (f *folder) claim(file *selectionFile) *api.Version {
	version := file.version
	if version == nil {
		return nil
	}
	name := version.Name()
	owner := ""
	if slices.Contains(f.taken, name) {
		owner = "selection_files"
	}
	for path, other := range f.files {
		if other != file && other.name == name {
			owner = path
		}
	}
	if owner != "" {
		file.bad = fault.New(fault.Invalid, "name", name, "a name that no other file has").Because("it belongs to " + owner)
		return nil
	}
	file.version, file.name, file.bad = nil, name, nil
	return version
}
