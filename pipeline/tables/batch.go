package tables

import (
	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/array"
	"github.com/apache/arrow/go/v17/arrow/bitutil"
	"github.com/apache/arrow/go/v17/arrow/memory"

	"tieline/pipeline/lineage"
	"tieline/thermo/chem"
)

// flush turns the staged rows into a batch. Buffers are made at their final
// size and handed to Arrow: its builders round each up to a power of two and
// pad it, a quarter more over a million analyses.
func (b *Builder) flush() {
	if len(b.rows) == 0 {
		return
	}
	f, holds := flusher{rows: b.rows}, survey(b.rows)
	out := &Batch{Source: b.source, Kind: b.kind, oxygens: b.rows[0].Composition.Oxygens}
	for t := range out.text {
		if holds.text[t] {
			out.text[t] = f.text(Text(t).String(), func(r *Analysis) string { return r.Text[t] })
		}
	}
	out.phase = f.text("phase", func(r *Analysis) string { return string(r.Phase) })
	out.line = f.int32s("line", func(r *Analysis) int32 { return int32(r.Line) })
	if holds.column {
		out.column = f.int32s("column", func(r *Analysis) int32 { return int32(r.Column) })
	}
	for n := range out.number {
		if holds.number[n] {
			out.number[n] = f.floats(Number(n).String(), func(r *Analysis) (float64, bool) { return r.Number[n], r.Has[n] })
		}
	}
	for m := range chem.NumMeasurands {
		if c, some := f.measured(m, &holds); some {
			out.measured = append(out.measured, c)
		}
		if holds.sigma[m] {
			out.sigma[m] = f.floats(m.String()+" sigma", func(r *Analysis) (float64, bool) { return r.Sigma[m], r.Sigma[m] != 0 })
		}
	}
	if b.kind == chem.EndMember {
		out.endMemberSum = f.floats("end_member_sum", func(r *Analysis) (float64, bool) { return r.EndMemberSum, true })
	}
	out.lineage = f.lineages()
	out.record = array.NewRecord(arrow.NewSchema(f.fields, nil), f.arrays, int64(len(b.rows)))
	b.done = append(b.done, out)
	clear(b.rows) // let go of the cells' texts
	b.rows, b.text = b.rows[:0], 0
}

// held says what some row of a batch holds; columns of the rest are not made.
type held struct {
	column              bool
	text                [NumTexts]bool
	number              [NumNumbers]bool
	value, state, sigma [chem.NumMeasurands]bool
}

// survey looks at the rows one after the other: a column at a time each of its
// two hundred looks would fetch every row from memory again.
func survey(rows []Analysis) (h held) {
	for i := range rows {
		r := &rows[i]
		h.column = h.column || r.Column != 0
		for t := range r.Text {
			h.text[t] = h.text[t] || r.Text[t] != ""
		}
		for n := range r.Number {
			h.number[n] = h.number[n] || r.Has[n]
		}
		for m := range chem.NumMeasurands {
			s := r.Composition.State[m]
			h.value[m] = h.value[m] || hasValue(r, m)
			h.state[m] = h.state[m] || s == chem.NotAnalysed || s == chem.BelowDetection
			h.sigma[m] = h.sigma[m] || r.Sigma[m] != 0
		}
	}
	return h
}

// hasValue is also true of a detection limit.
func hasValue(r *Analysis, m chem.Measurand) bool {
	return r.Composition.State[m] == chem.Measured || r.Composition.Value[m] != 0
}

// flusher makes Arrow columns of staged rows and notes them for the record.
type flusher struct {
	rows   []Analysis
	fields []arrow.Field
	arrays []arrow.Array
}

func (f *flusher) add(name string, a arrow.Array, nullable bool) {
	f.fields = append(f.fields, arrow.Field{Name: name, Type: a.DataType(), Nullable: nullable})
	f.arrays = append(f.arrays, a)
}

// bitmap has a bit set for every row that is valid; nil where all are.
func (f *flusher) bitmap(valid func(*Analysis) bool) (bits *memory.Buffer, nulls int) {
	set := make([]byte, bitutil.BytesForBits(int64(len(f.rows))))
	for i := range f.rows {
		if valid(&f.rows[i]) {
			bitutil.SetBit(set, i)
		} else {
			nulls++
		}
	}
	if nulls == 0 {
		return nil, 0
	}
	return memory.NewBufferBytes(set), nulls
}

func (f *flusher) data(t arrow.DataType, nulls int, buffers ...*memory.Buffer) *array.Data {
	return array.NewData(t, len(f.rows), buffers, nil, nulls, 0)
}

// measured makes the columns of one measurand; some is false where it has none.
func (f *flusher) measured(m chem.Measurand, holds *held) (c measuredColumn, some bool) {
	c.of = m
	if holds.value[m] {
		c.value = f.floats(m.String(), func(r *Analysis) (float64, bool) { return r.Composition.Value[m], hasValue(r, m) })
	}
	if holds.state[m] {
		c.state = f.states(m.String()+" state", m)
	}
	return c, holds.value[m] || holds.state[m]
}

