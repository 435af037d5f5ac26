package pairing

import (
	"fmt"
	"math"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"tieline/manifests"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// defaults are the manifest's own.
func defaults() *manifests.Pairing {
	return &manifests.Pairing{Rules: []string{RuleListed, RuleTouchingRims, RuleNearest}, NearestUm: 500, TouchingUm: 50}
}

func only(rules ...string) *manifests.Pairing {
	set := defaults()
	set.Rules = rules
	return set
}

// texts are the words of a row: "Cpx s label=1 texture=rim domain=A x=3 y=4".
var texts = map[string]tables.Text{"label": tables.PairLabel, "texture": tables.Texture, "domain": tables.Domain,
	"generation": tables.Generation, "kind": tables.AnalysisKind, "aside": tables.SetAside}

var numbers = map[string]tables.Number{"area": tables.AreaFraction, "x": tables.SpotXUm, "y": tables.SpotYUm}

var endMembers = map[string]chem.Measurand{"Ab": chem.XAb, "Or": chem.XOr, "An": chem.XAn}

// build makes analyses of rows of words, one batch per source; a word without a
// name is a pair label. Feldspars are Ab50 Or50 unless a row says otherwise.
func build(t interface{ Fatal(...any) }, sources ...[]string) *tables.Analyses {
	all := &tables.Analyses{}
	for i, rows := range sources {
		b := tables.NewBuilder(fmt.Sprintf("source%d", i), chem.EndMember)
		for line, r := range rows {
			f := strings.Fields(r)
			a := &tables.Analysis{Line: line + 2, Phase: chem.Phase(f[0])}
			a.Text[tables.AnalysisID] = fmt.Sprintf("source%d/%d", i, line)
			a.Text[tables.Sample] = f[1]
			a.Composition.Kind = chem.EndMember
			for _, m := range endMembers {
				a.Composition.State[m] = chem.Measured
			}
			a.Composition.Value[chem.XAb], a.Composition.Value[chem.XOr] = 0.5, 0.5
			for _, word := range f[2:] {
				name, value, ok := strings.Cut(word, "=")
				if !ok {
					name, value = "label", word
				}
				number, err := strconv.ParseFloat(value, 64)
				if n, is := numbers[name]; is && err == nil {
					a.Number[n], a.Has[n] = number, true
				} else if m, is := endMembers[name]; is && value == "none" {
					a.Composition.Value[m], a.Composition.State[m] = 0, chem.NotAnalysed
				} else if is && err == nil {
					a.Composition.Value[m] = number
				} else if text, is := texts[name]; is {
					a.Text[text] = strings.ReplaceAll(value, "_", " ")
				} else {
					t.Fatal("no such word: " + word)
				}
			}
			if err := b.Append(a); err != nil {
				t.Fatal(err)
			}
		}
		all.Batches = append(all.Batches, b.Finish()...)
	}
	return all
}

// say writes pairs as "kind:a-b" by their indices, and who is left.
func say(r *Result) (pairs []string, left []int32) {
	for _, p := range r.Pairs {
		pairs = append(pairs, fmt.Sprintf("%d:%d-%d", p.Kind, p.A, p.B))
	}
	for _, u := range r.Without {
		left = append(left, u.Analysis)
	}
	return pairs, left
}

type pairCase struct {
	name    string
	sources [][]string
	pairs   string
	without []int32
}

func hold(t *testing.T, set *manifests.Pairing, rule string, cases []pairCase) {
	t.Helper()
	for _, c := range cases {
		r := Pairs(build(t, c.sources...), set)
		pairs, left := say(r)
		if strings.Join(pairs, " ") != c.pairs || !slices.Equal(left, c.without) {
			t.Errorf("%s: pairs %q, without partner %v; want %q, %v", c.name, pairs, left, c.pairs, c.without)
		}
		for _, p := range r.Pairs {
			if p.Rule.String() != rule {
				t.Errorf("%s: pair %d-%d by rule %q, want %q", c.name, p.A, p.B, p.Rule, rule)
			}
		}
	}
}

func TestListed(t *testing.T) {
	hold(t, defaults(), RuleListed, []pairCase{
		{"one pair", [][]string{{"Opx s 1", "Cpx s 1"}}, "1:0-1", nil},
		{"order of rows does not matter", [][]string{{"Cpx s 1", "Opx s 1"}}, "1:1-0", nil},
		{"roles, not symbols", [][]string{{"Sa s 1", "Olg s 1", "En s 2", "Di s 2"}}, "0:0-1 1:2-3", nil},
		{"one label, two kinds", [][]string{{"Opx s 1", "Afs s 1", "Cpx s 1", "Pl s 1"}}, "0:1-3 1:0-2", nil},
		{"same label in another sample", [][]string{{"Opx s 1", "Cpx t 1"}}, "", []int32{0, 1}},
		{"same label in another source", [][]string{{"Opx s 1"}, {"Cpx s 1"}}, "", []int32{0, 1}},
		{"samples differ by case", [][]string{{"Opx L1 1", "Cpx l1 1"}}, "", []int32{0, 1}},
		{"two of a role say nothing", [][]string{{"Opx s 1", "Cpx s 1", "Cpx s 1"}}, "", []int32{0, 1, 2}},
		{"no label", [][]string{{"Opx s", "Cpx s"}}, "", []int32{0, 1}},
		{"no label and nobody to pair with", [][]string{{"Opx s", "Cpx t"}}, "", nil},
		{"no partner", [][]string{{"Opx s 1"}}, "", []int32{0}},
		{"a phase of no pair", [][]string{{"Grt s 1", "Opx s 1", "Cpx s 1"}}, "1:1-2", nil},
		{"a row passed over", [][]string{{"Opx s 1 aside=glass", "Cpx s 1"}}, "", []int32{1}},
		{"core with rim, as its source says", [][]string{{"Opx s 1 texture=core", "Cpx s 1 texture=rim"}}, "1:0-1", nil},
		{"two domains", [][]string{{"Opx s 1 domain=A", "Cpx s 1 domain=B"}}, "", []int32{0, 1}},
		{"one domain given", [][]string{{"Opx s 1 domain=A", "Cpx s 1"}}, "1:0-1", nil},
		{"two generations", [][]string{{"Opx s 1 generation=1", "Cpx s 1 generation=2"}}, "", []int32{0, 1}},
		{"host of a pyroxene with its lamella", [][]string{{"Opx s 1 texture=host", "Cpx s 1 texture=lamella"}}, "1:0-1", nil},
		{"host with a whole grain", [][]string{{"Opx s 1 texture=host", "Cpx s 1 kind=re-integrated"}}, "", []int32{0, 1}},
		{"whole grains", [][]string{{"Opx s 1 kind=Bulk", "Cpx s 1 kind=re-integrated"}}, "1:0-1", nil},
		{"a host is no feldspar of two", [][]string{{"Afs s 1 texture=host", "Pl s 1"}}, "", []int32{0, 1}},
		{"a lamella is no feldspar of two", [][]string{{"Afs s 1", "Pl s 1 texture=lamella"}}, "", []int32{0, 1}},
		{"a part with an area fraction is none", [][]string{{"Afs s 1 area=.4", "Pl s 1"}}, "", []int32{0, 1}},
		{"a re-integrated feldspar is", [][]string{{"Afs s 1 kind=re-integrated texture=host", "Pl s 1"}}, "0:0-1", nil},
		{"parts, whole and plagioclase", [][]string{{"Pl s 1 texture=lamella Or=.05 Ab=.95", "Afs s 1 texture=host Or=.9 Ab=.1", "Afs s 1 kind=re-integrated", "Pl s 1"}}, "0:2-3 2:0-1", nil},
	})
}

func TestSolvus(t *testing.T) {
	hold(t, defaults(), RuleListed, []pairCase{
		{"host and lamella", [][]string{{"Afs s 1 texture=host Or=.6 Ab=.4", "Pl s 1 texture=lamella Or=.14 Ab=.86"}}, "2:1-0", nil},
		{"the Na side by composition, not by name", [][]string{{"Pl s 1 texture=host Or=.6 Ab=.4", "Afs s 1 texture=lamella Or=.14 Ab=.86"}}, "2:1-0", nil},
		{"two lamellae", [][]string{{"Afs s 1 texture=Lamella Or=.1 Ab=.9", "Afs s 1 texture=lamellae Or=.6 Ab=.4"}}, "2:0-1", nil},
		{"equal, the first is the Na side", [][]string{{"Afs s 1 texture=host", "Afs s 1 texture=lamella"}}, "2:0-1", nil},
		{"two hosts", [][]string{{"Afs s 1 texture=host", "Pl s 1 texture=host"}}, "", []int32{0, 1}},
		{"three", [][]string{{"Afs s 1 texture=host", "Pl s 1 texture=lamella", "Pl s 1 texture=lamella"}}, "", []int32{0, 1, 2}},
		{"one", [][]string{{"Afs s 1 texture=host"}}, "", []int32{0}},
		{"Or not analysed", [][]string{{"Afs s 1 texture=host Or=none", "Pl s 1 texture=lamella"}}, "", []int32{0, 1}},
		{"no label", [][]string{{"Afs s texture=host x=0 y=0", "Pl s texture=lamella x=1 y=1"}}, "", []int32{0, 1}},
		{"re-integrated is no part", [][]string{{"Afs s 1 texture=host", "Pl s 1 texture=lamella kind=re-integrated"}}, "", []int32{0, 1}},
	})
}

func TestTouchingRims(t *testing.T) {
	hold(t, only(RuleTouchingRims), RuleTouchingRims, []pairCase{
		{"at the limit", [][]string{{"Opx s texture=rim x=0 y=0", "Cpx s texture=Rim x=30 y=40"}}, "1:0-1", nil},
		{"just past it", [][]string{{"Opx s texture=rim x=0 y=0", "Cpx s texture=rim x=30 y=40.001"}}, "", []int32{0, 1}},
		{"a core", [][]string{{"Opx s texture=core x=0 y=0", "Cpx s texture=core x=3 y=4"}}, "", []int32{0, 1}},
		{"a rim and a core", [][]string{{"Opx s texture=rim x=0 y=0", "Cpx s texture=core x=3 y=4"}}, "", []int32{0, 1}},
		{"not mutual", [][]string{{"Opx s texture=rim x=0 y=0", "Cpx s texture=rim x=30 y=0", "Cpx s texture=rim x=20 y=0"}}, "1:0-2", []int32{1}},
	})
}

func TestNearest(t *testing.T) {
	hold(t, only(RuleNearest), RuleNearest, []pairCase{
		{"at the limit", [][]string{{"Opx s x=0 y=0", "Cpx s x=300 y=400"}}, "1:0-1", nil},
		{"just past it", [][]string{{"Opx s x=0 y=0", "Cpx s x=300 y=400.001"}}, "", []int32{0, 1}},
		{"not mutual", [][]string{{"Afs s x=0 y=0", "Afs s x=10 y=0", "Pl s x=12 y=0"}}, "0:1-2", []int32{0}},
		{"two pairs", [][]string{{"Afs s x=0 y=0", "Afs s x=100 y=0", "Pl s x=112 y=0", "Pl s x=-20 y=0"}}, "0:0-3 0:1-2", nil},
		{"equally near, the first", [][]string{{"Afs s x=0 y=0", "Pl s x=5 y=0", "Pl s x=0 y=5"}}, "0:0-1", []int32{2}},
		{"one place, the first of each", [][]string{{"Afs s x=0 y=0", "Afs s x=0 y=0", "Pl s x=0 y=0", "Pl s x=0 y=0"}}, "0:0-2", []int32{1, 3}},
		{"textures", [][]string{{"Opx s texture=core x=0 y=0", "Cpx s texture=rim x=1 y=0"}}, "", []int32{0, 1}},
		{"a texture and none", [][]string{{"Opx s texture=core x=0 y=0", "Cpx s x=1 y=0"}}, "", []int32{0, 1}},
		{"generations", [][]string{{"Opx s generation=1 x=0 y=0", "Cpx s generation=2 x=1 y=0"}}, "", []int32{0, 1}},
		{"samples", [][]string{{"Opx s x=0 y=0", "Cpx t x=1 y=0"}}, "", []int32{0, 1}},
		{"sources", [][]string{{"Opx s x=0 y=0"}, {"Cpx s x=1 y=0"}}, "", []int32{0, 1}},
		{"no domain named anywhere", [][]string{{"Opx s x=0 y=0", "Cpx s x=1 y=0", "Grt t domain=A"}}, "1:0-1", nil},
		{"another row of the sample names one", [][]string{{"Opx s x=0 y=0", "Cpx s x=1 y=0", "Grt s domain=A"}}, "", []int32{0, 1}},
		{"one of two names one", [][]string{{"Opx s domain=A x=0 y=0", "Cpx s x=1 y=0"}}, "", []int32{0, 1}},
		{"no coordinates", [][]string{{"Opx s x=0", "Cpx s x=1 y=0"}}, "", []int32{0, 1}},
		{"hosts stay apart from whole grains", [][]string{{"Opx s texture=host x=0 y=0", "Cpx s texture=host kind=re-integrated x=1 y=0"}}, "", []int32{0, 1}},
		{"a host is no feldspar of two", [][]string{{"Afs s texture=host x=0 y=0", "Pl s texture=host x=1 y=0"}}, "", []int32{0, 1}},
		{"past all numbers", [][]string{{"Opx s x=-1e300 y=0", "Cpx s x=1e300 y=0"}}, "", []int32{0, 1}},
	})
}

// Two thin sections of one sample, each with the origin of its stage at 0,0: the
// nearest neighbour by the numbers lies in the other section.
func TestSectionsWithOneOrigin(t *testing.T) {
	rows := []string{"Opx s domain=A x=0 y=0", "Cpx s domain=B x=0 y=0", "Cpx s domain=A x=120 y=0", "Opx s domain=B x=0 y=200"}
	r := Pairs(build(t, rows), defaults())
	pairs, left := say(r)
	if strings.Join(pairs, " ") != "1:0-2 1:3-1" || left != nil {
		t.Errorf("pairs %q, without %v; want each section's own, 1:0-2 and 1:3-1", pairs, left)
	}
	if got := Distance(build(t, rows), 0, 1); !math.IsNaN(got) {
		t.Errorf("the two origins lie %v um apart; nobody can tell", got)
	}
	r = Pairs(build(t, rows[:2]), defaults())
	if pairs, left := say(r); pairs != nil || !slices.Equal(left, []int32{0, 1}) {
		t.Errorf("two sections of one origin: pairs %q, without %v; want none", pairs, left)
	}
}

func TestMeans(t *testing.T) {
	hold(t, only(RuleMeans), RuleMeans, []pairCase{
		{"one of each", [][]string{{"Afs s kind=mean", "Pl s kind=mean_of_12"}}, "0:0-1", nil},
		{"two of one", [][]string{{"Afs s kind=mean", "Pl s kind=mean", "Pl s kind=mean"}}, "", []int32{0, 1, 2}},
		{"a spot", [][]string{{"Afs s kind=mean", "Pl s kind=spot"}}, "", []int32{0, 1}},
		{"textures", [][]string{{"Afs s kind=mean texture=core", "Pl s kind=mean texture=rim"}}, "", []int32{0, 1}},
		{"samples", [][]string{{"Afs s kind=mean", "Pl t kind=mean"}}, "", nil},
		{"sources", [][]string{{"Afs s kind=mean"}, {"Pl s kind=mean"}}, "", nil},
	})
}

func TestCombinations(t *testing.T) {
	hold(t, only(RuleCombinations), RuleCombinations, []pairCase{
		{"two by two", [][]string{{"Afs s", "Afs s", "Pl s", "Pl s"}}, "0:0-2 0:0-3 0:1-2 0:1-3", nil},
		{"not across textures", [][]string{{"Afs s texture=core", "Afs s texture=rim", "Pl s texture=rim"}}, "0:1-2", []int32{0}},
		{"not across domains", [][]string{{"Afs s domain=A", "Pl s domain=B"}}, "", []int32{0, 1}},
	})
	var rows []string
	for range 1001 {
		rows = append(rows, "Opx s", "Cpx s")
	}
	r := Pairs(build(t, rows), only(RuleCombinations))
	all := build(t, rows)
	if len(r.Pairs) != 0 || len(r.Without) != len(rows) || !strings.Contains(r.Without[0].Why(all), "more than 1000000") {
		t.Errorf("1001 by 1001 made %d pairs and left %d", len(r.Pairs), len(r.Without))
	}
	if r := Pairs(build(t, rows[:2000]), only(RuleCombinations)); len(r.Pairs) != maxCombinations {
		t.Errorf("1000 by 1000 made %d pairs", len(r.Pairs))
	}
}

// The first rule that pairs an analysis uses it.
func TestRulesInOrder(t *testing.T) {
	rows := []string{
		"Opx s 1 texture=rim x=0 y=0", "Cpx s 1 texture=rim x=400 y=0", // listed, though others are nearer
		"Cpx s texture=rim x=10 y=0", "Opx s texture=rim x=20 y=0", // touching
		"Opx s texture=core x=0 y=0", "Cpx s texture=core x=100 y=0", // nearest
		"Opx s texture=rim x=5000 y=0", "Cpx s texture=rim x=5100 y=0", // rims that do not touch
	}
	for _, c := range []struct {
		rules []string
		want  string
	}{
		{[]string{RuleListed, RuleTouchingRims, RuleNearest}, "0-1 listed, 3-2 touching rims, 4-5 nearest, 6-7 nearest"},
		{[]string{RuleNearest, RuleListed}, "0-2 nearest, 4-5 nearest, 6-7 nearest"},
		{[]string{RuleTouchingRims, RuleListed}, "0-2 touching rims"},
		{[]string{RuleListed}, "0-1 listed"},
		{nil, ""},
	} {
		var got []string
		for _, p := range Pairs(build(t, rows), only(c.rules...)).Pairs {
			got = append(got, fmt.Sprintf("%d-%d %s", p.A, p.B, p.Rule))
		}
		if strings.Join(got, ", ") != c.want {
			t.Errorf("rules %q: %q, want %q", c.rules, got, c.want)
		}
	}
}

func TestWhy(t *testing.T) {
	for _, c := range []struct {
		what string
		set  *manifests.Pairing
		rows []string
		want string // of the first row
	}{
		{"two of a role", defaults(), []string{"Opx s 1", "Cpx s 1", "Cpx s 1"}, `pair label "1" names 1 Opx and 2 Cpx; a pair is one of each`},
		{"host with plagioclase", defaults(), []string{"Pl s 1", "Afs s 1 texture=host"}, `pair label "1" names 0 Afs and 1 Pl; a pair is one of each, hosts and lamellae not counted`},
		{"one lamella", defaults(), []string{"Pl s 1 texture=lamella"}, `pair label "1" names 0 feldspar hosts and 1 lamellae; a pair is a host and a lamella, or two lamellae`},
		{"no Or", defaults(), []string{"Afs s 1 texture=host", "Pl s 1 texture=lamella Or=none"}, `which is the Na side is not known`},
		{"domains", defaults(), []string{"Opx s 1 domain=A", "Cpx s 1 domain=B"}, `pair label "1" joins two domains; a pair lies in one`},
		{"generations", defaults(), []string{"Opx s 1 generation=A", "Cpx s 1 generation=B"}, `joins two generations`},
		{"pooled", defaults(), []string{"Opx s 1 texture=host", "Cpx s 1 kind=bulk"}, `joins a host or lamella with the analysis of a whole grain`},
		{"label and place", defaults(), []string{"Opx s 1 x=0 y=0", "Cpx s x=730 y=0"}, `pair label "1" names 1 Opx and 0 Cpx; a pair is one of each; nearest Cpx is 730 um away`},
		{"too far", defaults(), []string{"Opx s x=0 y=0", "Cpx s x=730 y=0"}, "nearest Cpx is 730 um away"},
		{"none", defaults(), []string{"Opx s x=0 y=0"}, "no Cpx in this domain"},
		{"none in this one", defaults(), []string{"Opx s domain=A x=0 y=0", "Cpx s domain=B x=0 y=0"}, "no Cpx in this domain"},
		{"none alike", defaults(), []string{"Opx s texture=rim x=0 y=0", "Cpx s texture=core x=1 y=0"}, "no Cpx with coordinates, of its texture and generation, in this domain"},
		{"outdone", defaults(), []string{"Opx s x=0 y=0", "Cpx s x=20 y=0", "Opx s x=25.04 y=0", "Cpx s x=26 y=0"}, "nearest Cpx, 20 um away, has a nearer neighbour"},
		{"taken", defaults(), []string{"Opx s x=0 y=0", "Cpx s x=20 y=0", "Opx s x=25.04 y=0"}, "nearest Cpx, 20 um away, is in another pair"},
		{"no coordinates", defaults(), []string{"Opx s", "Cpx s x=0 y=0"}, "its sample holds Cpx, but what belongs together is not said; give a pair label or coordinates"},
		{"no domain", defaults(), []string{"Opx s x=0 y=0", "Cpx s domain=A x=0 y=0"}, "name its thin section"},
		{"no rule", only(RuleListed), []string{"Opx s", "Cpx s"}, "its sample holds Cpx, and no rule that was asked for pairs them; give a pair label"},
		{"host alone", defaults(), []string{"Afs s texture=host", "Pl s texture=lamella"}, "paired with what exsolved beside it, by a pair label"},
	} {
		all := build(t, c.rows)
		r := Pairs(all, c.set)
		if len(r.Without) == 0 || r.Without[0].Analysis != 0 {
			t.Errorf("%s: the first row is not without a partner: %+v", c.what, r)
			continue
		}
		if got := r.Without[0].Why(all); !strings.HasSuffix(got, c.want) && !strings.Contains(got, c.want) {
			t.Errorf("%s: %q, want %q", c.what, got, c.want)
		}
	}
	r := Pairs(build(t, []string{"Opx s x=0 y=0", "Cpx s x=730 y=0"}), defaults())
	if u := r.Without[0]; u.Um != 730 || u.LimitUm != 500 {
		t.Errorf("730 um away by a limit of 500: says %v by %v", u.Um, u.LimitUm)
	}
}

// anyRow draws a row that any rule may have something to say of.
var anyRow = rapid.Custom(func(t *rapid.T) string {
	words := []string{
		rapid.SampledFrom([]string{"Opx", "Cpx", "Afs", "Pl", "Grt"}).Draw(t, "phase"),
		rapid.SampledFrom([]string{"a", "b"}).Draw(t, "sample"),
	}
	for name, values := range map[string][]string{"label": {"1", "2"}, "texture": {"core", "rim", "host", "lamella"}, "domain": {"A", "B"},
		"generation": {"1", "2"}, "kind": {"mean", "re-integrated"}, "x": {"0", "30", "200", "2000"}, "y": {"0", "40", "300"}} {
		if v := rapid.SampledFrom(append(values, "", "", "")).Draw(t, name); v != "" {
			words = append(words, name+"="+v)
		}
	}
	return strings.Join(words, " ")
})

// No pair joins what does not belong together, each analysis is in one pair
// unless all combinations were asked for, and every analysis of a role is in a
// pair or has its reason: only what carries neither a label nor coordinates, in
// a sample without anything it could be paired with, has none.
func TestPairsKeepApartAndAccount(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		all := build(t, rapid.SliceOfN(anyRow, 1, 20).Draw(t, "first"), rapid.SliceOfN(anyRow, 1, 8).Draw(t, "second"))
		rules := rapid.Permutation([]string{RuleListed, RuleTouchingRims, RuleNearest, RuleMeans, RuleCombinations}).Draw(t, "order")
		rules = rules[:rapid.IntRange(0, 5).Draw(t, "rules")]
		r := Pairs(all, only(rules...))
		seen := make([]int, all.Len())
		for _, p := range r.Pairs {
			checkPair(t, all, p)
			seen[p.A]++
			seen[p.B]++
			if p.Rule.String() == RuleCombinations {
				seen[p.A], seen[p.B] = 1, 1
			}
		}
		for i, u := range r.Without {
			seen[u.Analysis]++
			if i > 0 && r.Without[i-1].Analysis >= u.Analysis {
				t.Fatalf("analyses without a partner are out of order at %d", u.Analysis)
			}
			if u.Why(all) == "" {
				t.Fatalf("no reason why %d has no partner", u.Analysis)
			}
		}
		for i := range all.Len() {
			b, row := all.At(i)
			role := memberOf(b, row)&memberRole != 0
			_, _, placed := spot(all, int32(i))
			asked := b.Text(tables.PairLabel, row) != "" && slices.Contains(rules, RuleListed)
			switch {
			case seen[i] > 1 || (!role && seen[i] > 0):
				t.Fatalf("analysis %d is accounted for %d times", i, seen[i])
			case seen[i] == 0 && role && (asked || hasPartner(all, i)):
				t.Fatalf("analysis %d (%s, label %q, coordinates %v) is in no pair and has no reason", i, b.Phase(row), b.Text(tables.PairLabel, row), placed)
			}
		}
	})
}

