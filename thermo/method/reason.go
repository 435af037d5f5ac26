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
	OffTheLine
	M2Full
	SiteFull
	CaHalf
	NoEnFs
	NearPole
	NoRoot
	TooUncertain
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
	OffTheLine:     "the method's T(P) and the manifest's line P(T) do not meet",
	M2Full:         "Ca/(1 - Na) is 1 or more: no Mg2Si2O6 is left to take the logarithm of",
	SiteFull:       "other cations fill M1 or M2: no Mg is left there to take the logarithm of",
	CaHalf:         "Ca/(Ca + Mg + Fe2+) is 0.5 or more: the method takes the logarithm of one less twice of it",
	NoEnFs:         "no enstatite-ferrosilite is left in a pyroxene to take the logarithm of",
	NearPole:       "the equation divides by nearly zero here",
	NoRoot:         "the equation has no solution between 500 and 2500 K",
	TooUncertain:   "the source's 1-sigma is above 0.3 of a component the method takes the logarithm of",
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
