package tables

import (
	"bufio"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"syscall"
	"unicode/utf8"

	"github.com/parquet-go/parquet-go"

	"tieline/pipeline/lineage"
	"tieline/pipeline/problem"
)

// These decide the bytes of every file: rows reach parquet-go in batches of one
// size, whatever batches they come in, and it looks at the page size after each.
const (
	batchRows    = 1024
	rowGroupRows = 32 * 1024
	pageBytes    = 256 * 1024
)

// Written says what a table's file holds.
type Written struct {
	Table string `json:"table"`
	File  string `json:"file"` // below the result folder, with slashes
	Rows  int64  `json:"rows"`
	Bytes int64  `json:"bytes"`
	// SHA256 is of the file's bytes.
	SHA256 string `json:"sha256"`
	// ContentSHA256 is of the rows in a canonical encoding: the table's name,
	// the columns' names, then every value in row and column order. It stays
	// the same when the encoder of the file changes.
	ContentSHA256 string `json:"content_sha256"`
	// NonNull counts, per column, the rows that hold a value, for readers to
	// check themselves against; so does TCMicroSum, the sum of
	// round(t_c * 1e6) over a table with temperatures.
	NonNull    map[string]int64 `json:"non_null"`
	TCMicroSum *int64           `json:"t_c_micro_sum,omitempty"`
}

// Writer writes one table. It is for one goroutine.
type Writer[T any] struct {
	table   string
	file    *os.File
	buffer  *bufio.Writer
	hash    hash.Hash
	bytes   int64
	parquet *parquet.GenericWriter[T]
	content *content
	rows    int64
	err     error // the first; nothing is written after it
}

// Create opens dir/tables/<table>.parquet, which must not exist.
func Create[T any](dir string, table string) (*Writer[T], error) {
	path := filepath.Join(dir, "tables", table+".parquet")
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		return nil, explain(table, err)
	}
	file, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return nil, explain(table, err)
	}
	w := &Writer[T]{table: table, file: file, hash: sha256.New()}
	w.buffer = bufio.NewWriterSize(io.MultiWriter(file, w.hash, (*counter)(&w.bytes)), 256*1024)
	columns := columnsOf(reflect.TypeFor[T]())
	w.content = newContent(table, columns)
	w.parquet = parquet.NewGenericWriter[T](w.buffer, options(table, columns)...)
	return w, nil
}

func options(table string, columns []column) []parquet.WriterOption {
	o := []parquet.WriterOption{
		&parquet.WriterConfig{CreatedBy: "tieline"}, // parquet.CreatedBy adds version and build
		parquet.Compression(newCodec()),
		parquet.PageBufferSize(pageBytes),
		parquet.MaxRowsPerRowGroup(rowGroupRows),
		parquet.KeyValueMetadata("table", table),
	}
	for _, c := range columns {
		o = append(o, parquet.KeyValueMetadata(c.name+".doc", c.doc))
		if c.unit != "" {
			o = append(o, parquet.KeyValueMetadata(c.name+".unit", c.unit))
		}
	}
	return o
}

// counter counts the bytes that reach the file.
type counter int64

func (c *counter) Write(b []byte) (int, error) {
	*c += counter(len(b))
	return len(b), nil
}

// Write adds rows, which it does not keep or change. It refuses a number that
// is not finite and a text that is not UTF-8, naming table, row and column;
// -0 becomes 0. After an error every Write and Close gives that error.
func (w *Writer[T]) Write(rows []T) error {
	for i := range rows {
		if w.err != nil {
			break
		}
		row := reflect.ValueOf(&rows[i]).Elem()
		if err := w.content.add(row); err != nil {
			w.err = fmt.Errorf("table %s: row %d (%s): %w", w.table, w.rows+1, w.content.name(row), err)
			break
		}
		if w.rows++; w.rows%batchRows == 0 {
			w.flush()
		}
	}
	return w.err
}

// flush hands the values on column by column. As rows, parquet-go 0.32.0 writes
// some NULL texts as "": in writeRowsFuncOfOptional it takes a run of values
// followed by NULLs to the end of 64 rows for values throughout where the run is
// as long as the part of the 64 before it.
func (w *Writer[T]) flush() {
	for i, c := range w.parquet.ColumnWriters() {
		if values := w.content.take(i); w.err == nil && len(values) > 0 {
			_, err := c.WriteRowValues(values)
			w.err = explain(w.table, err)
		}
	}
	if w.err == nil && w.rows%rowGroupRows == 0 {
		w.err = explain(w.table, w.parquet.Flush())
	}
}

// Close finishes the file and puts it on the disk. It closes the file in any
// case; a table that had an error is no table.
func (w *Writer[T]) Close() (Written, error) {
	w.flush()
	for _, finish := range []func() error{w.parquet.Close, w.buffer.Flush, w.file.Sync} {
		if w.err == nil {
			w.err = explain(w.table, finish())
		}
	}
	if err := w.file.Close(); w.err == nil {
		w.err = explain(w.table, err)
	}
	if w.err != nil {
		return Written{}, w.err
	}
	content := w.content.encoder.Sum256()
	nonNull := map[string]int64{}
	for i, c := range w.content.columns {
		nonNull[c.name] = w.content.nonNull[i]
	}
	return Written{
		NonNull: nonNull, TCMicroSum: w.content.microSum,
		Table: w.table, File: "tables/" + w.table + ".parquet", Rows: w.rows, Bytes: w.bytes,
		SHA256: hex.EncodeToString(w.hash.Sum(nil)), ContentSHA256: hex.EncodeToString(content[:]),
	}, nil
}

