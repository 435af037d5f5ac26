package chem

import (
	"maps"
	"slices"
)

// Phase is a mineral symbol after Warr LN (2021) IMA-CNMNC approved mineral
// symbols, Mineral Mag 85:291-320.
type Phase string

// The roles a phase plays in a pair.
const (
	Afs Phase = "Afs" // alkali feldspar
	Pl  Phase = "Pl"  // plagioclase
	Opx Phase = "Opx" // orthopyroxene
	Cpx Phase = "Cpx" // clinopyroxene
)

// Grt is garnet: it plays no role yet, but a method wants it beside a pyroxene.
const Grt Phase = "Grt"

// The sides of a pair of lamellae in one alkali feldspar. They are roles and no
// mineral symbols: of two lamellae the one with less Or is the Na side.
const (
	NaFsp Phase = "Na-Fsp"
	KFsp  Phase = "K-Fsp"
)

// phases lists every symbol that is accepted, with the role the phase plays in
// a pair ("" for none yet). Pigeonite is no Cpx here: the two-pyroxene solvus
// methods are calibrated on augite and diopside.
var phases = map[Phase]Phase{
	Afs: Afs, "Kfs": Afs, "Or": Afs, "Sa": Afs, "Mc": Afs, "Ano": Afs,
	Pl: Pl, "Ab": Pl, "Olg": Pl, "Ads": Pl, "Lab": Pl, "Byt": Pl, "An": Pl,
	Opx: Opx, "En": Opx, "Fs": Opx,
	Cpx: Cpx, "Di": Cpx, "Aug": Cpx, "Hd": Cpx, "Pgt": "", "Omp": "", "Aeg": "", "Jd": "",
	"Fsp": "", "Px": "", "Grt": "", "Prp": "", "Alm": "", "Adr": "", "Bt": "", "Phl": "", "Ms": "", "Wm": "",
	"Amp": "", "Hbl": "", "Cum": "", "Ath": "", "Ol": "", "Fo": "", "Fa": "", "Spl": "", "Chr": "",
	"Ilm": "", "Mag": "", "Hem": "", "Rt": "", "Ttn": "", "Zrn": "", "Ap": "", "Qz": "",
	"Cal": "", "Dol": "", "Ank": "", "Mgs": "", "Sid": "", "Crd": "", "Sil": "", "Ky": "", "And": "",
	"St": "", "Ep": "", "Chl": "", "Scp": "", "Nph": "", "Lct": "", "Crn": "", "Spr": "",
}

// Known says whether p is a symbol tieline accepts.
func (p Phase) Known() bool { _, ok := phases[p]; return ok }

// Role is the part p plays in a pair, Afs for sanidine, Cpx for diopside; "" for none.
func (p Phase) Role() Phase { return phases[p] }

// Phases lists every symbol tieline accepts, in alphabetical order.
func Phases() []Phase { return slices.Sorted(maps.Keys(phases)) }
