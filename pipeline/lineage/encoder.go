package lineage

import (
	"crypto/sha256"
	"encoding/binary"
	"fmt"
	"hash"
	"math"
)

// The tags. Every item starts with one and either has a fixed length or states
// its length, so a list of items can be read back in one way only and no two
// lists encode alike.
const (
	tagText   = 't' // uvarint length, bytes
	tagInt    = 'i' // 8 bytes, little-endian, two's complement
	tagFloat  = 'f' // 8 bytes, little-endian, IEEE 754 bits
	tagDigest = 'd' // 16 bytes
	tagList   = 'l' // uvarint number of items that follow
	tagNull   = 'n' // nothing: a missing value, which is neither "" nor 0
)

// flushAt is how many bytes gather before they are hashed: most rows fit, and
// hashing them in one call costs half of hashing item by item.
const flushAt = 4096

// Encoder makes a digest of a list of items. It allocates nothing per item and
// can be reused with Reset; it is for one goroutine.
type Encoder struct {
	buf  []byte
	hash hash.Hash
	sum  [sha256.Size]byte // here so that Sum allocates nothing
}

// New opens an encoding. The domain says what is encoded, so that a pair and an
// analysis of the same items differ: "tieline analysis 1", "tieline pair 1",
// "tieline estimate 1", "tieline method 1", "tieline draw 1".
func New(domain string) *Encoder {
	e := &Encoder{buf: make([]byte, 0, flushAt+512), hash: sha256.New()}
	return e.Text(domain)
}

// Reset starts over with another domain, keeping the memory.
func (e *Encoder) Reset(domain string) *Encoder {
	e.buf = e.buf[:0]
	e.hash.Reset()
	return e.Text(domain)
}

// Text adds a string; "" is an item too.
func (e *Encoder) Text(s string) *Encoder {
	e.buf = append(e.buf, tagText)
	e.buf = binary.AppendUvarint(e.buf, uint64(len(s)))
	e.buf = append(e.buf, s...)
	return e.flush()
}

// Int adds a whole number.
func (e *Encoder) Int(n int64) *Encoder {
	e.buf = append(e.buf, tagInt)
	e.buf = binary.LittleEndian.AppendUint64(e.buf, uint64(n))
	return e.flush()
}

// Float adds a number by its bits, -0 as 0. It panics on NaN: nothing that
// could not be computed has a lineage.
func (e *Encoder) Float(x float64) *Encoder {
	if math.IsNaN(x) {
		panic("lineage: NaN has no canonical encoding")
	}
	if x == 0 {
		x = 0 // -0 too
	}
	e.buf = append(e.buf, tagFloat)
	e.buf = binary.LittleEndian.AppendUint64(e.buf, math.Float64bits(x))
	return e.flush()
}

// Digest adds another row's digest.
func (e *Encoder) Digest(d Digest) *Encoder {
	e.buf = append(e.buf, tagDigest)
	e.buf = append(e.buf, d[:]...)
	return e.flush()
}

// List opens a list of n items, which the next n calls add.
func (e *Encoder) List(n int) *Encoder {
	if n < 0 {
		panic(fmt.Sprintf("lineage: a list of %d items", n))
	}
	e.buf = append(e.buf, tagList)
	e.buf = binary.AppendUvarint(e.buf, uint64(n))
	return e.flush()
}

// Null adds a missing value.
func (e *Encoder) Null() *Encoder {
	e.buf = append(e.buf, tagNull)
	return e.flush()
}

// Sum gives the digest of what was added so far; more may follow.
func (e *Encoder) Sum() Digest {
	full := e.Sum256()
	return Digest(full[:len(Digest{})])
}

// Sum256 gives all 256 bits.
func (e *Encoder) Sum256() [sha256.Size]byte {
	e.hash.Write(e.buf)
	e.buf = e.buf[:0]
	e.hash.Sum(e.sum[:0])
	return e.sum
}

func (e *Encoder) flush() *Encoder {
	if len(e.buf) >= flushAt {
		e.hash.Write(e.buf)
		e.buf = e.buf[:0]
	}
	return e
}
