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

	mu sync.Mutex // guards the rest
	// sums are the contents of the files when last read, owners the file or setting
	// that each name belongs to, bad the files that are not in use as they are.
	sums   map[string][sha256.Size]byte
	owners map[string]string
	bad    map[string]bool
}

// loadFolder reads the folder for the first time; taken are the names that selection
// files have already. Every file must be sound.
func loadFolder(path string, library *api.Library, taken []string, metrics *telemetry.Metrics, log func() *zerolog.Logger) (*folder, error) {
	f := &folder{
		path: path, library: library, metrics: metrics, log: log,
		sums: map[string][sha256.Size]byte{}, owners: map[string]string{}, bad: map[string]bool{},
	}
	for _, name := range taken {
		f.owners[name] = "selection_files"
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
// reported when they have changed and keep the metric down until they are mended.
func (f *folder) reread() (changed []api.Version, err error) {
	f.mu.Lock()
	defer f.mu.Unlock()
	files, err := f.files()
	if err != nil {
		f.metrics.SelectionsReloaded(false)
		return nil, badFile("selection_folder", f.path, "a folder that can be read", err)
	}
	maps.DeleteFunc(f.bad, func(path string, _ bool) bool { return !slices.Contains(files, path) })
	maps.DeleteFunc(f.sums, func(path string, _ [sha256.Size]byte) bool { return !slices.Contains(files, path) })
	var faults []error
	for _, path := range files {
		version, news, err := f.read(path)
		switch {
		case err != nil:
			f.bad[path] = true
			faults = append(faults, fmt.Errorf("%s: %w", path, err))
		case news:
			delete(f.bad, path)
			changed = append(changed, version)
		}
	}
	f.library.Take(changed...)
	f.metrics.SelectionsReloaded(len(f.bad) == 0)
	return changed, errors.Join(faults...)
}

// files are the paths of the YAML files, sorted.
func (f *folder) files() ([]string, error) {
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

// read reads one file; news is false for one that has not changed since.
func (f *folder) read(path string) (version api.Version, news bool, err error) {
	data, err := readFile("selection_folder", path)
	if err != nil {
		// It may be readable the next time though its content stays.
		delete(f.sums, path)
		return version, false, err
	}
	sum := sha256.Sum256(data)
	if old, known := f.sums[path]; known && old == sum {
		return version, false, nil
	}
	f.sums[path] = sum
	version, err = f.library.Read(string(data))
	if err != nil {
		return version, false, err
	}
	if owner := f.owners[version.Name()]; owner != "" && owner != path && !f.gone(owner) {
		return version, false, fault.New(fault.Invalid, "name", version.Name(), "a name that no other file has").
			Because("it belongs to " + owner)
	}
	f.owners[version.Name()] = path
	return version, true, nil
}

// gone reports whether a file that owned a name no longer exists.
func (f *folder) gone(owner string) bool {
	if owner == "selection_files" {
		return false
	}
	_, err := os.Stat(owner)
	return errors.Is(err, os.ErrNotExist)
}
