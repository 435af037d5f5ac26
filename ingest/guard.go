package ingest

import (
	"bytes"
	"fmt"
	"io"
	"unicode/utf8"

	"tieline/pipeline/problem"
)

const (
	maxCell = 1 << 20 // bytes of one cell, far above any remark a table holds
	maxRow  = 8 << 20 // bytes of one row, enough for 100000 columns of 80
)

// guard stands between the decoded text and the CSV reader, which reads a whole
// row before it says a word: it bounds cells and rows, knows where a quote that
// never ends was opened, makes carriage returns line ends where the file ends
// its lines with them, and notices bytes that call for a closer look. It follows
// the CSV reader's own rules of quoting.
type guard struct {
	from  io.Reader
	sep   byte
	exact bool // the text is the file's own bytes, which may be no UTF-8

	buf  []byte
	held bool   // a carriage return waits for the byte after it
	out  []byte // checked, not yet handed on
	err  error  // comes after out

	ends    lineEnd
	inQuote bool // of the first line, while ends is undecided

	state     quoting
	line      int // 1-based, of the next byte
	field     int // 1-based, of the next byte
	cell, row int // bytes so far
	openLine  int // where the cell of the next byte began
	bytes     int64
	last      byte
	suspect   bool // something may be no UTF-8, NUL, or not have decoded

	start []byte // of the text, to try another separator on
}

// startBytes is how much of the text is kept as its start: a header, mostly.
const startBytes = 16 << 10

// lineEnd says how the file ends its lines, which its first line shows.
type lineEnd uint8

const (
	undecided      lineEnd = iota
	lineFeed               // LF or CR LF
	carriageReturn         // CR alone
)

// quoting is where in a cell the next byte stands.
type quoting uint8

const (
	cellStart  quoting = iota
	bare               // in a cell without quotes
	quoted             // inside quotes
	quoteSeen          // after a quote inside quotes: the end, or half of a doubled one
	quoteCR            // after such a quote and a carriage return
	rowRefused         // the CSV reader refuses this line from here on
)

// fault is a problem that ends the reading of a source.
type fault struct{ problem.Problem }

func (f *fault) Error() string { return f.String() }

func newGuard(text *decoded, sep byte) *guard {
	return &guard{from: text, sep: sep, exact: text.exact, buf: make([]byte, chunk), line: 1, field: 1, openLine: 1}
}

func (g *guard) Read(p []byte) (int, error) {
	for len(g.out) == 0 {
		if g.err != nil {
			return 0, g.err
		}
		g.fill()
	}
	n := copy(p, g.out)
	g.out = g.out[n:]
	return n, nil
}

// fill reads and checks the next chunk.
func (g *guard) fill() {
	have := 0
	if g.held {
		g.buf[0], have, g.held = '\r', 1, false
	}
	n, err := g.from.Read(g.buf[have:])
	text := g.buf[:have+n]
	g.err = err
	if err == nil && g.ends != lineFeed && len(text) > 0 && text[len(text)-1] == '\r' {
		text, g.held = text[:len(text)-1], true
	}
	g.check(text)
}

// check makes text ready to be handed on, or stops before what is refused.
func (g *guard) check(text []byte) {
	if len(text) == 0 {
		return
	}
	g.endLines(text)
	g.start = append(g.start, text[:min(len(text), startBytes-len(g.start))]...)
	g.suspect = g.suspect || g.odd(text)
	near := g.cell+len(text) > maxCell || g.row+len(text) > maxRow
	if g.unquoted() && !near && bytes.IndexByte(text, '"') < 0 {
		g.skim(text)
	} else {
		text = text[:g.walk(text)]
	}
	g.bytes += int64(len(text))
	if len(text) > 0 {
		g.last = text[len(text)-1]
	}
	g.out = text
}

