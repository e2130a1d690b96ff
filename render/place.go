package render

import (
	"math"
	"sort"
)

// Clearances of words, mm.
const (
	labelGap  = 0.35 // between two labels
	markGap   = 0.25 // between a label and a symbol or arrowhead
	lineGap   = 0.30 // between a label and a rigid line
	roomGap   = 0.90 // wished for between a label and a rigid line
	pageGap   = 0.20 // between a label and the edge of the page
	faintCost = 0.35 // per mm of faint line that must make way
	roomCost  = 0.6  // per mm of rigid line nearer than roomGap
	rigidCost = 12.0 // per mm of rigid line under a label that must stand
)

// wording is one way to set a label, with the size of its ink: w wide, up
// above and down below the baseline, mm.
type wording struct {
	runs        []Run
	w, up, down float64
}

// measure sets up a wording. Down is the drop of subscripts, or of letters
// that hang below the line.
func measure(runs []Run) wording {
	t := wording{runs: runs, w: TextWidth(runs)}
	for _, r := range runs {
		t.up = max(t.up, r.Rise+CapHeight(r.Size))
		drop := -r.Rise
		if hangs(r.Text) {
			drop += Descent(r.Size)
		}
		t.down = max(t.down, drop)
	}
	return t
}

func hangs(s string) bool {
	for _, c := range s {
		switch c {
		case 'g', 'j', 'p', 'q', 'y', 'Q', ',', ';', '(', ')', '[', ']', '/':
			return true
		}
	}
	return false
}

// around is the box of the wording when its centre is at c.
func (t wording) around(c Point, angle float64) box {
	return box{c, polar(angle), t.w / 2, (t.up + t.down) / 2}
}

// baseline is where the wording starts when its box has centre c.
func (t wording) baseline(c Point, angle float64) Point {
	u := polar(angle)
	return c.minus(u.times(t.w / 2)).minus(u.left().times((t.up - t.down) / 2))
}

// spot is a place where a label could stand.
type spot struct {
	variant int      // which wording
	c       Point    // centre of its box
	angle   float64  // degrees
	cost    float64  // reluctance, about mm of displacement
	lead    *segment // leader line from the label to its object
	home    *Point   // the object of a label without a leader line

	box box // filled in by the placer
}

// label is a line of text looking for a place.
type label struct {
	role, name string
	colour     Colour
	wordings   []wording
	spots      []spot
	rank       int     // lower ranks choose first
	must       bool    // may cross rigid lines rather than be left out
	faintLimit float64 // mm of faint line it may cover; 0 is no limit
	chosen     int     // index in spots, or -1
}

// placer finds places for labels among symbols and lines. It is deterministic:
// the same labels in the same order get the same places.
type placer struct {
	w, h   float64
	marks  []box // symbols, arrowheads, tables: never covered
	lines  *lineIndex
	labels []*label
}

func newPlacer(w, h float64) *placer {
	return &placer{w: w, h: h, lines: newLineIndex(w, h)}
}

// ask adds a label with its possible places.
func (p *placer) ask(l label) { p.labels = append(p.labels, &l) }

// fixed adds a label that stands where it is put.
func (p *placer) fixed(role, name string, t wording, base Point, angle float64, c Colour) {
	u := polar(angle)
	mid := base.plus(u.times(t.w / 2)).plus(u.left().times((t.up - t.down) / 2))
	p.ask(label{role: role, name: name, colour: c, wordings: []wording{t}, rank: -1, must: true,
		spots: []spot{{c: mid, angle: angle}}})
}

// solve chooses a place for every label that can have one: first in order of
// rank, each taking the best place left; then in rounds, in which a label may
// move to a better place that has become free, and one without a place may
// push another aside if that finds a new one.
func (p *placer) solve() {
	sort.SliceStable(p.labels, func(i, j int) bool { return p.labels[i].rank < p.labels[j].rank })
	for _, l := range p.labels {
		p.weigh(l)
		l.chosen = -1
	}
	for _, l := range p.labels {
		if l.rank < 0 {
			l.chosen = 0
			continue
		}
		l.chosen = p.best(l, nil)
	}
	for round := 0; round < 3; round++ {
		moved := false
		for _, l := range p.labels {
			if l.chosen != 0 {
				moved = p.improve(l) || moved
			}
		}
		if !moved {
			break
		}
	}
}

// weigh drops the places of a label that are out of the question whatever the
// other labels do, and sorts the rest by cost.
func (p *placer) weigh(l *label) {
	kept := l.spots[:0]
	for _, s := range l.spots {
		s.box = l.wordings[s.variant].around(s.c, s.angle)
		if l.rank >= 0 {
			cost, ok := p.price(l, s)
			if !ok {
				continue
			}
			s.cost += cost
		}
		kept = append(kept, s)
	}
	l.spots = kept
	sort.SliceStable(l.spots, func(i, j int) bool { return l.spots[i].cost < l.spots[j].cost })
}

