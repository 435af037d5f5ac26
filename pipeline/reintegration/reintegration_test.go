package reintegration

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tieline/manifests"
	"tieline/pipeline/lineage"
	"tieline/pipeline/tables"
	"tieline/qc"
	"tieline/thermo/chem"
)

// mesoperthite is a worked example: Na lamellae on 0.55 of the area, K lamellae
// on 0.45.
func mesoperthite(na float64) []Part {
	return []Part{{X: [4]float64{.78, .05, .17}, Area: na}, {X: [4]float64{.10, .89, .01}, Area: 1 - na}}
}

// Worked independently from the same volumes (Robie et al. 1978, from memory).
func TestBulk(t *testing.T) {
	for _, c := range []struct {
		volumes string
		want    [3]float64
	}{
		{"high", [3]float64{.48553, .41376, .10071}},
		{"low", [3]float64{.48551, .41378, .10071}},
	} {
		got := Bulk(mesoperthite(.55), volumes[c.volumes])
		for k, want := range c.want {
			if math.Abs(got[k]-want) > .000005 {
				t.Errorf("%s volumes: component %d is %.6f, want %.5f", c.volumes, k, got[k], want)
			}
		}
		if got[3] != 0 {
			t.Errorf("%s volumes: Cn %v of parts without", c.volumes, got[3])
		}
	}
	// Weighting by area alone is 1.4 mol% off in Or: .474, .428, .098.
	equal := Bulk(mesoperthite(.55), Volumes{1, 1, 1})
	for k, want := range []float64{.474, .428, .098} {
		if math.Abs(equal[k]-want) > .0005 {
			t.Errorf("by area alone component %d is %.4f, want %.3f", k, equal[k], want)
		}
	}
	// Per 0.01 of area: Ab +.0067, Or -.0083, An +.0016.
	a, b := Bulk(mesoperthite(.55), volumes["high"]), Bulk(mesoperthite(.56), volumes["high"])
	for k, want := range []float64{.0067, -.0083, .0016} {
		if got := b[k] - a[k]; math.Abs(got-want) > .00005 {
			t.Errorf("0.01 of area moves component %d by %+.5f, want %+.4f", k, got, want)
		}
	}
}

// The bulk is a mole fraction between the parts, whatever unit areas are in;
// parts that are alike give themselves, and the order of parts says nothing.
func TestBulkLiesBetween(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		part := rapid.Custom(func(t *rapid.T) Part {
			p := Part{Area: rapid.Float64Range(0.01, 1).Draw(t, "area")}
			sum := 0.0
			for k := range p.X {
				p.X[k] = rapid.Float64Range(0.001, 1).Draw(t, "x")
				sum += p.X[k]
			}
			for k := range p.X {
				p.X[k] /= sum
			}
			return p
		})
		parts := rapid.SliceOfN(part, 1, 5).Draw(t, "parts")
		x, sum := Bulk(parts, volumes["high"]), 0.0
		for k := range x {
			low, high := math.Inf(1), math.Inf(-1)
			for _, p := range parts {
				low, high = min(low, p.X[k]), max(high, p.X[k])
			}
			if x[k] < low-1e-12 || x[k] > high+1e-12 {
				t.Fatalf("component %d is %v, outside %v to %v of the parts", k, x[k], low, high)
			}
			sum += x[k]
		}
		if math.Abs(sum-1) > 1e-12 {
			t.Fatalf("the bulk adds up to %v", sum)
		}
		for i := range parts {
			parts[i].Area *= 100
		}
		slices.Reverse(parts)
		for k, y := range Bulk(parts, volumes["high"]) {
			if math.Abs(x[k]-y) > 1e-12 {
				t.Fatalf("component %d is %v, and %v by areas in percent, parts turned round", k, x[k], y)
			}
		}
	})
}

// line is a row of a source for these tests.
type line struct {
	phase   chem.Phase
	texture string
	x       [3]float64
	area    float64 // below 0: none
	text    map[tables.Text]string
	kbar    float64
}

func part(phase chem.Phase, texture string, area float64, x ...float64) line {
	return line{phase: phase, texture: texture, area: area, x: [3]float64(x), text: map[tables.Text]string{tables.Sample: "s", tables.Grain: "G1"}}
}

func (l line) with(t tables.Text, s string) line {
	copied := map[tables.Text]string{}
	for k, v := range l.text {
		copied[k] = v
	}
	copied[t] = s
	l.text = copied
	return l
}

func (l line) at(kbar float64) line { l.kbar = kbar; return l }

