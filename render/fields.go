package render

import (
	"math"
	"slices"

	"thalweg/ternary/liquidus"
)

// fields fills the primary fields with their tints and asks for their names.
func (d *drawing) fields() {
	tint := d.tints()
	l := d.scene.Layer("fields")
	if d.fig.shade != nil {
		d.fig.shade.draw(l, d.tri)
	}
	for i, f := range d.pr.Fields {
		r := d.regions[i]
		if len(r.rings) == 0 {
			continue
		}
		c, ok := tint(f.Solid)
		if d.fig.shade != nil {
			// the temperature of one liquid says nothing where there are two
			c, ok = white, f.TwoLiquids
		}
		if ok {
			if f.TwoLiquids {
				c = blend(c, Hex("FFFFFF"), 0.55)
			}
			var p Path
			for _, ring := range r.rings {
				p.Append(Polyline(ring, true))
			}
			l.Path(PathItem{Path: p, Fill: &c, Role: "field"})
		}
		if !d.fig.hides("names") {
			d.nameField(f, r)
		}
	}
}

// region puts a field on the page: the outline runs anticlockwise, holes the
// other way, so that the non-zero winding rule leaves them open.
func (d *drawing) region(f liquidus.Field) region {
	var r region
	add := func(ring []Point, anticlockwise bool) {
		ring = distinct(ring, true)
		if len(ring) < 3 {
			return
		}
		if (area(ring) > 0) != anticlockwise {
			slices.Reverse(ring)
		}
		r.rings = append(r.rings, ring)
	}
	add(d.tri.all(f.Outline), true)
	if len(r.rings) == 0 {
		return r
	}
	for _, h := range f.Holes {
		add(d.tri.all(h), false)
	}
	return r
}

// area is positive for an anticlockwise ring.
func area(ring []Point) float64 {
	s := 0.0
	for i, p := range ring {
		s += p.cross(ring[(i+1)%len(ring)])
	}
	return s / 2
}

// tints gives each solid one of the style's tints so that fields that share a
// boundary differ, by greedy colouring in the solids' order: among the tints
// that no neighbour has, the one used least.
func (d *drawing) tints() func(solid int) (Colour, bool) {
	palette := d.style.Tints
	n := len(d.pr.System.Solids)
	if len(palette) == 0 {
		return func(int) (Colour, bool) { return Colour{}, false }
	}
	near := make([]map[int]bool, n)
	for i := range near {
		near[i] = map[int]bool{}
	}
	for _, c := range d.pr.Curves {
		a, b := c.Solids[0], c.Solids[1]
		if b < 0 {
			continue // a second liquid: the field beyond is the same solid's
		}
		near[a][b], near[b][a] = true, true
	}
	given, used := make([]int, n), make([]int, len(palette))
	for i := range given {
		given[i] = -1
	}
	for _, f := range d.pr.Fields {
		if given[f.Solid] >= 0 {
			continue
		}
		taken := make([]bool, len(palette))
		for o := range n {
			if near[f.Solid][o] && given[o] >= 0 {
				taken[given[o]] = true
			}
		}
		best := -1
		for k := range palette {
			if !taken[k] && (best < 0 || used[k] < used[best]) {
				best = k
			}
		}
		if best < 0 {
			best = f.Solid % len(palette)
		}
		given[f.Solid] = best
		used[best]++
	}
	return func(solid int) (Colour, bool) { return palette[given[solid]], true }
}

// nameField asks for a field's name: in full in the middle of its room, else
// its symbol, else turned along the field, else in full outside it at the end of
// a leader line.
func (d *drawing) nameField(f liquidus.Field, r region) {
	c, radius := r.pole(0.1)
	d.poles = append(d.poles, radius)
	s := d.pr.System.Solids[f.Solid]
	name, symbol := s.Name, s.Symbol
	if name == "" {
		name = symbol
	}
	if f.TwoLiquids {
		name, symbol = "two liquids", "2 L"
	}
	full := measure(FormulaRuns(name, d.style.Base, Regular))
	short := measure(FormulaRuns(symbol, d.style.Base, Regular))
	l := label{role: "field", name: name, colour: d.style.Text, wordings: []wording{full}, rank: 2}
	if symbol != name {
		l.wordings = append(l.wordings, short)
	}
	axis := r.axis()
	l.spots = room(r, c, radius, 0, full, 0, 0)
	if name != symbol && radius < max(9, full.w) {
		l.spots = append(l.spots, room(r, c, radius, 1, short, 0, 10)...)
	}
	if radius < max(6, 0.6*full.w) {
		l.spots = append(l.spots, room(r, c, radius, 0, full, axis, 13)...)
		if name != symbol {
			l.spots = append(l.spots, room(r, c, radius, 1, short, axis, 15)...)
		}
		for v, t := range l.wordings {
			for _, p := range leaders(c, 0, v, t, 3, 5, 7, 9, 12, 15, 19, 24, 30) {
				p.cost += 16 + 3*float64(v)
				if d.tri.rim().excess(p.c) < 2 {
					p.cost += 12 // it could be taken for the name of the field it stands in
				}
				l.spots = append(l.spots, p)
			}
		}
	}
	d.words.ask(l)
}

// room lists places for a name inside a field, the middle first.
func room(r region, c Point, radius float64, variant int, t wording, angle, extra float64) []spot {
	cost := func(q Point) float64 { return extra + 4*q.distance(c)/(radius+2) }
	out := []spot{{variant: variant, c: c, angle: angle, cost: cost(c)}}
	lo, hi := r.bounds()
	w, h := t.around(c, angle).bounds()
	step := max(1, math.Sqrt((hi.X-lo.X)*(hi.Y-lo.Y)/140))
	for y := lo.Y + step/2; y < hi.Y; y += step {
		for x := lo.X + step/2; x < hi.X; x += step {
			q := Point{x, y}
			if x-w > lo.X && x+w < hi.X && y-h > lo.Y && y+h < hi.Y && r.contains(q) {
				out = append(out, spot{variant: variant, c: q, angle: angle, cost: cost(q)})
			}
		}
	}
	return out
}
