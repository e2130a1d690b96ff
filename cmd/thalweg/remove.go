package main

import (
	"fmt"
	"strconv"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/descent"
)

// removal is one --remove as written: solids taken out at a temperature.
type removal struct {
	text   string
	T      float64 // °C
	solids []string
	share  float64 // of each
}

// String says what is done, in words.
func (r removal) String() string {
	what := "all solids"
	if len(r.solids) > 0 {
		what = strings.Join(r.solids, ", ")
	}
	if r.share < 1 {
		what = short(r.share) + " of " + what
	}
	return fmt.Sprintf("%s removed at %s °C", what, short(r.T))
}

// texts are the removals in words.
func texts(list []removal) []string {
	out := []string{}
	for _, r := range list {
		out = append(out, r.String())
	}
	return out
}

// parseRemovals reads the values of --remove: T, T:A,B or T:A,B=SHARE, with one
// share for all solids of a removal.
func parseRemovals(list []string) ([]removal, error) {
	var out []removal
	for _, text := range list {
		fail := func(format string, args ...any) ([]removal, error) {
			return nil, &usageError{Where: "--remove " + text, What: fmt.Sprintf(format, args...), Remedy: "write it like 1250, 1250:Pl,Di or 1250:Pl=0.5"}
		}
		r := removal{text: text, share: 1}
		at, what, some := strings.Cut(text, ":")
		v, err := strconv.ParseFloat(strings.TrimSpace(at), 64)
		if err != nil || !(v > -ternary.ZeroCelsius && v < 1e5) {
			return fail("%q is not a temperature in °C", at)
		}
		r.T = v
		if some {
			names, share, part := strings.Cut(what, "=")
			if part {
				if r.share, err = strconv.ParseFloat(strings.TrimSpace(share), 64); err != nil || !(r.share > 0 && r.share <= 1) {
					return fail("%q is not a share between 0 and 1", share)
				}
			}
			for _, n := range strings.Split(names, ",") {
				if n = strings.TrimSpace(n); n == "" {
					return fail("a solid has no name")
				}
				r.solids = append(r.solids, n)
			}
		}
		out = append(out, r)
	}
	return out, nil
}

// removals are those of the flags, with solids looked up.
func (s *subject) removals(list []removal) ([]descent.Removal, error) {
	var out []descent.Removal
	for _, r := range list {
		d := descent.Removal{T: r.T + ternary.ZeroCelsius, Fraction: r.share}
		for _, name := range r.solids {
			i, ok := s.sys.SolidIndex(name)
			if !ok {
				var known []string
				for _, p := range s.sys.Solids {
					known = append(known, p.Symbol)
				}
				return nil, &usageError{Where: "--remove " + r.text, What: fmt.Sprintf("%s is not a solid of %s", name, s.sys.Name), Remedy: "the solids are " + strings.Join(known, ", ")}
			}
			d.Phases = append(d.Phases, i)
		}
		out = append(out, d)
	}
	return out, nil
}
