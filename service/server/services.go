package server

import (
	"errors"
	"fmt"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// newServices makes the rpc services from the files that the options name. Faults of
// all files are reported at once.
func newServices(o *Options, deps *Deps, metrics *telemetry.Metrics, leaving <-chan struct{}) (*api.Services, error) {
	table, err := loadTable(o.ParticleFiles)
	if err != nil {
		return nil, err
	}
	library, err := loadLibrary(o.SelectionFiles, table)
	if err != nil {
		return nil, err
	}
	return api.New(api.Deps{
		Version:    deps.Version,
		Table:      table,
		Library:    library,
		Limits:     o.limits(),
		Now:        deps.Now,
		StreamIdle: o.StreamIdle,
		Drain:      api.Drain{Started: leaving, Grace: o.DrainTime},
		Observer:   metrics,
	})
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

// loadLibrary reads selection files.
func loadLibrary(paths []string, table *particle.Table) (*api.Library, error) {
	library := api.NewLibrary(table)
	var faults []error
	for _, path := range paths {
		data, err := readFile("selection_files", path)
		if err == nil {
			err = library.Add(string(data))
		}
		if err != nil {
			faults = append(faults, fmt.Errorf("%s: %w", path, err))
		}
	}
	if err := errors.Join(faults...); err != nil {
		return nil, err
	}
	return library, nil
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
