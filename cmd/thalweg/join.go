package main

import (
	"errors"
	"fmt"

	"github.com/spf13/cobra"

	"thalweg/render"
	"thalweg/ternary"
	"thalweg/ternary/join"
)

// JoinOptions are the options of the verb join.
type JoinOptions struct {
	resultFlags
	systemFlags
	figureFlags
	From, To string
	Count    int
	Range    string
	Read     []string

	limits [2]float64 // °C, of Range
	points []joinPoint
}

// Bounds of --count.
const (
	fewCompositions  = 2
	mostCompositions = 5000
)

// NewCmdJoin builds the verb join; runF replaces its run function in tests.
func NewCmdJoin(e *env, runF func(*JoinOptions) error) *cobra.Command {
	o := &JoinOptions{}
	cmd := &cobra.Command{
		Use:   "join [SYSTEM] --from COMPOSITION --to COMPOSITION",
		Short: "Cut a system along a line: temperature against composition",
		Long: `Compute the diagram of temperature against composition along the straight line
between two compositions: its fields, the lines between them, and the reactions
that run at one temperature. Between two components it is their binary diagram,
with liquidus, solidus, solvus and horizontals; elsewhere the fields of three
phases show as such.

--read gives the phases at one composition and temperature, their compositions,
and their amounts by the lever rule, by mass and by mole; in the figure the point
is marked. A single component stands for the point of the line that holds so
much of it: --read An=40@1300.

SYSTEM is a built-in name or the path of a .toml file; without it, ` + defaultSystem + `.`,
		Example: `  thalweg join di-ab-an --from Di=100 --to An=100
  thalweg join di-ab-an --from Ab=100 --to An=100 --read An=50@1400 --figure loop.pdf
  thalweg join di-an-fo --from Di=50,An=50 --to Fo=100 --range 1150,1900 --format json`,
		Args: atMostOneSystem,
		RunE: verb(e, o, &o.figureFlags, &o.Quiet, func(cmd *cobra.Command, args []string) error {
			o.fill(cmd, args)
			return o.check()
		}, runF, joinRun),
	}
	o.resultFlags.add(cmd)
	o.systemFlags.add(cmd)
	o.figureFlags.add(cmd)
	fs := cmd.Flags()
	fs.StringVar(&o.From, "from", "", "`composition` at the left end, such as Di=100 or Di=50,Ab=50")
	fs.StringVar(&o.To, "to", "", "`composition` at the right end")
	fs.IntVar(&o.Count, "count", 200, "`number` of compositions at which lines are given")
	fs.StringVar(&o.Range, "range", "", "`temperatures` in °C between which to look: 1100,1600 (default: chosen from solidus and liquidus)")
	fs.StringArrayVar(&o.Read, "read", nil, "a `point` to read, composition and temperature in °C: An=40@1300 (repeatable)")
	_ = cmd.RegisterFlagCompletionFunc("from", completeBulk)
	_ = cmd.RegisterFlagCompletionFunc("to", completeBulk)
	for _, name := range []string{"count", "range", "read"} {
		_ = cmd.RegisterFlagCompletionFunc(name, cobra.NoFileCompletions)
	}
	return cmd
}

func (o *JoinOptions) check() error {
	if o.From == "" || o.To == "" {
		return &usageError{What: "a join needs two ends", Remedy: "give both, like --from Di=100 --to An=100"}
	}
	if o.Count < fewCompositions || o.Count > mostCompositions {
		return &usageError{Where: "--count", What: fmt.Sprintf("%d compositions cannot be had", o.Count), Remedy: fmt.Sprintf("give %d to %d", fewCompositions, mostCompositions)}
	}
	if o.Range != "" {
		list, err := parseTemperatures("--range", o.Range)
		if err != nil {
			return err
		}
		if len(list) != 2 || list[0] >= list[1] {
			return &usageError{Where: "--range " + o.Range, What: "two temperatures are wanted, the lower first", Remedy: "write it like 1100,1600"}
		}
		o.limits = [2]float64{list[0], list[1]}
	}
	o.points = nil
	for _, text := range o.Read {
		p, err := parsePoint(text)
		if err != nil {
			return err
		}
		o.points = append(o.points, p)
	}
	if err := firstError(o.resultFlags.check, o.systemFlags.check, o.figureFlags.check); err != nil {
		return err
	}
	return checkTargets(o.Output, o.Figures, o.System)
}

