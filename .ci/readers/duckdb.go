package main

import (
	"database/sql"
	"fmt"
	"math/big"
	"strings"

	_ "github.com/duckdb/duckdb-go/v2"
)

// duckdbCounts reads a table with DuckDB, whose Parquet reader is built in.
func duckdbCounts(path string) (Counts, error) {
	// No extension is fetched: whatever is needed must be in the library.
	db, err := sql.Open("duckdb", "?autoinstall_known_extensions=false")
	if err != nil {
		return Counts{}, err
	}
	defer db.Close()
	from := "read_parquet('" + strings.ReplaceAll(path, "'", "''") + "')"
	columns, err := duckdbColumns(db, from)
	if err != nil {
		return Counts{}, err
	}
	c := Counts{Reader: "DuckDB", NonNull: map[string]int64{}, Micro: map[string]*big.Int{}}
	if err := db.QueryRow("select count(*) from " + from).Scan(&c.Rows); err != nil {
		return Counts{}, err
	}
	for _, column := range columns {
		name := `"` + strings.ReplaceAll(column.name, `"`, `""`) + `"`
		sum := "null::hugeint"
		if column.typ == "DOUBLE" {
			sum = "sum(cast(round(" + name + " * 1e6) as hugeint))"
		}
		var n int64
		var total any
		if err := db.QueryRow("select count("+name+"), "+sum+" from "+from).Scan(&n, &total); err != nil {
			return Counts{}, fmt.Errorf("column %s: %w", column.name, err)
		}
		c.NonNull[column.name] = n
		if column.typ != "DOUBLE" {
			continue
		}
		c.Micro[column.name] = new(big.Int)
		if total != nil {
			whole, ok := total.(*big.Int)
			if !ok {
				return Counts{}, fmt.Errorf("column %s: the sum came as %T", column.name, total)
			}
			c.Micro[column.name] = whole
		}
	}
	return c, nil
}

type column struct{ name, typ string }

func duckdbColumns(db *sql.DB, from string) ([]column, error) {
	rows, err := db.Query("select column_name, column_type from (describe select * from " + from + ")")
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var all []column
	for rows.Next() {
		var c column
		if err := rows.Scan(&c.name, &c.typ); err != nil {
			return nil, err
		}
		all = append(all, c)
	}
	return all, rows.Err()
}