// hasPartner looks for one in the plainest way.
func hasPartner(all *tables.Analyses, i int) bool {
	b, row := all.At(i)
	kind, side, _ := memberOf(b, row).kind()
	for j := range all.Len() {
		c, other := all.At(j)
		k, s, ok := memberOf(c, other).kind()
		if ok && j != i && c.Source == b.Source && c.Text(tables.Sample, other) == b.Text(tables.Sample, row) && k == kind && (s != side || k == solvus) {
			return true
		}
	}
	return false
}

func checkPair(t *rapid.T, all *tables.Analyses, p Pair) {
	a, ra := all.At(int(p.A))
	b, rb := all.At(int(p.B))
	same := func(text tables.Text) bool { return a.Text(text, ra) == b.Text(text, rb) }
	ma, mb := memberOf(a, ra), memberOf(b, rb)
	ka, sa, _ := ma.kind()
	kb, sb, _ := mb.kind()
	if a.Source != b.Source || !same(tables.Sample) || ka != p.Kind || kb != p.Kind || (p.Kind != solvus && (sa != 0 || sb != 1)) {
		t.Fatalf("%+v joins what is no pair: %s of %s and %s of %s", p, a.Phase(ra), a.Source, b.Phase(rb), b.Source)
	}
	if (ma|mb)&(exsolved|integrated) == exsolved|integrated || (p.Kind == twoFeldspar && (ma|mb)&exsolved != 0) {
		t.Fatalf("%+v pools a host or lamella with a whole grain", p)
	}
	for _, text := range []tables.Text{tables.Domain, tables.Generation} {
		if !same(text) && (p.Rule.String() != RuleListed || (a.Text(text, ra) != "" && b.Text(text, rb) != "")) {
			t.Fatalf("%+v by %s joins %s %q and %q", p, p.Rule, text, a.Text(text, ra), b.Text(text, rb))
		}
	}
	um := Distance(all, p.A, p.B)
	switch p.Rule.String() {
	case RuleListed:
		if !same(tables.PairLabel) || a.Text(tables.PairLabel, ra) == "" {
			t.Fatalf("%+v has no common label", p)
		}
		return
	case RuleTouchingRims:
		if !(um <= 50) || a.Text(tables.Texture, ra) != "rim" {
			t.Fatalf("%+v is no pair of touching rims: %v um", p, um)
		}
	case RuleNearest:
		if !(um <= 500) {
			t.Fatalf("%+v lies %v um apart", p, um)
		}
	}
	if !same(tables.Texture) {
		t.Fatalf("%+v by %s mixes %q and %q", p, p.Rule, a.Text(tables.Texture, ra), b.Text(tables.Texture, rb))
	}
}

