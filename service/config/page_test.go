package config

import (
	"flag"
	"fmt"
	"os"
	"strings"
	"testing"

	"example.org/kinegate/service/server"
)

var update = flag.Bool("update", false, "rewrite deploy/settings.md")

// settingsPage is the page of settings that operators read.
const settingsPage = "../../deploy/settings.md"

// TestSettingsPage holds the page against the table that the program reads its settings
// by; go test ./service/config -update writes it anew.
func TestSettingsPage(t *testing.T) {
	var b strings.Builder
	b.WriteString(`# Settings

Made from the program's own table by ` + "`go test ./service/config -update`" + `; a test compares the two.
A setting is a flag (` + "`--gate-address`" + `), a variable (` + "`KINEGATE_GATE_ADDRESS`" + `) or a key of the YAML file
that ` + "`--config`" + ` or ` + "`KINEGATE_CONFIG`" + ` names (` + "`gate_address`" + `): a flag wins over a variable, that over the file,
that over the default. Names that are no settings refuse the start. Sizes take KiB, MiB and GiB; times
take ms, s, m and h. Settings marked *running* are taken from a changed file without a restart.

| setting | default | allowed | |
| --- | --- | --- | --- |
`)
	for _, s := range server.Settings() {
		doc := s.Doc
		if s.Reloads() {
			doc += " *running*"
		}
		standard := s.Default
		if standard == "" {
			standard = "none"
		}
		fmt.Fprintf(&b, "| `%s` | %s | %s: %s | %s |\n", s.Name, standard, s.Kind(), s.Allowed(), doc)
	}
	if *update {
		if err := os.WriteFile(settingsPage, []byte(b.String()), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	page, err := os.ReadFile(settingsPage)
	if err != nil {
		t.Fatal(err)
	}
	if string(page) != b.String() {
		t.Error("deploy/settings.md differs from the table: go test ./service/config -update")
	}
}
