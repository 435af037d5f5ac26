package tables

import (
	"errors"
	"fmt"
	"io"
	"os"

	"github.com/parquet-go/parquet-go"
)

// Read gives the rows of a table that Writer wrote. Check a file's SHA-256
// against its record first: a damaged file may read wrong.
func Read[T any](path string) (rows []T, err error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return nil, err
	}
	file, err := parquet.OpenFile(f, info.Size())
	if err != nil {
		return nil, fmt.Errorf("%s: not a table that can be read: %w", path, err)
	}
	if want := parquet.SchemaOf(new(T)); !parquet.EqualNodes(file.Schema(), want) {
		return nil, fmt.Errorf("%s: other columns than this version of tieline writes; run the compilation again", path)
	}
	reader := parquet.NewGenericReader[T](file)
	defer reader.Close()
	for {
		batch := make([]T, batchRows) // a fresh one: the reader may not clear what a row points to
		n, err := reader.Read(batch)
		rows = append(rows, batch[:n]...)
		if errors.Is(err, io.EOF) {
			return rows, nil
		}
		if err != nil {
			return nil, fmt.Errorf("%s: %w", path, err)
		}
	}
}
