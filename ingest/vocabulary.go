package ingest

import (
	"fmt"
	"strings"
	"sync"

	"golang.org/x/text/unicode/norm"

	"tieline/manifests"
	"tieline/thermo/chem"
)

// vocabulary is what headers mean in a source whose compositions are of one
// kind: "Si" is a cation per formula unit in one and an unused column in
// another. Keys are folded: the header's tokens run together.
type vocabulary struct {
	quantity map[string]manifests.Quantity // stem and unit
	stem     map[string]manifests.Quantity // without a unit, to say what is wrong with one
}

// vocabularyOf gives the headers known for a kind of composition.
var vocabularyOf = func() (of [chem.EndMember + 1]func() *vocabulary) {
	for kind := range of {
		of[kind] = sync.OnceValue(func() *vocabulary { return newVocabulary(chem.Kind(kind)) })
	}
	return of
}()

// Units by quantity; "" is a header without one.
var (
	weightUnits = []string{"", "wt", "wt%", "wtpct", "wtpercent", "weight%", "weightpct", "weightpercent", "mass%", "masspct", "masspercent", "m%",
		"%", "pct", "percent", "oxidewt%", "wt%oxide"}
	apfuUnits     = []string{"", "apfu", "pfu", "cations"}
	fractionUnits = []string{"", "fraction", "molfraction", "molefraction", "molarfraction"}
	sigmaWords    = []string{"sigma", "1sigma", "1s"}
	noUnit        = []string{""}
	celsius       = []string{"c", "degc", "oc", "celsius", "degcelsius"}
	kelvin        = []string{"k", "kelvin"}
	kbar          = []string{"kbar", "kb", "kilobar"}
	micrometres   = []string{"um", "micron", "microns", "micrometre", "micrometer"}
	degrees       = []string{"", "deg", "degrees", "dd", "wgs84"}
)

// Units in which a composition is given by a whole table; a number in one of
// them is never read in another.
var otherUnits = map[string]bool{
	"mol": true, "mol%": true, "mole%": true, "molar%": true, "molpct": true, "molpercent": true, "molepercent": true,
	"at%": true, "atomic%": true, "atom%": true, "atpct": true, "%": true, "pct": true, "percent": true,
	"wt%": true, "weight%": true, "mass%": true,
}

// plainStems are the headers of what is no part of the composition.
var plainStems = []struct {
	quantity manifests.Quantity
	stems    string
	units    []string
}{
	{manifests.Sample, "sample sampleid sampleno samplename samplenumber samplelabel", noUnit},
	{manifests.Label, "label analysis analysisid analysisno analysisnumber analysislabel analysisname spot spotid spotno spotnumber spotlabel spotname point pointid pointno pointnumber", noUnit},
	{manifests.PhaseName, "phase phasename mineral mineralname mineralphase min", noUnit},
	{manifests.Texture, "texture texturalsetting texturalposition", noUnit},
	{manifests.Domain, "domain thinsection section", noUnit},
	{manifests.Generation, "generation", noUnit},
	{manifests.Assemblage, "assemblage mineralassemblage", noUnit},
	{manifests.AnalysisKind, "analysiskind analysistype kindofanalysis", noUnit},
	{manifests.Grain, "grain grainid grainno grainnumber", noUnit},
	{manifests.Session, "session sessionid", noUnit},
	{manifests.Locality, "locality location", noUnit},
	{manifests.Unit, "unit rockunit geologicalunit geologicunit tectonicunit", noUnit},
	{manifests.PairLabel, "pair pairlabel pairid pairno pairname", noUnit},
	{manifests.XUm, "x stagex xstage spotx", micrometres},
	{manifests.YUm, "y stagey ystage spoty", micrometres},
	{manifests.PublishedC, "t temp temperature publishedt tpublished publishedtemperature", celsius},
	{manifests.PublishedK, "t temp temperature publishedt tpublished publishedtemperature", kelvin},
	{manifests.PublishedSigmaC, "tsigma sigmat tempsigma sigmatemp publishedsigma publishedtsigma", celsius},
	{manifests.PublishedPKbar, "publishedp ppublished publishedpressure", kbar},
	{manifests.PublishedKind, "publishedkind", noUnit},
	{manifests.PublishedMethod, "publishedmethod", noUnit},
	{manifests.PKbar, "p pressure", kbar},
	{manifests.PGpa, "p pressure", []string{"gpa"}},
	{manifests.PMpa, "p pressure", []string{"mpa"}},
	{manifests.PBar, "p pressure", []string{"bar", "bars"}},
	{manifests.PSigmaKbar, "psigma sigmap pressuresigma sigmapressure", kbar},
	{manifests.NSpots, "n nspots nanalyses numberofspots numberofanalyses noofspots noofanalyses", noUnit},
	{manifests.AreaFraction, "area", []string{"fraction", "frac", "proportion"}},
	{manifests.Latitude, "latitude lat", degrees},
	{manifests.Longitude, "longitude lon long", degrees},
}