// price is the cost of what lies under a label at s, or !ok where it may not
// stand.
func (p *placer) price(l *label, s spot) (cost float64, ok bool) {
	w, h := s.box.bounds()
	if s.box.c.X-w < pageGap || s.box.c.X+w > p.w-pageGap || s.box.c.Y-h < pageGap || s.box.c.Y+h > p.h-pageGap {
		return 0, false
	}
	about := s.box.grown(markGap)
	for _, m := range p.marks {
		if about.overlaps(m) || s.lead != nil && m.chord(*s.lead) > 0 {
			return 0, false
		}
	}
	under, near := p.lines.crossed(s.box.grown(lineGap), roomGap-lineGap)
	if under[rigid] > 0 && !l.must {
		return 0, false
	}
	if l.faintLimit > 0 && under[faint] > l.faintLimit {
		return 0, false
	}
	cost = rigidCost*under[rigid] + faintCost*under[faint]
	if under[rigid] > 0 {
		cost += 40
	}
	cost += roomCost * near
	if s.lead != nil {
		cost += 6 * float64(p.lines.meets(*s.lead))
	}
	if s.home != nil {
		if d := s.box.c.minus(*s.home); d.length() > 1 {
			way := segment{s.home.plus(d.unit().times(0.6)), s.box.c}
			cost += 4 * float64(min(2, p.lines.meets(way)))
		}
	}
	return cost, true
}

// clash reports whether two places get in each other's way.
func clash(a, b *spot) bool {
	if a.box.grown(labelGap).overlaps(b.box) {
		return true
	}
	if a.lead != nil && b.box.grown(labelGap).chord(*a.lead) > 0 || b.lead != nil && a.box.grown(labelGap).chord(*b.lead) > 0 {
		return true
	}
	return a.lead != nil && b.lead != nil && crosses(*a.lead, *b.lead)
}

// blockers returns the placed labels, other than l and skip, in the way of s;
// at most limit of them.
func (p *placer) blockers(l, skip *label, s *spot, limit int) (out []*label) {
	for _, o := range p.labels {
		if o == l || o == skip || o.chosen < 0 {
			continue
		}
		if clash(s, &o.spots[o.chosen]) {
			if out = append(out, o); len(out) >= limit {
				break
			}
		}
	}
	return out
}

// best is the cheapest free place of l, or -1; also, if not nil, is a further
// place to keep clear of.
func (p *placer) best(l *label, also *spot) int {
	for i := range l.spots {
		s := &l.spots[i]
		if also != nil && clash(s, also) {
			continue
		}
		if len(p.blockers(l, nil, s, 1)) == 0 {
			return i
		}
	}
	return -1
}

// improve moves l to a better place, pushing one other label aside where the
// two together gain by it.
func (p *placer) improve(l *label) bool {
	now := l.chosen
	limit := len(l.spots)
	if now >= 0 {
		limit = now
	}
	for i := 0; i < limit; i++ {
		s := &l.spots[i]
		in := p.blockers(l, nil, s, 2)
		if len(in) == 0 {
			l.chosen = i
			return true
		}
		if len(in) > 1 || in[0].rank < 0 {
			continue
		}
		if p.pushAside(l, i, in[0]) {
			return true
		}
	}
	return false
}

// absence is the cost of leaving a label out, against which moves are judged.
const absence = 1000

func (p *placer) pushAside(l *label, i int, o *label) bool {
	was, now := o.chosen, l.chosen
	before := l.expense() + o.expense()
	l.chosen, o.chosen = i, -1
	o.chosen = p.best(o, nil)
	if l.expense()+o.expense() < before-1e-9 && (o.chosen >= 0 || o.rank > l.rank) {
		return true
	}
	l.chosen, o.chosen = now, was
	return false
}

func (l *label) expense() float64 {
	if l.chosen < 0 {
		return absence / float64(2+l.rank)
	}
	return l.spots[l.chosen].cost
}

// item returns the label as placed text.
func (l *label) item() TextItem {
	s := l.spots[l.chosen]
	t := l.wordings[s.variant]
	at := t.baseline(s.c, s.angle)
	return TextItem{Runs: t.runs, X: at.X, Y: at.Y, Angle: s.angle, Colour: l.colour, Role: l.role, Label: l.name}
}

// about returns places round a symbol of radius r at q, the nearest first; the
// quarter to the right and above is liked best, as is common practice on maps.
func about(q Point, r float64, variant int, t wording, reach ...float64) []spot {
	var out []spot
	home := &q
	for k, d := range reach {
		for a := 0; a < 24; a++ {
			deg := float64(15 * a)
			u := polar(deg)
			push := func(v float64) float64 { return max(-1, min(1, 1.5*v)) }
			c := q.plus(u.times(r + d)).plus(Point{push(u.X) * t.w / 2, push(u.Y) * (t.up + t.down) / 2})
			turn := math.Abs(math.Mod(deg-30+180+360, 360)-180) / 180
			out = append(out, spot{variant: variant, c: c, cost: 0.8*turn + 0.9*float64(k), home: home})
		}
	}
	return out
}

// leaders returns places further away, joined to q by a line that ends stop mm
// before it.
func leaders(q Point, stop float64, variant int, t wording, reach ...float64) []spot {
	var out []spot
	for _, d := range reach {
		for a := 0; a < 24; a++ {
			u := polar(float64(15 * a))
			c := q.plus(u.times(d)).plus(Point{sign(u.X) * t.w / 2, u.Y * (t.up + t.down) / 2})
			b := t.around(c, 0)
			end := c.plus(Point{-sign(u.X) * (b.w + labelGap), 0})
			if math.Abs(u.X) < 0.4 {
				end = c.plus(Point{0, -sign(u.Y) * (b.h + labelGap)})
			}
			start := q.plus(end.minus(q).unit().times(stop))
			if start.distance(end) < 1 {
				continue
			}
			out = append(out, spot{variant: variant, c: c, cost: 6 + d, lead: &segment{start, end}})
		}
	}
	return out
}

func sign(v float64) float64 {
	switch {
	case v > 1e-9:
		return 1
	case v < -1e-9:
		return -1
	}
	return 0
}
