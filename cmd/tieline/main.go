// Command tieline works out temperatures of coexisting mineral pairs from a
// compilation of analyses. See README.md.
package main

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"runtime/debug"
	"strings"

	"github.com/spf13/cobra"

	"tieline/pipeline"
	"tieline/pipeline/problem"
)

// Exit codes.
const (
	exitDone     = 0
	exitProblems = 1 // the run found problems that stop it
	exitUsage    = 2 // wrong usage
)

// stopped is an error of the work itself; every other error is one of usage.
type stopped struct{ error }

func main() {
	// A large compilation is mostly analyses, which stay; collecting at half as
	// much again instead of twice as much keeps a million of them under 1.5 GiB.
	debug.SetGCPercent(50)
	os.Exit(execute(os.Args[1:], os.Stdout, os.Stderr))
}

// execute runs one command line. People read stderr, programs read stdout.
func execute(args []string, stdout, stderr io.Writer) int {
	root := newRoot()
	root.SetArgs(args)
	root.SetOut(stdout)
	root.SetErr(stderr)
	err := root.Execute()
	var work stopped
	switch {
	case err == nil:
		return exitDone
	case errors.As(err, &work):
		explain(stderr, work.error)
		return exitProblems
	}
	fmt.Fprintf(stderr, "tieline: %v\nTry `tieline help`, or `tieline help COMMAND`.\n", err)
	return exitUsage
}

// explain prints what stopped the work, a line per problem.
func explain(w io.Writer, err error) {
	var list *problem.List
	if !errors.As(err, &list) {
		for _, line := range strings.Split(err.Error(), "\n") {
			fmt.Fprintf(w, "tieline: %s\n", problem.CleanAll(line))
		}
		return
	}
	for _, line := range list.Lines() {
		fmt.Fprintln(w, line)
	}
	n := list.Len()
	if n == 1 {
		fmt.Fprintln(w, "tieline: 1 problem; nothing was written")
		return
	}
	fmt.Fprintf(w, "tieline: %d problems; nothing was written\n", n)
}

func newRoot() *cobra.Command {
	root := &cobra.Command{
		Use:   "tieline",
		Short: "Temperatures of coexisting minerals, by every calibration that applies",
		Long: `tieline reads a compilation (a manifest and its data files), normalises and checks
the analyses, pairs what coexists, works out the temperature of every pair by
every published calibration that applies, and says where calibrations disagree.
The same inputs give the same bytes.`,
		Example: `  tieline check manifests/demo     # what the files hold, and what would stop a run
  tieline run manifests/demo       # the result goes to out/demo
  tieline methods                  # the calibrations, with range and source`,
		Version:       pipeline.Version,
		SilenceUsage:  true,
		SilenceErrors: true,
	}
	root.AddCommand(runCommand(), checkCommand(), methodsCommand(), traceCommand(), versionCommand())
	return root
}

// work makes a command's function whose errors are problems of the work, not of usage.
func work(f func(cmd *cobra.Command, args []string) error) func(*cobra.Command, []string) error {
	return func(cmd *cobra.Command, args []string) error {
		if err := f(cmd, args); err != nil {
			return stopped{err}
		}
		return nil
	}
}

func printJSON(w io.Writer, v any) error {
	e := json.NewEncoder(w)
	e.SetIndent("", "  ")
	e.SetEscapeHTML(false)
	return e.Encode(v)
}
