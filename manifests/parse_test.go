package manifests

import (
	"bytes"
	"fmt"
	"strings"
	"testing"
	"time"

	"github.com/pelletier/go-toml/v2"

	"tieline/pipeline/problem"
	"tieline/thermo/chem"
)

// whole gives every key once.
const whole = `# a comment
[compilation]
id = "whole"
title = "Whole"
contributors = ["A. Person", "B. Person"]
licence = "CC0-1.0"
date = 2026-11-30

[[source]]
id = "one"
file = "data/one.csv"
citation = "Nobody (2026)"
separator = "semicolon"
decimal = "comma"
encoding = "windows-1252"
composition = "apfu"
oxygens = 6
phase = "Cpx"
sample = "S1"
texture = "core"
locality = "L"
unit = "U"
analysis_kind = "spot"
generation = "1"
published_kind = "estimate"
published_method = "by eye"
not_analysed = ["-"]
below_detection = ["bd"]
missing = ["", "-999"]
pass_over = ["glass"]
columns = { "Run no." = "sample", "Ca" = "Ca apfu", "sCa" = "Ca apfu sigma", "remarks" = "ignored" }
[source.phases]
"K-spar" = "Afs"

[[source]]
id = "two"
file = "two.tsv"

[normalisation]
fe3 = "charge balance"
end_member_tolerance = 0.003

[qc]
totals_kept_wt = [98.5, 101.5]
totals_flagged_wt = [97, 102.5]
feldspar_sum_kept = 0.02
feldspar_sum_flagged = 0.05
pyroxene_sum_kept = [3.98, 4.04]
pyroxene_sum_flagged = [3.96, 4.06]
celsian_flagged = 0.01
celsian_set_aside = 0.05

[pairing]
rules = ["listed"]
nearest_um = 400
touching_um = 40

[pressure]
default_kbar = 8
default_sigma_kbar = 2

[methods]
use = ["two-feldspar/elkins-grove-1990"]

[uncertainty]
seed = 7
oxide_sigma_relative = 0.007
oxide_sigma_counting_wt = 0.0009
oxide_sigma_floor_wt2 = 0.0002

[groups]
by = ["unit"]

[reintegration]
volumes = "low"
`

func parsed(t *testing.T, text string) *Manifest {
	t.Helper()
	m, problems := Parse("m.toml", []byte(text))
	if problems != nil {
		t.Fatal(problems)
	}
	return m
}

func TestParseReadsEveryKey(t *testing.T) {
	m := parsed(t, whole)
	s := m.Sources[0]
	for _, c := range []struct{ what, got, want string }{
		{"contributors", strings.Join(m.Compilation.Contributors, "; "), "A. Person; B. Person"},
		{"date", m.Compilation.Date.String(), "2026-11-30"},
		{"column of Run no.", s.Columns["Run no."].String(), "sample"},
		{"column of sCa", s.Columns["sCa"].String(), "Ca apfu sigma"},
		{"phase of K-spar", string(s.Phases["K-spar"]), "Afs"},
		{"separator of two.tsv", string(m.Sources[1].Comma()), "\t"},
		{"kind", s.Kind().String(), "apfu"},
		{"kind by default", m.Sources[1].Kind().String(), "oxide wt%"},
		{"limits", fmt.Sprint(m.QC.TotalsKeptWt, *m.Pressure.DefaultKbar, m.Uncertainty.Seed), "[98.5 101.5] 8 7"},
	} {
		if c.got != c.want {
			t.Errorf("%s: got %q, want %q", c.what, c.got, c.want)
		}
	}
	// Every key of the struct is in the text, so that a key the reader cannot
	// read shows here.
	for path, want := range map[string]int{"source[0].file": 11, "methods.use[0]": 63, `source[0].columns."Ca"`: 31, "compilation": 2} {
		if line, _ := m.At(path); line != want {
			t.Errorf("%s stands on line %d by At, want %d", path, line, want)
		}
	}
}

// smallest is the least a manifest may say.
const smallest = `[compilation]
id = "least"
title = "Least"
[[source]]
id = "a"
file = "a.csv"
`

