package render

import (
	"math"

	"thalweg/ternary/liquidus"
)

// Arrowheads on boundary curves, mm: slim, with a notched back.
const (
	arrowLength = 2.3
	arrowHalf   = 0.56
	arrowNotch  = 0.35 // depth of the notch, of the length
	arrowPitch  = 1.75 // from one head to the next of a pair
)

// boundaries draws the boundary curves as smooth lines through their computed
// points.
func (d *drawing) boundaries() {
	l := d.scene.Layer("boundaries")
	st := d.style
	for _, c := range d.pr.Curves {
		line := d.boundary(c)
		if line.arc.empty() {
			continue
		}
		d.curves = append(d.curves, line)
		for _, r := range line.runs {
			w := st.Boundary
			if r.kind == liquidus.Polymorph {
				w = st.Polymorph
			}
			l.Path(PathItem{Path: line.arc.part(r.from, r.to).path(), Stroke: st.stroke(w, st.Line), Role: "boundary"})
		}
		d.words.lines.add(rigid, line.arc.chords(1.5)...)
	}
}

// boundaryLine is a curve on the page, run towards falling T.
type boundaryLine struct {
	arc  arc
	runs []kindRun
}

// kindRun is a stretch of a curve of one kind.
type kindRun struct {
	kind     liquidus.CurveKind
	from, to float64 // mm along the arc
	falls    bool    // T falls along it by more than rounding
}

func (d *drawing) boundary(c liquidus.Curve) boundaryLine {
	pts := make([]Point, len(c.Points))
	for i, p := range c.Points {
		pts[i] = d.tri.at(p.Liquid)
	}
	kept := distinctIndex(pts, false)
	line := boundaryLine{arc: smooth(pts, false, d.tri.rim())}
	if line.arc.empty() {
		return line
	}
	kinds := make([]liquidus.CurveKind, len(kept))
	temps := make([]float64, len(kept))
	for i, k := range kept {
		kinds[i], temps[i] = c.Points[k].Kind, c.Points[k].T
	}
	if temps[len(temps)-1] > temps[0] {
		line.arc = line.arc.reversed()
		for i, j := 0, len(kinds)-1; i < j; i, j = i+1, j-1 {
			kinds[i], kinds[j] = kinds[j], kinds[i]
			temps[i], temps[j] = temps[j], temps[i]
		}
	}
	line.runs = kindRuns(kinds, temps, line.arc.cum)
	return line
}

// kindRuns joins neighbouring points of one kind; where the kind changes, the
// middle between the two points counts. Points whose kind cannot be told go
// with what precedes them.
func kindRuns(kinds []liquidus.CurveKind, temps, place []float64) []kindRun {
	settle(kinds)
	var out []kindRun
	start, first := 0.0, 0
	for i := 1; i <= len(kinds); i++ {
		if i < len(kinds) && kinds[i] == kinds[first] {
			continue
		}
		end := place[len(place)-1]
		if i < len(kinds) {
			end = (place[i-1] + place[i]) / 2
		}
		falls := temps[max(0, first-1)]-temps[min(i, len(temps)-1)] > 1e-3
		out = append(out, kindRun{kinds[first], start, end, falls})
		start, first = end, i
	}
	return out
}

func settle(kinds []liquidus.CurveKind) {
	known := liquidus.Cotectic
	for _, k := range kinds {
		if k != liquidus.Degenerate && k != "" {
			known = k
			break
		}
	}
	for i, k := range kinds {
		if k == liquidus.Degenerate || k == "" {
			kinds[i] = known
		} else {
			known = k
		}
	}
}

// arrows puts arrowheads at about the middle of every stretch of a boundary
// curve, towards falling T: one on cotectics, two on reaction curves. A
// stretch too short for them has none, nor has one along which T stands still.
func (d *drawing) arrows() {
	l := d.scene.Layer("arrowheads")
	for _, c := range d.curves {
		for _, r := range c.runs {
			if !r.falls || r.kind == liquidus.Polymorph {
				continue
			}
			n := 1
			if r.kind == liquidus.Reaction {
				n = 2
			}
			d.arrowsOn(l, c.arc, r, n)
		}
	}
}

func (d *drawing) arrowsOn(l *Layer, a arc, r kindRun, n int) {
	total := arrowLength + float64(n-1)*arrowPitch
	room := (r.to - r.from) - total - 1.2
	if room < 0 {
		return
	}
	mid := (r.from + r.to) / 2
	for k := range 15 {
		shift := float64((k+1)/2) * 0.8
		if shift > room/2 {
			break
		}
		if k%2 == 1 {
			shift = -shift
		}
		if d.tryArrows(l, a, mid+shift+total/2, n) {
			return
		}
	}
}

// tryArrows draws n heads on a, the first with its tip at place tip, unless
// something is in the way.
func (d *drawing) tryArrows(l *Layer, a arc, tip float64, n int) bool {
	var heads []arrow
	for k := range n {
		h := arrowOn(a, tip-float64(k)*arrowPitch, arrowLength, arrowHalf)
		for _, m := range d.words.marks {
			if h.box().grown(0.15).overlaps(m) {
				return false
			}
		}
		for _, t := range d.trails {
			for _, m := range t.marks {
				if h.box().grown(0.6).contains(m.at) {
					return false
				}
			}
		}
		heads = append(heads, h)
	}
	d.heads = append(d.heads, heads...)
	for _, h := range heads {
		d.putArrow(l, h, d.style.Line)
	}
	return true
}

func (d *drawing) putArrow(l *Layer, h arrow, c Colour) {
	l.Path(PathItem{Path: h.path(), Fill: &c, Role: "arrowhead"})
	d.words.marks = append(d.words.marks, h.box())
}

// arrow is a filled arrowhead.
type arrow struct {
	tip, dir     Point
	length, half float64
}

// arrowOn is the head whose tip and tail lie on the line.
func arrowOn(a arc, tip, length, half float64) arrow {
	p, q := a.at(tip), a.at(tip-length)
	return arrow{p, p.minus(q).unit(), length, half}
}

// path runs from the tip by the left wing and the notch to the right wing.
func (h arrow) path() Path {
	back := h.tip.minus(h.dir.times(h.length))
	side := h.dir.left().times(h.half)
	notch := back.plus(h.dir.times(h.length * arrowNotch))
	return Polyline([]Point{h.tip, back.plus(side), notch, back.minus(side)}, true)
}

func (h arrow) box() box {
	return box{h.tip.minus(h.dir.times(h.length / 2)), h.dir, h.length / 2, h.half}
}

// celsius is a temperature on the figure's scale.
func celsius(k float64) float64 { return math.Round((k-zeroCelsius)*10) / 10 }
