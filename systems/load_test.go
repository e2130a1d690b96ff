package systems

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"pgregory.net/rapid"
)

// good is a small sound file for tests to vary. Its numbers are invented.
const good = `title = "Invented"
pressure_GPa = 0.0001
temperature_C = [300, 1000]
[[component]]
symbol = "A"
formula = "NaCl"
[[component]]
symbol = "B"
formula = "KCl"
[[component]]
symbol = "C"
formula = "LiCl"
[[solid]]
symbol = "A"
formula = "NaCl"
melting = { T_C = 800, dH_kJ = 28, dCp_J = 3, dV_cm3 = 5, source = "invented for a test" }
`

func TestLoadRefusesFiles(t *testing.T) {
	fsys := fstest.MapFS{
		"empty.toml":    {Data: nil},
		"blank.toml":    {Data: []byte(" \n\t\n")},
		"bom.toml":      {Data: []byte("\uFEFF \n")},
		"huge.toml":     {Data: bytes.Repeat([]byte("#\n"), maxSize)},
		"latin.toml":    {Data: []byte("title = \"B\xfcrette\"\n")},
		"dir.toml/x":    {Data: []byte(good)},
		"good.txt":      {Data: []byte(good)},
		"good.toml.bak": {Data: []byte(good)},
		"utf16.toml":    {Data: []byte("\xff\xfet\x00=\x00")},
		"good.toml":     {Data: []byte(good)},
	}
	cases := []struct{ file, want string }{
		{"empty.toml", "it is empty"},
		{"blank.toml", "it is empty"},
		{"bom.toml", "it is empty"},
		{"huge.toml", "larger than 1 MiB"},
		{"latin.toml", "not UTF-8"},
		{"utf16.toml", "not UTF-8"},
		{"dir.toml", "it is a directory"},
		{"good.txt", "does not end in .toml"},
		{"good.toml.bak", "does not end in .toml"},
		{"missing.toml", "no such file"},
	}
	for _, c := range cases {
		_, err := loadFrom(fsys, c.file, "dir/"+c.file)
		var fe *FileError
		if !errors.As(err, &fe) {
			t.Errorf("%s: got %v, want a *FileError", c.file, err)
			continue
		}
		if p := fe.Problems[0]; !strings.Contains(p.Reason, c.want) || p.Remedy == "" || p.File != "dir/"+c.file {
			t.Errorf("%s: got %q, want %q", c.file, p, c.want)
		}
	}
	if _, err := loadFrom(fsys, "good.toml", "good.toml"); err != nil {
		t.Errorf("the sound file: %v", err)
	}
}

func TestLoadFromDisk(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "mine.toml")
	if err := os.WriteFile(path, []byte("\uFEFF"+strings.ReplaceAll(good, "\n", "\r\n")), 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := Open(path)
	if err != nil {
		t.Fatal("byte order mark and CRLF must do no harm:", err)
	}
	if f.Name != path || f.Title != "Invented" {
		t.Errorf("got %q %q", f.Name, f.Title)
	}
	sys, err := f.AtReference(nil)
	if err != nil || sys.Name != "mine" {
		t.Errorf("got %v %v", sys, err)
	}
	for _, p := range []string{dir, dir + "/", filepath.Join(dir, "..")} {
		if _, err := Load(p); err == nil || !strings.Contains(err.Error(), "cannot be read") && !strings.Contains(err.Error(), "directory") {
			t.Errorf("%s: got %v", p, err)
		}
	}
}

func TestOpenSuggests(t *testing.T) {
	cases := []struct {
		name string
		near []string
	}{
		{"di-an-ab", []string{"di-ab-an", "di-an-fo"}},
		{"Di-Ab-An", []string{"di-ab-an"}},
		{"lif", []string{"lif-naf-kf"}},
		{"water", nil},
		{"", nil},
	}
	for _, c := range cases {
		_, err := Open(c.name)
		var ue *UnknownSystemError
		if !errors.As(err, &ue) {
			t.Errorf("%q: got %v, want an *UnknownSystemError", c.name, err)
			continue
		}
		for _, n := range c.near {
			if !slices.Contains(ue.Near, n) {
				t.Errorf("%q: suggests %v, want %s among them", c.name, ue.Near, n)
			}
		}
		if len(c.near) == 0 && len(ue.Near) > 0 {
			t.Errorf("%q: suggests %v, want nothing", c.name, ue.Near)
		}
		if !slices.Equal(ue.Known, Names()) {
			t.Errorf("%q: known %v", c.name, ue.Known)
		}
	}
}

