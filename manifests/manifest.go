// Package manifests holds the manifest, the one file that says everything a run
// depends on: the sources and how to read them, the limits, the pairing, the
// pressure, the methods. The compilations that ship lie beside it, a folder each.
package manifests

import (
	"math"

	"github.com/pelletier/go-toml/v2"

	"tieline/thermo/chem"
)

// FileName is what a manifest is called in its folder.
const FileName = "compilation.toml"

// Manifest is one compilation and how it is to be worked out. This struct is
// the only declaration of the format: the TOML keys, the canonical JSON and
// compilation.schema.json derive from its fields, tags and comments.
type Manifest struct {
	// What the compilation is and who made it.
	Compilation Compilation `toml:"compilation" json:"compilation" jsonschema:"required"`
	// The data files, in the order their rows are written.
	Sources []Source `toml:"source" json:"source" jsonschema:"required,minItems=1"`
	// How the formula columns of the analyses table are made.
	Normalisation Normalisation `toml:"normalisation" json:"normalisation"`
	// The limits inside which an analysis, a pair or a temperature is kept or flagged.
	QC QC `toml:"qc" json:"qc"`
	// How analyses become pairs.
	Pairing Pairing `toml:"pairing" json:"pairing"`
	// How exsolved feldspars are put together again.
	Reintegration Reintegration `toml:"reintegration" json:"reintegration"`
	// What pressure to take where a row states none.
	Pressure Pressure `toml:"pressure" json:"pressure"`
	// Which calibrations are worked out.
	Methods Methods `toml:"methods" json:"methods"`
	// The errors of the analyses where a source states none.
	Uncertainty Uncertainty `toml:"uncertainty" json:"uncertainty"`
	// Over what the discrepancies are grouped besides everything together.
	Groups Groups `toml:"groups" json:"groups"`

	at positions
}

// Compilation says what the compilation is.
type Compilation struct {
	// Short name in lower case letters, digits and hyphens; names the default result folder.
	ID string `toml:"id" json:"id" jsonschema:"required,pattern=^[a-z0-9][a-z0-9-]*$,maxLength=64"`
	// Title in one line.
	Title string `toml:"title" json:"title" jsonschema:"required,minLength=1"`
	// The people who compiled it.
	Contributors []string `toml:"contributors" json:"contributors,omitempty"`
	// Licence of the compiled files, an SPDX identifier or words.
	Licence string `toml:"licence" json:"licence,omitempty"`
	// The day it was compiled, a date without a time.
	Date *toml.LocalDate `toml:"date" json:"date,omitempty"`
}

