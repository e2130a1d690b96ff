package render

import (
	"fmt"
	"math"
	"strings"
)

// Plate is a page of several panels in a grid, with letters, and if wanted one legend
// for all of them. A zero Style is ColourStyle; a zero WidthMM is the style's.
type Plate struct {
	Panels     []Panel
	Columns    int // of the grid; 0 means 1
	Letters    bool
	Legend     []Figure // projections whose symbols are explained once, under the panels
	Style      Style
	WidthMM    float64
	Title      string // metadata only
	Provenance string
}

// Panel is one part of a plate.
type Panel struct {
	Span  int // columns that it takes; 0 means 1
	Title string
	// Draw composes the panel for a width in mm.
	Draw func(widthMM float64) (*Scene, error)
}

// plateGap is the distance between panels, mm.
const plateGap = 5.0

// plateLayers are those of all kinds of panels from the bottom up.
var plateLayers = []string{"fields", "regions", "areas", "isotherms", "tie lines", "frame", "boundaries", "curves", "bulk solid", "paths",
	"arrowheads", "points", "path symbols", "samples", "labels", "key"}

// mostPanels bounds a plate.
const mostPanels = 24

// CellWidth is the width of a panel that spans so many columns, mm.
func (p Plate) CellWidth(span int) float64 {
	n := max(1, p.Columns)
	one := (p.WidthMM - float64(n-1)*plateGap) / float64(n)
	return float64(span)*one + float64(span-1)*plateGap
}

// Scene lays the page out, row by row: a panel that does not fit into the rest of a
// row begins the next. It reports a FigureError for a page that cannot hold its
// panels.
func (p Plate) Scene() (*Scene, error) {
	st := p.Style.orDefault()
	if p.WidthMM == 0 {
		p.WidthMM = st.Width
	}
	p.Columns = max(1, p.Columns)
	switch {
	case len(p.Panels) == 0:
		return nil, &FigureError{What: "there is no panel to draw", Where: "plate", Why: "the list is empty", Remedy: "add a panel"}
	case len(p.Panels) > mostPanels:
		return nil, &FigureError{What: fmt.Sprintf("%d panels are too many", len(p.Panels)), Where: "plate", Remedy: fmt.Sprintf("draw up to %d, or make two figures", mostPanels)}
	}
	if _, most := Widths(st); math.IsNaN(p.WidthMM) || p.WidthMM > most {
		return nil, &FigureError{What: fmt.Sprintf("a page of %g mm cannot be drawn", p.WidthMM), Where: "plate", Why: fmt.Sprintf("figures of this style are up to %g mm wide", most), Remedy: "choose a narrower page"}
	}
	if least, _ := Widths(st); p.CellWidth(1) < least {
		return nil, &FigureError{What: fmt.Sprintf("%d columns leave %.0f mm for each", p.Columns, p.CellWidth(1)), Where: "plate", Why: fmt.Sprintf("a panel of this style needs %g mm", least), Remedy: "use fewer columns or a wider page"}
	}
	type placed struct {
		scene *Scene
		x, w  float64
	}
	var rows [][]placed
	column := p.Columns // forces a first row
	for i, panel := range p.Panels {
		span := max(1, panel.Span)
		if span > p.Columns {
			return nil, &FigureError{What: fmt.Sprintf("panel %d spans %d columns", i+1, span), Where: "plate", Why: fmt.Sprintf("the page has %d", p.Columns), Remedy: "let it span fewer, or give the page more columns"}
		}
		w := p.CellWidth(span)
		s, err := panel.Draw(w)
		if err != nil {
			return nil, fmt.Errorf("panel %d: %w", i+1, err)
		}
		if column+span > p.Columns {
			rows = append(rows, nil)
			column = 0
		}
		x := float64(column) * (p.CellWidth(1) + plateGap)
		rows[len(rows)-1] = append(rows[len(rows)-1], placed{s, x, w})
		column += span
	}
	z := st.zoom()
	head := 0.0
	if p.Letters {
		head = (CapHeight(st.Apex+1) + 1.2) * z
	}
	legend := legendTable(p.Legend, st, p.WidthMM/z-2*keyMargin)
	height := 0.0
	var tall []float64
	for _, row := range rows {
		h := 0.0
		for _, c := range row {
			h = max(h, c.scene.Height)
		}
		tall = append(tall, h+head)
		height += h + head + plateGap
	}
	height -= plateGap
	under := 0.0
	if len(legend.lines) > 0 {
		under = (legend.height() + 2*outerMargin + 2) * z
	}
	page := NewScene(p.WidthMM, height+under)
	for _, name := range plateLayers {
		page.Layer(name)
	}
	top := page.Height
	n := 0
	for r, row := range rows {
		for _, c := range row {
			place(page, c.scene, c.x+(c.w-c.scene.Width)/2, top-head-c.scene.Height)
			if p.Letters {
				runs := PlainRuns(letter(n), (st.Apex+1)*z, Bold)
				if t := p.Panels[n].Title; t != "" {
					runs = append(runs, PlainRuns("  "+t, st.Base*z, Regular)...)
				}
				page.Layer("labels").Text(TextItem{Runs: runs, X: c.x + outerMargin*z, Y: top - CapHeight((st.Apex+1)*z) - 0.3*z, Colour: st.Text, Role: "panel letter", Label: plain(runs)})
			}
			n++
		}
		top -= tall[r] + plateGap
	}
	if len(legend.lines) > 0 {
		part := NewScene(p.WidthMM/z, under/z)
		legend.draw(part.Layer("key"), keyMargin, outerMargin+legend.height(), p.WidthMM/z-2*keyMargin)
		place(page, part.enlarged(z), 0, 0)
	}
	p.describe(page, rows[0][0].scene)
	return page, nil
}

// letter is that of panel n: a to z.
func letter(n int) string { return string(rune('a' + n%26)) }

// describe fills in the metadata: that of every panel in turn.
func (p Plate) describe(page, first *Scene) {
	page.Title = p.Title
	if page.Title == "" {
		page.Title = first.Title
	}
	page.Subject = "Composed figure"
	page.Provenance = p.Provenance
	var parts []string
	for i, panel := range p.Panels {
		name := panel.Title
		if name == "" {
			name = "panel"
		}
		parts = append(parts, fmt.Sprintf("(%s) %s", letter(i), name))
	}
	page.Description = strings.Join(parts, "; ") + "."
}

// legendTable explains, once, the symbols of several projections.
func legendTable(figs []Figure, st Style, width float64) table {
	out := table{leading: st.leading(), size: st.Base, ruled: st.stroke(st.Rule, st.Muted)}
	seen := map[string]bool{}
	path := false
	for _, f := range figs {
		if f.Projection == nil {
			continue
		}
		k := keyMaker{style: st, pr: f.Projection, fig: f, width: width, tri: triangle{components: f.Projection.System.Components, basis: f.Basis}, table: table{leading: out.leading}}
		if path {
			k.fig.Paths = nil
		}
		path = path || hasPath(f.Paths)
		k.explain()
		for _, l := range k.table.lines {
			text := ""
			for _, e := range l.entries {
				text += plain(e.runs)
			}
			if !seen[text] {
				seen[text] = true
				out.add(l)
			}
		}
	}
	return out
}
