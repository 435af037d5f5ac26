package main

import (
	"bufio"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strconv"
	"time"
)

// textColumns come first in the file; all others are numbers.
const textColumns = 5

// readPlainly reads the file as a program of a dozen lines would.
func readPlainly(file string) (time.Duration, int, error) {
	began := time.Now()
	f, err := os.Open(file)
	if err != nil {
		return 0, 0, err
	}
	defer f.Close()
	r := csv.NewReader(bufio.NewReader(f))
	r.ReuseRecord = true
	if _, err := r.Read(); err != nil {
		return 0, 0, err
	}
	cells := 0
	for {
		row, err := r.Read()
		if errors.Is(err, io.EOF) {
			return time.Since(began), cells, nil
		}
		if err != nil {
			return 0, 0, err
		}
		for _, cell := range row[textColumns:] {
			if _, err := strconv.ParseFloat(cell, 64); err != nil {
				return 0, 0, err
			}
			cells++
		}
	}
}

// countsAreRight makes sure that the run did the work it is measured by: every
// analysis read, half as many pairs, most of both kept, and estimates of them.
func countsAreRight(result string, rows int) error {
	text, err := os.ReadFile(filepath.Join(result, "record.json"))
	if err != nil {
		return err
	}
	var record struct {
		Counts []struct {
			Rows string
			In   int
			Kept int
		}
	}
	if err := json.Unmarshal(text, &record); err != nil {
		return err
	}
	want := map[string]int{"analyses": rows, "pairs": rows / 2, "estimates": rows / 2}
	for _, c := range record.Counts {
		least := want[c.Rows]
		if c.Rows != "estimates" && c.In != least || c.Kept < least*8/10 {
			return fmt.Errorf("%s: %d in, %d kept; the file holds %d analyses in %d pairs, made to be kept", c.Rows, c.In, c.Kept, rows, rows/2)
		}
		fmt.Printf("%s: %d in, %d kept\n", c.Rows, c.In, c.Kept)
		delete(want, c.Rows)
	}
	if len(want) > 0 {
		return fmt.Errorf("record.json lacks counts: %v", want)
	}
	return nil
}
