package main

import (
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"thalweg/render"
	"thalweg/systems"
)

// plan is a composed figure as its file has it. Settings at the top hold for every
// panel that has none of its own.
type plan struct {
	Title    string       `toml:"title"`
	System   string       `toml:"system"`
	Basis    string       `toml:"basis"`
	Without  []string     `toml:"without"`
	Pressure *float64     `toml:"pressure_GPa"`
	Style    string       `toml:"style"`
	Ink      bool         `toml:"ink"`
	WidthMM  float64      `toml:"width_mm"`
	Columns  *int         `toml:"columns"`
	Letters  *bool        `toml:"letters"`
	Legend   bool         `toml:"legend"`
	Caption  *bool        `toml:"caption"`
	Samples  string       `toml:"samples"`
	SymbolBy string       `toml:"symbol_by"`
	ColourBy string       `toml:"colour_by"`
	Sample   []planSample `toml:"sample"`
	Panel    []planPanel  `toml:"panel"`
}

// planSample is a sample written into the plan.
type planSample struct {
	Name        string `toml:"name"`
	Composition string `toml:"composition"`
}

// planPanel is one panel.
type planPanel struct {
	Kind      string     `toml:"kind"`
	Title     string     `toml:"title"`
	Span      *int       `toml:"span"`
	System    string     `toml:"system"`
	Basis     string     `toml:"basis"`
	Without   []string   `toml:"without"`
	Pressure  *float64   `toml:"pressure_GPa"`
	Isotherms string     `toml:"isotherms"`
	Bulk      []string   `toml:"bulk"`
	Mode      string     `toml:"mode"`
	Retain    *float64   `toml:"retain"`
	Against   string     `toml:"against"`
	At        *float64   `toml:"at_C"`
	From      string     `toml:"from"`
	To        string     `toml:"to"`
	Range     []float64  `toml:"range_C"`
	View      []string   `toml:"view"`
	Hide      []string   `toml:"hide"`
	Shade     string     `toml:"shade"`
	Samples   *bool      `toml:"samples"`
	Names     *bool      `toml:"names"`
	Lines     *planLines `toml:"lines"`
}

// planLines are widths in pt.
type planLines struct {
	Boundaries *float64 `toml:"boundaries"`
	BulkSolid  *float64 `toml:"bulk_solid"`
	Frame      *float64 `toml:"frame"`
	Isotherms  *float64 `toml:"isotherms"`
	Paths      *float64 `toml:"paths"`
	Ticks      *float64 `toml:"ticks"`
}

// set are the widths given, by layer, in the order of their names.
func (l *planLines) set() (names []string, widths []float64) {
	if l == nil {
		return nil, nil
	}
	for _, v := range []struct {
		name string
		pt   *float64
	}{{"boundaries", l.Boundaries}, {"bulk solid", l.BulkSolid}, {"frame", l.Frame}, {"isotherms", l.Isotherms}, {"paths", l.Paths}, {"ticks", l.Ticks}} {
		if v.pt != nil {
			names, widths = append(names, v.name), append(widths, *v.pt)
		}
	}
	return names, widths
}

// Kinds of panels.
const (
	kindProjection = "projection"
	kindSection    = "section"
	kindJoin       = "join"
)

// panelKinds are all kinds, as messages list them.
func panelKinds() []string {
	out := []string{kindProjection, kindSection, kindJoin}
	for _, k := range render.ChartKinds() {
		out = append(out, string(k))
	}
	return out
}

// uses says which keys of a panel mean something for a kind, beyond those that all
// have.
var uses = map[string][]string{
	kindProjection:              {"isotherms", "bulk", "mode", "retain", "view", "hide", "shade", "samples", "names", "lines"},
	kindSection:                 {"at_C", "samples", "lines"},
	kindJoin:                    {"from", "to", "range_C", "lines"},
	string(render.PhaseAmounts): {"bulk", "mode", "retain", "against", "lines"},
	string(render.LiquidChart):  {"bulk", "mode", "retain", "against", "lines"},
	string(render.HeatChart):    {"bulk", "mode", "retain", "against", "lines"},
}

// planMode are the words of mode.
var planModes = []string{"equilibrium", "fractional", "batch melting", "fractional melting"}

// readPlan reads a plan and examines what can be told without computing. Every error
// names line and column.
func readPlan(path string) (*plan, *systems.Document, error) {
	p := &plan{}
	doc, err := systems.ReadDocument(path, "a plan", p)
	if err != nil {
		return nil, nil, badInput(err)
	}
	if len(p.Panel) == 0 {
		doc.Add("", "there is no panel", "add one: [[panel]] with kind = \"projection\"")
	}
	if p.Style != "" {
		if _, err := render.StyleNamed(p.Style); err != nil {
			doc.Add("style", fmt.Sprintf("%q is no preset", p.Style), "write one of "+presetList())
		}
	}
	if p.Columns != nil && (*p.Columns < 1 || *p.Columns > 6) {
		doc.Add("columns", fmt.Sprintf("a page of %d columns cannot be drawn", *p.Columns), "give 1 to 6")
	}
	if p.Samples == "" {
		for _, k := range []struct{ key, value string }{{"symbol_by", p.SymbolBy}, {"colour_by", p.ColourBy}} {
			if k.value != "" {
				doc.Add(k.key, "there is no table of samples with such a column", "name the table: samples = \"FILE.csv\"")
			}
		}
	}
	if p.Basis != "" && p.Basis != "wt" && p.Basis != "mol" {
		doc.Add("basis", fmt.Sprintf("%q is unknown", p.Basis), "write wt or mol")
	}
	for i := range p.Panel {
		p.Panel[i].check(doc, fmt.Sprintf("panel[%d]", i), p)
	}
	for i, s := range p.Sample {
		if s.Name == "" {
			doc.Add(fmt.Sprintf("sample[%d].name", i), "the sample has no name", "name it")
		}
	}
	return p, doc, badInput(doc.Err())
}

