package main

import (
	"errors"
	"fmt"

	"github.com/spf13/cobra"

	"thalweg/ternary/descent"
	"thalweg/ternary/liquidus"
)

// DescendOptions are the options of the verb descend.
type DescendOptions struct {
	resultFlags
	systemFlags
	figureFlags
	Bulk    string // empty if Samples is given
	Mode    string
	Samples string // file; empty if Bulk is given
}

var modes = []string{string(descent.Equilibrium), string(descent.Fractional)}

// NewCmdDescend builds the verb descend; runF replaces its run function in tests.
func NewCmdDescend(e *env, runF func(*DescendOptions) error) *cobra.Command {
	o := &DescendOptions{}
	cmd := &cobra.Command{
		Use:   "descend [SYSTEM] --bulk A=…,B=…,C=…",
		Short: "Follow the line of descent of a composition on cooling",
		Long: `Follow the line of descent of a bulk composition on cooling: the temperatures at
which solids come and go, the liquid and the solids at each step, the share of
melt and the heat released, to the end.

In equilibrium mode the solids stay in contact with the liquid and react with it;
in fractional mode they leave as they form.

SYSTEM is a built-in name or the path of a .toml file; without it, ` + defaultSystem + `.
The bulk is given in the basis in force and normalised, with a notice if it did
not sum to 100 or 1; a component that is not named is 0. The text result shows
the events and every tenth of the crystallisation; JSON and CSV hold all steps.`,
		Example: `  thalweg descend di-ab-an --bulk Di=30,Ab=35,An=35
  thalweg descend di-an-fo --bulk Di=50,An=35,Fo=15 --mode fractional --figure path.pdf --width 84
  thalweg descend lif-naf-kf --bulk LiF=30,NaF=30,KF=40 --basis mol --format csv --output salt.csv
  thalweg descend di-ab-an --samples samples.csv --format json --output paths.json`,
		Args: atMostOneSystem,
		RunE: func(cmd *cobra.Command, args []string) error {
			o.fill(cmd, args)
			if err := o.check(cmd); err != nil {
				return err
			}
			e.idleFigureFlags(cmd, &o.figureFlags, o.Quiet)
			if runF != nil {
				return runF(o)
			}
			return descendRun(e, o)
		},
	}
	o.resultFlags.add(cmd)
	o.systemFlags.add(cmd)
	o.figureFlags.add(cmd)
	fs := cmd.Flags()
	fs.StringVar(&o.Bulk, "bulk", "", "bulk `composition`, such as Di=30,Ab=35,An=35")
	fs.StringVar(&o.Mode, "mode", modes[0], "`how` solids stay with the liquid: equilibrium or fractional")
	fs.StringVar(&o.Samples, "samples", "", "`file` of samples to follow instead of --bulk: CSV with columns name and component symbols")
	choices(cmd, "mode", modes...)
	_ = cmd.RegisterFlagCompletionFunc("bulk", completeBulk)
	_ = cmd.RegisterFlagCompletionFunc("samples", endings("csv"))
	return cmd
}

func (o *DescendOptions) check(cmd *cobra.Command) error {
	bulk, samples := cmd.Flags().Changed("bulk"), cmd.Flags().Changed("samples")
	switch {
	case bulk && samples:
		return &usageError{What: "both --bulk and --samples are given", Remedy: "keep the one that is meant"}
	case !bulk && !samples:
		return &usageError{What: "there is no composition to follow", Remedy: "give --bulk Di=30,Ab=35,An=35 or --samples FILE.csv"}
	case o.Mode != modes[0] && o.Mode != modes[1]:
		return &usageError{Where: "--mode", What: fmt.Sprintf("%q is unknown", o.Mode), Remedy: "write equilibrium or fractional"}
	}
	for _, check := range []func() error{o.resultFlags.check, o.systemFlags.check, o.figureFlags.check} {
		if err := check(); err != nil {
			return err
		}
	}
	return checkTargets(o.Output, o.Figures, o.System, o.Samples)
}

// descendResult is what the writers of the verb get.
type descendResult struct {
	*subject
	mode    descent.Mode
	table   bool // the samples came from a table
	courses []course
}

// course is one sample with its path, or the reason why there is none.
type course struct {
	sample
	path *descent.Path
	err  error
}

