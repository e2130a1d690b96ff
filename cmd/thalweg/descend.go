package main

import (
	"errors"
	"fmt"

	"github.com/spf13/cobra"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/liquidus"
)

// DescendOptions are the options of the verb descend.
type DescendOptions struct {
	resultFlags
	systemFlags
	figureFlags
	bulkFlags
	Mode   string
	Retain float64
	Remove []string

	removals []removal
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
in fractional mode they leave as they form, or all but the share --retain of
them. --remove takes solids that are in contact out at a chosen temperature: all
of them, some (1250:Pl,Di), or a share of each (1250:Pl=0.5).

SYSTEM is a built-in name or the path of a .toml file; without it, ` + defaultSystem + `.
The bulk is given in the basis in force and normalised, with a notice if it did
not sum to 100 or 1; a component that is not named is 0. The text result shows
the events and every tenth of the crystallisation; JSON and CSV hold all steps.`,
		Example: `  thalweg descend di-ab-an --bulk Di=30,Ab=35,An=35
  thalweg descend di-an-fo --bulk Di=50,An=35,Fo=15 --mode fractional --figure path.pdf --width 84
  thalweg descend di-ab-an --bulk Di=30,Ab=35,An=35 --mode fractional --retain 0.2
  thalweg descend di-ab-an --bulk Di=30,Ab=35,An=35 --remove 1280:Pl --remove 1230
  thalweg descend lif-naf-kf --bulk LiF=30,NaF=30,KF=40 --basis mol --format csv --output salt.csv
  thalweg descend di-ab-an --samples samples.csv --format json --output paths.json`,
		Args: atMostOneSystem,
		RunE: verb(e, o, &o.figureFlags, &o.Quiet, func(cmd *cobra.Command, args []string) error {
			o.fill(cmd, args)
			return o.check(cmd)
		}, runF, descendRun),
	}
	o.resultFlags.add(cmd)
	o.systemFlags.add(cmd)
	o.figureFlags.add(cmd)
	o.bulkFlags.add(cmd)
	fs := cmd.Flags()
	fs.StringVar(&o.Mode, "mode", modes[0], "`how` solids stay with the liquid: equilibrium or fractional")
	fs.Float64Var(&o.Retain, "retain", 0, "in fractional mode, `share` of newly formed solids that stays in contact, 0 to 1")
	fs.StringArrayVar(&o.Remove, "remove", nil, "take solids out at `T[:SOLID[=SHARE],…]`, T in °C (repeatable)")
	choices(cmd, "mode", modes...)
	choices(cmd, "retain", "0.1", "0.2", "0.5")
	_ = cmd.RegisterFlagCompletionFunc("remove", cobra.NoFileCompletions)
	return cmd
}

func (o *DescendOptions) check(cmd *cobra.Command) (err error) {
	if err := o.bulkFlags.check(cmd); err != nil {
		return err
	}
	switch fractional := o.Mode == modes[1]; {
	case o.Mode != modes[0] && !fractional:
		return &usageError{Where: "--mode", What: fmt.Sprintf("%q is unknown", o.Mode), Remedy: "write equilibrium or fractional"}
	case !(o.Retain >= 0 && o.Retain <= 1):
		return &usageError{Where: "--retain", What: fmt.Sprintf("%g is not a share", o.Retain), Remedy: "give a number from 0 to 1"}
	case !fractional && cmd.Flags().Changed("retain"):
		return &usageError{Where: "--retain", What: "at equilibrium all solids stay in contact", Remedy: "add --mode fractional"}
	case fractional && o.Retain == 0 && len(o.Remove) > 0:
		return &usageError{Where: "--remove", What: "in fractional mode solids leave as they form, so that none are left to remove", Remedy: "leave out --mode fractional, or keep some with --retain"}
	}
	if o.removals, err = parseRemovals(o.Remove); err != nil {
		return err
	}
	if err := firstError(o.resultFlags.check, o.systemFlags.check, o.figureFlags.check); err != nil {
		return err
	}
	return checkTargets(o.Output, o.Figures, o.System, o.Samples)
}

// pathsResult is what the writers of the verbs descend and melt get.
type pathsResult struct {
	*subject
	mode     descent.Mode
	retain   float64
	removals []removal
	table    bool // the samples came from a table
	courses  []course
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
	opts := descent.Options{Mode: descent.Mode(o.Mode), Retain: o.Retain}
	if opts.Removals, err = s.removals(o.removals); err != nil {
		return err
	}
	r := &pathsResult{subject: s, mode: opts.Mode, retain: o.Retain, removals: o.removals}
	return r.run(e, &o.bulkFlags, &o.resultFlags, &o.figureFlags, func(x ternary.Composition) (*descent.Path, error) {
		return e.follow(s.sys, x, opts)
	})
}

// run follows every bulk composition and delivers the result.
func (r *pathsResult) run(e *env, bulks *bulkFlags, out *resultFlags, fig *figureFlags, follow func(ternary.Composition) (*descent.Path, error)) error {
	list, err := bulks.compositions(e, r.subject, out.Quiet)
	if err != nil {
		return err
	}
	r.table = bulks.Samples != ""
	bar := e.startProgress(out.Quiet, "following", len(list))
	for _, q := range list {
		path, err := follow(q.X)
		r.courses = append(r.courses, course{q, path, err})
		bar.step()
	}
	bar.stop()
	if !r.table && r.courses[0].err != nil {
		return fmt.Errorf("the path could not be followed: %w", r.courses[0].err)
	}
	reasons := r.reasons()
	e.noticePaths(r, out.Quiet)
	result, err := r.encode(out.Format)
	if err != nil {
		return err
	}
	err = e.deliver(out.Output, result)
	more, figureErr := r.draw(e, fig)
	return errors.Join(err, figureErr, incomplete(append(reasons, more...)))
}

// process is what happens, in words.
func (r *pathsResult) process() string {
	what := string(r.mode)
	if !r.mode.Melts() {
		what += " crystallisation"
	}
	if r.retain > 0 {
		what += fmt.Sprintf(" with %s of new solids kept in contact", short(r.retain))
	}
	for _, q := range r.removals {
		what += "; " + q.String()
	}
	return what
}

// reasons says what is wrong with the paths.
func (r *pathsResult) reasons() []string {
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
func (e *env) noticePaths(r *pathsResult, quiet bool) {
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

func (r *pathsResult) encode(format string) ([]byte, error) {
	return encode(format, func() any { return r.json() }, r.csv, r.text)
}

// draw lays the paths over the projection. more says why the projection is not
// whole.
func (r *pathsResult) draw(e *env, o *figureFlags) (more []string, err error) {
	if len(o.Figures) == 0 {
		return nil, nil
	}
	var p *liquidus.Projection
	p, _, _, err = e.project(r.subject, isotherms{})
	if err != nil {
		return nil, fmt.Errorf("the projection for the figure: %w", err)
	}
	pic := picture{projection: p, provenance: r.provenance(r.process(), "basis "+r.basis.String())}
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
	return more, o.draw(r.subject, pic)
}