func TestDefaults(t *testing.T) {
	const want = `{"compilation":{"id":"least","title":"Least"},"source":[{"id":"a","file":"a.csv","separator":"comma","decimal":"point","encoding":"utf-8","composition":"oxide wt%",` +
		`"not_analysed":["n.a.","na","n/a"],"below_detection":["b.d.l.","bdl","b.d.","bd","<dl"],"missing":[""]}],` +
		`"normalisation":{"fe3":"as measured","end_member_tolerance":0.002},` +
		`"qc":{"totals_kept_wt":[98,102],"totals_flagged_wt":[97,102.5],"feldspar_sum_kept":0.02,"feldspar_sum_flagged":0.05,"pyroxene_sum_kept":[3.98,4.04],"pyroxene_sum_flagged":[3.96,4.06],"celsian_flagged":0.01,"celsian_set_aside":0.05,` +
		`"feldspar_t_site_kept":0.02,"feldspar_t_site_flagged":0.05,"feldspar_a_site_kept":0.02,"feldspar_a_site_flagged":0.05,"coupled_exchange_flagged":0.02,` +
		`"feldspar_feo_flagged_wt":1,"feldspar_mgo_flagged_wt":0.1,"charge_flagged":0.05,"opx_ca_flagged":0.2,"cpx_ca_flagged":0.4,"pl_or_flagged":0.5,"afs_an_flagged":0.5,` +
		`"pyroxene_t_site_flagged":0.02,"reported_total_flagged_wt":0.3,"reported_end_member_flagged":0.01,"column_rows":10,` +
		`"kd_igneous":[0.95,1.23],"kd_subsolidus":[0.5,0.9],"concordance_c":90,"reset_sigma":2,"pl_an_flagged":0.65,"critical_distance_flagged":0.1},` +
		`"pairing":{"rules":["listed","touching rims","nearest"],"nearest_um":500,"touching_um":50},"reintegration":{"volumes":"high"},"pressure":{"default_sigma_kbar":1.5},"methods":{},` +
		`"uncertainty":{"seed":1,"oxide_sigma_relative":0.007,"oxide_sigma_counting_wt":0.0009,"oxide_sigma_floor_wt2":0.0002},"groups":{}}`
	if got := string(parsed(t, smallest).Canonical()); got != want {
		t.Errorf("canonical form of the smallest manifest:\n got %s\nwant %s", got, want)
	}
}

func TestWhatIsLeftOutKeepsItsDefault(t *testing.T) {
	for _, text := range []string{
		smallest + "[qc]\ncelsian_flagged = 0.02\n",
		"qc = { celsian_flagged = 0.02 }\n" + smallest,
		"qc.celsian_flagged = 0.02\n" + smallest,
	} {
		m := parsed(t, text)
		if m.QC.CelsianFlagged != 0.02 || m.QC.CelsianSetAside != 0.05 || m.QC.TotalsKeptWt != [2]float64{98, 102} {
			t.Errorf("%q gives %+v", text, m.QC)
		}
	}
	m := parsed(t, smallest+"missing = []\nbelow_detection = []\n[uncertainty]\nseed = 0\noxide_sigma_floor_wt2 = 0\n")
	if s := m.Sources[0]; len(s.Missing) != 0 || len(s.BelowDetection) != 0 || len(s.NotAnalysed) != 3 {
		t.Errorf("an empty list was not kept: %+v", s)
	}
	if m.Uncertainty.Seed != 0 || m.Uncertainty.OxideSigmaFloorWt2 != 0 || m.Uncertainty.OxideSigmaRelative != 0.007 {
		t.Errorf("a zero that was given was not kept: %+v", m.Uncertainty)
	}
}

func TestSeparatorFollowsTheFile(t *testing.T) {
	for file, want := range map[string]string{"a.csv": "comma", "a.TSV": "tab", "d/a.tab": "tab", "a.txt": "comma"} {
		m := parsed(t, strings.Replace(smallest, "a.csv", file, 1))
		if got := m.Sources[0].Separator; got != want {
			t.Errorf("%s: separator %s, want %s", file, got, want)
		}
	}
}

func TestByteOrderMarkAndLineEnds(t *testing.T) {
	want := string(parsed(t, whole).Canonical())
	for what, text := range map[string]string{
		"UTF-8 byte order mark": "\ufeff" + whole,
		"CRLF":                  strings.ReplaceAll(whole, "\n", "\r\n"),
	} {
		if got := string(parsed(t, text).Canonical()); got != want {
			t.Errorf("%s: canonical form differs: %s", what, got)
		}
	}
}