// floats makes a column of numbers, -0 as 0.
func (f *flusher) floats(name string, get func(*Analysis) (float64, bool)) *array.Float64 {
	bits, nulls := f.bitmap(func(r *Analysis) bool { _, ok := get(r); return ok })
	values := make([]float64, len(f.rows))
	for i := range f.rows {
		if x, ok := get(&f.rows[i]); ok && x != 0 {
			values[i] = x
		}
	}
	a := array.NewFloat64Data(f.data(arrow.PrimitiveTypes.Float64, nulls, bits,
		memory.NewBufferBytes(arrow.Float64Traits.CastToBytes(values))))
	f.add(name, a, nulls > 0)
	return a
}

func (f *flusher) int32s(name string, get func(*Analysis) int32) *array.Int32 {
	values := make([]int32, len(f.rows))
	for i := range f.rows {
		values[i] = get(&f.rows[i])
	}
	a := array.NewInt32Data(f.data(arrow.PrimitiveTypes.Int32, 0, nil,
		memory.NewBufferBytes(arrow.Int32Traits.CastToBytes(values))))
	f.add(name, a, false)
	return a
}

func (f *flusher) states(name string, m chem.Measurand) *array.Uint8 {
	values := make([]uint8, len(f.rows))
	for i := range f.rows {
		values[i] = uint8(f.rows[i].Composition.State[m])
	}
	a := array.NewUint8Data(f.data(arrow.PrimitiveTypes.Uint8, 0, nil, memory.NewBufferBytes(values)))
	f.add(name, a, false)
	return a
}

func (f *flusher) lineages() *array.FixedSizeBinary {
	t := &arrow.FixedSizeBinaryType{ByteWidth: len(lineage.Digest{})}
	values := make([]byte, 0, len(f.rows)*t.ByteWidth)
	for i := range f.rows {
		values = append(values, f.rows[i].Lineage[:]...)
	}
	a := array.NewFixedSizeBinaryData(f.data(t, 0, nil, memory.NewBufferBytes(values)))
	f.add("lineage", a, false)
	return a
}

// textColumn is one text: nothing, strings, or codes into a few strings.
type textColumn struct {
	words *array.String
	codes []uint8      // nil: words hold the rows
	nulls *array.Uint8 // the codes as Arrow has them, nulls included
}

func (c *textColumn) at(i int) string {
	switch {
	case c.words == nil:
		return ""
	case c.codes == nil:
		return c.words.Value(i) // "" where null
	case c.nulls.IsNull(i):
		return ""
	}
	return c.words.Value(int(c.codes[i]))
}

// maxWords is how many different texts a column may have and be stored as one
// byte a row.
const maxWords = 256

// text stores a column as codes where its texts repeat at least once on
// average; nothing where all are "".
func (f *flusher) text(name string, get func(*Analysis) string) textColumn {
	bits, nulls := f.bitmap(func(r *Analysis) bool { return get(r) != "" })
	if nulls == len(f.rows) {
		return textColumn{}
	}
	words, codes := f.words(get)
	if codes == nil || 2*len(words) > len(f.rows)-nulls {
		all := make([]string, len(f.rows))
		for i := range f.rows {
			all[i] = get(&f.rows[i])
		}
		a := array.NewStringData(f.data(arrow.BinaryTypes.String, nulls, bits, offsets(all), contents(all)))
		f.add(name, a, nulls > 0)
		return textColumn{words: a}
	}
	dict := array.NewStringData(array.NewData(arrow.BinaryTypes.String, len(words),
		[]*memory.Buffer{nil, offsets(words), contents(words)}, nil, 0, 0))
	index := array.NewUint8Data(f.data(arrow.PrimitiveTypes.Uint8, nulls, bits, memory.NewBufferBytes(codes)))
	t := &arrow.DictionaryType{IndexType: arrow.PrimitiveTypes.Uint8, ValueType: arrow.BinaryTypes.String}
	f.add(name, array.NewDictionaryArray(t, index, dict), nulls > 0)
	return textColumn{words: dict, codes: codes, nulls: index}
}

// words gives the different texts in order of first use, and each row's; codes
// is nil where there are more than maxWords.
func (f *flusher) words(get func(*Analysis) string) (words []string, codes []uint8) {
	seen := map[string]uint8{}
	codes = make([]uint8, len(f.rows))
	for i := range f.rows {
		s := get(&f.rows[i])
		if s == "" {
			continue
		}
		code, ok := seen[s]
		if !ok {
			if len(words) == maxWords {
				return nil, nil
			}
			code = uint8(len(words))
			seen[s] = code
			words = append(words, s)
		}
		codes[i] = code
	}
	return words, codes
}

// offsets and contents are the two buffers of an Arrow string column.
func offsets(texts []string) *memory.Buffer {
	at := make([]int32, len(texts)+1)
	for i, s := range texts {
		at[i+1] = at[i] + int32(len(s))
	}
	return memory.NewBufferBytes(arrow.Int32Traits.CastToBytes(at))
}

func contents(texts []string) *memory.Buffer {
	n := 0
	for _, s := range texts {
		n += len(s)
	}
	all := make([]byte, 0, n)
	for _, s := range texts {
		all = append(all, s...)
	}
	return memory.NewBufferBytes(all)
}
