package main

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"thalweg/render"
	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/join"
)

// order is the systems of the figure, in the order in which panels first need them.
func (d *drawn) order() (out []*subject) {
	for i := range d.plan.Panel {
		if s, ok := d.subjects[d.key(&d.plan.Panel[i])]; ok && !slices.Contains(out, s) {
			out = append(out, s)
		}
	}
	return out
}

// key tells panels that need the same system under the same conditions.
func (d *drawn) key(q *planPanel) string {
	f := d.flags(q)
	p := "file"
	if f.Pressure != nil {
		p = short(*f.Pressure)
	}
	return strings.Join(append([]string{f.System, f.Basis, p}, f.Without...), "\x00")
}

// flags are the conditions of a panel: its own, or the plan's.
func (d *drawn) flags(q *planPanel) *systemFlags {
	f := &systemFlags{System: q.System, Basis: q.Basis, Without: q.Without, Pressure: q.Pressure}
	if f.System == "" {
		f.System = d.plan.System
	}
	if strings.HasSuffix(f.System, ".toml") {
		f.System = beside(d.o.Plan, f.System)
	}
	if f.Basis == "" {
		f.Basis = d.plan.Basis
	}
	if f.Basis == "" {
		f.Basis = "wt"
	}
	if f.Without == nil {
		f.Without = d.plan.Without
	}
	if f.Pressure == nil {
		f.Pressure = d.plan.Pressure
	}
	return f
}

// subject opens the system of a panel.
func (d *drawn) subject(i int) (*subject, error) {
	q := &d.plan.Panel[i]
	if s, ok := d.subjects[d.key(q)]; ok {
		return s, nil
	}
	f := d.flags(q)
	if err := f.check(); err != nil {
		return nil, d.wrong(i, "pressure_GPa", err)
	}
	s, err := d.e.open(f, d.o.Quiet)
	if err != nil {
		var file *systems.FileError
		if errors.As(err, &file) {
			return nil, err // it names the system file's own lines
		}
		key := "system"
		var u *usageError
		if errors.As(err, &u) && strings.HasPrefix(u.Where, "--") {
			key = map[string]string{"--without": "without", "--pressure": "pressure_GPa"}[u.Where]
			err = u.Err
		}
		return nil, d.wrong(i, key, err)
	}
	d.subjects[d.key(q)] = s
	if d.main == nil {
		d.main = s
	}
	return s, nil
}

// wrong names the line of a panel's key for an error.
func (d *drawn) wrong(i int, key string, err error) error {
	what, remedy := err.Error(), "correct it"
	var u *usageError
	var fig *render.FigureError
	switch {
	case errors.As(err, &u):
		what, remedy = u.What, u.Remedy
		if what == "" {
			what = err.Error()
		}
	case errors.As(err, &fig):
		what, remedy = fig.What, fig.Remedy
		if fig.Why != "" {
			what += ": " + fig.Why
		}
	}
	d.doc.Add(fmt.Sprintf("panel[%d].%s", i, key), what, remedy)
	return badInput(d.doc.Err())
}

// composition reads one of a panel.
func (d *drawn) composition(i int, key, text string, s *subject) (ternary.Composition, error) {
	x, _, err := parseBulk("", text, s.sys.Components, s.basis)
	if err != nil {
		return x, d.wrong(i, key, err)
	}
	return x, nil
}

// panel prepares one panel: everything is computed here, and drawn when the page
// knows its width.
func (d *drawn) panel(i int) (render.Panel, error) {
	q := &d.plan.Panel[i]
	out := render.Panel{Title: q.Title, Span: 1}
	if q.Span != nil {
		out.Span = *q.Span
	}
	s, err := d.subject(i)
	if err != nil {
		return out, err
	}
	style := d.style
	if q.Shade == shades[1] {
		if style.Ink {
			return out, d.wrong(i, "shade", &usageError{What: "ink has no colour to tell temperatures with", Remedy: "leave out ink or shade"})
		}
		style = style.Shaded()
	}
	names, widths := q.Lines.set()
	for k, name := range names {
		if style, err = style.WithStroke(name, widths[k]); err != nil {
			return out, d.wrong(i, "lines."+strings.ReplaceAll(name, " ", "_"), err)
		}
	}
	switch q.Kind {
	case kindProjection:
		err = d.projection(i, q, s, style, &out)
	case kindSection:
		err = d.section(i, q, s, style, &out)
	case kindJoin:
		err = d.joined(i, q, s, style, &out)
	default:
		err = d.chart(i, q, s, style, &out)
	}
	return out, err
}