// Each case changes the text of whole, or adds to smallest, and says where the
// problem must be placed and what the message must hold.
func TestProblems(t *testing.T) {
	for _, c := range []struct {
		what, old, new string
		place          string
		holds          []string
	}{
		{"unknown key", `licence = "CC0-1.0"`, `license = "CC0-1.0"`, "m.toml:6:1 (compilation.license)", []string{`unknown key "license"`, `did you mean "licence"?`}},
		{"unknown key, nothing near", `rules = ["listed"]`, `zzzzzzzzzz = 1`, "m.toml:54:1", []string{"the keys here are rules, nearest_um or touching_um"}},
		{"rule of pairing not on the list", `rules = ["listed"]`, `rules = ["neares"]`, "m.toml:54:10", []string{`did you mean "nearest"?`}},
		{"rule of pairing twice", `rules = ["listed"]`, `rules = ["listed", "listed"]`, "m.toml:54:20", []string{"leave one out"}},
		{"touching farther than nearest", `touching_um = 40`, `touching_um = 401`, "m.toml:56:15", []string{"pairing.touching_um = 401 with pairing.nearest_um = 400"}},
		{"volumes not on the list", `volumes = "low"`, `volumes = "lower"`, "m.toml:75:11", []string{`did you mean "low"?`}},
		{"unknown table", `[pressure]`, `[presure]`, "m.toml:58:2", []string{`did you mean "pressure"?`}},
		{"wrong type", `title = "Whole"`, `title = 7`, "m.toml:4:9", []string{"7; expected text in quotes", "put it in quotes"}},
		{"number in quotes", `default_kbar = 8`, `default_kbar = "8"`, "m.toml:59:16", []string{`the text "8"; expected a number`, "without quotes"}},
		{"text for a list", `by = ["unit"]`, `by = "unit"`, "m.toml:72:6", []string{"expected a list", `write ["unit"]`}},
		{"nan", `celsian_flagged = 0.01`, `celsian_flagged = nan`, "m.toml:50:19", []string{"nan; expected a finite number"}},
		{"inf", `celsian_flagged = 0.01`, `celsian_flagged = -inf`, "m.toml:50:19", []string{"-inf; expected a finite number"}},
		{"too large to hold", `default_kbar = 8`, `default_kbar = 1e999`, "m.toml:59:16", []string{"1e999; expected a finite number"}},
		{"date with a time", `date = 2026-11-30`, `date = 2026-11-30T12:00:00`, "m.toml:7:8", []string{"expected a date such as 2026-11-30", "leave out the time"}},
		{"date with an offset", `date = 2026-11-30`, `date = 2026-11-30T12:00:00+01:00`, "m.toml:7:8", []string{"leave out the time"}},
		{"date in quotes", `date = 2026-11-30`, `date = "2026-11-30"`, "m.toml:7:8", []string{"without quotes"}},
		{"no day of the calendar", `date = 2026-11-30`, `date = 2026-11-31`, "m.toml:7:8", []string{"2026-11-31; expected a day of the calendar"}},
		{"negative seed", `seed = 7`, `seed = -7`, "m.toml:66:8", []string{"expected a whole number from 0"}},
		{"fraction for a whole number", `seed = 7`, `seed = 7.5`, "m.toml:66:8", []string{"7.5; expected a whole number"}},
		{"three limits", `[98.5, 101.5]`, `[98, 101, 102]`, "m.toml:44:1", []string{"a list of 3; expected a list of 2 numbers"}},
		{"limits the wrong way round", `[98.5, 101.5]`, `[101.5, 98.5]`, "m.toml:44:1", []string{"write [98.5, 101.5]"}},
		{"kept wider than flagged", `[98.5, 101.5]`, `[96, 101.5]`, "m.toml:44:1", []string{"qc.totals_kept_wt = [96, 101.5] with qc.totals_flagged_wt = [97, 102.5]"}},
		{"kept wider than flagged, single", `celsian_flagged = 0.01`, `celsian_flagged = 0.1`, "m.toml:50:19", []string{"qc.celsian_flagged = 0.1 with qc.celsian_set_aside = 0.05"}},
		{"key twice", `seed = 7`, "seed = 7\nseed = 8", "m.toml:67:1", []string{"a second time", "on line 66"}},
		{"table twice", "[groups]", "[qc]\n[groups]", "m.toml:71:2", []string{"a second [qc]", "on line 43"}},
		{"single brackets", "[[source]]\nid = \"two\"", "[source]\nid = \"two\"", "m.toml:35:2", []string{"[source]; expected [[source]]"}},
		{"double brackets", "[qc]", "[[qc]]", "m.toml:43:3", []string{"[[qc]]; expected [qc]"}},
		{"missing key", "title = \"Whole\"\n", "", "m.toml:2:2 (compilation.title)", []string{"the key is missing", `write title = "..."`}},
		{"missing key of a source", "file = \"two.tsv\"\n", "", "m.toml:35:3 (source[1].file)", []string{"the key is missing"}},
		{"id", `id = "two"`, `id = "Two 2026"`, "m.toml:36:6", []string{"lower case letters", `such as "two-2026"`}},
		{"id twice", `id = "two"`, `id = "one"`, "m.toml:36:6", []string{`"one", which stands on line 10 already`}},
		{"file twice", `file = "two.tsv"`, `file = "data/one.csv"`, "m.toml:37:8", []string{"counted twice"}},
		{"file outside", `file = "two.tsv"`, `file = "../two.tsv"`, "m.toml:37:8", []string{"nothing outside it is read"}},
		{"file outside in the end", `file = "two.tsv"`, `file = "a/../../two.tsv"`, "m.toml:37:8", []string{"nothing outside it is read"}},
		{"absolute file", `file = "two.tsv"`, `file = "/data/two.tsv"`, "m.toml:37:8", []string{"write its name only"}},
		{"file on a drive", `file = "two.tsv"`, `file = "C:/two.tsv"`, "m.toml:37:8", []string{"write its name only"}},
		{"backslash", `file = "two.tsv"`, `file = 'data\two.tsv'`, "m.toml:37:8", []string{"write / between folders"}},
		{"roundabout file", `file = "two.tsv"`, `file = "./two.tsv"`, "m.toml:37:8", []string{`write "two.tsv"`}},
		{"unknown quantity", `"Ca apfu",`, `"Ca apuf",`, "m.toml:31:42", []string{`did you mean "Ca apfu"?`}},
		{"quantity of another kind", `"Ca apfu",`, `"CaO",`, "m.toml:31:42", []string{`"CaO", oxide wt%; expected a quantity of composition = "apfu"`}},
		{"unknown phase", `phase = "Cpx"`, `phase = "cpx"`, "m.toml:18:9", []string{`did you mean "Cpx"?`}},
		{"word for a phase", `phase = "Cpx"`, `phase = "Plag"`, "m.toml:18:9", []string{"see the phases listed in compilation.schema.json"}},
		{"unknown phase of the map", `"K-spar" = "Afs"`, `"K-spar" = "Kspar"`, "m.toml:33:12", []string{"expected an IMA symbol"}},
		{"word not on the list", `separator = "semicolon"`, `separator = ";"`, "m.toml:13:13", []string{`";"; expected "comma", "tab" or "semicolon"`}},
		{"empty word", `decimal = "comma"`, `decimal = ""`, "m.toml:14:11", []string{`expected "point" or "comma"`}},
		{"published kind", `"estimate"`, `"guess"`, "m.toml:25:18", []string{`expected "experiment", "thermometer" or "estimate"`}},
		{"apfu without oxygens", "oxygens = 6\n", "", "m.toml:9:3 (source[0].oxygens)", []string{"such as oxygens = 6"}},
		{"oxygens without apfu", `composition = "apfu"`, `composition = "oxide wt%"`, "m.toml:17:11", nil},
		{"cell text of two meanings", `missing = ["", "-999"]`, `missing = ["", "BD"]`, "m.toml:29:16", []string{`"BD" in below_detection and in missing`}},
		{"cell text of two meanings but for what nobody sees", `missing = ["", "-999"]`, `missing = ["", "\u200bBD\u00a0"]`, "m.toml:29:16", []string{"in below_detection and in missing"}},
		{"text for not analysed that nobody sees", `not_analysed = ["-"]`, `not_analysed = ["\u200b"]`, "m.toml:27:1", []string{"an empty cell always counts as missing"}},
		{"title of blanks", `title = "Whole"`, `title = "  "`, "m.toml:4:9 (compilation.title)", []string{`"  ", blanks only; expected some text`}},
		{"sample of blanks", `sample = "S1"`, `sample = "\u200b"`, "m.toml:19:10 (source[0].sample)", []string{"blanks only; expected some text; write the text or leave the key out"}},
		{"unit of blanks", `unit = "U"`, `unit = "\u00a0"`, "m.toml:22:8 (source[0].unit)", []string{"blanks only"}},
		{"empty text for not analysed", `not_analysed = ["-"]`, `not_analysed = [" "]`, "m.toml:27:1", []string{"an empty cell always counts as missing"}},
		{"sigma below the least", `default_sigma_kbar = 2`, `default_sigma_kbar = 1`, "m.toml:60:22", []string{"1; expected a number from 1.5"}},
		{"group not on the list", `by = ["unit"]`, `by = ["units"]`, "m.toml:72:7", []string{`did you mean "unit"?`}},
		{"method twice", `use = ["two-feldspar/elkins-grove-1990"]`, `use = ["a", "a"]`, "m.toml:63:13", nil},
		{"control characters in a text", `separator = "semicolon"`, `separator = "\u202e\u001b"`, "m.toml:13:13", []string{`\u{202e}\u{1b}`}},
		{"no TOML", `rules = ["listed"]`, `rules = listed`, "m.toml:54:9", []string{"this is no TOML"}},
		{"no TOML beyond a character of two bytes", `locality = "L"`, `locality = "Ä" x`, "m.toml:21:16", []string{"this is no TOML"}},
		{"no TOML across tables", "[groups]", "[compilation.date]\n[groups]", "m.toml:71:2", []string{"expected a date"}},
	} {
		t.Run(c.what, func(t *testing.T) {
			if strings.Count(whole, c.old) != 1 {
				t.Fatalf("%q is in the text %d times", c.old, strings.Count(whole, c.old))
			}
			_, problems := Parse("m.toml", []byte(strings.Replace(whole, c.old, c.new, 1)))
			if problems == nil {
				t.Fatal("accepted")
			}
			lines := problems.Lines()
			for _, want := range append(c.holds, c.place) {
				if !strings.Contains(lines[0], want) {
					t.Errorf("%q is not in the message:\n%s", want, problems)
				}
			}
		})
	}
}

