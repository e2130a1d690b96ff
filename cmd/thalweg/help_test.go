package main

import (
	"bytes"
	"strings"
	"testing"

	"github.com/spf13/cobra"

	"thalweg/systems"
)

// Every example in the help texts is run as it stands.
func TestExamplesWork(t *testing.T) {
	t.Chdir(t.TempDir())
	writeFile(t, "samples.csv", "name,Di,Ab,An\nA,30,35,35\nB,60,10,30\n")
	f, err := systems.Builtin(defaultSystem)
	if err != nil {
		t.Fatal(err)
	}
	writeFile(t, "plan.toml", "system = \"di-ab-an\"\n[[panel]]\nkind = \"projection\"\n")
	writeFile(t, "my-system.toml", string(f.Raw()))
	lines := strings.Split(introduction, "\n")
	for _, cmd := range verbs() {
		lines = append(lines, strings.Split(cmd.Example, "\n")...)
	}
	n := 0
	for _, line := range lines {
		rest, ok := strings.CutPrefix(line, "  "+program+" ")
		if !ok {
			continue
		}
		n++
		code, out, errText := run(words(rest)...)
		if code != exitDone || out == "" && !strings.Contains(rest, "--output") {
			t.Errorf("%s: exit %d, %d bytes: %s", line, code, len(out), errText)
		}
	}
	if n < 15 {
		t.Errorf("only %d examples were found", n)
	}
}

func verbs() []*cobra.Command {
	return NewCmdRoot(newEnv(&bytes.Buffer{}, &bytes.Buffer{})).Commands()
}

func TestHelp(t *testing.T) {
	n := 0
	for _, cmd := range verbs() {
		code, out, errText := run(cmd.Name(), "--help")
		if code != exitDone || errText != "" {
			t.Errorf("%s: exit %d: %s", cmd.Name(), code, errText)
		}
		if cmd.Example == "" {
			continue // made by cobra
		}
		n++
		for _, want := range []string{"Examples:", "--format", "--output", "--quiet", cmd.Example} {
			if !strings.Contains(out, want) {
				t.Errorf("%s --help: no %q", cmd.Name(), want)
			}
		}
		for _, l := range strings.Split(cmd.Long, "\n") {
			if runes(l) > textWidth {
				t.Errorf("%s --help: a line of %d columns: %s", cmd.Name(), runes(l), l)
			}
		}
	}
	if n < 7 {
		t.Errorf("only %d verbs have examples", n)
	}
}

func TestTable(t *testing.T) {
	tb := table{columns: []column{{head: "name", left: true}, {head: "T", unit: "°C"}, {head: "empty"}, {head: "last", left: true}}}
	tb.row("é", "12.5", "", "x")
	tb.row("long name", "3")
	var b strings.Builder
	tb.write(&b)
	want := "  name          T  last\n" +
		"               °C\n" +
		"  é          12.5  x\n" +
		"  long name     3\n"
	if b.String() != want {
		t.Errorf("got\n%s\nwant\n%s", b.String(), want)
	}
}
