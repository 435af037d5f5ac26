package ingest

import (
	"testing"

	"tieline/manifests"
	"tieline/thermo/chem"
)

func TestVocabulary(t *testing.T) {
	for _, c := range []struct {
		kind    chem.Kind
		headers []string
		want    string
	}{
		{chem.OxideWt, []string{"SiO2", "SIO2(WT%)", "SiO2 wt.%", "SiO2_wt", "SiO₂", "sio2", " SiO2 ", "SiO2 (wt. %)", "SiO2 [wt%]", "SiO2, wt%", "SiO2\u00a0wt%",
			"SiO2 (%)", "SiO2 (mass%)", "SiO2 weight percent", "wt% SiO2", "ＳｉＯ２", "SiO2\n(wt%)", "sio2_wt", "SiO2 wt.-%"}, "SiO2"},
		{chem.OxideWt, []string{"FeO", "FeO wt%"}, "FeO"},
		{chem.OxideWt, []string{"FeO*", "FeOT", "FeOt", "FeO(tot)", "FeO total", "SumFeO", "ΣFeO", "∑FeO", "FeO (T)", "FeO_T", "FeO*(wt%)", "FeOtot wt%", "total FeO",
			"feo_total_wt", "FeOᵀ", "T FeO"}, "FeO total"},
		{chem.OxideWt, []string{"Fe2O3", "Fe₂O₃ (wt%)"}, "Fe2O3"},
		{chem.OxideWt, []string{"Fe2O3t", "Fe2O3*", "Fe2O3T", "Fe2O3 total", "Fe₂O₃ (tot)", "fe2o3_total_wt", "TFe2O3"}, "Fe2O3 total"},
		{chem.OxideWt, []string{"SiO2 sigma", "SiO2 1s", "SiO2 1σ (wt%)", "sio2_sigma_wt", "sigma SiO2", "SiO2 wt% 1s"}, "SiO2 sigma"},
		{chem.OxideWt, []string{"FeO total sigma", "feo_total_sigma_wt"}, "FeO total sigma"},
		{chem.OxideWt, []string{"Total", "Sum", "total wt%", "Totals (%)", "reported_total_wt"}, "total"},
		{chem.OxideWt, []string{"F", "F wt%"}, "F"}, {chem.OxideWt, []string{"Cl"}, "Cl"}, {chem.OxideWt, []string{"H2O"}, "H2O"},
		{chem.OxideWt, []string{"Si", "K", "Na apfu", "Ab", "An", "Or", "Fe", "Fe wt%", "Fe (ppm)", "Cr2O3 ppm", "Cr2O3 (ppm)", "SiO2 mol%", "H2O-", "H2O (-)", "H2O\u2212", "H2O+", "LOI",
			"FeO calc", "SiO2 2s", "SiO2 sd", "SiO2 error", "SiO2/Al2O3", "FeO/MgO", "T", "P", "P (atm)", "T (F)", "x", "X (mm)", "remarks", "", "  ", "Mg#", "P2O5 ug/g",
			"Fe3+/ΣFe", "total cations", "weight%"}, ""},
		{chem.Apfu, []string{"Si", "Si apfu", "Si (apfu)", "Si pfu", "Si a.p.f.u.", "si_apfu", "Si cations"}, "Si apfu"},
		{chem.Apfu, []string{"Fe3+", "Fe³⁺", "Fe(III)", "Fe 3+", "Fe+3", "Fe3 apfu"}, "Fe3 apfu"},
		{chem.Apfu, []string{"Fe2+", "Fe²⁺", "Fe(II)"}, "Fe2 apfu"},
		{chem.Apfu, []string{"Fe", "Fe total", "Fe*", "Fe apfu", "ΣFe"}, "Fe apfu"},
		{chem.Apfu, []string{"P", "P apfu"}, "P apfu"}, {chem.Apfu, []string{"K"}, "K apfu"},
		{chem.Apfu, []string{"P (kbar)", "p_kbar"}, "p_kbar"},
		{chem.Apfu, []string{"SiO2", "Ab", "Si wt%", "Si at%", "Total", "Sum", "O"}, ""},
		{chem.EndMember, []string{"Ab", "XAb", "X_Ab", "X(Ab)", "Ab fraction", "Ab (mole fraction)", "X Ab", "ab"}, "Ab"},
		{chem.EndMember, []string{"An"}, "An"}, {chem.EndMember, []string{"Or", "or"}, "Or"}, {chem.EndMember, []string{"Cn", "XCn"}, "Cn"},
		{chem.EndMember, []string{"Ab mol%", "Ab %", "Ab (mol)", "SiO2", "Si", "Total"}, ""},
		{chem.OxideWt, []string{"Sample", "SAMPLE", "Sample No.", "sample_id", "Sample name", "Sample #"}, "sample"},
		{chem.OxideWt, []string{"Analysis", "Spot", "spot no.", "Point#", "label", "analysis_id"}, "label"},
		{chem.OxideWt, []string{"Mineral", "phase", "Min.", "PHASE"}, "phase"},
		{chem.OxideWt, []string{"texture", "Textural position"}, "texture"},
		{chem.OxideWt, []string{"thin section", "domain"}, "domain"},
		{chem.OxideWt, []string{"pair", "Pair label", "pair_label", "Pair no."}, "pair"},
		{chem.OxideWt, []string{"T (C)", "T (°C)", "T °C", "T/°C", "T (℃)", "T (ºC)", "Temperature (deg C)", "T_C", "published_t_c", "T [C]"}, "published_t_c"},
		{chem.OxideWt, []string{"T (K)", "T/K", "Temp. K", "published_t_k"}, "published_t_k"},
		{chem.OxideWt, []string{"published_sigma_c", "sigma T (C)", "T sigma (C)", "σT (°C)"}, "published_sigma_c"},
		{chem.OxideWt, []string{"P kbar", "P (kbar)", "P/kbar", "Pressure (kb)", "p_kbar"}, "p_kbar"},
		{chem.OxideWt, []string{"P (GPa)", "p_gpa"}, "p_gpa"}, {chem.OxideWt, []string{"P (MPa)"}, "p_mpa"}, {chem.OxideWt, []string{"P bar", "P (bars)"}, "p_bar"},
		{chem.OxideWt, []string{"published_p_kbar", "published P (kbar)"}, "published_p_kbar"},
		{chem.OxideWt, []string{"p_sigma_kbar", "sigma P (kbar)"}, "p_sigma_kbar"},
		{chem.OxideWt, []string{"x (µm)", "X um", "x (μm)", "x_um", "stage x (um)", "spot_x_um"}, "x_um"},
		{chem.OxideWt, []string{"y (µm)", "y_um"}, "y_um"},
		{chem.OxideWt, []string{"n", "n_spots", "No. of analyses"}, "n_spots"},
		{chem.OxideWt, []string{"Area fraction", "area_fraction", "Area (frac.)"}, "area_fraction"}, {chem.OxideWt, []string{"Area", "Area %"}, ""},
		{chem.OxideWt, []string{"Latitude", "lat", "Lat (°)"}, "latitude"}, {chem.OxideWt, []string{"Longitude", "lon"}, "longitude"},
		{chem.OxideWt, []string{"Locality"}, "locality"}, {chem.OxideWt, []string{"Unit", "rock unit"}, "unit"}, {chem.OxideWt, []string{"grain"}, "grain"},
		{chem.OxideWt, []string{"session"}, "session"}, {chem.OxideWt, []string{"generation"}, "generation"}, {chem.OxideWt, []string{"assemblage"}, "assemblage"},
		{chem.OxideWt, []string{"analysis_kind", "Analysis type"}, "analysis_kind"},
		{chem.OxideWt, []string{"published_kind"}, "published_kind"}, {chem.OxideWt, []string{"published_method"}, "published_method"},
	} {
		for _, h := range c.headers {
			if got := vocabularyOf[c.kind]().look(h).quantity.String(); got != c.want {
				t.Errorf("header %q in a source in %s is %q, want %q", h, c.kind, got, c.want)
			}
		}
	}
}