// Source is one data file with its citation, layout, units and constants.
type Source struct {
	// Short name in lower case letters, digits and hyphens, different for each source; begins every analysis_id.
	ID string `toml:"id" json:"id" jsonschema:"required,pattern=^[a-z0-9][a-z0-9-]*$,maxLength=64"`
	// The file, below the manifest's folder, with / between folders.
	File string `toml:"file" json:"file" jsonschema:"required,minLength=1"`
	// Where the figures come from.
	Citation string `toml:"citation" json:"citation,omitempty"`

	// What stands between cells. Default: tab for a file ending in .tsv or .tab, else comma.
	Separator string `toml:"separator" json:"separator" jsonschema:"enum=comma,enum=tab,enum=semicolon"`
	// The decimal mark. Default: point.
	Decimal string `toml:"decimal" json:"decimal" jsonschema:"enum=point,enum=comma"`
	// The text encoding; a byte order mark is recognised. Default: utf-8.
	Encoding string `toml:"encoding" json:"encoding" jsonschema:"enum=utf-8,enum=utf-16le,enum=utf-16be,enum=windows-1252,enum=iso-8859-15,enum=macintosh"`

	// What kind of numbers the composition columns hold. Default: oxide wt%.
	Composition string `toml:"composition" json:"composition" jsonschema:"enum=oxide wt%,enum=apfu,enum=end-member fraction"`
	// Oxygens of the formula; required with composition = "apfu" and meaningless without.
	Oxygens float64 `toml:"oxygens" json:"oxygens,omitempty" jsonschema:"minimum=1,maximum=48"`

	// Phase of every row, an IMA symbol, for a source without a phase column.
	Phase chem.Phase `toml:"phase" json:"phase,omitempty"`
	// Sample of every row, for a source without a sample column.
	Sample string `toml:"sample" json:"sample,omitempty"`
	// Texture of every row: core, rim, host, lamella, inclusion, symplectite, matrix.
	Texture string `toml:"texture" json:"texture,omitempty"`
	// Locality of every row.
	Locality string `toml:"locality" json:"locality,omitempty"`
	// Rock unit of every row.
	Unit string `toml:"unit" json:"unit,omitempty"`
	// Kind of analysis of every row: spot, raster, re-integrated, mean of n.
	AnalysisKind string `toml:"analysis_kind" json:"analysis_kind,omitempty"`
	// Generation of every row; analyses of two generations are never paired.
	Generation string `toml:"generation" json:"generation,omitempty"`
	// What the published temperatures of this source are.
	PublishedKind string `toml:"published_kind" json:"published_kind,omitempty" jsonschema:"enum=experiment,enum=thermometer,enum=estimate"`
	// The method of the published temperatures.
	PublishedMethod string `toml:"published_method" json:"published_method,omitempty"`
	// The rocks of this source where a method asks for them, as the method names them ("mantle peridotite"); a method made for other rocks is computed and flagged.
	Setting string `toml:"setting" json:"setting,omitempty"`

	// Cell texts that mean not analysed, compared without case after trimming; a list given here replaces the default. Default: "n.a.", "na", "n/a" (common practice, no source).
	NotAnalysed []string `toml:"not_analysed" json:"not_analysed"`
	// Cell texts that mean below detection, compared likewise; "<0.02" always does, with its limit. Default: "b.d.l.", "bdl", "b.d.", "bd", "<dl" (common practice, no source).
	BelowDetection []string `toml:"below_detection" json:"below_detection"`
	// Cell texts that mean nothing was given, compared likewise; an empty cell always does. Default: "".
	Missing []string `toml:"missing" json:"missing"`

	// Header text to quantity; beats the vocabulary. "ignored" passes a column over.
	Columns map[string]Quantity `toml:"columns" json:"columns,omitempty"`
	// Phase text to IMA symbol; beats the vocabulary.
	Phases map[string]chem.Phase `toml:"phases" json:"phases,omitempty"`
	// Phase texts whose rows are set aside, such as glass.
	PassOver []string `toml:"pass_over" json:"pass_over,omitempty"`
}

// Normalisation says how the formula columns of the analyses table are made.
// It does not touch a method, which brings its own ferric-iron basis.
type Normalisation struct {
	// Ferric iron. "as measured": as given where both FeO and Fe2O3 are given, else charge balance for pyroxene and all Fe3+ for feldspar. Default: as measured (common practice, no source).
	Fe3 string `toml:"fe3" json:"fe3" jsonschema:"enum=as measured,enum=all Fe2+,enum=charge balance"`
	// How far a sum of end-member fractions may lie from 1 before the analysis is flagged. Default: 0.002, four figures rounded to .001.
	EndMemberTolerance float64 `toml:"end_member_tolerance" json:"end_member_tolerance" jsonschema:"minimum=0,maximum=0.5"`
}

