package render

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/liquidus"
)

// Columns of the key, mm from its left side.
const (
	keyIndent = 6.0  // where words start, after numbers and symbols
	keyT      = 14.0 // right end of temperatures
	keyFirst  = 9.2  // least width of a column of percentages
	keyGap    = 3.0  // between columns of different things
	keyUnit   = 1.4  // between the last column's head and the unit
	keyBlock  = 1.6  // further space above a new block
)

// keyMaker builds the key: what the numbers and symbols in the triangle stand
// for.
type keyMaker struct {
	style  Style
	tri    triangle // for its components and basis
	pr     *liquidus.Projection
	fig    Figure
	placed []placedSample
	width  float64
	table  table
}

// newKey sets the key for a column of the given width, mm.
func newKey(f Figure, st Style, placed []placedSample, width float64) table {
	k := keyMaker{style: st, pr: f.Projection, fig: f, placed: placed, width: width,
		tri:   triangle{components: f.Projection.System.Components, basis: f.Basis},
		table: table{leading: st.leading(), size: st.Base, ruled: st.stroke(st.Rule, st.Muted)}}
	if f.hides("key") {
		return k.table
	}
	k.nodes()
	k.groups()
	k.samples()
	if !f.Plain {
		k.explain()
	}
	k.shade()
	if len(k.table.lines) > longKey {
		k.table.leading *= 0.94 // 8 pt on 9.5
	}
	return k.table
}

// longKey is the number of lines from which a key is set a little tighter.
const longKey = 28

// explain says what symbols stand for.
func (k *keyMaker) explain() {
	for i, p := range k.fig.Paths {
		if p != nil {
			k.pathLines(i)
			break
		}
	}
	k.isotherms()
	k.solids()
}

func (k *keyMaker) text(s string, x float64, font Font) entry {
	return entry{runs: PlainRuns(s, k.style.Base, font), x: x, colour: k.style.Text}
}

func (k *keyMaker) number(s string, x float64) entry {
	e := k.text(s, x, Regular)
	e.right = true
	return e
}

// keyColumns are the right ends of the three columns of percentages.
func keyColumns(st Style, tri triangle) [3]float64 {
	var out [3]float64
	x := keyT
	for i, c := range tri.components {
		x += max(keyFirst, TextWidth(FormulaRuns(c.Symbol, st.Base, Bold))+2)
		out[i] = x
	}
	return out
}

// leastKeyWidth is the width that the key's columns need.
func leastKeyWidth(st Style, tri triangle) float64 {
	return keyColumns(st, tri)[2] + keyUnit + TextWidth(PlainRuns(tri.basis.Unit(), st.Base, Regular)) + 0.5
}

// nodes lists invariant points, those on edges after those inside.
func (k *keyMaker) nodes() {
	nodes := shownNodes(k.pr)
	if len(nodes) == 0 {
		return
	}
	sort.SliceStable(nodes, func(i, j int) bool { return rankNode(nodes[i]) < rankNode(nodes[j]) })
	cols := keyColumns(k.style, k.tri)
	head := tableLine{rule: true, entries: []entry{k.number("T, °C", keyT)}}
	for i, c := range k.tri.components {
		head.entries = append(head.entries, entry{runs: FormulaRuns(c.Symbol, k.style.Base, Regular), x: cols[i], right: true, colour: k.style.Text})
	}
	head.entries = append(head.entries, k.text(k.tri.basis.Unit(), cols[2]+keyUnit, Regular))
	for i := range head.entries {
		head.entries[i].colour = k.style.Muted
	}
	k.table.add(head)
	many := len(nodes) > manyNodes
	beside := k.fitsBeside(nodes, cols[2]+keyGap, !many)
	for i, n := range nodes {
		gap := 0.0
		switch {
		case i == 0:
			gap = 0.9
		case !beside || rankNode(n)/10 != rankNode(nodes[i-1])/10:
			gap = 0.5
		}
		k.node(n, cols, k.describe(n, !many), beside, gap)
	}
	if many {
		k.kinds(nodes)
	}
}

// manyNodes is the number of points from which their kinds are told by their letters
// instead of in every line.
const manyNodes = 8

// kinds explains the letters of points: capitals inside the triangle, small ones on
// its edges.
func (k *keyMaker) kinds(nodes []liquidus.Node) {
	var order []liquidus.Kind
	letters := map[liquidus.Kind][]string{}
	for _, n := range nodes {
		letter := strings.TrimRight(n.ID, "0123456789")
		if letter == "" || n.Kind == "" {
			continue
		}
		if letters[n.Kind] == nil {
			order = append(order, n.Kind)
		}
		if !slices.Contains(letters[n.Kind], letter) {
			letters[n.Kind] = append(letters[n.Kind], letter)
		}
	}
	var words [][]Run
	for i, kind := range order {
		for _, l := range letters[kind] {
			words = append(words, PlainRuns(l, k.style.Base, Bold))
		}
		text := string(kind)
		if i < len(order)-1 {
			text += ";"
		}
		words = append(words, k.words(text)...)
	}
	k.paragraph(words, 0, keyBlock/4)
}

