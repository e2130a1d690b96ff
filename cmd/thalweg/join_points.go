package main

import (
	"fmt"
	"strings"

	"thalweg/ternary"
)

// joinPoint is a value of --read: composition and temperature.
type joinPoint struct {
	text        string
	composition string
	celsius     float64
}

// parsePoint reads "An=40@1300".
func parsePoint(text string) (joinPoint, error) {
	c, t, ok := strings.Cut(text, "@")
	if !ok {
		return joinPoint{}, &usageError{Where: "--read " + text, What: "it has no temperature", Remedy: "write it like An=40@1300"}
	}
	list, err := parseTemperatures("--read", t)
	if err != nil || len(list) != 1 {
		return joinPoint{}, &usageError{Where: "--read " + text, What: fmt.Sprintf("%q is not a temperature in °C", t), Remedy: "write it like An=40@1300"}
	}
	return joinPoint{text: strings.TrimSpace(text), composition: strings.TrimSpace(c), celsius: list[0]}, nil
}

const (
	// leastJoin is the distance, in a triangle of side 1, below which two ends are
	// one composition.
	leastJoin = 1e-4
	// besideJoin is how far from the join, in mole fractions, a composition may lie to
	// be read on it: as much as rounding to 0.1 % makes.
	besideJoin = 1e-3
)

// ends are the two compositions of the join.
func (o *JoinOptions) ends(e *env, s *subject) (out [2]ternary.Composition, err error) {
	for i, end := range [2]struct{ flag, text string }{{"--from", o.From}, {"--to", o.To}} {
		var sum float64
		if out[i], sum, err = parseBulk(end.flag, end.text, s.sys.Components, s.basis); err != nil {
			return out, err
		}
		if !normalised(sum) {
			e.notice(o.Quiet, "the composition of %s sums to %s and was normalised to 100 %s", end.flag, short(sum), s.basis.Unit())
		}
	}
	if out[0].Distance(out[1]) < leastJoin {
		return out, &usageError{Where: "--from " + o.From + " --to " + o.To, What: "the two ends are one composition", Remedy: "give two that differ"}
	}
	return out, nil
}

// endName names an end: a component's symbol, or symbols with percentages.
func (s *subject) endName(x ternary.Composition) string {
	var out []string
	for i, v := range s.percent(x) {
		switch {
		case x[i] == 1:
			return s.sys.Components[i].Symbol
		case x[i] > 0:
			out = append(out, s.sys.Components[i].Symbol+" "+strings.TrimSuffix(fixed(v, 1), ".0"))
		}
	}
	return strings.Join(out, " ")
}

// locate finds a point to read on the join.
func (r *joinResult) locate(p joinPoint) error {
	fail := func(what, remedy string) error {
		return &usageError{Where: "--read " + p.text, What: what, Remedy: remedy}
	}
	x := 0.0
	if symbol, number, ok := strings.Cut(p.composition, "="); ok && !strings.Contains(p.composition, ",") {
		i, known := r.sys.Components.Index(strings.TrimSpace(symbol))
		if !known {
			return fail(unknownComponent(strings.TrimSpace(symbol), r.sys.Components), "write it like "+exampleBulk(r.sys.Components)+"@1300")
		}
		v, err := parseAmount(number)
		if err != nil {
			return fail(fmt.Sprintf("the amount of %s, %s", r.sys.Components[i].Symbol, err), "write it like An=40@1300")
		}
		a, b := r.percent(r.From)[i], r.percent(r.To)[i]
		if a == b {
			return fail(fmt.Sprintf("all of the join holds the same share of %s", r.sys.Components[i].Symbol), "name another component, or all of them")
		}
		x = r.X((v-a)/(b-a), r.basis)
	} else {
		c, _, err := parseBulk("--read", p.composition, r.sys.Components, r.basis)
		if err != nil {
			return err
		}
		off := 0.0
		if x, off = r.Along(c); off > besideJoin {
			return fail(fmt.Sprintf("it does not lie on the join from %s to %s", r.from, r.to), "name one component alone, such as "+r.sys.Components[0].Symbol+"=40@1300")
		}
	}
	if x < -1e-9 || x > 1+1e-9 {
		return fail(fmt.Sprintf("it lies beyond the ends of the join, %s and %s", r.from, r.to), "choose a composition between them")
	}
	x = max(0, min(1, x))
	r.xs = append(r.xs, x)
	r.at = append(r.at, p.celsius+ternary.ZeroCelsius)
	r.samples = append(r.samples, sample{Name: p.text, X: r.At(x), Sum: 100})
	return nil
}

// pointName writes a point of --read for a figure: "An 40, 1300 °C".
func pointName(text string) string {
	return strings.NewReplacer("=", " ", ",", ", ", "@", ", ").Replace(text) + " °C"
}
