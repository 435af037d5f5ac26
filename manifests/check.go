package manifests

import (
	"fmt"
	"io/fs"
	"path"
	"reflect"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"unicode"

	"tieline/pipeline/problem"
	"tieline/thermo/chem"
)

// check reports what no schema can say.
func (r *reader) check(m *Manifest) {
	r.visible("compilation.title", m.Compilation.Title, "write the title")
	r.sources(m)
	r.within("qc.totals_kept_wt", m.QC.TotalsKeptWt, "qc.totals_flagged_wt", m.QC.TotalsFlaggedWt)
	r.within("qc.pyroxene_sum_kept", m.QC.PyroxeneSumKept, "qc.pyroxene_sum_flagged", m.QC.PyroxeneSumFlagged)
	r.atMost("qc.feldspar_sum_kept", m.QC.FeldsparSumKept, "qc.feldspar_sum_flagged", m.QC.FeldsparSumFlagged)
	r.atMost("qc.celsian_flagged", m.QC.CelsianFlagged, "qc.celsian_set_aside", m.QC.CelsianSetAside)
	r.atMost("qc.feldspar_t_site_kept", m.QC.FeldsparTSiteKept, "qc.feldspar_t_site_flagged", m.QC.FeldsparTSiteFlagged)
	r.atMost("qc.feldspar_a_site_kept", m.QC.FeldsparASiteKept, "qc.feldspar_a_site_flagged", m.QC.FeldsparASiteFlagged)
	r.ascending("qc.kd_igneous", m.QC.KDIgneous)
	r.ascending("qc.kd_subsolidus", m.QC.KDSubsolidus)
	r.prefer(m)
	r.different("qc.prefer", m.QC.Prefer)
	r.line(&m.Pressure)
	r.different("pairing.rules", m.Pairing.Rules)
	r.atMost("pairing.touching_um", m.Pairing.TouchingUm, "pairing.nearest_um", m.Pairing.NearestUm)
	r.different("methods.use", m.Methods.Use)
	r.different("groups.by", m.Groups.By)
}

// line checks that a pressure line is whole and alone.
func (r *reader) line(p *Pressure) {
	const at0, slope, flat = "pressure.line_kbar_at_0c", "pressure.line_kbar_per_c", "pressure.default_kbar"
	switch {
	case p.LineKbarAt0C != nil && p.LineKbarPerC == nil:
		r.complain(at0, r.at[at0], "missing key", "line_kbar_per_c beside it", "half a line", "write line_kbar_per_c, kbar/degC")
	case p.LineKbarPerC != nil && p.LineKbarAt0C == nil:
		r.complain(slope, r.at[slope], "missing key", "line_kbar_at_0c beside it", "half a line", "write line_kbar_at_0c, kbar")
	case p.LineKbarAt0C != nil && p.DefaultKbar != nil:
		r.complain(flat, r.at[flat], "contradiction", "default_kbar or a line", "both", "leave one out")
	}
}

// fields checks a struct's fields against their tags, as the schema does.
func (r *reader) fields(v reflect.Value, where string) {
	t := v.Type()
	for i := range t.NumField() {
		name := t.Field(i).Tag.Get("toml")
		if name == "" {
			continue
		}
		p, f, rules := join(where, name), v.Field(i), rulesOf(t.Field(i))
		_, given := r.at[p]
		if r.at == nil { // no text: what every manifest holds is there to be checked
			given = !strings.HasSuffix(t.Field(i).Tag.Get("json"), ",omitempty")
		}
		switch {
		case r.bad[p]:
		case rules.required && f.IsZero() && (!given || r.at == nil):
			r.complain(p, r.at[where], "missing key", "", "the key is missing", "write "+example(name, f.Type()))
		case isTables(f.Type()):
			for j := range f.Len() {
				r.fields(f.Index(j), fmt.Sprintf("%s[%d]", p, j))
			}
			if f.Len() < rules.minItems {
				r.complain(p, r.at[p], "missing key", "at least one", "none", "write "+example(name, f.Type()))
			}
		case f.Kind() == reflect.Struct && f.Type().PkgPath() == t.PkgPath():
			r.fields(f, p)
		case given || !f.IsZero():
			r.values(f, p, rules)
		}
	}
}