// rankNode sorts points: those inside, those on edges, extrema; of each, by
// kind.
func rankNode(n liquidus.Node) int {
	kinds := []liquidus.Kind{liquidus.Eutectic, liquidus.ReactionPoint, liquidus.Peritectic, liquidus.Transition,
		liquidus.Maximum, liquidus.Minimum, liquidus.Critical}
	rank := len(kinds)
	for i, k := range kinds {
		if k == n.Kind {
			rank = i
		}
	}
	switch {
	case isRing(n):
		return rank
	case n.Edge >= 0:
		return 10 + rank
	}
	return 20 + rank
}

// describe is the reaction at a point, after its kind if that is asked for.
func (k *keyMaker) describe(n liquidus.Node, kind bool) [][]Run {
	var words [][]Run
	if kind && n.Kind != "" {
		words = k.words(string(n.Kind) + ",")
	}
	for _, w := range strings.Fields(reaction(k.pr.System, n)) {
		words = append(words, FormulaRuns(w, k.style.Base, Regular))
	}
	return words
}

// fitsBeside reports whether every description fits between x and the right
// side.
func (k *keyMaker) fitsBeside(nodes []liquidus.Node, x float64, kind bool) bool {
	for _, n := range nodes {
		if lines := wrap(k.describe(n, kind), k.width-x); len(lines) > 1 || len(lines) == 1 && TextWidth(lines[0]) > k.width-x {
			return false
		}
	}
	return true
}

func (k *keyMaker) node(n liquidus.Node, cols [3]float64, words [][]Run, beside bool, gap float64) {
	line := tableLine{gap: gap, entries: []entry{
		k.text(n.ID, 0, Bold),
		k.number(fmt.Sprintf("%.0f", celsius(n.T)), keyT),
	}}
	for i, s := range k.tri.percents(n.Liquid) {
		line.entries = append(line.entries, k.number(s, cols[i]))
	}
	if beside {
		for _, runs := range wrap(words, k.width) {
			line.entries = append(line.entries, entry{runs: runs, x: cols[2] + keyGap, colour: k.style.Text})
		}
		k.table.add(line)
		return
	}
	k.table.add(line)
	k.paragraph(words, keyIndent, 0)
}

// paragraph wraps words between x and the right side.
func (k *keyMaker) paragraph(words [][]Run, x, gap float64) {
	for i, runs := range wrap(words, k.width-x) {
		l := tableLine{entries: []entry{{runs: runs, x: x, colour: k.style.Text}}}
		if i == 0 {
			l.gap = gap
		}
		k.table.add(l)
	}
}

func (k *keyMaker) words(s string) [][]Run {
	var out [][]Run
	for _, w := range strings.Fields(s) {
		out = append(out, PlainRuns(w, k.style.Base, Regular))
	}
	return out
}

// samples lists the samples that have a path, each with what happened along it;
// the others have their names beside them.
func (k *keyMaker) samples() {
	for _, s := range k.placed {
		if s.trail < 0 {
			continue
		}
		title := s.Name
		if title == "" {
			title = "bulk"
		}
		p := k.fig.Paths[s.trail]
		runs := PlainRuns(title, k.style.Base, Bold)
		runs = append(runs, PlainRuns(", "+process(p), k.style.Base, Regular)...)
		k.table.add(tableLine{gap: keyBlock,
			entries: []entry{{runs: runs, x: keyIndent, colour: k.style.Text}},
			symbol: func(l *Layer, at Point) {
				q := Point{at.X + sampleRadius*1.3, at.Y + CapHeight(k.style.Base)/2}
				l.Path(PathItem{Path: sampleShape(s.shape, q, sampleRadius), Fill: &s.colour, Role: "key symbol"})
			}})
		k.events(p)
	}
}