// ironStems are the other ways to write iron: total iron carries a mark, a
// letter T, or the word.
var ironStems = map[chem.Measurand]string{
	chem.FeOT: "feo* feot feotot feototal tfeo totfeo totalfeo sumfeo feosum allfeasfeo totalfeasfeo feasfeo",
	chem.Fe2O3T: "fe2o3* fe2o3t fe2o3tot fe2o3total tfe2o3 totfe2o3 totalfe2o3 sumfe2o3 fe2o3sum " +
		"allfeasfe2o3 totalfeasfe2o3 feasfe2o3",
	chem.FeT:                         "fe fe* fet fetot fetotal tfe totfe totalfe sumfe fesum",
	chem.MeasurandOfCation(chem.Fe3): "fe3 fe3+ fe+3 fe+++ feiii",
	chem.MeasurandOfCation(chem.Fe2): "fe2 fe2+ fe+2 fe++ feii",
}

func newVocabulary(kind chem.Kind) *vocabulary {
	v := &vocabulary{quantity: map[string]manifests.Quantity{}, stem: map[string]manifests.Quantity{}}
	for _, p := range plainStems {
		v.add(p.quantity, strings.Fields(p.stems), p.units)
	}
	if kind == chem.OxideWt {
		v.add(manifests.Total, strings.Fields("total totals sum oxidetotal totaloxides oxidesum sumoxides reportedtotal"), weightUnits)
	}
	for m := range chem.NumMeasurands {
		if m.Kind() == kind {
			v.addMeasurand(m)
		}
	}
	return v
}

func (v *vocabulary) addMeasurand(m chem.Measurand) {
	stems, units := stemsOf(m)
	v.add(manifests.Value(m), stems, units)
	for _, s := range stems {
		for _, word := range sigmaWords {
			v.add(manifests.Sigma(m), []string{s + word, word + s}, units)
			for _, u := range units[1:] {
				v.add(manifests.Sigma(m), []string{s + u + word}, noUnit)
			}
		}
		if m.Kind() == chem.OxideWt {
			v.add(manifests.Value(m), []string{"wt%" + s}, noUnit)
		}
	}
}

func stemsOf(m chem.Measurand) (stems, units []string) {
	plain := strings.ToLower(strings.TrimSuffix(m.String(), " apfu"))
	stems = []string{plain}
	if more, ok := ironStems[m]; ok {
		stems = strings.Fields(more)
	}
	switch m.Kind() {
	case chem.OxideWt:
		return stems, weightUnits
	case chem.Apfu:
		return stems, apfuUnits
	}
	return append(stems, "x"+plain), fractionUnits
}

// add is where two meanings of one header would meet: a mistake in the tables
// above, which their test finds.
func (v *vocabulary) add(q manifests.Quantity, stems, units []string) {
	for _, s := range stems {
		if _, ok := v.stem[s]; !ok {
			v.stem[s] = q
		}
		for _, u := range units {
			if other, ok := v.quantity[s+u]; ok && other != q {
				panic(fmt.Sprintf("ingest: header %q means both %s and %s", s+u, other, q))
			}
			v.quantity[s+u] = q
		}
	}
}

// meaning is what a header says.
type meaning struct {
	quantity manifests.Quantity // NoQuantity: unused
	stem     manifests.Quantity // where only the unit stands in the way: the quantity without it
	unit     string             // that unit as written, folded; "" for none
}

// look finds what a header means.
func (v *vocabulary) look(header string) meaning {
	parts := tokens(header)
	if q, ok := v.quantity[strings.Join(parts, "")]; ok {
		return meaning{quantity: q}
	}
	for i := len(parts); i > 0; i-- {
		if q, ok := v.stem[strings.Join(parts[:i], "")]; ok {
			return meaning{stem: q, unit: strings.Join(parts[i:], " ")}
		}
	}
	return meaning{}
}

// foreign says whether the unit is one that a whole table is given in, so that
// leaving the column unused would be as wrong as reading it.
func (m meaning) foreign() bool {
	_, sigma, ok := m.stem.Measurand()
	return ok && !sigma && otherUnits[strings.ReplaceAll(m.unit, " ", "")]
}

// spelling makes signs into letters and sets apart what is a token of its own.
var spelling = strings.NewReplacer("Σ", " sum ", "∑", " sum ", "σ", " sigma ", "*", " * ", "%", " % ", "#", " no ", "°", " ", "μ", "u")

// tokens folds a header: NFKC, lower case, signs spelled out, split at spaces
// and punctuation. Tabs and semicolons are left, they may be separators read as
// none. A minus at the end stays: H2O- is not H2O.
func tokens(header string) []string {
	s := strings.ToLower(spelling.Replace(norm.NFKC.String(trim(header))))
	parts := strings.FieldsFunc(s, func(r rune) bool { return r != '\t' && blank(r) || strings.ContainsRune("_-.,/()[]{}:=|'\"−", r) })
	end := strings.TrimRight(s, " )]}")
	if strings.HasSuffix(end, "-") || strings.HasSuffix(end, minus) {
		parts = append(parts, "minus")
	}
	return parts
}
