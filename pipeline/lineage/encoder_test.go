package lineage

import (
	"bytes"
	"crypto/sha256"
	"encoding/binary"
	"encoding/csv"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// TestSumIsSHA256OfTheDocumentedBytes checks the encoding against its own
// description, byte by byte, with the standard library's SHA-256.
func TestSumIsSHA256OfTheDocumentedBytes(t *testing.T) {
	d := Digest{1, 2, 3}
	got := New("tieline pair 1").Text("Pl").Text("").Int(-2).Float(0.5).List(300).Digest(d).Null().Sum256()
	var want bytes.Buffer
	want.WriteString("t\x0etieline pair 1" + "t\x02Pl" + "t\x00")
	want.WriteString("i\xfe\xff\xff\xff\xff\xff\xff\xff")
	want.WriteString("f")
	binary.Write(&want, binary.LittleEndian, math.Float64bits(0.5))
	want.WriteString("l\xac\x02" + "d")
	want.Write(d[:])
	want.WriteString("n")
	if sum := sha256.Sum256(want.Bytes()); got != sum {
		t.Errorf("digest %x, want that of the documented bytes, %x", got, sum)
	}
}

// item is one call of the encoder.
type item struct {
	kind byte
	text string
	n    int64
	x    float64
	d    Digest
}

func (i item) add(e *Encoder) {
	switch i.kind {
	case tagText:
		e.Text(i.text)
	case tagInt:
		e.Int(i.n)
	case tagFloat:
		e.Float(i.x)
	case tagDigest:
		e.Digest(i.d)
	case tagList:
		e.List(int(i.n))
	case tagNull:
		e.Null()
	}
}

func drawItem(t *rapid.T) item {
	i := item{kind: rapid.SampledFrom([]byte{tagText, tagInt, tagFloat, tagDigest, tagList, tagNull}).Draw(t, "kind")}
	switch i.kind {
	case tagText:
		i.text = rapid.OneOf(rapid.StringOfN(rapid.RuneFrom([]rune("tifdln\x00\x01\x08")), 0, 12, -1), rapid.String(),
			rapid.Just(strings.Repeat("long", 2000))).Draw(t, "text")
	case tagInt:
		i.n = rapid.Int64().Draw(t, "int")
	case tagFloat:
		i.x = rapid.Float64().Filter(func(x float64) bool { return x == x && (x != 0 || !math.Signbit(x)) }).Draw(t, "float")
	case tagDigest:
		copy(i.d[:], rapid.SliceOfN(rapid.Byte(), 16, 16).Draw(t, "digest"))
	case tagList:
		i.n = int64(rapid.IntRange(0, 1<<20).Draw(t, "list"))
	}
	return i
}

// decode reads the items back out of the canonical bytes; that it can is why
// no two lists of items encode alike.
func decode(b []byte) (out []item) {
	for len(b) > 0 {
		i := item{kind: b[0]}
		b = b[1:]
		switch i.kind {
		case tagText, tagList:
			n, w := binary.Uvarint(b)
			b = b[w:]
			if i.kind == tagList {
				i.n = int64(n)
				break
			}
			i.text = string(b[:n])
			b = b[n:]
		case tagInt:
			i.n = int64(binary.LittleEndian.Uint64(b))
			b = b[8:]
		case tagFloat:
			i.x = math.Float64frombits(binary.LittleEndian.Uint64(b))
			b = b[8:]
		case tagDigest:
			i.d = Digest(b[:16])
			b = b[16:]
		}
		out = append(out, i)
	}
	return out
}

// recorder is a hash that keeps what is written to it.
type recorder struct{ bytes.Buffer }

func (r *recorder) Sum(b []byte) []byte { return append(b, make([]byte, 32)...) }
func (r *recorder) Size() int           { return 32 }
func (r *recorder) BlockSize() int      { return 64 }

func TestEveryListOfItemsCanBeReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var r recorder
		e := &Encoder{hash: &r}
		items := rapid.SliceOfN(rapid.Custom(drawItem), 0, 20).Draw(t, "items")
		for _, i := range items {
			i.add(e)
		}
		e.Sum256()
		if got := decode(r.Bytes()); !slices.Equal(got, items) {
			t.Fatalf("encoded %v, read back %v", items, got)
		}
	})
}

func TestResetEncoderGivesTheSameDigests(t *testing.T) {
	used := New("something else").Text(strings.Repeat("x", 3*flushAt)).Int(3)
	used.Sum()
	used.Int(4)
	if got, want := used.Reset("tieline pair 1").Text("a").Sum(), New("tieline pair 1").Text("a").Sum(); got != want {
		t.Errorf("a reused encoder gives %s, a new one %s", got, want)
	}
	if a, b := New("tieline pair 1").Text("a").Sum(), New("tieline analysis 1").Text("a").Sum(); a == b {
		t.Error("the domain changes nothing")
	}
}