func TestAllProblemsAtOnce(t *testing.T) {
	_, problems := Parse("m.toml", []byte(`[compilation]
id = "A B"
titel = "T"
date = "2026-11-30"
[[source]]
id = "a"
file = "/etc/passwd"
separator = "pipe"
columns = { "x" = "CaOO", "y" = 7 }
[[source]]
id = "a"
phase = "Plag"
[qc]
totals_kept_wt = [nan, 102]
feldspar_sum_kept = true
[pressure]
default_sigma_kbar = 0.1
[unknown]
anything = 1
`))
	want := []string{
		"m.toml:1:2 (compilation.title): the key is missing",
		"m.toml:2:6 (compilation.id)", "m.toml:3:1 (compilation.titel)", "m.toml:4:8 (compilation.date)",
		"m.toml:7:8 (source[0].file)", "m.toml:8:13 (source[0].separator)",
		`m.toml:9:19 (source[0].columns."x")`, `m.toml:9:33 (source[0].columns."y")`,
		"m.toml:10:3 (source[1].file): the key is missing", "m.toml:11:6 (source[1].id)", "m.toml:12:9 (source[1].phase)",
		"m.toml:14:19 (qc.totals_kept_wt[0])", "m.toml:15:21 (qc.feldspar_sum_kept)",
		"m.toml:17:22 (pressure.default_sigma_kbar)", "m.toml:18:2 (unknown)",
	}
	lines := problems.Lines()
	for i := range max(len(want), len(lines)) {
		got, expected := "", ""
		if i < len(lines) {
			got = lines[i]
		}
		if i < len(want) {
			expected = want[i]
		}
		if expected == "" || !strings.HasPrefix(got, expected) {
			t.Errorf("problem %d:\n got %s\nwant %s", i, got, expected)
		}
	}
}

