package chem

// State says what a cell held.
type State uint8

// Missing, not analysed and below detection are three different things; none is zero.
const (
	Missing        State = iota // the cell is empty, or the source has no such column
	Measured                    // a number
	NotAnalysed                 // the source says it was not analysed
	BelowDetection              // the source says it is below detection; the value is the limit where stated, else 0
)

func (s State) String() string {
	return [...]string{"missing", "measured", "not analysed", "below detection"}[s]
}

// Measurand is one thing a source may report of a composition: an oxide, total
// iron as one oxide, a cation per formula unit, or an end-member fraction.
type Measurand uint8

// Measurands 0 to NumOxides-1 are the oxides in wt%, under the oxide's number.
const (
	FeOT   Measurand = Measurand(NumOxides) + iota // all iron as FeO, wt%
	Fe2O3T                                         // all iron as Fe2O3, wt%
	firstCation
)

// Cations in apfu follow: firstCation + Cation.
const (
	FeT Measurand = firstCation + Measurand(NumCations) + iota // all iron, apfu
	XAb                                                        // mole fraction NaAlSi3O8
	XOr                                                        // mole fraction KAlSi3O8
	XAn                                                        // mole fraction CaAl2Si2O8
	XCn                                                        // mole fraction BaAl2Si2O8
	NumMeasurands
)

// MeasurandOf gives the measurand of an oxide in wt%.
func MeasurandOf(o Oxide) Measurand { return Measurand(o) }

// MeasurandOfCation gives the measurand of a cation in apfu.
func MeasurandOfCation(c Cation) Measurand { return firstCation + Measurand(c) }

// Kind is the kind of numbers a composition is given in. One analysis has one kind.
type Kind uint8

// The kinds of composition.
const (
	OxideWt   Kind = iota // oxides, wt%
	Apfu                  // atoms per formula unit
	EndMember             // mole fractions of end members
)

func (k Kind) String() string {
	return [...]string{"oxide wt%", "apfu", "end-member fraction"}[k]
}

// Kind says which kind of number m is.
func (m Measurand) Kind() Kind {
	switch {
	case m < firstCation:
		return OxideWt
	case m <= FeT:
		return Apfu
	}
	return EndMember
}

// String is the measurand's name as manifests and tables spell it: "SiO2",
// "FeO total", "Si apfu", "Ab".
func (m Measurand) String() string {
	switch {
	case m < Measurand(NumOxides):
		return Oxide(m).String()
	case m == FeOT:
		return "FeO total"
	case m == Fe2O3T:
		return "Fe2O3 total"
	case m < FeT:
		return Cation(m-firstCation).String() + " apfu"
	case m == FeT:
		return "Fe apfu"
	}
	return [...]string{"Ab", "Or", "An", "Cn"}[m-XAb]
}

// Composition is one analysis as its source gives it.
type Composition struct {
	Kind  Kind
	Value [NumMeasurands]float64 // wt%, apfu or mole fraction; 0 where State is Missing or NotAnalysed
	State [NumMeasurands]State
	// Oxygens is what the apfu are given on, where Kind is Apfu. 0: on whatever
	// oxygens the formula asked for has.
	Oxygens float64
}

// Determined says whether the source looked for m: measured, or below detection.
func (c *Composition) Determined(m Measurand) bool {
	return c.State[m] == Measured || c.State[m] == BelowDetection
}

// Amount is what counts as present: the value where measured, else 0.
func (c *Composition) Amount(m Measurand) float64 {
	if c.State[m] == Measured {
		return c.Value[m]
	}
	return 0
}
