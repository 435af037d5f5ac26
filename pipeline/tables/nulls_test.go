package tables

import (
	"os"
	"slices"
	"testing"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/format"
)

// TestNullTextsAreNull: NULLs after a run of texts, at every place of 64 rows
// and for runs of every length. parquet-go 0.32.0 takes some of them for "" when
// it is given rows.
func TestNullTextsAreNull(t *testing.T) {
	var rows []FindingRow
	for start := range 64 {
		for length := range 64 - start {
			for i := range 64 {
				row := FindingRow{RowKind: "pair", RowID: "x", Rule: "r", Effect: "noted", Detail: "d"}
				if i >= start && i < start+length {
					row.Limit, row.Source = "98 to 102", "a"
				}
				rows = append(rows, row)
			}
		}
	}
	got, path := write(t, rows, len(rows))
	for column, nulls := range nullsOf(t, path) {
		if want := got.Rows - got.NonNull[column]; nulls != want {
			t.Errorf("column %s: the file holds %d NULLs, Written counts %d", column, nulls, want)
		}
	}
}

// TestNoDictionary: parquet-go packs the indices of a dictionary in other runs
// where the processor has AVX2 than where it has not, so the bytes would differ.
func TestNoDictionary(t *testing.T) {
	_, path := write(t, estimates(500), 500)
	for _, group := range open(t, path).Metadata().RowGroups {
		for _, c := range group.Columns {
			if slices.Contains(c.MetaData.Encoding, format.RLEDictionary) {
				t.Errorf("column %v is written with a dictionary", c.MetaData.PathInSchema)
			}
		}
	}
}

func open(t *testing.T, path string) *parquet.File {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { f.Close() })
	info, err := f.Stat()
	if err != nil {
		t.Fatal(err)
	}
	file, err := parquet.OpenFile(f, info.Size())
	if err != nil {
		t.Fatal(err)
	}
	return file
}

// nullsOf counts the NULLs that stand in the pages, column by column.
func nullsOf(t *testing.T, path string) map[string]int64 {
	t.Helper()
	counts := map[string]int64{}
	file := open(t, path)
	for _, group := range file.RowGroups() {
		for i, chunk := range group.ColumnChunks() {
			pages := chunk.Pages()
			for {
				page, err := pages.ReadPage()
				if err != nil {
					break
				}
				counts[file.Schema().Columns()[i][0]] += page.NumNulls()
			}
			pages.Close()
		}
	}
	return counts
}
