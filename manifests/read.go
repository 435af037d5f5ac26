package manifests

import (
	"errors"
	"fmt"
	"math"
	"reflect"
	"sort"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2"
	"github.com/pelletier/go-toml/v2/unstable"

	"tieline/pipeline/problem"
)

// reader walks the syntax tree of a manifest against the struct it fills.
// go-toml's own decoder stops at the first wrong type and knows no positions of
// the values it set; here every problem is collected and every key's place kept.
type reader struct {
	name       string
	text       []byte
	lines      []int    // where each line of the text begins
	seen       position // the last position asked for, at seenOffset
	seenOffset int
	at         positions
	bad        map[string]bool // paths already complained of
	problems   *problem.List
}

func newReader(name string, text []byte) *reader {
	r := &reader{name: name, text: text, lines: []int{0}, at: positions{}, bad: map[string]bool{}, problems: &problem.List{}}
	for i, c := range text {
		if c == '\n' {
			r.lines = append(r.lines, i+1)
		}
	}
	return r
}

// table is where the key-values that follow a header go: a struct or a map.
type table struct {
	v    reflect.Value // not valid: the header made no sense, its keys are passed over
	path string
}

// read fills m from r.text. It gives false where the text is no TOML.
func (r *reader) read(m *Manifest) bool {
	var p unstable.Parser
	p.Reset(r.text)
	root := table{v: reflect.ValueOf(m).Elem()}
	current := root
	before := r.problems.Len()
	for p.NextExpression() {
		switch e := p.Expression(); e.Kind {
		case unstable.Table, unstable.ArrayTable:
			current = r.header(root, e)
		case unstable.KeyValue:
			if current.v.IsValid() {
				r.keyValue(current, e)
			}
		}
	}
	if err := p.Error(); err != nil {
		r.syntax(err)
		return false
	}
	// Rules across expressions (a table defined twice, a dotted key into an
	// inline table) are the library's; it names the first breach only.
	if r.problems.Len() == before {
		var whole map[string]any
		if err := toml.Unmarshal(r.text, &whole); err != nil {
			r.syntax(err)
			return false
		}
	}
	return true
}

// syntax reports what the TOML library says of the text.
func (r *reader) syntax(err error) {
	p := problem.Problem{Source: r.name, Kind: "syntax", Found: "this is no TOML: " + err.Error(), Do: "see https://toml.io for how TOML is written"}
	var parse *unstable.ParserError
	var decode *toml.DecodeError
	switch {
	case errors.As(err, &parse):
		at := r.position(cap(r.text) - cap(parse.Highlight))
		p.Line, p.Column = at.line, at.column
		p.Found = "this is no TOML: " + problem.Clean(parse.Message)
	case errors.As(err, &decode):
		line, column := decode.Position() // the column in bytes
		at := r.position(r.lines[line-1] + column - 1)
		p.Line, p.Column = at.line, at.column
		p.Found = "this is no TOML: " + problem.Clean(strings.TrimPrefix(decode.Error(), "toml: "))
	}
	r.problems.Add(p)
}

// header resolves a [table] or [[table]] header.
func (r *reader) header(root table, e *unstable.Node) table {
	keys := keysOf(e)
	at := r.position(int(keys[0].Raw.Offset))
	t := root
	for i, k := range keys {
		name := string(k.Data)
		last := i == len(keys)-1
		f, path, ok := r.field(t, k)
		if !ok {
			return table{}
		}
		switch {
		case isTables(f.Type()):
			if last {
				if e.Kind == unstable.Table {
					r.complain(path, at, "table", "[["+name+"]]", "["+name+"]", "write double brackets, one pair for each "+name)
				}
				f.Set(reflect.Append(f, reflect.Zero(f.Type().Elem())))
			}
			if f.Len() == 0 {
				r.complain(path, at, "table", "a [["+name+"]] before it", "["+dotted(keys)+"]", "begin the "+name+" with [["+name+"]]")
				return table{}
			}
			path = fmt.Sprintf("%s[%d]", path, f.Len()-1)
			t = table{f.Index(f.Len() - 1), path}
		case f.Kind() == reflect.Struct || f.Kind() == reflect.Map:
			if last && e.Kind == unstable.ArrayTable {
				r.complain(path, at, "table", "["+dotted(keys)+"]", "[["+dotted(keys)+"]]", "write single brackets; there is one "+name)
			}
			t = table{f, path}
		default:
			r.complain(path, at, "table", words(f.Type()), "a table", "write "+name+" = ... instead")
			return table{}
		}
	}
	if first, ok := r.at[t.path]; ok {
		r.complain(t.path, at, "duplicate key", "", "a second ["+dotted(keys)+"]", fmt.Sprintf("join it with the one on line %d", first.line))
	} else {
		r.at[t.path] = at
	}
	return t
}

