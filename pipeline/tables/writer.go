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

// These decide the bytes of every file. parquet-go looks at page sizes after
// every 64 rows of a call, so rows reach it in batches of a multiple of that,
// whatever batches they come in.
const (
	batchRows    = 1024
	rowGroupRows = 128 * 1024
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
	content content
	batch   []T
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
	w := &Writer[T]{table: table, file: file, hash: sha256.New(), batch: make([]T, 0, batchRows)}
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
	for len(rows) > 0 && w.err == nil {
		n := min(len(rows), batchRows-len(w.batch))
		from := len(w.batch)
		w.batch = append(w.batch, rows[:n]...)
		w.take(from)
		rows = rows[n:]
		if len(w.batch) == batchRows {
			w.flush()
		}
	}
	return w.err
}

// take checks and digests the batch's rows from one on, and makes them its own.
func (w *Writer[T]) take(from int) {
	for i := from; i < len(w.batch); i++ {
		row := reflect.ValueOf(&w.batch[i]).Elem()
		if err := w.content.add(row, i); err != nil {
			w.err = fmt.Errorf("table %s: row %d (%s): %w", w.table, w.rows+1, w.content.name(row), err)
			return
		}
		w.rows++
	}
}

func (w *Writer[T]) flush() {
	if w.err != nil {
		return
	}
	if _, err := w.parquet.Write(w.batch); err != nil {
		w.err = explain(w.table, err)
	}
	clear(w.batch)
	w.batch = w.batch[:0]
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

// content checks a batch's rows and digests their canonical encoding. What a
// row points to it copies to a place of the batch, for the row's owner may use
// the memory again before the batch is full.
type content struct {
	columns []column
	places  []place // of each column
	nonNull []int64 // of each column
	encoder *lineage.Encoder

	microSum *int64 // of t_c, nil where there is no such column
}

// place holds a nullable column's values, by row of the batch.
type place struct {
	floats []float64
	ints   []int64
	bools  []bool
}

func newContent(table string, columns []column) content {
	c := content{columns: columns, places: make([]place, len(columns)), nonNull: make([]int64, len(columns)),
		encoder: lineage.New("tieline table 1").Text(table).List(len(columns))}
	for i, col := range columns {
		c.encoder.Text(col.name)
		if col.name == "t_c" {
			c.microSum = new(int64)
		}
		switch {
		case !col.nullable:
		case col.kind == reflect.Float64:
			c.places[i].floats = make([]float64, batchRows)
		case col.kind == reflect.Int64:
			c.places[i].ints = make([]int64, batchRows)
		case col.kind == reflect.Bool:
			c.places[i].bools = make([]bool, batchRows)
		}
	}
	return c
}

// add takes row number at of the batch.
func (c *content) add(row reflect.Value, at int) error {
	for i := range c.columns {
		var err error
		switch v, col := row.Field(i), &c.columns[i]; {
		case col.kind == reflect.String:
			err = c.text(v.String(), col.nullable)
			if !col.nullable || v.Len() > 0 {
				c.nonNull[i]++
			}
		case !col.nullable:
			err = c.plain(v)
			c.nonNull[i]++
		case v.IsNil():
			c.encoder.Null()
		default:
			err = c.pointer(v, &c.places[i], at)
			c.count(i, at)
		}
		if err != nil {
			return fmt.Errorf("column %s: %w", c.columns[i].name, err)
		}
	}
	return nil
}

// count notes a nullable number that is there.
func (c *content) count(i, at int) {
	c.nonNull[i]++
	if c.columns[i].name == "t_c" {
		*c.microSum += int64(math.Round(float64(c.places[i].floats[at] * 1e6)))
	}
}

func (c *content) text(s string, nullable bool) error {
	switch {
	case s == "" && nullable:
		c.encoder.Null()
	case !utf8.ValidString(s):
		return fmt.Errorf("%s is not UTF-8", problem.Quote(s))
	default:
		c.encoder.Text(s)
	}
	return nil
}

func (c *content) plain(v reflect.Value) error {
	switch v.Kind() {
	case reflect.Int64:
		c.encoder.Int(v.Int())
	case reflect.Bool:
		c.encoder.Int(number(v.Bool()))
	case reflect.Float64:
		x, err := c.float(v.Float())
		v.SetFloat(x)
		return err
	}
	return nil
}

func (c *content) pointer(v reflect.Value, to *place, at int) error {
	var err error
	switch {
	case to.floats != nil:
		to.floats[at], err = c.float(v.Elem().Float())
		v.Set(reflect.ValueOf(&to.floats[at]))
	case to.ints != nil:
		to.ints[at] = v.Elem().Int()
		v.Set(reflect.ValueOf(&to.ints[at]))
		c.encoder.Int(to.ints[at])
	case to.bools != nil:
		to.bools[at] = v.Elem().Bool()
		v.Set(reflect.ValueOf(&to.bools[at]))
		c.encoder.Int(number(to.bools[at]))
	}
	return err
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

func number(b bool) int64 {
	if b {
		return 1
	}
	return 0
}

// name is the row's first column, as people are shown it.
func (c *content) name(row reflect.Value) string {
	return c.columns[0].name + " " + problem.Quote(fmt.Sprint(row.Field(0).Interface()))
}
