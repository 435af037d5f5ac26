package tables

import "tieline/thermo/chem"

// The row types below are the declaration of every table: the Parquet and Arrow
// schemas, the columns' metadata and the data dictionary come from their tags.
// A nullable number is a pointer, nil for NULL; a nullable text is "" for NULL.
// Temperatures are degC and pressures kbar, in the names.

// AnalysisRow is one analysis: one spot, or one reported mean, on one phase.
type AnalysisRow struct {
	AnalysisID        string   `parquet:"analysis_id" doc:"The analysis's name in this compilation: source/label, or source/sample:phase where the source has no labels, or source/grain:re-integrated; #2, #3 ... mark repeats"`
	Source            string   `parquet:"source" doc:"Id of the source, as the manifest gives it"`
	SourceLine        int64    `parquet:"source_line" doc:"Line of the source file on which the analysis starts, counted from 1; that of its first part for a re-integrated one"`
	SourceColumn      *int64   `parquet:"source_column,optional" doc:"Column of the source file, counted from 1, where analyses stand side by side; NULL where a line is one analysis"`
	Label             string   `parquet:"label,optional" doc:"Label of the analysis as the source gives it; NULL where it has none"`
	Sample            string   `parquet:"sample" doc:"Sample the analysis belongs to"`
	Phase             string   `parquet:"phase" doc:"Mineral symbol after Warr (2021), IMA-CNMNC; empty where the source's word for the phase is passed over"`
	PhaseText         string   `parquet:"phase_text" doc:"The phase as the source or the manifest words it"`
	Texture           string   `parquet:"texture,optional" doc:"Textural position, such as core, rim, host, lamella, inclusion, symplectite, matrix; NULL where not given"`
	Domain            string   `parquet:"domain,optional" doc:"Thin section or other frame that the stage coordinates belong to; NULL where not given"`
	Generation        string   `parquet:"generation,optional" doc:"Generation of the mineral as the source gives it; NULL where not given"`
	Assemblage        string   `parquet:"assemblage,optional" doc:"Minerals recorded as coexisting; NULL where not given"`
	AnalysisKind      string   `parquet:"analysis_kind,optional" doc:"Spot, raster, re-integrated, or mean of several spots; NULL where not given"`
	Grain             string   `parquet:"grain,optional" doc:"Grain as the source names it; NULL where not given"`
	Session           string   `parquet:"session,optional" doc:"Laboratory session, whose calibration error its analyses share; NULL where not given"`
	SpotXUm           *float64 `parquet:"spot_x_um,optional" unit:"um" doc:"Stage x of the spot in its domain; NULL where not given"`
	SpotYUm           *float64 `parquet:"spot_y_um,optional" unit:"um" doc:"Stage y of the spot in its domain; NULL where not given"`
	NSpots            *float64 `parquet:"n_spots,optional" unit:"count" doc:"Number of spots a reported mean is of; NULL where not given"`
	AreaFraction      *float64 `parquet:"area_fraction,optional" unit:"1" doc:"Share of an exsolved grain's area that the part analysed takes up, as the source gives it; NULL where not given"`
	Locality          string   `parquet:"locality,optional" doc:"Locality of the sample as the source names it; NULL where not given"`
	Unit              string   `parquet:"unit,optional" doc:"Geological unit of the sample as the source names it; NULL where not given"`
	Latitude          string   `parquet:"latitude,optional" doc:"Latitude as the source writes it; NULL where not given"`
	Longitude         string   `parquet:"longitude,optional" doc:"Longitude as the source writes it; NULL where not given"`
	CompositionKind   string   `parquet:"composition_kind" doc:"The kind of numbers the source gives: oxide wt%, apfu, or end-member fraction"`
	SiO2Wt            *float64 `parquet:"sio2_wt,optional" unit:"wt%" doc:"SiO2, as measured; NULL where not given, not analysed or below detection"`
	SiO2SigmaWt       *float64 `parquet:"sio2_sigma_wt,optional" unit:"wt%" doc:"1-sigma of SiO2: the source's own, else the manifest's rule; NULL where there is no number"`
	TiO2Wt            *float64 `parquet:"tio2_wt,optional" unit:"wt%" doc:"TiO2, as measured; NULL where not given, not analysed or below detection"`
	TiO2SigmaWt       *float64 `parquet:"tio2_sigma_wt,optional" unit:"wt%" doc:"1-sigma of TiO2: the source's own, else the manifest's rule; NULL where there is no number"`
	Al2O3Wt           *float64 `parquet:"al2o3_wt,optional" unit:"wt%" doc:"Al2O3, as measured; NULL where not given, not analysed or below detection"`
	Al2O3SigmaWt      *float64 `parquet:"al2o3_sigma_wt,optional" unit:"wt%" doc:"1-sigma of Al2O3: the source's own, else the manifest's rule; NULL where there is no number"`
	Cr2O3Wt           *float64 `parquet:"cr2o3_wt,optional" unit:"wt%" doc:"Cr2O3, as measured; NULL where not given, not analysed or below detection"`
	Cr2O3SigmaWt      *float64 `parquet:"cr2o3_sigma_wt,optional" unit:"wt%" doc:"1-sigma of Cr2O3: the source's own, else the manifest's rule; NULL where there is no number"`
	V2O3Wt            *float64 `parquet:"v2o3_wt,optional" unit:"wt%" doc:"V2O3, as measured; NULL where not given, not analysed or below detection"`
	V2O3SigmaWt       *float64 `parquet:"v2o3_sigma_wt,optional" unit:"wt%" doc:"1-sigma of V2O3: the source's own, else the manifest's rule; NULL where there is no number"`
	Fe2O3Wt           *float64 `parquet:"fe2o3_wt,optional" unit:"wt%" doc:"Fe2O3 given as ferric iron only, as measured; NULL where not given, not analysed or below detection"`
	Fe2O3SigmaWt      *float64 `parquet:"fe2o3_sigma_wt,optional" unit:"wt%" doc:"1-sigma of Fe2O3: the source's own, else the manifest's rule; NULL where there is no number"`
	FeOWt             *float64 `parquet:"feo_wt,optional" unit:"wt%" doc:"FeO given as ferrous iron only, as measured; NULL where not given, not analysed or below detection"`
	FeOSigmaWt        *float64 `parquet:"feo_sigma_wt,optional" unit:"wt%" doc:"1-sigma of FeO: the source's own, else the manifest's rule; NULL where there is no number"`
	MnOWt             *float64 `parquet:"mno_wt,optional" unit:"wt%" doc:"MnO, as measured; NULL where not given, not analysed or below detection"`
	MnOSigmaWt        *float64 `parquet:"mno_sigma_wt,optional" unit:"wt%" doc:"1-sigma of MnO: the source's own, else the manifest's rule; NULL where there is no number"`
	NiOWt             *float64 `parquet:"nio_wt,optional" unit:"wt%" doc:"NiO, as measured; NULL where not given, not analysed or below detection"`
	NiOSigmaWt        *float64 `parquet:"nio_sigma_wt,optional" unit:"wt%" doc:"1-sigma of NiO: the source's own, else the manifest's rule; NULL where there is no number"`
	ZnOWt             *float64 `parquet:"zno_wt,optional" unit:"wt%" doc:"ZnO, as measured; NULL where not given, not analysed or below detection"`
	ZnOSigmaWt        *float64 `parquet:"zno_sigma_wt,optional" unit:"wt%" doc:"1-sigma of ZnO: the source's own, else the manifest's rule; NULL where there is no number"`
	MgOWt             *float64 `parquet:"mgo_wt,optional" unit:"wt%" doc:"MgO, as measured; NULL where not given, not analysed or below detection"`
	MgOSigmaWt        *float64 `parquet:"mgo_sigma_wt,optional" unit:"wt%" doc:"1-sigma of MgO: the source's own, else the manifest's rule; NULL where there is no number"`
	CaOWt             *float64 `parquet:"cao_wt,optional" unit:"wt%" doc:"CaO, as measured; NULL where not given, not analysed or below detection"`
	CaOSigmaWt        *float64 `parquet:"cao_sigma_wt,optional" unit:"wt%" doc:"1-sigma of CaO: the source's own, else the manifest's rule; NULL where there is no number"`
	SrOWt             *float64 `parquet:"sro_wt,optional" unit:"wt%" doc:"SrO, as measured; NULL where not given, not analysed or below detection"`
	SrOSigmaWt        *float64 `parquet:"sro_sigma_wt,optional" unit:"wt%" doc:"1-sigma of SrO: the source's own, else the manifest's rule; NULL where there is no number"`
	BaOWt             *float64 `parquet:"bao_wt,optional" unit:"wt%" doc:"BaO, as measured; NULL where not given, not analysed or below detection"`
	BaOSigmaWt        *float64 `parquet:"bao_sigma_wt,optional" unit:"wt%" doc:"1-sigma of BaO: the source's own, else the manifest's rule; NULL where there is no number"`
	Na2OWt            *float64 `parquet:"na2o_wt,optional" unit:"wt%" doc:"Na2O, as measured; NULL where not given, not analysed or below detection"`
	Na2OSigmaWt       *float64 `parquet:"na2o_sigma_wt,optional" unit:"wt%" doc:"1-sigma of Na2O: the source's own, else the manifest's rule; NULL where there is no number"`
	K2OWt             *float64 `parquet:"k2o_wt,optional" unit:"wt%" doc:"K2O, as measured; NULL where not given, not analysed or below detection"`
	K2OSigmaWt        *float64 `parquet:"k2o_sigma_wt,optional" unit:"wt%" doc:"1-sigma of K2O: the source's own, else the manifest's rule; NULL where there is no number"`
	P2O5Wt            *float64 `parquet:"p2o5_wt,optional" unit:"wt%" doc:"P2O5, as measured; NULL where not given, not analysed or below detection"`
	P2O5SigmaWt       *float64 `parquet:"p2o5_sigma_wt,optional" unit:"wt%" doc:"1-sigma of P2O5: the source's own, else the manifest's rule; NULL where there is no number"`
	CO2Wt             *float64 `parquet:"co2_wt,optional" unit:"wt%" doc:"CO2, as measured; NULL where not given, not analysed or below detection"`
	CO2SigmaWt        *float64 `parquet:"co2_sigma_wt,optional" unit:"wt%" doc:"1-sigma of CO2: the source's own, else the manifest's rule; NULL where there is no number"`
	H2OWt             *float64 `parquet:"h2o_wt,optional" unit:"wt%" doc:"H2O, as measured; NULL where not given, not analysed or below detection"`
	H2OSigmaWt        *float64 `parquet:"h2o_sigma_wt,optional" unit:"wt%" doc:"1-sigma of H2O: the source's own, else the manifest's rule; NULL where there is no number"`
	FWt               *float64 `parquet:"f_wt,optional" unit:"wt%" doc:"F, as measured; NULL where not given, not analysed or below detection"`
	FSigmaWt          *float64 `parquet:"f_sigma_wt,optional" unit:"wt%" doc:"1-sigma of F: the source's own, else the manifest's rule; NULL where there is no number"`
	ClWt              *float64 `parquet:"cl_wt,optional" unit:"wt%" doc:"Cl, as measured; NULL where not given, not analysed or below detection"`
	ClSigmaWt         *float64 `parquet:"cl_sigma_wt,optional" unit:"wt%" doc:"1-sigma of Cl: the source's own, else the manifest's rule; NULL where there is no number"`
	FeOTotalWt        *float64 `parquet:"feo_total_wt,optional" unit:"wt%" doc:"All iron as FeO, as measured; NULL where the source gives iron otherwise"`
	FeOTotalSigmaWt   *float64 `parquet:"feo_total_sigma_wt,optional" unit:"wt%" doc:"1-sigma of all iron as FeO: the source's own, else the manifest's rule; NULL where there is no number"`
	Fe2O3TotalWt      *float64 `parquet:"fe2o3_total_wt,optional" unit:"wt%" doc:"All iron as Fe2O3, as measured; NULL where the source gives iron otherwise"`
	Fe2O3TotalSigmaWt *float64 `parquet:"fe2o3_total_sigma_wt,optional" unit:"wt%" doc:"1-sigma of all iron as Fe2O3: the source's own, else the manifest's rule; NULL where there is no number"`
	NotAnalysed       string   `parquet:"not_analysed,optional" doc:"What the source says was not analysed, names joined by commas; NULL for none. Not analysed is not zero"`
	BelowDetection    string   `parquet:"below_detection,optional" doc:"What the source says is below detection, with the limit in wt% where stated, such as K2O < 0.02, MnO; NULL for none"`
	ReportedTotalWt   *float64 `parquet:"reported_total_wt,optional" unit:"wt%" doc:"Total as the source prints it; NULL where it prints none"`
	TotalWt           *float64 `parquet:"total_wt,optional" unit:"wt%" doc:"Total recomputed from the oxides, less the oxygen that F and Cl replace; NULL where the source gives no oxides"`
	Oxygens           *float64 `parquet:"oxygens,optional" unit:"per formula unit" doc:"Oxygens the structural formula is based on; NULL where there is no formula"`
	Fe3Basis          string   `parquet:"fe3_basis,optional" doc:"Where the formula's ferric iron comes from: as given, all Fe2+, all Fe3+, charge balance; NULL where there is no formula"`
	SiApfu            *float64 `parquet:"si_apfu,optional" unit:"apfu" doc:"Si atoms per formula unit; NULL where not measured, or where there is no formula"`
	TiApfu            *float64 `parquet:"ti_apfu,optional" unit:"apfu" doc:"Ti atoms per formula unit; NULL where not measured, or where there is no formula"`
	AlApfu            *float64 `parquet:"al_apfu,optional" unit:"apfu" doc:"Al atoms per formula unit; NULL where not measured, or where there is no formula"`
	CrApfu            *float64 `parquet:"cr_apfu,optional" unit:"apfu" doc:"Cr atoms per formula unit; NULL where not measured, or where there is no formula"`
	VApfu             *float64 `parquet:"v_apfu,optional" unit:"apfu" doc:"V atoms per formula unit; NULL where not measured, or where there is no formula"`
	Fe3Apfu           *float64 `parquet:"fe3_apfu,optional" unit:"apfu" doc:"Fe3+ atoms per formula unit; NULL where not measured, or where there is no formula"`
	Fe2Apfu           *float64 `parquet:"fe2_apfu,optional" unit:"apfu" doc:"Fe2+ atoms per formula unit; NULL where not measured, or where there is no formula"`
	MnApfu            *float64 `parquet:"mn_apfu,optional" unit:"apfu" doc:"Mn atoms per formula unit; NULL where not measured, or where there is no formula"`
	NiApfu            *float64 `parquet:"ni_apfu,optional" unit:"apfu" doc:"Ni atoms per formula unit; NULL where not measured, or where there is no formula"`
	ZnApfu            *float64 `parquet:"zn_apfu,optional" unit:"apfu" doc:"Zn atoms per formula unit; NULL where not measured, or where there is no formula"`
	MgApfu            *float64 `parquet:"mg_apfu,optional" unit:"apfu" doc:"Mg atoms per formula unit; NULL where not measured, or where there is no formula"`
	CaApfu            *float64 `parquet:"ca_apfu,optional" unit:"apfu" doc:"Ca atoms per formula unit; NULL where not measured, or where there is no formula"`
	SrApfu            *float64 `parquet:"sr_apfu,optional" unit:"apfu" doc:"Sr atoms per formula unit; NULL where not measured, or where there is no formula"`
	BaApfu            *float64 `parquet:"ba_apfu,optional" unit:"apfu" doc:"Ba atoms per formula unit; NULL where not measured, or where there is no formula"`
	NaApfu            *float64 `parquet:"na_apfu,optional" unit:"apfu" doc:"Na atoms per formula unit; NULL where not measured, or where there is no formula"`
	KApfu             *float64 `parquet:"k_apfu,optional" unit:"apfu" doc:"K atoms per formula unit; NULL where not measured, or where there is no formula"`
	PApfu             *float64 `parquet:"p_apfu,optional" unit:"apfu" doc:"P atoms per formula unit; NULL where not measured, or where there is no formula"`
	CationSum         *float64 `parquet:"cation_sum,optional" unit:"apfu" doc:"Sum of the cations per formula unit; NULL where there is no formula"`
	Ab                *float64 `parquet:"ab,optional" unit:"mole fraction" doc:"Mole fraction of NaAlSi3O8 in a feldspar, Ab + Or + An = 1; NULL for other phases"`
	Or                *float64 `parquet:"or,optional" unit:"mole fraction" doc:"Mole fraction of KAlSi3O8 in a feldspar, Ab + Or + An = 1; NULL for other phases"`
	An                *float64 `parquet:"an,optional" unit:"mole fraction" doc:"Mole fraction of CaAl2Si2O8 in a feldspar, Ab + Or + An = 1; NULL for other phases"`
	Cn                *float64 `parquet:"cn,optional" unit:"mole fraction" doc:"Mole fraction of BaAl2Si2O8 in a feldspar, of Ab + Or + An + Cn; NULL for other phases and where BaO is not known"`
	EndMemberSum      *float64 `parquet:"end_member_sum,optional" unit:"mole fraction" doc:"Sum of the end members as the source gives them, before they are renormalised to 1; NULL where the source gives no end members"`
	PublishedTC       *float64 `parquet:"published_t_c,optional" unit:"degC" doc:"Temperature the source publishes for this analysis; NULL where it publishes none"`
	PublishedSigmaC   *float64 `parquet:"published_sigma_c,optional" unit:"degC" doc:"1-sigma of the published temperature as the source gives it; NULL where it gives none"`
	PublishedPKbar    *float64 `parquet:"published_p_kbar,optional" unit:"kbar" doc:"Pressure the source publishes with the temperature; NULL where it publishes none"`
	PublishedKind     string   `parquet:"published_kind,optional" doc:"What the published temperature is: experiment, thermometer or estimate; NULL where the source publishes none"`
	PublishedMethod   string   `parquet:"published_method,optional" doc:"Method of the published temperature as the source names it; NULL where not given"`
	PKbar             *float64 `parquet:"p_kbar,optional" unit:"kbar" doc:"Pressure the source gives for this analysis; NULL where it gives none"`
	PSigmaKbar        *float64 `parquet:"p_sigma_kbar,optional" unit:"kbar" doc:"1-sigma of p_kbar as the source gives it; NULL where it gives none"`
	PairLabel         string   `parquet:"pair_label,optional" doc:"Label that pairs this analysis with the one coexisting with it; NULL where not given"`
	Verdict           string   `parquet:"verdict" doc:"kept, flagged (used, with reasons) or set aside (not used, with reasons)"`
	Reasons           string   `parquet:"reasons,optional" doc:"Why the analysis is flagged or set aside; NULL where it is kept"`
	Lineage           string   `parquet:"lineage" doc:"128 bits of SHA-256, in hexadecimal, over the cells, units and settings the analysis was read with; equal lineage means the row comes from equal input"`
}