// groups explains the symbols and colours of samples.
func (k *keyMaker) groups() {
	for i, g := range k.fig.Groups {
		gap := 0.0
		if i == 0 {
			gap = keyBlock
		}
		colour := k.style.Line
		if g.Colour > 0 {
			colour = k.style.pathColour(g.Colour - 1)
		}
		k.table.add(tableLine{gap: gap,
			entries: []entry{{runs: PlainRuns(g.Name, k.style.Base, Regular), x: keyIndent, colour: k.style.Text}},
			symbol: func(l *Layer, at Point) {
				q := Point{at.X + sampleRadius*1.3, at.Y + CapHeight(k.style.Base)/2}
				l.Path(PathItem{Path: sampleShape(max(0, g.Symbol-1), q, sampleRadius), Fill: &colour, Role: "key symbol"})
			}})
	}
}

// process names what happens along a path.
func process(p *descent.Path) string {
	s := string(p.Mode)
	if !p.Mode.Melts() {
		s += " crystallisation"
	}
	if p.Mode == descent.Fractional && p.Retain > 0 {
		s += fmt.Sprintf(", %g of new solids kept", p.Retain)
	}
	return s
}

// events lists T, event and the melt left for each event of a path; events at one
// temperature share an entry.
func (k *keyMaker) events(p *descent.Path) {
	right := min(k.width, 60)
	for i := 0; i < len(p.Steps); i++ {
		s := p.Steps[i]
		if s.Event == "" {
			continue
		}
		words, share := strings.TrimSuffix(s.Event, " begins"), percentOf(s, k.fig.Basis)
		for i+1 < len(p.Steps) && p.Steps[i+1].Event != "" && math.Abs(p.Steps[i+1].T-s.T) < 0.05 {
			i++
			words += ", " + strings.TrimSuffix(p.Steps[i].Event, " begins")
			if last := percentOf(p.Steps[i], k.fig.Basis); last != share {
				share, _, _ = strings.Cut(share, "–")
				share += "–" + last
			}
		}
		label := share + " % melt"
		e := k.text(words, keyT+keyGap-1, Regular)
		room := right - e.x - TextWidth(PlainRuns(label, k.style.Base, Regular)) - 2
		lines := wrap(k.words(words), room)
		for n, runs := range lines {
			e.runs = runs
			l := tableLine{entries: []entry{e}}
			if n == 0 {
				l.entries = append(l.entries, k.number(fmt.Sprintf("%.0f", celsius(s.T)), keyT), k.number(label, right))
			}
			k.table.add(l)
		}
	}
}

// percentOf is the melt of a step in whole percent.
func percentOf(s descent.Step, b ternary.Basis) string {
	return fmt.Sprintf("%.0f", math.Abs(100*melt(s, b)))
}

// pathLines explains the lines of paths, with samples drawn in the colour of
// path i.
func (k *keyMaker) pathLines(i int) {
	st := k.style
	c := st.pathColour(i)
	const length = 8.0
	at := length + 1.8
	line := func(o Point) Path {
		y := o.Y + XHeight(st.Base)/2
		return Polyline([]Point{{o.X + 0.4, y}, {o.X + length, y}}, false)
	}
	measure := "mass"
	if k.fig.Basis == ternary.Mole {
		measure = "moles"
	}
	put := func(words string, gap float64, sym func(*Layer, Point)) {
		first := len(k.table.lines)
		k.paragraph(k.words(words), at, gap)
		k.table.lines[first].symbol = sym
	}
	done, last := "crystallised", "last liquid; final solid"
	if k.fig.Paths[i].Mode.Melts() {
		done, last = "molten", "last liquid; last solid"
	}
	put("liquid; a tick for each tenth "+done+", by "+measure, keyBlock, func(l *Layer, o Point) {
		st.drawPath(l, line(o), i, "key symbol")
		y := o.Y + XHeight(st.Base)/2
		for _, x := range []float64{2, 4, 6} {
			l.Path(PathItem{Path: Polyline([]Point{{o.X + x, y - crossTick}, {o.X + x, y + crossTick}}, false), Stroke: st.stroke(st.Mark, c), Role: "key symbol"})
		}
	})
	for _, p := range k.fig.Paths {
		if p != nil && slices.ContainsFunc(p.Steps, func(s descent.Step) bool { return strings.HasPrefix(s.Event, descent.MeltingGoesOn) }) {
			put("leap of the liquid to the next melting", 0.2, func(l *Layer, o Point) {
				l.Path(PathItem{Path: line(o), Stroke: st.dashed(st.SolidPath, c, leapDash), Role: "key symbol"})
			})
			break
		}
	}
	if k.fig.hides("bulk solid") {
		last = strings.Split(last, ";")[0]
	} else {
		put("bulk of the solids", 0.2, func(l *Layer, o Point) {
			l.Path(PathItem{Path: line(o), Stroke: st.dashed(st.SolidPath, c, st.solidDash(i)), Role: "key symbol"})
		})
	}
	put(last, 0.2, func(l *Layer, o Point) {
		y := o.Y + XHeight(st.Base)/2
		q := Point{o.X + 2, y}
		l.Path(PathItem{Path: circle(q, 1.35), Stroke: st.stroke(st.Mark+0.2, c), Role: "key symbol"})
		l.Path(PathItem{Path: circle(q, 0.45), Fill: &c, Role: "key symbol"})
		if !k.fig.hides("bulk solid") {
			l.Path(PathItem{Path: square(Point{o.X + 6, y}, 1.3), Stroke: st.stroke(st.Mark, c), Role: "key symbol"})
		}
	})
}

