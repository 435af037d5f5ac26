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
