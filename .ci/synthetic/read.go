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
// analysis read, half as many pairs, hardly any of them set aside, and an
// estimate for every pair at least. Methods made for other rocks set their own
// estimates aside.
func countsAreRight(result string, rows int) error {
	text, err := os.ReadFile(filepath.Join(result, "record.json"))
	if err != nil {
		return err
	}
	var record struct {
		Counts []struct {
			Rows     string
			In       int
			SetAside int `json:"set_aside"`
		}
	}
	if err := json.Unmarshal(text, &record); err != nil {
		return err
	}
	want := map[string]int{"analyses": rows, "pairs": rows / 2, "estimates": rows / 2}
	for _, c := range record.Counts {
		n := want[c.Rows]
		delete(want, c.Rows)
		if c.In < n || c.Rows != "estimates" && (c.In > n || c.SetAside > c.In/20) {
			return fmt.Errorf("%s: %d in, %d set aside; the file holds %d analyses in %d pairs, made to be kept", c.Rows, c.In, c.SetAside, rows, rows/2)
		}
		fmt.Printf("%s: %d in, %d set aside\n", c.Rows, c.In, c.SetAside)
	}
	if len(want) > 0 {
		return fmt.Errorf("record.json lacks counts: %v", want)
	}
	return nil
}
