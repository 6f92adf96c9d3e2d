package api

import (
	"crypto/sha256"
	"encoding/base64"
	"encoding/binary"
	"strconv"

	"example.org/kinegate/kinematics/fault"
)

// pageSize reads the page size of a list: 0 is the default, and more than the largest
// is read as the largest.
func pageSize(size int32, standard, largest int) (int, error) {
	switch {
	case size < 0:
		return 0, fault.New(fault.Invalid, "page_size", strconv.Itoa(int(size)), ">= 0")
	case size == 0:
		return standard, nil
	}
	return min(int(size), largest), nil
}

// pageArguments binds page tokens to the other arguments of a list and to the data it
// reads: a token that is used with others would skip or repeat entries.
type pageArguments [sha256.Size]byte

// tokenBytes is the size of a token: a position and part of the binding.
const (
	tokenBytes   = positionSize + bindingBytes
	positionSize = 8
	bindingBytes = 8
)

// pageBinding returns the binding to a list of arguments.
func pageBinding(arguments ...string) pageArguments {
	var all []byte
	for _, a := range arguments {
		all = binary.AppendUvarint(all, uint64(len(a)))
		all = append(all, a...)
	}
	return sha256.Sum256(all)
}

// token returns the token of the page that starts at a position.
func (p pageArguments) token(position int) string {
	raw := binary.BigEndian.AppendUint64(nil, uint64(position)) //nolint:gosec // positions are not negative
	return base64.RawURLEncoding.EncodeToString(append(raw, p.seal(raw)...))
}

// position returns where the page of a token starts within a list of a length; the
// empty token starts at 0.
func (p pageArguments) position(token string, length int) (int, error) {
	if token == "" {
		return 0, nil
	}
	raw, err := base64.RawURLEncoding.DecodeString(token)
	if err == nil && len(raw) == tokenBytes && string(p.seal(raw[:positionSize])) == string(raw[positionSize:]) {
		if at := binary.BigEndian.Uint64(raw); at < uint64(length) { //nolint:gosec // a length is not negative
			return int(at), nil //nolint:gosec // below the length
		}
	}
	f := Refuse(PageTokenInvalid, "the page token was not made for these arguments and this table; start again without one")
	f.Violations = []Violation{{Field: "page_token", Value: token, Allowed: "next_page_token of the reply before, with the same arguments"}}
	return 0, f
}

// seal ties a position to the arguments.
func (p pageArguments) seal(position []byte) []byte {
	sum := sha256.Sum256(append(p[:], position...))
	return sum[:bindingBytes]
}
