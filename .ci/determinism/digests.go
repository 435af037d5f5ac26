package main

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// line is one digest: of a file's bytes, or of a table's content as the record
// has it, which does not depend on the Parquet encoder.
type line struct{ Name, Kind, SHA256 string }

const heading = `# What a run of each compilation that ships must write, run.log aside. "content"
# is the digest of a table's values, "file" that of the bytes. After a wanted
# change: go run ./.ci/determinism -update
`

// digestResult lists the digests of a result folder, and makes sure that the
// record's own digests of its tables are true.
func digestResult(name, folder string) ([]line, error) {
	var all []line
	files := map[string]string{}
	err := filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || d.Name() == "run.log" {
			return err
		}
		text, err := os.ReadFile(path)
		if err != nil {
			return err
		}
		rel, err := filepath.Rel(folder, path)
		if err != nil {
			return err
		}
		sum := sha256.Sum256(text)
		files[filepath.ToSlash(rel)] = hex.EncodeToString(sum[:])
		all = append(all, line{name + "/" + filepath.ToSlash(rel), "file", hex.EncodeToString(sum[:])})
		return nil
	})
	if err != nil {
		return nil, err
	}
	tables, err := recordTables(folder)
	if err != nil {
		return nil, err
	}
	for _, t := range tables {
		if files[t.File] != t.SHA256 {
			return nil, fmt.Errorf("%s: record.json has %s for %s, whose SHA-256 is %s", name, t.SHA256, t.File, files[t.File])
		}
		all = append(all, line{name + "/" + t.File, "content", t.Content})
	}
	slices.SortFunc(all, func(a, b line) int {
		return strings.Compare(a.Name+" "+a.Kind, b.Name+" "+b.Kind)
	})
	return all, nil
}

type recordTable struct {
	File    string `json:"file"`
	SHA256  string `json:"sha256"`
	Content string `json:"content_sha256"`
}

func recordTables(folder string) ([]recordTable, error) {
	text, err := os.ReadFile(filepath.Join(folder, "record.json"))
	if err != nil {
		return nil, err
	}
	var record struct {
		Tables []recordTable `json:"tables"`
	}
	if err := json.Unmarshal(text, &record); err != nil {
		return nil, fmt.Errorf("%s/record.json: %w", folder, err)
	}
	if len(record.Tables) == 0 {
		return nil, fmt.Errorf("%s/record.json lists no table", folder)
	}
	for _, t := range record.Tables {
		if len(t.Content) != 64 || len(t.SHA256) != 64 {
			return nil, fmt.Errorf("%s/record.json: %s lacks a sha256 or content_sha256", folder, t.File)
		}
	}
	return record.Tables, nil
}

// compare says in words where two lists differ.
func compare(want, got []line) []string {
	type key struct{ name, kind string }
	wanted := map[key]string{}
	for _, w := range want {
		wanted[key{w.Name, w.Kind}] = w.SHA256
	}
	var all []string
	for _, g := range got {
		k := key{g.Name, g.Kind}
		switch w, ok := wanted[k]; {
		case !ok:
			all = append(all, fmt.Sprintf("%s (%s) is new", g.Name, g.Kind))
		case w != g.SHA256:
			all = append(all, fmt.Sprintf("%s (%s): %s, expected %s", g.Name, g.Kind, g.SHA256, w))
		}
		delete(wanted, k)
	}
	for _, w := range want {
		if _, left := wanted[key{w.Name, w.Kind}]; left {
			all = append(all, fmt.Sprintf("%s (%s) is missing", w.Name, w.Kind))
		}
	}
	return all
}

func format(lines []line) string {
	var b strings.Builder
	b.WriteString(heading)
	for _, l := range lines {
		fmt.Fprintf(&b, "%s %s %s\n", l.SHA256, l.Kind, l.Name)
	}
	return b.String()
}

func readGolden() ([]line, error) {
	text, err := os.ReadFile(golden)
	if err != nil {
		return nil, err
	}
	return parse(string(text))
}

func parse(text string) ([]line, error) {
	var all []line
	for l := range strings.Lines(text) {
		l = strings.TrimSuffix(l, "\n")
		if l == "" || strings.HasPrefix(l, "#") {
			continue
		}
		words := strings.SplitN(l, " ", 3)
		if len(words) != 3 {
			return nil, fmt.Errorf("%s: %q is not a digest, a kind and a name", golden, l)
		}
		all = append(all, line{words[2], words[1], words[0]})
	}
	return all, nil
}
