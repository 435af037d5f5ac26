// Gates looks for arithmetic and calls that would let the same inputs give
// different bytes on another machine, in the packages whose results are
// digested. It prints each finding as file:line and exits 1 when there is one.
//
//	go run ./.ci/gates
//
// Two gates: the compiler's own listing for arm64 and for amd64 with
// GOAMD64=v3 may hold no fused multiply-add (fused.go), and the type-checked
// source may not name what banned.go lists.
package main

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// digested are the folders, with all below them, whose results end in a
// digest. cmd/tieline is left out: it parses flags and talks to people.
var digested = []string{"thermo", "ingest", "qc", "manifests", "pipeline"}

// Finding is one place that a gate objects to.
type Finding struct {
	File string // below the repository's root, slashes
	Line int
	What string
}

func main() {
	overlay := flag.String("overlay", "", "`file` with replaced sources, as for go build -overlay (the gates' own test)")
	flag.Parse()
	root, err := os.Getwd()
	if err != nil {
		stop(err)
	}
	fused, err := fusedInstructions(root, *overlay)
	if err != nil {
		stop(err)
	}
	banned, packages, err := bannedCalls(root, *overlay)
	if err != nil {
		stop(err)
	}
	findings := sorted(append(fused, banned...))
	for _, f := range findings {
		fmt.Printf("%s:%d: %s\n", f.File, f.Line, f.What)
	}
	fmt.Printf("gates: %d findings in %d digested packages\n", len(findings), packages)
	if len(findings) > 0 || packages == 0 {
		os.Exit(1)
	}
}

func stop(err error) {
	fmt.Fprintln(os.Stderr, "gates:", err)
	os.Exit(2)
}

// isDigested says whether a file below the root belongs to a digested package.
func isDigested(file string) bool {
	first, _, below := strings.Cut(file, "/")
	return below && slices.Contains(digested, first)
}

// below gives a path relative to root with slashes, and whether it is inside.
func below(root, path string) (string, bool) {
	if !filepath.IsAbs(path) {
		path = filepath.Join(root, path)
	}
	rel, err := filepath.Rel(root, path)
	if err != nil || strings.HasPrefix(rel, "..") {
		return "", false
	}
	return filepath.ToSlash(rel), true
}

// sorted orders findings by place and drops repeats: an inlined function is
// listed once for each caller.
func sorted(f []Finding) []Finding {
	slices.SortFunc(f, func(a, b Finding) int {
		if c := strings.Compare(a.File, b.File); c != 0 {
			return c
		}
		if a.Line != b.Line {
			return a.Line - b.Line
		}
		return strings.Compare(a.What, b.What)
	})
	return slices.Compact(f)
}
