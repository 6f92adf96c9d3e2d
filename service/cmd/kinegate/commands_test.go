package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"google.golang.org/protobuf/encoding/protojson"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// command runs a command and returns its exit code and what it printed.
func command(t *testing.T, arguments ...string) (code int, out, errs string) {
	t.Helper()
	var o, e bytes.Buffer
	code = run(t.Context(), program{in: strings.NewReader(""), out: &o, err: &e}, arguments)
	return code, o.String(), e.String()
}

// TestExitCodes holds a command, its code and a part of what it says, a row.
func TestExitCodes(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		arguments string
		code      int
		says      string
	}{
		{`particle K+`, exitWell, "493.677 MeV +- 16 keV"},
		{`particle 2212`, exitWell, "proton"},
		{`particle -- -2212`, exitWell, "pbar"},
		{`particle`, exitUsage, "no particle was named"},
		{`particle nothing`, exitUsage, "unknown particle"},
		{`particle --containing Sigma_c`, exitWell, "Sigma_c++"},
		{`reaction "gamma p -> p eta"`, exitWell, "707.8117 MeV"},
		{`reaction "gamma p -> p eta" --beam "1 GeV"`, exitWell, "OPEN"},
		{`reaction "gamma p -> p eta" --beam "700 MeV"`, exitNo, "CLOSED"},
		{`reaction "gamma p -> p eta" --beam "25 deg"`, exitUsage, "quantity of angle"},
		{`reaction "gamma p -> p eta" --beam 1.2`, exitUsage, "not a number with a unit"},
		{`reaction "gamma p -> p eta" --beam "1 GeV" --beam-kinetic "1 GeV"`, exitUsage, "give one"},
		{`reaction "gamma p -> p eta" --angle "10 deg"`, exitUsage, "--beam2 and --angle need --beam"},
		{`reaction "gamma p -> p eta" --beam "1 GeV" --angle "10 deg"`, exitUsage, "--angle needs --beam2"},
		{`reaction "gamma p -> p eta" --beam "1 GeV" --sqrt-s "2 GeV"`, exitUsage, "in place of beams"},
		{`reaction "gamma p -> p eta" --sqrt-s "2 GeV"`, exitWell, "OPEN"},
		{`reaction "e- gamma -> e- gamma" --beam "6 GeV" --beam2 "351.1 nm"`, exitWell, "OPEN"},
		{`reaction "p gamma -> p pi0" --beam "351.1 nm"`, exitUsage, "quantity of length"},
		{`reaction`, exitUsage, "accepts 1 arg"},
		{`reaction "gamma p -> K+ Lamda"`, exitUsage, "\n                ^"},
		{`reaction "gamma p -> p eta" --address 127.0.0.1:1`, exitFailed, "no server answers at 127.0.0.1:1: dial tcp 127.0.0.1:1: connect: connection refused"},
		{`reaction "gamma p -> p eta" --address 127.0.0.1:1 --wait --timeout 600ms`, exitFailed, "kinegate: waiting for a server at 127.0.0.1:1, up to 600ms"},
		{`decay "Lambda -> p pi-"`, exitWell, "37.84052 MeV"},
		{`decay "Lambda -> p K-"`, exitNo, "CLOSED"},
		{`decay "Lambda -> p pi-, pi- -> mu- tau- nu_mubar"`, exitUsage, "is not conserved"},
		{`check none.yaml`, exitUsage, "no such file"},
		{`judge events.csv`, exitUsage, "--selection is required"},
		{`demo --events 3`, exitUsage, "100 to 1000000"},
		{`serve --gate-address 0.0.0.0:0`, exitUsage, "unsafe-plaintext-on-the-network"},
		{`nonsense`, exitUsage, "there is no command"},
		{`reaction --nonsense`, exitUsage, "unknown flag"},
		{`--help`, exitWell, "never a safety system"},
	} {
		wantCommand(t, c.arguments, c.code, c.says)
	}
}

// wantCommand runs a command line and wants its code and a part of what it says.
func wantCommand(t *testing.T, line string, want int, says string) {
	t.Helper()
	t.Run(line, func(t *testing.T) {
		t.Parallel()
		code, out, errs := command(t, shellWords(line)...)
		if code != want || !strings.Contains(out+errs, says) {
			t.Errorf("code %d, want %d with %q; says\n%s%s", code, want, says, out, errs)
		}
		if code == exitUsage && !strings.HasPrefix(errs, "kinegate: ") {
			t.Errorf("the error is not on the standard error: %q", errs)
		}
	})
}

// TestJSONIsTheReply reads what --json prints as the reply's own message.
func TestJSONIsTheReply(t *testing.T) {
	t.Parallel()
	code, out, _ := command(t, "reaction", "gamma p -> K+ Lambda", "--beam", "1.2 GeV", "--json")
	var reply kinegatev1.DescribeReactionResponse
	if err := protojson.Unmarshal([]byte(out), &reply); err != nil || code != exitWell {
		t.Fatalf("code %d, %v", code, err)
	}
	if reply.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_OPEN || len(reply.GetProducts()) != 2 {
		t.Errorf("reply %v", &reply)
	}
}

