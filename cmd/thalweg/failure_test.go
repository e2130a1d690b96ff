package main

import (
	"bytes"
	"errors"
	"fmt"
	"strings"
	"testing"
	"time"

	"github.com/spf13/cobra"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

func TestExitCode(t *testing.T) {
	tests := []struct {
		name string
		err  error
		want int
	}{
		{"none", nil, exitDone},
		{"usage", &usageError{What: "x"}, exitUsage},
		{"wrapped usage", fmt.Errorf("y: %w", badInput(errors.New("x"))), exitUsage},
		{"incomplete", incomplete([]string{"x"}), exitIncomplete},
		{"nothing incomplete", incomplete(nil), exitDone},
		{"anything else", errors.New("x"), exitIncomplete},
	}
	for _, tt := range tests {
		if got := exitCode(tt.err); got != tt.want {
			t.Errorf("%s: %d, want %d", tt.name, got, tt.want)
		}
	}
}

// A panic must not reach the user.
func TestPanicBecomesMessage(t *testing.T) {
	var out, errText bytes.Buffer
	e := newEnv(&out, &errText)
	root := NewCmdRoot(e)
	root.AddCommand(&cobra.Command{Use: "fall", RunE: func(*cobra.Command, []string) error {
		_ = []int{}[len(errText.String())]
		return nil
	}})
	if code := execute(root, e, []string{"fall"}); code != exitIncomplete {
		t.Errorf("exit %d", code)
	}
	for _, want := range []string{"failed inside", "not of your input", "report it"} {
		if !strings.Contains(errText.String(), want) {
			t.Errorf("no %q in %q", want, errText.String())
		}
	}
	if strings.Contains(errText.String(), "goroutine") {
		t.Error("the stack was printed")
	}
}

// runWith runs the command with other computations.
func runWith(change func(*env), args ...string) (code int, out, err string) {
	var o, e bytes.Buffer
	env := newEnv(&o, &e)
	change(env)
	code = execute(NewCmdRoot(env), env, args)
	return code, o.String(), e.String()
}

// A projection that fails its checks is printed, marked, and ends with 1.
func TestIncompleteProjection(t *testing.T) {
	fails := func(e *env) {
		e.compute = func(s *gibbs.System, o liquidus.Options) (*liquidus.Projection, error) {
			p, err := liquidus.Compute(s, o)
			p.Checks.Passed, p.Checks.Problems = false, []string{"one arc ends nowhere"}
			p.Unmixed = []ternary.Composition{{0.5, 0.25, 0.25}}
			return p, err
		}
	}
	for format, mark := range map[string]string{"text": "INCOMPLETE", "json": `"status": "incomplete"`, "csv": ",incomplete\n"} {
		code, out, errText := runWith(fails, "liquidus", "di-an-fo", "--format", format)
		if code != exitIncomplete {
			t.Errorf("%s: exit %d", format, code)
		}
		if !strings.Contains(out, mark) || !strings.Contains(out, "eutectic") {
			t.Errorf("%s: the result lacks its mark or its content:\n%.400s", format, out)
		}
		for _, want := range []string{"incomplete: one arc ends nowhere", "incomplete: at 1 places on the liquidus the liquid separates into two"} {
			if !strings.Contains(errText, want) {
				t.Errorf("%s: no %q in %q", format, want, errText)
			}
		}
	}
}

// The figure of a line of descent stands on the projection, and is not whole
// when that is not.
func TestIncompleteProjectionUnderPath(t *testing.T) {
	t.Chdir(t.TempDir())
	code, out, errText := runWith(func(e *env) {
		e.compute = func(s *gibbs.System, o liquidus.Options) (*liquidus.Projection, error) {
			p, err := liquidus.Compute(s, o)
			p.Checks.Passed = false
			return p, err
		}
	}, "descend", "di-an-fo", "--bulk", "Di=50,An=30,Fo=20", "--figure", "a.svg")
	if code != exitIncomplete || !strings.Contains(out, "Checks passed") || !strings.Contains(errText, "the projection of the figure: the projection failed its own checks") {
		t.Errorf("exit %d: %s", code, errText)
	}
}

func TestIncompletePath(t *testing.T) {
	fails := func(e *env) {
		e.follow = func(s *gibbs.System, x ternary.Composition, o descent.Options) (*descent.Path, error) {
			p, err := descent.Follow(s, x, o)
			p.Checks.Passed, p.Checks.Problems = false, []string{"the masses miss the bulk"}
			return p, err
		}
	}
	for format, mark := range map[string]string{"text": "INCOMPLETE", "json": `"status": "incomplete"`, "csv": ",incomplete\n"} {
		code, out, errText := runWith(fails, "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35", "--format", format)
		if code != exitIncomplete || !strings.Contains(out, mark) || !strings.Contains(errText, "incomplete: the masses miss the bulk") {
			t.Errorf("%s: exit %d: %s", format, code, errText)
		}
	}
}

// One path that cannot be followed does not take the others with it.
func TestOnePathOfManyFails(t *testing.T) {
	t.Chdir(t.TempDir())
	writeFile(t, "two.csv", "name,Di,Ab,An\nA,30,35,35\nB,100,0,0\n")
	fails := func(e *env) {
		e.follow = func(s *gibbs.System, x ternary.Composition, o descent.Options) (*descent.Path, error) {
			if x[0] == 1 {
				return nil, errors.New("it does not freeze")
			}
			return descent.Follow(s, x, o)
		}
	}
	marks := map[string][]string{
		"text": {"NOT FOLLOWED: it does not freeze", "L out"},
		"json": {`"not_followed": "it does not freeze"`, `"L out"`},
		"csv":  {"B,equilibrium,,not followed: it does not freeze", "L out"},
	}
	for format, want := range marks {
		code, out, errText := runWith(fails, "descend", "di-ab-an", "--samples", "two.csv", "--format", format, "--figure", "f.svg")
		if code != exitIncomplete || !strings.Contains(errText, "incomplete: B: the path could not be followed: it does not freeze") {
			t.Errorf("%s: exit %d: %s", format, code, errText)
		}
		for _, w := range want {
			if !strings.Contains(out, w) {
				t.Errorf("%s: no %q in the result", format, w)
			}
		}
	}
	code, out, errText := runWith(fails, "descend", "di-ab-an", "--bulk", "Di=1")
	if code != exitIncomplete || out != "" || !strings.Contains(errText, "the path could not be followed: it does not freeze") {
		t.Errorf("alone: exit %d: %s%s", code, out, errText)
	}
}

func TestProgress(t *testing.T) {
	var shown bytes.Buffer
	var p *progress
	const bar = "following [######################........] 3 of 4"
	// a busy machine may not come to draw the bar in a short time
	for wait := 20 * time.Millisecond; wait < 10*time.Second && !strings.Contains(shown.String(), bar); wait *= 3 {
		shown.Reset()
		p = newProgress(&shown, "following", 4, 0, time.Millisecond)
		for range 3 {
			p.step()
		}
		time.Sleep(wait)
		p.stop()
	}
	if !strings.Contains(shown.String(), bar) {
		t.Errorf("shown: %q", shown.String())
	}
	if !strings.HasSuffix(shown.String(), " \r") {
		t.Error("the line was not cleared")
	}

	shown.Reset()
	p = newProgress(&shown, "following", 4, time.Hour, time.Millisecond)
	p.step()
	p.stop()
	if shown.Len() != 0 {
		t.Errorf("short work showed %q", shown.String())
	}

	e := newEnv(&bytes.Buffer{}, &shown)
	for _, tt := range []struct{ terminal, quiet bool }{{false, false}, {true, true}} {
		e.terminal = tt.terminal
		if p := e.startProgress(tt.quiet, "x", 1); p.quit != nil {
			t.Errorf("a bar is made with %+v", tt)
		}
	}
}
