package folder

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"
)

// tree lists every file below dir as "path=content", folders as "path/".
func tree(t *testing.T, dir string) string {
	t.Helper()
	var out []string
	err := filepath.WalkDir(dir, func(p string, d fs.DirEntry, err error) error {
		if err != nil || p == dir {
			return err
		}
		rel, _ := filepath.Rel(dir, p)
		if d.IsDir() {
			out = append(out, rel+"/")
			return nil
		}
		text, err := os.ReadFile(p)
		out = append(out, rel+"="+string(text))
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return strings.Join(out, " ")
}

func wantTree(t *testing.T, dir, want string) {
	t.Helper()
	if got := tree(t, dir); got != want {
		t.Errorf("below %s there is\n%s, want\n%s", filepath.Base(dir), got, want)
	}
}

func put(t *testing.T, path, text string) {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

const record = `{"made_by":"tieline"}`

// open opens target or ends the test.
func open(t *testing.T, target string, p Policy) *Folder {
	t.Helper()
	f, err := Open(target, p)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// result writes a small result and commits it.
func result(t *testing.T, target string, p Policy, text string) {
	t.Helper()
	f := open(t, target, p)
	put(t, filepath.Join(f.Path(), "record.json"), record)
	put(t, filepath.Join(f.Path(), "tables", "a.parquet"), text)
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	f.Abandon() // does nothing
}

func TestResultIsThereWholeAfterCommitAndNotBefore(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "out", "demo")
	f := open(t, target, ReplaceDefault)
	put(t, filepath.Join(f.Path(), "record.json"), record)
	if _, err := os.Lstat(target); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("something is at the target before Commit: %v", err)
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	wantTree(t, dir, "out/ out/demo/ out/demo/record.json="+record)
	if err := f.Commit(); err == nil {
		t.Error("a second Commit passes")
	}
}

func TestAbandonLeavesNothing(t *testing.T) {
	dir := t.TempDir()
	f := open(t, filepath.Join(dir, "a", "b", "demo"), Refuse)
	put(t, filepath.Join(f.Path(), "tables", "half.parquet"), "half")
	f.Abandon()
	f.Abandon()
	wantTree(t, dir, "")
}

func TestAbandonKeepsTheOlderResultAndNeighbours(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "out", "demo")
	result(t, target, ReplaceDefault, "old")
	put(t, filepath.Join(dir, "out", "notes.txt"), "mine")
	before := tree(t, dir)
	f := open(t, target, ReplaceDefault)
	put(t, filepath.Join(f.Path(), "record.json"), "half")
	f.Abandon()
	wantTree(t, dir, before)
}

// A result that somebody put something into is no longer ours alone.
func TestReplaceKeepsWhatNoRunLeft(t *testing.T) {
	for _, foreign := range []string{"notes.txt", "tables/notes.txt", "tables/sub/x.parquet"} {
		dir := t.TempDir()
		target := filepath.Join(dir, "demo")
		result(t, target, ReplaceDefault, "old")
		put(t, filepath.Join(target, filepath.FromSlash(foreign)), "mine")
		before := tree(t, dir)
		if f, err := Open(target, ReplaceDefault); err == nil {
			f.Abandon()
			t.Errorf("a result that holds %s may be replaced", foreign)
		}
		wantTree(t, dir, before)
	}
}

func TestReplace(t *testing.T) {
	for name, p := range map[string]Policy{"default": ReplaceDefault, "--replace": Replace} {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			target := filepath.Join(dir, "demo")
			result(t, target, p, "old")
			put(t, filepath.Join(target, "tables", "old.parquet"), "gone with it")
			result(t, target, p, "new")
			wantTree(t, dir, "demo/ demo/record.json="+record+" demo/tables/ demo/tables/a.parquet=new")
		})
	}
}

