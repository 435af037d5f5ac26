package pipeline

import (
	"bytes"
	"encoding/json"
	"fmt"

	"tieline/ingest"
	"tieline/pipeline/tables"
	"tieline/thermo/method"
)

// Version is the program's version. It changes when results or formats do.
const Version = "0.1.0"

// MadeBy marks a folder as holding a result of this program.
const MadeBy = "tieline"

// Record says what a run read, did and wrote: the same bytes for the same
// inputs, so no clock, host, path or build information.
type Record struct {
	MadeBy   string           `json:"made_by"`
	Version  string           `json:"version"`
	Manifest json.RawMessage  `json:"manifest"` // with defaults filled in
	Sources  []RecordSource   `json:"sources"`
	Methods  []RecordMethod   `json:"methods"`
	Counts   []Count          `json:"counts"`
	Tables   []tables.Written `json:"tables"`
}

// RecordSource is one file as it was read.
type RecordSource struct {
	ID        string   `json:"id"`
	File      string   `json:"file"`
	SHA256    string   `json:"sha256"`
	Bytes     int64    `json:"bytes"`
	Encoding  string   `json:"encoding"`
	Rows      int      `json:"rows"`
	BlankRows int      `json:"blank_rows"`
	Columns   []string `json:"columns"` // "header = quantity"
	Unused    []string `json:"unused_columns"`
}

// RecordMethod is one method as it was used.
type RecordMethod struct {
	ID       string          `json:"id"`
	Variant  string          `json:"variant,omitempty"` // "" on the calibration's own basis
	Standing method.Standing `json:"standing"`
	Digest   string          `json:"digest"` // constants and outputs on the fixed probe
	Ref      string          `json:"ref"`
}

// Count is what went in and what became of it: In = Kept + Flagged + SetAside.
type Count struct {
	Rows     string `json:"rows"` // analyses, pairs, estimates
	In       int64  `json:"in"`
	Kept     int64  `json:"kept"`
	Flagged  int64  `json:"flagged"`
	SetAside int64  `json:"set_aside"`
}

func count(rows string, v verdicts) Count {
	return Count{Rows: rows, In: v[0] + v[1] + v[2], Kept: v[0], Flagged: v[1], SetAside: v[2]}
}

func recordSources(sources []ingest.Source) []RecordSource {
	var out []RecordSource
	for _, s := range sources {
		r := RecordSource{ID: s.ID, File: s.File, SHA256: s.SHA256, Bytes: s.Bytes, Encoding: s.Encoding,
			Rows: s.Rows, BlankRows: s.BlankLines, Columns: []string{}, Unused: []string{}}
		for _, c := range s.Columns {
			if c.Quantity == "" {
				r.Unused = append(r.Unused, c.Header)
			} else {
				r.Columns = append(r.Columns, fmt.Sprintf("%s = %s", c.Header, c.Quantity))
			}
		}
		out = append(out, r)
	}
	return out
}

func (s *state) recordMethods() []RecordMethod {
	out := []RecordMethod{}
	for _, m := range s.methods {
		out = append(out, RecordMethod{m.ID, m.Variant, m.Standing, s.digests[&m.Info].String(), m.Ref})
	}
	return out
}

// Encode gives the record as it is written to record.json.
func (r *Record) Encode() ([]byte, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	err := e.Encode(r)
	return b.Bytes(), err
}
