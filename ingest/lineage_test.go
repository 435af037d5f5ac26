package ingest

import (
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tieline/pipeline/lineage"
	"tieline/pipeline/tables"
)

func lineages(all *tables.Analyses) []lineage.Digest {
	var out []lineage.Digest
	for i := range all.Len() {
		b, row := all.At(i)
		out = append(out, b.Lineage(row))
	}
	return out
}

// changed counts the digests of before that are not in after.
func changed(before, after []lineage.Digest) int {
	left := map[lineage.Digest]int{}
	for _, d := range after {
		left[d]++
	}
	n := 0
	for _, d := range before {
		if left[d] == 0 {
			n++
		}
		left[d]--
	}
	return n
}

// ground is the table the tests below change; two rows are alike.
var ground = [][]string{
	{"Sample", "Mineral", "SiO2", "K2O", "P (kbar)", "notes"},
	{"R1", "Pl", "60.1", "0.5", "10", "x"},
	{"R1", "Kfs", "64.9", "n.a.", "10", "y"},
	{"R2", "Pl", "60.1", "<0.02", "", "z"},
	{"R2", "Pl", "60.1", "<0.02", "", "w"},
	{"R3", "Plag", "58.0", "", "9", ""},
}

func written(rows [][]string) string {
	var b strings.Builder
	for _, r := range rows {
		b.WriteString(strings.Join(r, ",") + "\n")
	}
	return b.String()
}

func copied(rows [][]string) [][]string {
	out := make([][]string, len(rows))
	for i := range rows {
		out[i] = slices.Clone(rows[i])
	}
	return out
}

func TestLineagesDiffer(t *testing.T) {
	seen := map[lineage.Digest]bool{}
	for i, d := range lineages(mustRead(t, "", written(ground))) {
		if seen[d] {
			t.Errorf("row %d has the lineage of another", i+1)
		}
		seen[d] = true
	}
}

func TestLineageKeeps(t *testing.T) {
	before := lineages(mustRead(t, "", written(ground)))
	for what, text := range map[string]string{
		"other line ends":      strings.ReplaceAll(written(ground), "\n", "\r\n"),
		"blank lines":          strings.ReplaceAll(written(ground), "\n", "\n\n,,,,,\n"),
		"spaces around":        strings.ReplaceAll(written(ground), ",", " , "),
		"quotes":               strings.ReplaceAll(written(ground), "Plag", `"Plag"`),
		"a mark":               "\ufeff" + written(ground),
		"other header texts":   strings.Replace(written(ground), "SiO2", "SIO2 (wt.%)", 1),
		"another unused cell":  strings.Replace(written(ground), ",x\n", ",other\n", 1),
		"another unused title": strings.Replace(written(ground), "notes", "remarks", 1),
	} {
		if n := changed(before, lineages(mustRead(t, "", text))); n != 0 {
			t.Errorf("%s changed the lineage of %d rows, want none", what, n)
		}
	}
	for what, keys := range map[string]string{
		"a phase no row has":     `phases = { "Perthite" = "Afs" }`,
		"a text no cell has":     `missing = ["-9999"]`,
		"passing over no row":    `pass_over = ["glass"]`,
		"ignoring the unused":    `columns = { "notes" = "ignored" }`,
		"mapping as it was":      `columns = { "SiO2" = "SiO2" }`,
		"the default written":    `decimal = "point"`,
		"the citation":           `citation = "Someone (1999)"`,
		"the phase as it was":    `phases = { "Plag" = "Pl" }`,
		"the markers as is, too": `not_analysed = ["n.a."]`,
	} {
		if n := changed(before, lineages(mustRead(t, keys, written(ground)))); n != 0 {
			t.Errorf("%s changed the lineage of %d rows, want none", what, n)
		}
	}
}

