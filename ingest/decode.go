package ingest

import (
	"bufio"
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"hash"
	"io"

	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"

	"tieline/pipeline/problem"
)

// chunk is how many bytes are read, decoded and looked over at a time.
const chunk = 64 << 10

// decoded is a file's text as UTF-8 without a byte order mark. The raw bytes
// are hashed and counted as they pass.
type decoded struct {
	io.Reader
	raw      *counted
	encoding string // as found: the declared one, or the byte order mark's
	exact    bool   // the bytes are the file's own, undecoded UTF-8
}

// counted hashes and counts what is read through it.
type counted struct {
	from  io.Reader
	hash  hash.Hash
	bytes int64
}

func (c *counted) Read(p []byte) (int, error) {
	n, err := c.from.Read(p)
	c.hash.Write(p[:n])
	c.bytes += int64(n)
	return n, err
}

// sum is the SHA-256 of the whole file, of which what is left is read now.
func (c *counted) sum() (string, error) {
	_, err := io.Copy(io.Discard, c)
	return hex.EncodeToString(c.hash.Sum(nil)), err
}

// The encodings a manifest may declare, besides UTF-8. A mark in the file is
// taken off before decoding.
var encodings = map[string]encoding.Encoding{
	"utf-16le":     unicode.UTF16(unicode.LittleEndian, unicode.IgnoreBOM),
	"utf-16be":     unicode.UTF16(unicode.BigEndian, unicode.IgnoreBOM),
	"windows-1252": charmap.Windows1252,
	"iso-8859-15":  charmap.ISO8859_15,
	"macintosh":    charmap.Macintosh,
}

// Byte order marks; the UTF-32 one begins as the UTF-16 one does and goes first.
var marks = []struct{ bytes, encoding string }{
	{"\xff\xfe\x00\x00", "utf-32le"},
	{"\x00\x00\xfe\xff", "utf-32be"},
	{"\xef\xbb\xbf", "utf-8"},
	{"\xff\xfe", "utf-16le"},
	{"\xfe\xff", "utf-16be"},
}

// Files that are no text, by their first bytes.
var magics = []struct{ bytes, what string }{
	{"PK\x03\x04", "a ZIP archive or XLSX workbook"},
	{"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "an XLS workbook or another old office file"},
	{"\x1f\x8b", "a gzip file"},
	{"\x89PNG\r\n", "a PNG image"},
	{"\xff\xd8\xff", "a JPEG image"},
	{"GIF8", "a GIF image"},
	{"%PDF-", "a PDF document"},
	{"{\\rtf", "an RTF document"},
	{"PAR1", "a Parquet file"},
	{"ARROW1", "an Arrow file"},
	{"SQLite format 3\x00", "an SQLite database"},
	{"BZh", "a bzip2 file"},
	{"\xfd7zXZ\x00", "an xz file"},
	{"7z\xbc\xaf\x27\x1c", "a 7z archive"},
	{"\x28\xb5\x2f\xfd", "a zstd file"},
	{"\x7fELF", "a program"},
	{"\x89HDF\r\n", "an HDF5 file"},
}

// sniffed is how many bytes decide whether a file is text.
const sniffed = 512

// decode opens a file's text in the declared encoding. A byte order mark says
// more than the default; against another declaration it is a problem, as is a
// file that is no text at all.
func decode(file io.Reader, declared string) (*decoded, *problem.Problem) {
	raw := &counted{from: file, hash: sha256.New()}
	in := bufio.NewReaderSize(raw, chunk)
	head, err := in.Peek(sniffed)
	if len(head) == 0 && err != io.EOF {
		return nil, readFailure(err)
	}
	if len(head) == 0 {
		return nil, &problem.Problem{Kind: "file", Found: "the file is empty", Expected: "a header and rows"}
	}
	out := &decoded{Reader: in, raw: raw, encoding: declared}
	marked, size := byteOrderMark(head)
	if marked != "" {
		if p := agree(marked, declared); p != nil {
			return nil, p
		}
		out.encoding = marked
		in.Discard(size) // peeked, so it is there
	}
	if p := binary(head[size:], out.encoding); p != nil {
		return nil, p
	}
	if e := encodings[out.encoding]; e != nil {
		out.Reader = e.NewDecoder().Reader(in)
	}
	out.exact = out.Reader == in
	return out, nil
}

func byteOrderMark(head []byte) (encoding string, size int) {
	for _, m := range marks {
		if bytes.HasPrefix(head, []byte(m.bytes)) {
			return m.encoding, len(m.bytes)
		}
	}
	return "", 0
}

// agree says what is wrong with a byte order mark beside a declaration. utf-8
// is the default, hence no declaration against UTF-16.
func agree(marked, declared string) *problem.Problem {
	switch {
	case marked == "utf-32le" || marked == "utf-32be":
		return &problem.Problem{Kind: "encoding", Line: 1, Found: "the byte order mark of UTF-32",
			Expected: "UTF-8, UTF-16 or a declared encoding", Do: "save the file as UTF-8"}
	case marked == declared || declared == "utf-8":
		return nil
	}
	return &problem.Problem{Kind: "encoding", Line: 1, Found: "the byte order mark of " + marked,
		Expected: declared + " as the manifest declares", Do: fmt.Sprintf("set encoding = %q or leave it out", marked)}
}

// binary says what the file is where it is no text.
func binary(head []byte, encoding string) *problem.Problem {
	for _, m := range magics {
		if bytes.HasPrefix(head, []byte(m.bytes)) {
			return binaryProblem(m.what, "save the table as CSV with UTF-8 text")
		}
	}
	if encoding == "utf-16le" || encoding == "utf-16be" {
		return nil
	}
	even, odd := 0, 0
	for i, c := range head {
		switch {
		case c != 0:
		case i%2 == 0:
			even++
		default:
			odd++
		}
	}
	switch {
	case even+odd == 0:
		return nil
	case even == 0 && odd > len(head)/4:
		return binaryProblem("every other byte NUL, as in UTF-16 without a byte order mark", `set encoding = "utf-16le"`)
	case odd == 0 && even > len(head)/4:
		return binaryProblem("every other byte NUL, as in UTF-16 without a byte order mark", `set encoding = "utf-16be"`)
	}
	return binaryProblem("NUL bytes, as in no text", "save the table as CSV with UTF-8 text")
}

func binaryProblem(found, do string) *problem.Problem {
	return &problem.Problem{Kind: "binary", Found: found, Expected: "a text file", Do: do}
}

func readFailure(err error) *problem.Problem {
	return &problem.Problem{Kind: "file", Found: "reading failed: " + cause(err), Do: "check the disk and read again"}
}