func build(t *testing.T, sources ...[]line) *tables.Analyses {
	t.Helper()
	all := &tables.Analyses{}
	for s, lines := range sources {
		b := tables.NewBuilder(fmt.Sprintf("s%d", s), chem.EndMember)
		for i, l := range lines {
			a := &tables.Analysis{Line: i + 2, Phase: l.phase, Lineage: lineage.New("test").Int(int64(s)).Int(int64(i)).Sum()}
			a.Composition.Kind = chem.EndMember
			for k, m := range []chem.Measurand{chem.XAb, chem.XOr, chem.XAn} {
				a.Composition.Value[m], a.Composition.State[m] = l.x[k], chem.Measured
			}
			for k, v := range l.text {
				a.Text[k] = v
			}
			a.Text[tables.AnalysisID] = fmt.Sprintf("s%d/%d", s, i)
			a.Text[tables.Texture] = l.texture
			if l.area >= 0 {
				a.Number[tables.AreaFraction], a.Has[tables.AreaFraction] = l.area, true
			}
			if l.kbar > 0 {
				a.Number[tables.PKbar], a.Has[tables.PKbar] = l.kbar, true
			}
			if err := b.Append(a); err != nil {
				t.Fatal(err)
			}
		}
		all.Batches = append(all.Batches, b.Finish()...)
	}
	return all
}

func high() *manifests.Reintegration { return &manifests.Reintegration{Volumes: "high"} }

func na(area float64) line { return part(chem.Pl, "lamella", area, .78, .05, .17) }
func k(area float64) line  { return part(chem.Afs, "lamella", area, .10, .89, .01) }

// dump writes every re-integrated analysis, and the findings but the caution.
func dump(r *Result) (out []string) {
	for i := range r.Analyses.Len() {
		b, row := r.Analyses.At(i)
		if parts := r.Parts[int32(i)]; parts != nil {
			var c chem.Composition
			b.Composition(row, &c)
			out = append(out, fmt.Sprintf("%d %s %s of %v: %.5f %.5f %.5f", i, b.Text(tables.AnalysisID, row), b.Phase(row), parts,
				c.Value[chem.XAb], c.Value[chem.XOr], c.Value[chem.XAn]))
		}
		for _, f := range r.Findings[int32(i)] {
			if !strings.Contains(f.Detail, "minimum temperature") {
				out = append(out, fmt.Sprintf("%d %s: %s", i, f.Effect, f.Detail))
			}
		}
	}
	return out
}

func TestGrains(t *testing.T) {
	const bulk = ": 0.48553 0.41376 0.10071"
	for _, c := range []struct {
		name    string
		sources [][]line
		want    []string
	}{
		{"mesoperthite", [][]line{{na(.55), k(.45)}}, []string{"2 s0/G1:re-integrated Afs of [0 1]" + bulk}},
		{"sum at the tolerance", [][]line{{na(.539), k(.441)}}, []string{"2 s0/G1:re-integrated Afs of [0 1]" + bulk}},
		{"sum past it", [][]line{{na(.5379), k(.4401)}}, []string{"2 s0/G1:re-integrated Afs of [0 1]" + bulk, "2 flagged: the area fractions of its parts add up to 0.978; they were brought to 1"}},
		{"each source by itself, its grains after its rows", [][]line{{na(.55), k(.45)}, {na(.55), k(.45)}},
			[]string{"2 s0/G1:re-integrated Afs of [0 1]" + bulk, "5 s1/G1:re-integrated Afs of [3 4]" + bulk}},
		{"one name in two samples", [][]line{{na(.55), k(.45), na(.55).with(tables.Sample, "t"), k(.45).with(tables.Sample, "t")}},
			[]string{"4 s0/G1:re-integrated Afs of [0 1]" + bulk, "5 s0/G1:re-integrated#2 Afs of [2 3]" + bulk}},
		{"two domains", [][]line{{na(.55).with(tables.Domain, "A"), k(.45).with(tables.Domain, "B")}},
			[]string{"0 noted: the grain has one part with an area fraction; a whole takes two or more", "1 noted: the grain has one part with an area fraction; a whole takes two or more"}},
		{"no grain", [][]line{{na(.55).with(tables.Grain, "")}}, []string{"0 noted: area fractions without a grain; name the grain its parts belong to"}},
		{"no feldspar", [][]line{{na(.55), part("Qz", "", .45, 0, 0, 0)}}, []string{"0 noted: s0/1 of the grain is no feldspar but Qz", "1 noted: s0/1 of the grain is no feldspar but Qz"}},
		{"no composition", [][]line{{na(.55), part(chem.Afs, "", .45, 0, 0, 0)}}, []string{"0 noted: Ab, Or and An of s0/1 are not known, or below zero", "1 noted: Ab, Or and An of s0/1 are not known, or below zero"}},
		{"below zero", [][]line{{na(.55), part(chem.Afs, "", .45, .1, .91, -.01)}}, []string{"0 noted: Ab, Or and An of s0/1 are not known, or below zero", "1 noted: Ab, Or and An of s0/1 are not known, or below zero"}},
		{"no area", [][]line{{na(0), k(0)}}, []string{"0 noted: the area fractions of the grain are all 0", "1 noted: the area fractions of the grain are all 0"}},
		{"a row without an area fraction is no part", [][]line{{na(.55), k(.45), na(-1)}}, []string{"3 s0/G1:re-integrated Afs of [0 1]" + bulk}},
		{"a row passed over is no part", [][]line{{na(.55), k(.45), na(1).with(tables.SetAside, "out")}}, []string{"3 s0/G1:re-integrated Afs of [0 1]" + bulk}},
		{"antiperthite", [][]line{{part(chem.Pl, "Host", .55, .78, .05, .17), k(.45)}}, []string{"2 s0/G1:re-integrated Pl of [0 1]" + bulk}},
		{"both parts called alkali feldspar", [][]line{{part("Ano", "lamella", .55, .78, .05, .17), part("Or", "lamella", .45, .10, .89, .01)}}, []string{"2 s0/G1:re-integrated Afs of [0 1]" + bulk}},
		{"pressures that differ", [][]line{{na(.55).at(3), k(.45).at(4)}}, []string{"2 s0/G1:re-integrated Afs of [0 1]" + bulk, "2 noted: its parts differ in p_kbar; it has none"}},
		{"nothing to do", [][]line{{na(-1), k(-1)}}, nil},
	} {
		if got := dump(Of(build(t, c.sources...), high())); !slices.Equal(got, c.want) {
			t.Errorf("%s:\n got %q\nwant %q", c.name, got, c.want)
		}
	}
}

