package pipeline

import (
	"tieline/pipeline/discrepancy"
	"tieline/pipeline/tables"
	"tieline/qc"
	"tieline/thermo/chem"
)

// estimateRow starts the row of one temperature with what it shares with every
// other of its item.
func (s *state) estimateRow(k *kind, it item, l *discrepancy.Lane, p pressure) tables.EstimateRow {
	b, r := s.all.At(int(it.a))
	row := tables.EstimateRow{
		Sample: b.Text(tables.Sample, r), Locality: s.itemText(it, tables.Locality), Unit: s.itemText(it, tables.Unit),
		Texture: s.itemText(it, tables.Texture), Variant: variantName(l.Variant), PairKind: k.name, Method: l.Method, Component: l.Component,
		PSource: p.source,
	}
	id := s.itemID(it)
	if it.pair >= 0 {
		row.PairID = id
	} else {
		row.AnalysisID = id
	}
	row.EstimateID = id + laneSuffix(l)
	if p.given() {
		row.PKbar = &p.kbar
	}
	return row
}

// laneSuffix is what follows the pair or analysis in an estimate_id: |method,
// then |component and |variant where there are any.
func laneSuffix(l *discrepancy.Lane) string {
	s := "|" + l.Method
	for _, part := range []string{l.Component, l.Variant} {
		if part != "" {
			s += "|" + part
		}
	}
	return s
}

// variantName is a lane's variant as tables name it.
func variantName(v string) string {
	if v == "" {
		return variant
	}
	return v
}

// qcEstimate gathers what the rules on estimates look at.
func (s *state) qcEstimate(k *kind, it item, l *discrepancy.Lane, est *estimate, p pressure) *qc.Estimate {
	b, _ := s.all.At(int(it.a))
	e := &qc.Estimate{
		C: est.c, Side: est.status, Bound: est.bound, NoPressure: !p.given() && est.dTdP != 0,
		Info: l.Info, Component: l.Component, OutOf: est.outOf, OutOfValue: est.outOfValue,
		Assumed: p.source == pFromManifest || p.source == pFromLine, PKbar: p.kbar, Setting: s.settings[b.Source], Beside: true,
	}
	if need := l.Info.NeedsBeside; need != "" {
		e.Beside = s.beside(it.a, need)
	}
	if it.pair >= 0 && k.roles[0] == chem.Afs {
		a, ra := s.all.At(int(it.a))
		b, rb := s.all.At(int(it.b))
		if afs, pl := fractions(a, ra), fractions(b, rb); afs != nil && pl != nil {
			e.AnAfs, e.OrPl, e.AnPl = &afs[2], &pl[1], &pl[2]
		}
	}
	return e
}

// findingRows makes the qc table's rows of one row's findings; analysis says
// where in the sources it stands.
func (s *state) findingRows(rowKind, id string, analysis int32, findings []qc.Finding) []tables.FindingRow {
	if len(findings) == 0 {
		return nil
	}
	b, row := s.all.At(int(analysis))
	line := int64(b.Line(row))
	out := make([]tables.FindingRow, len(findings))
	for i, f := range findings {
		out[i] = tables.FindingRow{RowKind: rowKind, RowID: id, Rule: f.Rule, Effect: f.Effect.String(),
			Value: f.Value, Limit: f.Limit, Detail: f.Detail, Source: b.Source, SourceLine: &line}
	}
	return out
}
