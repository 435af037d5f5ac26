package manifests

// position is where a key stands in the manifest's text, both 1-based, the column in characters.
type position struct{ line, column int }

// positions maps a key path, source[0].file, to where it stands.
type positions map[string]position

// At gives where the key of a path such as "methods.use[0]" or
// "source[1].file" stands in the text the manifest was read from; 0, 0 where it
// was left out or the manifest came from a record.
func (m *Manifest) At(path string) (line, column int) {
	p := m.at[path]
	return p.line, p.column
}
