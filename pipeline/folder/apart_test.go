package folder

import (
	"os"
	"path/filepath"
	"testing"
)

func TestApart(t *testing.T) {
	dir := t.TempDir()
	for _, d := range []string{"in/data", "out"} {
		if err := os.MkdirAll(filepath.Join(dir, d), 0o777); err != nil {
			t.Fatal(err)
		}
	}
	if err := os.Symlink(filepath.Join(dir, "in"), filepath.Join(dir, "link")); err != nil {
		t.Fatal(err)
	}
	inputs := []string{filepath.Join(dir, "in", "compilation.toml"), filepath.Join(dir, "in", "data", "t.csv")}
	for target, ok := range map[string]bool{
		"out": true, "out/x": true, "in/result": true, "in/data/result": true, "new": true, "in-2": true,
		"in": false, ".": false, "in/data": false, "link": false, "link/data": false,
	} {
		err := Apart(filepath.Join(dir, filepath.FromSlash(target)), inputs)
		if (err == nil) != ok {
			t.Errorf("result folder %s beside inputs in in and in/data: %v", target, err)
		}
	}
}
