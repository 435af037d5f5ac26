package manifests

import (
	"path"
	"strings"

	"tieline/thermo/chem"
)

// defaults is a manifest with every default of the tables that occur once.
// Their origin stands with each field of Manifest.
func defaults() *Manifest {
	return &Manifest{
		Normalisation: Normalisation{Fe3: "as measured", EndMemberTolerance: 0.002},
		QC: QC{
			TotalsKeptWt: [2]float64{98, 102}, TotalsFlaggedWt: [2]float64{97, 102.5},
			FeldsparSumKept: 0.02, FeldsparSumFlagged: 0.05,
			PyroxeneSumKept: [2]float64{3.98, 4.04}, PyroxeneSumFlagged: [2]float64{3.96, 4.06},
			CelsianFlagged: 0.01, CelsianSetAside: 0.05,
			FeldsparTSiteKept: 0.02, FeldsparTSiteFlagged: 0.05, FeldsparASiteKept: 0.02, FeldsparASiteFlagged: 0.05,
			CoupledExchangeFlagged: 0.02, FeldsparFeOFlaggedWt: 1, FeldsparMgOFlaggedWt: 0.1, ChargeFlagged: 0.05,
			OpxCaFlagged: 0.2, CpxCaFlagged: 0.4, PlOrFlagged: 0.5, AfsAnFlagged: 0.5, PyroxeneTSiteFlagged: 0.02,
			ReportedTotalFlaggedWt: 0.3, ReportedEndMemberFlagged: 0.01, ColumnRows: 10,
			KDIgneous: [2]float64{0.95, 1.23}, KDSubsolidus: [2]float64{0.5, 0.9},
			ConcordanceC: 90, ResetSigma: 2, PlAnFlagged: 0.65, CriticalDistanceFlagged: 0.1,
		},
		Pairing:       Pairing{Rules: []string{"listed", "touching rims", "nearest"}, NearestUm: 500, TouchingUm: 50},
		Reintegration: Reintegration{Volumes: "high"},
		Pressure:      Pressure{DefaultSigmaKbar: 1.5},
		Uncertainty: Uncertainty{
			Seed: 1, OxideSigmaRelative: 0.007, OxideSigmaCountingWt: 0.0009, OxideSigmaFloorWt2: 0.0002,
		},
	}
}

// fill gives a source the defaults of what it leaves out. An empty list that
// was written down stays empty.
func (s *Source) fill() {
	text := func(v *string, otherwise string) {
		if *v == "" {
			*v = otherwise
		}
	}
	list := func(v *[]string, otherwise ...string) {
		if *v == nil {
			*v = otherwise
		}
	}
	separator := "comma"
	switch strings.ToLower(path.Ext(s.File)) {
	case ".tsv", ".tab":
		separator = "tab"
	}
	text(&s.Separator, separator)
	text(&s.Decimal, "point")
	text(&s.Encoding, "utf-8")
	text(&s.Composition, chem.OxideWt.String())
	list(&s.NotAnalysed, "n.a.", "na", "n/a")
	list(&s.BelowDetection, "b.d.l.", "bdl", "b.d.", "bd", "<dl")
	list(&s.Missing, "")
}

// Kind is the kind of number the source's composition columns hold.
func (s *Source) Kind() chem.Kind {
	switch s.Composition {
	case chem.Apfu.String():
		return chem.Apfu
	case chem.EndMember.String():
		return chem.EndMember
	}
	return chem.OxideWt
}

// Comma is the character between cells.
func (s *Source) Comma() rune {
	switch s.Separator {
	case "tab":
		return '\t'
	case "semicolon":
		return ';'
	}
	return ','
}
