package render

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestWriteFile(t *testing.T) {
	dir := t.TempDir()
	s := sampleScene()
	for _, name := range []string{"a.pdf", "b.SVG", "c.png"} {
		path := filepath.Join(dir, name)
		if err := s.WriteFile(path, Options{DPI: 50}); err != nil {
			t.Fatal(err)
		}
		got, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		format := strings.ToLower(filepath.Ext(name))[1:]
		if !bytes.Equal(got, mustWrite(t, s, format, Options{DPI: 50})) {
			t.Errorf("%s differs from Write", name)
		}
	}
	entries, _ := os.ReadDir(dir)
	if len(entries) != 3 {
		t.Errorf("left %d files, want 3", len(entries))
	}
}

func TestWriteFileFailures(t *testing.T) {
	dir := t.TempDir()
	plain := filepath.Join(dir, "plain")
	if err := os.WriteFile(plain, []byte("x"), 0o644); err != nil {
		t.Fatal(err)
	}
	folder := filepath.Join(dir, "folder.pdf")
	if err := os.Mkdir(folder, 0o755); err != nil {
		t.Fatal(err)
	}
	cases := []struct{ path, want string }{
		{filepath.Join(dir, "x.eps"), `unknown figure format "eps": use one of pdf, svg, png`},
		{filepath.Join(dir, "x"), "no ending"},
		{filepath.Join(dir, "none", "x.pdf"), "folder does not exist"},
		{filepath.Join(plain, "x.pdf"), "not a directory"},
		{folder, "it is a folder"},
	}
	for _, c := range cases {
		err := sampleScene().WriteFile(c.path, Options{})
		if err == nil || !strings.Contains(err.Error(), c.want) || !strings.Contains(err.Error(), c.path) {
			t.Errorf("%s: error %v, want %q", c.path, err, c.want)
		}
	}
}

func TestWriteFileToAReadOnlyFolder(t *testing.T) {
	if os.Getuid() == 0 {
		t.Skip("the superuser may write anywhere")
	}
	dir := t.TempDir()
	if err := os.Chmod(dir, 0o555); err != nil {
		t.Fatal(err)
	}
	err := sampleScene().WriteFile(filepath.Join(dir, "x.pdf"), Options{})
	if err == nil || !strings.Contains(err.Error(), "may not be written") {
		t.Errorf("error %v", err)
	}
}

func TestFailureKeepsTheOldFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "old.pdf")
	if err := os.WriteFile(path, []byte("old"), 0o600); err != nil {
		t.Fatal(err)
	}
	s := sampleScene()
	s.Layer("labels").Text(TextItem{Runs: PlainRuns("\u4e2d", 8, Regular)})
	if err := s.WriteFile(path, Options{}); err == nil {
		t.Fatal("no error for a character the font lacks")
	}
	if b, _ := os.ReadFile(path); string(b) != "old" {
		t.Errorf("old file now holds %d bytes", len(b))
	}
	if err := sampleScene().WriteFile(path, Options{}); err != nil {
		t.Fatal(err)
	}
	if st, _ := os.Stat(path); st.Mode().Perm() != 0o600 {
		t.Errorf("permissions became %v", st.Mode())
	}
}