// keyValue puts one key = value where it belongs.
func (r *reader) keyValue(t table, e *unstable.Node) {
	keys := keysOf(e)
	for _, k := range keys[:len(keys)-1] {
		f, path, ok := r.field(t, k)
		if !ok {
			return
		}
		if f.Kind() != reflect.Struct && f.Kind() != reflect.Map {
			r.complain(path, r.position(int(k.Raw.Offset)), "type", words(f.Type()), "a table", "see compilation.schema.json")
			return
		}
		t = table{f, path}
	}
	k := keys[len(keys)-1]
	at := r.position(int(k.Raw.Offset))
	if t.v.Kind() == reflect.Map {
		path := t.path + "." + strconv.Quote(string(k.Data))
		if !r.first(path, at) {
			return
		}
		if v, ok := r.value(t.v.Type().Elem(), e.Value(), path); ok {
			if t.v.IsNil() {
				t.v.Set(reflect.MakeMap(t.v.Type()))
			}
			t.v.SetMapIndex(reflect.ValueOf(string(k.Data)), v)
		}
		return
	}
	f, path, ok := r.field(t, k)
	if !ok || !r.first(path, at) {
		return
	}
	if f.Kind() == reflect.Struct && e.Value().Kind == unstable.InlineTable {
		r.inline(table{f, path}, e.Value()) // in place: what it leaves out keeps its default
		return
	}
	if v, ok := r.value(f.Type(), e.Value(), path); ok {
		f.Set(v)
	}
}

// field finds the struct field a key names.
func (r *reader) field(t table, k *unstable.Node) (reflect.Value, string, bool) {
	at := r.position(int(k.Raw.Offset))
	name := string(k.Data)
	if t.v.Kind() != reflect.Struct {
		r.complain(t.path+"."+strconv.Quote(name), at, "type", words(t.v.Type().Elem()), "a table", "see compilation.schema.json")
		return reflect.Value{}, "", false
	}
	known := keyNames(t.v.Type())
	for i, n := range known {
		if n == name && n != "" {
			return t.v.Field(i), join(t.path, name), true
		}
	}
	do := "the keys here are " + either(compact(known))
	if near := Nearest(name, compact(known)); near != "" {
		do = "did you mean " + problem.Quote(near) + "?"
	}
	r.add(at, join(t.path, name), "unknown key", "an unknown key "+problem.Quote(name), "", do)
	return reflect.Value{}, "", false
}

// first remembers where a key stands, and refuses it the second time.
func (r *reader) first(path string, at position) bool {
	if before, ok := r.at[path]; ok {
		r.complain(path, at, "duplicate key", "", "the key a second time", fmt.Sprintf("it stands on line %d already", before.line))
		return false
	}
	r.at[path] = at
	return true
}

// value makes a Go value of type t from a TOML value.
func (r *reader) value(t reflect.Type, n *unstable.Node, path string) (reflect.Value, bool) {
	if n.Raw.Length > 0 {
		r.at[path] = r.position(int(n.Raw.Offset))
	}
	if t.Kind() == reflect.Pointer {
		v, ok := r.value(t.Elem(), n, path)
		if !ok {
			return v, false
		}
		p := reflect.New(t.Elem())
		p.Elem().Set(v)
		return p, true
	}
	v := reflect.New(t).Elem()
	switch {
	case t == reflect.TypeFor[toml.LocalDate]():
		return v, r.date(v, n, path)
	case t == reflect.TypeFor[Quantity]():
		return v, r.quantity(v, n, path)
	case n.Kind == unstable.Array && (t.Kind() == reflect.Slice || t.Kind() == reflect.Array):
		return v, r.list(v, n, path)
	case n.Kind == unstable.InlineTable && (t.Kind() == reflect.Struct || t.Kind() == reflect.Map):
		r.inline(table{v, path}, n)
		return v, true
	case n.Kind == unstable.String && t.Kind() == reflect.String:
		v.SetString(string(n.Data))
		return v, true
	case (n.Kind == unstable.Float || n.Kind == unstable.Integer) && t.Kind() == reflect.Float64:
		return v, r.float(v, n, path)
	case n.Kind == unstable.Integer && t.Kind() == reflect.Uint64:
		return v, r.whole(v, n, path)
	}
	return v, r.wrong(t, n, path)
}