// failed notes why a panel is not whole.
func (d *drawn) failed(i int, reasons []string) {
	for _, r := range reasons {
		d.reasons = append(d.reasons, fmt.Sprintf("panel %d: %s", i+1, r))
	}
}

func (d *drawn) projection(i int, q *planPanel, s *subject, style render.Style, out *render.Panel) error {
	iso, err := parseIsotherms(q.Isotherms)
	if err != nil {
		return d.wrong(i, "isotherms", err)
	}
	p, interval, missed, err := d.e.project(s, iso)
	if err != nil {
		return fmt.Errorf("panel %d: %w", i+1, err)
	}
	d.e.noticeProjection(s, p, missed, d.o.Quiet)
	d.failed(i, projectionReasons(p))
	fig := render.Figure{Projection: p, Basis: s.basis, Style: style, Hide: q.Hide, Plain: d.plan.Legend}
	fig.Paths, err = d.paths(i, q, s)
	if err != nil {
		return err
	}
	if len(q.View) == 3 {
		var v [3]ternary.Composition
		for k, text := range q.View {
			if v[k], err = d.composition(i, "view", text, s); err != nil {
				return err
			}
		}
		fig.View = &render.View{Top: v[0], Left: v[1], Right: v[2]}
	}
	if q.Samples == nil || *q.Samples {
		if fig.Samples, fig.Groups, err = d.samples(s, q.Names == nil || *q.Names); err != nil {
			return err
		}
	}
	d.legend = append(d.legend, fig)
	c := fmt.Sprintf("Liquidus projection of %s", s.sys.Title)
	if interval > 0 {
		c += fmt.Sprintf(", isotherms every %s °C", short(interval))
	}
	for k, path := range fig.Paths {
		c += fmt.Sprintf("; path of %s by %s", spelled(q.Bulk[k]), path.Mode)
		if !path.Mode.Melts() {
			c += " crystallisation"
		}
	}
	d.captions = append(d.captions, titled(q.Title, c+"."))
	out.Draw = func(w float64) (*render.Scene, error) {
		f := fig
		f.WidthMM = w
		return f.Scene()
	}
	return d.tryOut(i, out, "view")
}

// tryOut draws a panel once, so that what is wrong with it is told with its line.
func (d *drawn) tryOut(i int, out *render.Panel, key string) error {
	p := render.Plate{Columns: 1, Style: d.style, WidthMM: d.width()}
	if d.plan.Columns != nil {
		p.Columns = *d.plan.Columns
	}
	_, err := out.Draw(p.CellWidth(out.Span))
	var fig *render.FigureError
	if errors.As(err, &fig) && fig.Where != "figure width" {
		return d.wrong(i, key, err)
	}
	return nil // the page tells
}

// titled puts a panel's own title before its caption.
func titled(title, caption string) string {
	if title == "" {
		return caption
	}
	return strings.TrimSuffix(title, ".") + ". " + caption
}

// paths follows the bulk compositions of a panel.
func (d *drawn) paths(i int, q *planPanel, s *subject) (out []*descent.Path, err error) {
	for k, text := range q.Bulk {
		x, err := d.composition(i, fmt.Sprintf("bulk[%d]", k), text, s)
		if err != nil {
			return nil, err
		}
		var p *descent.Path
		switch q.Mode {
		case "batch melting":
			p, err = d.e.melt(s.sys, x, descent.MeltOptions{Mode: descent.BatchMelting})
		case "fractional melting":
			p, err = d.e.melt(s.sys, x, descent.MeltOptions{Mode: descent.FractionalMelting})
		default:
			o := descent.Options{Mode: descent.Mode(q.Mode)}
			if q.Retain != nil {
				o.Retain = *q.Retain
			}
			p, err = d.e.follow(s.sys, x, o)
		}
		if err != nil {
			return nil, fmt.Errorf("panel %d: the path of %s could not be followed: %w", i+1, text, err)
		}
		d.failed(i, p.Checks.Problems)
		out = append(out, p)
	}
	return out, nil
}

