package pipeline

import (
	"cmp"
	"math"
	"slices"
	"strings"

	"tieline/ingest"
	"tieline/pipeline/report"
	"tieline/pipeline/tables"
	"tieline/qc"
	"tieline/thermo/method"
)

// listedSetAside is how many analyses set aside the summary lists.
const listedSetAside = 20

// tally counts, on the writing goroutine, what the summary says in words.
type tally struct {
	findings map[[2]string]*report.Tally // by rule and effect
	none     map[[2]string]*report.Tally // by method with component, and reason
	order    [][2]string                 // of none
}

func newTally() *tally {
	return &tally{findings: map[[2]string]*report.Tally{}, none: map[[2]string]*report.Tally{}}
}

// writeFindings writes qc rows and counts them.
func (s *state) writeFindings(w *writers, rows []tables.FindingRow) error {
	for i := range rows {
		key := [2]string{rows[i].Rule, rows[i].Effect}
		t := s.tally.findings[key]
		if t == nil {
			t = &report.Tally{What: rows[i].Rule, Effect: rows[i].Effect, Example: rows[i].RowID}
			s.tally.findings[key] = t
		}
		t.N++
	}
	return w.qc.Write(rows)
}

func (t *tally) noNumbers(kind string, rows []tables.EstimateRow) {
	for i := range rows {
		if rows[i].Status != statusNoNumber {
			continue
		}
		name := rows[i].Method
		if rows[i].Component != "" {
			name += " " + rows[i].Component
		}
		key := [2]string{name, rows[i].Reason}
		n := t.none[key]
		if n == nil {
			n = &report.Tally{What: name, Effect: rows[i].Reason, Example: rows[i].EstimateID}
			t.none[key] = n
			t.order = append(t.order, key)
		}
		n.N++
	}
}

// summary gathers what the run says when it ends.
func (s *state) summary(sources []ingest.Source, counts []Count, kinds []*kind, ofUnits []tables.SampleRow, found []tables.DiscrepancyRow) *report.Summary {
	out := &report.Summary{Title: s.manifest.Compilation.Title, Cautions: s.cautions(kinds)}
	out.Sources = s.sourceCounts(sources)
	for _, c := range counts {
		out.Counts = append(out.Counts, report.Count{What: c.Rows, In: c.In, Kept: c.Kept, Flagged: c.Flagged, SetAside: c.SetAside})
	}
	for _, k := range kinds {
		out.Temperatures = append(out.Temperatures, temperatures(k)...)
	}
	out.Units = units(ofUnits)
	for _, d := range found {
		if d.GroupBy == "all" && d.Variant == variant {
			out.Discrepancies = append(out.Discrepancies, d)
		}
	}
	for _, key := range s.tally.order {
		out.NoNumbers = append(out.NoNumbers, *s.tally.none[key])
	}
	for _, f := range s.tally.findings {
		out.Findings = append(out.Findings, *f)
	}
	rank := map[string]int{qc.SetAside.String(): 0, qc.Flagged.String(): 1, qc.Noted.String(): 2}
	slices.SortFunc(out.Findings, func(a, b report.Tally) int {
		return cmp.Or(cmp.Compare(rank[a.Effect], rank[b.Effect]), cmp.Compare(a.What, b.What))
	})
	s.listSetAside(out)
	return out
}

func (s *state) listSetAside(out *report.Summary) {
	for i, v := range s.verdicts {
		if v != qc.SetAsideRow {
			continue
		}
		if len(out.SetAside) == listedSetAside {
			out.SetAsideMore++
			continue
		}
		b, row := s.all.At(i)
		out.SetAside = append(out.SetAside, report.Row{ID: b.Text(tables.AnalysisID, row), Why: s.reasons[i]})
	}
}

func (s *state) sourceCounts(sources []ingest.Source) []report.Source {
	var out []report.Source
	at := map[string]int{}
	for i, src := range sources {
		at[src.ID] = i
		r := report.Source{ID: src.ID, File: src.File, Rows: src.Rows}
		for _, c := range src.Columns {
			if c.Quantity == "" {
				r.Unused = append(r.Unused, c.Header)
			}
		}
		out = append(out, r)
	}
	i := 0
	for _, b := range s.all.Batches {
		r := &out[at[b.Source]]
		for range b.Len() {
			if s.parts[int32(i)] != nil {
				r.Reintegrated++
				i++
				continue
			}
			switch s.verdicts[i] {
			case qc.Kept:
				r.Kept++
			case qc.FlaggedRow:
				r.Flagged++
			case qc.SetAsideRow:
				r.SetAside++
			}
			i++
		}
	}
	return out
}