// TestReplaceWithoutExchange goes the way of systems that cannot exchange two
// folders in one step.
func TestReplaceWithoutExchange(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "demo")
	result(t, target, Replace, "old")
	f := open(t, target, Replace)
	f.exchange = func(a, b string) error { return errors.ErrUnsupported }
	put(t, filepath.Join(f.Path(), "record.json"), record+" ")
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	wantTree(t, dir, "demo/ demo/record.json="+record+" ")
}

func TestFailedSecondRenamePutsTheOlderBack(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "demo")
	result(t, target, Replace, "old")
	before := tree(t, dir)
	f := open(t, target, Replace)
	f.exchange = func(a, b string) error { // fails, and spoils the rename that follows
		if err := os.Remove(a); err != nil {
			t.Error(err)
		}
		return errors.ErrUnsupported
	}
	if err := f.Commit(); err == nil {
		t.Error("Commit says nothing of a rename that failed")
	}
	f.Abandon()
	wantTree(t, dir, before)
}

func TestExchangeIsOneStepHere(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("only Linux exchanges folders")
	}
	dir := t.TempDir()
	a, b := filepath.Join(dir, "a"), filepath.Join(dir, "b")
	put(t, filepath.Join(a, "f"), "1")
	put(t, filepath.Join(b, "f"), "2")
	err := exchange(a, b)
	if errors.Is(err, errors.ErrUnsupported) {
		t.Skip("this file system cannot exchange folders")
	}
	if err != nil {
		t.Fatal(err)
	}
	wantTree(t, dir, "a/ a/f=2 b/ b/f=1")
	if err := exchange(a, filepath.Join(dir, "none")); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("exchanging with nothing: %v", err)
	}
}

// TestTargetIsNeverMissingWhileReplaced looks at the target all the time.
func TestTargetIsNeverMissingWhileReplaced(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "demo")
	result(t, target, Replace, "0")
	if err := exchange(target, target); errors.Is(err, errors.ErrUnsupported) {
		t.Skip("this system cannot exchange folders: ", err)
	}
	var stop atomic.Bool
	var looks, missing int
	var wait sync.WaitGroup
	wait.Go(func() {
		for !stop.Load() {
			looks++
			if _, err := os.Stat(target); err != nil {
				missing++
			}
		}
	})
	for i := range 20 {
		result(t, target, Replace, fmt.Sprint(i))
	}
	stop.Store(true)
	wait.Wait()
	if missing > 0 {
		t.Errorf("the result was missing in %d of %d looks while it was replaced 20 times", missing, looks)
	}
}

