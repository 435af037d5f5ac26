package tables

import (
	"bytes"
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/parquet-go/parquet-go"
	"pgregory.net/rapid"

	"tieline/pipeline/lineage"
	"tieline/thermo/chem"
)

// write makes a table of rows, given to Write in pieces of the sizes named,
// the last one again and again.
func write[T any](t testing.TB, rows []T, pieces ...int) (Written, string) {
	t.Helper()
	dir := t.TempDir()
	w, err := Create[T](dir, "test")
	if err != nil {
		t.Fatal(err)
	}
	for i := 0; len(rows) > 0; i++ {
		n := min(len(rows), pieces[min(i, len(pieces)-1)])
		if err := w.Write(rows[:n]); err != nil {
			t.Fatal(err)
		}
		rows = rows[n:]
	}
	out, err := w.Close()
	if err != nil {
		t.Fatal(err)
	}
	return out, filepath.Join(dir, out.File)
}

// estimate is a row like those of a run.
func estimate(i int) EstimateRow {
	r := EstimateRow{
		EstimateID: fmt.Sprintf("ashgrove-2026/AG-%d/p%d:two-feldspar|two-feldspar/elkins-grove-1990|Ab", i/40, i/3),
		PairID:     fmt.Sprintf("ashgrove-2026/AG-%d/p%d:two-feldspar", i/40, i/3),
		Sample:     fmt.Sprintf("AG-%d", i/40), Unit: "Ashgrove gneiss", Variant: "base", PairKind: "two-feldspar",
		Method: "two-feldspar/elkins-grove-1990", Component: []string{"Ab", "Or", "An"}[i%3], PSource: "manifest",
		Fe3Basis: "all Fe3+", Status: "number", Standing: "confirmed", Verdict: "kept",
		Lineage: lineage.New("t").Int(int64(i)).Sum().String(),
		PKbar:   new(float64(10)),
	}
	if i%17 != 0 {
		r.TC = new(600 + float64(i%1009)/7)
		r.DTDP = new(float64(i%101)/10 - 5)
		r.InRange = new(i%2 == 0)
	}
	return r
}

func estimates(n int) []EstimateRow {
	rows := make([]EstimateRow, n)
	for i := range rows {
		rows[i] = estimate(i)
	}
	return rows
}

// drawRow fills any row type with any values a table may hold.
func drawRow[T any](t *rapid.T) T {
	var row T
	v := reflect.ValueOf(&row).Elem()
	finite := rapid.OneOf(rapid.Just(0.0), rapid.Float64().Filter(finite))
	for i, c := range columnsOf(v.Type()) {
		if c.nullable && rapid.Bool().Draw(t, "null") {
			continue
		}
		f := v.Field(i)
		if f.Kind() == reflect.Pointer {
			f.Set(reflect.New(f.Type().Elem()))
			f = f.Elem()
		}
		switch c.kind {
		case reflect.String:
			f.SetString(rapid.OneOf(rapid.Just("base"), rapid.String()).Draw(t, c.name))
		case reflect.Float64:
			f.SetFloat(finite.Draw(t, c.name) + 0)
		case reflect.Int64:
			f.SetInt(rapid.Int64().Draw(t, c.name))
		case reflect.Bool:
			f.SetBool(rapid.Bool().Draw(t, c.name))
		}
	}
	return row
}

// roundTrip writes 300 drawn rows as one table: a table a draw would take long.
func roundTrip[T any](t *testing.T) {
	t.Run(reflect.TypeFor[T]().Name(), func(t *testing.T) {
		for _, n := range []int{0, 300} {
			rows := make([]T, n)
			for i := range rows {
				rows[i] = rapid.Custom(drawRow[T]).Example(i)
			}
			out, path := write(t, rows, 70)
			got, err := Read[T](path)
			if err != nil {
				t.Fatal(err)
			}
			if out.Rows != int64(n) || len(got) != n {
				t.Fatalf("%d rows written, Written says %d, %d read", n, out.Rows, len(got))
			}
			for i := range rows {
				if !reflect.DeepEqual(got[i], rows[i]) {
					t.Fatalf("row %d reads back as\n%s, want\n%s", i, show(got[i]), show(rows[i]))
				}
			}
		}
	})
}

