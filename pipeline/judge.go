package pipeline

import (
	"slices"
	"strconv"
	"strings"
	"unique"

	"tieline/pipeline/tables"
	"tieline/qc"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// judged is what one block of analyses leaves.
type judged struct {
	rows     []tables.AnalysisRow
	findings []tables.FindingRow
	verdicts []qc.Verdict
	reasons  []string
	doubted  []bool // whether the composition contradicts the phase
}

// judgeAnalyses works out the formulae, applies the rules for analyses and for
// whole sources, and hands what they leave to write: first what was found on
// sources, then block by block in order.
func (s *state) judgeAnalyses(opt Options, write func(judged) error) (verdicts, error) {
	n := s.all.Len()
	s.verdicts, s.reasons = make([]qc.Verdict, 0, n), make([]string, 0, n)
	var counts verdicts
	surveyed := qc.Survey(s.manifest, s.all)
	if err := write(judged{findings: sourceFindings(surveyed)}); err != nil {
		return counts, err
	}
	blocks := (n + blockRows - 1) / blockRows
	err := ordered(blocks, opt.Workers, func(_, block int) (judged, error) {
		from := block * blockRows
		return s.judgeBlock(surveyed, from, min(from+blockRows, n)), nil
	}, func(block int, r judged) error {
		for i, v := range r.verdicts {
			counts[v]++
			s.reasons = append(s.reasons, unique.Make(r.reasons[i]).Value()) // many rows have the same
			if r.doubted[i] {
				s.doubted[int32(len(s.verdicts))] = true
			}
			s.verdicts = append(s.verdicts, v)
		}
		opt.Progress("analyses", int64(len(s.verdicts)), int64(n))
		return write(r)
	})
	return counts, err
}

// sourceFindings makes the qc table's rows of what was found on whole columns.
func sourceFindings(surveyed *qc.Surveyed) []tables.FindingRow {
	var out []tables.FindingRow
	for _, f := range surveyed.Sources {
		out = append(out, tables.FindingRow{RowKind: "source", RowID: f.Source + ":" + f.Column, Rule: f.Rule, Effect: f.Effect.String(),
			Value: f.Value, Limit: f.Limit, Detail: f.Detail, Source: f.Source})
	}
	return out
}

func (s *state) judgeBlock(surveyed *qc.Surveyed, from, to int) judged {
	r := judged{rows: make([]tables.AnalysisRow, 0, to-from)}
	var c chem.Composition
	for i := from; i < to; i++ {
		b, row := s.all.At(i)
		b.Composition(row, &c)
		w := workOut(s.manifest.Normalisation.Fe3, b.Phase(row), &c)
		seen := qc.Analysis{Phase: b.Phase(row), Composition: &c, Formula: &w.formula, Total: w.total,
			Celsian: w.celsian, EndMemberSum: b.EndMemberSum(row), SetAside: b.Text(tables.SetAside, row)}
		if w.hasPyroxene {
			seen.Pyroxene = &w.pyroxene
		}
		if w.hasFeldspar {
			seen.Feldspar = &w.feldspar
		}
		if v, ok := b.Number(tables.ReportedTotal, row); ok {
			seen.ReportedTotal = &v
		}
		findings := append(qc.OfAnalysis(s.manifest, &seen), surveyed.Of(i)...)
		if seen.SetAside == "" {
			findings = append(findings, qc.OfCoverage(b.Phase(row))...)
		}
		findings = append(findings, s.reintegrationFindings(surveyed, i)...)
		v, reasons := qc.Judge(findings)
		r.verdicts = append(r.verdicts, v)
		r.reasons = append(r.reasons, reasons)
		r.doubted = append(r.doubted, slices.ContainsFunc(findings, func(f qc.Finding) bool { return f.Rule == qc.PhaseIdentity }))
		out := s.analysisRow(b, row, &c, &w)
		out.Verdict, out.Reasons = v.String(), reasons
		r.rows = append(r.rows, out)
		r.findings = append(r.findings, s.findingRows("analysis", out.AnalysisID, int32(i), findings)...)
	}
	return r
}

// worked is what the formula stage makes of one analysis for the analyses table.
type worked struct {
	hasBasis    bool
	basis       method.Basis
	formula     formula.Formula
	feldspar    [3]float64 // Ab, Or, An
	celsian     float64
	hasFeldspar bool
	total       float64
	hasTotal    bool
	pyroxene    formula.Formula // 6 O, all Fe2+
	hasPyroxene bool
}

func workOut(scheme string, phase chem.Phase, c *chem.Composition) worked {
	w := worked{formula: formula.Formula{Why: method.NoFormula}}
	role := phase.Role()
	if w.basis, w.hasBasis = tableBasis(scheme, role, c); w.hasBasis {
		w.formula = formula.Of(c, w.basis)
	}
	w.total, w.hasTotal = formula.TotalOn(c, &w.formula)
	switch role {
	case chem.Afs, chem.Pl:
		ab, or, an, cn, why := formula.Feldspar(c)
		w.feldspar, w.celsian, w.hasFeldspar = [3]float64{ab, or, an}, cn, why == method.OK
	case chem.Opx, chem.Cpx:
		w.pyroxene, w.hasPyroxene = formula.Of(c, method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AllFe2}), true
	}
	return w
}