// QC holds the limits. A row inside a kept limit is kept, inside the flagged one
// it is used and marked, beyond it is set aside; a limit that stands alone only
// marks.
type QC struct {
	// Oxide totals kept, wt%, with Fe2O3 by the basis used. Default: 98 to 102 (common practice, no source).
	TotalsKeptWt [2]float64 `toml:"totals_kept_wt" json:"totals_kept_wt" jsonschema:"minimum=0,maximum=200"`
	// Oxide totals flagged, wt%; beyond, set aside. Default: 97 to 102.5 (common practice, no source).
	TotalsFlaggedWt [2]float64 `toml:"totals_flagged_wt" json:"totals_flagged_wt" jsonschema:"minimum=0,maximum=200"`
	// How far a feldspar's cation sum on 8 O may lie from 5 and be kept, apfu. Default: 0.02 (common practice, no source).
	FeldsparSumKept float64 `toml:"feldspar_sum_kept" json:"feldspar_sum_kept" jsonschema:"minimum=0,maximum=5"`
	// How far it may lie from 5 and be flagged, apfu; beyond, set aside. Default: 0.05 (common practice, no source).
	FeldsparSumFlagged float64 `toml:"feldspar_sum_flagged" json:"feldspar_sum_flagged" jsonschema:"minimum=0,maximum=5"`
	// Pyroxene cation sums kept, apfu on 6 O with all iron as Fe2+. Default: 3.98 to 4.04 (common practice, no source).
	PyroxeneSumKept [2]float64 `toml:"pyroxene_sum_kept" json:"pyroxene_sum_kept" jsonschema:"minimum=0,maximum=8"`
	// Pyroxene cation sums flagged, apfu; beyond, set aside. Default: 3.96 to 4.06 (common practice, no source).
	PyroxeneSumFlagged [2]float64 `toml:"pyroxene_sum_flagged" json:"pyroxene_sum_flagged" jsonschema:"minimum=0,maximum=8"`
	// Celsian above which a feldspar is flagged, mole fraction. Default: 0.01 (common practice, no source).
	CelsianFlagged float64 `toml:"celsian_flagged" json:"celsian_flagged" jsonschema:"minimum=0,maximum=1"`
	// Celsian above which a feldspar is set aside, mole fraction. Default: 0.05 (common practice, no source).
	CelsianSetAside float64 `toml:"celsian_set_aside" json:"celsian_set_aside" jsonschema:"minimum=0,maximum=1"`
	// How far a feldspar's T site, Si + Al + Fe3+ + Ti on 8 O, may lie from 4 and be kept, apfu. Default: 0.02 (common practice, no source).
	FeldsparTSiteKept float64 `toml:"feldspar_t_site_kept" json:"feldspar_t_site_kept" jsonschema:"minimum=0,maximum=4"`
	// How far it may lie from 4 and be flagged, apfu; beyond, set aside. Default: 0.05 (common practice, no source).
	FeldsparTSiteFlagged float64 `toml:"feldspar_t_site_flagged" json:"feldspar_t_site_flagged" jsonschema:"minimum=0,maximum=4"`
	// How far a feldspar's A site, Na + K + Ca + Ba + Sr on 8 O, may lie from 1 and be kept, apfu. Default: 0.02 (common practice, no source).
	FeldsparASiteKept float64 `toml:"feldspar_a_site_kept" json:"feldspar_a_site_kept" jsonschema:"minimum=0,maximum=1"`
	// How far it may lie from 1 and be flagged, apfu; beyond, set aside. Default: 0.05 (common practice, no source).
	FeldsparASiteFlagged float64 `toml:"feldspar_a_site_flagged" json:"feldspar_a_site_flagged" jsonschema:"minimum=0,maximum=1"`
	// How far a feldspar's Al + Fe3+ may lie from 1 + Ca + Ba + Sr before it is flagged, apfu on 8 O. Default: 0.02 (common practice, no source).
	CoupledExchangeFlagged float64 `toml:"coupled_exchange_flagged" json:"coupled_exchange_flagged" jsonschema:"minimum=0,maximum=4"`
	// Iron, all as FeO, above which a feldspar is flagged as contaminated, wt%. Default: 1 (common practice, no source).
	FeldsparFeOFlaggedWt float64 `toml:"feldspar_feo_flagged_wt" json:"feldspar_feo_flagged_wt" jsonschema:"minimum=0,maximum=100"`
	// MgO above which a feldspar is flagged as contaminated, wt%. Default: 0.1 (common practice, no source).
	FeldsparMgOFlaggedWt float64 `toml:"feldspar_mgo_flagged_wt" json:"feldspar_mgo_flagged_wt" jsonschema:"minimum=0,maximum=100"`
	// How far the charges of a formula given as apfu may lie from twice its oxygens before it is flagged. Default: 0.05, ten cations rounded to .01 (common practice, no source).
	ChargeFlagged float64 `toml:"charge_flagged" json:"charge_flagged" jsonschema:"minimum=0,maximum=48"`
	// Ca of an orthopyroxene above which its name is doubted, apfu on 6 O. Default: 0.2 (common practice, no source).
	OpxCaFlagged float64 `toml:"opx_ca_flagged" json:"opx_ca_flagged" jsonschema:"minimum=0,maximum=2"`
	// Ca of a clinopyroxene below which its name is doubted, apfu on 6 O. Default: 0.4 (common practice, no source).
	CpxCaFlagged float64 `toml:"cpx_ca_flagged" json:"cpx_ca_flagged" jsonschema:"minimum=0,maximum=2"`
	// Or of a plagioclase above which its name is doubted, mole fraction. Default: 0.5, by the definition of the names.
	PlOrFlagged float64 `toml:"pl_or_flagged" json:"pl_or_flagged" jsonschema:"minimum=0,maximum=1"`
	// An of an alkali feldspar above which its name is doubted, mole fraction. Default: 0.5, by the definition of the names.
	AfsAnFlagged float64 `toml:"afs_an_flagged" json:"afs_an_flagged" jsonschema:"minimum=0,maximum=1"`
	// How far Si + Al of a pyroxene may fall short of 2 before it is flagged, apfu on 6 O. Default: 0.02 (common practice, no source).
	PyroxeneTSiteFlagged float64 `toml:"pyroxene_t_site_flagged" json:"pyroxene_t_site_flagged" jsonschema:"minimum=0,maximum=2"`
	// How far a reported total may lie from the sum of the oxides before it is flagged, wt%. Default: 0.3 (common practice, no source).
	ReportedTotalFlaggedWt float64 `toml:"reported_total_flagged_wt" json:"reported_total_flagged_wt" jsonschema:"minimum=0,maximum=100"`
	// How far a reported end member may lie from the one of the oxides before it is flagged, mole fraction. Default: 0.01 (common practice, no source).
	ReportedEndMemberFlagged float64 `toml:"reported_end_member_flagged" json:"reported_end_member_flagged" jsonschema:"minimum=0,maximum=1"`
	// Rows of one mineral a source must have before a column of it is called wrong; with fewer the answer is "cannot tell". Default: 10 (common practice, no source).
	ColumnRows uint64 `toml:"column_rows" json:"column_rows" jsonschema:"minimum=0"`
	// Sources whose copy of a duplicated analysis is kept, the best first; the rest follow in the order of the manifest. Default: none.
	Prefer []string `toml:"prefer" json:"prefer,omitempty"`
	// (Fe/Mg)cpx / (Fe/Mg)opx, total iron, of igneous pairs; outside, the temperatures of methods for igneous rocks are set aside. Default: 0.95 to 1.23, that is 1.09 +- 0.14, Putirka (2008) Rev Mineral Geochem 69:61-120 (from memory).
	KDIgneous [2]float64 `toml:"kd_igneous" json:"kd_igneous" jsonschema:"minimum=0,maximum=10"`
	// The same of subsolidus pairs; a pair outside both ranges is flagged. Default: 0.5 to 0.9, that is 0.7 +- 0.2, Putirka (2008) (from memory).
	KDSubsolidus [2]float64 `toml:"kd_subsolidus" json:"kd_subsolidus" jsonschema:"minimum=0,maximum=10"`
	// Spread of T_Ab, T_Or and T_An of one method above which these temperatures are flagged, degC. Default: 90 (common practice, no source).
	ConcordanceC float64 `toml:"concordance_c" json:"concordance_c" jsonschema:"minimum=0,maximum=2000"`
	// By how many combined 1-sigma the temperature of Ca may differ from that of Fe-Mg before both are flagged as possibly reset. Default: 2 (common practice, no source).
	ResetSigma float64 `toml:"reset_sigma" json:"reset_sigma" jsonschema:"minimum=0,maximum=100"`
	// An of plagioclase above which two-feldspar temperatures are flagged, mole fraction: its structure is I-1 there, and no model here is of it. Default: 0.65, the low end of .65 to .70 (from memory).
	PlAnFlagged float64 `toml:"pl_an_flagged" json:"pl_an_flagged" jsonschema:"minimum=0,maximum=1"`
	// A feldspar pair whose Ab and Or both differ by less lies close to the critical curve and is flagged, mole fraction. Default: 0.1 (common practice, no source).
	CriticalDistanceFlagged float64 `toml:"critical_distance_flagged" json:"critical_distance_flagged" jsonschema:"minimum=0,maximum=1"`
}

