package tables

import (
	"fmt"
	"reflect"
	"strings"

	"github.com/apache/arrow/go/v17/arrow"
)

// column is one field of a row type, as its tags declare it.
type column struct {
	name, unit, doc string
	kind            reflect.Kind // String, Float64, Int64 or Bool
	nullable        bool
}

// columnsOf reads the tags of a row type. It panics on a field that would not
// become the column it looks like; every row type passes through the tests.
func columnsOf(t reflect.Type) []column {
	columns := make([]column, t.NumField())
	for i := range columns {
		columns[i] = columnOf(t, t.Field(i))
	}
	return columns
}

func columnOf(t reflect.Type, f reflect.StructField) column {
	name, options, _ := strings.Cut(f.Tag.Get("parquet"), ",")
	c := column{name: name, unit: f.Tag.Get("unit"), doc: f.Tag.Get("doc"), kind: f.Type.Kind()}
	for o := range strings.SplitSeq(options, ",") {
		c.nullable = c.nullable || o == "optional"
	}
	pointer := c.kind == reflect.Pointer
	if pointer {
		c.kind = f.Type.Elem().Kind()
	}
	bad := func(why string) { panic(fmt.Sprintf("tables: %s.%s: %s", t.Name(), f.Name, why)) }
	switch {
	case name == "" || c.doc == "":
		bad("a column needs a name and a doc")
	case c.kind == reflect.String && pointer:
		bad(`a nullable text is a string, "" for NULL`)
	case c.kind != reflect.String && pointer != c.nullable:
		bad("a number is a pointer where it is optional, and only there: optional on a plain number makes 0 NULL")
	}
	switch c.kind {
	case reflect.String, reflect.Float64, reflect.Int64, reflect.Bool:
	default:
		bad("a column is a string, float64, int64 or bool")
	}
	return c
}

// Types of columns, as the data dictionary names them.
var typeNames = map[reflect.Kind]string{
	reflect.String: "text", reflect.Float64: "number", reflect.Int64: "whole number", reflect.Bool: "true or false",
}

// ColumnDoc says what a column holds.
type ColumnDoc struct {
	Name     string `json:"name"`
	Type     string `json:"type"` // text, number, whole number, true or false
	Unit     string `json:"unit,omitempty"`
	Nullable bool   `json:"nullable"`
	Doc      string `json:"doc"`
}

// TableDoc says what a table holds.
type TableDoc struct {
	Table   string      `json:"table"`
	Doc     string      `json:"doc"`
	Columns []ColumnDoc `json:"columns"`
}

// every table, in the order they are written.
var every = []struct {
	name, doc string
	row       reflect.Type
}{
	{"analyses", "One row per analysis, in reading order: as the source gives it, its structural formula, its verdict.", reflect.TypeFor[AnalysisRow]()},
	{"pairs", "One row per pair of analyses taken as coexisting.", reflect.TypeFor[PairRow]()},
	{"estimates", "One row per temperature: a method, one of its components, a pair or an analysis. Rows without a number say why.", reflect.TypeFor[EstimateRow]()},
	{"samples", "One row per method, component, texture and sample, and then per unit: medians.", reflect.TypeFor[SampleRow]()},
	{"discrepancies", "One row per two methods and group: the statistics of a minus b.", reflect.TypeFor[DiscrepancyRow]()},
	{"qc", "One row per rule that fired on a row.", reflect.TypeFor[FindingRow]()},
}

// Dictionary documents every table, in the order they are written.
func Dictionary() []TableDoc {
	out := make([]TableDoc, len(every))
	for i, t := range every {
		out[i] = TableDoc{Table: t.name, Doc: t.doc}
		for _, c := range columnsOf(t.row) {
			out[i].Columns = append(out[i].Columns, ColumnDoc{c.name, typeNames[c.kind], c.unit, c.nullable, c.doc})
		}
	}
	return out
}

// ArrowSchema is the Arrow schema a reader finds in the Parquet file of a row
// type, with each column's unit and doc.
func ArrowSchema[T any]() *arrow.Schema {
	types := map[reflect.Kind]arrow.DataType{
		reflect.String: arrow.BinaryTypes.String, reflect.Float64: arrow.PrimitiveTypes.Float64,
		reflect.Int64: arrow.PrimitiveTypes.Int64, reflect.Bool: arrow.FixedWidthTypes.Boolean,
	}
	var fields []arrow.Field
	for _, c := range columnsOf(reflect.TypeFor[T]()) {
		fields = append(fields, arrow.Field{Name: c.name, Type: types[c.kind], Nullable: c.nullable,
			Metadata: arrow.NewMetadata([]string{"unit", "doc"}, []string{c.unit, c.doc})})
	}
	return arrow.NewSchema(fields, nil)
}