func (r *reader) inline(t table, n *unstable.Node) {
	children := n.Children()
	for children.Next() {
		r.keyValue(t, children.Node())
	}
}

func (r *reader) date(v reflect.Value, n *unstable.Node, path string) bool {
	if n.Kind != unstable.LocalDate {
		return r.wrong(v.Type(), n, path)
	}
	d := v.Addr().Interface().(*toml.LocalDate)
	if err := d.UnmarshalText(n.Data); err != nil {
		r.complain(path, r.at[path], "date", "a day of the calendar, YYYY-MM-DD", shown(n), "")
		return false
	}
	return true
}

func (r *reader) quantity(v reflect.Value, n *unstable.Node, path string) bool {
	if n.Kind != unstable.String {
		return r.wrong(v.Type(), n, path)
	}
	q, err := ParseQuantity(string(n.Data))
	if err != nil {
		do := `write "ignored" to pass the column over; the names are listed under columns in compilation.schema.json`
		if near := Nearest(string(n.Data), quantityNames()); near != "" {
			do = "did you mean " + problem.Quote(near) + "?"
		}
		r.complain(path, r.at[path], "quantity", "the name of a quantity", problem.Quote(string(n.Data)), do)
		return false
	}
	v.Set(reflect.ValueOf(q))
	return true
}

func (r *reader) list(v reflect.Value, n *unstable.Node, path string) bool {
	ok := true
	count := 0
	out := v
	if v.Kind() == reflect.Slice {
		out = reflect.MakeSlice(v.Type(), 0, 0)
	}
	children := n.Children()
	for ; children.Next(); count++ {
		itemPath := fmt.Sprintf("%s[%d]", path, count)
		r.at[itemPath] = r.at[path]
		item, good := r.value(v.Type().Elem(), children.Node(), itemPath)
		switch {
		case !good:
			ok = false
		case v.Kind() == reflect.Slice:
			out = reflect.Append(out, item)
		case count < v.Len():
			out.Index(count).Set(item)
		}
	}
	if v.Kind() == reflect.Array && count != v.Len() {
		r.complain(path, r.at[path], "type", words(v.Type()), fmt.Sprintf("a list of %d", count), "")
		return false
	}
	if ok && v.Kind() == reflect.Slice {
		v.Set(out)
	}
	return ok
}

// float reads a number. A TOML float may be written as an integer.
func (r *reader) float(v reflect.Value, n *unstable.Node, path string) bool {
	text := string(n.Data)
	var f float64
	var err error
	if n.Kind == unstable.Integer {
		var i int64
		i, err = strconv.ParseInt(text, 0, 64)
		f = float64(i)
	} else {
		f, err = strconv.ParseFloat(strings.ReplaceAll(text, "_", ""), 64)
	}
	if err != nil || math.IsNaN(f) || math.IsInf(f, 0) {
		r.complain(path, r.at[path], "number", "a finite number", shown(n), "leave the key out where there is no number")
		return false
	}
	v.SetFloat(f)
	return true
}

func (r *reader) whole(v reflect.Value, n *unstable.Node, path string) bool {
	i, err := strconv.ParseInt(string(n.Data), 0, 64)
	if err != nil || i < 0 {
		r.complain(path, r.at[path], "number", fmt.Sprintf("a whole number from 0 to %d", math.MaxInt64), shown(n), "")
		return false
	}
	v.SetUint(uint64(i))
	return true
}

