// Synthetic measures a run of many analyses: it writes a compilation of made-up
// pyroxene pairs, runs a built tieline on it, and stops with an error when the
// run took more memory than a limit. Beside the run's wall time it prints that
// of reading the same file with encoding/csv and strconv.ParseFloat, which no
// program that reads the file can undercut by much. Times are printed, not judged.
//
//	go build -o tieline ./cmd/tieline
//	go run ./.ci/synthetic -rows 1000000 -limit 1.5 ./tieline
package main

import (
	"errors"
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"syscall"
	"time"
)

const gib = 1 << 30

func main() {
	rows := flag.Int("rows", 1_000_000, "analyses to write, half of each pyroxene")
	limit := flag.Float64("limit", 1.5, "peak resident memory of the run, `GiB`")
	keep := flag.String("keep", "", "leave the compilation and its result in this `folder`, which may not exist")
	flag.Parse()
	if flag.NArg() != 1 || *rows < 2 || *rows%2 != 0 {
		fmt.Fprintln(os.Stderr, "usage: go run ./.ci/synthetic [-rows N] [-limit GiB] [-keep FOLDER] PROGRAM   (N even)")
		os.Exit(2)
	}
	if err := run(flag.Arg(0), *rows, *limit, *keep); err != nil {
		fmt.Fprintln(os.Stderr, "synthetic:", err)
		os.Exit(1)
	}
}

func run(program string, rows int, limit float64, keep string) error {
	program, err := filepath.Abs(program)
	if err != nil {
		return err
	}
	dir := keep
	if dir == "" {
		if dir, err = os.MkdirTemp("", "tieline-synthetic-"); err != nil {
			return err
		}
		defer os.RemoveAll(dir)
	} else if err := os.Mkdir(dir, 0o755); err != nil {
		return err
	}
	began := time.Now()
	file, err := writeCompilation(dir, rows/2)
	if err != nil {
		return err
	}
	info, err := os.Stat(file)
	if err != nil {
		return err
	}
	fmt.Printf("%d analyses, %.1f MiB of CSV, written in %.1f s\n", rows, float64(info.Size())/(1<<20), time.Since(began).Seconds())

	result := filepath.Join(dir, "result")
	wall, peak, err := measure(program, "run", dir, "--out", result)
	if err != nil {
		return err
	}
	fmt.Printf("tieline run: %.1f s, peak resident memory %.2f GiB (limit %.2f)\n", wall.Seconds(), peak, limit)
	if err := countsAreRight(result, rows); err != nil {
		return err
	}
	read, cells, err := readPlainly(file)
	if err != nil {
		return err
	}
	fmt.Printf("encoding/csv and strconv.ParseFloat of the same file: %.1f s, %d numbers; ratio %.1f\n",
		read.Seconds(), cells, wall.Seconds()/read.Seconds())
	if peak > limit {
		return fmt.Errorf("the run took %.2f GiB, more than %.2f", peak, limit)
	}
	return nil
}

// measure runs a program and gives its wall time and peak resident memory in
// GiB, from the kernel's own account of the finished process.
func measure(program string, args ...string) (time.Duration, float64, error) {
	cmd := exec.Command(program, args...)
	cmd.Stdout, cmd.Stderr = os.Stdout, os.Stdout
	began := time.Now()
	err := cmd.Run()
	wall := time.Since(began)
	if err != nil {
		return 0, 0, err
	}
	usage, ok := cmd.ProcessState.SysUsage().(*syscall.Rusage)
	if !ok {
		return 0, 0, errors.New("this system gives no account of a finished process")
	}
	return wall, float64(usage.Maxrss) * 1024 / gib, nil // Linux counts in KiB
}
