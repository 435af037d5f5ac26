package main

import (
	"bufio"
	"bytes"
	"fmt"
	"io"
	"os"
	"os/exec"
	"regexp"
	"strconv"
)

// targets are compiled for their listing. The compiler fuses x*y + z on both;
// the rules are the same ones on riscv64, ppc64le and s390x.
var targets = []struct {
	Name string
	Env  []string
}{
	{"arm64", []string{"GOOS=linux", "GOARCH=arm64", "CGO_ENABLED=0"}},
	{"amd64 v3", []string{"GOOS=linux", "GOARCH=amd64", "GOAMD64=v3", "CGO_ENABLED=0"}},
}

// fusedLine matches one instruction of the compiler's -S listing:
//
//	0x0004 00004 (/home/a/tieline/thermo/x.go:20)	FMSUBD	F1, F2, F0, F1
//
// with the position of the source the instruction came from, also where that
// source was inlined into another package.
var fusedLine = regexp.MustCompile(`^\t0x[0-9a-f]+ \d+ \((.+):(\d+)\)\t(V?FN?M(?:ADD|SUB)\w*)\t`)

// fusedInstructions compiles the module's packages for each target and gives
// the fused instructions that come from digested files. The go command replays
// the listing of what it has compiled before, so a cached build hides nothing.
func fusedInstructions(root, overlay string) ([]Finding, error) {
	var all []Finding
	for _, t := range targets {
		args := []string{"build", "-gcflags=tieline/...=-S"}
		if overlay != "" {
			args = append(args, "-overlay="+overlay)
		}
		cmd := exec.Command("go", append(args, "./...")...)
		cmd.Dir = root
		cmd.Env = append(os.Environ(), t.Env...)
		var listing bytes.Buffer
		cmd.Stderr = &listing
		if err := cmd.Run(); err != nil {
			return nil, fmt.Errorf("%s: go build: %w\n%s", t.Name, err, compileErrors(&listing))
		}
		if listing.Len() == 0 {
			return nil, fmt.Errorf("%s: the compiler printed no listing, so nothing was checked", t.Name)
		}
		found, err := scanListing(&listing, root, t.Name)
		if err != nil {
			return nil, err
		}
		all = append(all, found...)
	}
	return all, nil
}

func scanListing(r io.Reader, root, target string) ([]Finding, error) {
	var found []Finding
	lines := bufio.NewScanner(r)
	lines.Buffer(make([]byte, 1<<20), 1<<28)
	for lines.Scan() {
		m := fusedLine.FindSubmatch(lines.Bytes())
		if m == nil {
			continue
		}
		file, inside := below(root, string(m[1]))
		if !inside || !isDigested(file) {
			continue
		}
		line, err := strconv.Atoi(string(m[2]))
		if err != nil {
			return nil, err
		}
		found = append(found, Finding{file, line, fmt.Sprintf(
			"%s in the code for %s: round the product, float64(a*b) + c, so that every machine gives the same bits", m[3], target)})
	}
	return found, lines.Err()
}

// sourceError matches a message of the compiler: file:line:column: text.
var sourceError = regexp.MustCompile(`^\S+:\d+:\d+: `)

// compileErrors picks the compiler's messages out of a listing.
func compileErrors(listing io.Reader) string {
	var out bytes.Buffer
	lines := bufio.NewScanner(listing)
	lines.Buffer(make([]byte, 1<<20), 1<<28)
	for lines.Scan() {
		if sourceError.Match(lines.Bytes()) {
			out.Write(lines.Bytes())
			out.WriteByte('\n')
		}
	}
	return out.String()
}