func TestRefusals(t *testing.T) {
	for what, c := range map[string]struct {
		policy Policy
		make   func(dir, target string)
		want   string
	}{
		"a named folder that exists": {Refuse, func(_, target string) { os.Mkdir(target, 0o777) }, "it exists; give --replace"},
		"a result, without --replace": {Refuse, func(_, target string) {
			os.Mkdir(target, 0o777)
			os.WriteFile(filepath.Join(target, "record.json"), []byte(record), 0o666)
		}, "it exists; give --replace"},
		"someone's folder, with --replace": {Replace, func(_, target string) {
			os.Mkdir(target, 0o777)
			os.WriteFile(filepath.Join(target, "thesis.tex"), nil, 0o666)
		}, "it holds no result of tieline"},
		"someone's folder in the default place": {ReplaceDefault, func(_, target string) {
			os.Mkdir(target, 0o777)
			os.WriteFile(filepath.Join(target, "record.json"), []byte(`{"made_by":"another"}`), 0o666)
		}, "holds no result of tieline"},
		"a record that is no JSON": {Replace, func(_, target string) {
			os.Mkdir(target, 0o777)
			os.WriteFile(filepath.Join(target, "record.json"), []byte(record[1:]), 0o666)
		}, "it holds no result of tieline"},
		"a record that is a folder": {Replace, func(_, target string) {
			os.MkdirAll(filepath.Join(target, "record.json"), 0o777)
		}, "it holds no result of tieline"},
		"a record that is a pipe": {Replace, func(_, target string) {
			os.Mkdir(target, 0o777)
			syscall.Mkfifo(filepath.Join(target, "record.json"), 0o666)
		}, "it holds no result of tieline"},
		"a file":        {Replace, func(_, target string) { os.WriteFile(target, nil, 0o666) }, "there is a file of this name"},
		"a link":        {Replace, func(dir, target string) { os.Symlink(dir, target) }, "this is a link"},
		"a broken link": {Refuse, func(dir, target string) { os.Symlink(filepath.Join(dir, "none"), target) }, "this is a link"},
		"someone's file with the staging name": {Replace, func(dir, _ string) {
			os.WriteFile(filepath.Join(dir, ".demo.partial"), []byte("mine"), 0o666)
		}, ".demo.partial is in the way and was not left by tieline"},
		"someone's folder with the staging name": {Replace, func(dir, _ string) {
			os.Mkdir(filepath.Join(dir, ".demo.partial"), 0o777)
			os.WriteFile(filepath.Join(dir, ".demo.partial", "thesis.tex"), nil, 0o666)
		}, ".demo.partial is in the way and was not left by tieline"},
		"a staging folder marked with other words": {Replace, func(dir, _ string) {
			os.Mkdir(filepath.Join(dir, ".demo.partial"), 0o777)
			os.WriteFile(filepath.Join(dir, ".demo.partial", markName), []byte("mine"), 0o666)
		}, ".demo.partial is in the way and was not left by tieline"},
		"a link with the staging name": {Replace, func(dir, _ string) {
			os.Symlink(dir, filepath.Join(dir, ".demo.partial"))
		}, ".demo.partial is in the way and was not left by tieline"},
		"a pipe with the lock's name": {Replace, func(dir, _ string) {
			syscall.Mkfifo(filepath.Join(dir, ".demo.lock"), 0o666)
		}, ".demo.lock is in the way and is no lock of tieline"},
	} {
		t.Run(what, func(t *testing.T) {
			dir := t.TempDir()
			target := filepath.Join(dir, "demo")
			c.make(dir, target)
			before := names(t, dir)
			f, err := Open(target, c.policy)
			if err == nil {
				f.Abandon()
				t.Fatal("it was opened")
			}
			if !strings.Contains(err.Error(), c.want) || !strings.HasPrefix(err.Error(), "result folder "+target) {
				t.Errorf("error is\n%v, want one with\n%s", err, c.want)
			}
			if after := names(t, dir); after != before {
				t.Errorf("a refusal changed the folder from\n%s to\n%s", before, after)
			}
		})
	}
}

// names lists every entry below dir with its kind, reading none.
func names(t *testing.T, dir string) string {
	t.Helper()
	var out []string
	filepath.WalkDir(dir, func(p string, d fs.DirEntry, err error) error {
		if err != nil {
			t.Error(err)
		}
		out = append(out, d.Type().String()+p)
		return nil
	})
	return strings.Join(out, "\n")
}

func TestEmptyFolderMayBeReplaced(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "demo")
	if err := os.Mkdir(target, 0o777); err != nil {
		t.Fatal(err)
	}
	result(t, target, Replace, "new")
	wantTree(t, dir, "demo/ demo/record.json="+record+" demo/tables/ demo/tables/a.parquet=new")
}

// TestUnwritableParents: tests may run as root, for whom no permission is
// missing, so the parent is a file or a file system that takes no files.
func TestUnwritableParents(t *testing.T) {
	file := filepath.Join(t.TempDir(), "file")
	put(t, file, "")
	targets := []string{filepath.Join(file, "demo"), filepath.Join(file, "out", "demo"), string(filepath.Separator)}
	if runtime.GOOS == "linux" {
		targets = append(targets, "/proc/demo", "/proc/out/demo")
	}
	for _, target := range targets {
		f, err := Open(target, ReplaceDefault)
		if err == nil {
			f.Abandon()
			t.Errorf("%s was opened", target)
			continue
		}
		if !strings.HasPrefix(err.Error(), "result folder "+target) || !strings.Contains(err.Error(), "name a") {
			t.Errorf("error of %s does not say what to do: %v", target, err)
		}
	}
	if os.Geteuid() != 0 {
		dir := t.TempDir()
		os.Chmod(dir, 0o555)
		if _, err := Open(filepath.Join(dir, "demo"), Refuse); !errors.Is(err, fs.ErrPermission) {
			t.Errorf("a read-only parent: %v", err)
		}
	}
}

