package descent

import (
	"errors"
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

const (
	// fracTol is the error aimed at per step of the integration, relative to the
	// liquid's amount: far below what a figure or a table shows. The masses
	// balance to rounding whatever it is (see melt).
	fracTol = 1e-9
	// fracMax is the longest step in u = −ln(mass of liquid).
	fracMax = 0.25
	// fracMin is the shortest.
	fracMin = 1e-12
	// stillTol: where (change of the liquid's composition per unit u) × (mass of
	// liquid left) is below this, the rest crystallises without change and the
	// masses balance to better than 1e-12.
	stillTol = 2e-14
	// fracOver is the driving force, in RT, at which an absent solid has come in.
	fracOver = 1e-11
	// nearSaturated is the driving force, in RT, within which a solid counts as
	// saturated when the forming set is chosen.
	nearSaturated = 1e-9
)

// fractional follows the path with every solid removed as it forms.
func (w *walk) fractional(primary gibbs.State) error {
	m := melt{n: w.bulk, T: w.path.LiquidT}
	st := &stack{total: make([][3]float64, len(w.sys.Solids))}
	saturated := []gibbs.State{primary}
	u := 0.0
	for stage := 0; stage < 200; stage++ {
		a, ok := w.choose(&m, saturated)
		if !ok {
			return w.finishAtPoint(&m, saturated, st)
		}
		w.recordMelt(&m, &a, st, w.stageName(saturated, &a, stage))
		next, done, err := w.stage(&m, &a, &u, st)
		if err != nil {
			return w.lost(m.T, err)
		}
		if done {
			return nil
		}
		saturated = next
	}
	return w.lost(m.T, errors.New("the path does not come to an end"))
}

// stack is the sum of the solids removed: moles of end-members by solid.
type stack struct {
	total [][3]float64
}

// stageName names what happens as a stage begins.
func (w *walk) stageName(saturated []gibbs.State, a *active, stage int) string {
	forming := func(p int) bool {
		for j := 0; j < a.count; j++ {
			if a.phase[j] == p {
				return true
			}
		}
		return false
	}
	var last []int
	if n := len(w.path.Steps); n > 0 {
		last = w.path.Steps[n-1].Crystallising
	}
	name := ""
	add := func(s string) {
		if name != "" {
			name += ", "
		}
		name += s
	}
	for j := 0; j < a.count; j++ {
		if stage == 0 || !contains(last, a.phase[j]) {
			add(w.symbol(a.phase[j]) + " in")
		}
	}
	for _, p := range last {
		if !forming(p) {
			add(w.symbol(p) + " stops")
		}
	}
	if name == "" {
		for _, s := range saturated {
			if !forming(s.Phase) {
				add(w.symbol(s.Phase) + " touched")
			}
		}
	}
	return name
}

// stage integrates one set of forming solids to its end: another solid comes in,
// one stops forming, or the liquid no longer changes.
func (w *walk) stage(m *melt, a *active, u *float64, st *stack) (saturated []gibbs.State, done bool, err error) {
	h := 0.02
	row := w.nextRow(*u)
	var f flow
	if !w.flowAt(m, a, &f) {
		return nil, false, errors.New("the solids that form do not determine the liquid's course")
	}
	for {
		if w.still(m, &f) {
			w.finishStill(m, a, &f, st)
			return nil, true, nil
		}
		hit := false
		step := math.Min(h, fracMax)
		if *u+step >= row-1e-13 {
			step, hit = row-*u, true
		}
		next, b, errSize, ok := w.advance(m, a, &f, step)
		if !ok || errSize > fracTol {
			if step < fracMin {
				return nil, false, errors.New("the integration's steps became too short")
			}
			h = step * math.Max(0.2, 0.9*math.Pow(fracTol/math.Max(errSize, fracTol/1e5), 0.2))
			if !ok {
				h = step / 4
			}
			continue
		}
		var g flow
		if !w.flowAt(&next, &b, &g) {
			h = step / 4
			continue
		}
		if over, _ := w.excess(&next, &b, &g); over > 0 {
			at, nb, sat, ok := w.stageEvent(m, a, &f, step)
			if !ok {
				return nil, false, errors.New("an event could not be located")
			}
			*u += w.fold(m, &at, &nb, st)
			*a = nb
			return sat, false, nil
		}
		if next.T < w.low {
			w.recordMelt(m, a, st, "")
			w.end(m.T, "the melt is still liquid at the lower limit of temperature")
			return nil, true, nil
		}
		w.fold(m, &next, &b, st)
		*a, f = b, g
		if hit {
			*u = row
			w.recordMelt(m, a, st, "")
			row = w.nextRow(*u)
		} else {
			*u += step
		}
		h = step * math.Min(3, 0.9*math.Pow(fracTol/math.Max(errSize, fracTol*1e-4), 0.2))
		if hit {
			h = math.Max(h, 0.02)
		}
	}
}

// nextRow is the next u at which a row is due: even spacing of the melt's mass.
func (w *walk) nextRow(u float64) float64 {
	n := float64(w.steps)
	k := math.Ceil(math.Exp(-u)*n*(1-1e-12)) - 1
	if k < 1 {
		return math.Inf(1)
	}
	return -math.Log(k / n)
}

// fold replaces m by next and books what was removed; it returns the change of u.
func (w *walk) fold(m, next *melt, a *active, st *stack) float64 {
	du := math.Log(w.weigh(m.n) / w.weigh(next.n))
	for j := 0; j < a.count; j++ {
		for k := range next.removed[j] {
			st.total[a.phase[j]][k] += next.removed[j][k]
		}
	}
	*m = *next
	m.removed = [3][3]float64{}
	return du
}

// still reports that what is left will crystallise without changing.
func (w *walk) still(m *melt, f *flow) bool {
	d := math.Max(math.Abs(f.dx[0]), math.Max(math.Abs(f.dx[1]), math.Abs(f.dx[2])))
	return d*f.mass/w.total < stillTol
}

// excess is how far a point lies beyond the nearest event: the largest driving
// force of a solid that does not form, or the largest negative rate. The solid
// concerned is returned with it. f is the flow at the point.
func (w *walk) excess(m *melt, a *active, f *flow) (float64, gibbs.State) {
	over, who := math.Inf(-1), gibbs.State{}
	for j := 0; j < a.count; j++ {
		if v := -f.r[j] * w.weigh(f.st[j].C); v > over {
			over, who = v, gibbs.State{Phase: a.phase[j], Y: f.st[j].Y, C: f.st[j].C}
		}
	}
	rt := ternary.R * m.T
	for i, p := range w.sys.Solids {
		if i == a.phase[0] || a.count > 1 && i == a.phase[1] || a.count > 2 && i == a.phase[2] {
			continue
		}
		d := p.Drive(&f.pot.Mu, m.T)
		if v := d.D/rt - fracOver; v > over {
			over, who = v, gibbs.State{Phase: i, Y: d.Y, C: d.C}
		}
	}
	return over, who
}

// stageEvent finds the point within a step at which the excess vanishes, and the
// solids saturated there.
func (w *walk) stageEvent(m *melt, a *active, f *flow, step float64) (at melt, b active, saturated []gibbs.State, ok bool) {
	lo, hi := 0.0, step
	flo, _ := w.excess(m, a, f)
	if flo > 0 {
		flo = -1e-300
	}
	end, eb, _, _ := w.advance(m, a, f, step)
	var g flow
	if !w.flowAt(&end, &eb, &g) {
		return at, b, nil, false
	}
	fhi, who := w.excess(&end, &eb, &g)
	at, b = end, eb
	side := 0
	for round := 0; round < 100; round++ {
		h := hi - fhi*(hi-lo)/(fhi-flo)
		if !(h > lo && h < hi) || math.IsInf(fhi, 0) || round%4 == 3 {
			h = (lo + hi) / 2
		}
		next, nb, _, good := w.advance(m, a, f, h)
		if !good || !w.flowAt(&next, &nb, &g) {
			return at, b, nil, false
		}
		v, s := w.excess(&next, &nb, &g)
		if v > 0 {
			hi, fhi, who = h, v, s
			at, b = next, nb
			if side == 1 {
				flo /= 2
			}
			side = 1
		} else {
			lo, flo = h, v
			if side == 2 {
				fhi /= 2
			}
			side = 2
		}
		if v > 0 && v < 1e-13 || hi-lo < 1e-15 {
			break
		}
	}
	for j := 0; j < b.count; j++ {
		var c gibbs.State
		c.Phase, c.Y = b.phase[j], b.y[j]
		c.C = w.sys.Solids[c.Phase].Contents(c.Y)
		saturated = append(saturated, c)
	}
	if !forms(&b, who.Phase) {
		saturated = append(saturated, who)
	}
	return at, b, saturated, true
}

func forms(a *active, phase int) bool {
	for j := 0; j < a.count; j++ {
		if a.phase[j] == phase {
			return true
		}
	}
	return false
}
