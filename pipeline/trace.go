package pipeline

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"

	"tieline/ingest"
	"tieline/manifests"
	"tieline/pipeline/discrepancy"
	"tieline/pipeline/problem"
	"tieline/pipeline/report"
	"tieline/pipeline/tables"
	"tieline/thermo/method"
)

// TraceEstimate follows one estimate of a compilation back to its cells: it
// reads the sources again, works that one temperature out, and compares it with
// the same row of the result in runFolder, where there is one.
func TraceEstimate(path, id, runFolder string) (*report.Trace, error) {
	quiet := Options{Workers: 1, Progress: func(string, int64, int64) {}}
	m, root, err := manifests.Load(path)
	if err != nil {
		return nil, err
	}
	defer root.Close()
	s, sources, err := read(m, root, quiet)
	if err != nil {
		return nil, err
	}
	if _, err := s.judgeAnalyses(quiet, func(judged) error { return nil }); err != nil {
		return nil, err
	}
	s.pairUp()
	for i := range s.pairs {
		s.makePair(i)
	}
	t, err := s.trace(id)
	if err != nil {
		return nil, err
	}
	t.EstimateID = id
	for i := range t.Analyses {
		if err := fillCells(&t.Analyses[i], root, m, sources); err != nil {
			return nil, err
		}
	}
	if runFolder == "" {
		runFolder = filepath.Join("out", m.Compilation.ID)
	}
	t.Run, t.SameAsRun, err = compareWithRun(runFolder, t)
	return t, err
}

// trace works the one estimate out.
func (s *state) trace(id string) (*report.Trace, error) {
	near := ""
	for _, k := range s.kinds() {
		for i, it := range k.items {
			suffix, ok := strings.CutPrefix(id, s.itemID(it))
			if !ok {
				continue
			}
			for l := range k.lanes {
				if laneSuffix(&k.lanes[l]) == suffix {
					return s.traceLane(k, i, &k.lanes[l])
				}
			}
			near = s.itemID(it) + laneSuffix(&k.lanes[0])
		}
	}
	if near != "" {
		return nil, fmt.Errorf("this compilation has no estimate %s; one of that row is %s", problem.Quote(id), problem.Quote(near))
	}
	return nil, fmt.Errorf("this compilation has no estimate %s; an estimate_id reads <pair or analysis>|<method>|<component>, as in the estimates table", problem.Quote(id))
}

func (s *state) itemID(it item) string {
	if it.pair >= 0 {
		return s.pairID(int(it.pair))
	}
	b, row := s.all.At(int(it.a))
	return b.Text(tables.AnalysisID, row)
}

func (s *state) traceLane(all *kind, i int, l *discrepancy.Lane) (*report.Trace, error) {
	if l.Info == nil {
		return s.tracePublished(all, i)
	}
	at := slices.IndexFunc(all.methods, func(m *method.Method) bool { return &m.Info == l.Info })
	m := all.methods[at]
	lane := slices.Index(m.Components, l.Component)
	k := &kind{name: all.name, roles: all.roles, items: all.items[i : i+1]}
	k.prepare([]*method.Method{m})
	e := s.newEvaluator(k)
	r := e.evaluate(0, 1)
	row := &r.rows[lane]
	t := s.startTrace(k.items[0], row)
	t.Equation, t.Ref, t.Basis = m.Equation, m.Ref, row.Fe3Basis
	t.Constants = constants(m.Const)
	for _, q := range e.block.Filled() {
		t.Quantities = append(t.Quantities, traced(e.block, q))
	}
	return t, nil
}

// traced gives a quantity's value in a block of one row, or why it has none.
func traced(b *method.Block, q *method.Quantity) report.Quantity {
	out := report.Quantity{Name: q.Name, Unit: q.Unit, Leaf: q.Fill == nil}
	if why := b.Why(q)[0]; why != method.OK {
		out.Why = why.String()
	} else if out.Value = finite(b.Of(q)[0]); out.Value == nil {
		out.Why = method.NotFinite.String()
	}
	return out
}

