package server

import (
	"errors"
	"fmt"

	"github.com/rs/zerolog"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// newServices makes the rpc services from the files that the options name, and the
// folder to watch, if there is one. Faults of all files are reported at once.
func newServices(o *Options, deps *Deps, metrics *telemetry.Metrics, log func() *zerolog.Logger, leaving <-chan struct{}) (*api.Services, *folder, error) {
	table, err := loadTable(o.ParticleFiles)
	if err != nil {
		return nil, nil, err
	}
	library := api.NewLibrary(table)
	names, err := loadSelections(o.SelectionFiles, library)
	var watched *folder
	if o.SelectionFolder != "" {
		var folderErr error
		watched, folderErr = loadFolder(o.SelectionFolder, library, names, metrics, log)
		err = errors.Join(err, folderErr)
	}
	if err != nil {
		return nil, nil, err
	}
	services, err := api.New(api.Deps{
		Version:    deps.Version,
		Table:      table,
		Library:    library,
		Limits:     o.limits(),
		Now:        deps.Now,
		StreamIdle: o.StreamIdle,
		StallLimit: o.StallLimit,
		Drain:      api.Drain{Started: leaving, Grace: o.DrainTime},
		Connection: o.connectionOf,
		Observer:   streamObserver{metrics, log},
	})
	return services, watched, err
}

// streamObserver counts what happens on judge streams, and logs what somebody may have to mend.
type streamObserver struct {
	*telemetry.Metrics

	log func() *zerolog.Logger
}

// VersionPassedOver counts and logs that a stream keeps the version that it has.
func (o streamObserver) VersionPassedOver(selection, digest string, reason api.Reason) {
	o.Metrics.VersionPassedOver(string(reason))
	o.log().Warn().Str("reason", string(reason)).Str("selection", selection).Str("digest", digest).
		Msg("a stream that follows its selection cannot take the newer version and keeps the one it has")
}

// loadTable lays particle files over the standard table.
func loadTable(paths []string) (*particle.Table, error) {
	var files []particle.File
	var faults []error
	for _, path := range paths {
		data, err := readFile("particle_files", path)
		if err != nil {
			faults = append(faults, err)
			continue
		}
		files = append(files, particle.File{Name: path, Data: data})
	}
	table, err := particle.New(files...)
	if err := errors.Join(append(faults, err)...); err != nil {
		return nil, err
	}
	return table, nil
}

// loadSelections reads selection files into the library and returns their names.
func loadSelections(paths []string, library *api.Library) (names []string, err error) {
	var faults []error
	for _, path := range paths {
		data, err := readFile("selection_files", path)
		if err == nil {
			var v api.Version
			if v, err = library.Add(string(data)); err == nil {
				names = append(names, v.Name())
			}
		}
		if err != nil {
			faults = append(faults, fmt.Errorf("%s: %w", path, err))
		}
	}
	return names, errors.Join(faults...)
}

// readFile reads the file that a setting names.
func readFile(setting, path string) ([]byte, error) {
	data, err := readBounded(path)
	if err != nil {
		return nil, badFile(setting, path, "a file of at most "+maxFile.String()+" that can be read", err)
	}
	return data, nil
}

// badFile is the fault of a file that a setting names.
func badFile(setting, path, allowed string, cause error) error {
	e := fault.New(fault.Invalid, setting, path, allowed)
	e.Err = cause
	return e
}
