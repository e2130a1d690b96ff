package systems

import (
	"fmt"
	"slices"
)

const (
	maxSites = 24.0
	maxOrder = 6 // orders beyond have never been held by data
)

// mixing checks the mixing model of the phase whose table is at path and whose
// members have these symbols.
func (c *checker) mixing(path string, w wireMixing, members []string, out *Mixing) {
	out.Sites = 1
	if w.Sites != nil {
		out.Sites = *w.Sites
		if !finite(*w.Sites) || *w.Sites <= 0 || *w.Sites > maxSites {
			c.add(join(path, "sites"), fmt.Sprintf("%g sites of mixing make no sense", *w.Sites), "give the number of sites per formula unit, usually 1")
		}
	}
	c.extension(path, w, members, out)
	seen := map[[2]string]bool{}
	for i, p := range w.Pair {
		c.pair(fmt.Sprintf("%s[%d]", join(path, "pair"), i), p, members, seen, out)
	}
	on := map[string]bool{}
	for i, t := range w.Ternary {
		c.ternary(fmt.Sprintf("%s[%d]", join(path, "ternary"), i), t, members, on, out)
	}
}

// extension checks how binary terms are carried into the ternary.
func (c *checker) extension(path string, w wireMixing, members []string, out *Mixing) {
	out.Extension, out.Odd = orElse(w.Extension, "muggianu"), w.Odd
	at := join(path, "extension")
	switch out.Extension {
	case "muggianu", "kohler":
		if w.Odd != "" {
			c.add(join(path, "odd"), "odd belongs to the extension toop alone", `remove it or set extension = "toop"`)
		}
	case "toop":
		if len(members) != 3 {
			c.add(at, "the extension toop needs three members", `use "muggianu" or leave it out`)
		} else if !slices.Contains(members, w.Odd) {
			c.add(join(path, "odd"), fmt.Sprintf("odd = %q is not a member", w.Odd), known(members))
		}
	default:
		c.add(at, fmt.Sprintf("the extension %q is unknown", w.Extension), `use "muggianu", "kohler" or "toop"`)
	}
}

// pair checks one Redlich–Kister series.
func (c *checker) pair(path string, w wirePair, members []string, seen map[[2]string]bool, out *Mixing) {
	var p Pair
	if len(w.Of) != 2 || w.Of[0] == w.Of[1] {
		c.add(join(path, "of"), "a pair must name two different members", `write of = ["A", "B"]`)
	} else {
		p.Of = [2]string{w.Of[0], w.Of[1]}
		for _, s := range w.Of {
			if !slices.Contains(members, s) {
				c.add(join(path, "of"), fmt.Sprintf("%q is not a member of this phase", s), known(members))
			}
		}
		if seen[p.Of] || seen[[2]string{p.Of[1], p.Of[0]}] {
			c.add(join(path, "of"), fmt.Sprintf("the pair %s–%s is given twice", p.Of[0], p.Of[1]), "put all its terms into one table")
		}
		seen[p.Of] = true
	}
	orders := map[int]bool{}
	for k, t := range w.Term {
		at := fmt.Sprintf("%s.term[%d]", path, k)
		order := c.order(at, t, orders)
		a, b, tl := c.coefficients(at, t.wireCoefficients, termSource(t.wireSource, w.wireSource))
		p.Terms = append(p.Terms, Term{order, a, b, tl})
	}
	if len(w.Term) == 0 {
		c.add(path, "this pair has no terms", "add a [[…pair.term]] or remove the pair")
	}
	out.Pairs = append(out.Pairs, p)
}

// order checks the power k of a term.
func (c *checker) order(path string, t wireTerm, seen map[int]bool) int {
	at := join(path, "order")
	if t.Order == nil {
		c.add(at, "the term has no order", "add order = 0, 1, 2 …: the power of the difference of the two fractions")
		return 0
	}
	k := *t.Order
	switch {
	case k < 0 || k > maxOrder:
		c.add(at, fmt.Sprintf("the order %d is outside 0 to %d", k, maxOrder), "use a lower power")
		return 0
	case seen[k]:
		c.add(at, fmt.Sprintf("the order %d is given twice", k), "give each order once")
	}
	seen[k] = true
	return k
}

// ternary checks one ternary term.
func (c *checker) ternary(path string, w wireTernary, members []string, seen map[string]bool, out *Mixing) {
	at := join(path, "on")
	switch {
	case len(members) != 3:
		c.add(path, "a ternary term needs a phase of three members", "remove it")
	case !slices.Contains(members, w.On):
		c.add(at, fmt.Sprintf("on = %q is not a member", w.On), known(members))
	case seen[w.On]:
		c.add(at, fmt.Sprintf("the ternary term on %s is given twice", w.On), "give it once")
	}
	seen[w.On] = true
	a, b, t := c.coefficients(path, w.wireCoefficients, w.wireSource)
	out.Ternary = append(out.Ternary, TernaryTerm{w.On, a, b, t})
}

// termSource is the source of a term: its own, or else that of its pair.
func termSource(own, pair wireSource) wireSource {
	if blank(own.Source) && blank(own.FittedTo) {
		own.Source, own.FittedTo = pair.Source, pair.FittedTo
		own.Recalled = own.Recalled || pair.Recalled
	}
	own.Note = orElse(own.Note, pair.Note)
	return own
}
