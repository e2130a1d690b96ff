package systems

import (
	"errors"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// wantPattern reads what a fixture expects at a line: # want[column]: text | text
var wantPattern = regexp.MustCompile(`# want(?:\[(\d+)\])?: (.*)$`)

// TestBadFiles reads every file of testdata/bad. Each problem must be expected by
// a comment at its line, and each expectation met.
func TestBadFiles(t *testing.T) {
	files, err := filepath.Glob("testdata/bad/*.toml")
	if err != nil || len(files) < 6 {
		t.Fatalf("fixtures are missing: %v %v", files, err)
	}
	for _, file := range files {
		t.Run(filepath.Base(file), func(t *testing.T) {
			data, err := os.ReadFile(file)
			if err != nil {
				t.Fatal(err)
			}
			_, err = Load(file)
			var fe *FileError
			if !errors.As(err, &fe) {
				t.Fatalf("Load gave %v, want a *FileError", err)
			}
			checkExpected(t, string(data), fe.Problems)
		})
	}
}

func checkExpected(t *testing.T, text string, problems []Problem) {
	t.Helper()
	met := make([]bool, len(problems))
	expected := 0
	for i, line := range strings.Split(text, "\n") {
		m := wantPattern.FindStringSubmatch(line)
		if m == nil {
			continue
		}
		for _, want := range strings.Split(m[2], " | ") {
			expected++
			found := false
			for k, p := range problems {
				column := m[1] == "" || m[1] == strconv.Itoa(p.Column)
				if p.Line == i+1 && column && !met[k] && strings.Contains(p.String(), want) {
					met[k], found = true, true
					break
				}
			}
			if !found {
				t.Errorf("line %d: no problem says %q", i+1, m[0])
			}
		}
	}
	if expected == 0 {
		t.Fatal("the fixture expects nothing")
	}
	for k, p := range problems {
		if !met[k] {
			t.Errorf("unexpected: %s", p)
		}
		if p.Remedy == "" || p.Reason == "" || p.Line == 0 || p.Column == 0 {
			t.Errorf("incomplete: %+v", p)
		}
		if k > 0 && problems[k-1].Line > p.Line {
			t.Errorf("not sorted by line: %s", p)
		}
	}
}