// Pairing says which analyses are taken as coexisting.
type Pairing struct {
	// The rules, tried in this order; an analysis is used by the first that pairs it. "listed": two analyses share a pair label in one sample of one source. "touching rims": two rims, each the other's nearest, at most touching_um apart. "nearest": two analyses of one texture, each the other's nearest, at most nearest_um apart. "means": the one mean of each phase, where a source has only means. "all combinations": every analysis of one phase with every one of the other. All but the first stay within one sample, domain, generation and texture. Default: listed, touching rims, nearest.
	Rules []string `toml:"rules" json:"rules" jsonschema:"enum=listed,enum=touching rims,enum=nearest,enum=means,enum=all combinations"`
	// How far apart on the stage two nearest analyses may lie, um. Default: 500 (common practice, no source).
	NearestUm float64 `toml:"nearest_um" json:"nearest_um" jsonschema:"minimum=0,maximum=100000"`
	// How far apart on the stage two rims may lie and count as touching, um. Default: 50 (common practice, no source).
	TouchingUm float64 `toml:"touching_um" json:"touching_um" jsonschema:"minimum=0,maximum=100000"`
}

// Reintegration says how a feldspar that exsolved is put together again from
// the compositions and area fractions of its parts.
type Reintegration struct {
	// Molar volumes that turn area fractions into moles: those of disordered ("high") or ordered ("low") feldspars. Default: high (Robie et al. 1978, from memory).
	Volumes string `toml:"volumes" json:"volumes" jsonschema:"enum=high,enum=low"`
}

