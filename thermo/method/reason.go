package method

import "tieline/thermo/chem"

// Reason says why there is no number; 0 means there is one.
type Reason uint8

// The reasons.
const (
	OK Reason = iota
	NotMeasured
	NoFormula
	NonPositiveLog
	SmallEntropy
	NegativeT
	NeedsPressure
	NotFinite
	M2Full
	numReasons
)

var texts = [numReasons]string{
	OK:             "",
	NotMeasured:    "a needed component was not measured",
	NoFormula:      "no structural formula: a major oxide is missing or the analysis is empty",
	NonPositiveLog: "a component is zero or below detection where the method takes its logarithm",
	SmallEntropy:   "undefined: |D| < 5 J/mol/K, the temperature is the ratio of two small numbers",
	NegativeT:      "the equation gives no temperature above absolute zero",
	NeedsPressure:  "needs pressure: dT/dP is above 1 degC/kbar and none is given",
	NotFinite:      "the equation has no finite value here",
	M2Full:         "Ca/(1 - Na) is 1 or more: no Mg2Si2O6 is left to take the logarithm of",
}

// String is the text tables and people see.
func (r Reason) String() string { return texts[r] }

// ReasonFor judges a temperature an equation gave: NotFinite, NegativeT, or OK.
func ReasonFor(t chem.Kelvin) Reason {
	switch {
	case t-t != 0:
		return NotFinite
	case t <= 0:
		return NegativeT
	}
	return OK
}