// show spells out what a row's pointers point to.
func show(row any) string {
	text, err := json.Marshal(row)
	if err != nil {
		return fmt.Sprintf("%+v", row)
	}
	return string(text)
}

func TestEveryTableReadsBackAsWritten(t *testing.T) {
	roundTrip[AnalysisRow](t)
	roundTrip[PairRow](t)
	roundTrip[EstimateRow](t)
	roundTrip[DiscrepancyRow](t)
	roundTrip[FindingRow](t)
}

// TestZeroIsNotNull guards the trap of parquet-go's optional on plain numbers.
func TestZeroIsNotNull(t *testing.T) {
	r := estimate(1)
	r.TC, r.InRange = new(0.0), new(false)
	r.DTDP = new(math.Copysign(0, -1))
	_, path := write(t, []EstimateRow{r}, 1)
	got, err := Read[EstimateRow](path)
	if err != nil {
		t.Fatal(err)
	}
	if got[0].TC == nil || *got[0].TC != 0 || got[0].InRange == nil || *got[0].InRange {
		t.Errorf("0 and false came back as %v and %v", got[0].TC, got[0].InRange)
	}
	if got[0].DTDP == nil || math.Signbit(*got[0].DTDP) {
		t.Errorf("-0 came back as %v", *got[0].DTDP)
	}
	if !math.Signbit(*r.DTDP) {
		t.Error("Write changed the caller's number")
	}
}

// TestRowsBelongToTheCaller: what a row points to may be used again as soon as
// Write returns, though the batch is not full.
func TestRowsBelongToTheCaller(t *testing.T) {
	dir := t.TempDir()
	w, err := Create[EstimateRow](dir, "test")
	if err != nil {
		t.Fatal(err)
	}
	shared := estimate(1)
	for i := range 5 {
		*shared.TC, *shared.InRange = float64(i), i == 2
		if err := w.Write([]EstimateRow{shared}); err != nil {
			t.Fatal(err)
		}
	}
	out, err := w.Close()
	if err != nil {
		t.Fatal(err)
	}
	rows, err := Read[EstimateRow](filepath.Join(dir, out.File))
	if err != nil {
		t.Fatal(err)
	}
	for i, r := range rows {
		if *r.TC != float64(i) || *r.InRange != (i == 2) {
			t.Errorf("row %d holds %v, %v", i, *r.TC, *r.InRange)
		}
	}
}

func TestSameRowsSameBytes(t *testing.T) {
	t.Run("estimates", func(t *testing.T) { sameBytes(t, estimates(3*batchRows+5)) })
	t.Run("two row groups", func(t *testing.T) {
		rows := make([]FindingRow, rowGroupRows+3*batchRows+5)
		for i := range rows {
			rows[i] = FindingRow{RowKind: "analysis", RowID: fmt.Sprint(i * i), Rule: "oxide total", Effect: "noted", Value: new(float64(i)), Detail: "d"}
		}
		sameBytes(t, rows)
	})
}

// sameBytes writes rows again in other pieces.
func sameBytes[T any](t *testing.T, rows []T) {
	once, path := write(t, rows, len(rows))
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if sum := sha256.Sum256(text); once.SHA256 != hex.EncodeToString(sum[:]) || once.Bytes != int64(len(text)) || once.Rows != int64(len(rows)) {
		t.Errorf("Written says %+v of %d rows in %d bytes with SHA-256 %x", once, len(rows), len(text), sum)
	}
	for _, pieces := range [][]int{{1, 1000, 7}, {5, 64, 4096}} {
		if again, _ := write(t, rows, pieces...); !reflect.DeepEqual(again, once) {
			t.Errorf("written in pieces of %v:\n got %+v\nwant %+v", pieces, again, once)
		}
	}
}

