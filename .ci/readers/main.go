// Readers opens the Parquet tables of finished runs with two readers that
// tieline does not use, DuckDB and arrow's own, and compares what they count
// with what the run's record says.
//
//	cd .ci/readers && go run . FOLDER...
//
// A FOLDER is what `tieline run` wrote. For every table: the number of rows,
// the columns and their non-null counts, and for every column of doubles the
// exact sum of round(value * 1e6); the record has that sum for t_c. It prints a
// line per table, and exits 1 when two readers differ or there is no table.
//
// A module of its own, so that DuckDB and its C++ are never linked into tieline.
package main

import (
	"encoding/json"
	"errors"
	"fmt"
	"maps"
	"math/big"
	"os"
	"path/filepath"
	"slices"
)

// Counts are what one reader says of one table.
type Counts struct {
	Reader  string
	Rows    int64
	NonNull map[string]int64
	// Micro holds, per column of doubles, the sum over its numbers of the
	// nearest integer to value * 1e6, halves away from zero: DuckDB's
	// sum(cast(round(t_c * 1e6) as hugeint)). Without a number it is 0.
	Micro map[string]*big.Int
}

// Table is what record.json says of a table, as far as it is compared here.
type Table struct {
	Table    string           `json:"table"`
	File     string           `json:"file"`
	Rows     *int64           `json:"rows"`
	NonNull  map[string]int64 `json:"non_null"`
	MicroSum *json.Number     `json:"t_c_micro_sum"`
}

func main() {
	if len(os.Args) < 2 {
		fmt.Fprintln(os.Stderr, "usage: go run . FOLDER...   (folders that tieline run wrote)")
		os.Exit(2)
	}
	tables, bad := 0, 0
	for _, folder := range os.Args[1:] {
		lines, problems, err := checkFolder(folder)
		if err != nil {
			fmt.Fprintln(os.Stderr, "readers:", err)
			os.Exit(1)
		}
		for _, line := range slices.Concat(lines, problems) {
			fmt.Println(line)
		}
		tables += len(lines)
		bad += len(problems)
	}
	fmt.Printf("readers: %d tables in %d folders, %d differences\n", tables, len(os.Args)-1, bad)
	if bad > 0 {
		os.Exit(1)
	}
}

// checkFolder compares all tables of one run: a line for each, and a line for
// each difference.
func checkFolder(folder string) (lines, problems []string, err error) {
	tables, err := readRecord(folder)
	if err != nil {
		return nil, nil, err
	}
	if problems, err = unlisted(folder, tables); err != nil {
		return nil, nil, err
	}
	for _, t := range tables {
		ours, err := t.counts()
		if err != nil {
			return nil, nil, fmt.Errorf("%s: %w", folder, err)
		}
		path := filepath.Join(folder, filepath.FromSlash(t.File))
		duck, err := duckdbCounts(path)
		if err != nil {
			return nil, nil, fmt.Errorf("DuckDB: %s: %w", path, err)
		}
		arrow, err := arrowCounts(path)
		if err != nil {
			return nil, nil, fmt.Errorf("arrow: %s: %w", path, err)
		}
		name := filepath.Base(folder) + " " + t.Table
		differences := slices.Concat(compare(name, duck, arrow), compare(name, ours, duck))
		if _, ok := duck.Micro["t_c"]; ok != (t.MicroSum != nil) {
			differences = append(differences, name+": one of the table and record.json has a t_c, the other has none")
		}
		problems = append(problems, differences...)
		lines = append(lines, summary(name, duck, len(differences)))
	}
	return lines, problems, nil
}

func summary(name string, c Counts, differences int) string {
	total := int64(0)
	for _, n := range c.NonNull {
		total += n
	}
	line := fmt.Sprintf("%s: %d rows, %d columns, %d values", name, c.Rows, len(c.NonNull), total)
	if sum, ok := c.Micro["t_c"]; ok {
		line += fmt.Sprintf(", sum of t_c %s microdegC", sum)
	}
	if differences > 0 {
		return line + fmt.Sprintf(" by DuckDB: %d differences", differences)
	}
	return line + ": DuckDB, arrow and tieline agree"
}

// compare gives the differences between two readers. Sums are compared for the
// columns that both have summed: the record sums t_c alone.
func compare(name string, a, b Counts) []string {
	var all []string
	differ := func(what string, x, y any) {
		all = append(all, fmt.Sprintf("%s: %s: %s has %v, %s has %v", name, what, a.Reader, x, b.Reader, y))
	}
	if a.Rows != b.Rows {
		differ("rows", a.Rows, b.Rows)
	}
	for _, column := range unionKeys(a.NonNull, b.NonNull) {
		x, inA := a.NonNull[column]
		y, inB := b.NonNull[column]
		switch {
		case !inA:
			differ("column "+column, "none", "it")
		case !inB:
			differ("column "+column, "it", "none")
		case x != y:
			differ("non-null in "+column, x, y)
		}
	}
	for _, column := range slices.Sorted(maps.Keys(a.Micro)) {
		if y, ok := b.Micro[column]; ok && a.Micro[column].Cmp(y) != 0 {
			differ("sum of "+column+" in millionths", a.Micro[column], y)
		}
	}
	return all
}

func unionKeys(a, b map[string]int64) []string {
	return slices.Compact(slices.Sorted(func(yield func(string) bool) {
		for _, m := range []map[string]int64{a, b} {
			for k := range m {
				if !yield(k) {
					return
				}
			}
		}
	}))
}

func readRecord(folder string) ([]Table, error) {
	path := filepath.Join(folder, "record.json")
	text, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	var record struct {
		Tables []Table `json:"tables"`
	}
	if err := json.Unmarshal(text, &record); err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	if len(record.Tables) == 0 {
		return nil, fmt.Errorf("%s lists no table, so nothing was compared", path)
	}
	return record.Tables, nil
}

// unlisted names the Parquet files that the record does not list.
func unlisted(folder string, tables []Table) ([]string, error) {
	files, err := filepath.Glob(filepath.Join(folder, "tables", "*.parquet"))
	if err != nil {
		return nil, err
	}
	var all []string
	for _, f := range files {
		name := "tables/" + filepath.Base(f)
		if !slices.ContainsFunc(tables, func(t Table) bool { return t.File == name }) {
			all = append(all, filepath.Base(folder)+": "+name+" is not in record.json")
		}
	}
	return all, nil
}

// counts turns the record's entry into the form of the readers.
func (t Table) counts() (Counts, error) {
	if t.Table == "" || t.File == "" || t.Rows == nil || t.NonNull == nil {
		return Counts{}, errors.New("record.json: a table lacks its table, file, rows or non_null: " + t.Table)
	}
	c := Counts{Reader: "record.json", Rows: *t.Rows, NonNull: t.NonNull, Micro: map[string]*big.Int{}}
	if t.MicroSum != nil {
		sum, ok := new(big.Int).SetString(t.MicroSum.String(), 10)
		if !ok {
			return Counts{}, fmt.Errorf("record.json: table %s: t_c_micro_sum is %q, not an integer", t.Table, *t.MicroSum)
		}
		c.Micro["t_c"] = sum
	}
	return c, nil
}
