package folder

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/gofrs/flock"
)

// lockTries is how often a lock is tried again because another run removed the
// lock file, or a parent it had made, between two steps of ours.
const lockTries = 100

// takeLock makes the missing parents and locks .<base>.lock beside target. The
// system lets go of the lock of a killed run. A run removes its lock file when
// it is done, so a lock only counts while its file still has the name.
func (f *Folder) takeLock() error {
	var err error
	for range lockTries {
		if err := f.makeParents(); err != nil {
			return fmt.Errorf("%w; name another folder with --out", err)
		}
		if info, err := os.Lstat(f.beside(".lock")); err == nil && !info.Mode().IsRegular() {
			return fmt.Errorf("%s is in the way and is no lock of tieline; move or remove it", f.beside(".lock"))
		}
		lock := flock.New(f.beside(".lock"))
		var got bool
		got, err = lock.TryLock()
		switch {
		case errors.Is(err, fs.ErrNotExist):
			continue // a parent was removed, or this file system takes no files
		case err != nil:
			return fmt.Errorf("cannot write beside it: %w; name another folder with --out", err)
		case !got:
			return errors.New("another run is writing there; wait for it to end, or name another folder with --out")
		}
		if named(lock) {
			f.lock = lock
			return nil
		}
		lock.Unlock()
	}
	if err == nil {
		err = errors.New("other runs come and go all the time")
	}
	return fmt.Errorf("cannot lock %s: %w; name another folder with --out", f.beside(".lock"), err)
}

// named says whether the locked file is still the one of this name.
func named(lock *flock.Flock) bool {
	held, err := lock.Stat()
	if err != nil {
		return false
	}
	there, err := os.Stat(lock.Path())
	return err == nil && os.SameFile(held, there)
}

func (f *Folder) releaseLock() {
	os.Remove(f.lock.Path())
	f.lock.Unlock()
}

// makeParents makes target's missing parents and notes them.
func (f *Folder) makeParents() error {
	var missing []string
	for p := filepath.Dir(f.target); ; p = filepath.Dir(p) {
		if _, err := os.Stat(p); !errors.Is(err, fs.ErrNotExist) || p == filepath.Dir(p) {
			break
		}
		missing = append(missing, p)
	}
	if err := os.MkdirAll(filepath.Dir(f.target), 0o777); err != nil {
		return err
	}
	for i := len(missing) - 1; i >= 0; i-- {
		f.made = append(f.made, missing[i])
	}
	return nil
}