const openData = "../../../testdata/open/"

// TestJudgeWritesVerdicts compares the verdict file with the experiment's printed
// masses; 1e-4 is what six printed digits of three momentum components carry.
func TestJudgeWritesVerdicts(t *testing.T) {
	t.Parallel()
	name := filepath.Join(t.TempDir(), "verdicts.csv")
	code, out, errs := command(t, "judge", "--selection", "../../../testdata/selections/dimuon.yaml",
		openData+"dimuon_2011A.csv", "--out", name, "--compare", "M=dimuon/M", "--block-events", "700")
	if code != exitWell {
		t.Fatal(errs)
	}
	if !strings.Contains(out, "3000 events compared, 0 not accepted") {
		t.Errorf("no comparison in\n%s", out)
	}
	f, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close() //nolint:errcheck // only read
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil || len(rows) != 3001 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	if want := "run,event,status,gate,weight,dimuon,dimuon/M,Z,Z/M"; !strings.HasPrefix(strings.Join(rows[0], ","), want) {
		t.Errorf("heading %v", rows[0])
	}
	// The first event of the file, printed mass 89.9557 GeV.
	if rows[1][1] != "74969122" || rows[1][2] != "judged" || rows[1][3] != "1" || rows[1][4] != "1" || !strings.HasPrefix(rows[1][6], "89.955") {
		t.Errorf("first row %v", rows[1])
	}
}

func TestJudgeJSONHasColumnsAsArrays(t *testing.T) {
	t.Parallel()
	code, out, errs := command(t, "judge", "--selection", "../../../testdata/selections/four-lepton.yaml", openData+"4e_2011.csv", "--json")
	if code != exitWell {
		t.Fatal(errs)
	}
	decoder := json.NewDecoder(strings.NewReader(out))
	events := 0
	for decoder.More() {
		var block struct {
			EventCount int   `json:"event_count,string"`
			Statuses   []int `json:"statuses"`
		}
		if err := decoder.Decode(&block); err != nil {
			t.Fatal(err)
		}
		if len(block.Statuses) != block.EventCount {
			t.Errorf("%+v", block)
		}
		events += block.EventCount
	}
	if events != 7 {
		t.Errorf("%d events, want 7", events)
	}
}

// TestJudgeFaults holds a command line with the fault it must name.
func TestJudgeFaults(t *testing.T) {
	t.Parallel()
	folder := t.TempDir()
	broken := filepath.Join(folder, "broken.csv")
	if err := os.WriteFile(broken, []byte("px1,py1,pz1,q1\n1,x,2,1\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	selection := "../../../testdata/selections/dimuon.yaml"
	for _, c := range []struct{ name, says string }{
		{"judge --selection " + selection + " " + broken, "line 2: column py1"},
		{"judge --selection " + selection + " none.csv", "no such file"},
		{"judge --selection ../../../testdata/selections/faulty.yaml " + broken, "faulty.yaml:11:"},
		{"judge --selection " + selection + " --compare M " + broken, "COLUMN=NAME/LABEL"},
		{"judge --selection " + selection + " --compare M=dimuon/X " + broken, "recorded are dimuon/M"},
		{"judge --selection " + selection + " --histogram dimuon/M=3:2:5 " + broken, "LOW must be below HIGH"},
		{"judge --selection " + selection + " --block-events 5000 " + broken, "1 to 4096"},
	} {
		code, out, errs := command(t, strings.Fields(c.name)...)
		if code != exitUsage || !strings.Contains(errs, c.says) {
			t.Errorf("%s: code %d, says %q%s", c.name, code, errs, out)
		}
	}
}

// TestDemoGivesAVerdictForEveryEvent runs a short demo, keeps its events, and judges
// them again from the files with the same result.
func TestDemoGivesAVerdictForEveryEvent(t *testing.T) {
	t.Parallel()
	folder := filepath.Join(t.TempDir(), "hall")
	code, out, errs := command(t, "demo", "--events", "2000", "--keep", folder)
	if code != exitWell || !strings.Contains(out, "2000 verdicts on 2000 events") {
		t.Fatalf("code %d: %s\n%s", code, errs, out)
	}
	_, after, _ := strings.Cut(out, "the gate accepts ")
	accepted, _, _ := strings.Cut(after, " ")
	code, again, errs := command(t, "judge", "--selection", filepath.Join(folder, "selection.yaml"), filepath.Join(folder, "events.csv"))
	if code != exitWell || !strings.Contains(again, "2000 events judged in 2 blocks; the gate accepts "+accepted+" ") {
		t.Errorf("code %d, the demo accepts %s: %s\n%s", code, accepted, errs, again)
	}
}