func TestNothingInTheManifest(t *testing.T) {
	for what, text := range map[string]string{"empty": "", "comment only": "# nothing\n"} {
		_, problems := Parse("m.toml", []byte(text))
		if problems == nil {
			t.Fatalf("%s: accepted", what)
		}
		got := strings.Join(problems.Lines(), "\n")
		for _, want := range []string{"(compilation): the key is missing; write [compilation]", "(source): the key is missing; write [[source]]"} {
			if !strings.Contains(got, want) {
				t.Errorf("%s: %q is not in:\n%s", what, want, got)
			}
		}
	}
}

func TestTooLarge(t *testing.T) {
	text := smallest + strings.Repeat("#\n", MaxBytes/2)
	if _, problems := Parse("m.toml", []byte(text)); problems == nil || !strings.Contains(problems.Error(), "1048576 bytes") {
		t.Errorf("%d bytes: %v", len(text), problems)
	}
	just := smallest + strings.Repeat("#", MaxBytes-len(smallest))
	if _, problems := Parse("m.toml", []byte(just)); problems != nil {
		t.Errorf("%d bytes, the most allowed: %v", len(just), problems)
	}
}

// A list of one line as long as a manifest may be must not cost its square.
func TestLongLine(t *testing.T) {
	text := smallest + "[methods]\nuse = [" + strings.Repeat("7,", MaxBytes/2-100) + "]\n"
	start := time.Now()
	_, problems := Parse("m.toml", []byte(text))
	if took := time.Since(start); took > 20*time.Second {
		t.Errorf("took %v", took)
	}
	if problems == nil || problems.Len() != MaxBytes/2-100 || len(problems.Lines()) != problem.PerKind+1 {
		t.Fatalf("want every value counted and %d listed", problem.PerKind)
	}
	if got := problems.Sorted()[10]; got.Line != 8 || got.Column != 8+2*10 {
		t.Errorf("value 10 stands at %d:%d, want 8:28", got.Line, got.Column)
	}
}

