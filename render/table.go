package render

// entry is one piece of text in a line of a table: it starts at x, or ends
// there when right is set.
type entry struct {
	runs   []Run
	x      float64
	right  bool
	colour Colour
}

// tableLine is a line of entries; symbol, if any, draws beside them with the
// baseline's start as its origin.
type tableLine struct {
	entries []entry
	symbol  func(l *Layer, at Point)
	gap     float64 // further space above, mm
	rule    bool    // a thin rule under the line
}

// table is a column of lines, the form of a figure's key.
type table struct {
	lines   []tableLine
	leading float64
	size    float64 // pt, for the height of the first line
	ruled   *Stroke
}

// add appends a line.
func (t *table) add(l tableLine) { t.lines = append(t.lines, l) }

// height from the top of the first line's capitals to the last line's foot.
func (t *table) height() float64 {
	h := 0.0
	for i, l := range t.lines {
		if i == 0 {
			h += CapHeight(t.size)
		} else {
			h += t.leading + l.gap
		}
	}
	return h + Descent(t.size)
}

// draw sets the table with its top left corner at x, top; rules run to width.
func (t *table) draw(l *Layer, x, top, width float64) {
	y := top - CapHeight(t.size)
	for i, line := range t.lines {
		if i > 0 {
			y -= t.leading + line.gap
		}
		for _, e := range line.entries {
			at := x + e.x
			if e.right {
				at -= TextWidth(e.runs)
			}
			l.Text(TextItem{Runs: e.runs, X: at, Y: y, Colour: e.colour, Role: "key", Label: plain(e.runs)})
		}
		if line.symbol != nil {
			line.symbol(l, Point{x, y})
		}
		if line.rule {
			ry := y - 0.35*t.leading
			l.Path(PathItem{Path: Polyline([]Point{{x, ry}, {x + width, ry}}, false), Stroke: t.ruled, Role: "rule"})
		}
	}
}

// plain is the text of runs without typography.
func plain(runs []Run) string {
	s := ""
	for _, r := range runs {
		s += r.Text
	}
	return s
}

// wrap breaks words into lines no wider than width, mm, where a word alone
// does not exceed it. Words are joined by a space of the first word's size.
func wrap(words [][]Run, width float64) [][]Run {
	var out [][]Run
	var line []Run
	for _, w := range words {
		if len(w) == 0 {
			continue
		}
		joined := append([]Run(nil), line...)
		if len(joined) > 0 {
			last := &joined[len(joined)-1]
			if last.Rise == 0 {
				last.Text += " "
			} else {
				joined = append(joined, Run{Text: " ", Font: w[0].Font, Size: w[0].Size})
			}
		}
		joined = append(joined, w...)
		if len(line) > 0 && TextWidth(joined) > width {
			out = append(out, line)
			joined = w
		}
		line = joined
	}
	if len(line) > 0 {
		out = append(out, line)
	}
	return out
}
