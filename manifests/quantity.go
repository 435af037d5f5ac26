package manifests

import (
	"fmt"

	"tieline/thermo/chem"
)

// Quantity is what a column of a source holds. The zero value is no quantity.
type Quantity uint8

// The quantities that are no part of the composition. Values are text unless
// said otherwise.
const (
	NoQuantity      Quantity = iota
	Ignored                  // passed over
	Sample                   // the rock or run
	Label                    // the analysis' own name in its source
	PhaseName                // the phase, any spelling the vocabulary or the manifest knows
	Texture                  // core, rim, host, ...
	Domain                   // thin section, hence the frame of the stage coordinates
	Generation               // mineral generation
	Assemblage               // what coexists
	AnalysisKind             // spot, raster, re-integrated, mean of n
	Grain                    // the grain
	Session                  // laboratory session
	Locality                 // place
	Unit                     // rock unit
	PairLabel                // rows of one sample that share it are a pair
	XUm                      // stage x, number, micrometre
	YUm                      // stage y, number, micrometre
	PublishedC               // published temperature, number, degC
	PublishedK               // the same in kelvin
	PublishedSigmaC          // its 1-sigma, number, degC
	PublishedPKbar           // the pressure it was published for, number, kbar
	PublishedKind            // experiment, thermometer or estimate
	PublishedMethod          // the method it was published with
	PKbar                    // pressure, number, kbar
	PGpa                     // the same in GPa
	PMpa                     // the same in MPa
	PBar                     // the same in bar
	PSigmaKbar               // its 1-sigma, number, kbar
	NSpots                   // how many spots a mean stands for, number
	Total                    // the total the source reports, number, wt%
	Latitude                 // as given
	Longitude                // as given
	AreaFraction             // of a part of an exsolved grain, number, 0 to 1
	firstValue               // measurands, then their 1-sigmas
)

const (
	firstSigma = firstValue + Quantity(chem.NumMeasurands)
	// NumQuantities bounds the quantities, for arrays indexed by Quantity.
	NumQuantities = firstSigma + Quantity(chem.NumMeasurands)
)

var plainNames = [firstValue]string{
	NoQuantity: "", Ignored: "ignored", Sample: "sample", Label: "label", PhaseName: "phase",
	Texture: "texture", Domain: "domain", Generation: "generation", Assemblage: "assemblage",
	AnalysisKind: "analysis_kind", Grain: "grain", Session: "session", Locality: "locality",
	Unit: "unit", PairLabel: "pair", XUm: "x_um", YUm: "y_um", PublishedC: "published_t_c",
	PublishedK: "published_t_k", PublishedSigmaC: "published_sigma_c",
	PublishedPKbar: "published_p_kbar", PublishedKind: "published_kind",
	PublishedMethod: "published_method", PKbar: "p_kbar", PGpa: "p_gpa", PMpa: "p_mpa",
	PBar: "p_bar", PSigmaKbar: "p_sigma_kbar", NSpots: "n_spots", Total: "total",
	Latitude: "latitude", Longitude: "longitude", AreaFraction: "area_fraction",
}

var quantityByName = func() map[string]Quantity {
	m := map[string]Quantity{}
	for q := Ignored; q < NumQuantities; q++ {
		m[q.String()] = q
	}
	return m
}()

// Value is the quantity of a measurand's value.
func Value(m chem.Measurand) Quantity { return firstValue + Quantity(m) }

// Sigma is the quantity of a measurand's 1-sigma.
func Sigma(m chem.Measurand) Quantity { return firstSigma + Quantity(m) }

// Measurand gives the measurand q is the value or the 1-sigma of; ok is false
// where q is no part of the composition.
func (q Quantity) Measurand() (m chem.Measurand, sigma, ok bool) {
	switch {
	case q < firstValue || q >= NumQuantities:
		return 0, false, false
	case q < firstSigma:
		return chem.Measurand(q - firstValue), false, true
	}
	return chem.Measurand(q - firstSigma), true, true
}

// String is the quantity's name as a manifest spells it: "sample", "SiO2", "SiO2 sigma".
func (q Quantity) String() string {
	if q < firstValue {
		return plainNames[q]
	}
	m, sigma, ok := q.Measurand()
	switch {
	case !ok:
		return fmt.Sprintf("Quantity(%d)", uint8(q))
	case sigma:
		return m.String() + " sigma"
	}
	return m.String()
}

// ParseQuantity reads a quantity's name, exactly as String spells it.
func ParseQuantity(name string) (Quantity, error) {
	if q, ok := quantityByName[name]; ok {
		return q, nil
	}
	return NoQuantity, fmt.Errorf("no quantity is called %q", name)
}

// Quantities lists every quantity a column may be mapped to, in order.
func Quantities() []Quantity {
	var out []Quantity
	for q := Ignored; q < NumQuantities; q++ {
		out = append(out, q)
	}
	return out
}

// MarshalText gives the name.
func (q Quantity) MarshalText() ([]byte, error) { return []byte(q.String()), nil }

// UnmarshalText reads the name.
func (q *Quantity) UnmarshalText(text []byte) (err error) {
	*q, err = ParseQuantity(string(text))
	return err
}
