package canonical

import (
	"crypto/sha256"
	"encoding/hex"
	"strconv"

	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics"
)

// Digest returns the SHA-256, in hexadecimal, of the message's full name, its
// canonical form, the digest of the particle table and the numerics version,
// each on a line of its own. Two equal digests promise the same bits.
func Digest(message proto.Message, tableDigest string) (string, error) {
	text := append([]byte(message.ProtoReflect().Descriptor().FullName()), '\n')
	text, err := Append(text, message)
	if err != nil {
		return "", err
	}
	text = append(text, "\ntable "...)
	text = append(text, tableDigest...)
	text = append(text, "\nnumerics "...)
	text = strconv.AppendInt(text, kinematics.NumericsVersion, 10)
	text = append(text, '\n')
	sum := sha256.Sum256(text)
	return hex.EncodeToString(sum[:]), nil
}