func TestContentDigestSeesEveryColumn(t *testing.T) {
	base := drawnExample(t)
	first, _ := write(t, []AnalysisRow{base}, 1)
	v := reflect.ValueOf(&base).Elem()
	for i, c := range columnsOf(v.Type()) {
		saved := reflect.New(v.Field(i).Type()).Elem()
		saved.Set(v.Field(i))
		v.Field(i).Set(other(c))
		if changed, _ := write(t, []AnalysisRow{base}, 1); changed.ContentSHA256 == first.ContentSHA256 {
			t.Errorf("a change of %s does not change the content digest", c.name)
		}
		v.Field(i).Set(saved)
	}
}

func drawnExample(t *testing.T) AnalysisRow {
	return rapid.Custom(drawRow[AnalysisRow]).Example(1)
}

// other is a value that no drawn row has.
func other(c column) reflect.Value {
	switch {
	case c.kind == reflect.String:
		return reflect.ValueOf("another value of " + c.name)
	case c.kind == reflect.Float64 && c.nullable:
		return reflect.ValueOf(new(1.2345678e-9))
	case c.kind == reflect.Float64:
		return reflect.ValueOf(1.2345678e-9)
	case c.nullable:
		return reflect.ValueOf(new(int64(1234567890123)))
	}
	return reflect.ValueOf(int64(1234567890123))
}

// TestContentDigestIsTheDocumentedEncoding makes a digest of one row from the
// words of Written's doc comment, with the encoder and nothing else.
func TestContentDigestIsTheDocumentedEncoding(t *testing.T) {
	row := FindingRow{RowKind: "pair", RowID: "a/b", Rule: "Fe-Mg distribution", Effect: "flagged", Value: new(1.5), Detail: "d"}
	got, _ := write(t, []FindingRow{row}, 1)
	e := lineage.New("tieline table 1").Text("test").List(9)
	for _, c := range []string{"row_kind", "row_id", "rule", "effect", "value", "limit", "detail", "source", "source_line"} {
		e.Text(c)
	}
	sum := e.Text("pair").Text("a/b").Text("Fe-Mg distribution").Text("flagged").Float(1.5).Null().Text("d").Null().Null().Sum256()
	if want := hex.EncodeToString(sum[:]); got.ContentSHA256 != want {
		t.Errorf("content digest %s, want %s", got.ContentSHA256, want)
	}
}

// The digests change when parquet-go, zstd, the writer's settings or the
// columns (their docs are in the file) change; the content digest only with the
// columns' names and values. Either is news for
// users, whose results then differ from the ones before.
func TestGoldenTable(t *testing.T) {
	got, _ := write(t, estimates(3000), 3000)
	want := Written{Table: "test", File: "tables/test.parquet", Rows: 3000, Bytes: 115946,
		SHA256:        "5cce26da85bc3674232d9454f00f24f912493a93a01d8c5fecd1e58e89278163",
		ContentSHA256: "92e8b1bffa166a238f911130e63c8c510a7ba01d63acdea8487bc491e3d635cc",
	}
	got.NonNull, got.TCMicroSum = nil, nil
	if !reflect.DeepEqual(got, want) {
		t.Errorf("the table of 3000 made-up estimates is\n%+v, was\n%+v", got, want)
	}
}

// What Written counts is what is read back.
func TestWrittenCounts(t *testing.T) {
	got, path := write(t, estimates(3000), 700)
	rows, err := Read[EstimateRow](path)
	if err != nil {
		t.Fatal(err)
	}
	temperatures, basis, sum := int64(0), int64(0), int64(0)
	for _, r := range rows {
		if r.TC != nil {
			temperatures++
			sum += int64(math.Round(*r.TC * 1e6))
		}
		if r.Fe3Basis != "" {
			basis++
		}
	}
	if got.NonNull["t_c"] != temperatures || got.NonNull["fe3_basis"] != basis || *got.TCMicroSum != sum || temperatures == 0 {
		t.Errorf("Written counts %d temperatures, %d bases, sum %d; the file holds %d, %d, %d",
			got.NonNull["t_c"], got.NonNull["fe3_basis"], *got.TCMicroSum, temperatures, basis, sum)
	}
}