func example(name string, t reflect.Type) string {
	switch {
	case isTables(t):
		return "[[" + name + "]]"
	case t.Kind() == reflect.Struct:
		return "[" + name + "]"
	}
	return name + " = \"...\""
}

// values checks a value, or each of a list, against the rules of its field.
func (r *reader) values(v reflect.Value, p string, rules rules) {
	switch v.Kind() {
	case reflect.Pointer:
		if !v.IsNil() && v.Elem().Kind() != reflect.Struct {
			r.values(v.Elem(), p, rules)
		}
	case reflect.Slice, reflect.Array:
		for i := range v.Len() {
			r.values(v.Index(i), fmt.Sprintf("%s[%d]", p, i), rules)
		}
	case reflect.String:
		if expected, do := rules.text(v.String()); expected != "" {
			r.complain(p, r.at[p], "value", expected, problem.Quote(v.String()), do)
		}
	case reflect.Float64:
		if f := v.Float(); f < rules.minimum || f > rules.maximum {
			r.complain(p, r.at[p], "value", fmt.Sprintf("a number from %g to %g", rules.minimum, rules.maximum), strconv.FormatFloat(f, 'g', -1, 64), "")
		}
	}
}

// rules are what a field's jsonschema tag asks, so that the schema and the
// program refuse the same manifests.
type rules struct {
	required             bool
	enum                 []string
	pattern              *regexp.Regexp
	minLength, maxLength int
	minItems             int
	minimum, maximum     float64
}

func rulesOf(f reflect.StructField) rules {
	var out rules
	number := func(s string) float64 {
		n, err := strconv.ParseFloat(s, 64)
		if err != nil {
			panic("manifests: bad number in the tag of " + f.Name)
		}
		return n
	}
	for _, item := range strings.Split(f.Tag.Get("jsonschema"), ",") {
		key, value, _ := strings.Cut(item, "=")
		switch key {
		case "required":
			out.required = true
		case "enum":
			out.enum = append(out.enum, value)
		case "pattern":
			out.pattern = regexp.MustCompile(value)
		case "minLength":
			out.minLength = int(number(value))
		case "maxLength":
			out.maxLength = int(number(value))
		case "minItems":
			out.minItems = int(number(value))
		case "minimum":
			out.minimum = number(value)
		case "maximum":
			out.maximum = number(value)
		}
	}
	return out
}

// text gives what was expected and what to do where s breaks a rule.
func (u rules) text(s string) (expected, do string) {
	n := len([]rune(s))
	switch {
	case len(u.enum) > 0 && !slices.Contains(u.enum, s):
		var quoted []string
		for _, e := range u.enum {
			quoted = append(quoted, strconv.Quote(e))
		}
		if near := Nearest(s, u.enum); near != "" {
			do = "did you mean " + strconv.Quote(near) + "?"
		}
		return either(quoted), do
	case n < u.minLength:
		return "some text", ""
	case u.maxLength > 0 && n > u.maxLength:
		return fmt.Sprintf("at most %d characters", u.maxLength), ""
	case u.pattern != nil && !u.pattern.MatchString(s):
		if near := slug(s); near != "" {
			do = "such as " + strconv.Quote(near)
		}
		return "lower case letters a to z, digits and hyphens, a letter or digit first", do
	}
	return "", ""
}

var notSlug = regexp.MustCompile(`[^a-z0-9]+`)

// slug makes a name of lower case letters, digits and hyphens of a text.
func slug(s string) string {
	out := strings.Trim(notSlug.ReplaceAllString(strings.ToLower(s), "-"), "-")
	return out[:min(len(out), 40)]
}

// sources checks each source and that no two are one.
func (r *reader) sources(m *Manifest) {
	ids, files := map[string]string{}, map[string]string{}
	for i := range m.Sources {
		s, p := &m.Sources[i], fmt.Sprintf("source[%d]", i)
		if r.file(s.File, p+".file") {
			r.once(files, s.File, p+".file", "the rows of a file would be counted twice")
		}
		if !r.bad[p+".id"] {
			r.once(ids, s.ID, p+".id", "give each source its own id")
		}
		r.oxygens(s, p)
		r.phase(s.Phase, p+".phase")
		for _, text := range sortedKeys(s.Phases) {
			r.phase(s.Phases[text], p+".phases."+strconv.Quote(text))
		}
		r.constants(s, p)
		r.columns(s, p)
		r.markers(s, p)
	}
}

