package pipeline

import (
	"strings"
	"testing"

	"tieline/pipeline/tables"
)

// The demo's flaws are planted, and its manifest lists them: a run finds every one.
func TestDemoFlawsAreFound(t *testing.T) {
	dir, _ := runTo(t, manifestOf("demo"), Options{})
	found := map[[3]string]int{}
	for _, f := range readTable[tables.FindingRow](t, dir, "qc") {
		found[[3]string{f.Rule, f.Effect, f.RowID}]++
	}
	for _, want := range [][3]string{
		{"phase identity", "flagged", "maskelow-2024/PG-25-o2"},
		{"oxide total", "set aside", "maskelow-2024/PG-11-c4"},
		{"reported total", "flagged", "maskelow-2024/PG-31-o2"},
		{"minor component not measured", "flagged", "maskelow-2024/PG-17-o1"},
		{"Fe-Mg distribution", "flagged", "maskelow-2024/PG-25/d:two-pyroxene"},
		{"Fe-Mg distribution", "flagged", "maskelow-2024/PG-25/e:two-pyroxene"},
		{"oxide total", "flagged", "ovarr-2021/HP-05-o1"},
		{"no partner", "noted", "ovarr-2021/HP-21-o6"},
		{"passed over", "set aside", "ovarr-2021/HP-21-g1"},
		{"lost alkalis", "flagged", "idrane-2025/QG-12-k2"},
		{"concordance", "flagged", "idrane-2025/QG-4/4:two-feldspar|two-feldspar/elkins-grove-1990|An"},
		{"celsian", "flagged", "idrane-2025/OS-7-k2"},
		{"celsian", "set aside", "idrane-2025/QG-1-k2"},
		{"BaO not measured", "noted", "idrane-2025/PF-04-k1"},
		{"assumed pressure", "flagged", "idrane-2025/OS-2/1:two-feldspar|two-feldspar/elkins-grove-1990|Ab"},
		{"duplicate", "set aside", "corrane-2026/PG-03-o1"},
		{"duplicate", "set aside", "corrane-2026/PG-03-c1"},
		{"duplicate", "set aside", "corrane-2026/PG-22-o1"},
		{"conflict between sources", "flagged", "corrane-2026/PG-22-c1"},
		{"conflict between sources", "flagged", "maskelow-2024/PG-22-c1"},
		{"shared stage origin", "noted", "corrane-2026:sample PG-11"},
		{"no partner", "noted", "corrane-2026/PG-11A-o3c"},
		{"no partner", "noted", "corrane-2026/PG-11B-c3c"},
		{"iron listed twice", "noted", "corrane-2026/PG-11A-o1c"},
		{"Fe-Mg distribution", "flagged", "corrane-2026/PG-22/PG-22A-o2r+PG-22A-c2r:two-pyroxene"},
		{"pressures differ", "flagged", "brathen-1987/PG-31/PG-31:Opx#2+PG-31:Aug#2:two-pyroxene"},
		{"end-member sum", "flagged", "survey-1969/QG-12:Pl#2"},
		{"re-integration", "noted", "idrane-corrane-2026/OS-2-m1:re-integrated"},
		{"no partner", "noted", "idrane-corrane-2026/OS-7-m1:re-integrated"},
		{"Na2O and K2O swapped", "flagged", "halmund-1994:Na2O"},
	} {
		if found[want] != 1 {
			t.Errorf("%s, %s, on %s: %d findings, want 1", want[0], want[1], want[2], found[want])
		}
	}
	for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
		bounded := e.AnalysisID == "maskelow-2024/PG-25-o5" ||
			strings.HasPrefix(e.EstimateID, "idrane-2025/QG-9/3:") && e.Component == "An"
		if bounded && (e.Status != statusAtMost || e.BoundC == nil) {
			t.Errorf("%s: status %q and no bound; the detection limit gives one", e.EstimateID, e.Status)
		}
	}
}
