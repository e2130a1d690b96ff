package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"thalweg/systems"
)

func TestWriteReplaces(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "result.txt")
	if err := os.WriteFile(path, []byte("old"), 0o640); err != nil {
		t.Fatal(err)
	}
	link := filepath.Join(dir, "link.txt")
	if err := os.Symlink(path, link); err != nil {
		t.Fatal(err)
	}
	if err := replaceFile(link, []byte("new")); err != nil {
		t.Fatal(err)
	}
	b, err := os.ReadFile(path)
	if err != nil || string(b) != "new" {
		t.Errorf("%q, %v", b, err)
	}
	if st, _ := os.Stat(path); st.Mode().Perm() != 0o640 {
		t.Errorf("the mode became %v", st.Mode().Perm())
	}
	if st, _ := os.Lstat(link); st.Mode()&os.ModeSymlink == 0 {
		t.Error("the link was replaced")
	}
	leftovers(t, dir, 2)
}

// leftovers checks that a folder holds so many files and no more.
func leftovers(t *testing.T, dir string, want int) {
	t.Helper()
	files, err := os.ReadDir(dir)
	if err != nil || len(files) != want {
		t.Errorf("%d files are there instead of %d: %v, %v", len(files), want, files, err)
	}
}

// A file whose name is so long that none can be made beside it: every write
// fails, for root as well.
func TestFailedWriteKeepsOldFile(t *testing.T) {
	for _, tt := range []struct{ flag, ending string }{{"--output", ".txt"}, {"--figure", ".pdf"}} {
		t.Run(tt.flag, func(t *testing.T) {
			dir := t.TempDir()
			path := filepath.Join(dir, strings.Repeat("x", 250)+tt.ending)
			if err := os.WriteFile(path, []byte("old"), 0o600); err != nil {
				t.Skipf("this file system does not take such names: %v", err)
			}
			code, out, errText := run("liquidus", "di-ab-an", tt.flag, path)
			if code != exitIncomplete {
				t.Errorf("exit %d, want %d", code, exitIncomplete)
			}
			if !strings.Contains(errText, "could not be written") && !strings.Contains(errText, "cannot write the figure") {
				t.Errorf("message: %s", errText)
			}
			if tt.flag == "--figure" && !strings.Contains(out, "Checks") {
				t.Error("the result was not printed although only the figure failed")
			}
			if b, err := os.ReadFile(path); err != nil || string(b) != "old" {
				t.Errorf("the old file became %q, %v", b, err)
			}
			leftovers(t, dir, 1)
		})
	}
}

// A full device: the target is no ordinary file, so it is written to directly.
func TestFullDevice(t *testing.T) {
	if st, err := os.Stat("/dev/full"); err != nil || st.Mode()&os.ModeCharDevice == 0 {
		t.Skip("there is no /dev/full")
	}
	code, _, errText := run("systems", "--output", "/dev/full")
	if code != exitIncomplete || !strings.Contains(errText, "/dev/full: the result could not be written") {
		t.Errorf("exit %d: %s", code, errText)
	}
	if st, err := os.Stat("/dev/full"); err != nil || st.Mode()&os.ModeCharDevice == 0 {
		t.Error("the device was replaced")
	}
}

func TestHugeFiles(t *testing.T) {
	dir := t.TempDir()
	f, err := systems.Builtin(defaultSystem)
	if err != nil {
		t.Fatal(err)
	}
	huge := func(name string, start string) string {
		path := filepath.Join(dir, name)
		line := "# " + strings.Repeat("x", 1021) + "\n"
		if err := os.WriteFile(path, append([]byte(start), bytes.Repeat([]byte(line), 10<<10)...), 0o600); err != nil {
			t.Fatal(err)
		}
		return path
	}
	tests := []struct {
		name string
		args []string
		want string
	}{
		{"system", []string{"show", huge("huge.toml", string(f.Raw()))}, "it is larger than 1 MiB"},
		{"samples", []string{"descend", "--samples", huge("huge.csv", "name,Di,Ab,An\nA,1,1,1\n")}, "it is larger than 8 MiB"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			code, out, errText := run(tt.args...)
			if code != exitUsage || out != "" || !strings.Contains(errText, tt.want) {
				t.Errorf("exit %d: %s", code, errText)
			}
		})
	}
}

func TestSamplesByteOrderMark(t *testing.T) {
	path := filepath.Join(t.TempDir(), "bom.csv")
	if err := os.WriteFile(path, []byte("\uFEFFname,Di,Ab,An\r\nA,100,0,0\r\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := systems.Builtin(defaultSystem)
	if err != nil {
		t.Fatal(err)
	}
	list, _, err := readSamples(path, f.Components, 0)
	if err != nil || len(list) != 1 || list[0].Name != "A" || list[0].X != [3]float64{1, 0, 0} {
		t.Errorf("%v, %v", list, err)
	}
}