func TestUTF16IsNamed(t *testing.T) {
	if _, problems := Parse("m.toml", []byte("\xff\xfe[\x00")); problems == nil || !strings.Contains(problems.Error(), "save the manifest as UTF-8") {
		t.Errorf("UTF-16 text: %v", problems)
	}
}

func TestFromCanonical(t *testing.T) {
	for _, text := range []string{whole, smallest} {
		want := parsed(t, text).Canonical()
		m, err := FromCanonical(want)
		if err != nil {
			t.Fatal(err)
		}
		if got := m.Canonical(); !bytes.Equal(got, want) {
			t.Errorf("canonical form came back as\n%s\nfrom\n%s", got, want)
		}
	}
	good := string(parsed(t, smallest).Canonical())
	for what, change := range map[string][2]string{
		"not JSON":                {"{", "["},
		"space":                   {":", ": "},
		"unknown key":             {`"methods":{}`, `"methods":{},"x":1`},
		"key in other case":       {`"pairing"`, `"Pairing"`},
		"key twice":               {`"methods":{}`, `"methods":{},"methods":{}`},
		"three limits":            {`[98,102]`, `[98,102,103]`},
		"one limit":               {`[98,102]`, `[98]`},
		"limit out of order":      {`[98,102]`, `[102,98]`},
		"separator left out":      {`"separator":"comma",`, ``},
		"no such rule":            {`"rules":["listed",`, `"rules":["listing",`},
		"volumes left out":        {`"volumes":"high"`, ``},
		"sigma too small":         {`"default_sigma_kbar":1.5`, `"default_sigma_kbar":0`},
		"file outside":            {`"a.csv"`, `"../a.csv"`},
		"no source":               {`"source":[{`, `"source":[],"sourc":[{`},
		"something after it":      {`"groups":{}}`, `"groups":{}}{}`},
		"id emptied":              {`"id":"least"`, `"id":""`},
		"a digit of no precision": {`0.002`, `0.00200`},
	} {
		text := strings.Replace(good, change[0], change[1], 1)
		if text == good {
			t.Fatalf("%s: nothing changed", what)
		}
		if _, err := FromCanonical([]byte(text)); err == nil {
			t.Errorf("%s: accepted %s", what, text)
		}
	}
}

func TestNearest(t *testing.T) {
	options := []string{"separator", "sample", "decimal"}
	for text, want := range map[string]string{"seperator": "separator", "SEPARATOR": "separator", "samples": "sample", "xyz": "", "": "", strings.Repeat("sample", 20): ""} {
		if got := Nearest(text, options); got != want {
			t.Errorf("Nearest(%q) = %q, want %q", text, got, want)
		}
	}
	for _, c := range []struct {
		a, b string
		want int
	}{{"kitten", "sitting", 3}, {"", "abc", 3}, {"flaw", "lawn", 2}, {"µm", "um", 1}} {
		if got := distance(c.a, c.b); got != c.want {
			t.Errorf("distance(%q, %q) = %d, want %d", c.a, c.b, got, c.want)
		}
	}
}

