//go:build !linux

package folder

import "errors"

// exchange is not to be had here: two renames do.
func exchange(a, b string) error { return errors.ErrUnsupported }

// syncFolder does nothing: not every system can sync a folder.
func syncFolder(path string) error { return nil }