// Oxide gives the places of an oxide, or of total iron, and of its 1-sigma, wt%;
// nil for measurands that are not in wt%.
func (r *AnalysisRow) Oxide(m chem.Measurand) (wt, sigma **float64) {
	if m.Kind() != chem.OxideWt {
		return nil, nil
	}
	p := [...][2]**float64{
		chem.SiO2:   {&r.SiO2Wt, &r.SiO2SigmaWt},
		chem.TiO2:   {&r.TiO2Wt, &r.TiO2SigmaWt},
		chem.Al2O3:  {&r.Al2O3Wt, &r.Al2O3SigmaWt},
		chem.Cr2O3:  {&r.Cr2O3Wt, &r.Cr2O3SigmaWt},
		chem.V2O3:   {&r.V2O3Wt, &r.V2O3SigmaWt},
		chem.Fe2O3:  {&r.Fe2O3Wt, &r.Fe2O3SigmaWt},
		chem.FeO:    {&r.FeOWt, &r.FeOSigmaWt},
		chem.MnO:    {&r.MnOWt, &r.MnOSigmaWt},
		chem.NiO:    {&r.NiOWt, &r.NiOSigmaWt},
		chem.ZnO:    {&r.ZnOWt, &r.ZnOSigmaWt},
		chem.MgO:    {&r.MgOWt, &r.MgOSigmaWt},
		chem.CaO:    {&r.CaOWt, &r.CaOSigmaWt},
		chem.SrO:    {&r.SrOWt, &r.SrOSigmaWt},
		chem.BaO:    {&r.BaOWt, &r.BaOSigmaWt},
		chem.Na2O:   {&r.Na2OWt, &r.Na2OSigmaWt},
		chem.K2O:    {&r.K2OWt, &r.K2OSigmaWt},
		chem.P2O5:   {&r.P2O5Wt, &r.P2O5SigmaWt},
		chem.CO2:    {&r.CO2Wt, &r.CO2SigmaWt},
		chem.H2O:    {&r.H2OWt, &r.H2OSigmaWt},
		chem.F:      {&r.FWt, &r.FSigmaWt},
		chem.Cl:     {&r.ClWt, &r.ClSigmaWt},
		chem.FeOT:   {&r.FeOTotalWt, &r.FeOTotalSigmaWt},
		chem.Fe2O3T: {&r.Fe2O3TotalWt, &r.Fe2O3TotalSigmaWt},
	}[m]
	return p[0], p[1]
}