func (r *reader) once(seen map[string]string, text, p, do string) {
	if text == "" {
		return
	}
	if before, ok := seen[text]; ok {
		found := problem.Quote(text) + " a second time"
		if at, ok := r.at[before]; ok {
			found = fmt.Sprintf("%s, which stands on line %d already", problem.Quote(text), at.line)
		}
		r.complain(p, r.at[p], "same twice", "one that differs", found, do)
		return
	}
	seen[text] = p
}

// file refuses what lies outside the manifest's folder, and spellings of a path
// that another system would read otherwise.
func (r *reader) file(name, p string) bool {
	if name == "" || r.bad[p] {
		return false
	}
	do := ""
	switch {
	case strings.Contains(name, `\`):
		do = "write / between folders"
	case strings.HasPrefix(name, "/") || regexp.MustCompile(`^[A-Za-z]:`).MatchString(name):
		do = "put the file into the manifest's folder and write its name only"
	case slices.Contains(strings.Split(name, "/"), ".."):
		do = "put the file into the manifest's folder; nothing outside it is read"
	case strings.ContainsRune(name, 0):
		do = "a file name holds no NUL"
	case !fs.ValidPath(name) || name == ".":
		do = "write " + problem.Quote(strings.TrimPrefix(path.Clean("/"+name), "/"))
	default:
		return true
	}
	r.complain(p, r.at[p], "file", "a file below the manifest's folder", problem.Quote(name), do)
	return false
}

func (r *reader) oxygens(s *Source, p string) {
	if r.bad[p+".composition"] || r.bad[p+".oxygens"] {
		return
	}
	switch _, given := r.at[p+".oxygens"]; {
	case s.Kind() == chem.Apfu && s.Oxygens == 0 && !given:
		r.complain(p+".oxygens", r.at[p], "missing key", "", "the key is missing", `with composition = "apfu" write the oxygens of the formula, such as oxygens = 6`)
	case s.Kind() != chem.Apfu && s.Oxygens != 0:
		r.complain(p+".oxygens", r.at[p+".oxygens"], "value", `no oxygens unless composition = "apfu"`, fmt.Sprintf("oxygens = %g with composition = %q", s.Oxygens, s.Composition), "leave it out")
	}
}

func (r *reader) phase(symbol chem.Phase, p string) {
	if r.bad[p] || symbol.Known() {
		return
	}
	if _, given := r.at[p]; symbol == "" && !given {
		return
	}
	var known []string
	for _, k := range chem.Phases() {
		known = append(known, string(k))
	}
	do := "see the phases listed in compilation.schema.json"
	// Symbols are so short that two edits make any of any: Plag is not Lab.
	if near := Nearest(string(symbol), known); near != "" && distance(strings.ToLower(string(symbol)), strings.ToLower(near)) <= 1 {
		do = "did you mean " + problem.Quote(near) + "?"
	}
	r.complain(p, r.at[p], "phase", "an IMA symbol such as Afs, Pl, Opx, Cpx", problem.Quote(string(symbol)), do)
}

// Blank says whether a character is trimmed off the ends of a text: spaces,
// no-break spaces among them, and those nobody sees.
func Blank(c rune) bool {
	switch c {
	case '\u200b', '\u200e', '\u200f', '\u2060', '\ufeff': // zero width
		return true
	}
	return unicode.IsSpace(c)
}

func trim(s string) string { return strings.TrimFunc(s, Blank) }

// constants refuses a text for every row that leaves nothing once it is trimmed.
func (r *reader) constants(s *Source, p string) {
	for _, c := range []struct{ key, text string }{
		{"sample", s.Sample}, {"texture", s.Texture}, {"locality", s.Locality}, {"unit", s.Unit}, {"analysis_kind", s.AnalysisKind},
		{"generation", s.Generation}, {"published_method", s.PublishedMethod}, {"setting", s.Setting},
	} {
		r.visible(p+"."+c.key, c.text, "write the text or leave the key out")
	}
}

// visible refuses a text of blanks only.
func (r *reader) visible(p, text, do string) {
	if text != "" && trim(text) == "" && !r.bad[p] {
		r.complain(p, r.at[p], "value", "some text", problem.Quote(text)+", blanks only", do)
	}
}

// columns refuses composition columns of another kind than the source's.
func (r *reader) columns(s *Source, p string) {
	if r.bad[p+".composition"] {
		return
	}
	for _, header := range sortedKeys(s.Columns) {
		q, cp := s.Columns[header], p+".columns."+strconv.Quote(header)
		m, _, composition := q.Measurand()
		if composition && m.Kind() != s.Kind() && !r.bad[cp] {
			r.complain(cp, r.at[cp], "quantity", "a quantity of composition = "+strconv.Quote(s.Composition), problem.Quote(q.String())+", "+m.Kind().String(), `map it to "ignored", or give the source the other composition`)
		}
	}
}

// markers refuses a cell text that would mean two things.
func (r *reader) markers(s *Source, p string) {
	lists := []struct {
		name  string
		texts []string
	}{{"not_analysed", s.NotAnalysed}, {"below_detection", s.BelowDetection}, {"missing", s.Missing}}
	seen := map[string]string{}
	for _, l := range lists {
		lp := p + "." + l.name
		for i, text := range l.texts {
			folded := strings.ToLower(trim(text))
			if folded == "" {
				continue
			}
			before, twice := seen[folded]
			if twice && before != l.name && !r.bad[lp] {
				ip := fmt.Sprintf("%s[%d]", lp, i)
				at, given := r.at[ip]
				if !given { // a default: the other list holds the clash
					at = r.at[p+"."+before]
				}
				r.complain(lp, at, "value", "cell texts that mean one thing", problem.Quote(text)+" in "+before+" and in "+l.name, "give both lists, each without the other's texts")
			}
			if !twice {
				seen[folded] = l.name
			}
		}
		if l.name != "missing" && slices.ContainsFunc(l.texts, func(t string) bool { return trim(t) == "" }) {
			r.complain(lp, r.at[lp], "value", "cell texts that are not empty", "an empty text", "an empty cell always counts as missing")
		}
	}
}

// within reports limits out of order: each pair ascending, kept inside flagged.
func (r *reader) within(kept string, k [2]float64, flagged string, f [2]float64) {
	for _, l := range []struct {
		path string
		v    [2]float64
	}{{kept, k}, {flagged, f}} {
		r.ascending(l.path, l.v)
	}
	if !r.bad[kept] && !r.bad[flagged] && (f[0] > k[0] || f[1] < k[1]) {
		r.order(kept, fmt.Sprintf("[%g, %g]", k[0], k[1]), flagged, fmt.Sprintf("[%g, %g]", f[0], f[1]))
	}
}

func (r *reader) ascending(p string, v [2]float64) {
	if v[0] > v[1] && !r.bad[p] {
		r.complain(p, r.at[p], "value", "the lower limit first", fmt.Sprintf("[%g, %g]", v[0], v[1]), fmt.Sprintf("write [%g, %g]", v[1], v[0]))
	}
}

// prefer reports preferred sources that there are none of.
func (r *reader) prefer(m *Manifest) {
	var ids []string
	for i := range m.Sources {
		ids = append(ids, m.Sources[i].ID)
	}
	for i, id := range m.QC.Prefer {
		if slices.Contains(ids, id) {
			continue
		}
		do := ""
		if near := Nearest(id, ids); near != "" {
			do = "did you mean " + problem.Quote(near) + "?"
		}
		p := fmt.Sprintf("qc.prefer[%d]", i)
		r.complain(p, r.at[p], "source", "the id of a source of this manifest", problem.Quote(id), do)
	}
}

func (r *reader) atMost(inner string, i float64, outer string, o float64) {
	if !r.bad[inner] && !r.bad[outer] && i > o {
		r.order(inner, fmt.Sprintf("%g", i), outer, fmt.Sprintf("%g", o))
	}
}

func (r *reader) order(inner, i, outer, o string) {
	at, given := r.at[inner]
	if !given {
		at = r.at[outer]
	}
	r.complain(inner, at, "value", "the stricter limit inside the wider one", inner+" = "+i+" with "+outer+" = "+o, "give both")
}

// different refuses a list that names one thing twice.
func (r *reader) different(p string, texts []string) {
	seen := map[string]string{}
	for i, t := range texts {
		r.once(seen, t, fmt.Sprintf("%s[%d]", p, i), "leave one out")
	}
}

func sortedKeys[V any](m map[string]V) []string {
	var out []string
	for k := range m {
		out = append(out, k)
	}
	slices.Sort(out)
	return out
}
