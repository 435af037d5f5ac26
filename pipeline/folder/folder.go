// Package folder holds the folder a run leaves: written out of sight beside its
// place and exchanged in one step, so that a result is there, whole, or not at
// all, and an older one is there until then.
package folder

import (
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"syscall"

	"github.com/gofrs/flock"

	"tieline/pipeline/problem"
)

// Policy says what may be replaced.
type Policy uint8

// The policies. An empty folder or one that holds a result of tieline may be
// replaced, with all that is in it; anything else never is.
const (
	Refuse         Policy = iota // a folder the user names: it must not exist
	Replace                      // a folder the user names, and says may be replaced
	ReplaceDefault               // the default folder of a compilation
)

// A result is written to .<base>.partial/result. The folder around it carries
// the mark, which says that whatever is left there by a killed run may go;
// where a file system cannot exchange two folders, the older result waits there
// as "old" for the moment between two renames.
const (
	markName   = ".tieline-partial"
	markText   = "A run of tieline writes here. A later run removes what a killed one left.\n"
	resultName = "result"
	oldName    = "old"
)

// Folder is a result being written. One goroutine uses it.
type Folder struct {
	name   string // as the user gave it
	target string // the same, absolute
	policy Policy
	lock   *flock.Flock
	made   []string // parents that were missing, innermost last
	staged bool     // the staging folder there is ours
	done   bool

	exchange func(a, b string) error
}

// Open takes the lock on target, clears what killed runs left, sees whether the
// policy allows a result there, and makes an empty folder for it beside target.
// Parents that are missing are made. Commit or Abandon must follow.
func Open(target string, replace Policy) (*Folder, error) {
	path, err := filepath.Abs(target)
	if err != nil {
		return nil, fmt.Errorf("result folder %s: %w", target, err)
	}
	if filepath.Dir(path) == path {
		return nil, fmt.Errorf("result folder %s: this is the root of the file system; name a folder in it", target)
	}
	f := &Folder{name: target, target: path, policy: replace, exchange: exchange}
	if err := f.takeLock(); err != nil {
		f.removeParents()
		return nil, fmt.Errorf("result folder %s: %w", target, err)
	}
	for _, step := range []func() error{f.clear, f.allowed, f.stage} {
		if err := step(); err != nil {
			f.Abandon()
			return nil, fmt.Errorf("result folder %s: %w", target, inWords(err))
		}
	}
	return f, nil
}

// inWords says what to do about a full disk.
func inWords(err error) error {
	if errors.Is(err, syscall.ENOSPC) || errors.Is(err, syscall.EDQUOT) {
		return fmt.Errorf("the disk is full: %w; make room, or write elsewhere with --out", err)
	}
	return err
}

// Path is the folder to write to. It is empty at first.
func (f *Folder) Path() string { return filepath.Join(f.staging(), resultName) }

func (f *Folder) beside(suffix string) string {
	return filepath.Join(filepath.Dir(f.target), "."+filepath.Base(f.target)+suffix)
}

func (f *Folder) staging() string { return f.beside(".partial") }

// stage makes the marked staging folder and the empty result folder in it.
func (f *Folder) stage() error {
	if err := os.Mkdir(f.staging(), 0o777); err != nil {
		return err
	}
	f.staged = true
	mark := filepath.Join(f.staging(), markName)
	if err := os.WriteFile(mark, []byte(markText), 0o666); err != nil {
		return err
	}
	// The mark must outlast a power cut that the rest outlasts.
	if err := errors.Join(syncFile(mark), syncFolder(f.staging())); err != nil {
		return err
	}
	return os.Mkdir(f.Path(), 0o777)
}

// clear removes what a killed run left: under the lock, and only what carries
// the mark, or is empty because the run was killed before it could mark it. A
// run killed between two renames has its older result put back first.
func (f *Folder) clear() error {
	info, err := os.Lstat(f.staging())
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return err
	}
	foreign := fmt.Errorf("%s is in the way and was not left by tieline; move or remove it", f.staging())
	if !info.IsDir() {
		return foreign
	}
	if os.Remove(f.staging()) == nil { // empty
		return nil
	}
	if text, err := readRegular(filepath.Join(f.staging(), markName)); err != nil || string(text) != markText {
		return foreign
	}
	if _, err := os.Lstat(f.target); errors.Is(err, fs.ErrNotExist) {
		err := os.Rename(filepath.Join(f.staging(), oldName), f.target)
		if err != nil && !errors.Is(err, fs.ErrNotExist) {
			return err
		}
	}
	return f.removeStaging()
}

// removeStaging takes the mark away last, so that a removal that is cut short
// can be taken up by the next run.
func (f *Folder) removeStaging() error {
	entries, err := os.ReadDir(f.staging())
	if err != nil {
		return err
	}
	for _, e := range entries {
		if e.Name() != markName {
			if err := removeAll(filepath.Join(f.staging(), e.Name())); err != nil {
				return err
			}
		}
	}
	if err := os.Remove(filepath.Join(f.staging(), markName)); err != nil && !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	return os.Remove(f.staging())
}