func TestWriteRefusesWhatIsNoNumber(t *testing.T) {
	for want, spoil := range map[string]func(*EstimateRow){
		`table test: row 3 (estimate_id "x\u{1b}"): column t_c: NaN; a table holds finite numbers`: func(r *EstimateRow) { r.TC = new(math.NaN()) },
		`table test: row 3 (estimate_id "x\u{1b}"): column p_kbar: -Inf; a table`:                  func(r *EstimateRow) { r.PKbar = new(math.Inf(-1)) },
		`table test: row 3 (estimate_id "x\u{1b}"): column sample: "caf\u{fffd}" is not UTF-8`:     func(r *EstimateRow) { r.Sample = "caf\xe9" },
		`table test: row 3 (estimate_id "x\u{1b}"): column locality: "\u{fffd}" is not UTF-8`:      func(r *EstimateRow) { r.Locality = "\xff" },
	} {
		dir := t.TempDir()
		w, err := Create[EstimateRow](dir, "test")
		if err != nil {
			t.Fatal(err)
		}
		rows := estimates(5)
		rows[2].EstimateID = "x\x1b"
		spoil(&rows[2])
		err = w.Write(rows)
		if err == nil || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("error is\n%v, want\n%s", err, want)
			continue
		}
		if again := w.Write(estimates(1)); again != err {
			t.Errorf("a Write after the error gives %v", again)
		}
		if _, closed := w.Close(); closed != err {
			t.Errorf("Close after the error gives %v", closed)
		}
	}
}

func TestCreateRefusesAFileThatIsThere(t *testing.T) {
	dir := t.TempDir()
	w, err := Create[FindingRow](dir, "qc")
	if err != nil {
		t.Fatal(err)
	}
	if _, err := w.Close(); err != nil {
		t.Fatal(err)
	}
	if _, err := Create[FindingRow](dir, "qc"); err == nil || !strings.HasPrefix(err.Error(), "table qc: ") {
		t.Errorf("error is %v, want one of table qc", err)
	}
}

func TestFullDiskSurfaces(t *testing.T) {
	full, err := os.OpenFile("/dev/full", os.O_WRONLY, 0)
	if err != nil {
		t.Skip("this system has no /dev/full: ", err)
	}
	w, err := Create[EstimateRow](t.TempDir(), "estimates")
	if err != nil {
		t.Fatal(err)
	}
	w.file.Close()
	w.file = full
	w.buffer.Reset(io.MultiWriter(full, w.hash))
	err = w.Write(estimates(10))
	if err == nil {
		_, err = w.Close()
	}
	if err == nil || !strings.HasPrefix(err.Error(), "table estimates: the disk is full: ") {
		t.Errorf("error is %v, want one that says the disk is full", err)
	}
}

