package pipeline

import (
	"math"
	"strings"
	"testing"

	"tieline/pipeline/tables"
)

// Seven ways in which a table of analyses leads a thermometer astray, each with
// its answer, from the cells on. Pair A is an invented-typical mafic granulite.

const (
	pairAHeader = "sample,phase,pair,SiO2,TiO2,Al2O3,Cr2O3,FeO,MnO,MgO,CaO,Na2O,P (kbar)\n"
	pairA       = "A,cpx,1,51.9,0.2,1.95,0.05,9.2,0.25,13.3,21.8,0.45,7\nA,opx,1,51.6,0.08,1.1,0.03,25.3,0.6,20.6,0.55,0.02,7\n"
)

func numberOf(t *testing.T, dir, sample, method, component string, want, within float64) {
	t.Helper()
	if e := estimateOf(t, dir, sample, method, component); e.TC == nil || math.Abs(*e.TC-want) > within {
		t.Errorf("%s %s: %s degC (%s); expected %.1f within %g", method, component, show(e.TC), e.Reason, want, within)
	}
}

func noNumber(t *testing.T, dir, sample, method, because string) {
	t.Helper()
	if e := estimateOf(t, dir, sample, method, ""); e.TC != nil || !strings.Contains(e.Reason, because) {
		t.Errorf("%s: %s degC (%s); expected no number, %s", method, show(e.TC), e.Reason, because)
	}
}

func TestTrap1NoMnOForOpx(t *testing.T) {
	dir := compile(t, "", pairAHeader+strings.Replace(pairA, "25.3,0.6,", "25.3,n.a.,", 1))
	for _, m := range []string{"two-pyroxene/putirka-2008-36", "two-pyroxene/putirka-2008-37"} {
		noNumber(t, dir, "A", m, "not measured")
	}
	// Wells keeps its number; it moves by the 5 degC that 0.6 wt% less in the formula make.
	numberOf(t, dir, "A", "two-pyroxene/wells-1977", "", 872, 5.5)
}

func TestTrap2NoNa2OForCpx(t *testing.T) {
	dir := compile(t, "", pairAHeader+strings.Replace(pairA, "21.8,0.45,", "21.8,n.a.,", 1))
	for _, m := range []string{"two-pyroxene/wells-1977", "two-pyroxene/brey-koehler-1990", "two-pyroxene/taylor-1998", "clinopyroxene/nimis-taylor-2000"} {
		noNumber(t, dir, "A", m, "not measured")
	}
	for _, a := range readTable[tables.AnalysisRow](t, dir, "analyses") {
		if a.Phase == "Cpx" && (a.CationSum == nil || a.Verdict == "set aside") {
			t.Errorf("the cpx is %s, cation sum %s: the sum was expected to pass, which is the trap", a.Verdict, show(a.CationSum))
		}
	}
}

func TestTrap3SwappedAlkalisOfOneFeldspar(t *testing.T) {
	sum := func(na, k string) (float64, []string) {
		dir := compile(t, "", "sample,phase,SiO2,Al2O3,CaO,Na2O,K2O\nm,Afs,64.6,20.6,1.9,"+na+","+k+"\n")
		var rules []string
		for _, f := range readTable[tables.FindingRow](t, dir, "qc") {
			if strings.Contains(f.Rule, "swapped") {
				rules = append(rules, f.Effect+": "+f.Detail)
			}
		}
		return *readTable[tables.AnalysisRow](t, dir, "analyses")[0].CationSum, rules
	}
	right, found := sum("5.6", "6.9")
	swapped, _ := sum("6.9", "5.6")
	if math.Abs(right-4.984) > 0.0006 || math.Abs(swapped-5.011) > 0.0006 {
		t.Errorf("cation sums %.3f as given and %.3f swapped; expected 4.984 and 5.011", right, swapped)
	}
	if len(found) != 1 || !strings.HasPrefix(found[0], "noted") || !strings.Contains(found[0], "cannot tell") {
		t.Errorf("one feldspar whose sum improves when swapped: found %q; expected to be told that one row cannot tell", found)
	}
}

func TestTrap4SodiumOfOpxNearDetection(t *testing.T) {
	const use = "columns = { sNa = \"Na2O sigma\" }\n[methods]\nuse = [\"two-pyroxene/brey-koehler-1990-na\"]\n"
	with := func(na, sigma string) string {
		csv := strings.Replace(pairAHeader, "Na2O,", "Na2O,sNa,", 1) + strings.NewReplacer("21.8,0.45,", "21.8,0.45,,", "0.55,0.02,", "0.55,"+na+","+sigma+",").Replace(pairA)
		return compile(t, use, csv)
	}
	const m = "two-pyroxene/brey-koehler-1990-na"
	noNumber(t, with("0.02", "0.015"), "A", m, "1-sigma")
	numberOf(t, with("0.005", ""), "A", m, "", 613, 1)
	numberOf(t, with("0.03", ""), "A", m, "", 1034, 1)
}

func TestTrap5CoherentLamellae(t *testing.T) {
	dir := compile(t, "composition = \"end-member fraction\"\n",
		"sample,phase,pair,texture,Ab,Or,An,P (bar)\np,Afs,1,host,.3648,.6352,0,1\np,Ab,1,lamella,.8874,.1126,0,1\n")
	for component, strainFree := range map[string]float64{"Ab": 570, "Or": 566} {
		numberOf(t, dir, "p", "alkali-feldspar-solvus/thompson-waldbaum-1969", component, strainFree, 0.5)
		numberOf(t, dir, "p", "alkali-feldspar-solvus/thompson-waldbaum-1969-coherent", component, 500.0, 0.1)
		if e := estimateOf(t, dir, "p", "alkali-feldspar-solvus/thompson-waldbaum-1969", component); !strings.Contains(e.Reason, "coherent") {
			t.Errorf("T_%s of the strain-free solvus says %q; expected that coherency is unknown", component, e.Reason)
		}
	}
}

func TestTrap6TwoThinSectionsWithOneOrigin(t *testing.T) {
	row := func(domain, phase, x string) string {
		return "s," + domain + "," + phase + ",core," + x + ",0,55,1,6,33,1,0.1\n"
	}
	header := "sample,thin section,phase,texture,x (um),y (um),SiO2,Al2O3,FeO,MgO,CaO,Na2O\n"
	columns := "columns = { \"thin section\" = \"domain\", \"x (um)\" = \"x_um\", \"y (um)\" = \"y_um\" }\n"
	pairs := func(csv string) int {
		return len(readTable[tables.PairRow](t, compile(t, columns, csv), "pairs"))
	}
	if n := pairs(header + row("A", "Opx", "0") + row("B", "Cpx", "0")); n != 0 {
		t.Errorf("an opx at the origin of one section and a cpx at that of another make %d pairs; expected none", n)
	}
	if n := pairs(header + row("A", "Opx", "0") + row("A", "Cpx", "0")); n != 1 {
		t.Errorf("both in one section make %d pairs; expected one", n)
	}
}

func TestTrap7AtomicWeights(t *testing.T) {
	dir := compile(t, "[methods]\nuse = [\"two-pyroxene/kretz-1982-fe-mg\"]\n", pyroxenes)
	for sample, want := range map[string]float64{"K": 1265.9, "E": 1117.2, "G": 1102.7} {
		numberOf(t, dir, sample, "two-pyroxene/kretz-1982-fe-mg", "", want, 0.1)
	}
}