// Cation gives the place of a cation, atoms per formula unit.
func (r *AnalysisRow) Cation(c chem.Cation) **float64 {
	return [chem.NumCations]**float64{
		chem.Si:  &r.SiApfu,
		chem.Ti:  &r.TiApfu,
		chem.Al:  &r.AlApfu,
		chem.Cr:  &r.CrApfu,
		chem.V:   &r.VApfu,
		chem.Fe3: &r.Fe3Apfu,
		chem.Fe2: &r.Fe2Apfu,
		chem.Mn:  &r.MnApfu,
		chem.Ni:  &r.NiApfu,
		chem.Zn:  &r.ZnApfu,
		chem.Mg:  &r.MgApfu,
		chem.Ca:  &r.CaApfu,
		chem.Sr:  &r.SrApfu,
		chem.Ba:  &r.BaApfu,
		chem.Na:  &r.NaApfu,
		chem.K:   &r.KApfu,
		chem.P:   &r.PApfu,
	}[c]
}

// PairRow is one pair of analyses taken as coexisting: the ends of a tie line.
type PairRow struct {
	PairID        string   `parquet:"pair_id" doc:"The pair's name in this compilation: source/sample/pair label:pair kind; where no label made the pair the two analysis_ids without their source, joined by +, stand in for the label"`
	PairKind      string   `parquet:"pair_kind" doc:"The pair's two phases: two-feldspar, two-pyroxene, or alkali-feldspar-solvus (the two feldspars of one exsolved grain)"`
	Source        string   `parquet:"source" doc:"Id of the source both analyses come from"`
	Sample        string   `parquet:"sample" doc:"Sample both analyses belong to"`
	Locality      string   `parquet:"locality,optional" doc:"Locality of the sample as the source names it; NULL where not given"`
	Unit          string   `parquet:"unit,optional" doc:"Geological unit of the sample as the source names it; NULL where not given"`
	Texture       string   `parquet:"texture,optional" doc:"Textural position of the pair, of a and b where they differ; NULL where not given"`
	PairLabel     string   `parquet:"pair_label,optional" doc:"The label that made the pair; NULL where another rule did"`
	AAnalysisID   string   `parquet:"a_analysis_id" doc:"analysis_id of the first end: alkali feldspar, orthopyroxene, or the Na side of an exsolved feldspar"`
	APhase        string   `parquet:"a_phase" doc:"Mineral symbol of the first end"`
	BAnalysisID   string   `parquet:"b_analysis_id" doc:"analysis_id of the second end: plagioclase, clinopyroxene, or the K side of an exsolved feldspar"`
	BPhase        string   `parquet:"b_phase" doc:"Mineral symbol of the second end"`
	Rule          string   `parquet:"rule" doc:"The rule that paired them: listed (they share a pair label in one sample of one source), touching rims or nearest (each is the other's nearest on the stage, within the manifest's limit), means (the one mean of each phase), all combinations; all but listed within one domain, generation and texture"`
	DistanceUm    *float64 `parquet:"distance_um,optional" unit:"um" doc:"Distance between the two spots on the stage; NULL where either has no coordinates or their domains differ"`
	PKbar         *float64 `parquet:"p_kbar,optional" unit:"kbar" doc:"Pressure the pair is evaluated at; NULL where none is known"`
	PSigmaKbar    *float64 `parquet:"p_sigma_kbar,optional" unit:"kbar" doc:"1-sigma of p_kbar; NULL where none is known"`
	PSource       string   `parquet:"p_source" doc:"Where p_kbar comes from: source, manifest default (an assumed pressure), or none"`
	KdFeMg        *float64 `parquet:"kd_fe_mg,optional" unit:"1" doc:"Fe-Mg distribution coefficient (Fe/Mg in clinopyroxene) / (Fe/Mg in orthopyroxene), all iron as Fe2+; NULL for feldspars and where Fe or Mg is not known"`
	PublishedTC   *float64 `parquet:"published_t_c,optional" unit:"degC" doc:"Temperature the source publishes for this pair; NULL where it publishes none, or two that differ"`
	PublishedKind string   `parquet:"published_kind,optional" doc:"What the published temperature is: experiment, thermometer or estimate; NULL where the source publishes none"`
	Variant       string   `parquet:"variant" doc:"Which reading of the compilation the row belongs to; as declared is the manifest as it stands"`
	Verdict       string   `parquet:"verdict" doc:"kept, flagged (used, with reasons) or set aside (not used, with reasons)"`
	Reasons       string   `parquet:"reasons,optional" doc:"Why the pair is flagged or set aside; NULL where it is kept"`
	Lineage       string   `parquet:"lineage" doc:"128 bits of SHA-256, in hexadecimal, over the two analyses' lineages and the rule; equal lineage means the row comes from equal input"`
}