// removeAll also removes folders someone made read-only.
func removeAll(path string) error {
	if os.RemoveAll(path) == nil {
		return nil
	}
	filepath.WalkDir(path, func(p string, d fs.DirEntry, err error) error {
		if d != nil && d.IsDir() {
			os.Chmod(p, 0o700)
		}
		return nil
	})
	return os.RemoveAll(path)
}

// allowed says why there may be no result at target, or nil.
// ours are the names a run leaves in its folder.
var ours = []string{"record.json", "run.log", "tables"}

// onlyOurs refuses to replace a result that somebody put something into.
func (f *Folder) onlyOurs(entries []fs.DirEntry) error {
	tables, err := os.ReadDir(filepath.Join(f.target, "tables"))
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	for _, e := range entries {
		if !slices.Contains(ours, e.Name()) {
			return foreign(e.Name())
		}
	}
	for _, e := range tables {
		if e.IsDir() || filepath.Ext(e.Name()) != ".parquet" {
			return foreign("tables/" + e.Name())
		}
	}
	return nil
}

func foreign(name string) error {
	return fmt.Errorf("it holds %s, which no run of tieline left there and replacing would delete; move it", problem.Quote(name))
}

func (f *Folder) allowed() error {
	info, err := os.Lstat(f.target)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil
	case err != nil:
		return err
	case info.Mode()&fs.ModeSymlink != 0:
		return errors.New("this is a link, and a run would replace the link; name the folder it leads to")
	case !info.IsDir():
		return errors.New("there is a file of this name; name another folder with --out")
	case f.policy == Refuse:
		return errors.New("it exists; give --replace to have it replaced, or name another folder with --out")
	}
	entries, err := os.ReadDir(f.target)
	switch {
	case err != nil:
		return err
	case len(entries) == 0:
		return nil
	case madeByTieline(f.target):
		return f.onlyOurs(entries)
	case f.policy == ReplaceDefault:
		return errors.New("it exists and holds no result of tieline (no record.json made by tieline); move it, or name another folder with --out")
	}
	return errors.New("it holds no result of tieline (no record.json made by tieline), and --replace replaces nothing else; move it, or name another folder with --out")
}

// madeByTieline says whether the folder holds a record of this program.
func madeByTieline(dir string) bool {
	text, err := readRegular(filepath.Join(dir, "record.json"))
	var record struct {
		MadeBy string `json:"made_by"`
	}
	return err == nil && json.Unmarshal(text, &record) == nil && record.MadeBy == "tieline"
}

// readRegular reads a file and nothing else: a pipe of this name would hang.
func readRegular(path string) ([]byte, error) {
	info, err := os.Lstat(path)
	if err != nil {
		return nil, err
	}
	if !info.Mode().IsRegular() {
		return nil, fmt.Errorf("%s is not a regular file", path)
	}
	return os.ReadFile(path)
}

// Commit puts the result in its place: to the disk first, then in one step. On
// an error what was at target is there as before; Abandon must follow.
func (f *Folder) Commit() error {
	if f.done {
		return errors.New("result folder: already committed or abandoned")
	}
	for _, step := range []func() error{f.allowed, func() error { return syncTree(f.Path()) }, f.place} {
		if err := step(); err != nil {
			return fmt.Errorf("result folder %s: %w", f.name, err)
		}
	}
	syncFolder(filepath.Dir(f.target)) // the result is in place and whole whatever this says
	f.done = true
	f.removeStaging() // holds the older result now; what cannot be removed the next run meets
	f.releaseLock()
	return nil
}

// place moves the result to target, and what was there to the staging folder.
func (f *Folder) place() error {
	if _, err := os.Lstat(f.target); errors.Is(err, fs.ErrNotExist) {
		return os.Rename(f.Path(), f.target)
	}
	err := f.exchange(f.Path(), f.target)
	if !errors.Is(err, errors.ErrUnsupported) {
		return err
	}
	old := filepath.Join(f.staging(), oldName)
	if err := os.Rename(f.target, old); err != nil {
		return err
	}
	if err := os.Rename(f.Path(), f.target); err != nil {
		return errors.Join(err, os.Rename(old, f.target))
	}
	return nil
}

// syncTree has every file and folder below dir on the disk.
func syncTree(dir string) error {
	return filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
		switch {
		case err != nil:
			return err
		case d.IsDir():
			return syncFolder(path)
		case d.Type().IsRegular():
			return syncFile(path)
		}
		return fmt.Errorf("%s is neither a file nor a folder", path)
	})
}

func syncFile(path string) error {
	file, err := os.OpenFile(path, os.O_RDWR, 0)
	if err != nil {
		return err
	}
	return errors.Join(file.Sync(), file.Close())
}

// Abandon removes what was written and the parents Open made. After Commit, or
// a second time, it does nothing.
func (f *Folder) Abandon() {
	if f.done {
		return
	}
	f.done = true
	if f.staged {
		f.removeStaging()
	}
	f.releaseLock()
	f.removeParents()
}

func (f *Folder) removeParents() {
	for _, p := range slices.Backward(f.made) {
		os.Remove(p) // only if empty
	}
}
