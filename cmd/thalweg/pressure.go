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
	var list []float64
	for k := range o.Count {
		list = append(list, (o.From+(o.To-o.From)*float64(k)/float64(o.Count-1))*pascal)
	}
	for _, P := range []float64{list[0], list[len(list)-1]} { // said before anything is computed
		if _, err := s.file.At(P, o.Without); err != nil {
			u := badSystem(err)
			return u
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
	scene, err := render.PressureChart{Series: r.series, Style: style, WidthMM: f.WidthMM, Provenance: r.provenance("pressure")}.Scene()
	return f.write(r.subject, scene, err)
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

func (r *pressureResult) text() string {
	var b strings.Builder
	s := r.series
	fmt.Fprintf(&b, "Invariant points against pressure in %s (%s)\n", r.sys.Title, r.sys.Name)
	fmt.Fprintf(&b, "%s to %s GPa; compositions in %s\n", short(s.Pressures[0]/pascal), short(s.Pressures[len(s.Pressures)-1]/pascal), r.basis.Unit())
	if len(s.Problems) > 0 {
		b.WriteString("INCOMPLETE: it could not be completed or failed its own checks\n")
	}
	if m := r.metastable(); m != "" {
		b.WriteString(strings.ToUpper(m[:10]) + m[10:] + "\n")
	}
	b.WriteString("\nChanges\n")
	if len(s.Changes) == 0 {
		b.WriteString("  none\n")
	}
	for i := range s.Changes {
		c := &s.Changes[i]
		fmt.Fprintf(&b, "  %8.4f GPa  %s\n", c.Pressure/pascal, r.said(c))
	}
	for i := range s.Points {
		t := &s.Points[i]
		fmt.Fprintf(&b, "\n%s\n", r.pointName(t.Solids, t.Edge))
		tab := table{columns: append(append([]column{{head: "P", unit: "GPa"}, {head: "T", unit: "°C"}}, r.percentColumns()...), column{head: "kind", left: true})}
		for k, a := range t.At {
			if len(t.At) > 12 && k%((len(t.At)+11)/12) != 0 && k != len(t.At)-1 {
				continue
			}
			row := append([]string{fixed(s.Pressures[a.Index]/pascal, 4), r.temperature(a.Node.T)}, r.percents(a.Node.Liquid)...)
			tab.row(append(row, string(a.Node.Kind))...)
		}
		tab.write(&b)
	}
	r.footing(&b)
	return b.String()
}

type pressureJSON struct {
	headJSON
	PressuresGPa []number       `json:"pressures_GPa"`
	Points       []trackJSON    `json:"points"`
	Changes      []changeJSON   `json:"changes"`
	Problems     []string       `json:"problems"`
	Provenance   provenanceJSON `json:"provenance"`
}

type trackJSON struct {
	Solids []string    `json:"solids"`
	Edge   []string    `json:"edge"`
	At     []sightJSON `json:"at"`
}

type sightJSON struct {
	PressureGPa  number  `json:"pressure_GPa"`
	TemperatureC number  `json:"temperature_C"`
	Kind         string  `json:"kind"`
	Liquid       amounts `json:"liquid"`
}

type changeJSON struct {
	PressureGPa number `json:"pressure_GPa"`
	Kind        string `json:"kind"`
	What        string `json:"what"`
}

func (r *pressureResult) json() pressureJSON {
	s := r.series
	j := pressureJSON{headJSON: r.headJSON(len(s.Problems) == 0), PressuresGPa: []number{}, Points: []trackJSON{}, Changes: []changeJSON{}, Problems: list(s.Problems),
		Provenance: r.provenanceJSON(map[string]any{"basis": r.basis.String(), "without": list(r.sys.Withheld)})}
	for _, P := range s.Pressures {
		j.PressuresGPa = append(j.PressuresGPa, number(P/pascal))
	}
	for i := range s.Points {
		t := &s.Points[i]
		q := trackJSON{Solids: []string{}, Edge: r.edge(&t.At[0].Node), At: []sightJSON{}}
		for _, p := range t.Solids {
			q.Solids = append(q.Solids, r.anyPhase(p))
		}
		for _, a := range t.At {
			q.At = append(q.At, sightJSON{number(s.Pressures[a.Index] / pascal), number(celsius(a.Node.T)), string(a.Node.Kind), r.composition(a.Node.Liquid)})
		}
		j.Points = append(j.Points, q)
	}
	for i := range s.Changes {
		c := &s.Changes[i]
		j.Changes = append(j.Changes, changeJSON{number(c.Pressure / pascal), string(c.Kind), r.said(c)})
	}
	return j
}

// csv has one record for each point at each pressure, and one for each change.
func (r *pressureResult) csv() ([]byte, error) {
	s := r.series
	t := newCSV(append([]string{"record", "point", "pressure_GPa", "temperature_C", "kind"}, append(r.heads(""), "status")...)...)
	state := r.statusCSV(len(s.Problems) == 0)
	for i := range s.Points {
		q := &s.Points[i]
		for _, a := range q.At {
			row := []string{"point", r.pointName(q.Solids, q.Edge), exact(s.Pressures[a.Index] / pascal), exact(celsius(a.Node.T)), string(a.Node.Kind)}
			t.row(append(append(row, cells(r.percent(a.Node.Liquid))...), state)...)
		}
	}
	for i := range s.Changes {
		c := &s.Changes[i]
		t.row("change", r.said(c), exact(c.Pressure/pascal), "", string(c.Kind), "", "", "", state)
	}
	return t.bytes()
}
