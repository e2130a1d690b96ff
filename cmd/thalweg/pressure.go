package main

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/render"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/pressure"
)

// PressureOptions are the options of the verb pressure.
type PressureOptions struct {
	resultFlags
	systemFlags
	figureFlags
	From, To float64 // GPa
	Count    int
}

// Bounds of --count of the verb pressure.
const (
	fewPressures  = 2
	mostPressures = 200
)

// NewCmdPressure builds the verb pressure; runF replaces its run function in tests.
func NewCmdPressure(e *env, runF func(*PressureOptions) error) *cobra.Command {
	o := &PressureOptions{}
	cmd := &cobra.Command{
		Use:   "pressure [SYSTEM] --to GPA",
		Short: "Follow the invariant points of a system with pressure",
		Long: `Compute the liquidus projection at a series of pressures and follow its invariant
points from one to the next: temperatures and compositions against pressure, and the
pressures, located, at which a solid gains or loses its primary field, a point comes
or goes, or a eutectic becomes a peritectic or a reaction point.

The system file must say what pressure does to each solid (a change of volume, a
slope of its melting curve, or the curve). Far from the pressures at which those
were measured the result is an extrapolation.`,
		Example: `  thalweg pressure di-an-fo --to 1
  thalweg pressure di-ab-an --from 0.0001 --to 0.5 --count 11 --figure pressure.pdf --style single-84`,
		Args: atMostOneSystem,
		RunE: verb(e, o, &o.figureFlags, &o.Quiet, func(cmd *cobra.Command, args []string) error {
			o.fill(cmd, args)
			return o.check(cmd)
		}, runF, pressureRun),
	}
	o.resultFlags.add(cmd)
	o.systemFlags.add(cmd)
	o.figureFlags.add(cmd)
	_ = cmd.Flags().MarkHidden("pressure") // there are many of them here
	fs := cmd.Flags()
	fs.Float64Var(&o.From, "from", 0.0001, "lowest pressure in `GPa`")
	fs.Float64Var(&o.To, "to", 0, "highest pressure in `GPa`")
	fs.IntVar(&o.Count, "count", 21, "`number` of pressures, evenly spaced")
	for _, name := range []string{"from", "to", "count"} {
		_ = cmd.RegisterFlagCompletionFunc(name, cobra.NoFileCompletions)
	}
	return cmd
}

func (o *PressureOptions) check(cmd *cobra.Command) error {
	switch {
	case cmd.Flags().Changed("pressure"):
		return &usageError{Where: "--pressure", What: "this verb takes a range of pressures", Remedy: "give --from and --to in GPa"}
	case !cmd.Flags().Changed("to"):
		return &usageError{What: "there is no highest pressure", Remedy: "give --to 1 (GPa)"}
	case !(o.From >= 0 && o.To > o.From) || math.IsInf(o.To, 0):
		return &usageError{Where: "--from, --to", What: fmt.Sprintf("%g to %g GPa is no range of pressures", o.From, o.To), Remedy: "give the lower first, 0 or more"}
	case o.Count < fewPressures || o.Count > mostPressures:
		return &usageError{Where: "--count", What: fmt.Sprintf("%d pressures cannot be had", o.Count), Remedy: fmt.Sprintf("give %d to %d", fewPressures, mostPressures)}
	}
	if err := firstError(o.resultFlags.check, o.systemFlags.check, o.figureFlags.check); err != nil {
		return err
	}
	return checkTargets(o.Output, o.Figures, o.System)
}

// pressures are those of the series, Pa, the ends exactly as given.
func (o *PressureOptions) pressures() (list []float64) {
	last := float64(o.Count - 1)
	for k := range o.Count {
		u := float64(k)
		list = append(list, (o.From*(last-u)+o.To*u)/last*pascal)
	}
	return list
}

// pressureResult is what the writers of the verb get.
type pressureResult struct {
	*subject
	series *pressure.Series
}

func pressureRun(e *env, o *PressureOptions) error {
	s, err := e.open(&o.systemFlags, o.Quiet)
	if err != nil {
		return err
	}
	list := o.pressures()
	for _, P := range []float64{list[0], list[len(list)-1]} { // said before anything is computed
		if _, err := s.file.At(P, o.Without); err != nil {
			return badSystem(err)
		}
	}
	bar := e.startProgress(o.Quiet, "pressures", 1)
	series, err := pressure.Compute(func(P float64) (*gibbs.System, error) { return s.file.At(P, o.Without) }, list)
	bar.stop()
	if err != nil {
		return fmt.Errorf("the series could not be computed: %w", err)
	}
	r := &pressureResult{s, series}
	result, err := r.encode(o.Format)
	if err != nil {
		return err
	}
	return errors.Join(e.deliver(o.Output, result), r.draw(&o.figureFlags), incomplete(series.Problems))
}

func (r *pressureResult) draw(f *figureFlags) error {
	if len(f.Figures) == 0 {
		return nil
	}
	style, err := f.look()
	if err != nil {
		return err
	}
	scene, err := render.PressureChart{Series: r.series, Style: style, WidthMM: f.WidthMM, Provenance: r.provenance(r.span())}.Scene()
	return f.write(r.subject, scene, err)
}

// span is the pressures of the series in words.
func (r *pressureResult) span() string {
	P := r.series.Pressures
	return fmt.Sprintf("%d pressures from %s to %s GPa", len(P), short(P[0]/pascal), short(P[len(P)-1]/pascal))
}

func (r *pressureResult) encode(format string) ([]byte, error) {
	return encode(format, func() any { return r.json() }, r.csv, r.text)
}

// pointName is the phases of a point, and its edge if it lies on one.
func (r *pressureResult) pointName(solids []int, edge int) string {
	name := r.assemblage(append([]int{gibbs.Liquid}, solids...))
	if edge < 0 {
		return name
	}
	var ends []string
	for i, c := range r.sys.Components {
		if i != edge {
			ends = append(ends, c.Symbol)
		}
	}
	return name + " on " + strings.Join(ends, "–")
}

// said is a change in words.
func (r *pressureResult) said(c *pressure.Change) string {
	switch c.Kind {
	case pressure.FieldGained:
		return r.anyPhase(c.Solid) + " gains a primary field"
	case pressure.FieldLost:
		return r.anyPhase(c.Solid) + " loses its primary field"
	case pressure.KindChanged:
		return fmt.Sprintf("%s: %s becomes %s", r.pointName(c.Solids, c.Edge), c.From, c.To)
	case pressure.PointGained:
		return r.pointName(c.Solids, c.Edge) + " appears, " + string(c.Node.Kind)
	}
	return r.pointName(c.Solids, c.Edge) + " vanishes"
}
