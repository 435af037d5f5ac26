package qc

import (
	"fmt"
	"math"

	"tieline/manifests"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
)

// reported holds what a source prints of an analysis against what its own
// figures give.
func reported(limits *manifests.QC, a *Analysis) []Finding {
	if a.Phase.Role() == "" {
		return nil
	}
	return append(reportedTotal(limits, a), reportedEndMembers(limits, a)...)
}

// reportedTotal compares with iron as given, and with iron by the basis used: a
// source may have added up either.
func reportedTotal(limits *manifests.QC, a *Analysis) []Finding {
	given, ok := formula.Total(a.Composition)
	if !ok || a.ReportedTotal == nil {
		return nil
	}
	r, limit := *a.ReportedTotal, limits.ReportedTotalFlaggedWt
	if math.Abs(r-given) <= limit+eps || math.Abs(r-a.Total) <= limit+eps {
		return nil
	}
	return []Finding{{Rule: "reported total", Effect: Flagged, Value: number(r), Limit: text(given, 2) + " +- " + text(limit, 3) + " wt%",
		Detail: fmt.Sprintf("the source prints a total of %s wt%%, its oxides sum to %s: an oxide is mistyped, missing or not mapped", text(r, 2), text(given, 2))}}
}

// reportedEndMembers compares end members that stand beside oxides or apfu.
func reportedEndMembers(limits *manifests.QC, a *Analysis) []Finding {
	c := a.Composition
	if c.Kind == chem.EndMember || a.Feldspar == nil {
		return nil
	}
	for i, m := range []chem.Measurand{chem.XAb, chem.XOr, chem.XAn} {
		ours := a.Feldspar[i]
		if c.State[m] != chem.Measured || math.Abs(c.Value[m]-ours) <= limits.ReportedEndMemberFlagged+eps {
			continue
		}
		return []Finding{{Rule: "reported end members", Effect: Flagged, Value: number(c.Value[m]), Limit: text(ours, 3) + " +- " + text(limits.ReportedEndMemberFlagged, 4),
			Detail: fmt.Sprintf("the source prints %s %s, its composition gives %s", m, text(c.Value[m], 3), text(ours, 3))}}
	}
	return nil
}
