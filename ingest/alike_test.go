package ingest

import (
	"strings"
	"testing"

	"tieline/manifests"
	"tieline/thermo/chem"
)

// Two texts of the manifest that read alike name two things; which one is meant
// must not depend on the order of a map.
func TestTextsThatReadAlikeAreRefused(t *testing.T) {
	for _, c := range []struct {
		change func(*manifests.Source)
		want   string
	}{
		{func(s *manifests.Source) {
			s.Columns = map[string]manifests.Quantity{"Rock  no": manifests.Label, "Rock no": manifests.Sample}
		},
			`"Rock  no" and "Rock no" in the manifest's columns, which read alike`},
		{func(s *manifests.Source) { s.Phases = map[string]chem.Phase{" Hyp": chem.Cpx, "Hyp": chem.Opx} },
			`" Hyp" and "Hyp" in the manifest's phases, which read alike`},
		{func(s *manifests.Source) { s.Phases = map[string]chem.Phase{"HYP": chem.Cpx, "Hyp": chem.Opx} },
			`"HYP" and "Hyp" in the manifest's phases, which read alike`},
	} {
		s := &manifests.Source{ID: "s", File: "s.csv", Composition: "oxide wt%"}
		c.change(s)
		_, problems, _ := newPlan(s, strings.Split("Rock no,phase,SiO2,MgO,CaO", ","), 1, nil)
		found := 0
		for _, p := range problems {
			if p.Found == c.want {
				found++
			}
		}
		if found != 1 {
			t.Errorf("problems %+v, want one that finds %s", problems, c.want)
		}
	}
}

// The manifest's phase texts apply whatever the case of the cell, and those that
// no row has are named.
func TestPhaseTextsWithoutCase(t *testing.T) {
	all, source, problems := readText(t, `phases = { "K-spar" = "Afs", "K-SPAR" = "Afs", "Plaj" = "Pl" }
pass_over = ["GLASS", "Oxide"]`, "Sample,Mineral,SiO2\nR1,K-Spar,60\nR1,Glass,70\n")
	same(t, "problems", problems.Lines(), nil)
	b, row := all.At(0)
	if got := b.Phase(row); got != "Afs" {
		t.Errorf("K-Spar is %q, want Afs as phases maps K-spar", got)
	}
	if source.PassedOver != 1 {
		t.Errorf("%d rows are passed over, want the one of Glass", source.PassedOver)
	}
	same(t, "unmatched", source.Unmatched, []string{`phases "Plaj"`, `pass_over "Oxide"`})
}
