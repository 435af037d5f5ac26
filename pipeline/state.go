package pipeline

import (
	"tieline/manifests"
	"tieline/pipeline/lineage"
	"tieline/pipeline/pairing"
	"tieline/pipeline/tables"
	"tieline/qc"
	"tieline/thermo"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// variant names the one way of working a compilation out that there is so far;
// the column is there so that alternatives can stand beside it.
const variant = "as declared"

// Where a pressure comes from, as tables say it.
const (
	pFromSource   = "source"
	pFromManifest = "manifest default"
	pFromLine     = "manifest P(T)"
	pFromNowhere  = "none"
)

// state is a compilation on its way through the stages. Each stage fills its
// part and reads the parts before it.
type state struct {
	manifest *manifests.Manifest
	methods  []*method.Method
	digests  map[*method.Info]lineage.Digest // of methods
	settings map[string]string               // of sources, by id

	all      *tables.Analyses
	parts    map[int32][]int32      // of re-integrated analyses
	ofParts  map[int32][]qc.Finding // what re-integration says of an analysis
	verdicts []qc.Verdict           // per analysis
	reasons  []string               // per analysis, "" where it is kept
	doubted  map[int32]bool         // analyses whose composition contradicts their phase

	pairs     []pairing.Pair
	pair      []pairState // per pair
	firstPair []int32     // per analysis, the first pair it is in, -1 for none
	roleIn    map[sampleRole]bool

	tally *tally
}

// pairState is what the pair stage leaves for the evaluation.
type pairState struct {
	pressure  pressure
	published published
	verdict   qc.Verdict
	reasons   string
	lineage   lineage.Digest
}

// pressure is one pair's or analysis' pressure and where it comes from.
type pressure struct {
	kbar, sigma float64
	source      string
}

func (p pressure) given() bool { return p.source != pFromNowhere }

// sampleRole says that a sample of a source holds a phase of a role.
type sampleRole struct {
	source, sample string
	role           chem.Phase
}

// published is the temperature a source prints for a row or pair.
type published struct {
	c     float64 // degC
	given bool
	kind  string // experiment, thermometer, estimate
}

func newState(m *manifests.Manifest, methods []*method.Method) *state {
	s := &state{manifest: m, methods: methods, digests: map[*method.Info]lineage.Digest{}, settings: map[string]string{}, doubted: map[int32]bool{}, tally: newTally()}
	for _, me := range methods {
		s.digests[&me.Info] = lineage.Method(me)
	}
	for i := range m.Sources {
		s.settings[m.Sources[i].ID] = m.Sources[i].Setting
	}
	return s
}

// chosen gives the methods a manifest asks for, in the order of the list, and
// the places in methods.use of ids that there are none of.
func chosen(m *manifests.Manifest) (methods []*method.Method, unknown []int) {
	named := map[string]bool{}
	for i, id := range m.Methods.Use {
		if thermo.ByID(id) == nil {
			unknown = append(unknown, i)
		}
		named[id] = true
	}
	for _, me := range thermo.Methods() {
		if named[me.ID] || (len(named) == 0 && me.Standing != method.Recalled) {
			methods = append(methods, me)
		}
	}
	return methods, unknown
}

// rowPressure gives what an analysis' own row says, else the manifest's default.
func (s *state) rowPressure(b *tables.Batch, row int) pressure {
	if p, ok := b.Number(tables.PKbar, row); ok {
		sigma, _ := b.Number(tables.PSigmaKbar, row)
		return pressure{p, sigma, pFromSource}
	}
	if s.manifest.Pressure.OnLine() {
		return pressure{source: pFromLine, sigma: s.manifest.Pressure.DefaultSigmaKbar}
	}
	if d := s.manifest.Pressure.DefaultKbar; d != nil {
		return pressure{*d, s.manifest.Pressure.DefaultSigmaKbar, pFromManifest}
	}
	return pressure{source: pFromNowhere}
}

func rowPublished(b *tables.Batch, row int) published {
	c, ok := b.Number(tables.PublishedC, row)
	return published{c, ok, b.Text(tables.PublishedKind, row)}
}

// tableBasis is the formula convention of the analyses table for a phase, from
// the manifest's scheme; it touches no method. ok is false for a phase whose
// formula is not worked out here.
func tableBasis(scheme string, role chem.Phase, c *chem.Composition) (basis method.Basis, ok bool) {
	switch role {
	case chem.Afs, chem.Pl:
		basis = method.Basis{Oxygens: 8, Cations: 5, Ferric: method.AllFe3}
	case chem.Opx, chem.Cpx:
		basis = method.Basis{Oxygens: 6, Cations: 4, Ferric: method.Balanced}
	default:
		return basis, false
	}
	switch {
	case scheme == "all Fe2+":
		basis.Ferric = method.AllFe2
	case scheme == "charge balance":
		basis.Ferric = method.Balanced
	case formula.IronSplit(c):
		basis.Ferric = method.AsGiven
	}
	return basis, true
}
