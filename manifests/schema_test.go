package manifests

import (
	"bytes"
	"encoding/json"
	"flag"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"github.com/invopop/jsonschema"
	"github.com/pelletier/go-toml/v2"
	validator "github.com/santhosh-tekuri/jsonschema/v6"

	"tieline/thermo/chem"
)

var update = flag.Bool("update", false, "write compilation.schema.json")

// generate makes the schema of the struct Manifest: keys and rules from its
// tags, descriptions from its comments, defaults from defaults and fill.
func generate(t *testing.T) []byte {
	t.Helper()
	r := jsonschema.Reflector{
		Anonymous: true, RequiredFromJSONSchemaTags: true, ExpandedStruct: true, FieldNameTag: "toml",
		Mapper: func(t reflect.Type) *jsonschema.Schema {
			switch t {
			case reflect.TypeFor[toml.LocalDate]():
				return &jsonschema.Schema{Type: "string", Format: "date", Pattern: "^[0-9]{4}-[0-9]{2}-[0-9]{2}$"}
			case reflect.TypeFor[Quantity]():
				return &jsonschema.Schema{Type: "string", Enum: anys(quantityNames())}
			case reflect.TypeFor[chem.Phase]():
				return &jsonschema.Schema{Type: "string", Enum: anys(chem.Phases())}
			}
			return nil
		},
	}
	if err := r.AddGoComments("tieline/manifests", "."); err != nil {
		t.Fatal(err)
	}
	s := r.Reflect(&Manifest{})
	s.Title = "tieline compilation"
	s.Description = "What one run of tieline depends on, as TOML."
	source := s.Definitions["Source"]
	apfu := jsonschema.NewProperties()
	apfu.Set("composition", &jsonschema.Schema{Const: chem.Apfu.String()})
	source.If = &jsonschema.Schema{Properties: apfu, Required: []string{"composition"}}
	source.Then = &jsonschema.Schema{Required: []string{"oxygens"}}

	m := defaults()
	m.Sources = []Source{{}}
	m.Sources[0].fill()
	var values map[string]any
	if err := json.Unmarshal(m.Canonical(), &values); err != nil {
		t.Fatal(err)
	}
	setDefaults(source, values["source"].([]any)[0].(map[string]any), "id", "file", "separator")
	for table, definition := range map[string]string{"normalisation": "Normalisation", "qc": "QC", "pairing": "Pairing", "reintegration": "Reintegration", "pressure": "Pressure", "uncertainty": "Uncertainty"} {
		setDefaults(s.Definitions[definition], values[table].(map[string]any))
	}
	out, err := json.MarshalIndent(s, "", "  ")
	if err != nil {
		t.Fatal(err)
	}
	return append(out, '\n')
}

func setDefaults(s *jsonschema.Schema, values map[string]any, except ...string) {
	for p := s.Properties.Oldest(); p != nil; p = p.Next() {
		v, ok := values[p.Key]
		for _, e := range except {
			ok = ok && e != p.Key
		}
		if ok {
			p.Value.Default = v
		}
	}
}

func anys[T any](in []T) []any {
	var out []any
	for _, v := range in {
		out = append(out, v)
	}
	return out
}