func TestFloatZeroAndNaN(t *testing.T) {
	if a, b := New("d").Float(math.Copysign(0, -1)).Sum(), New("d").Float(0).Sum(); a != b {
		t.Errorf("-0 digests as %s, 0 as %s", a, b)
	}
	defer func() {
		if recover() == nil {
			t.Error("NaN was encoded")
		}
	}()
	New("d").Float(math.NaN())
}

func TestEncoderAllocatesNothingPerItem(t *testing.T) {
	e := New("d")
	var d Digest
	text := strings.Repeat("a cell", 30)
	n := testing.AllocsPerRun(100, func() {
		e.Reset("d")
		for range 100 {
			e.Text(text).Int(1).Float(2).Digest(d).List(3).Null()
		}
		d = e.Sum()
	})
	if n > 0 {
		t.Errorf("%v allocations for 600 items", n)
	}
}

func TestDigestTextReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var d Digest
		copy(d[:], rapid.SliceOfN(rapid.Byte(), 16, 16).Draw(t, "digest"))
		if got, err := ParseDigest(d.String()); err != nil || got != d {
			t.Fatalf("%s reads back as %s, %v", d, got, err)
		}
	})
	for _, bad := range []string{"", "ab", strings.Repeat("g", 32), strings.Repeat("a", 33)} {
		if _, err := ParseDigest(bad); err == nil {
			t.Errorf("%q passes for a digest", bad)
		}
	}
}

func TestDrawKeys(t *testing.T) {
	type args struct {
		seed                  uint64
		source, sample, label string
		quantity, value       string
		k                     int
	}
	base := args{1, "ashgrove-2026", "AG1", "7", "CaO", "1.90", 0}
	key := func(a args) [32]byte {
		return DrawKey(a.seed, a.source, a.sample, a.label, "Pl", a.quantity, a.value, a.k)
	}
	seen := map[[32]byte]string{key(base): "the same measurement"}
	for what, change := range map[string]func(*args){
		"another seed":     func(a *args) { a.seed = 2 },
		"another source":   func(a *args) { a.source = "b" },
		"another sample":   func(a *args) { a.sample = "AG2" },
		"another label":    func(a *args) { a.label = "8" },
		"another quantity": func(a *args) { a.quantity = "K2O" },
		"another spelling": func(a *args) { a.value = "1.9" },
		"a twin":           func(a *args) { a.k = 1 },
		"a shifted border": func(a *args) { a.sample, a.label = "AG", "17" },
	} {
		a := base
		change(&a)
		if other, same := seen[key(a)]; same {
			t.Errorf("%s has the key of %s", what, other)
		}
		seen[key(a)] = what
	}
	if first, again := key(base), key(base); first != again {
		t.Error("the same measurement has two keys")
	}
	if a, b := DrawKeyOf("pressure", 1, "10", "1.5"), DrawKeyOf("session", 1, "10", "1.5"); a == b {
		t.Error("a pressure statement and a session share a key")
	}
}

// The digests below were computed from the documented bytes with Python's
// hashlib. They are of this encoding and never change while domains end
// in 1: archives compare rows by them.
func TestGoldenDigests(t *testing.T) {
	key := DrawKey(1, "ashgrove-2026", "AG1", "7", "Pl", "CaO", "1.90", 0)
	shared := DrawKeyOf("pressure", 1, "10", "1.5")
	for what, c := range map[string]struct{ got, want string }{
		"items":    {New("tieline analysis 1").Text("SiO2").Float(64.6).Int(-3).List(2).Null().Digest(Digest{9}).Sum().String(), "45d4d7f8260b5850bba17522ff745648"},
		"draw":     {Digest(key[:16]).String(), "928952dfa2a7fb50ac993c4794eb33d1"},
		"pressure": {Digest(shared[:16]).String(), "6c656d0d1d1025ad1b5191e1bb1a9544"},
	} {
		if c.got != c.want {
			t.Errorf("%s: digest %s, was %s", what, c.got, c.want)
		}
	}
}

// cells of a typical analysis: twelve oxides, eight texts.
var cells = []string{"ashgrove-2026", "AG1-17", "AG1", "plagioclase", "rim", "g3", "Ashgrove gneiss", "p8",
	"64.61", "0.02", "20.60", "0.00", "0.11", "0.01", "0.00", "1.90", "0.05", "5.60", "6.90", "0.01"}

func BenchmarkLineageOfAnalysis(b *testing.B) {
	b.Run("encoder", func(b *testing.B) {
		e := New("tieline analysis 1")
		for b.Loop() {
			e.Reset("tieline analysis 1")
			for _, c := range cells {
				e.Text(c)
			}
			e.Sum()
		}
	})
	b.Run("baseline csv", func(b *testing.B) { // the same cells written as CSV, unhashed
		var out bytes.Buffer
		w := csv.NewWriter(&out)
		for b.Loop() {
			out.Reset()
			w.Write(cells)
			w.Flush()
		}
	})
	b.Run("baseline ParseFloat", func(b *testing.B) {
		for b.Loop() {
			for _, c := range cells[8:] {
				strconv.ParseFloat(c, 64)
			}
		}
	})
}