func TestLineageChanges(t *testing.T) {
	before := lineages(mustRead(t, "", written(ground)))
	for what, c := range map[string]struct {
		keys string
		want int
	}{
		"another meaning of a text":    {`below_detection = ["n.a."]` + "\n" + `not_analysed = ["nix"]`, 1},
		"another phase":                {`phases = { "Plag" = "Ab" }`, 1},
		"passing over a phase":         {`pass_over = ["Kfs"]`, 1},
		"a column less":                {`columns = { "K2O" = "ignored" }`, 5},
		"a column more":                {`columns = { "notes" = "texture" }`, 5},
		"a constant":                   {`unit = "Upper"`, 5},
		"the column to another oxide":  {`columns = { "K2O" = "Na2O" }`, 5},
		"pressure as published rather": {`columns = { "P (kbar)" = "published_p_kbar" }`, 5},
	} {
		if n := changed(before, lineages(mustRead(t, c.keys, written(ground)))); n != c.want {
			t.Errorf("%s changed the lineage of %d rows, want %d", what, n, c.want)
		}
	}
}

// Settings that touch every row are in every row's lineage.
func TestLineageOfSettings(t *testing.T) {
	apfu := "Sample,Mineral,Si\nR1,Opx,2\n"
	six := lineages(mustRead(t, "composition = \"apfu\"\noxygens = 6", apfu))
	if n := changed(six, lineages(mustRead(t, "composition = \"apfu\"\noxygens = 12", apfu))); n != 1 {
		t.Error("the oxygens of a formula left its lineage as it was")
	}
	whole := "Sample,Mineral,SiO2\nR1,Pl,60\n"
	point := lineages(mustRead(t, "", whole))
	if n := changed(point, lineages(mustRead(t, "decimal = \"comma\"", whole))); n != 1 {
		t.Error("the decimal mark left the lineage as it was")
	}
	dir := t.TempDir()
	write(t, dir+"/a.csv", whole)
	write(t, dir+"/b.csv", whole)
	all, _, _ := Read(rootOf(t, dir), manifestOf(t, `file = "a.csv"`, `file = "b.csv"`), nil)
	if d := lineages(all); d[0] == d[1] {
		t.Error("rows of two sources have one lineage")
	}
}

// Shuffling columns and rows changes no lineage; changing one cell changes
// exactly its row's.
func TestLineageProperties(t *testing.T) {
	before := lineages(mustRead(t, "", written(ground)))
	rapid.Check(t, func(rt *rapid.T) {
		rows := copied(ground)
		order := rapid.Permutation([]int{0, 1, 2, 3, 4, 5}).Draw(rt, "columns")
		shuffled := [][]string{}
		for _, i := range append([]int{0}, rapid.Permutation([]int{1, 2, 3, 4, 5}).Draw(rt, "rows")...) {
			var row []string
			for _, j := range order {
				row = append(row, rows[i][j])
			}
			shuffled = append(shuffled, row)
		}
		if n := changed(before, lineages(mustRead(t, "", written(shuffled)))); n != 0 {
			rt.Fatalf("another order changed the lineage of %d rows:\n%s", n, written(shuffled))
		}
		row := rapid.IntRange(1, 5).Draw(rt, "row")
		column := rapid.IntRange(2, 4).Draw(rt, "column")
		rows[row][column] = rapid.StringMatching(`[1-9]\.[1-9]{3}`).Draw(rt, "cell")
		if n := changed(before, lineages(mustRead(t, "", written(rows)))); n != 1 {
			rt.Fatalf("one cell changed the lineage of %d rows, want 1:\n%s", n, written(rows))
		}
	})
}

// The frozen form: a change of it makes every archived lineage a stranger's.
func TestLineageFrozen(t *testing.T) {
	want := []string{
		"d8ad66ed136462beedcf160198560b15", "19590b6b9243fcc9d6332ea8ec946313", "ed7141b100c0e7dc58c59adc781c45cd",
		"1adda69fab94c2da5326412b5ff70668", "a830b01948ca95143a6f46a28d40ed2b",
	}
	var got []string
	for _, d := range lineages(mustRead(t, "unit = \"Upper\"", written(ground))) {
		got = append(got, d.String())
	}
	same(t, "lineage", got, want)
}