func TestCommitLooksAgain(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "demo")
	f := open(t, target, ReplaceDefault)
	put(t, filepath.Join(f.Path(), "record.json"), record)
	put(t, filepath.Join(target, "thesis.tex"), "written while the run went on")
	if err := f.Commit(); err == nil || !strings.Contains(err.Error(), "holds no result of tieline") {
		t.Errorf("Commit over someone's folder: %v", err)
	}
	f.Abandon()
	wantTree(t, dir, "demo/ demo/thesis.tex=written while the run went on")
}

func TestTwoRunsAtOnce(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "demo")
	f := open(t, target, Replace)
	if _, err := Open(target, Replace); err == nil || !strings.Contains(err.Error(), "another run is writing there") {
		t.Errorf("a second run: %v", err)
	}
	other := open(t, filepath.Join(dir, "other"), Replace) // beside it is no conflict
	other.Abandon()
	put(t, filepath.Join(f.Path(), "record.json"), record)
	if err := f.Commit(); err != nil {
		t.Errorf("the first run was disturbed: %v", err)
	}
	result(t, target, Replace, "next") // the lock is free again
}

// TestManyRunsAtOnce: of runs that start together each either has the folder to
// itself or is told so; whoever commits leaves a whole result.
func TestManyRunsAtOnce(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "out", "demo")
	var inside, committed atomic.Int32
	var wait sync.WaitGroup
	for i := range 8 {
		wait.Go(func() {
			for range 40 {
				f, err := Open(target, ReplaceDefault)
				if err != nil {
					if !strings.Contains(err.Error(), "another run is writing there") {
						t.Errorf("run %d: %v", i, err)
					}
					continue
				}
				if inside.Add(1) != 1 {
					t.Error("two runs hold the folder")
				}
				os.WriteFile(filepath.Join(f.Path(), "record.json"), []byte(record), 0o666)
				inside.Add(-1)
				if committed.Load()%3 == 2 {
					f.Abandon()
				} else if err := f.Commit(); err != nil {
					t.Errorf("run %d: %v", i, err)
					f.Abandon()
				}
				committed.Add(1)
			}
		})
	}
	wait.Wait()
	wantTree(t, dir, "out/ out/demo/ out/demo/record.json="+record)
}

// TestMain lets the test program stand in for a run that is killed.
func TestMain(m *testing.M) {
	if target := os.Getenv("TIELINE_TEST_KILLED_RUN"); target != "" {
		f, err := Open(target, ReplaceDefault)
		if err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(1)
		}
		os.WriteFile(filepath.Join(f.Path(), "record.json"), []byte(record), 0o666)
		fmt.Println("writing")
		time.Sleep(time.Minute)
	}
	os.Exit(m.Run())
}

func TestKilledRun(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "demo")
	result(t, target, ReplaceDefault, "old")
	run := exec.Command(os.Args[0])
	run.Env = append(os.Environ(), "TIELINE_TEST_KILLED_RUN="+target)
	out, err := run.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	run.Stderr = os.Stderr
	if err := run.Start(); err != nil {
		t.Fatal(err)
	}
	if n, err := out.Read(make([]byte, 1)); n != 1 {
		t.Fatalf("the run did not start: %v", err)
	}
	if _, err := Open(target, ReplaceDefault); err == nil || !strings.Contains(err.Error(), "another run is writing there") {
		t.Errorf("while it runs: %v", err)
	}
	run.Process.Kill()
	run.Wait()
	if got := tree(t, target); got != "record.json="+record+" tables/ tables/a.parquet=old" {
		t.Errorf("a killed run left at the target %s", got)
	}
	if _, err := os.Stat(filepath.Join(dir, ".demo.partial", "result", "record.json")); err != nil {
		t.Fatalf("the killed run left nothing to clear, so this test shows nothing: %v", err)
	}
	result(t, target, ReplaceDefault, "new")
	wantTree(t, dir, "demo/ demo/record.json="+record+" demo/tables/ demo/tables/a.parquet=new")
}

