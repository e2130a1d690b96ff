package main

import (
	"fmt"
	"math"
	"path/filepath"
	"slices"

	"github.com/spf13/cobra"

	"thalweg/ternary"
)

// resultFlags say how and where the result is printed.
type resultFlags struct {
	Format string // text, json or csv
	Output string // file, or "-" for standard output
	Quiet  bool
}

var formats = []string{"text", "json", "csv"}

func (f *resultFlags) add(cmd *cobra.Command) {
	fs := cmd.Flags()
	fs.StringVar(&f.Format, "format", "text", "`form` of the result: text, json or csv")
	fs.StringVar(&f.Output, "output", "-", "`file` for the result; - is standard output")
	fs.BoolVar(&f.Quiet, "quiet", false, "no notices and no progress on standard error")
	choices(cmd, "format", formats...)
}

func (f *resultFlags) check() error {
	if !slices.Contains(formats, f.Format) {
		return &usageError{Where: "--format", What: fmt.Sprintf("%q is unknown", f.Format), Remedy: "write text, json or csv"}
	}
	return checkTarget("--output", f.Output)
}

// systemFlags say which system is worked on, and in which measure compositions
// are read and shown.
type systemFlags struct {
	System   string // built-in name or path; empty for the default
	Basis    string // wt or mol
	Without  []string
	Pressure *float64 // GPa; nil for the file's own

	pressure float64
	basis    ternary.Basis
}

func (f *systemFlags) add(cmd *cobra.Command) {
	fs := cmd.Flags()
	fs.StringVar(&f.Basis, "basis", "wt", "`measure` of compositions: wt or mol (percent)")
	fs.StringSliceVar(&f.Without, "without", nil, "withhold the solid with this `symbol`, as if it did not nucleate (repeatable)")
	fs.Float64Var(&f.pressure, "pressure", 0, "pressure in `GPa` (default: that of the system file)")
	choices(cmd, "basis", "wt", "mol")
	_ = cmd.RegisterFlagCompletionFunc("without", completeSolids)
	_ = cmd.RegisterFlagCompletionFunc("pressure", cobra.NoFileCompletions)
	cmd.ValidArgsFunction = completeSystem
}

// fill completes the flags from the command line.
func (f *systemFlags) fill(cmd *cobra.Command, args []string) {
	if len(args) > 0 {
		f.System = args[0]
	}
	if cmd.Flags().Changed("pressure") {
		f.Pressure = &f.pressure
	}
}

func (f *systemFlags) check() (err error) {
	if f.basis, err = ternary.ParseBasis(f.Basis); err != nil {
		return &usageError{Where: "--basis", What: fmt.Sprintf("%q is unknown", f.Basis), Remedy: "write wt or mol", Err: err}
	}
	if f.Pressure != nil && (math.IsNaN(*f.Pressure) || math.IsInf(*f.Pressure, 0) || *f.Pressure < 0) {
		return &usageError{Where: "--pressure", What: fmt.Sprintf("%g is not a pressure", *f.Pressure), Remedy: "give GPa, 0 or more"}
	}
	return nil
}

// checkTargets refuses a command that would write one file twice, or write over
// one that it reads.
func checkTargets(output string, figures []string, inputs ...string) error {
	taken := map[string]string{}
	for _, in := range inputs {
		if in != "" {
			taken[canonical(in)] = "it is read by the same command"
		}
	}
	targets := slices.Clone(figures)
	if output != "-" {
		targets = append(targets, output)
	}
	for _, path := range targets {
		if why, ok := taken[canonical(path)]; ok {
			return &usageError{Where: path, What: "it cannot be written: " + why, Remedy: "choose another file name"}
		}
		taken[canonical(path)] = "it is named twice"
	}
	return nil
}

// canonical is one spelling for all names of a file.
func canonical(path string) string {
	if p, err := filepath.Abs(path); err == nil {
		path = p
	}
	if p, err := filepath.EvalSymlinks(path); err == nil {
		path = p
	}
	return path
}

// firstError runs checks in order and returns the first error.
func firstError(checks ...func() error) error {
	for _, check := range checks {
		if err := check(); err != nil {
			return err
		}
	}
	return nil
}

// encode writes a result in the format asked for.
func encode(format string, json func() any, csv func() ([]byte, error), text func() string) ([]byte, error) {
	switch format {
	case "json":
		return toJSON(json())
	case "csv":
		return csv()
	}
	return []byte(text()), nil
}

// verb is the RunE of a command: it completes and checks the options, says which flags
// do nothing, and runs; runF, if any, takes the place of run.
func verb[O any](e *env, o *O, fig *figureFlags, quiet *bool, prepare func(*cobra.Command, []string) error, runF func(*O) error, run func(*env, *O) error) func(*cobra.Command, []string) error {
	return func(cmd *cobra.Command, args []string) error {
		if err := prepare(cmd, args); err != nil {
			return err
		}
		if fig != nil {
			e.idleFigureFlags(cmd, fig, *quiet)
		}
		if runF != nil {
			return runF(o)
		}
		return run(e, o)
	}
}
