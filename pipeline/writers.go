package pipeline

import (
	"errors"

	"tieline/pipeline/tables"
)

// writers are the tables of a result.
type writers struct {
	analyses      *tables.Writer[tables.AnalysisRow]
	pairs         *tables.Writer[tables.PairRow]
	estimates     *tables.Writer[tables.EstimateRow]
	samples       *tables.Writer[tables.SampleRow]
	discrepancies *tables.Writer[tables.DiscrepancyRow]
	qc            *tables.Writer[tables.FindingRow]

	closers [tableCount]func() (tables.Written, error)
	ended   [tableCount]bool
	written [tableCount]tables.Written
}

// The tables, in the order the record lists them.
const (
	analysesTable = iota
	pairsTable
	estimatesTable
	samplesTable
	discrepanciesTable
	qcTable
	tableCount
)

func createWriters(dir string) (*writers, error) {
	w := &writers{}
	return w, errors.Join(
		create(w, &w.analyses, analysesTable, dir, "analyses"),
		create(w, &w.pairs, pairsTable, dir, "pairs"),
		create(w, &w.estimates, estimatesTable, dir, "estimates"),
		create(w, &w.samples, samplesTable, dir, "samples"),
		create(w, &w.discrepancies, discrepanciesTable, dir, "discrepancies"),
		create(w, &w.qc, qcTable, dir, "qc"))
}

func create[T any](w *writers, to **tables.Writer[T], table int, dir, name string) error {
	t, err := tables.Create[T](dir, name)
	if err != nil {
		w.ended[table] = true
		return err
	}
	*to, w.closers[table] = t, t.Close
	return nil
}

// end closes a table as soon as its last row is written, which frees the
// buffers of its row group.
func (w *writers) end(table int) error {
	if w.ended[table] {
		return nil
	}
	var err error
	w.written[table], err = w.closers[table]()
	w.ended[table], w.closers[table] = true, nil
	switch table {
	case analysesTable:
		w.analyses = nil
	case pairsTable:
		w.pairs = nil
	case estimatesTable:
		w.estimates = nil
	}
	return err
}

// finish closes what is open and gives what was written.
func (w *writers) finish() ([]tables.Written, error) {
	var errs []error
	for table := range tableCount {
		errs = append(errs, w.end(table))
	}
	return w.written[:], errors.Join(errs...)
}

// close releases the files of a run that ended early; what they hold is abandoned.
func (w *writers) close() { _, _ = w.finish() }