// isotherms states their interval, and explains the symbol for the composition of a
// solid.
func (k *keyMaker) isotherms() {
	step := isothermStep(k.pr.Isotherms)
	words := ""
	if step != 0 {
		words = fmt.Sprintf("isotherms every %g °C", step)
	}
	if len(compoundPlaces(k.pr.System)) == 0 {
		if words != "" {
			k.paragraph(k.words(words), 0, keyBlock)
		}
		return
	}
	st := k.style
	x := 0.0
	l := tableLine{gap: keyBlock}
	const what = "composition of a solid"
	if words != "" {
		x = TextWidth(PlainRuns(words, st.Base, Regular)) + 3
		if x+3+TextWidth(PlainRuns(what, st.Base, Regular)) > k.width {
			k.paragraph(k.words(words), 0, keyBlock)
			x, l.gap = 0, 0
		} else {
			l.entries = append(l.entries, k.text(words, 0, Regular))
		}
	}
	l.entries = append(l.entries, k.text(what, x+3, Regular))
	l.symbol = func(l *Layer, o Point) {
		w := white
		q := Point{o.X + x + diamondRadius + 0.2, o.Y + XHeight(st.Base)/2}
		l.Path(PathItem{Path: diamond(q, diamondRadius), Fill: &w, Stroke: st.stroke(st.Mark, st.Line), Role: "key symbol"})
	}
	k.table.add(l)
}

// shade gives the scale of the shading.
func (k *keyMaker) shade() {
	sh := k.fig.shade
	if sh == nil {
		return
	}
	const bar = 24.0 // mm
	st := k.style
	low, high := fmt.Sprintf("%.0f", celsius(sh.low)), fmt.Sprintf("%.0f °C", celsius(sh.high))
	x := TextWidth(PlainRuns(low, st.Base, Regular)) + 1.5
	l := tableLine{entries: []entry{k.text(low, 0, Regular), k.text(high, x+bar+1.5, Regular)}}
	after := x + bar + 1.5 + TextWidth(PlainRuns(high, st.Base, Regular)) + 2.5
	if what := "liquidus temperature"; after+TextWidth(PlainRuns(what, st.Base, Regular)) <= k.width {
		l.gap = keyBlock / 2
		l.entries = append(l.entries, k.text(what, after, Regular))
	} else {
		k.paragraph(k.words(what+":"), 0, keyBlock/4)
	}
	l.symbol = func(l *Layer, o Point) {
		sh.swatch(l, Point{o.X + x, o.Y - 0.2}, bar, CapHeight(st.Base)+0.4, st.stroke(st.Tick, st.Line))
	}
	k.table.add(l)
}

// solids spells out the symbols of the solids that appear, and what is to be
// remarked about them.
func (k *keyMaker) solids() {
	sys := k.pr.System
	seen := make([]bool, len(sys.Solids))
	for _, f := range k.pr.Fields {
		seen[f.Solid] = true
	}
	var words [][]Run
	var remarks []string
	for i, s := range sys.Solids {
		if !seen[i] {
			continue
		}
		if s.Name != "" && s.Name != s.Symbol {
			w := FormulaRuns(s.Symbol, k.style.Base, Italic)
			name := strings.Fields(s.Name)
			words = append(words, w)
			for j, n := range name {
				if j == len(name)-1 {
					n += ";"
				}
				words = append(words, FormulaRuns(n, k.style.Base, Regular))
			}
		}
		if s.Remark != "" {
			remarks = append(remarks, s.Symbol+": "+s.Remark)
		}
	}
	if n := len(words); n > 0 {
		last := words[n-1]
		last[len(last)-1].Text = strings.TrimSuffix(last[len(last)-1].Text, ";")
		k.paragraph(words, 0, keyBlock/2)
	}
	if len(remarks) > manyRemarks { // one after another, to save lines
		remarks = []string{strings.Join(remarks, "; ")}
	}
	for _, r := range remarks {
		k.paragraph(k.words(r), 0, keyBlock/2)
	}
}

// manyRemarks is the number of remarks on solids from which they share a paragraph.
const manyRemarks = 3