// check examines one panel.
func (q *planPanel) check(doc *systems.Document, at string, p *plan) {
	kinds := panelKinds()
	if !slices.Contains(kinds, q.Kind) {
		what := "the panel has no kind"
		if q.Kind != "" {
			what = fmt.Sprintf("%q is no kind of panel", q.Kind)
		}
		doc.Add(at+".kind", what, "write one of "+strings.Join(kinds, ", "))
		return
	}
	given := map[string]bool{
		"isotherms": q.Isotherms != "", "bulk": len(q.Bulk) > 0, "mode": q.Mode != "", "retain": q.Retain != nil, "against": q.Against != "",
		"at_C": q.At != nil, "from": q.From != "", "to": q.To != "", "range_C": len(q.Range) > 0, "view": len(q.View) > 0, "hide": len(q.Hide) > 0,
		"shade": q.Shade != "", "samples": q.Samples != nil, "names": q.Names != nil, "lines": q.Lines != nil,
	}
	var idle []string
	for key, is := range given {
		if is && !slices.Contains(uses[q.Kind], key) {
			idle = append(idle, key)
		}
	}
	slices.Sort(idle)
	for _, key := range idle {
		doc.Add(at+"."+key, "it means nothing for a panel of kind "+q.Kind, "leave it out")
	}
	if q.System == "" && p.System == "" {
		doc.Add(at, "the panel has no system", "add system = \"di-ab-an\", here or at the top")
	}
	if q.Basis != "" && q.Basis != "wt" && q.Basis != "mol" {
		doc.Add(at+".basis", fmt.Sprintf("%q is unknown", q.Basis), "write wt or mol")
	}
	columns := 1
	if p.Columns != nil {
		columns = *p.Columns
	}
	if q.Span != nil && (*q.Span < 1 || *q.Span > columns) {
		doc.Add(at+".span", fmt.Sprintf("the panel would be %d columns wide and lie off the page, which has %d", *q.Span, columns), "let it span fewer, or give the page more columns")
	}
	if q.Mode != "" && !slices.Contains(planModes, q.Mode) {
		doc.Add(at+".mode", fmt.Sprintf("%q is unknown", q.Mode), "write one of "+strings.Join(planModes, ", "))
	}
	if q.Retain != nil && (q.Mode != "fractional" || !(*q.Retain >= 0 && *q.Retain <= 1)) {
		doc.Add(at+".retain", "it is the share of solids kept in fractional crystallisation, 0 to 1", "add mode = \"fractional\", or correct it")
	}
	if q.Against != "" && q.Against != string(render.AgainstTemperature) && q.Against != string(render.AgainstMelt) {
		doc.Add(at+".against", fmt.Sprintf("%q is unknown", q.Against), "write temperature or melt")
	}
	if q.Shade != "" && !slices.Contains(shades, q.Shade) {
		doc.Add(at+".shade", fmt.Sprintf("%q is unknown", q.Shade), "write solids or temperature")
	}
	if len(q.View) != 0 && len(q.View) != 3 {
		doc.Add(at+".view", fmt.Sprintf("%d corners are given", len(q.View)), "give three compositions: at the top, at the lower left and at the lower right")
	}
	for i, name := range q.Hide {
		if !slices.Contains(render.Hideable(), name) {
			doc.Add(fmt.Sprintf("%s.hide[%d]", at, i), fmt.Sprintf("there is no layer %q", name), "the layers are "+strings.Join(render.Hideable(), ", "))
		}
	}
	switch q.Kind {
	case kindSection:
		if q.At == nil {
			doc.Add(at+".at_C", "a section needs a temperature", "add at_C = 1250")
		}
	case kindJoin:
		if q.From == "" || q.To == "" {
			doc.Add(at+".from", "a join needs two ends", "add from = \"Di=100\" and to = \"An=100\"")
		}
		if len(q.Range) != 0 && (len(q.Range) != 2 || q.Range[0] >= q.Range[1]) {
			doc.Add(at+".range_C", "two temperatures are wanted, the lower first", "write it like range_C = [1100, 1600]")
		}
	case string(render.PhaseAmounts), string(render.LiquidChart), string(render.HeatChart):
		if len(q.Bulk) != 1 {
			doc.Add(at+".bulk", "a chart shows one path", "add bulk = [\"Di=30,Ab=35,An=35\"]")
		}
	}
}

// beside is a path of the plan, which is taken from the plan's own folder.
func beside(planPath, path string) string {
	if path == "" || filepath.IsAbs(path) {
		return path
	}
	return filepath.Join(filepath.Dir(planPath), path)
}
