package main

import (
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// settings are what the rules look at, as the program prints them.
func settings() map[string]string {
	return map[string]string{
		"gate_address": ":8470", "general_address": ":8471", "health_address": ":8472", "metrics_address": ":8473",
		"termination_grace": "45s",
	}
}

// manifests is the folder with one edit: the first old text of a file becomes new.
func manifests(t *testing.T, file, old, new string) (*objects, error) {
	t.Helper()
	folder := t.TempDir()
	paths, err := filepath.Glob("../kubernetes/*.yaml")
	if err != nil || len(paths) == 0 {
		t.Fatal(paths, err)
	}
	for _, path := range paths {
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		text := string(data)
		if filepath.Base(path) == file {
			if !strings.Contains(text, old) {
				t.Fatalf("%s does not hold %q", file, old)
			}
			text = strings.Replace(text, old, new, 1)
		}
		if err := os.WriteFile(filepath.Join(folder, filepath.Base(path)), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return readFolder(folder)
}

func TestTheBaseKeepsTheRules(t *testing.T) {
	all, err := manifests(t, "", "", "")
	if err != nil {
		t.Fatal(err)
	}
	if faults := all.faults(settings()); len(faults) > 0 {
		t.Error(strings.Join(faults, "\n"))
	}
}

// TestBreaches breaks one rule per row: the check must see it.
func TestBreaches(t *testing.T) {
	for _, c := range []struct{ file, old, new, seen string }{
		{"deployment.yaml", "minReadySeconds", "minReadySecond", "minReadySecond"},
		{"deployment.yaml", "replicas: 3", "replicas: three", "three"},
		{"services.yaml", "clusterIP: None", "clusterIP: None\n  clusterIP: None", "clusterIP"},
		{"services.yaml", "kind: Service", "kind: Servise", "Servise"},
		{"deployment.yaml", "maxUnavailable: 0", "maxUnavailable: 1", "K1"},
		{"deployment.yaml", "maxSurge: 1", "maxSurge: 0", "K1"},
		{"deployment.yaml", "minReadySeconds: 35", "minReadySeconds: 30", "K1"},
		{"deployment.yaml", "GracePeriodSeconds: 45", "GracePeriodSeconds: 40", "K1"},
		{"services.yaml", "  clusterIP: None\n", "", "K2"},
		{"services.yaml", "clusterIP: None", "clusterIP: None\n  publishNotReadyAddresses: true", "K2"},
		{"services.yaml", "selector:\n    app.kubernetes.io/name: kinegate", "selector:\n    app.kubernetes.io/name: other", "K2"},
		{"deployment.yaml", "containerPort: 8471", "containerPort: 9471", "K2"},
		{"poddisruptionbudget.yaml", "maxUnavailable: 1", "maxUnavailable: 2", "K5"},
		{"poddisruptionbudget.yaml", "AlwaysAllow", "IfHealthyBudget", "K5"},
		{"deployment.yaml", "topologyKey: topology.kubernetes.io/zone", "topologyKey: other", "K5"},
		{"deployment.yaml", "service: liveness", "service: readiness", "K5"},
		{"deployment.yaml", "port: 8472, service: readiness", "port: 8471, service: readiness", "K5"},
		{"deployment.yaml", "runAsNonRoot: true", "runAsNonRoot: false", "K7"},
		{"deployment.yaml", "runAsUser: 65532", "runAsUser: 0", "K7"},
		{"deployment.yaml", "RuntimeDefault", "Unconfined", "K7"},
		{"deployment.yaml", "Escalation: false", "Escalation: true", "K7"},
		{"deployment.yaml", "readOnlyRootFilesystem: true", "readOnlyRootFilesystem: false", "K7"},
		{"deployment.yaml", `drop: ["ALL"]`, `drop: ["NET_RAW"]`, "K7"},
		{"deployment.yaml", "automountServiceAccountToken: false", "automountServiceAccountToken: true", "K7"},
		{"deployment.yaml", "limits: {memory", `limits: {cpu: "2", memory`, "K7"},
		{"deployment.yaml", "memory: 1Gi}\n            limits", "memory: 512Mi}\n            limits", "K7"},
		{"deployment.yaml", "mountPath: /etc/kinegate/tls, readOnly", "mountPath: /etc/kinegate/tls, subPath: x, readOnly", "K7"},
	} {
		t.Run(c.seen+" "+c.old, func(t *testing.T) {
			all, err := manifests(t, c.file, c.old, c.new)
			seen := ""
			if err != nil {
				seen = err.Error()
			} else {
				seen = strings.Join(all.faults(settings()), "\n")
			}
			if !strings.Contains(seen, c.seen) {
				t.Errorf("the breach was not seen: %q", seen)
			}
		})
	}
}

// TestProvenance: what is not a commit is no provenance, and this program's own names its
// toolchain and each of its modules.
func TestProvenance(t *testing.T) {
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	if err := writeProvenance(io.Discard, self, "main", ""); err == nil {
		t.Error("a branch is taken for a commit")
	}
	var b strings.Builder
	commit := strings.Repeat("0123456789", 4)
	if err := writeProvenance(&b, self, commit, "https://example.org/builder"); err != nil {
		t.Fatal(err)
	}
	var s statement
	if err := json.Unmarshal([]byte(b.String()), &s); err != nil {
		t.Fatal(err)
	}
	d := s.Predicate.BuildDefinition
	if len(s.Subject) != 1 || len(s.Subject[0].Digest["sha256"]) != 64 || len(d.ResolvedDependencies) < 3 ||
		d.ResolvedDependencies[0].Digest["gitCommit"] != commit || d.ExternalParameters["goVersion"] == "" {
		t.Errorf("got %s", b.String())
	}
}