// Pressure says what to take where no row states one.
type Pressure struct {
	// Pressure of every pair that states none, kbar; its estimates are flagged "assumed pressure". No default.
	DefaultKbar *float64 `toml:"default_kbar" json:"default_kbar,omitempty" jsonschema:"minimum=0,maximum=500"`
	// Its 1-sigma, kbar, at least 1.5. Default: 1.5 (common practice, no source).
	DefaultSigmaKbar float64 `toml:"default_sigma_kbar" json:"default_sigma_kbar" jsonschema:"minimum=1.5,maximum=500"`
	// Pressure as a straight line in temperature instead of default_kbar, P = line_kbar_at_0c + line_kbar_per_c T(degC): kbar at 0 degC. It is solved together with each method, and its estimates are flagged "assumed pressure". No default.
	LineKbarAt0C *float64 `toml:"line_kbar_at_0c" json:"line_kbar_at_0c,omitempty" jsonschema:"minimum=-500,maximum=500"`
	// The line's slope, kbar/degC; required with line_kbar_at_0c. No default.
	LineKbarPerC *float64 `toml:"line_kbar_per_c" json:"line_kbar_per_c,omitempty" jsonschema:"minimum=0,maximum=1"`
}

// OnLine says whether pressures that no row states follow a line in temperature.
func (p *Pressure) OnLine() bool { return p.LineKbarAt0C != nil && p.LineKbarPerC != nil }

// LineAt is the line's pressure at c degC, kbar.
func (p *Pressure) LineAt(c float64) float64 { return *p.LineKbarAt0C + float64(*p.LineKbarPerC*c) }

// Methods says which calibrations are worked out.
type Methods struct {
	// Ids of methods. Default: every confirmed and consistent one that fits the phases; recalled ones only when named.
	Use []string `toml:"use" json:"use,omitempty"`
}

// Uncertainty is the 1-sigma of an oxide, c in wt%, where a source gives none:
// sigma^2 = (relative c)^2 + counting c + floor.
type Uncertainty struct {
	// Seed of the random draws. Default: 1.
	Seed uint64 `toml:"seed" json:"seed" jsonschema:"minimum=0"`
	// Relative error of an oxide. Default: 0.007 (common practice, no source).
	OxideSigmaRelative float64 `toml:"oxide_sigma_relative" json:"oxide_sigma_relative" jsonschema:"minimum=0,maximum=1"`
	// Counting error, wt%. Default: 0.0009 (common practice, no source).
	OxideSigmaCountingWt float64 `toml:"oxide_sigma_counting_wt" json:"oxide_sigma_counting_wt" jsonschema:"minimum=0,maximum=1"`
	// Square of the smallest error, wt% squared. Default: 0.0002 (common practice, no source).
	OxideSigmaFloorWt2 float64 `toml:"oxide_sigma_floor_wt2" json:"oxide_sigma_floor_wt2" jsonschema:"minimum=0,maximum=1"`
}

// Groups says over what discrepancies are grouped. Everything together, "all", is always there.
type Groups struct {
	// Columns to group by. Default: none.
	By []string `toml:"by" json:"by,omitempty" jsonschema:"enum=source,enum=locality,enum=unit,enum=sample,enum=texture,enum=generation"`
}

// OxideSigma is the 1-sigma of an oxide of c wt% where its source gives none, wt%.
func (u *Uncertainty) OxideSigma(c float64) float64 {
	r := float64(u.OxideSigmaRelative * c)
	return math.Sqrt(float64(r*r) + float64(u.OxideSigmaCountingWt*math.Max(c, 0)) + u.OxideSigmaFloorWt2)
}