// endLines turns carriage returns into line feeds where the file means them so.
func (g *guard) endLines(text []byte) {
	if g.ends == undecided {
		g.decide(text)
	}
	if g.ends != carriageReturn {
		return
	}
	for i, c := range text {
		if c == '\r' && (i+1 == len(text) || text[i+1] != '\n') {
			text[i] = '\n'
		}
	}
}

func (g *guard) decide(text []byte) {
	for i, c := range text {
		switch {
		case c == '"':
			g.inQuote = !g.inQuote
		case g.inQuote:
		case c == '\n' || c == '\r' && i+1 < len(text) && text[i+1] == '\n':
			g.ends = lineFeed
			return
		case c == '\r':
			g.ends = carriageReturn
			return
		}
	}
}

// odd says whether cells must be looked at for bytes that are no text. A
// character cut by the end of a chunk makes it say so needlessly.
func (g *guard) odd(text []byte) bool {
	if bytes.IndexByte(text, 0) >= 0 {
		return true
	}
	if g.exact {
		return !utf8.Valid(text)
	}
	return bytes.Contains(text, []byte(replacement))
}

func (g *guard) unquoted() bool {
	return g.state == cellStart || g.state == bare || g.state == rowRefused
}

// skim passes over text without quotes.
func (g *guard) skim(text []byte) {
	if i := bytes.LastIndexByte(text, '\n'); i >= 0 {
		g.line += bytes.Count(text, []byte{'\n'})
		g.newRow()
		text = text[i+1:]
	}
	g.row += len(text)
	if i := bytes.LastIndexByte(text, g.sep); i >= 0 {
		g.field += bytes.Count(text, []byte{g.sep})
		g.cell, g.openLine = 0, g.line
		text = text[i+1:]
	}
	g.cell += len(text)
	switch {
	case g.state == rowRefused:
	case g.cell == 0:
		g.state = cellStart
	default:
		g.state = bare
	}
}

// walk passes over text byte by byte and gives how many bytes are in order.
func (g *guard) walk(text []byte) int {
	for i, c := range text {
		g.cell++
		g.row++
		g.step(c)
		if g.cell > maxCell || g.row > maxRow {
			g.err = g.tooLong()
			return i
		}
	}
	return len(text)
}

func (g *guard) step(c byte) {
	switch {
	case g.state == quoted:
		switch c {
		case '"':
			g.state = quoteSeen
		case '\n':
			g.line++
		}
	case c == '\n':
		g.line++
		g.newRow()
	case g.state == rowRefused:
	case g.state == quoteCR:
		g.state = rowRefused
	case c == g.sep:
		g.state, g.cell, g.openLine = cellStart, 0, g.line
		g.field++
	case c == '"':
		// opens a cell, is half of a doubled quote, or stands where none may
		g.state = [...]quoting{cellStart: quoted, bare: rowRefused, quoteSeen: quoted}[g.state]
	case g.state == quoteSeen && c == '\r':
		g.state = quoteCR
	case g.state == quoteSeen:
		g.state = rowRefused
	default:
		g.state = bare
	}
}

func (g *guard) newRow() {
	g.state, g.field, g.cell, g.row, g.openLine = cellStart, 1, 0, 0, g.line
}

// tooLong is the fault of a cell or a row past the limit. In quotes it may be
// that the closing quote is missing.
func (g *guard) tooLong() *fault {
	p := problem.Problem{Line: g.openLine, Column: g.field, Kind: "size", Do: "check the line ends and the separator"}
	switch {
	case g.cell <= maxCell:
		p.Column = 0
		p.Found = fmt.Sprintf("a row of more than %d MiB", maxRow>>20)
	case g.state == quoted:
		p.Found = fmt.Sprintf("a quote that does not end within %d MiB", maxCell>>20)
		p.Do = "close the quote, or remove it"
	default:
		p.Found = fmt.Sprintf("a cell of more than %d MiB", maxCell>>20)
	}
	return &fault{p}
}

// lines is how many lines there were once all is read.
func (g *guard) lines() int {
	if g.bytes > 0 && g.last != '\n' {
		return g.line
	}
	return g.line - 1
}
