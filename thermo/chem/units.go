// Package chem holds what every other package says about matter in the same
// words: typed units, phases, oxides, cations and the state of a measured cell.
package chem

// Kelvin is a thermodynamic temperature.
type Kelvin float64

// Celsius is a temperature in degrees Celsius.
type Celsius float64

// Bar is a pressure in bar.
type Bar float64

// Kbar is a pressure in kilobar.
type Kbar float64

// ZeroCelsius is 0 degC in kelvin, exact by definition (BIPM, SI Brochure, 9th ed., 2.3.1).
const ZeroCelsius Kelvin = 273.15

// GasConstant is R in J/mol/K (CODATA 2018, exact since the SI of 2019).
const GasConstant = 8.314462618

// Products below are rounded with float64() so that no architecture fuses them
// into a caller's sum; a conversion to a named type alone does not stop that.

// Celsius converts to degrees Celsius.
func (t Kelvin) Celsius() Celsius { return Celsius(t - ZeroCelsius) }

// Kelvin converts to kelvin.
func (t Celsius) Kelvin() Kelvin { return Kelvin(t) + ZeroCelsius }

// Kbar converts to kilobar.
func (p Bar) Kbar() Kbar { return Kbar(p / 1000) }

// Bar converts to bar.
func (p Kbar) Bar() Bar { return Bar(float64(float64(p) * 1000)) }