func TestReadSaysWhatIsWrong(t *testing.T) {
	_, path := write(t, estimates(2), 2)
	if _, err := Read[PairRow](path); err == nil || !strings.Contains(err.Error(), "other columns") {
		t.Errorf("estimates read as pairs: %v", err)
	}
	text := filepath.Join(t.TempDir(), "x.parquet")
	if err := os.WriteFile(text, []byte("SiO2,Al2O3\n64.6,20.6\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, err := Read[PairRow](text); err == nil || !strings.Contains(err.Error(), "not a table") {
		t.Errorf("a CSV file read as a table: %v", err)
	}
	if _, err := Read[PairRow](text + "x"); !os.IsNotExist(err) {
		t.Errorf("a missing file: %v", err)
	}
}

func TestFileSaysWhoMadeItAndWhatColumnsMean(t *testing.T) {
	_, path := write(t, estimates(1), 1)
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	f, err := parquet.OpenFile(bytes.NewReader(text), int64(len(text)))
	if err != nil {
		t.Fatal(err)
	}
	if got := f.Metadata().CreatedBy; got != "tieline" {
		t.Errorf("created by %q", got)
	}
	for key, want := range map[string]string{"table": "test", "t_c.unit": "degC", "dt_dp_c_per_kbar.unit": "degC/kbar"} {
		if got, _ := f.Lookup(key); got != want {
			t.Errorf("%s is %q, want %q", key, got, want)
		}
	}
	for _, c := range Dictionary()[2].Columns {
		if got, _ := f.Lookup(c.Name + ".doc"); got != c.Doc {
			t.Errorf("doc of %s is %q, want %q", c.Name, got, c.Doc)
		}
	}
}

// columnNames as the issue and the README promise them.
var columnNames = map[string]string{
	"pairs":         "pair_id pair_kind source sample locality? unit? texture? pair_label? a_analysis_id a_phase b_analysis_id b_phase rule distance_um? p_kbar? p_sigma_kbar? p_source kd_fe_mg? published_t_c? published_kind? variant verdict reasons? lineage",
	"estimates":     "estimate_id pair_id? analysis_id? sample locality? unit? texture? variant pair_kind method component? t_c? sigma_calibration_c? bound_c? dt_dp_c_per_kbar? p_kbar? p_source fe3_basis? in_range? out_of_range? status reason? standing? published_kind? verdict lineage",
	"samples":       "level sample? unit? locality? texture? pair_kind variant method component? closes? standing? published_kind? n n_samples n_sources n_left_out median_c? mad_c? lowest_c? highest_c?",
	"discrepancies": "group_by group pair_kind variant method_a component_a? method_b component_b? published_kind? closes_a? closes_b? shared n n_samples n_sources mean_diff_c? median_diff_c? median_abs_diff_c? sd_c? mad_c? loa_low_c? loa_high_c?",
	"qc":            "row_kind row_id rule effect value? limit? detail source? source_line?",
}

func TestColumnsAreThePromisedOnes(t *testing.T) {
	analyses := "analysis_id source source_line source_column? label? sample phase phase_text texture? domain? generation? assemblage? analysis_kind? grain? session? spot_x_um? spot_y_um? n_spots? area_fraction? locality? unit? latitude? longitude? composition_kind"
	for o := range chem.NumOxides {
		n := strings.ToLower(o.String())
		analyses += " " + n + "_wt? " + n + "_sigma_wt?"
	}
	analyses += " feo_total_wt? feo_total_sigma_wt? fe2o3_total_wt? fe2o3_total_sigma_wt? not_analysed? below_detection? reported_total_wt? total_wt? oxygens? fe3_basis?"
	for c := range chem.NumCations {
		analyses += " " + strings.ToLower(c.String()) + "_apfu?"
	}
	analyses += " cation_sum? ab? or? an? cn? end_member_sum? published_t_c? published_sigma_c? published_p_kbar? published_kind? published_method? p_kbar? p_sigma_kbar? pair_label? verdict reasons? lineage"
	columnNames["analyses"] = analyses
	if len(Dictionary()) != len(columnNames) {
		t.Errorf("%d tables, want %d", len(Dictionary()), len(columnNames))
	}
	for _, d := range Dictionary() {
		var got []string
		for _, c := range d.Columns {
			n := c.Name
			if c.Nullable {
				n += "?"
			}
			got = append(got, n)
		}
		if g := strings.Join(got, " "); g != columnNames[d.Table] {
			t.Errorf("columns of %s:\n got %s\nwant %s", d.Table, g, columnNames[d.Table])
		}
	}
}

// TestDictionary holds the docs to what a reader needs of them.
func TestDictionary(t *testing.T) {
	units := map[string]string{"_c": "degC", "_kbar": "kbar", "_um": "um", "_wt": "wt%", "_apfu": "apfu"}
	for _, d := range Dictionary() {
		for _, c := range d.Columns {
			where := d.Table + "." + c.Name
			if c.Type == "number" && c.Unit == "" {
				t.Errorf("%s has no unit", where)
			}
			if c.Type != "number" && c.Unit != "" {
				t.Errorf("%s is %s and has the unit %s", where, c.Type, c.Unit)
			}
			if c.Nullable && !strings.Contains(c.Doc, "NULL") && c.Name != "limit" {
				t.Errorf("%s may be NULL and its doc does not say when: %s", where, c.Doc)
			}
			if !c.Nullable && strings.Contains(c.Doc, "NULL") {
				t.Errorf("%s is never NULL and its doc says otherwise: %s", where, c.Doc)
			}
			for suffix, unit := range units {
				if strings.HasSuffix(c.Name, suffix) && c.Unit != unit && c.Name != "dt_dp_c_per_kbar" {
					t.Errorf("%s has the unit %q, its name says %s", where, c.Unit, unit)
				}
			}
			if !regexp.MustCompile(`^[a-z][a-z0-9_]*$`).MatchString(c.Name) {
				t.Errorf("%s: a name that needs quotes in SQL", where)
			}
		}
	}
}

func TestArrowAndParquetSchemasAgree(t *testing.T) {
	arrowOf := func(c parquet.Field) string {
		s := map[string]string{"STRING": "utf8", "DOUBLE": "float64", "INT(64,true)": "int64", "INT64": "int64", "BOOLEAN": "bool"}[c.Type().String()]
		if c.Optional() {
			s += "?"
		}
		return c.Name() + " " + s
	}
	var want, got []string
	for _, f := range parquet.SchemaOf(new(AnalysisRow)).Fields() {
		want = append(want, arrowOf(f))
	}
	for _, f := range parquet.SchemaOf(new(EstimateRow)).Fields() {
		want = append(want, arrowOf(f))
	}
	for _, f := range append(ArrowSchema[AnalysisRow]().Fields(), ArrowSchema[EstimateRow]().Fields()...) {
		s := f.Name + " " + f.Type.String()
		if f.Nullable {
			s += "?"
		}
		got = append(got, s)
	}
	if g, w := strings.Join(got, "\n"), strings.Join(want, "\n"); g != w {
		t.Errorf("Arrow schema:\n%s\nParquet schema:\n%s", g, w)
	}
}

func TestOxideAndCationPlaces(t *testing.T) {
	var r AnalysisRow
	v := reflect.ValueOf(&r).Elem()
	at := func(name string) any {
		for i, c := range columnsOf(v.Type()) {
			if c.name == name {
				return v.Field(i).Addr().Interface()
			}
		}
		return nil
	}
	for m := range chem.NumMeasurands {
		wt, sigma := r.Oxide(m)
		if m.Kind() != chem.OxideWt {
			if wt != nil || sigma != nil {
				t.Errorf("%s has a place in wt%%", m)
			}
			continue
		}
		name := strings.ReplaceAll(strings.ToLower(m.String()), " ", "_")
		if at(name+"_wt") != wt || at(name+"_sigma_wt") != sigma {
			t.Errorf("%s is not put into %s_wt and %s_sigma_wt", m, name, name)
		}
	}
	for c := range chem.NumCations {
		if at(strings.ToLower(c.String())+"_apfu") != r.Cation(c) {
			t.Errorf("%s is not put into its apfu column", c)
		}
	}
}

// TestTagsThatWouldMislead: the trap of optional on a plain number, and others,
// stop the program at the first use of the row type.
func TestTagsThatWouldMislead(t *testing.T) {
	for what, row := range map[string]any{
		"optional on a plain number": struct {
			X float64 `parquet:"x,optional" doc:"d"`
		}{},
		"a pointer that is not optional": struct {
			X *float64 `parquet:"x" doc:"d"`
		}{},
		"a pointer to text": struct {
			X *string `parquet:"x,optional" doc:"d"`
		}{},
		"no doc": struct {
			X float64 `parquet:"x"`
		}{},
		"a type no column has": struct {
			X int32 `parquet:"x" doc:"d"`
		}{},
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s passes", what)
				}
			}()
			columnsOf(reflect.TypeOf(row))
		}()
	}
}