func (s *state) tracePublished(k *kind, i int) (*report.Trace, error) {
	it := k.items[i]
	e := &evaluator{s: s, k: k}
	var r result
	e.emitPublished(&r, i)
	if len(r.rows) == 0 {
		return nil, fmt.Errorf("%s has no published temperature", problem.Quote(s.itemID(it)))
	}
	t := s.startTrace(it, &r.rows[0])
	t.Equation = "the temperature as its source prints it"
	return t, nil
}

func (s *state) startTrace(it item, row *tables.EstimateRow) *report.Trace {
	t := &report.Trace{Method: row.Method, Component: row.Component, TC: row.TC, SigmaC: row.SigmaCalC, BoundC: row.BoundC, Status: row.Status, Verdict: row.Verdict, DTDP: row.DTDP, Reason: row.Reason,
		PKbar: row.PKbar, PSource: row.PSource, Lineage: row.Lineage}
	if it.pair >= 0 {
		t.Pair = fmt.Sprintf("%s, rule %q, lineage %s", s.pairID(int(it.pair)), s.pairs[it.pair].Rule, s.pair[it.pair].lineage)
	}
	for _, x := range []int32{it.a, it.b} {
		if x < 0 {
			continue
		}
		t.Analyses = append(t.Analyses, s.traced(x)...)
	}
	return t
}

// fillCells reads the analysis' cells from its file again.
func fillCells(a *report.TracedAnalysis, root *os.Root, m *manifests.Manifest, sources []ingest.Source) error {
	for i := range m.Sources {
		src := &m.Sources[i]
		if src.ID != a.Source {
			continue
		}
		_, cells, err := ingest.Cells(root, src, a.Line)
		if err != nil {
			return err
		}
		a.File = src.File
		for _, c := range sources[i].Columns {
			if c.Quantity == "" || c.Quantity == "ignored" || c.Position < 1 || c.Position > len(cells) {
				continue
			}
			a.Cells = append(a.Cells, report.Cell{Column: c.Position, Header: c.Header, Quantity: c.Quantity, Text: cells[c.Position-1]})
		}
	}
	return nil
}

// compareWithRun looks the estimate up in a result folder. found is "" where
// there is no result to look in.
func compareWithRun(dir string, t *report.Trace) (found string, same bool, err error) {
	file := filepath.Join(dir, "tables", "estimates.parquet")
	if _, err := os.Stat(file); err != nil {
		return "", false, nil
	}
	rows, err := tables.Read[tables.EstimateRow](file)
	if err != nil {
		return "", false, err
	}
	for i := range rows {
		if rows[i].EstimateID == t.EstimateID {
			return filepath.ToSlash(dir), rows[i].Lineage == t.Lineage && equal(rows[i].TC, t.TC), nil
		}
	}
	return filepath.ToSlash(dir), false, nil
}

func equal(a, b *float64) bool {
	if a == nil || b == nil {
		return a == b
	}
	return math.Float64bits(*a) == math.Float64bits(*b)
}

// constants lists what a method's Const holds, by field name.
func constants(c any) []report.Constant {
	var out []report.Constant
	var walk func(name string, v reflect.Value)
	walk = func(name string, v reflect.Value) {
		switch v.Kind() {
		case reflect.Pointer, reflect.Interface:
			walk(name, v.Elem())
		case reflect.Struct:
			for i := range v.NumField() {
				walk(strings.TrimPrefix(name+"."+v.Type().Field(i).Name, "."), v.Field(i))
			}
		case reflect.Slice, reflect.Array:
			for i := range v.Len() {
				walk(fmt.Sprintf("%s[%d]", name, i), v.Index(i))
			}
		case reflect.Invalid:
		default:
			out = append(out, report.Constant{Name: name, Value: fmt.Sprint(v)})
		}
	}
	walk("", reflect.ValueOf(c))
	return out
}
