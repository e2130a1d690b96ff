package main

import (
	"fmt"
	"io"
	"os"
	"runtime/debug"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/join"
	"thalweg/ternary/liquidus"
	"thalweg/ternary/section"
)

// program is the name under which the command speaks of itself.
const program = "thalweg"

// env is what the command has of the world around it, and the computations that
// it calls.
type env struct {
	out      io.Writer // results
	err      io.Writer // messages
	terminal bool      // err is a terminal
	version  string
	compute  func(*gibbs.System, liquidus.Options) (*liquidus.Projection, error)
	follow   func(*gibbs.System, ternary.Composition, descent.Options) (*descent.Path, error)
	melt     func(*gibbs.System, ternary.Composition, descent.MeltOptions) (*descent.Path, error)
	cut      func(*gibbs.System, float64) (*section.Section, error)
	join     func(*gibbs.System, ternary.Composition, ternary.Composition, join.Options) (*join.Diagram, error)
}

func newEnv(out, err io.Writer) *env {
	return &env{out: out, err: err, version: buildVersion(), compute: liquidus.Compute, follow: descent.Follow, melt: descent.Melt, join: join.Compute,
		cut: func(sys *gibbs.System, T float64) (*section.Section, error) {
			return section.Compute(sys, T, section.Options{})
		}}
}

func main() {
	e := newEnv(os.Stdout, os.Stderr)
	e.terminal = isTerminal(os.Stderr)
	os.Exit(execute(NewCmdRoot(e), e, os.Args[1:]))
}

// execute runs the command tree on the arguments and returns the exit code. A
// panic below turns into a message.
func execute(root *cobra.Command, e *env, args []string) (code int) {
	defer func() {
		if r := recover(); r != nil {
			fmt.Fprintf(e.err, "%s: the program failed inside: %v\n"+
				"This is a defect of %s, not of your input, and nothing it printed should be relied on.\n"+
				"Please report it, with this message, the command you gave and the system file.\n", program, r, program)
			code = exitIncomplete
		}
	}()
	root.SetArgs(args)
	root.SetOut(e.out)
	root.SetErr(e.err)
	err := root.Execute()
	if err != nil {
		fmt.Fprintln(e.err, message(err))
	}
	return exitCode(err)
}

// message is an error as printed: each of its lines after the program's name.
func message(err error) string {
	lines := strings.Split(strings.TrimRight(err.Error(), "\n"), "\n")
	return program + ": " + strings.Join(lines, "\n"+program+": ")
}

// isTerminal reports that someone may be looking at f as it is written.
func isTerminal(f *os.File) bool {
	st, err := f.Stat()
	return err == nil && st.Mode()&os.ModeCharDevice != 0 && os.Getenv("TERM") != "dumb"
}

// buildVersion is the version of the module, or the revision it was built from.
func buildVersion() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "unknown"
	}
	if v := info.Main.Version; v != "" && v != "(devel)" {
		return v
	}
	revision, changed := "", ""
	for _, s := range info.Settings {
		switch {
		case s.Key == "vcs.revision" && len(s.Value) >= 12:
			revision = s.Value[:12]
		case s.Key == "vcs.modified" && s.Value == "true":
			changed = "+changes"
		}
	}
	if revision == "" {
		return "development"
	}
	return revision + changed
}