// A grain has what its parts say alike, the line of the first, and a lineage
// that its parts and the volumes make.
func TestGrainHasWhatItsPartsSay(t *testing.T) {
	rows := []line{na(.55).with(tables.PairLabel, "1").with(tables.Unit, "U").at(3), k(.45).with(tables.PairLabel, "1").with(tables.Domain, "").with(tables.Locality, "L").at(3)}
	r := Of(build(t, rows), high())
	b, row := r.Analyses.At(2)
	for text, want := range map[tables.Text]string{tables.PairLabel: "1", tables.Unit: "U", tables.Locality: "L", tables.Sample: "s", tables.Grain: "G1",
		tables.Texture: Kind, tables.AnalysisKind: Kind, tables.Label: ""} {
		if got := b.Text(text, row); got != want {
			t.Errorf("%s is %q, want %q", text, got, want)
		}
	}
	if p, ok := b.Number(tables.PKbar, row); !ok || p != 3 {
		t.Errorf("pressure %v, %v; its parts agree on 3 kbar", p, ok)
	}
	if _, ok := b.Number(tables.AreaFraction, row); ok || b.Line(row) != 2 || b.Kind != chem.EndMember || b.EndMemberSum(row) != 1 {
		t.Errorf("area fraction %v, line %d, kind %s, end-member sum %v; want none, 2, end-member fraction, 1", ok, b.Line(row), b.Kind, b.EndMemberSum(row))
	}
	was := b.Lineage(row)
	lineageOf := func(rows []line, volumes string) lineage.Digest {
		r := Of(build(t, rows), &manifests.Reintegration{Volumes: volumes})
		b, row := r.Analyses.At(r.Analyses.Len() - 1)
		return b.Lineage(row)
	}
	if lineageOf(rows, "high") != was {
		t.Error("the same parts and volumes gave two lineages")
	}
	if lineageOf(rows, "low") == was {
		t.Error("low volumes have the lineage of high ones")
	}
	if lineageOf([]line{na(-1), rows[0], rows[1]}, "high") == was { // other rows, other lineages of parts
		t.Error("other parts have the same lineage")
	}
	if f := r.Findings[2]; len(f) != 1 || f[0].Effect != qc.Noted || f[0].Rule != Rule || !strings.Contains(f[0].Detail, "from s0/0, s0/1") {
		t.Errorf("findings on the grain: %+v; want the caution that names its parts", f)
	}
}

// Celsian is kept where every part was analysed for Ba, and only there.
func TestCelsian(t *testing.T) {
	for _, known := range []bool{true, false} {
		all := &tables.Analyses{}
		b := tables.NewBuilder("s", chem.EndMember)
		for i, x := range [][4]float64{{.76, .05, .17, .02}, {.10, .87, .01, .02}} {
			a := &tables.Analysis{Line: i + 2, Phase: chem.Afs}
			a.Composition.Kind = chem.EndMember
			for k := range x {
				m := chem.XAb + chem.Measurand(k)
				if known || m != chem.XCn {
					a.Composition.Value[m], a.Composition.State[m] = x[k], chem.Measured
				}
			}
			a.Text[tables.Sample], a.Text[tables.Grain] = "s", "G"
			a.Text[tables.AnalysisID] = fmt.Sprint("s/", i)
			a.Number[tables.AreaFraction], a.Has[tables.AreaFraction] = .5, true
			if err := b.Append(a); err != nil {
				t.Fatal(err)
			}
		}
		all.Batches = b.Finish()
		r := Of(all, high())
		batch, row := r.Analyses.At(2)
		var c chem.Composition
		batch.Composition(row, &c)
		if c.Determined(chem.XCn) != known || (known && math.Abs(c.Value[chem.XCn]-.02) > 1e-12) {
			t.Errorf("Ba looked for %v: Cn %v, %s; both parts have .02", known, c.Value[chem.XCn], c.State[chem.XCn])
		}
	}
}
