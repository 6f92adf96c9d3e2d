package api

import (
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"google.golang.org/grpc/codes"

	"example.org/kinegate/kinematics/fault"
)

// TestRegistryHoldsEveryReason reads the source: a constant that Reasons forgets would
// be sent as INTERNAL_FAULT.
func TestRegistryHoldsEveryReason(t *testing.T) {
	file, err := parser.ParseFile(token.NewFileSet(), "reason.go", nil, 0)
	if err != nil {
		t.Fatal(err)
	}
	declared := map[string]bool{}
	ast.Inspect(file, func(n ast.Node) bool {
		v, ok := n.(*ast.ValueSpec)
		if !ok {
			return true
		}
		if kind, ok := v.Type.(*ast.Ident); ok && kind.Name == "Reason" {
			text, err := strconv.Unquote(v.Values[0].(*ast.BasicLit).Value)
			if err != nil {
				t.Fatal(err)
			}
			declared[text] = true
		}
		return true
	})
	if len(declared) < 30 {
		t.Fatalf("only %d reasons found in the source", len(declared))
	}
	for _, m := range Reasons() {
		if !declared[string(m.Reason)] {
			t.Errorf("%s is registered twice or not declared", m.Reason)
		}
		delete(declared, string(m.Reason))
	}
	for reason := range declared {
		t.Errorf("%s is declared and not registered", reason)
	}
}

// TestReasonsAreAContract compares with the golden map: a reason never changes its code
// or retry meaning, so a change here breaks callers.
func TestReasonsAreAContract(t *testing.T) {
	golden, err := os.ReadFile("testdata/reasons.txt")
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	form := regexp.MustCompile(`^[A-Z][A-Z0-9_]{2,62}$`)
	for _, m := range Reasons() {
		if !form.MatchString(string(m.Reason)) {
			t.Errorf("%q is not in capitals with underscores", m.Reason)
		}
		if m.Retryable != (m.Code == codes.Unavailable) {
			t.Errorf("%s: retryable and UNAVAILABLE go together", m.Reason)
		}
		b.WriteString(string(m.Reason) + " " + m.Code.String() + " " + strconv.FormatBool(m.Retryable) + "\n")
		if MeaningOf(m.Reason) != m {
			t.Errorf("%s is not found", m.Reason)
		}
	}
	if b.String() != string(golden) {
		t.Errorf("the registry differs from testdata/reasons.txt:\n%s", b.String())
	}
	if MeaningOf("NO_SUCH").Reason != InternalFault {
		t.Error("an unregistered reason has a meaning of its own")
	}
}

func TestEveryKindHasAReason(t *testing.T) {
	for _, kind := range fault.Kinds() {
		t.Run(kind.Error(), func(t *testing.T) {
			reason, ok := reasonOfKind(kind)
			if !ok || reason == InternalFault {
				t.Fatalf("%v has no reason", kind)
			}
			got := Explain(fault.New(kind, "field", "value", "allowed"))
			if got.Reason != reason || len(got.Violations) != 1 || got.Violations[0].Field != "field" {
				t.Errorf("got %+v", got)
			}
		})
	}
	if _, ok := reasonOfKind(0); ok {
		t.Error("kind 0 has a reason")
	}
}