func TestQuantities(t *testing.T) {
	seen := map[string]Quantity{}
	for _, q := range Quantities() {
		name := q.String()
		if before, ok := seen[name]; ok || name == "" {
			t.Errorf("quantities %d and %d are both called %q", before, q, name)
		}
		seen[name] = q
		if got, err := ParseQuantity(name); err != nil || got != q {
			t.Errorf("ParseQuantity(%q) = %v, %v; want %v", name, got, err, q)
		}
	}
	if n, want := len(seen), 32+2*int(chem.NumMeasurands); n != want {
		t.Errorf("%d quantities, want %d", n, want)
	}
	for name, want := range map[string]struct {
		m     chem.Measurand
		sigma bool
	}{"SiO2": {chem.MeasurandOf(chem.SiO2), false}, "FeO total sigma": {chem.FeOT, true}, "An": {chem.XAn, false}, "Fe3 apfu": {chem.MeasurandOfCation(chem.Fe3), false}} {
		q, err := ParseQuantity(name)
		if err != nil {
			t.Fatal(err)
		}
		if m, sigma, ok := q.Measurand(); !ok || m != want.m || sigma != want.sigma {
			t.Errorf("%s is the measurand %v, sigma %v, %v", name, m, sigma, ok)
		}
	}
	if _, _, ok := Sample.Measurand(); ok {
		t.Error("a sample is taken for a part of the composition")
	}
}

// FuzzParse: nothing panics, what is accepted survives the record, and it is
// what go-toml's own decoder makes of the text.
func FuzzParse(f *testing.F) {
	f.Add([]byte(whole))
	f.Add([]byte(smallest))
	f.Add([]byte("source = [{id = 'a', file = 'b'}]\ncompilation.id = 'x'\ncompilation.title = '''\ny'''\n"))
	f.Add([]byte("[compilation]\ndate = 2026-11-30 10:00:00Z\n[[source.columns]]\n[source]\n[a.b]\nqc = {}\n"))
	f.Add([]byte("[pressure]\ndefault_kbar = 0x1F\ndefault_sigma_kbar = +1_0.5e-0_1\n"))
	f.Fuzz(func(t *testing.T, text []byte) {
		m, problems := Parse("m.toml", text)
		if problems != nil {
			if m != nil || len(problems.Lines()) == 0 {
				t.Fatalf("refused without a word, or with a manifest: %v", m)
			}
			return
		}
		canonical := m.Canonical()
		again, err := FromCanonical(canonical)
		if err != nil {
			t.Fatalf("the record's manifest is refused: %v\n%s", err, canonical)
		}
		if got := again.Canonical(); !bytes.Equal(got, canonical) {
			t.Fatalf("the record changed\n%s\nto\n%s", canonical, got)
		}
		theirs := defaults()
		d := toml.NewDecoder(bytes.NewReader(bytes.TrimPrefix(text, []byte("\ufeff"))))
		if err := d.DisallowUnknownFields().Decode(theirs); err != nil {
			t.Fatalf("go-toml refuses what Parse accepts: %v", err)
		}
		for i := range theirs.Sources {
			theirs.Sources[i].fill()
		}
		if got := theirs.Canonical(); !bytes.Equal(got, canonical) {
			t.Fatalf("go-toml reads\n%s\nand Parse\n%s", got, canonical)
		}
	})
}

func TestRulesAcrossTables(t *testing.T) {
	for what, text := range map[string]string{
		"dotted key, then its table": "qc.celsian_flagged = 0.02\n" + smallest + "[qc]\ncelsian_set_aside = 0.06\n",
		"inline table, then more":    "pressure = { default_kbar = 8 }\n" + smallest + "[pressure]\n",
	} {
		_, problems := Parse("m.toml", []byte(text))
		if problems == nil || !strings.HasPrefix(problems.Error(), "m.toml:8:2") {
			t.Errorf("%s: %v; want a problem at 8:2", what, problems)
		}
	}
}
