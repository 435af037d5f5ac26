package manifests

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"

	"tieline/pipeline/problem"
)

func write(t *testing.T, name, text string) string {
	t.Helper()
	if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	return name
}

func TestLoadTakesTheFolderOrTheFile(t *testing.T) {
	folder := t.TempDir()
	write(t, filepath.Join(folder, FileName), smallest)
	write(t, filepath.Join(folder, "a.csv"), "x\n")
	other := write(t, filepath.Join(folder, "other.toml"), strings.Replace(smallest, "least", "other", 1))
	for name, want := range map[string]string{folder: "least", filepath.Join(folder, FileName): "least", other: "other"} {
		m, root, err := Load(name)
		if err != nil {
			t.Fatal(err)
		}
		if m.Compilation.ID != want {
			t.Errorf("%s: compilation %s, want %s", name, m.Compilation.ID, want)
		}
		if _, err := root.Stat("a.csv"); err != nil {
			t.Errorf("%s: the root is not at the manifest's folder: %v", name, err)
		}
		if err := root.Close(); err != nil {
			t.Error(err)
		}
	}
}

func TestLoadSaysWhatIsWrong(t *testing.T) {
	folder := t.TempDir()
	in := func(names ...string) string { return filepath.Join(append([]string{folder}, names...)...) }
	for _, d := range []string{"empty", "others", "sub", "sub/" + FileName, "linked", "fifo", "wrong"} {
		if err := os.Mkdir(in(d), 0o755); err != nil {
			t.Fatal(err)
		}
	}
	write(t, in("others", "terrane.toml"), smallest)
	write(t, in("wrong", FileName), "[compilation]\nid = 7\n")
	write(t, in("big.toml"), strings.Repeat("#\n", MaxBytes))
	if err := syscall.Mkfifo(in("fifo", FileName), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(in("others", "terrane.toml"), in("linked", FileName)); err != nil {
		t.Fatal(err)
	}
	for what, c := range map[string]struct{ name, holds string }{
		"nothing there":        {in("nowhere"), "there is no such file or folder; give a folder that holds compilation.toml"},
		"empty folder":         {in("empty"), "give a folder that holds compilation.toml"},
		"manifest of own name": {in("others"), `the folder holds "terrane.toml": give that file itself`},
		"folder for a file":    {in("sub"), "this is a folder; expected a manifest"},
		"named pipe":           {in("fifo"), "this is a named pipe; expected a manifest"},
		"device":               {"/dev/null", "this is a device; expected a manifest"},
		"link out":             {in("linked"), "a link out of its folder"},
		"too large":            {in("big.toml"), "more than 1048576 bytes"},
		"wrong type":           {in("wrong"), "compilation.toml:2:6 (compilation.id): 7; expected text in quotes"},
	} {
		t.Run(what, func(t *testing.T) {
			done := make(chan error, 1)
			go func() {
				_, _, err := Load(c.name)
				done <- err
			}()
			select {
			case err := <-done:
				if err == nil || !strings.Contains(err.Error(), c.holds) {
					t.Errorf("got %v\nwant it to hold %q", err, c.holds)
				}
			case <-time.After(10 * time.Second):
				t.Fatal("still waiting after 10 s")
			}
		})
	}
}

func TestLoadErrorsAreOfUse(t *testing.T) {
	folder := t.TempDir()
	_, _, err := Load(filepath.Join(folder, "nowhere"))
	if !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("a missing folder is no fs.ErrNotExist: %v", err)
	}
	write(t, filepath.Join(folder, FileName), "x = 1\n")
	_, _, err = Load(folder)
	var list *problem.List
	if !errors.As(err, &list) || list.Len() != 3 {
		t.Errorf("a wrong manifest gives no list of 3 problems: %v", err)
	}
}