// TestParseSurvivesDamage damages the built-in files at random: Parse must
// answer with a File that compiles or with a *FileError that is complete.
func TestParseSurvivesDamage(t *testing.T) {
	var texts []string
	for _, n := range Names() {
		f, err := Builtin(n)
		if err != nil {
			t.Fatal(err)
		}
		texts = append(texts, string(f.Raw()))
	}
	rapid.Check(t, func(t *rapid.T) {
		lines := strings.Split(rapid.SampledFrom(texts).Draw(t, "file"), "\n")
		for range rapid.IntRange(1, 4).Draw(t, "wounds") {
			i := rapid.IntRange(0, len(lines)-1).Draw(t, "line")
			switch rapid.IntRange(0, 3).Draw(t, "kind") {
			case 0:
				lines = slices.Delete(lines, i, i+1)
			case 1:
				lines = slices.Insert(lines, i, lines[rapid.IntRange(0, len(lines)-1).Draw(t, "copy")])
			case 2:
				lines[i] = lines[i][:rapid.IntRange(0, len(lines[i])).Draw(t, "cut")]
			case 3:
				lines[i] += rapid.SampledFrom([]string{"nan", "[", "}", "\"", "=", ".", "9", "é", "\x00", "[[solid]]"}).Draw(t, "junk")
			}
			if len(lines) == 0 {
				lines = []string{""}
			}
		}
		f, err := Parse("damaged", []byte(strings.Join(lines, "\n")))
		if err == nil {
			if _, err := f.AtReference(nil); err != nil {
				t.Fatalf("it was accepted but does not compile: %v", err)
			}
			return
		}
		var fe *FileError
		if !errors.As(err, &fe) || len(fe.Problems) == 0 {
			t.Fatalf("got %v, want a *FileError with problems", err)
		}
		for _, p := range fe.Problems {
			if p.Reason == "" || p.Remedy == "" {
				t.Fatalf("incomplete: %+v", p)
			}
		}
	})
}

// TestParseHostileSizes gives Parse the largest of files, made to be slow.
func TestParseHostileSizes(t *testing.T) {
	const half = maxSize / 2
	cases := map[string]string{
		"nested lists":   "a=" + strings.Repeat("[", 9000) + strings.Repeat("]", 9000),
		"dotted key":     strings.Repeat("a.", half-2) + "a=1",
		"dotted header":  "[" + strings.Repeat("a.", half-4) + "a]",
		"many solids":    good + strings.Repeat("[[solid]]\ntransition={from='Q'}\n", half/20),
		"many terms":     good + strings.Repeat("[[liquid.pair]]\n", half/10),
		"unknown keys":   good + "[gas]\n" + strings.Repeat("[[liquid.pear]]\n", half/10),
		"long text":      "title = \"" + strings.Repeat("x", maxSize-20) + "\"",
		"long key":       strings.Repeat("x", maxSize-20) + " = 1",
		"many elements":  "temperature_C = [" + strings.Repeat("1,", half-20) + "]",
		"one bad member": good + "[[solid]]\n" + strings.Repeat("[[solid.member]]\n", half/10),
	}
	for name, text := range cases {
		start := time.Now()
		_, err := Parse("hostile", []byte(text))
		var fe *FileError
		if !errors.As(err, &fe) {
			t.Errorf("%s: got %v, want a *FileError", name, err)
		}
		if d := time.Since(start); d > 20*time.Second {
			t.Errorf("%s: took %v", name, d)
		} else if testing.Verbose() {
			t.Logf("%s: %v", name, d)
		}
	}
}

func FuzzParse(f *testing.F) {
	f.Add([]byte(good))
	f.Add([]byte("[[solid]]\n[solid.melting]\nT_C = 1\n[[solid.member]]"))
	f.Fuzz(func(t *testing.T, data []byte) {
		if g, err := Parse("fuzz", data); err == nil {
			if _, err := g.AtReference(nil); err != nil {
				t.Fatal(err)
			}
		}
	})
}