// explain words an error of the file system; nil stays nil.
func explain(table string, err error) error {
	switch {
	case err == nil:
		return nil
	case errors.Is(err, syscall.ENOSPC), errors.Is(err, syscall.EDQUOT):
		return fmt.Errorf("table %s: the disk is full: %w; make room, or write elsewhere with --out", table, err)
	}
	return fmt.Errorf("table %s: %w", table, err)
}

// content checks rows, digests their canonical encoding, and holds the values
// that are not yet handed on.
type content struct {
	columns []column
	cells   []cells // of each column, a batch at most
	nonNull []int64 // of each column
	encoder *lineage.Encoder
	values  []parquet.Value // of the column that is handed on

	microSum *int64 // of t_c, nil where there is no such column
}

// cells are a column's values: a third of the memory of parquet-go's own, which
// a wide table spreads over more than the processor's cache.
type cells struct {
	bits  []uint64 // of a float64, an int64 or a bool; where a text ends in bytes
	bytes []byte   // of the texts, one after the other
	null  []bool   // of a nullable column
}

func newContent(table string, columns []column) *content {
	c := &content{columns: columns, cells: make([]cells, len(columns)), nonNull: make([]int64, len(columns)),
		encoder: lineage.New("tieline table 1").Text(table).List(len(columns))}
	for i, col := range columns {
		c.encoder.Text(col.name)
		if col.name == "t_c" {
			c.microSum = new(int64)
		}
		c.cells[i].bits = make([]uint64, 0, batchRows)
		if col.nullable {
			c.cells[i].null = make([]bool, 0, batchRows)
		}
	}
	return c
}

// add takes a row. Its values do not point to what may change.
func (c *content) add(row reflect.Value) error {
	for i := range c.columns {
		var err error
		switch col, v, to := &c.columns[i], row.Field(i), &c.cells[i]; {
		case col.kind == reflect.String:
			err = c.text(v.String(), col, to)
		case col.nullable:
			err = c.pointer(v, col, to)
		default:
			err = c.number(v, to)
		}
		if err != nil {
			return fmt.Errorf("column %s: %w", c.columns[i].name, err)
		}
	}
	return nil
}

func (c *content) text(s string, col *column, to *cells) error {
	if col.nullable {
		to.null = append(to.null, s == "")
	}
	to.bytes = append(to.bytes, s...)
	to.bits = append(to.bits, uint64(len(to.bytes)))
	switch {
	case s == "" && col.nullable:
		c.encoder.Null()
	case !utf8.ValidString(s):
		return fmt.Errorf("%s is not UTF-8", problem.Quote(s))
	default:
		c.encoder.Text(s)
	}
	return nil
}

func (c *content) pointer(v reflect.Value, col *column, to *cells) error {
	null := v.IsNil()
	to.null = append(to.null, null)
	if null {
		c.encoder.Null()
		to.bits = append(to.bits, 0)
		return nil
	}
	err := c.number(v.Elem(), to)
	if err == nil && c.microSum != nil && col.name == "t_c" {
		*c.microSum += int64(math.Round(float64(v.Elem().Float() * 1e6)))
	}
	return err
}

func (c *content) number(v reflect.Value, to *cells) error {
	switch v.Kind() {
	case reflect.Int64:
		c.encoder.Int(v.Int())
		to.bits = append(to.bits, uint64(v.Int()))
	case reflect.Bool:
		n := uint64(0)
		if v.Bool() {
			n = 1
		}
		c.encoder.Int(int64(n))
		to.bits = append(to.bits, n)
	case reflect.Float64:
		x, err := c.float(v.Float())
		to.bits = append(to.bits, math.Float64bits(x))
		return err
	}
	return nil
}

// take gives a column's values as parquet-go takes them, until the next take,
// and empties it.
func (c *content) take(i int) []parquet.Value {
	col, from := &c.columns[i], &c.cells[i]
	c.values = c.values[:0]
	start := uint64(0)
	for k, bits := range from.bits {
		if col.nullable && from.null[k] {
			c.values = append(c.values, parquet.NullValue())
			continue
		}
		var v parquet.Value
		switch col.kind {
		case reflect.String:
			v = parquet.ByteArrayValue(from.bytes[start:bits])
			start = bits
		case reflect.Int64:
			v = parquet.Int64Value(int64(bits))
		case reflect.Bool:
			v = parquet.BooleanValue(bits != 0)
		case reflect.Float64:
			v = parquet.DoubleValue(math.Float64frombits(bits))
		}
		if col.nullable {
			v = v.Level(0, 1, i)
		}
		c.values = append(c.values, v)
		c.nonNull[i]++
	}
	from.bits, from.bytes, from.null = from.bits[:0], from.bytes[:0], from.null[:0]
	return c.values
}

// float gives x as tables hold it: finite, and 0 for -0.
func (c *content) float(x float64) (float64, error) {
	if !finite(x) {
		return 0, fmt.Errorf("%v; a table holds finite numbers, and NULL where there is none", x)
	}
	if x == 0 {
		x = 0 // -0 too
	}
	c.encoder.Float(x)
	return x, nil
}

// name is the row's first column, as people are shown it.
func (c *content) name(row reflect.Value) string {
	return c.columns[0].name + " " + problem.Quote(fmt.Sprint(row.Field(0).Interface()))
}
