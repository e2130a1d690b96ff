package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/systems"
)

// ShowOptions are the options of the verb show.
type ShowOptions struct {
	resultFlags
	System string // or the path of a figure
}

// NewCmdShow builds the verb show; runF replaces its run function in tests.
func NewCmdShow(e *env, runF func(*ShowOptions) error) *cobra.Command {
	o := &ShowOptions{}
	cmd := &cobra.Command{
		Use:   "show [SYSTEM|FIGURE]",
		Short: "Show one system, its numbers and their sources, or how a figure was made",
		Long: `Show one system: what it stands for and what it leaves out, its phases, and every
number it holds with the source of each.

SYSTEM is a built-in name or the path of a .toml file; without it, ` + defaultSystem + `.

For a FIGURE that this program made, a file that ends in .pdf, .svg or .png: the
command that makes it again, and whether the program, the system and the table of
samples are still those it was made with. Files are looked for under the names on
the command line, from the folder in which show is run.`,
		Example: `  thalweg show di-ab-an
  thalweg show lif-naf-kf --format csv --output numbers.csv
  thalweg show my-system.toml
  thalweg show path.pdf`,
		Args:              atMostOneSystem,
		ValidArgsFunction: completeSystem,
		RunE: func(_ *cobra.Command, args []string) error {
			if len(args) > 0 {
				o.System = args[0]
			}
			if err := o.check(); err != nil {
				return err
			}
			if err := checkTargets(o.Output, nil, o.System); err != nil {
				return err
			}
			if runF != nil {
				return runF(o)
			}
			return showRun(e, o)
		},
	}
	o.add(cmd)
	return cmd
}

func showRun(e *env, o *ShowOptions) error {
	if isFigure(o.System) {
		return showFigure(e, o)
	}
	f, err := e.openFile(o.System, o.Quiet)
	if err != nil {
		return err
	}
	result, err := showResult(o.Format, f)
	if err != nil {
		return err
	}
	return e.deliver(o.Output, result)
}

func showResult(format string, f *systems.File) ([]byte, error) {
	switch format {
	case "json":
		j := newSystemJSON(f)
		j.Values = valuesJSON(f.Values())
		return toJSON(j)
	case "csv":
		t := newCSV("where", "quantity", "symbol", "value", "uncertainty", "unit", "source", "recalled", "fitted_to", "note")
		for _, v := range f.Values() {
			t.row(v.Where, v.Name, v.Symbol, exact(v.Value), uncertainty(v.Quantity), v.Unit, v.Source, fmt.Sprint(v.Recalled), v.FittedTo, v.Note)
		}
		return t.bytes()
	}
	return []byte(showText(f)), nil
}

func showText(f *systems.File) string {
	var b strings.Builder
	systemText(&b, f)
	for _, p := range [][2]string{{"  about        ", f.About}, {"  mixing unit  ", f.Basis}, {"  T scale      ", f.TemperatureScale}, {"  SHA-256      ", f.SHA256()}} {
		if p[1] != "" {
			wrap(&b, p[0], p[1])
		}
	}
	b.WriteString("\nComponents\n")
	t := table{columns: []column{{head: "symbol", left: true}, {head: "name", left: true}, {head: "formula", left: true}, {head: "molar mass", unit: "g/mol"}}}
	for _, c := range f.Components {
		t.row(c.Symbol, c.Name, c.Formula.String(), fixed(c.Formula.MolarMass(), 3))
	}
	t.write(&b)
	showSolids(&b, f)
	showValues(&b, f.Values())
	bullets(&b, "What the model leaves out", f.Limits)
	bullets(&b, "Cautions", f.Cautions)
	return b.String()
}

func showSolids(b *strings.Builder, f *systems.File) {
	b.WriteString("\nSolids\n")
	t := table{columns: []column{{head: "symbol", left: true}, {head: "name", left: true}, {head: "member", left: true}, {head: "formula", left: true}, {head: "moles of components", left: true}, {head: "remark", left: true}}}
	for _, s := range f.Solids {
		for k, m := range s.Members {
			symbol, name, remark := s.Symbol, s.Name, s.Remark
			if k > 0 {
				symbol, name, remark = "", "", ""
			}
			t.row(symbol, name, m.Symbol, m.Formula.String(), moles(f, m.Composition), remark)
		}
	}
	t.write(b)
}

// moles writes what a formula unit consists of: 2 Fo + 1 Qz.
func moles(f *systems.File, c [3]float64) string {
	var out []string
	for i, v := range c {
		if v != 0 {
			out = append(out, short(v)+" "+f.Components[i].Symbol)
		}
	}
	return strings.Join(out, " + ")
}

// showValues lists the numbers, and their sources below, each once.
func showValues(b *strings.Builder, values []systems.Value) {
	b.WriteString("\nNumbers\n")
	t := table{columns: []column{{head: "where", left: true}, {head: "quantity", left: true}, {head: "symbol", left: true}, {head: "value"}, {head: "±"}, {head: "unit", left: true}, {head: "from", left: true}}}
	var sources []string
	mark := map[string]int{}
	for _, v := range values {
		s := origin(v.Provenance)
		if mark[s] == 0 {
			sources = append(sources, s)
			mark[s] = len(sources)
		}
		t.row(v.Where, v.Name, v.Symbol, short(v.Value), uncertainty(v.Quantity), v.Unit, fmt.Sprintf("[%d]", mark[s]))
	}
	t.write(b)
	b.WriteString("\nSources\n")
	for i, s := range sources {
		wrap(b, fmt.Sprintf("  %4s ", fmt.Sprintf("[%d]", i+1)), s)
	}
}

// origin is the provenance of a number in words.
func origin(p systems.Provenance) string {
	s := p.Source
	if p.FittedTo != "" {
		s = "Fitted to " + p.FittedTo
	}
	if p.Recalled {
		s += " (recalled from memory of the publication, not read in it)"
	}
	if p.Note != "" {
		s += "; " + p.Note
	}
	return s
}

// uncertainty is empty when none is given.
func uncertainty(q systems.Quantity) string {
	if q.Uncertainty == 0 {
		return ""
	}
	return short(q.Uncertainty)
}

func bullets(b *strings.Builder, head string, items []string) {
	if len(items) == 0 {
		return
	}
	b.WriteString("\n" + head + "\n")
	for _, s := range items {
		wrap(b, "  - ", s)
	}
}

type valueJSON struct {
	Where       string  `json:"where"`
	Quantity    string  `json:"quantity"`
	Symbol      string  `json:"symbol"`
	Value       number  `json:"value"`
	Unit        string  `json:"unit"`
	Uncertainty *number `json:"uncertainty"` // null when not given
	Source      string  `json:"source"`
	Recalled    bool    `json:"recalled"`
	FittedTo    string  `json:"fitted_to"`
	Note        string  `json:"note"`
}

func valuesJSON(values []systems.Value) []valueJSON {
	out := []valueJSON{}
	for _, v := range values {
		j := valueJSON{v.Where, v.Name, v.Symbol, number(v.Value), v.Unit, nil, v.Source, v.Recalled, v.FittedTo, v.Note}
		if v.Uncertainty != 0 {
			u := number(v.Uncertainty)
			j.Uncertainty = &u
		}
		out = append(out, j)
	}
	return out
}
