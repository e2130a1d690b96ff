package main

import (
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// AffinityOptions are the options of the verb affinity.
type AffinityOptions struct {
	resultFlags
	systemFlags
	Liquid string
	At     string

	temperature float64 // K
}

// NewCmdAffinity builds the verb affinity; runF replaces its run function in tests.
func NewCmdAffinity(e *env, runF func(*AffinityOptions) error) *cobra.Command {
	o := &AffinityOptions{}
	cmd := &cobra.Command{
		Use:   "affinity [SYSTEM] --liquid A=…,B=…,C=… --at T",
		Short: "Compute how far each solid is from a liquid",
		Long: `Compute the driving force of every solid against a liquid at a temperature, in
joules per mole of formula unit: above 0 the solid would grow, below 0 it would
dissolve. Beside it stand the temperature at which the solid is saturated in that
liquid and the undercooling, how far the liquid is below it.

Solids of the same contents, such as two polymorphs, are then compared with each
other: what one gains per mole by turning into the other, whatever the liquid.
A solid that is stable is not withheld by this: the liquid may be metastable.`,
		Example: `  thalweg affinity di-an-fo --liquid Di=50,An=35,Fo=15 --at 1250
  thalweg affinity lif-naf-kf --liquid LiF=50,NaF=10,KF=40 --at 450 --basis mol --format json`,
		Args: atMostOneSystem,
		RunE: verb(e, o, nil, nil, func(cmd *cobra.Command, args []string) error {
			o.fill(cmd, args)
			return o.check()
		}, runF, affinityRun),
	}
	o.resultFlags.add(cmd)
	o.systemFlags.add(cmd)
	fs := cmd.Flags()
	fs.StringVar(&o.Liquid, "liquid", "", "`composition` of the liquid, such as Di=30,Ab=35,An=35")
	fs.StringVar(&o.At, "at", "", "`temperature` in °C")
	_ = cmd.RegisterFlagCompletionFunc("liquid", completeBulk)
	_ = cmd.RegisterFlagCompletionFunc("at", cobra.NoFileCompletions)
	return cmd
}

func (o *AffinityOptions) check() error {
	if o.Liquid == "" {
		return &usageError{What: "there is no liquid to compare with", Remedy: "give --liquid Di=30,Ab=35,An=35"}
	}
	if o.At == "" {
		return &usageError{What: "there is no temperature", Remedy: "give --at 1250"}
	}
	list, err := parseTemperatures("--at", o.At)
	if err != nil {
		return err
	}
	if len(list) != 1 {
		return &usageError{Where: "--at " + o.At, What: "one temperature is wanted", Remedy: "run the command once for each"}
	}
	o.temperature = list[0] + ternary.ZeroCelsius
	if err := firstError(o.resultFlags.check, o.systemFlags.check); err != nil {
		return err
	}
	return checkTargets(o.Output, nil, o.System)
}

// parseTemperatures reads a list of temperatures in °C, the value of a flag.
func parseTemperatures(flag, text string) ([]float64, error) {
	var out []float64
	for _, item := range strings.Split(text, ",") {
		v, err := strconv.ParseFloat(strings.TrimSpace(item), 64)
		if err != nil || !(v > -ternary.ZeroCelsius && v < 1e5) {
			return nil, &usageError{Where: strings.TrimSpace(flag + " " + text), What: fmt.Sprintf("%q is not a temperature in °C", item), Remedy: "write it like 1250 or 1300,1250,1200"}
		}
		out = append(out, v)
	}
	return out, nil
}

// affinityResult is what the writers of the verb get.
type affinityResult struct {
	*subject
	liquid    ternary.Composition
	T         float64 // K
	primary   gibbs.State
	liquidusT float64
	split     bool // into two liquids before the first solid
	stable    bool // the liquid has no tendency to separate into two
	solids    []solidForce
	pairs     []turnover
}

// solidForce is one solid against the liquid.
type solidForce struct {
	state      gibbs.State // of the composition that would form
	force      float64     // J/mol of formula unit
	saturation float64     // K; infinite where there is none
}

// turnover is what a solid gains by turning into another of the same contents.
type turnover struct {
	from, to int
	gain     float64 // J/mol
}

func affinityRun(e *env, o *AffinityOptions) error {
	s, err := e.open(&o.systemFlags, o.Quiet)
	if err != nil {
		return err
	}
	x, sum, err := parseBulk("--liquid", o.Liquid, s.sys.Components, s.basis)
	if err != nil {
		return err
	}
	if !normalised(sum) {
		e.notice(o.Quiet, "the liquid sums to %s and was normalised to 100 %s", short(sum), s.basis.Unit())
	}
	if s.outside(o.temperature) {
		e.notice(o.Quiet, "%s °C lies outside the range for which the system file vouches, %s", short(celsius(o.temperature)), s.vouched())
	}
	r, err := s.affinity(x, o.temperature)
	if err != nil {
		return fmt.Errorf("the saturation temperatures could not be computed: %w", err)
	}
	result, err := r.encode(o.Format)
	if err != nil {
		return err
	}
	return e.deliver(o.Output, result)
}

// affinity compares every solid with a liquid.
func (s *subject) affinity(x ternary.Composition, T float64) (*affinityResult, error) {
	surface, err := liquidus.NewSurface(s.sys)
	if err != nil {
		return nil, err
	}
	r := &affinityResult{subject: s, liquid: x, T: T}
	if r.liquidusT, r.primary, r.split, err = descent.Liquidus(s.sys, x); err != nil {
		return nil, err
	}
	var pot gibbs.Potentials
	c := [3]float64(x)
	s.sys.Liquid.Potentials(&c, T, &pot)
	r.stable = true
	for _, d := range s.sys.Liquid.Maxima(&pot.Mu, T) {
		if d.D > 1e-9*ternary.R*T { // rounding of the liquid's own plane is a thousandth of it
			r.stable = false
		}
	}
	for i, p := range s.sys.Solids {
		d := p.Drive(&pot.Mu, T)
		at := surface.Saturation(i, x)
		r.solids = append(r.solids, solidForce{gibbs.State{Phase: i, Y: d.Y, C: d.C}, d.D, at})
	}
	for i, p := range s.sys.Solids {
		for k, q := range s.sys.Solids {
			if i == k || !p.Stoichiometric() || !q.Stoichiometric() || p.Members[0].C != q.Members[0].C {
				continue
			}
			if gain := p.Members[0].G.At(T) - q.Members[0].G.At(T); gain > 0 || gain == 0 && i < k {
				r.pairs = append(r.pairs, turnover{i, k, gain})
			}
		}
	}
	return r, nil
}

// order is the solids by falling driving force.
func (r *affinityResult) order() []solidForce {
	out := append([]solidForce(nil), r.solids...)
	sort.SliceStable(out, func(a, b int) bool { return out[a].force > out[b].force })
	return out
}

func (r *affinityResult) encode(format string) ([]byte, error) {
	return encode(format, func() any { return r.json() }, r.csv, r.text)
}

func (r *affinityResult) text() string {
	var b strings.Builder
	r.heading(&b, "Driving forces in", "", true)
	p := r.percents(r.liquid)
	cs := r.sys.Components
	fmt.Fprintf(&b, "\nLiquid: %s %s, %s %s, %s %s at %s °C; ", cs[0].Symbol, p[0], cs[1].Symbol, p[1], cs[2].Symbol, p[2], r.temperature(r.T))
	if math.IsInf(r.liquidusT, 0) {
		b.WriteString("it has no liquidus\n")
	} else {
		fmt.Fprintf(&b, "its liquidus is at %s °C, with %s\n", r.temperature(r.liquidusT), r.solid(r.primary.Phase))
	}
	if r.split {
		b.WriteString("On cooling it separates into two liquids before that: the saturations below are those of the one liquid.\n")
	}
	if !r.stable {
		b.WriteString("This liquid would separate into two: the forces are those against it as it stands.\n")
	}
	t := table{columns: []column{{head: "solid", left: true}, {head: "driving force", unit: "J/mol"}, {head: "per R·T"}, {head: "saturated at", unit: "°C"}, {head: "undercooling", unit: "K"}, {head: "composition", unit: "mol%", left: true}}}
	for _, s := range r.order() {
		at, under := "never", ""
		if !math.IsInf(s.saturation, 0) && !math.IsNaN(s.saturation) {
			at, under = r.temperature(s.saturation), fixed(s.saturation-r.T, 1)
		}
		t.row(r.solid(s.state.Phase), fixed(drive(s.force), 1), fixed(s.force/(ternary.R*r.T), 4), at, under, r.solution(s.state))
	}
	t.write(&b)
	if len(r.pairs) > 0 {
		b.WriteString("\nSolids of the same contents\n")
		t := table{columns: []column{{head: "from", left: true}, {head: "to", left: true}, {head: "gain", unit: "J/mol"}}}
		for _, q := range r.pairs {
			t.row(r.solid(q.from), r.solid(q.to), fixed(q.gain, 1))
		}
		t.write(&b)
	}
	r.footing(&b)
	return b.String()
}

// affinityJSON is the result of the verb affinity.
type affinityJSON struct {
	headJSON
	Liquid       amounts        `json:"liquid"`
	TemperatureC number         `json:"temperature_C"`
	LiquidusC    number         `json:"liquidus_temperature_C"` // null where there is none
	Primary      string         `json:"primary"`
	Split        bool           `json:"two_liquids_before"`             // they come before the first solid
	OneLiquid    bool           `json:"stable_against_a_second_liquid"` // at the temperature given
	Solids       []forceJSON    `json:"solids"`
	SameContents []turnoverJSON `json:"same_contents"`
	Provenance   provenanceJSON `json:"provenance"`
}

type forceJSON struct {
	Phase         string  `json:"phase"`
	Composition   amounts `json:"composition"`
	Affinity      number  `json:"affinity_J_per_mol"`
	SaturatedC    number  `json:"saturated_at_C"` // null where it never is
	UndercoolingK number  `json:"undercooling_K"`
}

type turnoverJSON struct {
	From string `json:"from"`
	To   string `json:"to"`
	Gain number `json:"gain_J_per_mol"`
}

func (r *affinityResult) json() affinityJSON {
	j := affinityJSON{headJSON: r.headJSON(true), Liquid: r.composition(r.liquid), TemperatureC: number(celsius(r.T)), LiquidusC: number(celsius(r.liquidusT)),
		Split: r.split, OneLiquid: r.stable, Solids: []forceJSON{}, SameContents: []turnoverJSON{},
		Provenance: r.provenanceJSON(map[string]any{"basis": r.basis.String(), "pressure_GPa": number(r.sys.Pressure / pascal), "without": list(r.sys.Withheld), "at_C": number(celsius(r.T))})}
	if !math.IsInf(r.liquidusT, 0) {
		j.Primary = r.solid(r.primary.Phase)
	}
	for _, s := range r.order() {
		j.Solids = append(j.Solids, forceJSON{r.solid(s.state.Phase), r.composition(s.state.Composition()), number(drive(s.force)), number(celsius(s.saturation)), number(s.saturation - r.T)})
	}
	for _, q := range r.pairs {
		j.SameContents = append(j.SameContents, turnoverJSON{r.solid(q.from), r.solid(q.to), number(q.gain)})
	}
	return j
}

// csv has one record for each solid.
func (r *affinityResult) csv() ([]byte, error) {
	t := newCSV(append([]string{"solid", "temperature_C", "affinity_J_per_mol", "saturated_at_C", "undercooling_K"}, append(r.heads("solid_"), "status")...)...)
	for _, s := range r.order() {
		row := []string{r.solid(s.state.Phase), exact(celsius(r.T)), exact(drive(s.force)), exact(celsius(s.saturation)), exact(s.saturation - r.T)}
		t.row(append(append(row, cells(r.percent(s.state.Composition()))...), r.statusCSV(true))...)
	}
	return t.bytes()
}
