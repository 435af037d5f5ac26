// Determinism runs the compilations that ship under conditions that may not
// matter, and compares every byte of what is written, run.log aside.
//
//	go run ./.ci/determinism [-keep FOLDER]   compare with .ci/golden.txt
//	go run ./.ci/determinism -update          rewrite .ci/golden.txt, after a wanted change
//
// The first run is compared with the golden digests, every other one with the
// first. It needs Linux on amd64, and qemu-aarch64 and, on a processor that
// cannot run GOAMD64=v3, qemu-x86_64 (Debian: qemu-user).
package main

import (
	"errors"
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"syscall"
	"time"
)

const golden = ".ci/golden.txt"

// compilations are folders below manifests.
var compilations = []string{"cms-brackets", "demo", "elkins-grove-1990"}

// condition is one way of running that may change nothing.
type condition struct {
	Name  string
	Build string   // one of builds, "" for plain
	Env   []string // added to the environment
	Umask int      // 0: as it is
	Moved bool     // from a copy of the compilations, in another working folder
}

var conditions = []condition{
	{Name: "first run"},
	{Name: "again"},
	{Name: "GOMAXPROCS=1", Env: []string{"GOMAXPROCS=1"}},
	{Name: "GOMAXPROCS=2", Env: []string{"GOMAXPROCS=2"}},
	{Name: "Turkish, Kiritimati", Env: []string{"TZ=Pacific/Kiritimati", "LANG=tr_TR.UTF-8", "LC_ALL=tr_TR.UTF-8", "LANGUAGE=tr"}},
	{Name: "another folder, no home", Env: []string{"HOME=/nonexistent", "USER=nobody"}, Moved: true},
	{Name: "umask 077", Umask: 0o077},
	{Name: "GOAMD64=v3", Build: "v3"},
	{Name: "arm64", Build: "arm64"},
}

// builds are the programs that the conditions ask for.
var builds = map[string][]string{
	"":      {"GOARCH=amd64", "GOAMD64=v1"},
	"v3":    {"GOARCH=amd64", "GOAMD64=v3"},
	"arm64": {"GOARCH=arm64", "CGO_ENABLED=0"},
}

func main() {
	update := flag.Bool("update", false, "rewrite "+golden+" from the first run, if all others agree with it")
	keep := flag.String("keep", "", "leave the first run's results in this `folder`, which may not exist")
	flag.Parse()
	differences, err := run(*update, *keep)
	if err != nil {
		fmt.Fprintln(os.Stderr, "determinism:", err)
		os.Exit(2)
	}
	if differences > 0 {
		fmt.Printf("determinism: %d differences\n", differences)
		os.Exit(1)
	}
}

func run(update bool, keep string) (differences int, err error) {
	if runtime.GOOS != "linux" || runtime.GOARCH != "amd64" {
		return 0, errors.New("these comparisons start from Linux on amd64")
	}
	work, err := os.MkdirTemp("", "tieline-determinism-")
	if err != nil {
		return 0, err
	}
	defer os.RemoveAll(work)
	if keep == "" {
		keep = filepath.Join(work, "first")
	} else if keep, err = filepath.Abs(keep); err != nil {
		return 0, err
	}
	programs := map[string]string{}
	var first []line
	for i, c := range conditions {
		began := time.Now()
		if programs[c.Build] == "" {
			if programs[c.Build], err = build(work, c.Build); err != nil {
				return 0, err
			}
		}
		built := time.Since(began)
		out := keep
		if i > 0 {
			out = filepath.Join(work, fmt.Sprint("run", i))
		}
		lines, err := c.digests(work, programs[c.Build], out)
		if err != nil {
			return 0, fmt.Errorf("%s: %w", c.Name, err)
		}
		with := c.Name + " against the first run"
		want := first
		if i == 0 {
			first, want, with = lines, lines, c.Name+" against "+golden
			if !update {
				if want, err = readGolden(); err != nil {
					return 0, err
				}
			}
		}
		found := compare(want, lines)
		for _, f := range found {
			fmt.Printf("%s: %s\n", with, f)
		}
		differences += len(found)
		fmt.Printf("%-24s %d digests, %d differences, %.1f s and %.1f s to build\n",
			c.Name, len(lines), len(found), (time.Since(began) - built).Seconds(), built.Seconds())
	}
	if update && differences == 0 {
		err = os.WriteFile(golden, []byte(format(first)), 0o644)
	}
	return differences, err
}

// emulator gives what a build must be run under on this machine, if anything.
func emulator(build string) ([]string, error) {
	if build == "arm64" {
		return []string{"qemu-aarch64"}, nil
	}
	if build != "v3" {
		return nil, nil
	}
	text, err := os.ReadFile("/proc/cpuinfo")
	if err != nil || runsV3(string(text)) {
		return nil, err
	}
	return []string{"qemu-x86_64", "-cpu", "max"}, nil
}

// runsV3 looks for the instructions of GOAMD64=v3 that compute among the flags
// of /proc/cpuinfo. A program built for v3 checks the others when it starts:
// some machines hide the flag abm and have it.
func runsV3(cpuinfo string) bool {
	for line := range strings.Lines(cpuinfo) {
		if name, value, ok := strings.Cut(line, ":"); ok && strings.TrimSpace(name) == "flags" {
			flags := strings.Fields(value)
			return slices.Contains(flags, "avx2") && slices.Contains(flags, "bmi2") && slices.Contains(flags, "fma")
		}
	}
	return false
}

func build(work, name string) (program string, err error) {
	program = filepath.Join(work, "tieline"+name)
	cmd := exec.Command("go", "build", "-o", program, "./cmd/tieline")
	cmd.Env = append(os.Environ(), builds[name]...)
	if out, err := cmd.CombinedOutput(); err != nil {
		return "", fmt.Errorf("go build with %s: %w\n%s", strings.Join(builds[name], " "), err, out)
	}
	return program, nil
}

// digests runs all compilations under a condition and gives what they wrote.
func (c condition) digests(work, program, out string) ([]line, error) {
	if c.Umask != 0 {
		defer syscall.Umask(syscall.Umask(c.Umask))
	}
	dir, err := os.Getwd()
	if err != nil {
		return nil, err
	}
	manifests := "manifests"
	if c.Moved {
		dir = filepath.Join(work, "elsewhere", "and further down")
		manifests = "."
		for _, name := range compilations {
			if err := os.CopyFS(filepath.Join(dir, name), os.DirFS(filepath.Join("manifests", name))); err != nil {
				return nil, err
			}
		}
	}
	under, err := emulator(c.Build)
	if err != nil {
		return nil, err
	}
	if len(under) > 0 {
		fmt.Printf("%s: under %s\n", c.Name, strings.Join(under, " "))
	}
	var all []line
	for _, name := range compilations {
		result := filepath.Join(out, name)
		args := append(slices.Clone(under), program, "run", filepath.Join(manifests, name), "--out", result)
		if err := os.MkdirAll(out, 0o755); err != nil {
			return nil, err
		}
		cmd := exec.Command(args[0], args[1:]...)
		cmd.Dir = dir
		cmd.Env = append(os.Environ(), c.Env...)
		if said, err := cmd.CombinedOutput(); err != nil {
			return nil, fmt.Errorf("%s: %w\n%s", strings.Join(args, " "), err, said)
		}
		lines, err := digestResult(name, result)
		if err != nil {
			return nil, err
		}
		all = append(all, lines...)
	}
	return all, nil
}
