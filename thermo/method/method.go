// Package method holds the types a published calibration is made of. Mineral
// families import it; package thermo lists the families' methods. Nothing here
// or in a family reads files, logs, or knows what a pair is called.
package method

import "tieline/thermo/chem"

// Ferric says where a formula takes its ferric iron from.
type Ferric uint8

// The ferric-iron conventions.
const (
	AsGiven  Ferric = iota // FeO and Fe2O3 as the source gives them; a total counts as FeO
	AllFe2                 // all iron as FeO
	AllFe3                 // all iron as Fe2O3
	Balanced               // cations normalised to the ideal sum, Fe3+ from charge balance (Droop GTR 1987, Mineral Mag 51:431-435, eq. 1); none where the sum is below ideal
)

// Basis is a structural formula's convention.
type Basis struct {
	Oxygens float64 // per formula unit
	Cations float64 // the ideal sum; used where Ferric is Balanced
	Ferric  Ferric
}

// String is how tables name the iron convention: "as given", "all Fe2+", "all Fe3+", "charge balance".
func (b Basis) String() string {
	return [...]string{"as given", "all Fe2+", "all Fe3+", "charge balance"}[b.Ferric]
}

// Quantity is a named column that is filled once per block for all methods. A
// leaf (Fill nil) comes from an analysis: the apfu of a cation or the mole
// fraction of an end member in one phase of the pair.
type Quantity struct {
	Name, Unit string
	Needs      []*Quantity
	// Fill writes q[0:b.N] from b.Of of Needs. why holds, per row, the first
	// reason found among Needs on entry; rows with a reason are skipped or
	// filled with anything: nobody reads them.
	Fill func(b *Block, q []float64, why []Reason)
	Leaf *Leaf
}

// Leaf says where a leaf quantity comes from.
type Leaf struct {
	Phase chem.Phase // the role, Afs, Pl, Na-Fsp, K-Fsp, Opx, Cpx
	Basis Basis
	// Cations are summed, apfu, Ca for most, Fe2 and Fe3 for total iron. Empty:
	// the fraction of EndMember.
	Cations   []chem.Cation
	EndMember chem.Measurand // XAb, XOr, XAn of Ab + Or + An = 1
	// Optional: what was not analysed counts as zero here, and is flagged on the analysis.
	Optional bool
	// Probe is the span a method's digest tries this quantity over.
	Probe [2]float64
}

// Lane holds what one component of a method gives for a block.
type Lane struct {
	T     []chem.Kelvin
	Why   []Reason
	Extra [][]float64 // one per Info.Extras
}

// Bound is one variable's calibrated span. Quantity nil: Name "T" (degC) or "P" (kbar).
type Bound struct {
	Name     string // as out_of_range lists it: "T", "P", "An in Afs"
	Unit     string // degC, kbar, mole fraction, apfu
	Quantity *Quantity
	Min, Max float64
	// Composition: outside it an estimate stays out of sample statistics. P and
	// T may be extrapolated, and are marked.
	Composition bool
}

// Range is where a method was calibrated.
type Range struct {
	Bounds []Bound
	Source string // who says so: a paper, or "from memory"
	// Setting names the rocks a method was made for where that matters
	// ("mantle peridotite"); "" for any. Elsewhere it is computed and flagged.
	Setting string
}

// Sigma is the calibration's own 1-sigma.
type Sigma struct {
	C      []float64 // degC, one per component; empty where there is neither a quoted value nor an experiment to measure it on
	Origin string    // "quoted, from memory", "misfit on the 20 runs of Elkins & Grove 1990", or why there is none
}

// Standing says how sure we are that the coefficients are the published ones.
type Standing string

// The standings.
const (
	Confirmed  Standing = "confirmed"  // reproduces a published result its coefficients were not taken from
	Consistent Standing = "consistent" // from memory; passes identities or experiments
	Recalled   Standing = "recalled"   // from memory; computed only when a manifest names it
)

// Precision says how well a leaf must be known for a component's temperature to
// mean anything: where the source gives a 1-sigma above MaxRelative of the value
// there is no number, but TooUncertain. Without a sigma nothing is asked.
type Precision struct {
	Component   string
	Leaf        *Quantity
	MaxRelative float64
}

// Info is what a method says of itself.
type Info struct {
	ID, Equation, Ref string
	// Variant is "" on the calibration's own basis. A twin on another one has the
	// same id, stands right after it in the list, and says here what differs.
	Variant     string
	Phases      []chem.Phase // one or two roles
	Components  []string     // "Ab", "Or", "An"; one "" where a method gives one temperature
	Extras      []string
	Shares      []string // ids of methods that share data or constants with this one
	DerivedFrom []string // ids of methods this one is a function of: no agreement statistics between them
	Closes      string   // the system that closes on cooling: "Ca solvus", "Fe-Mg", "Na-K", "An"
	Assemblage  string   // what must coexist, in words; "" for nothing more than the phases
	// NeedsBeside is a role that must be recorded beside the analysis for a
	// one-phase method; without it the temperature is a minimum. "" for none.
	NeedsBeside chem.Phase
	Needs       []*Quantity // their reasons become the lanes'
	// Uses are the quantities Eval reads besides, those whose reasons count in
	// some lanes only. They reach no leaf that Needs does not reach.
	Uses     []*Quantity
	Basis    Basis
	Range    Range
	Sigma    Sigma
	Standing Standing
	// Precise are the leaves that must be known well, where the source says how well.
	Precise []Precision
}

// Method is one published calibration. Const is exactly the constants Eval
// reads; its digest covers them.
type Method struct {
	Info
	Const any
	Eval  func(b *Block, lanes []Lane)
}

// IronConvention names the method's ferric-iron convention; "" where it reads no
// structural formula, as with feldspar fractions of Ca, Na and K.
func (m *Method) IronConvention() string {
	for _, q := range Leaves(m.Needs) {
		if len(q.Leaf.Cations) > 0 {
			return m.Basis.String()
		}
	}
	return ""
}