// EstimateRow is one temperature from one method for one pair, or for one
// analysis where the method needs one phase.
type EstimateRow struct {
	EstimateID    string   `parquet:"estimate_id" doc:"The estimate's name in this compilation: pair_id or analysis_id|method|component"`
	PairID        string   `parquet:"pair_id,optional" doc:"The pair the temperature is of; NULL for a method of one phase"`
	AnalysisID    string   `parquet:"analysis_id,optional" doc:"The analysis the temperature is of; NULL for a method of two phases"`
	Sample        string   `parquet:"sample" doc:"Sample the pair or analysis belongs to"`
	Locality      string   `parquet:"locality,optional" doc:"Locality of the sample as the source names it; NULL where not given"`
	Unit          string   `parquet:"unit,optional" doc:"Geological unit of the sample as the source names it; NULL where not given"`
	Texture       string   `parquet:"texture,optional" doc:"Textural position of the pair or analysis; NULL where not given"`
	Variant       string   `parquet:"variant" doc:"Which reading of the compilation the row belongs to; as declared is the manifest as it stands"`
	PairKind      string   `parquet:"pair_kind" doc:"two-feldspar, two-pyroxene, or the one phase a method needs"`
	Method        string   `parquet:"method" doc:"Id of the published calibration; the command methods lists them with their equations"`
	Component     string   `parquet:"component,optional" doc:"The end member whose equilibrium gives the temperature, Ab, Or or An; NULL where a method gives one temperature"`
	TC            *float64 `parquet:"t_c,optional" unit:"degC" doc:"The temperature; NULL where there is none, with the reason"`
	SigmaCalC     *float64 `parquet:"sigma_calibration_c,optional" unit:"degC" doc:"1-sigma of the calibration, as the method states it; errors of the analyses and of pressure come on top, and it does not average; NULL where the method has none, and where there is no temperature"`
	BoundC        *float64 `parquet:"bound_c,optional" unit:"degC" doc:"The temperature with the detection limit put for a component that is below it: status says whether the temperature is at most or at least that; NULL for other estimates"`
	DTDP          *float64 `parquet:"dt_dp_c_per_kbar,optional" unit:"degC/kbar" doc:"Change of the temperature with pressure at p_kbar, from P +- 100 bar; NULL where there is no temperature"`
	PKbar         *float64 `parquet:"p_kbar,optional" unit:"kbar" doc:"Pressure the temperature is computed at; NULL where none is known"`
	PSource       string   `parquet:"p_source" doc:"Where p_kbar comes from: source, manifest default (an assumed pressure), or none"`
	Fe3Basis      string   `parquet:"fe3_basis,optional" doc:"Ferric-iron convention of the method's formulae: as given, all Fe2+, all Fe3+, charge balance; NULL where the method takes no iron"`
	InRange       *bool    `parquet:"in_range,optional" doc:"Whether composition, temperature and pressure lie where the method was calibrated; NULL where there is no temperature, and for as-published"`
	OutOfRange    string   `parquet:"out_of_range,optional" doc:"The variables outside the calibrated range, joined by commas; NULL where in_range is not false"`
	Status        string   `parquet:"status" doc:"number; no number; or at most, at least: a component is below detection where the method takes its logarithm, and bound_c is a bound"`
	Reason        string   `parquet:"reason,optional" doc:"Why there is no number, or why the number is flagged or set aside; NULL for a number that is kept"`
	Standing      string   `parquet:"standing,optional" doc:"How sure it is that the coefficients are the published ones: confirmed, consistent, recalled; NULL for as-published"`
	PublishedKind string   `parquet:"published_kind,optional" doc:"For method as-published, what the temperature is: experiment, thermometer or estimate; NULL for other methods"`
	Verdict       string   `parquet:"verdict" doc:"kept, flagged (used, with reasons) or set aside (not used, with reasons); the table qc has the reasons"`
	Lineage       string   `parquet:"lineage" doc:"128 bits of SHA-256, in hexadecimal, over the pair's or analysis's lineage, the method's digest, the pressure and the settings; equal lineage means the row comes from equal input"`
}