// analysisRow makes the analyses table's row but for verdict and reasons.
func (s *state) analysisRow(b *tables.Batch, r int, c *chem.Composition, w *worked) tables.AnalysisRow {
	line, column := int64(b.Line(r)), int64(b.Column(r))
	row := tables.AnalysisRow{
		AnalysisID: b.Text(tables.AnalysisID, r), Source: b.Source, SourceLine: line, Label: b.Text(tables.Label, r),
		Sample: b.Text(tables.Sample, r), Phase: string(b.Phase(r)), PhaseText: b.Text(tables.PhaseText, r),
		Texture: b.Text(tables.Texture, r), Domain: b.Text(tables.Domain, r), Generation: b.Text(tables.Generation, r),
		Assemblage: b.Text(tables.Assemblage, r), AnalysisKind: b.Text(tables.AnalysisKind, r), Grain: b.Text(tables.Grain, r),
		Session: b.Text(tables.Session, r), Locality: b.Text(tables.Locality, r), Unit: b.Text(tables.Unit, r),
		Latitude: b.Text(tables.Latitude, r), Longitude: b.Text(tables.Longitude, r), CompositionKind: c.Kind.String(),
		PairLabel: b.Text(tables.PairLabel, r), PublishedKind: b.Text(tables.PublishedKind, r), PublishedMethod: b.Text(tables.PublishedMethod, r),
		Lineage: b.Lineage(r).String(),
	}
	if column > 0 {
		row.SourceColumn = &column
	}
	optional := func(n tables.Number) *float64 {
		if v, ok := b.Number(n, r); ok {
			return &v
		}
		return nil
	}
	row.SpotXUm, row.SpotYUm = optional(tables.SpotXUm), optional(tables.SpotYUm)
	row.PublishedTC, row.PublishedSigmaC, row.PublishedPKbar = optional(tables.PublishedC), optional(tables.PublishedSigmaC), optional(tables.PublishedPKbar)
	row.PKbar, row.PSigmaKbar = optional(tables.PKbar), optional(tables.PSigmaKbar)
	row.NSpots, row.ReportedTotalWt = optional(tables.NSpots), optional(tables.ReportedTotal)
	row.AreaFraction = optional(tables.AreaFraction)
	s.composition(&row, b, r, c)
	workedColumns(&row, c, w, b.EndMemberSum(r))
	return row
}

// composition fills the measured columns, their 1-sigma, and the lists of what
// was not analysed or is below detection.
func (s *state) composition(row *tables.AnalysisRow, b *tables.Batch, r int, c *chem.Composition) {
	var not, below []string
	for m := chem.Measurand(0); m < chem.NumMeasurands; m++ {
		switch c.State[m] {
		case chem.NotAnalysed:
			not = append(not, m.String())
		case chem.BelowDetection:
			t := m.String()
			if c.Value[m] > 0 {
				t += " < " + strconv.FormatFloat(c.Value[m], 'f', -1, 64)
			}
			below = append(below, t)
		case chem.Measured:
			if value, sigma := row.Oxide(m); value != nil {
				v := c.Value[m]
				*value = &v
				sd := b.Sigma(m, r)
				if sd <= 0 {
					sd = s.manifest.Uncertainty.OxideSigma(v)
				}
				*sigma = &sd
			}
		}
	}
	row.NotAnalysed, row.BelowDetection = strings.Join(not, ", "), strings.Join(below, ", ")
}

func workedColumns(row *tables.AnalysisRow, c *chem.Composition, w *worked, endMemberSum float64) {
	if w.hasTotal {
		row.TotalWt = &w.total
	}
	if w.hasBasis && w.formula.Why == method.OK {
		o, sum := w.basis.Oxygens, w.formula.Sum
		row.Oxygens, row.CationSum, row.Fe3Basis = &o, &sum, w.basis.String()
		for cat := chem.Cation(0); cat < chem.NumCations; cat++ {
			if w.formula.Apfu[cat] != 0 || formula.Determined(c, cat) {
				v := w.formula.Apfu[cat]
				*row.Cation(cat) = &v
			}
		}
	}
	if w.hasFeldspar {
		row.Ab, row.Or, row.An = &w.feldspar[0], &w.feldspar[1], &w.feldspar[2]
		if c.Determined(chem.XCn) || c.Kind != chem.EndMember && formula.Determined(c, chem.Ba) { // not measured is not zero
			row.Cn = &w.celsian
		}
	}
	if endMemberSum != 0 {
		row.EndMemberSum = &endMemberSum
	}
}