// analysisRow is a row like those of a run: twelve oxides, a formula.
func analysisRow(i int) AnalysisRow {
	a := typical(i)
	r := AnalysisRow{AnalysisID: a.Text[AnalysisID], Source: "ashgrove-2026", SourceLine: int64(a.Line), Label: a.Text[Label],
		Sample: a.Text[Sample], Phase: "Pl", PhaseText: "plagioclase", Texture: "rim", Grain: a.Text[Grain], Unit: a.Text[Unit],
		CompositionKind: "oxide wt%", TotalWt: new(99.5), Oxygens: new(8.0), Fe3Basis: "all Fe3+", CationSum: new(5.001),
		Ab: new(.7), Or: new(.02), An: new(.28), PairLabel: a.Text[PairLabel], Verdict: "kept", Lineage: a.Lineage.String()}
	for m := range chem.FeOT {
		if x := a.Composition.Value[m]; a.Composition.State[m] == chem.Measured {
			wt, sigma := r.Oxide(m)
			*wt, *sigma = new(x), new(x/100)
		}
	}
	for c := range chem.NumCations {
		*r.Cation(c) = new(float64(i%89) / 100)
	}
	return r
}

func BenchmarkWriteEstimates(b *testing.B) { benchmarkWrite(b, estimate) }
func BenchmarkWriteAnalyses(b *testing.B)  { benchmarkWrite(b, analysisRow) }