// SampleRow is the temperatures of one method and component in one sample, or
// in the samples of one unit, of one texture.
type SampleRow struct {
	Level         string   `parquet:"level" doc:"sample: the median of the sample's pairs or analyses of one texture; unit: the median of the medians of the unit's samples"`
	Sample        string   `parquet:"sample,optional" doc:"The sample; NULL at level unit"`
	Unit          string   `parquet:"unit,optional" doc:"Geological unit, as the source names it; NULL where not given"`
	Locality      string   `parquet:"locality,optional" doc:"Locality of the sample; NULL where not given, and at level unit"`
	Texture       string   `parquet:"texture,optional" doc:"Textural position; cores and rims are never put together; NULL where not given"`
	PairKind      string   `parquet:"pair_kind" doc:"two-feldspar, two-pyroxene, ..., or the one phase a method needs"`
	Variant       string   `parquet:"variant" doc:"Which reading of the compilation the row belongs to; as declared is the manifest as it stands"`
	Method        string   `parquet:"method" doc:"Id of the published calibration, or as-published"`
	Component     string   `parquet:"component,optional" doc:"The end member whose equilibrium gives the temperature; NULL where a method gives one temperature"`
	Closes        string   `parquet:"closes,optional" doc:"The system that closes on cooling; rows of different systems are not to be averaged; NULL for as-published"`
	Standing      string   `parquet:"standing,optional" doc:"How sure it is that the coefficients are the published ones; NULL for as-published"`
	PublishedKind string   `parquet:"published_kind,optional" doc:"For method as-published, what the temperatures are: experiment, thermometer or estimate; NULL for other methods"`
	N             int64    `parquet:"n" doc:"Pairs or analyses that count: neither set aside nor out of range in composition or assemblage"`
	NSamples      int64    `parquet:"n_samples" doc:"Samples they come from"`
	NSources      int64    `parquet:"n_sources" doc:"Sources they come from"`
	NLeftOut      int64    `parquet:"n_left_out" doc:"Estimates left out since they are set aside or out of range in composition or assemblage"`
	MedianC       *float64 `parquet:"median_c,optional" unit:"degC" doc:"Median; NULL where n is 0"`
	MADC          *float64 `parquet:"mad_c,optional" unit:"degC" doc:"Median absolute deviation from the median, raw; NULL where n is 0"`
	LowestC       *float64 `parquet:"lowest_c,optional" unit:"degC" doc:"Lowest; NULL where n is 0"`
	HighestC      *float64 `parquet:"highest_c,optional" unit:"degC" doc:"Highest; NULL where n is 0"`
}