// Every quantity's own name is understood in a source of its kind.
func TestVocabularyKnowsQuantities(t *testing.T) {
	for _, q := range manifests.Quantities() {
		if q == manifests.Ignored {
			continue
		}
		kind := chem.OxideWt
		if m, _, ok := q.Measurand(); ok {
			kind = m.Kind()
		}
		if got := vocabularyOf[kind]().look(q.String()).quantity; got != q {
			t.Errorf("header %q is %q, want itself", q, got)
		}
	}
}

func TestVocabularyForeignUnit(t *testing.T) {
	for _, c := range []struct {
		kind    chem.Kind
		header  string
		unit    string
		foreign bool
	}{
		{chem.EndMember, "Ab mol%", "mol %", true}, {chem.EndMember, "Ab (%)", "%", true}, {chem.EndMember, "X Ab (mol %)", "mol %", true},
		{chem.OxideWt, "SiO2 (mol%)", "mol %", true}, {chem.Apfu, "Si at.%", "at %", true}, {chem.OxideWt, "Cr2O3 (ppm)", "ppm", false},
		{chem.OxideWt, "T (F)", "f", false}, {chem.OxideWt, "T", "", false}, {chem.OxideWt, "SiO2 2s", "2s", false}, {chem.OxideWt, "remarks", "", false},
	} {
		got := vocabularyOf[c.kind]().look(c.header)
		if got.quantity != manifests.NoQuantity || got.unit != c.unit || got.foreign() != c.foreign {
			t.Errorf("header %q: quantity %q, unit %q, foreign %v; want unused, unit %q, foreign %v", c.header, got.quantity, got.unit, got.foreign(), c.unit, c.foreign)
		}
	}
}
