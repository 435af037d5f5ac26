package pipeline

import (
	"tieline/ingest"
	"tieline/manifests"
	"tieline/pipeline/pairing"
)

// Check is what a manifest and its sources hold, without a temperature.
type Check struct {
	Title    string          `json:"title"`
	Sources  []ingest.Source `json:"sources"`
	Methods  []string        `json:"methods"` // that would be worked out
	Analyses int             `json:"analyses"`
	Pairs    map[string]int  `json:"pairs"`    // by kind
	Unpaired int             `json:"unpaired"` // analyses that could have a partner and got none
}

// CheckInputs reads everything Run would read and says what it found. The error
// is the one Run would stop at; the Check is then as far as it came.
func CheckInputs(path string) (*Check, error) {
	m, root, err := manifests.Load(path)
	if err != nil {
		return nil, err
	}
	defer root.Close()
	c := &Check{Title: m.Compilation.Title, Pairs: map[string]int{}}
	methods, _ := chosen(m)
	for _, me := range methods {
		if me.Variant == "" {
			c.Methods = append(c.Methods, me.ID)
		}
	}
	s, sources, err := read(m, root, Options{Progress: func(string, int64, int64) {}})
	c.Sources = sources
	if err != nil {
		return c, err
	}
	c.Analyses = s.all.Len()
	result := pairing.Pairs(s.all, &m.Pairing)
	for _, p := range result.Pairs {
		c.Pairs[pairing.Kinds[p.Kind].Name]++
	}
	c.Unpaired = len(result.Without)
	return c, nil
}
