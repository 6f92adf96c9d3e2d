package api

import (
	"encoding/base64"
	"errors"
	"math/rand/v2"
	"testing"
)

func TestPageTokens(t *testing.T) {
	binding := pageBinding("List", "digest", "K")
	for _, at := range []int{0, 1, 77, 1 << 30} {
		if got, err := binding.position(binding.token(at), at+1); err != nil || got != at {
			t.Errorf("position %d comes back as %d, %v", at, got, err)
		}
	}
	if got, err := binding.position("", 0); err != nil || got != 0 {
		t.Errorf("the empty token starts at %d, %v", got, err)
	}
	token := binding.token(5)
	for name, bad := range map[string]struct {
		binding pageArguments
		token   string
	}{
		"other argument":  {pageBinding("List", "digest", "pi"), token},
		"shifted border":  {pageBinding("List", "dig", "estK"), token},
		"past the end":    {binding, binding.token(10)},
		"not base64":      {binding, "*"},
		"too short":       {binding, "AAAA"},
		"negative number": {binding, base64.RawURLEncoding.EncodeToString(append([]byte{255, 255, 255, 255, 255, 255, 255, 255}, make([]byte, 8)...))},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := bad.binding.position(bad.token, 10)
			if f, ok := errors.AsType[*Failure](err); !ok || f.Reason != PageTokenInvalid {
				t.Errorf("got %v", err)
			}
		})
	}
	// Any change of one byte is noticed: 2^-64 of them would not be.
	random := rand.New(rand.NewPCG(1, 2)) //nolint:gosec // a fixed seed for a test
	for range 1000 {
		b := []byte(token)
		b[random.IntN(len(b))] ^= byte(1 + random.IntN(127))
		if string(b) == token {
			continue
		}
		if at, err := binding.position(string(b), 1<<40); err == nil && binding.token(at) != token {
			t.Fatalf("%q is taken for position %d", b, at)
		}
	}
}
