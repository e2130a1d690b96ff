package main

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// LiquidusOptions are the options of the verb liquidus.
type LiquidusOptions struct {
	resultFlags
	systemFlags
	figureFlags
	Isotherms string
	Samples   string // file; empty for none

	isotherms isotherms
}

// NewCmdLiquidus builds the verb liquidus; runF replaces its run function in
// tests.
func NewCmdLiquidus(e *env, runF func(*LiquidusOptions) error) *cobra.Command {
	o := &LiquidusOptions{}
	cmd := &cobra.Command{
		Use:   "liquidus [SYSTEM]",
		Short: "Compute the liquidus projection of a system",
		Long: `Compute the liquidus projection of a system: invariant points with their
reactions, boundary curves, primary fields and isotherms, and a check that
nothing is missing.

SYSTEM is a built-in name or the path of a .toml file; without it, ` + defaultSystem + `.
Compositions are percentages in the basis in force. Isotherms at an interval keep
to the range of temperature for which the system file vouches. The result of
--format csv holds one record for each point; that of --format json is one object.`,
		Example: `  thalweg liquidus di-an-fo
  thalweg liquidus di-ab-an --isotherms 25 --figure basalt.pdf --style single-84 --ink
  thalweg liquidus lif-naf-kf --basis mol --isotherms 500,600,700 --format json --output salt.json
  thalweg liquidus di-an-fo --without An --figure metastable.svg
  thalweg liquidus di-ab-an --samples samples.csv --figure samples.pdf --figure samples.png`,
		Args: atMostOneSystem,
		RunE: verb(e, o, &o.figureFlags, &o.Quiet, func(cmd *cobra.Command, args []string) error {
			o.fill(cmd, args)
			return o.check()
		}, runF, liquidusRun),
	}
	o.resultFlags.add(cmd)
	o.systemFlags.add(cmd)
	o.figureFlags.add(cmd)
	cmd.Flags().StringVar(&o.Isotherms, "isotherms", "auto", "`interval` in °C (50), list of temperatures in °C (1200,1250,1300; a single one as 1200,), auto or none")
	cmd.Flags().StringVar(&o.Samples, "samples", "", "`file` of samples to place on the projection: CSV with columns name and component symbols")
	choices(cmd, "isotherms", "auto", "none", "25", "50", "100")
	_ = cmd.RegisterFlagCompletionFunc("samples", endings("csv"))
	return cmd
}

func (o *LiquidusOptions) check() (err error) {
	if o.isotherms, err = parseIsotherms(o.Isotherms); err != nil {
		return err
	}
	if err := firstError(o.resultFlags.check, o.systemFlags.check, o.figureFlags.check); err != nil {
		return err
	}
	return checkTargets(o.Output, o.Figures, o.System, o.Samples)
}

// liquidusResult is what the writers of the verb get.
type liquidusResult struct {
	*subject
	projection *liquidus.Projection
	interval   float64 // °C between isotherms, 0 for none or a list
	samples    []placed
	complete   bool
}

// placed is a sample with its liquidus.
type placed struct {
	sample
	T       float64 // K; infinite when there is none
	primary gibbs.State
	split   bool // into two liquids, before the first solid
}

func liquidusRun(e *env, o *LiquidusOptions) error {
	s, err := e.open(&o.systemFlags, o.Quiet)
	if err != nil {
		return err
	}
	var list []sample
	if o.Samples != "" {
		if list, err = e.loadSamples(o.Samples, s, o.Quiet); err != nil {
			return err
		}
	}
	bar := e.startProgress(o.Quiet, "projection", 1)
	p, interval, missed, err := e.project(s, o.isotherms)
	bar.stop()
	if err != nil {
		return err
	}
	e.noticeProjection(s, p, missed, o.Quiet)
	reasons := projectionReasons(p)
	r := &liquidusResult{subject: s, projection: p, interval: interval, complete: len(reasons) == 0}
	if r.samples, err = s.place(list); err != nil {
		return err
	}
	result, err := r.encode(o.Format)
	if err != nil {
		return err
	}
	return errors.Join(
		e.deliver(o.Output, result),
		o.draw(s, picture{projection: p, samples: list, provenance: s.provenance("liquidus", "basis "+s.basis.String())}),
		incomplete(reasons),
	)
}

func (r *liquidusResult) encode(format string) ([]byte, error) {
	return encode(format, func() any { return r.json() }, r.csv, r.text)
}

// place finds the liquidus of each sample.
func (s *subject) place(list []sample) ([]placed, error) {
	var out []placed
	for _, q := range list {
		T, primary, split, err := descent.Liquidus(s.sys, q.X)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", q.Name, err)
		}
		out = append(out, placed{q, T, primary, split})
	}
	return out, nil
}

// noticeProjection says what a reader of the projection should know.
func (e *env) noticeProjection(s *subject, p *liquidus.Projection, missed []float64, quiet bool) {
	if low, high, ok := extent(p); ok && len(missed) > 0 {
		var t []string
		for _, v := range missed {
			t = append(t, short(v))
		}
		e.notice(quiet, "there is no isotherm of %s °C: the liquidus runs from %.0f to %.0f °C", strings.Join(t, ", "), low, high)
	}
	var off []string
	for _, n := range p.Nodes {
		if s.outside(n.T) && n.Kind != liquidus.LoopStart {
			off = append(off, n.ID)
		}
	}
	if len(off) > 0 {
		e.notice(quiet, "outside the range for which the system file vouches, %s: %s", s.vouched(), strings.Join(off, ", "))
	}
}

// reaction writes what a node's phases do on cooling: L + Fo → En.
func (s *subject) reaction(n *liquidus.Node) string {
	gone, made := n.Reaction()
	if gone == nil {
		return ""
	}
	names := s.names(n.Solids)
	side := func(list []int) string {
		var out []string
		for _, i := range list {
			if i == liquidus.Itself {
				out = append(out, s.sys.Liquid.Symbol)
			} else {
				out = append(out, names[i])
			}
		}
		return strings.Join(out, " + ")
	}
	return side(gone) + " → " + side(made)
}

// edge names the two components of a point on the triangle's edge.
func (s *subject) edge(n *liquidus.Node) []string {
	out := []string{}
	for i, c := range s.sys.Components {
		if n.Edge >= 0 && i != n.Edge {
			out = append(out, c.Symbol)
		}
	}
	return out
}

// area is the share of the triangle, drawn in the basis in force, that a field
// covers.
func (s *subject) area(f *liquidus.Field) float64 {
	sum := s.ring(f.Outline)
	for _, h := range f.Holes {
		sum -= s.ring(h)
	}
	return sum
}

// ring is the area of a polygon as a share of the triangle's.
func (s *subject) ring(outline []ternary.Composition) float64 {
	sum := 0.0
	for i := range outline {
		a := s.sys.Components.Fractions(outline[i], s.basis)
		b := s.sys.Components.Fractions(outline[(i+1)%len(outline)], s.basis)
		sum += a[0]*b[1] - a[1]*b[0]
	}
	return math.Abs(sum)
}
