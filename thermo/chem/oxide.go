package chem

// Atomic weights: CIAAW abridged standard atomic weights, 2021 (IUPAC).
const (
	massH  = 1.0080
	massC  = 12.011
	massO  = 15.999
	massF  = 18.998
	massNa = 22.990
	massMg = 24.305
	massAl = 26.982
	massSi = 28.085
	massP  = 30.974
	massCl = 35.45
	massK  = 39.098
	massCa = 40.078
	massTi = 47.867
	massV  = 50.942
	massCr = 51.996
	massMn = 54.938
	massFe = 55.845
	massNi = 58.693
	massZn = 65.38
	massSr = 87.62
	massBa = 137.33
)

// Oxide is one constituent of an analysis in weight per cent.
type Oxide uint8

// The oxides an analysis may hold, in the order analyses are written. F and Cl
// are elements; they count in the total less the oxygen they stand for.
const (
	SiO2 Oxide = iota
	TiO2
	Al2O3
	Cr2O3
	V2O3
	Fe2O3
	FeO
	MnO
	NiO
	ZnO
	MgO
	CaO
	SrO
	BaO
	Na2O
	K2O
	P2O5
	CO2
	H2O
	F
	Cl
	NumOxides
)

// Cation is one cation of a structural formula.
type Cation uint8

// The cations, in the order formulae are written.
const (
	Si Cation = iota
	Ti
	Al
	Cr
	V
	Fe3
	Fe2
	Mn
	Ni
	Zn
	Mg
	Ca
	Sr
	Ba
	Na
	K
	P
	NumCations
)

// OxideData says what one formula unit of an oxide holds.
type OxideData struct {
	Name    string
	Mass    float64 // g/mol
	Cation  Cation  // meaningful when Cations > 0
	Cations float64 // per formula unit; 0: no cation of a structural formula
	Oxygens float64 // per formula unit
}

// Oxides is indexed by Oxide. CO2 and H2O count in the total only: structural
// formulae here are anhydrous and free of carbonate.
var Oxides = [NumOxides]OxideData{
	SiO2:  {"SiO2", massSi + 2*massO, Si, 1, 2},
	TiO2:  {"TiO2", massTi + 2*massO, Ti, 1, 2},
	Al2O3: {"Al2O3", 2*massAl + 3*massO, Al, 2, 3},
	Cr2O3: {"Cr2O3", 2*massCr + 3*massO, Cr, 2, 3},
	V2O3:  {"V2O3", 2*massV + 3*massO, V, 2, 3},
	Fe2O3: {"Fe2O3", 2*massFe + 3*massO, Fe3, 2, 3},
	FeO:   {"FeO", massFe + massO, Fe2, 1, 1},
	MnO:   {"MnO", massMn + massO, Mn, 1, 1},
	NiO:   {"NiO", massNi + massO, Ni, 1, 1},
	ZnO:   {"ZnO", massZn + massO, Zn, 1, 1},
	MgO:   {"MgO", massMg + massO, Mg, 1, 1},
	CaO:   {"CaO", massCa + massO, Ca, 1, 1},
	SrO:   {"SrO", massSr + massO, Sr, 1, 1},
	BaO:   {"BaO", massBa + massO, Ba, 1, 1},
	Na2O:  {"Na2O", 2*massNa + massO, Na, 2, 1},
	K2O:   {"K2O", 2*massK + massO, K, 2, 1},
	P2O5:  {"P2O5", 2*massP + 5*massO, P, 2, 5},
	CO2:   {"CO2", massC + 2*massO, 0, 0, 2},
	H2O:   {"H2O", 2*massH + massO, 0, 0, 1},
	F:     {"F", massF, 0, 0, 0},
	Cl:    {"Cl", massCl, 0, 0, 0},
}

// Cations is indexed by Cation: its name in tables, and its oxide.
var Cations = [NumCations]struct {
	Name  string
	Oxide Oxide
}{
	Si: {"Si", SiO2}, Ti: {"Ti", TiO2}, Al: {"Al", Al2O3}, Cr: {"Cr", Cr2O3}, V: {"V", V2O3},
	Fe3: {"Fe3", Fe2O3}, Fe2: {"Fe2", FeO}, Mn: {"Mn", MnO}, Ni: {"Ni", NiO}, Zn: {"Zn", ZnO},
	Mg: {"Mg", MgO}, Ca: {"Ca", CaO}, Sr: {"Sr", SrO}, Ba: {"Ba", BaO}, Na: {"Na", Na2O},
	K: {"K", K2O}, P: {"P", P2O5},
}

func (o Oxide) String() string  { return Oxides[o].Name }
func (c Cation) String() string { return Cations[c].Name }

// FeOPerFe2O3 is the weight of FeO that holds the iron of one weight of Fe2O3, 0.8998.
const FeOPerFe2O3 = 2 * (massFe + massO) / (2*massFe + 3*massO)

// OxygenPerF and OxygenPerCl are the weights of oxygen that one weight of the
// halogen replaces; the total is less by so much.
const (
	OxygenPerF  = massO / (2 * massF)
	OxygenPerCl = massO / (2 * massCl)
)
