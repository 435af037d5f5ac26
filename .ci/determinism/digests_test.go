package main

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// result writes a result folder with one table that holds text.
func result(t *testing.T, text string) string {
	folder := t.TempDir()
	sum := sha256.Sum256([]byte(text))
	record := fmt.Sprintf(`{"tables":[{"file":"tables/x.parquet","sha256":%q,"content_sha256":%q}]}`,
		hex.EncodeToString(sum[:]), strings.Repeat("a", 64))
	for name, content := range map[string]string{"record.json": record, "tables/x.parquet": text, "run.log": "a clock"} {
		path := filepath.Join(folder, name)
		if err := os.MkdirAll(filepath.Dir(path), 0o700); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(content), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return folder
}

func digestsOf(t *testing.T, folder string) []line {
	t.Helper()
	lines, err := digestResult("demo", folder)
	if err != nil {
		t.Fatal(err)
	}
	return lines
}

func TestEveryFileButTheLog(t *testing.T) {
	folder := result(t, "one")
	before := digestsOf(t, folder)
	if err := os.WriteFile(filepath.Join(folder, "run.log"), []byte("another clock"), 0o600); err != nil {
		t.Fatal(err)
	}
	if got := compare(before, digestsOf(t, folder)); len(got) > 0 {
		t.Errorf("a new run.log made differences: %q", got)
	}
	got := compare(before, digestsOf(t, result(t, "two")))
	if len(got) != 2 || !strings.HasPrefix(got[0], "demo/record.json (file): ") || !strings.HasPrefix(got[1], "demo/tables/x.parquet (file): ") {
		t.Errorf("one changed table: %q, want the record and the table named", got)
	}
}

func TestNewAndMissingFiles(t *testing.T) {
	folder := result(t, "one")
	before := digestsOf(t, folder)
	if err := os.WriteFile(filepath.Join(folder, "extra"), nil, 0o600); err != nil {
		t.Fatal(err)
	}
	after := digestsOf(t, folder)
	if got := compare(before, after); !slices.Equal(got, []string{"demo/extra (file) is new"}) {
		t.Errorf("got %q", got)
	}
	if got := compare(after, before); !slices.Equal(got, []string{"demo/extra (file) is missing"}) {
		t.Errorf("got %q", got)
	}
}

func TestRecordThatIsNotTrue(t *testing.T) {
	folder := result(t, "one")
	if err := os.WriteFile(filepath.Join(folder, "tables", "x.parquet"), []byte("two"), 0o600); err != nil {
		t.Fatal(err)
	}
	if _, err := digestResult("demo", folder); err == nil || !strings.Contains(err.Error(), "tables/x.parquet") {
		t.Errorf("error %v, want the table whose digest is wrong", err)
	}
}

func TestGoldenComesBack(t *testing.T) {
	lines := digestsOf(t, result(t, "one"))
	back, err := parse(format(lines))
	if err != nil || !slices.Equal(lines, back) {
		t.Errorf("wrote %v, read %v, error %v", lines, back, err)
	}
}

func TestProcessorFlags(t *testing.T) {
	full := "processor\t: 0\nflags\t\t: fpu avx avx2 bmi1 bmi2 f16c fma movbe xsave\n"
	for flag, want := range map[string]bool{" none": true, " avx2": false, " bmi2": false, " fma": false} {
		if got := runsV3(strings.Replace(full, flag, "", 1)); got != want {
			t.Errorf("without%s: %v, want %v", flag, got, want)
		}
	}
}
