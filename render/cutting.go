package render

import (
	"math"
	"sort"
)

// span is a stretch of a line between two places.
type span struct{ from, to float64 }

// inside returns the stretches of the line that lie in any of the boxes,
// merged and in order, with ends good to 0.02 mm.
func (a arc) inside(boxes []box) []span {
	var out []span
	lo, hi := a.hull()
	for _, b := range boxes {
		w, h := b.bounds()
		if b.c.X+w < lo.X || b.c.X-w > hi.X || b.c.Y+h < lo.Y || b.c.Y-h > hi.Y {
			continue
		}
		for i, c := range a.segs {
			r := a.cum[i+1] - a.cum[i] // no point of the piece is further from its start
			if max(b.c.X-w-c[0].X, c[0].X-b.c.X-w, b.c.Y-h-c[0].Y, c[0].Y-b.c.Y-h) <= r {
				out = append(out, a.insideSegment(i, b)...)
			}
		}
	}
	sort.Slice(out, func(i, j int) bool { return out[i].from < out[j].from })
	return mergeSpans(out, 0.05)
}

// hull returns the corners of an upright box that holds the line.
func (a arc) hull() (lo, hi Point) {
	lo, hi = Point{math.Inf(1), math.Inf(1)}, Point{math.Inf(-1), math.Inf(-1)}
	for _, c := range a.segs {
		for _, p := range c {
			lo = Point{min(lo.X, p.X), min(lo.Y, p.Y)}
			hi = Point{max(hi.X, p.X), max(hi.Y, p.Y)}
		}
	}
	return lo, hi
}

// insideSegment samples one piece at 0.1 mm and halves down at every change.
func (a arc) insideSegment(i int, b box) []span {
	c, l := a.segs[i], a.cum[i+1]-a.cum[i]
	n := int(math.Ceil(l/0.1)) + 1
	in := func(t float64) bool { return b.contains(cubeAt(c[0], c[1:], t)) }
	var out []span
	was, start := in(0), 0.0
	for k := 1; k <= n; k++ {
		t := float64(k) / float64(n)
		now := in(t)
		if now != was {
			lo, hi := float64(k-1)/float64(n), t
			for j := 0; j < 4; j++ {
				if mid := (lo + hi) / 2; in(mid) == was {
					lo = mid
				} else {
					hi = mid
				}
			}
			if was {
				out = append(out, span{a.cum[i] + start*l, a.cum[i] + hi*l})
			}
			was, start = now, lo
		}
	}
	if was {
		out = append(out, span{a.cum[i] + start*l, a.cum[i+1]})
	}
	return out
}

// mergeSpans joins stretches, sorted by start, that are no more than gap apart.
func mergeSpans(in []span, gap float64) []span {
	var out []span
	for _, s := range in {
		if n := len(out); n > 0 && s.from <= out[n-1].to+gap {
			out[n-1].to = max(out[n-1].to, s.to)
			continue
		}
		out = append(out, s)
	}
	return out
}

// without returns the pieces of the line left when the stretches are removed;
// crumbs shorter than least go too.
func (a arc) without(cut []span, least float64) []arc {
	var out []arc
	s := 0.0
	add := func(to float64) {
		if to-s >= least {
			out = append(out, a.part(s, to))
		}
	}
	if len(cut) == 0 {
		return []arc{a}
	}
	for _, c := range cut {
		add(c.from)
		s = c.to
	}
	add(a.length())
	return out
}
