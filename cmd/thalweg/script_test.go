package main

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"thalweg/systems"
)

// run executes the command as main does and returns what it printed.
func run(args ...string) (code int, out, err string) {
	var o, e bytes.Buffer
	env := newEnv(&o, &e)
	code = execute(NewCmdRoot(env), env, args)
	return code, o.String(), e.String()
}

// TestScripts runs the scripts in testdata/script, each in a folder of its own.
// A script is a list of lines; below them may stand files, each after a line
// "-- NAME --". The lines are
//
//	# …                    remark
//	thalweg ARGS           run the command; words are cut at spaces, "…" keeps them together
//	edit NAME FILE OLD NEW write the built-in system NAME to FILE with OLD replaced by NEW
//	exit N                 the last run ended with this code
//	out TEXT, err TEXT     what it printed holds the text
//	!out TEXT, !err TEXT   what it printed does not hold it; without TEXT, it printed nothing
//	file NAME TEXT         the file exists and holds the text
//	!file NAME             there is no such file
//
// Every run must be followed by its exit.
func TestScripts(t *testing.T) {
	scripts, err := filepath.Glob("testdata/script/*.txt")
	if err != nil || len(scripts) == 0 {
		t.Fatalf("no scripts: %v", err)
	}
	for _, path := range scripts {
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		t.Run(strings.TrimSuffix(filepath.Base(path), ".txt"), func(t *testing.T) {
			t.Chdir(t.TempDir())
			runScript(t, string(text))
		})
	}
}

// script is a script under way.
type script struct {
	t        *testing.T
	line     int
	code     int
	out, err string
	pending  bool // a run whose exit has not been checked
}

func runScript(t *testing.T, text string) {
	lines, files := splitScript(text)
	for name, content := range files {
		if err := os.WriteFile(name, []byte(content), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	s := &script{t: t}
	for i, l := range lines {
		s.line = i + 1
		if l = strings.TrimSpace(l); l != "" && l[0] != '#' {
			s.do(l)
		}
	}
	if s.pending {
		s.fail("the last run has no exit line")
	}
}

// splitScript separates the lines from the files below them.
func splitScript(text string) (lines []string, files map[string]string) {
	files = map[string]string{}
	name := ""
	for _, l := range strings.SplitAfter(text, "\n") {
		bare := strings.TrimSpace(l)
		switch {
		case strings.HasPrefix(bare, "-- ") && strings.HasSuffix(bare, " --"):
			name = strings.TrimSpace(strings.Trim(bare, "-"))
			files[name] = ""
		case name != "":
			files[name] += l
		default:
			lines = append(lines, l)
		}
	}
	return lines, files
}

func (s *script) fail(format string, args ...any) {
	s.t.Helper()
	s.t.Errorf("line %d: %s", s.line, fmt.Sprintf(format, args...))
}

func (s *script) do(line string) {
	s.t.Helper()
	verb, rest, _ := strings.Cut(line, " ")
	rest = strings.TrimSpace(rest)
	switch verb {
	case program:
		if s.pending {
			s.fail("the run before has no exit line")
		}
		s.code, s.out, s.err = run(words(rest)...)
		s.pending = true
	case "edit":
		s.edit(words(rest))
	case "exit":
		s.pending = false
		if strconv.Itoa(s.code) != rest {
			s.fail("exit %d, want %s; out:\n%s\nerr:\n%s", s.code, rest, s.out, s.err)
		}
	case "out", "err":
		if text := map[string]string{"out": s.out, "err": s.err}[verb]; !strings.Contains(text, rest) {
			s.fail("%s does not hold %q:\n%s", verb, rest, text)
		}
	case "!out", "!err":
		text := map[string]string{"!out": s.out, "!err": s.err}[verb]
		if rest == "" && text != "" || rest != "" && strings.Contains(text, rest) {
			s.fail("%s holds %q:\n%s", verb[1:], rest, text)
		}
	case "file":
		name, want, _ := strings.Cut(rest, " ")
		if b, err := os.ReadFile(name); err != nil || !strings.Contains(string(b), want) {
			s.fail("file %s does not hold %q (%v)", name, want, err)
		}
	case "!file":
		if _, err := os.Lstat(rest); err == nil {
			s.fail("there is a file %s", rest)
		}
	default:
		s.t.Fatalf("line %d: %q is no line of a script", s.line, line)
	}
}

// edit writes a changed built-in system; the change must take place.
func (s *script) edit(w []string) {
	s.t.Helper()
	if len(w) != 4 {
		s.t.Fatalf("line %d: edit takes four words, got %q", s.line, w)
	}
	f, err := systems.Builtin(w[0])
	if err != nil {
		s.t.Fatal(err)
	}
	raw := string(f.Raw())
	changed := strings.Replace(raw, strings.ReplaceAll(w[2], `\n`, "\n"), strings.ReplaceAll(w[3], `\n`, "\n"), 1)
	if changed == raw {
		s.t.Fatalf("line %d: %s does not hold %q", s.line, w[0], w[2])
	}
	if err := os.WriteFile(w[1], []byte(changed), 0o666); err != nil {
		s.t.Fatal(err)
	}
}

// words cuts a line at spaces; a word may stand in double or single quotes.
func words(line string) []string {
	var out []string
	var word strings.Builder
	var quote rune
	started := false
	for _, c := range line {
		switch {
		case quote != 0 && c == quote:
			quote = 0
		case quote != 0:
			word.WriteRune(c)
		case c == '"' || c == '\'':
			quote, started = c, true
		case c == ' ':
			if started {
				out = append(out, word.String())
			}
			word.Reset()
			started = false
		default:
			word.WriteRune(c)
			started = true
		}
	}
	if started {
		out = append(out, word.String())
	}
	return out
}