// DiscrepancyRow is the statistics of one method against another, a minus b,
// over the pairs or analyses where both give a temperature that is not set aside.
type DiscrepancyRow struct {
	GroupBy        string   `parquet:"group_by" doc:"What the rows are grouped by; all for the whole compilation"`
	Group          string   `parquet:"group" doc:"The group's name; all for the whole compilation"`
	PairKind       string   `parquet:"pair_kind" doc:"two-feldspar, two-pyroxene, or the one phase the methods need"`
	Variant        string   `parquet:"variant" doc:"Which reading of the compilation the row belongs to; as declared is the manifest as it stands"`
	MethodA        string   `parquet:"method_a" doc:"Id of method a"`
	ComponentA     string   `parquet:"component_a,optional" doc:"Component of method a; NULL where it gives one temperature"`
	MethodB        string   `parquet:"method_b" doc:"Id of method b; as-published is always b"`
	ComponentB     string   `parquet:"component_b,optional" doc:"Component of method b; NULL where it gives one temperature"`
	PublishedKind  string   `parquet:"published_kind,optional" doc:"Where b is as-published, what its temperatures are: experiment, thermometer or estimate; NULL where the source does not say, and for other methods"`
	ClosesA        string   `parquet:"closes_a,optional" doc:"The system method a closes with on cooling; NULL for as-published"`
	ClosesB        string   `parquet:"closes_b,optional" doc:"The system method b closes with on cooling; NULL for as-published. Two systems may differ because they closed at different temperatures"`
	Shared         bool     `parquet:"shared" doc:"Whether the two methods share data or constants: their agreement is no evidence. Methods made from one another are not compared"`
	N              int64    `parquet:"n" doc:"Number of differences"`
	NSamples       int64    `parquet:"n_samples" doc:"Number of samples they come from"`
	NSources       int64    `parquet:"n_sources" doc:"Number of sources they come from"`
	MeanDiffC      *float64 `parquet:"mean_diff_c,optional" unit:"degC" doc:"Mean of the differences; NULL where n is 0"`
	MedianDiffC    *float64 `parquet:"median_diff_c,optional" unit:"degC" doc:"Median of the differences; NULL where n is 0"`
	MedianAbsDiffC *float64 `parquet:"median_abs_diff_c,optional" unit:"degC" doc:"Median of the differences without sign; NULL where n is 0"`
	SDC            *float64 `parquet:"sd_c,optional" unit:"degC" doc:"Standard deviation of the differences, n - 1 in the denominator; NULL where n is below 2"`
	MADC           *float64 `parquet:"mad_c,optional" unit:"degC" doc:"Median absolute deviation from the median, not scaled by 1.4826; NULL where n is 0"`
	LoALowC        *float64 `parquet:"loa_low_c,optional" unit:"degC" doc:"Lower limit of agreement, mean - 1.96 SD (Bland and Altman 1986); NULL where n is below 2"`
	LoAHighC       *float64 `parquet:"loa_high_c,optional" unit:"degC" doc:"Upper limit of agreement, mean + 1.96 SD (Bland and Altman 1986); NULL where n is below 2"`
}

// FindingRow is one rule of quality control that fired on one row.
type FindingRow struct {
	RowKind    string   `parquet:"row_kind" doc:"The table of the row: analysis, pair or estimate; source where the finding is on a whole column or sample of a source"`
	RowID      string   `parquet:"row_id" doc:"analysis_id, pair_id or estimate_id of the row; source:column for a source"`
	Rule       string   `parquet:"rule" doc:"The rule that fired"`
	Effect     string   `parquet:"effect" doc:"noted, flagged (the row is used) or set aside (it is not)"`
	Value      *float64 `parquet:"value,optional" unit:"as the rule" doc:"The value the rule looked at; NULL where it looks at none"`
	Limit      string   `parquet:"limit,optional" doc:"The limit or limits it was held against; NULL where there is none"`
	Detail     string   `parquet:"detail" doc:"What was found, in words"`
	Source     string   `parquet:"source,optional" doc:"Id of the source the row comes from; NULL where it comes from no single one"`
	SourceLine *int64   `parquet:"source_line,optional" doc:"Line of the source file, counted from 1; NULL for pairs and estimates"`
}
