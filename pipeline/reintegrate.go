package pipeline

import (
	"tieline/pipeline/reintegration"
	"tieline/pipeline/report"
	"tieline/pipeline/tables"
	"tieline/qc"
)

// reintegrate adds the analyses of grains that are put together from their parts.
func (s *state) reintegrate() {
	r := reintegration.Of(s.all, &s.manifest.Reintegration)
	s.all, s.parts, s.ofParts = r.Analyses, r.Parts, r.Findings
}

// reintegrationFindings are what re-integration says of an analysis. A grain is
// no better than its parts: what flags or sets aside one of them does so to it.
func (s *state) reintegrationFindings(surveyed *qc.Surveyed, i int) []qc.Finding {
	out := s.ofParts[int32(i)]
	for _, part := range s.parts[int32(i)] {
		j := s.judgeBlock(surveyed, int(part), int(part)+1)
		if j.verdicts[0] == qc.Kept {
			continue
		}
		out = append(out[:len(out):len(out)], qc.Finding{Rule: reintegration.Rule, Effect: qc.Effect(j.verdicts[0]), Limit: "parts that are kept",
			Detail: j.rows[0].AnalysisID + ": " + j.reasons[0]})
	}
	return out
}

// traced is an analysis for a trace; for a re-integrated one, its parts, which
// are what has cells.
func (s *state) traced(i int32) []report.TracedAnalysis {
	b, row := s.all.At(int(i))
	one := report.TracedAnalysis{ID: b.Text(tables.AnalysisID, row), Source: b.Source, Line: b.Line(row),
		Phase: string(b.Phase(row)), Lineage: b.Lineage(row).String()}
	if s.parts[i] == nil {
		return []report.TracedAnalysis{one}
	}
	var out []report.TracedAnalysis
	for _, part := range s.parts[i] {
		for _, p := range s.traced(part) {
			p.PartOf = one.ID + ", re-integrated with volumes " + s.manifest.Reintegration.Volumes + ", lineage " + one.Lineage
			out = append(out, p)
		}
	}
	return out
}
