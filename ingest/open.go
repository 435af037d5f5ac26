package ingest

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"syscall"

	"tieline/pipeline/problem"
)

// open gives a source's file, a regular one below the manifest's folder. What
// the name leads to is looked at before it is opened: opening a named pipe
// waits for a writer, opening a device may do anything.
func open(root *os.Root, name string) (*os.File, *problem.Problem) {
	if !filepath.IsLocal(filepath.FromSlash(name)) {
		return nil, openProblem("the file lies outside the manifest's folder", "a file below that folder", "copy it there and name it relative to the folder")
	}
	info, err := root.Lstat(name)
	if err == nil && info.Mode()&fs.ModeSymlink != 0 {
		if info, err = root.Stat(name); err != nil {
			return nil, openProblem("a link that leads to nothing inside the manifest's folder", "a file below that folder", "copy the file there")
		}
	}
	if err != nil {
		return nil, openFailure(err)
	}
	if p := irregular(info.Mode()); p != nil {
		return nil, p
	}
	// Should the file be swapped for a pipe now, O_NONBLOCK keeps opening it from
	// waiting and the second look refuses it.
	f, err := root.OpenFile(name, os.O_RDONLY|syscall.O_NONBLOCK, 0)
	if err != nil {
		return nil, openFailure(err)
	}
	if info, err = f.Stat(); err != nil {
		f.Close()
		return nil, openFailure(err)
	}
	if p := irregular(info.Mode()); p != nil {
		f.Close()
		return nil, p
	}
	return f, nil
}

func irregular(mode fs.FileMode) *problem.Problem {
	var what string
	switch {
	case mode.IsRegular():
		return nil
	case mode.IsDir():
		what = "a folder"
	case mode&fs.ModeNamedPipe != 0:
		what = "a named pipe"
	case mode&fs.ModeSocket != 0:
		what = "a socket"
	case mode&fs.ModeDevice != 0:
		what = "a device"
	default:
		what = "no regular file"
	}
	return openProblem(what, "a regular file", "name the data file itself")
}

func openFailure(err error) *problem.Problem {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return openProblem("no such file", "the data file below the manifest's folder", "check the name; capital and small letters differ")
	case errors.Is(err, fs.ErrPermission):
		return openProblem("the file may not be read: permission denied", "", "give yourself the right to read it and the folders above it")
	}
	return openProblem("the file cannot be opened: "+cause(err), "a file below the manifest's folder", "")
}

// cause is an error's words without the path, which the problem names already.
func cause(err error) string {
	var path *fs.PathError
	if errors.As(err, &path) {
		err = path.Err
	}
	return problem.Clean(err.Error())
}

func openProblem(found, expected, do string) *problem.Problem {
	return &problem.Problem{Kind: "file", Found: found, Expected: expected, Do: do}
}