func TestSchemaIsCurrent(t *testing.T) {
	want := generate(t)
	if *update {
		if err := os.WriteFile("compilation.schema.json", want, 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	if !bytes.Equal(Schema(), want) {
		t.Error("compilation.schema.json is not what the struct Manifest gives; run: go generate ./manifests")
	}
}

func TestEveryKeyIsDescribed(t *testing.T) {
	var s jsonschema.Schema
	if err := json.Unmarshal(Schema(), &s); err != nil {
		t.Fatal(err)
	}
	for name, d := range s.Definitions {
		for p := d.Properties.Oldest(); p != nil; p = p.Next() {
			if p.Value.Description == "" {
				t.Errorf("%s.%s has no description", name, p.Key)
			}
		}
	}
}

func compiled(t *testing.T) *validator.Schema {
	t.Helper()
	doc, err := validator.UnmarshalJSON(bytes.NewReader(Schema()))
	if err != nil {
		t.Fatal(err)
	}
	c := validator.NewCompiler()
	c.AssertFormat()
	if err := c.AddResource("compilation.schema.json", doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("compilation.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// jsonValue is what the schema judges of a TOML text.
func jsonValue(t *testing.T, text []byte) any {
	t.Helper()
	var v map[string]any
	if err := toml.Unmarshal(text, &v); err != nil {
		t.Fatal(err)
	}
	j, err := json.Marshal(v)
	if err != nil {
		t.Fatal(err)
	}
	out, err := validator.UnmarshalJSON(bytes.NewReader(j))
	if err != nil {
		t.Fatal(err)
	}
	return out
}

func TestSchemaAcceptsWhatShips(t *testing.T) {
	s := compiled(t)
	files, err := filepath.Glob("*/" + FileName)
	if err != nil || len(files) < 3 {
		t.Fatalf("found %d compilations, %v; expected demo, elkins-grove-1990, cms-brackets", len(files), err)
	}
	for _, f := range files {
		text, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		if err := s.Validate(jsonValue(t, text)); err != nil {
			t.Errorf("%s: %v", f, err)
		}
		m, problems := Parse(f, text)
		if problems != nil {
			t.Fatal(problems)
		}
		doc, err := validator.UnmarshalJSON(bytes.NewReader(m.Canonical()))
		if err != nil {
			t.Fatal(err)
		}
		if err := s.Validate(doc); err != nil {
			t.Errorf("%s, canonical: %v", f, err)
		}
	}
}

func TestSchemaRefuses(t *testing.T) {
	s := compiled(t)
	if err := s.Validate(jsonValue(t, []byte(whole))); err != nil {
		t.Fatalf("the text the cases change is refused itself: %v", err)
	}
	for _, c := range []struct{ what, old, new string }{
		{"unknown key", `licence =`, `license =`},
		{"wrong type", `title = "Whole"`, `title = 7`},
		{"missing key", `title = "Whole"`, ``},
		{"id with a capital", `id = "whole"`, `id = "Whole"`},
		{"date with a time", `2026-11-30`, `2026-11-30T10:00:00`},
		{"unknown quantity", `"sample"`, `"smple"`},
		{"unknown phase", `"Afs"`, `"Kspar"`},
		{"separator of another kind", `"semicolon"`, `"pipe"`},
		{"apfu without oxygens", `oxygens = 6`, ``},
		{"three limits", `[98.5, 101.5]`, `[98.5, 101.5, 102]`},
		{"sigma below 1.5 kbar", `default_sigma_kbar = 2`, `default_sigma_kbar = 1.4`},
		{"unknown group", `by = ["unit"]`, `by = ["units"]`},
	} {
		if strings.Count(whole, c.old) != 1 {
			t.Fatalf("%s: %q is in the text %d times", c.what, c.old, strings.Count(whole, c.old))
		}
		text := strings.Replace(whole, c.old, c.new, 1)
		if s.Validate(jsonValue(t, []byte(text))) == nil {
			t.Errorf("%s: the schema accepts it", c.what)
		}
		if _, problems := Parse("m", []byte(text)); problems == nil {
			t.Errorf("%s: Parse accepts it", c.what)
		}
	}
}

func TestTagsAgree(t *testing.T) {
	var walk func(reflect.Type)
	walk = func(ty reflect.Type) {
		for i := range ty.NumField() {
			f := ty.Field(i)
			name, _, _ := strings.Cut(f.Tag.Get("json"), ",")
			if f.IsExported() && (name == "" || name != f.Tag.Get("toml")) {
				t.Errorf("%s.%s: toml %q, json %q", ty, f.Name, f.Tag.Get("toml"), name)
			}
			e := f.Type
			if e.Kind() == reflect.Slice {
				e = e.Elem()
			}
			if e.Kind() == reflect.Struct && e.PkgPath() == ty.PkgPath() {
				walk(e)
			}
		}
	}
	walk(reflect.TypeFor[Manifest]())
}