// units puts the unit level of the samples table into a line per unit, texture
// and pair kind. Recalled methods, twins and published temperatures stay out.
func units(samples []tables.SampleRow) []report.Unit {
	type key struct{ unit, texture, kind string }
	at := map[key]int{}
	var out []report.Unit
	for i := range samples {
		r := &samples[i]
		if r.MedianC == nil || r.Variant != variant || r.Standing == "" || r.Standing == string(method.Recalled) {
			continue
		}
		k := key{r.Unit, r.Texture, r.PairKind}
		name := strings.TrimPrefix(r.Method, r.PairKind+"/")
		if r.Component != "" {
			name += " " + r.Component
		}
		j, ok := at[k]
		if !ok {
			j = len(out)
			at[k] = j
			out = append(out, report.Unit{Unit: r.Unit, Texture: r.Texture, PairKind: r.PairKind, Lowest: *r.MedianC, Highest: *r.MedianC, LowestMethod: name, HighestMethod: name})
		}
		u := &out[j]
		u.Methods++
		u.Samples = max(u.Samples, r.NSamples)
		if *r.MedianC < u.Lowest {
			u.Lowest, u.LowestMethod = *r.MedianC, name
		}
		if *r.MedianC > u.Highest {
			u.Highest, u.HighestMethod = *r.MedianC, name
		}
	}
	slices.SortStableFunc(out, func(a, b report.Unit) int {
		return cmp.Or(cmp.Compare(a.Unit, b.Unit), cmp.Compare(a.Texture, b.Texture))
	})
	return out
}

func temperatures(k *kind) []report.Temperature {
	var out []report.Temperature
	if len(k.items) == 0 {
		return nil
	}
	for i, l := range k.lanes {
		var have []float64
		for _, t := range l.T {
			if !math.IsNaN(t) {
				have = append(have, t)
			}
		}
		if l.Info == nil && len(have) == 0 {
			continue
		}
		t := report.Temperature{PairKind: k.name, Method: l.Method, Component: l.Component, PublishedKind: l.PublishedKind, Variant: l.Variant, N: len(have)}
		if len(have) > 0 {
			t.Low, t.High = slices.Min(have), slices.Max(have)
		}
		if l.Info != nil {
			t.SigmaC, t.Recalled, t.InRange = sigmaOf(k, i), l.Info.Standing == method.Recalled, k.inRange[i]
		}
		out = append(out, t)
	}
	return out
}

// sigmaOf is the calibration's 1-sigma for a lane, degC; 0 where it has none.
func sigmaOf(k *kind, lane int) float64 {
	for _, m := range k.methods {
		if lane < len(m.Sigma.C) {
			return m.Sigma.C[lane]
		}
		if lane < len(m.Components) {
			return 0
		}
		lane -= len(m.Components)
	}
	return 0
}

// cautions are what nobody should read these temperatures without; those that
// do not apply are left out.
func (s *state) cautions(kinds []*kind) []string {
	out := []string{
		"A temperature is where exchange stopped, which on slow cooling is below the peak; different systems close at different temperatures, so components and methods are not averaged here.",
		"Every method takes the pair as in equilibrium. Numbers cannot show that it was: your petrography decides.",
		"The +- column is the calibration's own 1-sigma as the method states it (see `tieline methods`); errors of the analyses and of pressure come on top.",
	}
	seen := func(rule string) bool {
		for key := range s.tally.findings {
			if key[0] == rule {
				return true
			}
		}
		return false
	}
	if seen("outside calibrated range") {
		out = append(out, "Some estimates are outside the range their method was calibrated in; `out_of_range` names the variables.")
	}
	if seen("assumed pressure") {
		out = append(out, "Some estimates rest on the manifest's default pressure; `dt_dp_c_per_kbar` says how much that matters.")
	}
	if slices.ContainsFunc(kinds, func(k *kind) bool { return k.name == "two-feldspar" && len(k.items) > 0 }) {
		out = append(out, "The two-feldspar models here are for disordered feldspars (sanidine, high albite); a feldspar that exsolved must be re-integrated first.")
	}
	if len(s.parts) > 0 {
		out = append(out, "A re-integrated feldspar gives its composition before it exsolved; alone it gives a minimum temperature. It may be an igneous survivor in a metamorphic rock.")
	}
	return out
}