func (d *drawn) section(i int, q *planPanel, s *subject, style render.Style, out *render.Panel) error {
	cut, err := d.e.cut(s.sys, *q.At+ternary.ZeroCelsius)
	if err != nil {
		return d.wrong(i, "at_C", err)
	}
	d.failed(i, cut.Checks.Problems)
	fig := render.Isothermal{Sections: []*sectionOf{cut}, Basis: s.basis, Style: style}
	if q.Samples == nil || *q.Samples {
		if fig.Samples, _, err = d.samples(s, true); err != nil {
			return err
		}
	}
	d.captions = append(d.captions, titled(q.Title, fmt.Sprintf("Isothermal section of %s at %s °C.", s.sys.Title, short(*q.At))))
	out.Draw = func(w float64) (*render.Scene, error) {
		f := fig
		f.WidthMM = w
		return f.Scene()
	}
	return d.tryOut(i, out, "at_C")
}

func (d *drawn) joined(i int, q *planPanel, s *subject, style render.Style, out *render.Panel) error {
	from, err := d.composition(i, "from", q.From, s)
	if err != nil {
		return err
	}
	to, err := d.composition(i, "to", q.To, s)
	if err != nil {
		return err
	}
	var o join.Options
	if len(q.Range) == 2 {
		o.TMin, o.TMax = q.Range[0]+ternary.ZeroCelsius, q.Range[1]+ternary.ZeroCelsius
	}
	diagram, err := d.e.join(s.sys, from, to, o)
	if err != nil {
		return d.wrong(i, "from", err)
	}
	d.failed(i, diagram.Checks.Problems)
	fig := render.Join{Diagram: diagram, Basis: s.basis, Style: style}
	d.captions = append(d.captions, titled(q.Title, fmt.Sprintf("Temperature against composition from %s to %s in %s.", s.endName(from), s.endName(to), s.sys.Title)))
	out.Draw = func(w float64) (*render.Scene, error) {
		f := fig
		f.WidthMM = w
		return f.Scene()
	}
	return d.tryOut(i, out, "from")
}

func (d *drawn) chart(i int, q *planPanel, s *subject, style render.Style, out *render.Panel) error {
	paths, err := d.paths(i, q, s)
	if err != nil {
		return err
	}
	fig := render.Chart{Path: paths[0], Kind: render.ChartKind(q.Kind), Against: render.Against(q.Against), Basis: s.basis, Style: style}
	what := map[render.ChartKind]string{render.PhaseAmounts: "Amounts of the phases", render.LiquidChart: "Composition of the liquid", render.HeatChart: "Heat"}[fig.Kind]
	against := q.Against
	if against == "" {
		against = string(render.AgainstTemperature)
	}
	if against == string(render.AgainstMelt) {
		against = "share of melt"
	}
	c := fmt.Sprintf("%s against %s, %s of %s in %s.", what, against, pathWords(paths[0]), spelled(q.Bulk[0]), s.sys.Title)
	d.captions = append(d.captions, titled(q.Title, c))
	out.Draw = func(w float64) (*render.Scene, error) {
		f := fig
		f.WidthMM = w
		return f.Scene()
	}
	return d.tryOut(i, out, "bulk")
}

// spelled is a composition as a caption has it.
func spelled(bulk string) string {
	return strings.NewReplacer(",", ", ", "=", " ").Replace(strings.ReplaceAll(bulk, " ", ""))
}

// pathWords is what happens along a path.
func pathWords(p *descent.Path) string {
	r := &pathsResult{mode: p.Mode}
	if p.Mode == descent.Fractional {
		r.retain = p.Retain
	}
	return r.process()
}

// drawnJSON is the result of the verb draw.
type drawnJSON struct {
	Status     string         `json:"status"`
	Caption    string         `json:"caption"`
	Panels     []string       `json:"panels"`
	Figures    []string       `json:"figures"`
	Provenance provenanceJSON `json:"provenance"`
}

func (d *drawn) json() drawnJSON {
	return drawnJSON{Status: status(len(d.reasons) == 0), Caption: d.caption(), Panels: list(d.captions), Figures: list(d.o.Figures),
		Provenance: d.main.provenanceJSON(map[string]any{"plan": portable(d.o.Plan)})}
}
