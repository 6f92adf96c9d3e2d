package main

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"
)

// runbookTime is more than enough for the commands of the runbook, which sleep once.
const runbookTime = 2 * time.Minute

// TestRunbook runs every command of the operator's runbook in one shell, with a server of
// its own ports, certificates and access file: each must end well.
func TestRunbook(t *testing.T) {
	for _, tool := range []string{"bash", "curl", "sed"} {
		if _, err := exec.LookPath(tool); err != nil {
			t.Skipf("NOT CHECKED: there is no %s", tool)
		}
	}
	page, err := os.ReadFile("../../../deploy/README.md")
	if err != nil {
		t.Fatal(err)
	}
	folder := t.TempDir()
	ports := freePorts(t)
	var script strings.Builder
	script.WriteString(prepareRunbook(t, folder, ports))
	commands := 0
	for _, block := range regexp.MustCompile("(?s)```sh\n(.*?)```").FindAllStringSubmatch(string(page), -1) {
		for line := range strings.Lines(block[1]) {
			commands++
			for i, port := range ports {
				line = strings.ReplaceAll(line, fmt.Sprintf("127.0.0.1:%d", 8470+i), fmt.Sprintf("127.0.0.1:%d", port))
			}
			fmt.Fprintf(&script, "echo '+ %s'\n%s", strings.ReplaceAll(strings.TrimSpace(line), "'", "'\\''"), line)
		}
	}
	if commands < 15 {
		t.Fatalf("only %d commands", commands)
	}
	ctx, cancel := context.WithTimeout(t.Context(), runbookTime)
	defer cancel()
	shell := exec.CommandContext(ctx, "bash", "-c", script.String()) //nolint:gosec // the page's own commands
	shell.Dir = folder
	shell.WaitDelay = time.Second
	out, err := shell.CombinedOutput()
	if err != nil {
		log, _ := os.ReadFile(filepath.Join(folder, "kinegate.log"))
		t.Fatalf("%v\n%s\nlog:\n%s", err, out, log)
	}
	for _, text := range []string{
		"log_level: info", "are sound", "SERVING", "kinegate_certificate_reload_success 1", "kinegate_config_reload_success 1",
	} {
		if !strings.Contains(string(out), text) {
			t.Errorf("nothing said %q:\n%s", text, out)
		}
	}
	t.Logf("FIGURE R3 %d lines of commands, all ended well", commands)
}

// prepareRunbook lays out what the runbook takes for granted, and returns the beginning of
// a script in which kinegate is this program and every fault ends it.
func prepareRunbook(t *testing.T, folder string, ports [4]int) (beginning string) {
	t.Helper()
	for _, name := range []string{"certificates-old", "certificates-new"} {
		certificate, key := selfSigned(t)
		in := filepath.Join(folder, name)
		if err := os.Mkdir(in, 0o700); err != nil {
			t.Fatal(err)
		}
		for from, to := range map[string]string{certificate: "tls.crt", key: "tls.key"} {
			if err := os.Rename(from, filepath.Join(in, to)); err != nil {
				t.Fatal(err)
			}
		}
		if err := os.Link(filepath.Join(in, "tls.crt"), filepath.Join(in, "ca.crt")); err != nil {
			t.Fatal(err)
		}
	}
	if err := os.Symlink("certificates-old", filepath.Join(folder, "certificates")); err != nil {
		t.Fatal(err)
	}
	var settings strings.Builder
	settings.WriteString("log_level: info\ndrain_notice: 200ms\naccess_file: access\n" +
		"certificate_file: certificates/tls.crt\nkey_file: certificates/tls.key\nclient_ca_file: certificates/ca.crt\n")
	for i, name := range []string{"gate", "general", "health", "metrics"} {
		fmt.Fprintf(&settings, "%s_address: 127.0.0.1:%d\n", name, ports[i])
	}
	access := "spiffe://marrow-hall.example.org/trigger kinegate.v1.SelectionService/Judge\nspiffe://marrow-hall.example.org/shift *\n"
	for name, text := range map[string]string{"kinegate.yaml": settings.String(), "access": access} {
		if err := os.WriteFile(filepath.Join(folder, name), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	// A background job must be the program itself, for its signals: so a file and no function.
	program := "#!/bin/sh\nexec env " + asProgram + "=1 '" + self + "' \"$@\"\n"
	if err := os.WriteFile(filepath.Join(folder, "kinegate"), []byte(program), 0o700); err != nil { //nolint:gosec // a program
		t.Fatal(err)
	}
	return "set -e\nPATH=" + folder + ":$PATH\ntrap 'kill $server 2>/dev/null || true' EXIT\n"
}

// TestHealthOfNobody: no answer is not well.
func TestHealthOfNobody(t *testing.T) {
	ports := freePorts(t)
	if out, errs, code := output(t, nil, "health", "--address", fmt.Sprintf("127.0.0.1:%d", ports[0])); code != exitFailed || out != "" || errs == "" {
		t.Errorf("code %d: %s%s", code, out, errs)
	}
}