// benchmarkWrite sets the table beside the same rows through encoding/csv.
func benchmarkWrite[T any](b *testing.B, make1 func(int) T) {
	const n = 64 * batchRows
	rows := make([]T, n)
	for i := range rows {
		rows[i] = make1(i)
	}
	b.Run("parquet", func(b *testing.B) {
		for b.Loop() {
			w, err := Create[T](b.TempDir(), "bench")
			if err != nil {
				b.Fatal(err)
			}
			if err := w.Write(rows); err != nil {
				b.Fatal(err)
			}
			out, err := w.Close()
			if err != nil {
				b.Fatal(err)
			}
			b.ReportMetric(float64(out.Bytes)/n, "B/row")
		}
		b.ReportMetric(n*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
	})
	b.Run("baseline csv", func(b *testing.B) {
		columns := columnsOf(reflect.TypeFor[T]())
		cells := make([]string, len(columns))
		for b.Loop() {
			f, err := os.Create(filepath.Join(b.TempDir(), "bench.csv"))
			if err != nil {
				b.Fatal(err)
			}
			w := csv.NewWriter(f)
			for i := range rows {
				v := reflect.ValueOf(&rows[i]).Elem()
				for k, c := range columns {
					cells[k] = cell(v.Field(k), c.kind)
				}
				if err := w.Write(cells); err != nil {
					b.Fatal(err)
				}
			}
			w.Flush()
			if err := f.Close(); err != nil {
				b.Fatal(err)
			}
		}
		b.ReportMetric(n*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
	})
}

func cell(v reflect.Value, k reflect.Kind) string {
	if v.Kind() == reflect.Pointer {
		if v.IsNil() {
			return ""
		}
		v = v.Elem()
	}
	switch k {
	case reflect.Float64:
		return strconv.FormatFloat(v.Float(), 'g', -1, 64)
	case reflect.Int64:
		return strconv.FormatInt(v.Int(), 10)
	case reflect.Bool:
		return strconv.FormatBool(v.Bool())
	}
	return v.String()
}