// complete reports that the path is whole and passed its checks.
func (c *course) complete() bool { return c.err == nil && c.path.Checks.Passed }

func descendRun(e *env, o *DescendOptions) error {
	s, err := e.open(&o.systemFlags, o.Quiet)
	if err != nil {
		return err
	}
	list, err := o.bulks(e, s)
	if err != nil {
		return err
	}
	r := &descendResult{subject: s, mode: descent.Mode(o.Mode), table: o.Samples != ""}
	bar := e.startProgress(o.Quiet, "following", len(list))
	for _, q := range list {
		path, err := e.follow(s.sys, q.X, descent.Options{Mode: r.mode})
		r.courses = append(r.courses, course{q, path, err})
		bar.step()
	}
	bar.stop()
	if !r.table && r.courses[0].err != nil {
		return fmt.Errorf("the path could not be followed: %w", r.courses[0].err)
	}
	reasons := r.reasons()
	e.noticePaths(r, o.Quiet)
	result, err := r.encode(o.Format)
	if err != nil {
		return err
	}
	err = e.deliver(o.Output, result)
	more, figureErr := r.draw(e, o)
	return errors.Join(err, figureErr, incomplete(append(reasons, more...)))
}

// bulks are the compositions to follow.
func (o *DescendOptions) bulks(e *env, s *subject) ([]sample, error) {
	if o.Samples != "" {
		return e.loadSamples(o.Samples, s, o.Quiet)
	}
	x, sum, err := parseBulk(o.Bulk, s.sys.Components, s.basis)
	if err != nil {
		return nil, err
	}
	if !normalised(sum) {
		e.notice(o.Quiet, "the bulk composition sums to %s and was normalised to 100 %s", short(sum), s.basis.Unit())
	}
	return []sample{{X: x, Sum: sum}}, nil
}

// reasons says what is wrong with the paths.
func (r *descendResult) reasons() []string {
	var out []string
	for i := range r.courses {
		c := &r.courses[i]
		prefix := ""
		if r.table {
			prefix = c.Name + ": "
		}
		switch {
		case c.err != nil:
			out = append(out, prefix+"the path could not be followed: "+c.err.Error())
		case !c.path.Checks.Passed && len(c.path.Checks.Problems) == 0:
			out = append(out, prefix+"the path failed its own checks")
		case !c.path.Checks.Passed:
			for _, p := range c.path.Checks.Problems {
				out = append(out, prefix+p)
			}
		}
	}
	return out
}

// noticePaths says which paths leave the range of the system file.
func (e *env) noticePaths(r *descendResult, quiet bool) {
	n := 0
	for _, c := range r.courses {
		if c.err == nil && (r.outside(c.path.LiquidT) || r.outside(c.path.EndT)) {
			n++
		}
	}
	switch {
	case n > 0 && r.table:
		e.notice(quiet, "%d of %d paths leave the range for which the system file vouches, %s", n, len(r.courses), r.vouched())
	case n > 0:
		e.notice(quiet, "the path leaves the range for which the system file vouches, %s", r.vouched())
	}
}

func (r *descendResult) encode(format string) ([]byte, error) {
	switch format {
	case "json":
		return toJSON(r.json())
	case "csv":
		return r.csv()
	}
	return []byte(r.text()), nil
}

// draw lays the paths over the projection. more says why the projection is not
// whole.
func (r *descendResult) draw(e *env, o *DescendOptions) (more []string, err error) {
	if len(o.Figures) == 0 {
		return nil, nil
	}
	var p *liquidus.Projection
	p, _, _, err = e.project(r.subject, isotherms{})
	if err != nil {
		return nil, fmt.Errorf("the projection for the figure: %w", err)
	}
	pic := picture{projection: p, provenance: r.provenance("descend, "+o.Mode, "basis "+r.basis.String())}
	for _, c := range r.courses {
		if c.err == nil {
			pic.paths = append(pic.paths, c.path)
		}
		if r.table {
			pic.samples = append(pic.samples, c.sample)
		}
	}
	for _, reason := range projectionReasons(p) {
		more = append(more, "the projection of the figure: "+reason)
	}
	return more, o.figureFlags.draw(r.subject, pic)
}
