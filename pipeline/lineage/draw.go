package lineage

import "tieline/thermo/chem"

// DrawKey is the key of the random draws of one measured quantity of one
// analysis: the value as its cell spells it, of a quantity as manifests name
// it. It holds content only, never a pair, a row's place or a setting, so an
// analysis used in five pairs has one error and a source added to a
// compilation moves nothing else. k counts rows alike in all the rest, in order of
// their content: two unlabelled rows that agree in one oxide do not share its
// error.
func DrawKey(seed uint64, source, sample, label string, phase chem.Phase, quantity, value string, k int) [32]byte {
	return New(drawDomain).Text("measurement").Int(int64(seed)).Text(source).Text(sample).Text(label).
		Text(string(phase)).Text(quantity).Text(value).Int(int64(k)).Sum256()
}

// DrawKeyOf is the key of an error that many analyses share: kind "pressure"
// with the words of the pressure statement, or "session" with source and
// session.
func DrawKeyOf(kind string, seed uint64, words ...string) [32]byte {
	e := New(drawDomain).Text(kind).Int(int64(seed)).List(len(words))
	for _, w := range words {
		e.Text(w)
	}
	return e.Sum256()
}

const drawDomain = "tieline draw 1"
