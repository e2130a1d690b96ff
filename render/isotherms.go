package render

import (
	"math"
	"sort"
	"strconv"

	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

const zeroCelsius = ternary.ZeroCelsius

// isoline is one connected piece of an isotherm on the page.
type isoline struct {
	arc    arc
	stroke Stroke
	t      float64 // °C
	heavy  bool
	solid  int
}

// isotherms lays out the isotherms and asks for their numbers; they are drawn
// by cutIsotherms once all words stand.
func (d *drawing) isotherms() {
	all := d.pr.Isotherms
	if len(all) == 0 {
		return
	}
	hot, cold := all[0].T, all[0].T
	for _, i := range all {
		hot, cold = max(hot, i.T), min(cold, i.T)
	}
	step := isothermStep(all)
	for _, iso := range all {
		t := celsius(iso.T)
		heavy := isFifth(t, step)
		tone := 0.0
		if hot > cold {
			tone = (hot - iso.T) / (hot - cold)
		}
		for _, line := range iso.Lines {
			d.isoline(line, t, heavy, tone)
		}
	}
	d.askIsotherms()
}

func (d *drawing) isoline(line liquidus.IsothermLine, t float64, heavy bool, tone float64) {
	st := d.style
	a := smooth(d.tri.all(line.Points), line.Closed, d.tri.rim())
	if a.empty() {
		return
	}
	w := st.Isotherm
	if heavy {
		w = st.IsothermHeavy
	}
	d.iso = append(d.iso, isoline{a, *st.stroke(w, blend(st.IsothermHot, st.IsothermCold, tone)), t, heavy, line.Solid})
	d.words.lines.add(faint, a.chords(2.5)...)
}

// isothermStep is the smallest interval between isotherms, in kelvin, to a
// tenth; 0 if there is only one.
func isothermStep(all []liquidus.Isotherm) float64 {
	ts := make([]float64, len(all))
	for i, x := range all {
		ts[i] = x.T
	}
	sort.Float64s(ts)
	step := 0.0
	for i := 1; i < len(ts); i++ {
		if s := math.Round((ts[i]-ts[i-1])*10) / 10; s > 0 && (step == 0 || s < step) {
			step = s
		}
	}
	return step
}

// isFifth reports whether t is a whole multiple of five steps.
func isFifth(t, step float64) bool {
	if step == 0 {
		return true
	}
	n := t / (5 * step)
	return math.Abs(n-math.Round(n)) < 1e-6
}

// askIsotherms asks for numbers on the heavy isotherms, or on all of them where
// fewer than three are heavy, and in any case on one in every field.
func (d *drawing) askIsotherms() {
	order := make([]int, len(d.iso))
	heavy := map[float64]bool{}
	for i := range order {
		order[i] = i
		if d.iso[i].heavy {
			heavy[d.iso[i].t] = true
		}
	}
	sort.SliceStable(order, func(i, j int) bool {
		a, b := d.iso[order[i]], d.iso[order[j]]
		if a.heavy != b.heavy {
			return a.heavy
		}
		return a.arc.length() > b.arc.length()
	})
	count, inField := map[float64]int{}, map[int]bool{}
	for _, k := range order {
		i := d.iso[k]
		t := measure(PlainRuns(strconv.FormatFloat(i.t, 'f', -1, 64), d.style.Base, Regular))
		long := i.arc.length()
		if long < 2.2*t.w {
			continue
		}
		again := count[i.t] > 0 && long < 30 || count[i.t] >= 3 || !i.heavy && len(heavy) >= 3
		if again && inField[i.solid] {
			continue
		}
		d.words.ask(label{role: "isotherm label", name: plain(t.runs) + " °C", colour: d.style.Muted,
			wordings: []wording{t}, rank: 7 + min(count[i.t], 2), spots: riding(i.arc, t), faintLimit: 1.5 * t.w})
		count[i.t]++
		inField[i.solid] = true
	}
}

// riding lists places for a label that rides on a line, along its direction
// and never upside down; straight stretches near the middle are liked best.
func riding(a arc, t wording) []spot {
	var out []spot
	l := a.length()
	n := int(min(29, max(5, l/2)))
	for k := range n {
		f := (float64(k) + 0.5) / float64(n)
		s := f * l
		if s < t.w*0.7 || s > l-t.w*0.7 {
			continue
		}
		lo, hi, mid := a.at(s-t.w/2), a.at(s+t.w/2), a.at(s)
		u := hi.minus(lo).unit()
		bend := math.Abs(u.cross(mid.minus(lo)))
		if bend > 0.5*t.up {
			continue
		}
		deg := math.Atan2(u.Y, u.X) * 180 / math.Pi
		if deg > 90 {
			deg -= 180
		} else if deg <= -90 {
			deg += 180
		}
		c := lo.lerp(hi, 0.5).lerp(mid, 0.5)
		out = append(out, spot{c: c, angle: deg, cost: 3*math.Abs(f-0.5) + 6*bend + math.Abs(deg)/60})
	}
	return out
}

// gaps are the rooms of the words that were placed, in which fine lines stop.
func (b *board) gaps() (out []box) {
	for _, l := range b.words.labels {
		if l.chosen >= 0 {
			out = append(out, l.spots[l.chosen].box.grown(0.45))
		}
	}
	return out
}

// cutIsotherms draws the isotherms with gaps where words stand.
func (d *drawing) cutIsotherms() {
	gaps := d.gaps()
	layer := d.scene.Layer("isotherms")
	for _, i := range d.iso {
		var p Path
		for _, piece := range i.arc.without(i.arc.inside(gaps), 0.7) {
			p.Append(piece.path())
		}
		if p.Empty() {
			continue
		}
		st := i.stroke
		layer.Path(PathItem{Path: p, Stroke: &st, Role: "isotherm"})
	}
}
