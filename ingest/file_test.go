package ingest

import (
	"errors"
	"io"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"syscall"
	"testing"
	"testing/iotest"
	"time"

	"tieline/manifests"
)

const (
	head  = "Sample,Mineral,SiO2\n"
	plain = head + "R1,Pl,60\n"
)

// Files that are none, in a folder with a file beside it that must stay unread.
func TestNoRegularFile(t *testing.T) {
	outside := t.TempDir()
	write(t, outside+"/out.csv", plain)
	dir := filepath.Join(t.TempDir(), "in")
	if err := os.Mkdir(dir, 0o700); err != nil {
		t.Fatal(err)
	}
	write(t, filepath.Dir(dir)+"/up.csv", plain)
	write(t, dir+"/good.csv", plain)
	links := map[string]string{"out.csv": outside + "/out.csv", "up.csv": "../up.csv", "nowhere.csv": "none.csv", "folder": outside, "loop.csv": "loop.csv", "null.csv": "/dev/null"}
	for name, to := range links {
		if err := os.Symlink(to, filepath.Join(dir, name)); err != nil {
			t.Fatal(err)
		}
	}
	if err := os.Symlink("good.csv", dir+"/inside.csv"); err != nil {
		t.Fatal(err)
	}
	if err := syscall.Mkfifo(dir+"/pipe.csv", 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Mkdir(dir+"/folder.csv", 0o700); err != nil {
		t.Fatal(err)
	}
	socket, err := net.Listen("unix", dir+"/socket.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer socket.Close()
	link := "a link that leads to nothing inside the manifest's folder; expected a file below that folder; copy the file there"
	outer := "the file lies outside the manifest's folder; expected a file below that folder; copy it there and name it relative to the folder"
	want := map[string]string{
		"good.csv": "", "inside.csv": "",
		"pipe.csv":   "a named pipe; expected a regular file; name the data file itself",
		"folder.csv": "a folder; expected a regular file; name the data file itself",
		"socket.csv": "a socket; expected a regular file; name the data file itself",
		"out.csv":    link, "up.csv": link, "nowhere.csv": link, "loop.csv": link, "null.csv": link,
		"folder/out.csv": "the file cannot be opened: path escapes from parent; expected a file below the manifest's folder",
		"../up.csv":      outer, "/etc/passwd": outer, "a/../../up.csv": outer, "": outer,
		"none.csv":          "no such file; expected the data file below the manifest's folder; check the name; capital and small letters differ",
		"good.csv/more.csv": "the file cannot be opened: not a directory; expected a file below the manifest's folder",
	}
	if err := syscall.Mknod(dir+"/device.csv", syscall.S_IFCHR|0o600, 1<<8|3); err == nil {
		want["device.csv"] = "a device; expected a regular file; name the data file itself"
	} else {
		t.Logf("no device could be made, so that a device is refused is not tested here: %v", err)
	}
	root := rootOf(t, dir)
	for name, w := range want {
		if w != "" {
			w = name + ": " + w
		}
		got := within(t, name, func() string {
			_, _, problems := Read(root, &manifests.Manifest{Sources: []manifests.Source{{ID: "s1", File: name, Encoding: "utf-8"}}}, nil)
			return strings.Join(problems.Lines(), "\n")
		})
		if got != w {
			t.Errorf("file %q:\n got %s\nwant %s", name, got, w)
		}
	}
}

// within fails where f hangs.
func within(t *testing.T, what string, f func() string) string {
	t.Helper()
	done := make(chan string, 1)
	go func() { done <- f() }()
	select {
	case got := <-done:
		return got
	case <-time.After(30 * time.Second):
		t.Fatalf("reading %s hangs", what)
		return ""
	}
}

// A device is a device also where a name leads to it through root itself.
func TestDevice(t *testing.T) {
	_, _, problems := Read(rootOf(t, "/dev"), &manifests.Manifest{Sources: []manifests.Source{{ID: "s1", File: "zero", Encoding: "utf-8"}}}, nil)
	same(t, "device", problems.Lines(), []string{"zero: a device; expected a regular file; name the data file itself"})
}

// Files and folders without the right to read, read in a child process without
// privileges where this one has them.
func TestUnreadable(t *testing.T) {
	if dir := os.Getenv("TIELINE_UNREADABLE"); dir != "" {
		m := &manifests.Manifest{Sources: []manifests.Source{{ID: "s1", File: "shut.csv", Encoding: "utf-8"}, {ID: "s2", File: "shut/t.csv", Encoding: "utf-8"}}}
		_, _, problems := Read(rootOf(t, dir), m, nil)
		do := "the file may not be read: permission denied; give yourself the right to read it and the folders above it"
		same(t, "unreadable", problems.Lines(), []string{"shut.csv: " + do, "shut/t.csv: " + do})
		return
	}
	dir, err := os.MkdirTemp("", "unreadable")
	if err != nil {
		t.Fatal(err)
	}
	defer os.RemoveAll(dir)
	write(t, dir+"/shut.csv", plain)
	if err := errors.Join(os.Mkdir(dir+"/shut", 0o700), os.Chmod(dir, 0o755)); err != nil {
		t.Fatal(err)
	}
	write(t, dir+"/shut/t.csv", plain)
	if err := errors.Join(os.Chmod(dir+"/shut.csv", 0), os.Chmod(dir+"/shut", 0)); err != nil {
		t.Fatal(err)
	}
	defer os.Chmod(dir+"/shut", 0o700)
	test, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	if os.Geteuid() != 0 {
		t.Setenv("TIELINE_UNREADABLE", dir)
		TestUnreadable(t)
		return
	}
	// The test binary lies where only its owner may look: copy it to the folder.
	bin, err := os.ReadFile(test)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(dir+"/ingest.test", bin, 0o755); err != nil {
		t.Fatal(err)
	}
	child := exec.Command(dir+"/ingest.test", "-test.run", "^TestUnreadable$", "-test.v")
	child.Dir = dir
	child.Env = append(os.Environ(), "TIELINE_UNREADABLE="+dir)
	child.SysProcAttr = &syscall.SysProcAttr{Credential: &syscall.Credential{Uid: 65534, Gid: 65534}}
	out, err := child.CombinedOutput()
	if err != nil || !strings.Contains(string(out), "--- PASS: TestUnreadable") {
		t.Errorf("in a process without privileges: %v\n%s", err, out)
	}
}

// streamed reads a source from a reader instead of a file.
func streamed(t testing.TB, keys string, from io.Reader) (lines []string, rows int) {
	t.Helper()
	_, out, problems := readStream(manifestOf(t, "file = \"t.csv\"\n"+keys), from)
	return problems.Lines(), out.Rows
}

// A cell of 10 MB, and one that never ends, are refused where they begin and
// without eating memory.
func TestHugeCells(t *testing.T) {
	huge := strings.Repeat("x", 10<<20)
	for _, c := range []struct {
		what, text, want string
	}{
		{"bare", plain + "R2," + huge + ",60\n", "t.csv:3:2 (Mineral): a cell of more than 1 MiB; check the line ends and the separator"},
		{"quoted", plain + "R2,\"" + huge + "\",60\n", "t.csv:3:2 (Mineral): a quote that does not end within 1 MiB; close the quote, or remove it"},
		{"lines in quotes", plain + "R2,\"" + strings.Repeat("R3,Pl,60\n", 1<<20), "t.csv:3:2 (Mineral): a quote that does not end within 1 MiB; close the quote, or remove it"},
		{"header", huge, "t.csv:1:1: a cell of more than 1 MiB; check the line ends and the separator"},
		{"row", plain + "R2" + strings.Repeat(",60", 3<<20) + "\n", "t.csv:3: a row of more than 8 MiB; check the line ends and the separator"},
	} {
		lines, _ := streamed(t, "", strings.NewReader(c.text))
		same(t, c.what, lines, []string{c.want})
	}
	fits := strings.Repeat("x", maxCell)
	lines, rows := streamed(t, "columns = { \"note\" = \"ignored\" }", strings.NewReader("Sample,Mineral,SiO2,note\nR1,Pl,60,"+fits+"\n"))
	if len(lines) != 0 || rows != 1 {
		t.Errorf("a cell of just 1 MiB: %v", lines)
	}
	lines, _ = streamed(t, "columns = { \"note\" = \"ignored\" }", strings.NewReader("Sample,Mineral,SiO2,note\nR1,Pl,60,"+fits+"x\n"))
	same(t, "one byte more", lines, []string{"t.csv:2:4 (note): a cell of more than 1 MiB; check the line ends and the separator"})
}

// An endless file of one line is refused after the limit.
func TestEndlessLine(t *testing.T) {
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	lines, _ := streamed(t, "", io.MultiReader(strings.NewReader(plain+"R2,"), &endless{'x'}))
	runtime.ReadMemStats(&after)
	same(t, "endless", lines, []string{"t.csv:3:2 (Mineral): a cell of more than 1 MiB; check the line ends and the separator"})
	if used := (after.TotalAlloc - before.TotalAlloc) >> 20; used > 32 {
		t.Errorf("refusing an endless cell took %d MiB, want at most 32", used)
	}
}

type endless struct{ c byte }

func (e *endless) Read(p []byte) (int, error) {
	for i := range p {
		p[i] = e.c
	}
	return len(p), nil
}

// A disk that fails halfway: the rows before are counted, the failure has its line.
func TestReadFails(t *testing.T) {
	lines, rows := streamed(t, "", io.MultiReader(strings.NewReader(plain+"R2,Pl,half\nR3,P"), iotest.ErrReader(syscall.EIO)))
	same(t, "failing", lines, []string{
		"t.csv:3:3 (SiO2): \"half\" is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these",
		"t.csv:4: reading failed: input/output error; check the disk and read again",
	})
	if rows != 2 {
		t.Errorf("%d rows before the failure, want 2", rows)
	}
	lines, _ = streamed(t, "", iotest.ErrReader(syscall.EIO))
	same(t, "failing at once", lines, []string{"t.csv: reading failed: input/output error; check the disk and read again"})
}