// The tree finds what looking at every point finds.
func TestTreeFindsTheNearest(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		axis := rapid.OneOf(rapid.Map(rapid.IntRange(-3, 3), func(i int) float64 { return float64(i) }), rapid.Float64Range(-1e5, 1e5), rapid.Float64())
		place := rapid.Custom(func(t *rapid.T) point { return point{x: axis.Draw(t, "x"), y: axis.Draw(t, "y")} })
		points := rapid.SliceOfN(place, 1, 60).Draw(t, "points")
		for i := range points {
			points[i].i = int32(i)
		}
		q := place.Draw(t, "q")
		want := found{point{i: math.MaxInt32}, math.Inf(1)}
		for _, c := range points {
			if d2 := squared(c.x-q.x, c.y-q.y); want.beats(d2, c.i) {
				want = found{c, d2}
			}
		}
		if got, um := newTree(slices.Clone(points)).nearest(q); got != want.at || um != math.Sqrt(want.d2) {
			t.Fatalf("nearest to %v of %v is %v, %v um away; the tree says %v, %v", q, points, want.at, math.Sqrt(want.d2), got, um)
		}
	})
}

// A thousand times a thousand spots on one place must not be looked at one by one.
func TestManySpotsInOnePlace(t *testing.T) {
	points := make([]point, 200_000)
	for i := range points {
		points[i].i = int32(i)
	}
	tree := newTree(points)
	start := time.Now()
	for range 200_000 {
		tree.nearest(point{})
	}
	if took := time.Since(start); took > 20*time.Second {
		t.Errorf("200,000 questions about 200,000 spots in one place took %v", took)
	}
}

// BenchmarkListed pairs analyses that all carry labels, as most sources do.
func BenchmarkListed(b *testing.B) {
	benchmark(b, func(i int) string { return fmt.Sprintf("s%d %d", i/20, i/2) })
}

// BenchmarkNearest pairs analyses by their coordinates alone.
func BenchmarkNearest(b *testing.B) {
	benchmark(b, func(i int) string { return fmt.Sprintf("s%d x=%d y=%d", i/2000, i*7919%20000, i*104729%20000) })
}

func benchmark(b *testing.B, words func(i int) string) {
	const n = 200_000
	rows := make([]string, n)
	for i := range rows {
		rows[i] = [2]string{"Opx ", "Cpx "}[i%2] + words(i)
	}
	all := build(b, rows)
	set := defaults()
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	b.ResetTimer()
	pairs := 0
	for range b.N {
		pairs = len(Pairs(all, set).Pairs)
	}
	runtime.ReadMemStats(&after)
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/analysis")
	b.ReportMetric(float64(after.TotalAlloc-before.TotalAlloc)/float64(b.N)/n, "B/analysis")
	b.ReportMetric(float64(pairs), "pairs")
}
