package canonical_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"google.golang.org/protobuf/encoding/protowire"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api/canonical"
)

func selection() *kinegatev1.Selection {
	return &kinegatev1.Selection{
		Name:        "a \"quoted\" name\n",
		Description: "",
		Hypotheses: []*kinegatev1.Hypothesis{{
			Role:          kinegatev1.Role_ROLE_VETO,
			PrescaleCount: 3,
			AlsoConjugate: true,
			ExtraObjects:  &kinegatev1.ExtraObjects{Rule: &kinegatev1.ExtraObjects_None{None: &kinegatev1.NoExtraObjects{}}},
			Condition: &kinegatev1.Condition{Window: &kinegatev1.Window{Observable: &kinegatev1.Window_InvariantMass{
				InvariantMass: &kinegatev1.MassWindow{
					Products: []string{"pi0[1]", "eta"},
					MinGev:   new(math.Copysign(0, -1)),
					MaxGev:   new(0.30000000000000004),
				},
			}}},
		}},
	}
}

// TestAppendForm pins the form: a change of it changes every digest.
func TestAppendForm(t *testing.T) {
	t.Parallel()
	want := `{"hypotheses":[{"also_conjugate":true,"condition":{"window":{"invariant_mass":{` +
		`"max_gev":0.30000000000000004,"min_gev":0,"products":["pi0[1]","eta"]}}},` +
		`"extra_objects":{"none":{}},"prescale_count":3,"role":"ROLE_VETO"}],"name":"a \"quoted\" name\u000a"}`
	got, err := canonical.Append(nil, selection())
	if err != nil || string(got) != want {
		t.Errorf("got  %s (%v)\nwant %s", got, err, want)
	}
}

func TestAppendRefusesUnknownFields(t *testing.T) {
	t.Parallel()
	m := selection()
	unknown := protowire.AppendVarint(protowire.AppendTag(nil, 4000, protowire.VarintType), 1)
	m.GetHypotheses()[0].GetCondition().ProtoReflect().SetUnknown(unknown)
	if _, err := canonical.Append(nil, m); !errors.Is(err, canonical.ErrUnknownField) {
		t.Errorf("got %v, want ErrUnknownField", err)
	}
}

func TestDigestDependsOnEveryPart(t *testing.T) {
	t.Parallel()
	base, err := canonical.Digest(selection(), "table")
	if err != nil || len(base) != 64 || strings.ToLower(base) != base {
		t.Fatalf("digest %q, %v", base, err)
	}
	changed := selection()
	changed.GetHypotheses()[0].GetCondition().GetWindow().GetInvariantMass().MaxGev = new(0.3)
	if other, err := canonical.Digest(changed, "table"); err != nil || other == base {
		t.Errorf("a changed limit kept the digest (%v)", err)
	}
	if other, err := canonical.Digest(selection(), "other table"); err != nil || other == base {
		t.Errorf("another table kept the digest (%v)", err)
	}
	if again, err := canonical.Digest(selection(), "table"); err != nil || again != base {
		t.Errorf("the same selection changed its digest (%v)", err)
	}
}
