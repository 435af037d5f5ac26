package folder

import (
	"os"
	"syscall"
	"testing"
)

// mountSmall mounts a file system of 1 MiB at dir for the length of the test,
// or skips it.
func mountSmall(t *testing.T, dir string) {
	t.Helper()
	if os.Geteuid() != 0 {
		t.Skip("mounting a small disk needs root")
	}
	if err := syscall.Mount("tieline-test", dir, "tmpfs", 0, "size=1m"); err != nil {
		t.Skip("no small disk can be mounted here: ", err)
	}
	t.Cleanup(func() { syscall.Unmount(dir, 0) })
}
