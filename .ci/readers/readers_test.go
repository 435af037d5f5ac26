package main

import (
	"database/sql"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// runFolder writes a table of five rows with DuckDB. Three values of t_c are
// exact in binary and lie half-way between two millionths (0.0078125 is 7812.5
// of them), one is missing.
func runFolder(t *testing.T) string {
	folder := t.TempDir()
	if err := os.Mkdir(filepath.Join(folder, "tables"), 0o700); err != nil {
		t.Fatal(err)
	}
	db, err := sql.Open("duckdb", "")
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	_, err = db.Exec(`copy (select * from (values
		('a', 800.25::double, 1::bigint), ('b', null, 2), ('c', 0.0078125, null), ('d', -0.0078125, 4), (null, 0.0234375, 5))
		as v(method, t_c, n)) to '` + filepath.Join(folder, "tables", "estimates.parquet") + `' (format parquet, compression zstd)`)
	if err != nil {
		t.Fatal(err)
	}
	return folder
}

// right is the true record of that table: 800250000 + 7813 - 7813 + 23438.
func right() map[string]any {
	return map[string]any{"table": "estimates", "file": "tables/estimates.parquet", "rows": 5,
		"non_null": map[string]int{"method": 4, "t_c": 4, "n": 4}, "t_c_micro_sum": 800273438}
}

func writeRecord(t *testing.T, folder string, tables ...map[string]any) {
	text, err := json.Marshal(map[string]any{"made_by": "tieline", "tables": tables})
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(folder, "record.json"), text, 0o600); err != nil {
		t.Fatal(err)
	}
}

func TestAgreement(t *testing.T) {
	folder := runFolder(t)
	writeRecord(t, folder, right())
	lines, problems, err := checkFolder(folder)
	if err != nil || len(problems) > 0 || len(lines) != 1 {
		t.Fatalf("lines %q, problems %q, error %v; want one line and nothing else", lines, problems, err)
	}
	want := "5 rows, 3 columns, 12 values, sum of t_c 800273438 microdegC: DuckDB, arrow and tieline agree"
	if !strings.HasSuffix(lines[0], want) {
		t.Errorf("got %q, want it to end in %q", lines[0], want)
	}
}

func TestDifferencesAreFound(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(map[string]any)
		want   string
	}{
		{"rows", func(m map[string]any) { m["rows"] = 6 }, "rows: record.json has 6, DuckDB has 5"},
		{"count", func(m map[string]any) { m["non_null"] = map[string]int{"method": 4, "t_c": 5, "n": 4} },
			"non-null in t_c: record.json has 5, DuckDB has 4"},
		{"column too few", func(m map[string]any) { m["non_null"] = map[string]int{"method": 4, "t_c": 4} },
			"column n: record.json has none, DuckDB has it"},
		{"column too many", func(m map[string]any) { m["non_null"] = map[string]int{"method": 4, "t_c": 4, "n": 4, "p": 0} },
			"column p: record.json has it, DuckDB has none"},
		{"last digit of the sum", func(m map[string]any) { m["t_c_micro_sum"] = 800273437 },
			"sum of t_c in millionths: record.json has 800273437, DuckDB has 800273438"},
		{"no sum", func(m map[string]any) { delete(m, "t_c_micro_sum") }, "the other has none"},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := runFolder(t)
			table := right()
			c.change(table)
			writeRecord(t, folder, table)
			_, problems, err := checkFolder(folder)
			if err != nil || len(problems) != 1 || !strings.Contains(problems[0], c.want) {
				t.Errorf("problems %q, error %v; want one with %q", problems, err, c.want)
			}
		})
	}
}

func TestFolderWithoutTables(t *testing.T) {
	folder := t.TempDir()
	writeRecord(t, folder)
	if _, _, err := checkFolder(folder); err == nil || !strings.Contains(err.Error(), "lists no table") {
		t.Errorf("error %v, want one that says the record lists no table", err)
	}
}

func TestUnlistedTable(t *testing.T) {
	folder := runFolder(t)
	table := right()
	writeRecord(t, folder, table)
	text, err := os.ReadFile(filepath.Join(folder, "tables", "estimates.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(folder, "tables", "extra.parquet"), text, 0o600); err != nil {
		t.Fatal(err)
	}
	_, problems, err := checkFolder(folder)
	if err != nil || len(problems) != 1 || !strings.Contains(problems[0], "tables/extra.parquet is not in record.json") {
		t.Errorf("problems %q, error %v; want the extra table named", problems, err)
	}
}

func TestCompareNamesBoth(t *testing.T) {
	folder := runFolder(t)
	a, err := duckdbCounts(filepath.Join(folder, "tables", "estimates.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	b, err := arrowCounts(filepath.Join(folder, "tables", "estimates.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	if got := compare("x", a, b); len(got) != 0 {
		t.Fatalf("the same file: %q", got)
	}
	b.Micro["t_c"].SetInt64(7)
	want := "x: sum of t_c in millionths: DuckDB has 800273438, arrow has 7"
	if got := compare("x", a, b); len(got) != 1 || got[0] != want {
		t.Errorf("got %q, want %q", got, want)
	}
}