// joinResult is what the writers of the verb get.
type joinResult struct {
	*subject
	*join.Diagram
	from, to string // names of the ends
	samples  []sample
	at       []float64 // K, of the samples
	xs       []float64 // their places along the join
	readings []reading
}

func joinRun(e *env, o *JoinOptions) error {
	s, err := e.open(&o.systemFlags, o.Quiet)
	if err != nil {
		return err
	}
	ends, err := o.ends(e, s)
	if err != nil {
		return err
	}
	jo := join.Options{Count: o.Count}
	if o.Range != "" {
		jo.TMin, jo.TMax = o.limits[0]+ternary.ZeroCelsius, o.limits[1]+ternary.ZeroCelsius
	}
	line := &join.Diagram{System: s.sys, From: ends[0], To: ends[1]}
	r := &joinResult{subject: s, Diagram: line, from: s.endName(ends[0]), to: s.endName(ends[1])}
	for _, p := range o.points {
		if err := r.locate(p); err != nil {
			return err
		}
	}
	e.idleShade(&o.figureFlags, o.Quiet, "temperature is an axis of the diagram")
	bar := e.startProgress(o.Quiet, "joins", 1)
	r.Diagram, err = e.join(s.sys, ends[0], ends[1], jo)
	bar.stop()
	if err != nil {
		return fmt.Errorf("the join from %s to %s could not be computed: %w", r.from, r.to, err)
	}
	if r.linesOutside() {
		e.notice(o.Quiet, "some of the lines lie outside the range for which the system file vouches, %s", s.vouched())
	}
	for i, x := range r.xs {
		q, err := r.Diagram.Read(x, r.at[i])
		r.readings = append(r.readings, reading{q, err})
	}
	result, err := r.encode(o.Format)
	if err != nil {
		return err
	}
	return errors.Join(e.deliver(o.Output, result), r.draw(&o.figureFlags), incomplete(r.reasons()))
}

// linesOutside reports that the system file does not vouch for all lines.
func (r *joinResult) linesOutside() bool {
	for i := range r.Lines {
		for _, p := range r.Lines[i].Points {
			if r.outside(p.T) && p.T > r.TMin && p.T < r.TMax {
				return true
			}
		}
	}
	return false
}

// reasons says what is wrong with the diagram and the readings.
func (r *joinResult) reasons() []string {
	var out []string
	if c := &r.Checks; !c.Passed {
		out = append(out, c.Problems...)
		if len(out) == 0 {
			out = append(out, "the diagram failed its own checks")
		}
	}
	for i, q := range r.readings {
		if q.err != nil {
			out = append(out, r.samples[i].Name+": the equilibrium could not be computed: "+q.err.Error())
		}
	}
	return out
}

func (r *joinResult) draw(f *figureFlags) error {
	if len(f.Figures) == 0 {
		return nil
	}
	style, err := f.look()
	if err != nil {
		return err
	}
	fig := render.Join{Diagram: r.Diagram, Basis: r.basis, Style: style, WidthMM: f.WidthMM,
		Provenance: r.provenance("join from "+r.from+" to "+r.to, "basis "+r.basis.String())}
	for i, q := range r.readings {
		m := render.JoinMark{Name: pointName(r.samples[i].Name), X: r.xs[i], T: r.at[i]}
		if q.err == nil {
			for _, p := range q.Parts {
				m.Phases = append(m.Phases, p.State)
			}
		}
		fig.Marks = append(fig.Marks, m)
	}
	scene, err := fig.Scene()
	return f.write(r.subject, scene, err)
}

func (r *joinResult) encode(format string) ([]byte, error) {
	return encode(format, func() any { return r.json() }, r.csv, r.text)
}
