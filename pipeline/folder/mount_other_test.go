//go:build !linux

package folder

import "testing"

func mountSmall(t *testing.T, dir string) { t.Skip("no small disk can be mounted on this system") }