// left makes what a run killed at some moment leaves.
func left(t *testing.T, staging string, files ...string) {
	t.Helper()
	if err := os.MkdirAll(staging, 0o777); err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		text := record
		if f == markName {
			text = markText
		}
		put(t, filepath.Join(staging, f), text)
	}
}

func TestKilledAtAnyMoment(t *testing.T) {
	for what, c := range map[string]struct {
		target bool     // there is an older result in its place
		left   []string // in the staging folder
		want   string   // at the target once the next run abandons
	}{
		"before the mark":                 {true, nil, "record.json=" + record},
		"after the mark":                  {true, []string{markName}, "record.json=" + record},
		"while writing":                   {true, []string{markName, "result/tables/a.parquet"}, "record.json=" + record},
		"while writing the first result":  {false, []string{markName, "result/record.json"}, ""},
		"after the exchange":              {true, []string{markName, "result/record.json"}, "record.json=" + record},
		"between the two renames":         {false, []string{markName, "result/new.json", "old/record.json"}, "record.json=" + record},
		"after the second of two renames": {true, []string{markName, "old/old.json"}, "record.json=" + record},
		"while removing":                  {true, []string{markName}, "record.json=" + record},
	} {
		t.Run(what, func(t *testing.T) {
			dir := t.TempDir()
			target := filepath.Join(dir, "demo")
			if c.target {
				put(t, filepath.Join(target, "record.json"), record)
			}
			left(t, filepath.Join(dir, ".demo.partial"), c.left...)
			put(t, filepath.Join(dir, ".demo.lock"), "") // nobody holds it
			open(t, target, ReplaceDefault).Abandon()
			if c.want == "" {
				wantTree(t, dir, "")
			} else {
				wantTree(t, dir, "demo/ demo/"+c.want)
			}
		})
	}
}

func TestReadOnlyFoldersOfAnOlderResultGoToo(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "demo")
	result(t, target, Replace, "old")
	if err := os.Chmod(filepath.Join(target, "tables"), 0o555); err != nil {
		t.Fatal(err)
	}
	result(t, target, Replace, "new")
	wantTree(t, dir, "demo/ demo/record.json="+record+" demo/tables/ demo/tables/a.parquet=new")
}

func TestCommitRefusesWhatCannotBeOnTheDisk(t *testing.T) {
	dir := t.TempDir()
	f := open(t, filepath.Join(dir, "demo"), Refuse)
	if err := os.Symlink("record.json", filepath.Join(f.Path(), "link")); err != nil {
		t.Fatal(err)
	}
	if err := f.Commit(); err == nil || !strings.Contains(err.Error(), "neither a file nor a folder") {
		t.Errorf("a link in a result: %v", err)
	}
	f.Abandon()
	wantTree(t, dir, "")
}

// TestFullDisk needs a file system small enough to fill.
func TestFullDisk(t *testing.T) {
	dir := t.TempDir()
	mountSmall(t, dir)
	target := filepath.Join(dir, "demo")
	result(t, target, Replace, "old")
	before := tree(t, dir)
	f := open(t, target, Replace)
	err := os.WriteFile(filepath.Join(f.Path(), "big"), make([]byte, 8<<20), 0o666)
	if !errors.Is(err, syscall.ENOSPC) {
		t.Fatalf("8 MiB fit on the small disk: %v", err)
	}
	if _, err := Open(filepath.Join(dir, "other"), Replace); err == nil {
		t.Error("a result folder was opened on a full disk")
	}
	f.Abandon()
	wantTree(t, dir, before)
}