func (r *reader) wrong(t reflect.Type, n *unstable.Node, path string) bool {
	do := ""
	switch {
	case t == reflect.TypeFor[toml.LocalDate]() && n.Kind == unstable.String:
		do = "write it without quotes"
	case t == reflect.TypeFor[toml.LocalDate]() && (n.Kind == unstable.DateTime || n.Kind == unstable.LocalDateTime):
		do = "leave out the time"
	case n.Kind == unstable.String && (t.Kind() == reflect.Float64 || t.Kind() == reflect.Uint64):
		do = "write the number without quotes, with a decimal point"
	case t.Kind() == reflect.String || t == reflect.TypeFor[Quantity]():
		do = "put it in quotes"
	case t.Kind() == reflect.Slice && n.Kind == unstable.String:
		do = "write [" + problem.Quote(string(n.Data)) + "]"
	}
	if n.Kind == unstable.Array || n.Kind == unstable.InlineTable {
		do = ""
	}
	r.complain(path, r.at[path], "type", words(t), shown(n), do)
	return false
}

// complain reports a problem of a known key and marks it, so that nothing
// further is said of its value.
func (r *reader) complain(path string, at position, kind, expected, found, do string) {
	r.bad[path] = true
	r.add(at, path, kind, found, expected, do)
}

func (r *reader) add(at position, path, kind, found, expected, do string) {
	r.problems.Add(problem.Problem{Source: r.name, Line: at.line, Column: at.column, Name: path, Kind: kind, Found: found, Expected: expected, Do: do})
}

// position turns an offset in the text into a line and a column in characters.
func (r *reader) position(offset int) position {
	line := sort.Search(len(r.lines), func(i int) bool { return r.lines[i] > offset })
	// Offsets come in reading order, so a long line is counted once and not
	// once for each of its values.
	from, column := r.lines[line-1], 1
	if r.seen.line == line && r.seenOffset <= offset {
		from, column = r.seenOffset, r.seen.column
	}
	r.seen = position{line, column + utf8.RuneCount(r.text[from:min(offset, len(r.text))])}
	r.seenOffset = offset
	return r.seen
}

func keysOf(e *unstable.Node) []*unstable.Node {
	var out []*unstable.Node
	for it := e.Key(); it.Next(); {
		out = append(out, it.Node())
	}
	return out
}

func dotted(keys []*unstable.Node) string {
	var parts []string
	for _, k := range keys {
		parts = append(parts, problem.Clean(string(k.Data)))
	}
	return strings.Join(parts, ".")
}

func join(path, name string) string {
	if path == "" {
		return name
	}
	return path + "." + name
}

// keyNames gives the TOML key of each field, "" for those that have none.
func keyNames(t reflect.Type) []string {
	out := make([]string, t.NumField())
	for i := range out {
		out[i] = t.Field(i).Tag.Get("toml")
	}
	return out
}

func compact(names []string) []string {
	var out []string
	for _, n := range names {
		if n != "" {
			out = append(out, n)
		}
	}
	return out
}

func isTables(t reflect.Type) bool {
	return t.Kind() == reflect.Slice && t.Elem().Kind() == reflect.Struct
}

// words says what a key takes.
func words(t reflect.Type) string {
	switch {
	case t == reflect.TypeFor[toml.LocalDate]():
		return "a date such as 2026-11-30"
	case t == reflect.TypeFor[Quantity]():
		return "the name of a quantity in quotes"
	case isTables(t):
		return "tables, each begun with double brackets"
	}
	switch t.Kind() {
	case reflect.Pointer:
		return words(t.Elem())
	case reflect.String:
		return "text in quotes"
	case reflect.Float64:
		return "a number"
	case reflect.Uint64:
		return "a whole number"
	case reflect.Slice:
		return "a list such as [\"...\", \"...\"]"
	case reflect.Array:
		return fmt.Sprintf("a list of %d numbers such as [98, 102]", t.Len())
	}
	return "a table"
}

// shown is a value for a message.
func shown(n *unstable.Node) string {
	switch n.Kind {
	case unstable.String:
		return "the text " + problem.Quote(string(n.Data))
	case unstable.Array:
		return "a list"
	case unstable.InlineTable:
		return "a table"
	}
	return problem.Clean(string(n.Data))
}
