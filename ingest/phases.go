package ingest

import (
	"maps"
	"slices"
	"strings"
	"sync"

	"tieline/manifests"
	"tieline/pipeline/problem"
	"tieline/thermo/chem"
)

// phaseNames are English names and common abbreviations beside the IMA symbols,
// folded: small letters, no spaces or hyphens. Abbreviations that two minerals
// share (sp, anor, fs in small letters) are left out: a phase is never guessed.
// Hypersthene, bronzite and ferrohypersthene are discredited names of
// orthopyroxene (Morimoto 1988, Mineral Mag 52:535-550), sphene of titanite.
var phaseNames = map[chem.Phase]string{
	"Afs": "afs alkalifeldspar alkfeldspar alkalifsp",
	"Kfs": "kfs kfeldspar kspar kfsp kfds potassiumfeldspar potashfeldspar potassicfeldspar",
	"Or":  "or orthoclase", "Sa": "sa san sanidine", "Mc": "mc microcline", "Ano": "ano anorthoclase",
	"Pl": "pl plag plg plagioclase plagioclasefeldspar", "Ab": "ab albite", "Olg": "olg oligoclase", "Ads": "ads andesine",
	"Lab": "lab labradorite", "Byt": "byt bytownite", "An": "an anorthite", "Fsp": "fsp feldspar",
	"Opx": "opx orthopyroxene orthopx hypersthene bronzite ferrohypersthene", "En": "en enstatite", "Fs": "ferrosilite",
	"Cpx": "cpx clinopyroxene clinopx", "Di": "di diopside", "Aug": "aug augite", "Hd": "hd hedenbergite",
	"Pgt": "pgt pig pigeonite", "Omp": "omp omphacite", "Aeg": "aeg aegirine acmite", "Jd": "jd jadeite", "Px": "px pyroxene",
	"Grt": "grt gt gnt garnet", "Prp": "prp pyrope", "Alm": "alm almandine", "Adr": "adr andradite",
	"Bt": "bt biotite", "Phl": "phl phlogopite", "Ms": "ms musc muscovite", "Wm": "wm whitemica",
	"Amp": "amp amph amphibole", "Hbl": "hbl hornblende", "Cum": "cum cummingtonite", "Ath": "ath anthophyllite",
	"Ol": "ol olivine", "Fo": "fo forsterite", "Fa": "fa fayalite",
	"Spl": "spl spinel", "Chr": "chr chromite", "Ilm": "ilm ilmenite", "Mag": "mag mt magnetite", "Hem": "hem haematite hematite",
	"Rt": "rt rutile", "Ttn": "ttn titanite sphene", "Zrn": "zrn zircon", "Ap": "ap apatite", "Qz": "qz qtz quartz",
	"Cal": "cal calcite", "Dol": "dol dolomite", "Ank": "ank ankerite", "Mgs": "mgs magnesite", "Sid": "sid siderite",
	"Crd": "crd cordierite", "Sil": "sil sillimanite", "Ky": "ky kyanite", "And": "and andalusite", "St": "st staurolite",
	"Ep": "ep epidote", "Chl": "chl chlorite", "Scp": "scp scapolite", "Nph": "nph nepheline", "Lct": "lct leucite",
	"Crn": "crn corundum", "Spr": "spr sapphirine",
}

// phaseOf is phaseNames the other way round.
var phaseOf = sync.OnceValue(func() map[string]chem.Phase {
	of := map[string]chem.Phase{}
	for _, p := range chem.Phases() {
		for _, n := range strings.Fields(phaseNames[p]) {
			if other, ok := of[n]; ok {
				panic("ingest: phase name " + n + " means both " + string(other) + " and " + string(p))
			}
			of[n] = p
		}
	}
	return of
})

// lookUpPhase finds the symbol of a phase as written. A symbol counts as it is
// spelt; names and abbreviations without regard to case, spaces and hyphens.
func lookUpPhase(text string) (chem.Phase, bool) {
	if p := chem.Phase(text); p.Known() {
		return p, true
	}
	p, ok := phaseOf()[foldPhase(text)]
	return p, ok
}

func foldPhase(text string) string {
	return strings.Map(func(r rune) rune {
		if blank(r) || r == '-' || r == '_' || r == '.' || r == '\u2010' || r == '\u2011' {
			return -1
		}
		return r
	}, strings.ToLower(text))
}

// phaseReading is what a phase cell says.
type phaseReading struct {
	phase    chem.Phase
	setAside string // why the row is set aside, "" for none
	known    bool
}

// phaseReader reads the phase cells of one source. What it has read it
// remembers: a column of a million rows holds a few texts.
type phaseReader struct {
	mapped   map[string]chem.Phase // by folded name, the manifest's
	passOver map[string]bool       // by folded name
	read     map[string]phaseReading
	matched  map[string]bool // folded names of mapped and passOver that some row had
}

// foldName is a text as the manifest's phases and pass_over are compared: by
// name, without case.
func foldName(text string) string { return strings.ToLower(name(text)) }

func newPhaseReader(s *manifests.Source) *phaseReader {
	r := &phaseReader{mapped: map[string]chem.Phase{}, passOver: map[string]bool{}, read: map[string]phaseReading{}, matched: map[string]bool{}}
	for _, text := range slices.Sorted(maps.Keys(s.Phases)) {
		r.mapped[foldName(text)] = s.Phases[text]
	}
	for _, text := range s.PassOver {
		r.passOver[foldName(text)] = true
	}
	return r
}

// remembered bounds what a phaseReader keeps.
const remembered = 4096

func (r *phaseReader) of(text string) phaseReading {
	known, ok := r.read[text]
	if !ok {
		known = r.work(text)
		if len(r.read) < remembered {
			r.read[strings.Clone(text)] = known
		}
	}
	return known
}

// work reads a phase: the manifest's mapping beats the vocabulary, and passing
// over beats both.
func (r *phaseReader) work(text string) phaseReading {
	folded := foldName(text)
	p, known := r.mapped[folded]
	if known || r.passOver[folded] {
		r.matched[folded] = true
	}
	if !known {
		p, known = lookUpPhase(text)
	}
	if r.passOver[folded] {
		return phaseReading{phase: p, setAside: "passed over: " + text, known: true}
	}
	return phaseReading{phase: p, known: known}
}

// unmatched are the entries of phases and pass_over that no row had.
func (r *phaseReader) unmatched(s *manifests.Source) (out []string) {
	for _, text := range slices.Sorted(maps.Keys(s.Phases)) {
		if !r.matched[foldName(text)] {
			out = append(out, "phases "+problem.Quote(text))
		}
	}
	for _, text := range s.PassOver {
		if !r.matched[foldName(text)] {
			out = append(out, "pass_over "+problem.Quote(text))
		}
	}
	return out
}

// unknown is the problem of a phase nobody knows.
func (r *phaseReader) unknown(text string) problem.Problem {
	p := problem.Problem{Kind: "phase", Found: problem.Quote(text) + " is no phase known here",
		Expected: "an IMA symbol or a mineral name",
		Do:       "map it in phases, or list it in pass_over"}
	if near := manifests.Nearest(text, phaseOptions()); near != "" {
		p.Do = "did you mean " + problem.Quote(near) + "? else " + p.Do
	}
	return p
}

// phaseOptions are the texts an unknown phase may have been meant to be.
var phaseOptions = sync.OnceValue(func() []string {
	var out []string
	for _, p := range chem.Phases() {
		out = append(out, string(p))
		for _, n := range strings.Fields(phaseNames[p]) {
			if len(n) > 3 {
				out = append(out, n)
			}
		}
	}
	slices.Sort(out)
	return out
})
