// Package lineage ties every row of a result to the exact cells, settings and
// constants it came from. A digest is a SHA-256 over a canonical encoding that
// is the same on every machine; equal digests mean equal content.
package lineage

import (
	"encoding/hex"
	"fmt"
)

// Digest is the first 128 bits of a SHA-256.
type Digest [16]byte

// String gives 32 hexadecimal digits, lower case.
func (d Digest) String() string {
	var text [2 * len(d)]byte
	hex.Encode(text[:], d[:])
	return string(text[:])
}

// ParseDigest reads what String writes.
func ParseDigest(s string) (Digest, error) {
	var d Digest
	if len(s) != 2*len(d) {
		return d, fmt.Errorf("a lineage digest has %d hexadecimal digits, this has %d characters", 2*len(d), len(s))
	}
	b, err := hex.DecodeString(s)
	if err != nil {
		return d, fmt.Errorf("a lineage digest is hexadecimal digits only: %w", err)
	}
	return Digest(b), nil
}
