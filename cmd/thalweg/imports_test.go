package main

import (
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// Rooms know only those before them: for every folder, what its own code (tests
// apart) may import of this module.
var mayImport = map[string][]string{
	"ternary":          {},
	"ternary/gibbs":    {"ternary"},
	"ternary/tangent":  {"ternary", "ternary/gibbs"},
	"ternary/liquidus": {"ternary", "ternary/gibbs"},
	"ternary/descent":  {"ternary", "ternary/gibbs", "ternary/tangent", "ternary/liquidus"},
	"ternary/section":  {"ternary", "ternary/gibbs", "ternary/tangent"},
	"ternary/join":     {"ternary", "ternary/gibbs", "ternary/tangent", "ternary/liquidus"},
	"ternary/pressure": {"ternary", "ternary/gibbs", "ternary/liquidus"},
	"systems":          {"ternary", "ternary/gibbs"},
	"render":           {"ternary", "ternary/gibbs", "ternary/liquidus", "ternary/descent", "ternary/section", "ternary/join", "ternary/pressure"},
}

func TestRoomsKnowOnlyThoseBefore(t *testing.T) {
	root := filepath.Join("..", "..")
	seen := map[string]bool{}
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
			return err
		}
		rel, err := filepath.Rel(root, filepath.Dir(path))
		if err != nil {
			return err
		}
		room := filepath.ToSlash(rel)
		f, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
		if err != nil {
			return err
		}
		for _, imp := range f.Imports {
			name, _ := strconv.Unquote(imp.Path.Value)
			checkImport(t, path, room, name)
		}
		seen[room] = true
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	for room := range mayImport {
		if !seen[room] {
			t.Errorf("the room %s is gone: mend the table of allowed imports", room)
		}
	}
}

func checkImport(t *testing.T, path, room, name string) {
	if strings.Contains(name, "tdewolff/canvas") && !strings.HasPrefix(room, "render") {
		t.Errorf("%s imports %s: only render draws", path, name)
	}
	if strings.HasPrefix(room, "ternary") {
		switch name {
		case "os", "io", "io/fs", "time", "math/rand", "math/rand/v2", "net", "net/http":
			if room != "ternary/internal/trial" {
				t.Errorf("%s imports %s: the rooms of ternary have no input, output, clock or chance", path, name)
			}
		}
	}
	own, ok := strings.CutPrefix(name, "thalweg/")
	if !ok || room == "cmd/thalweg" || room == "ternary/internal/trial" {
		return
	}
	for _, allowed := range mayImport[room] {
		if own == allowed {
			return
		}
	}
	if strings.HasPrefix(room, "render/") && (own == "render" || strings.HasPrefix(own, "ternary") || own == "systems") {
		return
	}
	t.Errorf("%s imports %s: %s may import only %v of this module", path, name, room, mayImport[room])
}
