package main

import (
	"errors"
	"fmt"

	"github.com/spf13/cobra"

	"thalweg/render"
	"thalweg/ternary"
	"thalweg/ternary/section"
	"thalweg/ternary/tangent"
)

// SectionOptions are the options of the verb section.
type SectionOptions struct {
	resultFlags
	systemFlags
	figureFlags
	bulkFlags
	At string

	temperatures []float64 // °C
}

// mostSections bounds a series.
const mostSections = 60

// NewCmdSection builds the verb section; runF replaces its run function in tests.
func NewCmdSection(e *env, runF func(*SectionOptions) error) *cobra.Command {
	o := &SectionOptions{}
	cmd := &cobra.Command{
		Use:   "section [SYSTEM] --at T[,T…]",
		Short: "Cut a system at a temperature",
		Long: `Compute isothermal sections: every one-, two- and three-phase region of the
triangle at each temperature, with tie lines and the corners of the three-phase
triangles, above, between and below liquidus and solidus.

With --bulk or --samples the phases at equilibrium in those compositions, their
amounts by the lever rule, and their compositions are given as well. Several
temperatures make a series; its figure holds one panel for each.

SYSTEM is a built-in name or the path of a .toml file; without it, ` + defaultSystem + `.`,
		Example: `  thalweg section di-an-fo --at 1300
  thalweg section di-ab-an --at 1300,1200,1150 --figure sections.pdf
  thalweg section di-ab-an --at 1250 --bulk Di=30,Ab=35,An=35 --format json`,
		Args: atMostOneSystem,
		RunE: verb(e, o, &o.figureFlags, &o.Quiet, func(cmd *cobra.Command, args []string) error {
			o.fill(cmd, args)
			return o.check(cmd)
		}, runF, sectionRun),
	}
	o.resultFlags.add(cmd)
	o.systemFlags.add(cmd)
	o.figureFlags.add(cmd)
	o.bulkFlags.add(cmd)
	cmd.Flags().StringVar(&o.At, "at", "", "`temperatures` in °C: 1250 or 1300,1250,1200")
	_ = cmd.RegisterFlagCompletionFunc("at", cobra.NoFileCompletions)
	return cmd
}

func (o *SectionOptions) check(cmd *cobra.Command) (err error) {
	if o.At == "" {
		return &usageError{What: "there is no temperature to cut at", Remedy: "give --at 1250 or --at 1300,1250,1200"}
	}
	if o.temperatures, err = parseTemperatures("--at", o.At); err != nil {
		return err
	}
	if n := len(o.temperatures); n > mostSections {
		return &usageError{Where: "--at", What: fmt.Sprintf("%d sections are too many", n), Remedy: fmt.Sprintf("give up to %d temperatures", mostSections)}
	}
	if cmd.Flags().Changed("bulk") || cmd.Flags().Changed("samples") {
		if err := o.bulkFlags.check(cmd); err != nil {
			return err
		}
	}
	if err := firstError(o.resultFlags.check, o.systemFlags.check, o.figureFlags.check); err != nil {
		return err
	}
	return checkTargets(o.Output, o.Figures, o.System, o.Samples)
}

// sectionsResult is what the writers of the verb get.
type sectionsResult struct {
	*subject
	sections []*section.Section
	samples  []sample
	readings [][]reading // by section, then by sample
}

// reading is the equilibrium of one composition.
type reading struct {
	*tangent.Equilibrium
	err error
}

func sectionRun(e *env, o *SectionOptions) error {
	s, err := e.open(&o.systemFlags, o.Quiet)
	if err != nil {
		return err
	}
	r := &sectionsResult{subject: s}
	if o.Bulk != "" || o.Samples != "" {
		if r.samples, err = o.compositions(e, s, o.Quiet); err != nil {
			return err
		}
	}
	e.idleShade(&o.figureFlags, o.Quiet, "a section has one temperature")
	bar := e.startProgress(o.Quiet, "sections", len(o.temperatures))
	for _, t := range o.temperatures {
		if s.outside(t + ternary.ZeroCelsius) {
			e.notice(o.Quiet, "%s °C lies outside the range for which the system file vouches, %s", short(t), s.vouched())
		}
		cut, err := e.cut(s.sys, t+ternary.ZeroCelsius)
		if err != nil {
			bar.stop()
			return fmt.Errorf("the section at %s °C could not be computed: %w", short(t), err)
		}
		r.sections = append(r.sections, cut)
		var list []reading
		for _, q := range r.samples {
			eq, err := tangent.Solve(s.sys, q.X, t+ternary.ZeroCelsius)
			list = append(list, reading{eq, err})
		}
		r.readings = append(r.readings, list)
		bar.step()
	}
	bar.stop()
	result, err := r.encode(o.Format)
	if err != nil {
		return err
	}
	return errors.Join(e.deliver(o.Output, result), r.draw(&o.figureFlags), incomplete(r.reasons()))
}

// reasons says what is wrong with the sections and readings.
func (r *sectionsResult) reasons() []string {
	var out []string
	for i, s := range r.sections {
		at := short(celsius(s.T)) + " °C: "
		if !s.Checks.Passed && len(s.Checks.Problems) == 0 {
			out = append(out, at+"the section failed its own checks")
		}
		if !s.Checks.Passed {
			for _, p := range s.Checks.Problems {
				out = append(out, at+p)
			}
		}
		for k, q := range r.readings[i] {
			if q.err != nil {
				out = append(out, at+r.samples[k].Name+": the equilibrium could not be computed: "+q.err.Error())
			}
		}
	}
	return out
}

func (r *sectionsResult) draw(f *figureFlags) error {
	if len(f.Figures) == 0 {
		return nil
	}
	style, err := f.look()
	if err != nil {
		return err
	}
	fig := render.Isothermal{Sections: r.sections, Basis: r.basis, Style: style, WidthMM: f.WidthMM, Provenance: r.provenance("section", "basis "+r.basis.String())}
	for _, q := range r.samples {
		fig.Samples = append(fig.Samples, render.Sample{Name: q.Name, Composition: q.X})
	}
	scene, err := fig.Scene()
	return f.write(r.subject, scene, err)
}

func (r *sectionsResult) encode(format string) ([]byte, error) {
	return encode(format, func() any { return r.json() }, r.csv, r.text)
}
