package main

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	apps "k8s.io/api/apps/v1"
	core "k8s.io/api/core/v1"
	policy "k8s.io/api/policy/v1"
	"sigs.k8s.io/yaml"
)

// objects are the manifests of a folder by kind.
type objects struct {
	count       int
	accounts    []core.ServiceAccount
	maps        []core.ConfigMap
	services    []core.Service
	deployments []apps.Deployment
	budgets     []policy.PodDisruptionBudget
}

// readFolder reads every YAML file of a folder. Unknown kinds, unknown fields and keys
// given twice are faults.
func readFolder(folder string) (*objects, error) {
	paths, err := filepath.Glob(filepath.Join(folder, "*.yaml"))
	if err != nil {
		return nil, err
	}
	if len(paths) == 0 {
		return nil, fmt.Errorf("no manifests in %s", folder)
	}
	all := &objects{}
	var faults []error
	for _, path := range paths {
		data, err := os.ReadFile(path)
		if err != nil {
			return nil, err
		}
		if err := all.read(data); err != nil {
			faults = append(faults, fmt.Errorf("%s: %w", path, err))
		}
	}
	return all, errors.Join(faults...)
}

// read adds the objects of a file.
func (o *objects) read(data []byte) error {
	for document := range bytes.SplitSeq(data, []byte("\n---\n")) {
		var head struct {
			APIVersion string `json:"apiVersion"`
			Kind       string `json:"kind"`
		}
		if err := yaml.Unmarshal(document, &head); err != nil {
			return err
		}
		var err error
		switch kind := head.APIVersion + " " + head.Kind; kind {
		case "v1 ServiceAccount":
			err = add(&o.accounts, document)
		case "v1 ConfigMap":
			err = add(&o.maps, document)
		case "v1 Service":
			err = add(&o.services, document)
		case "apps/v1 Deployment":
			err = add(&o.deployments, document)
		case "policy/v1 PodDisruptionBudget":
			err = add(&o.budgets, document)
		default:
			err = fmt.Errorf("a kind that is not checked: %s", kind)
		}
		if err != nil {
			return err
		}
		o.count++
	}
	return nil
}

func add[T any](list *[]T, document []byte) error {
	var object T
	if err := yaml.UnmarshalStrict(document, &object); err != nil {
		return err
	}
	*list = append(*list, object)
	return nil
}

// readSettings reads the effective settings as the program prints them.
func readSettings(path string) (map[string]string, error) {
	if path == "" {
		return nil, errors.New("manifests needs -settings")
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	settings := map[string]string{}
	if err := yaml.Unmarshal(data, &settings); err != nil {
		return nil, err
	}
	return settings, nil
}

// port is the port of an address setting such as ":8470".
func port(address string) string { return address[strings.LastIndexByte(address, ':')+1:] }
