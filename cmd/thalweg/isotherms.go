package main

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

// isotherms says which isotherms are drawn: none, those of a list, or all
// multiples of an interval. The zero value chooses the interval.
type isotherms struct {
	none     bool
	interval float64   // K; 0: choose
	list     []float64 // °C, falling
}

const (
	fewIsotherms  = 14  // the chosen interval gives no more than so many
	mostIsotherms = 400 // more are taken for a slip
)

// parseIsotherms reads the value of --isotherms.
func parseIsotherms(text string) (isotherms, error) {
	fail := func(what string) (isotherms, error) {
		return isotherms{}, &usageError{Where: "--isotherms " + text, What: what,
			Remedy: "give an interval in °C (50), temperatures in °C (1200,1250,1300; a single one as 1200,), auto or none"}
	}
	switch strings.TrimSpace(text) {
	case "auto", "":
		return isotherms{}, nil
	case "none":
		return isotherms{none: true}, nil
	}
	items := strings.Split(text, ",")
	isList := len(items) > 1
	if isList && strings.TrimSpace(items[len(items)-1]) == "" {
		items = items[:len(items)-1]
	}
	var out isotherms
	for _, item := range items {
		v, err := strconv.ParseFloat(strings.TrimSpace(item), 64)
		switch {
		case err != nil:
			return fail(fmt.Sprintf("%q is not a number", item))
		case math.IsNaN(v) || math.IsInf(v, 0):
			return fail(fmt.Sprintf("%q is not finite", item))
		case isList && v <= -ternary.ZeroCelsius:
			return fail(fmt.Sprintf("%g °C is not above absolute zero", v))
		case !isList && v <= 0:
			return fail(fmt.Sprintf("%g °C is not an interval", v))
		}
		out.list = append(out.list, v)
	}
	if !isList {
		return isotherms{interval: out.list[0]}, nil
	}
	slices.Sort(out.list)
	slices.Reverse(out.list)
	out.list = slices.Compact(out.list)
	if len(out.list) > mostIsotherms {
		return fail(fmt.Sprintf("%d isotherms are too many", len(out.list)))
	}
	return out, nil
}

// choose returns the temperatures in °C, falling, for a liquidus surface between
// two temperatures, and the interval, 0 for a list. Multiples of an interval keep
// to the range for which the system file vouches; a list need not.
func (o isotherms) choose(low, high float64, vouched [2]float64) (list []float64, interval float64, err error) {
	low, high = math.Max(low, vouched[0]), math.Min(high, vouched[1])
	switch {
	case o.none:
		return nil, 0, nil
	case len(o.list) > 0:
		return o.list, 0, nil
	case low > high:
		return nil, 0, nil
	}
	interval = o.interval
	if interval == 0 {
		interval = chooseInterval(high - low)
	}
	first, last := math.Ceil(low/interval), math.Floor(high/interval)
	if n := last - first + 1; n > mostIsotherms {
		return nil, 0, &usageError{Where: "--isotherms " + short(interval), What: fmt.Sprintf("this interval gives %.0f isotherms between %.0f and %.0f °C", n, low, high),
			Remedy: fmt.Sprintf("give a larger one, such as %s", short(chooseInterval(high-low)))}
	}
	for k := last; k >= first; k-- {
		list = append(list, k*interval)
	}
	return list, interval, nil
}

// chooseInterval is the smallest round interval that gives few isotherms.
func chooseInterval(span float64) float64 {
	for _, v := range []float64{1, 2, 5, 10, 20, 50, 100, 200} {
		if span/v <= fewIsotherms {
			return v
		}
	}
	return 500
}

// extent is the lowest and highest temperature of a projection, °C.
func extent(p *liquidus.Projection) (low, high float64, ok bool) {
	low, high = math.Inf(1), math.Inf(-1)
	take := func(T float64) {
		if !math.IsInf(T, 0) && !math.IsNaN(T) && T > 0 {
			low, high = math.Min(low, celsius(T)), math.Max(high, celsius(T))
		}
	}
	for _, n := range p.Nodes {
		take(n.T)
	}
	for _, f := range p.Fields {
		take(f.PeakT)
	}
	for _, a := range p.Apexes {
		take(a.T)
	}
	return low, high, low <= high
}

// project computes the projection with the isotherms asked for; they need its
// extent, so it is computed twice. missed are the temperatures, °C, that the
// liquidus does not reach.
func (e *env) project(s *subject, o isotherms) (p *liquidus.Projection, interval float64, missed []float64, err error) {
	p, err = e.compute(s.sys, liquidus.Options{})
	if err != nil {
		return nil, 0, nil, err
	}
	low, high, ok := extent(p)
	if !ok {
		return p, 0, nil, nil
	}
	temperatures, interval, err := o.choose(low, high, [2]float64{celsius(s.sys.Range[0]), celsius(s.sys.Range[1])})
	if err != nil || len(temperatures) == 0 {
		return p, 0, nil, err
	}
	kelvin := make([]float64, len(temperatures))
	for i, t := range temperatures {
		kelvin[i] = t + ternary.ZeroCelsius
		if t < low || t > high {
			missed = append(missed, t)
		}
	}
	p, err = e.compute(s.sys, liquidus.Options{Isotherms: kelvin})
	return p, interval, missed, err
}

// projectionReasons says why a projection is not whole.
func projectionReasons(p *liquidus.Projection) []string {
	var out []string
	if n := len(p.Unmixed); n > 0 {
		out = append(out, fmt.Sprintf("at %d places on the liquidus the liquid separates into two, which this projection does not resolve", n))
	}
	if p.Checks.Passed {
		return out
	}
	if len(p.Checks.Problems) == 0 {
		return append(out, "the projection failed its own checks")
	}
	return append(out, p.Checks.Problems...)
}
