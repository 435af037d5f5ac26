package main

import (
	"context"
	"fmt"
	"math"
	"math/big"

	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/array"
	"github.com/apache/arrow/go/v17/arrow/memory"
	"github.com/apache/arrow/go/v17/parquet/file"
	"github.com/apache/arrow/go/v17/parquet/pqarrow"
)

// arrowCounts reads a table with arrow's own Parquet reader.
func arrowCounts(path string) (Counts, error) {
	f, err := file.OpenParquetFile(path, false)
	if err != nil {
		return Counts{}, err
	}
	defer f.Close()
	reader, err := pqarrow.NewFileReader(f, pqarrow.ArrowReadProperties{}, memory.DefaultAllocator)
	if err != nil {
		return Counts{}, err
	}
	table, err := reader.ReadTable(context.Background())
	if err != nil {
		return Counts{}, err
	}
	defer table.Release()
	c := Counts{Reader: "arrow", Rows: table.NumRows(), NonNull: map[string]int64{}, Micro: map[string]*big.Int{}}
	for i, field := range table.Schema().Fields() {
		data := table.Column(i).Data()
		c.NonNull[field.Name] = int64(data.Len() - data.NullN())
		if field.Type.ID() != arrow.FLOAT64 {
			continue
		}
		if c.Micro[field.Name], err = microSum(data); err != nil {
			return Counts{}, fmt.Errorf("column %s: %w", field.Name, err)
		}
	}
	return c, nil
}

// microSum sums the integers nearest to value * 1e6, as DuckDB does: the
// product rounded to a double, then to an integer with halves away from zero,
// then added exactly.
func microSum(data *arrow.Chunked) (*big.Int, error) {
	sum := new(big.Int)
	for _, chunk := range data.Chunks() {
		values := chunk.(*array.Float64)
		for i := range values.Len() {
			if values.IsNull(i) {
				continue
			}
			scaled := math.Round(values.Value(i) * 1e6)
			if math.IsNaN(scaled) || math.IsInf(scaled, 0) {
				return nil, fmt.Errorf("row %d holds %v", i, values.Value(i))
			}
			whole, _ := big.NewFloat(scaled).Int(nil)
			sum.Add(sum, whole)
		}
	}
	return sum, nil
}
