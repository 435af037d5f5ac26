package ingest

import (
	"crypto/sha256"
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"testing"

	"tieline/manifests"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// One table written in many ways reads as the same analyses.
func TestOneTableManyWays(t *testing.T) {
	want := []string{
		"s1/a phase=Pl label=a sample=Rück-1 phase_text=Plag published_t_c=650 SiO2=60.1 Na2O=7.1",
		"s1/b phase=Kfs label=b sample=Ås 2 phase_text=K-feldspar SiO2=64.9 Na2O<0.02",
	}
	for _, c := range []struct {
		file, keys, encoding string
		blank                int
	}{
		{"utf-8.csv", "", "utf-8", 0}, {"utf-8-mark.csv", "", "utf-8", 0}, {"utf-16le.csv", "", "utf-16le", 0}, {"utf-16be.csv", "", "utf-16be", 0},
		{"utf-16le-no-mark.csv", `encoding = "utf-16le"`, "utf-16le", 0}, {"utf-16le.csv", `encoding = "utf-16le"`, "utf-16le", 0},
		{"windows-1252.csv", `encoding = "windows-1252"`, "windows-1252", 0}, {"iso-8859-15.csv", `encoding = "iso-8859-15"`, "iso-8859-15", 0},
		{"macintosh.csv", `encoding = "macintosh"`, "macintosh", 0},
		{"cr.csv", "", "utf-8", 0}, {"crlf.csv", "", "utf-8", 0}, {"no-end.csv", "", "utf-8", 0}, {"cr-no-end.csv", "", "utf-8", 0},
		{"blank-lines.csv", "", "utf-8", 5}, {"tabs.tsv", "", "utf-8", 0},
		{"semicolons.csv", "separator = \"semicolon\"\ndecimal = \"comma\"", "utf-8", 0},
		{"quoted.csv", "", "utf-8", 0}, {"quoted-lines.csv", "", "utf-8", 0}, {"spaces.csv", "", "utf-8", 0}, {"trailing-columns.csv", "", "utf-8", 0},
	} {
		t.Run(c.file, func(t *testing.T) {
			all, sources, problems := Read(rootOf(t, "testdata/good"), manifestOf(t, "file = \""+c.file+"\"\n"+c.keys), nil)
			if problems.Len() > 0 {
				t.Fatalf("problems where there are none:\n%v", problems)
			}
			same(t, c.file, dump(all), want)
			if s := sources[0]; s.Encoding != c.encoding || s.BlankLines != c.blank || s.Rows != 2 {
				t.Errorf("encoding %s, %d blank lines, %d rows; want %s, %d, 2", s.Encoding, s.BlankLines, s.Rows, c.encoding, c.blank)
			}
		})
	}
}

func TestLinesOfRows(t *testing.T) {
	all := mustRead(t, "", "Sample,Mineral,\"SiO2\n(wt%)\"\n\nR1,Pl,60\n\n\"R\n2\",Pl,61\nR3,Pl,62")
	for i, want := range []int{4, 6, 8} {
		if b, row := all.At(i); b.Line(row) != want {
			t.Errorf("analysis %d begins at line %d, want %d", i, b.Line(row), want)
		}
	}
}

func TestValues(t *testing.T) {
	all := mustRead(t, "missing = [\"-9999\"]\nnot_analysed = [\"N.A.\", \"-\"]\nbelow_detection = [\"b.d.l.\"]",
		"Sample,Mineral,SiO2,TiO2,Al2O3,FeO*,MnO,MgO,CaO,Na2O,K2O,SiO2 sigma,Total\n"+
			"R1,Opx,52.1,-0.01,n.a.,B.D.L.,-,-9999,,< 0.02,0.00,0.3,99.9\n"+
			"R1,Opx,\u22120.5,+1,1e1,.5,5.,\u00a07\u00a0,8,9,10,n.a.,-\n")
	same(t, "values", dump(all), []string{
		"s1/R1:Opx phase=Opx sample=R1 phase_text=Opx reported_total_wt=99.9 SiO2=52.1 SiO2 sigma=0.3 TiO2=-0.01 Al2O3 not analysed MnO not analysed Na2O<0.02 K2O=0 FeO total<0",
		"s1/R1:Opx#2 phase=Opx sample=R1 phase_text=Opx SiO2=-0.5 TiO2=1 Al2O3=10 MnO=5 MgO=7 CaO=8 Na2O=9 K2O=10 FeO total=0.5",
	})
}

func TestUnits(t *testing.T) {
	for _, c := range []struct {
		header, cell string
		number       tables.Number
		want         float64
	}{
		{"T (K)", "1000", tables.PublishedC, 726.85}, {"T (C)", "726.85", tables.PublishedC, 726.85}, {"P (GPa)", "1.5", tables.PKbar, 15},
		{"P (MPa)", "150", tables.PKbar, 1.5}, {"P (bar)", "1000", tables.PKbar, 1}, {"P (kbar)", "10", tables.PKbar, 10}, {"x (um)", "-12.5", tables.SpotXUm, -12.5},
		{"n", "12", tables.NSpots, 12}, {"area_fraction", "0.45", tables.AreaFraction, 0.45}, {"area_fraction", "1", tables.AreaFraction, 1}, {"area_fraction", "0", tables.AreaFraction, 0}, {"p_sigma_kbar", "0.5", tables.PSigmaKbar, 0.5}, {"published_p_kbar", "9", tables.PublishedPKbar, 9},
	} {
		all := mustRead(t, "", "Sample,Mineral,SiO2,"+c.header+"\nR1,Pl,60,"+c.cell+"\nR2,Pl,60,n.a.\n")
		b, _ := all.At(0)
		if got, ok := b.Number(c.number, 0); !ok || math.Abs(got-c.want) > 1e-12*math.Abs(c.want) {
			t.Errorf("%s %s is %s %v, want %v", c.header, c.cell, c.number, got, c.want)
		}
		if got, ok := b.Number(c.number, 1); ok {
			t.Errorf("%s n.a. is %s %v, want none", c.header, c.number, got)
		}
	}
}

func TestKinds(t *testing.T) {
	same(t, "apfu", dump(mustRead(t, "composition = \"apfu\"\noxygens = 6\nphase = \"Opx\"\nsample = \"R1\"", "Si,Al,Fe3+,Fe2+,Fe*,P,P (kbar)\n1.9,0.1,0.05,,0.3,0,12\n")),
		[]string{"s1/R1:Opx phase=Opx sample=R1 phase_text=Opx p_kbar=12 Si apfu=1.9 Al apfu=0.1 Fe3 apfu=0.05 P apfu=0 Fe apfu=0.3"})
	same(t, "iron", dump(mustRead(t, "phase = \"Cpx\"\nsample = \"R1\"", "SiO2,FeO,Fe2O3,FeO*,Fe2O3t\n50,5,2,6.8,7.56\n")),
		[]string{"s1/R1:Cpx phase=Cpx sample=R1 phase_text=Cpx SiO2=50 Fe2O3=2 FeO=5 FeO total=6.8 Fe2O3 total=7.56"})
}

func TestEndMembersRenormalised(t *testing.T) {
	all := mustRead(t, "composition = \"end-member fraction\"\nphase = \"Pl\"", "Sample,XAb,XOr,XAn,XCn,Ab sigma\n"+
		"whole,0.25,0.25,0.5,,0.1\nhalf,0.125,0.125,0.25,,0.1\ncelsian,0.25,0.125,0.5,0.125,\nlimit,0.25,<0.25,0.25,,\npart,0.25,,0.25,,\nnone,0,0,0,,\nnot,0.25,n.a.,0.25,,\nover,-1,0.5,0.25,,\n")
	same(t, "end members", dump(all), []string{
		"s1/whole:Pl phase=Pl sample=whole phase_text=Pl Ab=0.25 Ab sigma=0.1 Or=0.25 An=0.5 sum=1",
		"s1/half:Pl phase=Pl sample=half phase_text=Pl Ab=0.25 Ab sigma=0.2 Or=0.25 An=0.5 sum=0.5",
		"s1/celsian:Pl phase=Pl sample=celsian phase_text=Pl Ab=0.25 Or=0.125 An=0.5 Cn=0.125 sum=1",
		"s1/limit:Pl phase=Pl sample=limit phase_text=Pl Ab=0.5 Or<0.5 An=0.5 sum=0.5",
		"s1/part:Pl phase=Pl sample=part phase_text=Pl Ab=0.25 An=0.25 sum=0.5",
		"s1/none:Pl phase=Pl sample=none phase_text=Pl Ab=0 Or=0 An=0",
		"s1/not:Pl phase=Pl sample=not phase_text=Pl Ab=0.25 Or not analysed An=0.25 sum=0.5",
		"s1/over:Pl phase=Pl sample=over phase_text=Pl Ab=-1 Or=0.5 An=0.25 sum=-0.25",
	})
}

func TestPhases(t *testing.T) {
	for want, texts := range map[chem.Phase][]string{
		"Pl": {"Pl", "pl", "plagioclase", "Plagioclase", "PLAG", "plg"}, "Kfs": {"Kfs", "K-feldspar", "K feldspar", "k-spar", "KFS", "K‐feldspar"},
		"Afs": {"Afs", "alkali feldspar", "Alkali-Feldspar"}, "Sa": {"sanidine", "Sa"}, "Or": {"Or", "orthoclase"}, "Mc": {"microcline"}, "Ano": {"anorthoclase"},
		"Opx": {"Opx", "opx", "OPX", "orthopyroxene", "hypersthene", "Bronzite"}, "En": {"En", "enstatite"}, "Fs": {"Fs", "ferrosilite"},
		"Cpx": {"Cpx", "clinopyroxene", "CPX"}, "Di": {"Di", "diopside"}, "Aug": {"augite", "Aug"}, "Grt": {"Grt", "garnet", "gt"},
		"An": {"An", "anorthite", "an"}, "And": {"And", "andalusite", "and"}, "Ttn": {"titanite", "sphene"}, "Bt": {"biotite"}, "Qz": {"quartz", "qtz"},
	} {
		for _, text := range texts {
			if got, ok := lookUpPhase(text); !ok || got != want {
				t.Errorf("phase %q is %q, want %q", text, got, want)
			}
		}
	}
	for _, text := range []string{"", "glass", "fs", "FS", "sp", "anor", "perthite", "mica", "plagioclase?", "Pl+Kfs", "PlaG core", "pyroxenes", "x"} {
		if got, ok := lookUpPhase(text); ok {
			t.Errorf("phase %q is taken for %q, want nothing guessed", text, got)
		}
	}
}

// Every symbol is known by at least one name, and every name leads to a symbol.
func TestPhaseNamesComplete(t *testing.T) {
	for _, p := range chem.Phases() {
		if phaseNames[p] == "" {
			t.Errorf("no names for the phase %s", p)
		}
	}
	for p, names := range phaseNames {
		if !p.Known() {
			t.Errorf("%s is no symbol of package chem", p)
		}
		for _, n := range strings.Fields(names) {
			if foldPhase(n) != n {
				t.Errorf("the name %q of %s is not folded and never found", n, p)
			}
		}
	}
}

func TestPhasesOfManifest(t *testing.T) {
	text := "Sample,Mineral,SiO2,K2O\nR1,Gl,60,1\nR1,GLASS,about 70,n.d.\n,glass,60,\nR1,fsp A,61,\nR1,plagioclase,62,\n"
	all, source, problems := readText(t, `phases = { "fsp A" = "Sa", "plagioclase" = "An", "Gl" = "Fsp" }
pass_over = ["glass", "gl"]`, text)
	if problems.Len() > 0 {
		t.Fatalf("problems where there are none:\n%v", problems)
	}
	same(t, "phases", dump(all), []string{
		"s1/R1:Fsp phase=Fsp sample=R1 phase_text=Gl set_aside=passed over: Gl SiO2=60 K2O=1",
		"s1/R1:GLASS phase= sample=R1 phase_text=GLASS set_aside=passed over: GLASS",
		"s1/:glass phase= phase_text=glass set_aside=passed over: glass SiO2=60",
		"s1/R1:Sa phase=Sa sample=R1 phase_text=fsp A SiO2=61",
		"s1/R1:An phase=An sample=R1 phase_text=plagioclase SiO2=62",
	})
	if source.PassedOver != 3 || source.Rows != 5 {
		t.Errorf("%d rows passed over of %d, want 3 of 5", source.PassedOver, source.Rows)
	}
}

func TestUnknownPhasesAreCapped(t *testing.T) {
	_, _, problems := readText(t, "", "Sample,Mineral,SiO2\n"+strings.Repeat("R1,unobtainium,60\n", 1000))
	lines := problems.Lines()
	if problems.Len() != 1000 || len(lines) != 21 || lines[20] != `t.csv: 980 more of kind "phase" not listed` {
		t.Errorf("%d problems in %d lines, the last %q; want 1000 in 21, the last counting 980", problems.Len(), len(lines), lines[len(lines)-1])
	}
}

func TestConstants(t *testing.T) {
	all := mustRead(t, `sample = " R1 "
phase = "Pl"
texture = "core"
locality = "Long ridge"
unit = "Upper"
analysis_kind = "spot"
generation = "2"
published_kind = "experiment"
published_method = "runs"`, "SiO2\n60\n")
	same(t, "constants", dump(all), []string{"s1/R1:Pl phase=Pl sample=R1 phase_text=Pl texture=core generation=2 analysis_kind=spot locality=Long ridge unit=Upper published_kind=experiment published_method=runs SiO2=60"})
}

// Every quantity that is no number lands in its own text.
func TestTexts(t *testing.T) {
	all := mustRead(t, "", "Sample,Label,Mineral,Texture,Domain,Generation,Assemblage,analysis_kind,Grain,Session,Locality,Unit,Pair,published_kind,published_method,Latitude,Longitude,SiO2\n"+
		"a,b,Pl,c,d,e,f,g,h,i,j,k,l,Thermometer,n,59°N,10.5 E,60\na,n.a.,Pl,,n.a.,,,,,,,,N/A,,,,,60\n")
	same(t, "texts", dump(all), []string{
		"s1/b phase=Pl label=b sample=a phase_text=Pl texture=c domain=d generation=e assemblage=f analysis_kind=g grain=h locality=j unit=k pair_label=l session=i published_kind=thermometer published_method=n latitude=59°N longitude=10.5 E SiO2=60",
		"s1/a:Pl phase=Pl sample=a phase_text=Pl SiO2=60",
	})
}

func TestColumnsOfManifest(t *testing.T) {
	all, source, problems := readText(t, `columns = { "Run  no." = "sample", "T exp" = "published_t_c", "SiO2" = "ignored", "silica" = "SiO2", "x" = "ignored", "Fe" = "FeO total" }`,
		"Run no.,mineral,T exp,SiO2,silica,x,x,Fe,Cr2O3 (ppm),T,notes\nL1,Pl,900,1,60,a,b,0.2,30,5,good\n")
	if problems.Len() > 0 {
		t.Fatalf("problems where there are none:\n%v", problems)
	}
	same(t, "columns", dump(all), []string{"s1/L1:Pl phase=Pl sample=L1 phase_text=Pl published_t_c=900 SiO2=60 FeO total=0.2"})
	var got []string
	for _, c := range source.Columns {
		got = append(got, c.Header+" = "+c.Quantity+" "+c.Note)
	}
	same(t, "column reports", got, []string{"Run no. = sample ", "mineral = phase ", "T exp = published_t_c ", "SiO2 = ignored ", "silica = SiO2 ", "x = ignored ", "x = ignored ",
		"Fe = FeO total ", `Cr2O3 (ppm) =  the unit "ppm" is not understood`, "T =  the header names no unit", "notes =  "})
}

func TestReport(t *testing.T) {
	text := "Sample,note,Mineral,SiO2,P (GPa)\nR1,,Pl,60,1\nR1,,Pl,58,0.5\n\nR2,,Pl,n.a.,\nR2,,Pl,<1,\nR2,,Pl,bdl,\nR2,,Pl,,\n"
	_, s, problems := readText(t, "", text)
	if problems.Len() > 0 {
		t.Fatalf("problems where there are none:\n%v", problems)
	}
	if s.ID != "s1" || s.File != "t.csv" || s.Rows != 6 || s.BlankLines != 1 || s.Bytes != int64(len(text)) ||
		s.SHA256 != fmt.Sprintf("%x", sha256.Sum256([]byte(text))) {
		t.Errorf("source report %+v", s)
	}
	want := []Column{
		{Header: "Sample", Quantity: "sample", Position: 1}, {Header: "note", Position: 2}, {Header: "Mineral", Quantity: "phase", Position: 3},
		{Header: "SiO2", Quantity: "SiO2", Position: 4, Numbers: 2, Missing: 1, NotAnalysed: 1, BelowDetection: 2, Min: 58, Max: 60},
		{Header: "P (GPa)", Quantity: "p_gpa", Position: 5, Numbers: 2, Missing: 4, Min: 0.5, Max: 1},
	}
	for i, w := range want {
		if s.Columns[i] != w {
			t.Errorf("column report %+v, want %+v", s.Columns[i], w)
		}
	}
}

func TestIDs(t *testing.T) {
	all := mustRead(t, "", "Sample,Label,Mineral,SiO2\nR1,,Pl,1\nR1,,Pl,2\nR1,,Kfs,3\nr1,,Pl,4\nR1,a,Pl,5\nR1,a,Pl,6\nR1,a#2,Pl,7\nR1,a,Pl,8\nR1,b#2,Pl,9\nR1,b,Pl,10\nR1,b,Pl,11\n\u00c5,,Pl,12\nA\u030a,,Pl,13\n")
	var got []string
	seen := map[string]bool{}
	for i := range all.Len() {
		b, row := all.At(i)
		id := b.Text(tables.AnalysisID, row)
		if seen[id] {
			t.Errorf("the id %s is given twice", id)
		}
		seen[id] = true
		got = append(got, id)
	}
	same(t, "ids", got, []string{"s1/R1:Pl", "s1/R1:Pl#2", "s1/R1:Kfs", "s1/r1:Pl", "s1/a", "s1/a#2", "s1/a#2#2", "s1/a#3", "s1/b#2", "s1/b", "s1/b#3", "s1/\u00c5:Pl", "s1/\u00c5:Pl#2"})
}

func TestSourcesInOrder(t *testing.T) {
	m := manifestOf(t, "file = \"utf-8.csv\"", "file = \"tabs.tsv\"", "file = \"crlf.csv\"")
	var told []int
	all, sources, problems := Read(rootOf(t, "testdata/good"), m, func(rows int) { told = append(told, rows) })
	if problems.Len() > 0 || all.Len() != 6 || len(sources) != 3 {
		t.Fatalf("%d analyses of %d sources, want 6 of 3; problems: %v", all.Len(), len(sources), problems)
	}
	for i, want := range []string{"s1", "s1", "s2", "s2", "s3", "s3"} {
		if b, _ := all.At(i); b.Source != want {
			t.Errorf("analysis %d is of source %s, want %s", i, b.Source, want)
		}
	}
	if len(told) != 3 || told[0] != 2 || told[1] != 4 || told[2] != 6 {
		t.Errorf("advance was told %v, want 2, 4, 6", told)
	}
}

func TestAdvance(t *testing.T) {
	dir := t.TempDir()
	write(t, dir+"/t.csv", "Sample,Mineral,SiO2\n"+strings.Repeat("R1,Pl,60\n", 2500))
	var told []int
	Read(rootOf(t, dir), manifestOf(t, `file = "t.csv"`), func(rows int) { told = append(told, rows) })
	if len(told) != 3 || told[0] != 1000 || told[1] != 2000 || told[2] != 2500 {
		t.Errorf("advance was told %v, want 1000, 2000, 2500", told)
	}
}

// The problems of all sources come together.
func TestProblemsOfAllSources(t *testing.T) {
	m := manifestOf(t, "file = \"empty.csv\"", "file = \"image.csv\"", "file = \"none.csv\"", "file = \"header-only.csv\"")
	_, _, problems := Read(rootOf(t, "testdata/hostile"), m, nil)
	same(t, "problems", problems.Lines(), []string{
		"empty.csv: the file is empty; expected a header and rows",
		"header-only.csv:2: no rows below the header; expected one row for each analysis",
		"image.csv: a PNG image; expected a text file; save the table as CSV with UTF-8 text",
		"none.csv: no such file; expected the data file below the manifest's folder; check the name; capital and small letters differ",
	})
}

func TestCells(t *testing.T) {
	dir := t.TempDir()
	write(t, dir+"/t.csv", "\nSample,Mineral,SiO2\n\nR1,\"P\nl\",60\nR2,Pl, 61 \n")
	root := rootOf(t, dir)
	s := &manifestOf(t, `file = "t.csv"`).Sources[0]
	header, cells, err := Cells(root, s, 6)
	if err != nil || strings.Join(header, "|") != "Sample|Mineral|SiO2" || strings.Join(cells, "|") != "R2|Pl| 61 " {
		t.Errorf("line 6 is %q under %q, %v", cells, header, err)
	}
	if _, cells, err = Cells(root, s, 4); err != nil || cells[1] != "P\nl" {
		t.Errorf("line 4 is %q, %v", cells, err)
	}
	for _, line := range []int{1, 3, 5, 7, 100} {
		if _, _, err := Cells(root, s, line); err == nil {
			t.Errorf("a row is said to begin at line %d, where none does", line)
		}
	}
	s.File = "none.csv"
	if _, _, err := Cells(root, s, 4); err == nil || !strings.HasPrefix(err.Error(), "none.csv: no such file") {
		t.Errorf("cells of a file that is not there: %v", err)
	}
}

// The compilations that ship read without a problem, every row of them.
func TestShippedCompilations(t *testing.T) {
	found, err := filepath.Glob("../manifests/*/" + manifests.FileName)
	if err != nil || len(found) == 0 {
		t.Fatalf("no compilation found: %v", err)
	}
	for _, path := range found {
		m, root, err := manifests.Load(path)
		if err != nil {
			t.Errorf("%s: %v", path, err)
			continue
		}
		all, sources, problems := Read(root, m, nil)
		root.Close()
		rows := 0
		for _, s := range sources {
			rows += s.Rows
		}
		if problems.Len() > 0 || all.Len() == 0 || all.Len() != rows {
			t.Errorf("%s: %d rows gave %d analyses, problems: %v", path, rows, all.Len(), problems.Err())
		}
	}
}
