package manifests

import (
	"bytes"
	_ "embed"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"reflect"
	"strings"

	"tieline/pipeline/problem"
)

// MaxBytes is how large a manifest may be. One of a thousand sources has a
// tenth of it.
const MaxBytes = 1 << 20

//go:generate go test -run TestSchemaIsCurrent -update .

//go:embed compilation.schema.json
var schema []byte

// Schema is the JSON Schema of a manifest's content, made from the struct
// Manifest by go generate.
func Schema() []byte { return bytes.Clone(schema) }

// Parse reads a manifest's text; name is what messages call it. The list is nil
// where there is no problem; the manifest is nil where there is one.
func Parse(name string, text []byte) (*Manifest, *problem.List) {
	r := newReader(name, bytes.TrimPrefix(text, []byte("\ufeff")))
	switch {
	case len(text) > MaxBytes:
		r.problems.Add(problem.Problem{Source: name, Kind: "size", Found: fmt.Sprintf("more than %d bytes of manifest", MaxBytes), Expected: "a manifest", Do: "is this a data file?"})
		return nil, r.problems
	case bytes.HasPrefix(text, []byte{0xff, 0xfe}) || bytes.HasPrefix(text, []byte{0xfe, 0xff}):
		r.problems.Add(problem.Problem{Source: name, Kind: "encoding", Found: "UTF-16 text", Expected: "UTF-8", Do: "save the manifest as UTF-8"})
		return nil, r.problems
	}
	m := defaults()
	if r.read(m) {
		r.fields(reflect.ValueOf(m).Elem(), "")
		for i := range m.Sources {
			m.Sources[i].fill()
		}
		r.check(m)
	}
	if r.problems.Len() > 0 {
		return nil, r.problems
	}
	m.at = r.at
	return m, nil
}

// Load reads the manifest in a folder, or the manifest file itself, and opens
// its folder, below which every source lies. The caller closes the root. The
// error is a *problem.List where the text is at fault.
func Load(name string) (*Manifest, *os.Root, error) {
	folder, file, err := locate(name)
	if err != nil {
		return nil, nil, err
	}
	root, err := os.OpenRoot(folder)
	if err != nil {
		return nil, nil, inWords(folder, err)
	}
	text, err := read(root, file, filepath.Join(folder, file))
	if err == nil {
		m, problems := Parse(filepath.Join(folder, file), text)
		if problems == nil {
			return m, root, nil
		}
		err = problems
	}
	return nil, nil, errors.Join(err, root.Close())
}

// locate finds the folder and the name of the manifest that a person names.
func locate(name string) (folder, file string, err error) {
	info, err := os.Stat(name)
	switch {
	case err != nil:
		return "", "", inWords(name, err)
	case info.IsDir():
		return name, FileName, nil
	}
	return filepath.Dir(name), filepath.Base(name), nil
}

// read gives the manifest's text. What is no regular file is refused before it
// is opened: opening a FIFO waits for a writer.
func read(root *os.Root, file, shown string) ([]byte, error) {
	info, err := root.Stat(file)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fmt.Errorf("%s: there is no such file; %s", problem.Clean(shown), others(root))
	}
	if err != nil {
		return nil, inWords(shown, err)
	}
	if !info.Mode().IsRegular() {
		return nil, fmt.Errorf("%s: this is %s; expected a manifest, a plain text file", problem.Clean(shown), kindOf(info.Mode()))
	}
	f, err := root.Open(file)
	if err != nil {
		return nil, inWords(shown, err)
	}
	text, err := io.ReadAll(io.LimitReader(f, MaxBytes+1))
	if err := errors.Join(err, f.Close()); err != nil {
		return nil, inWords(shown, err)
	}
	return text, nil
}

// others names the TOML files of a folder that has no manifest.
func others(root *os.Root) string {
	entries, err := fs.ReadDir(root.FS(), ".")
	var found []string
	for _, e := range entries {
		if err == nil && strings.HasSuffix(e.Name(), ".toml") && len(found) < 5 {
			found = append(found, problem.Quote(e.Name()))
		}
	}
	if len(found) == 0 {
		return "give a folder that holds " + FileName + ", or a manifest file"
	}
	return "the folder holds " + strings.Join(found, ", ") + ": give that file itself"
}

func kindOf(mode fs.FileMode) string {
	switch {
	case mode.IsDir():
		return "a folder"
	case mode&fs.ModeNamedPipe != 0:
		return "a named pipe"
	case mode&fs.ModeSocket != 0:
		return "a socket"
	case mode&fs.ModeDevice != 0:
		return "a device"
	}
	return "no plain file"
}

// inWords says what an error of the system means for the manifest.
func inWords(name string, err error) error {
	what := "it cannot be read"
	switch {
	case errors.Is(err, fs.ErrNotExist):
		what = "there is no such file or folder; give a folder that holds " + FileName + ", or a manifest file"
	case errors.Is(err, fs.ErrPermission):
		what = "you may not read it; change its permissions"
	case strings.Contains(err.Error(), "escapes"):
		what = "it is a link out of its folder; copy the manifest there"
	}
	return fmt.Errorf("%s: %s (%w)", problem.Clean(name), what, err)
}

// Canonical is the manifest as JSON, keys in the order of the struct and
// defaults filled in. Two manifests that mean the same give the same bytes.
func (m *Manifest) Canonical() []byte {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(m); err != nil {
		panic("manifests: " + err.Error()) // numbers are finite and quantities known once parsed
	}
	return bytes.TrimSuffix(b.Bytes(), []byte("\n"))
}

// FromCanonical reads what Canonical wrote, and nothing else.
func FromCanonical(text []byte) (*Manifest, error) {
	m := &Manifest{}
	d := json.NewDecoder(bytes.NewReader(text))
	d.DisallowUnknownFields()
	if err := d.Decode(m); err != nil {
		return nil, fmt.Errorf("canonical manifest: %w", err)
	}
	for i := range m.Sources {
		m.Sources[i].fill()
	}
	if !bytes.Equal(m.Canonical(), text) {
		return nil, errors.New("canonical manifest: written another way than tieline writes it; was it edited?")
	}
	r := &reader{name: "canonical manifest", bad: map[string]bool{}, problems: &problem.List{}}
	r.fields(reflect.ValueOf(m).Elem(), "")
	r.check(m)
	if err := r.problems.Err(); err != nil {
		return nil, err
	}
	return m, nil
}
