package main

import (
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/ternary"
)

// bulkFlags say which compositions are followed.
type bulkFlags struct {
	Bulk    string // empty if Samples is given
	Samples string // file; empty if Bulk is given
}

func (f *bulkFlags) add(cmd *cobra.Command) {
	fs := cmd.Flags()
	fs.StringVar(&f.Bulk, "bulk", "", "bulk `composition`, such as Di=30,Ab=35,An=35")
	fs.StringVar(&f.Samples, "samples", "", "`file` of samples to follow instead of --bulk: CSV with columns name and component symbols")
	_ = cmd.RegisterFlagCompletionFunc("bulk", completeBulk)
	_ = cmd.RegisterFlagCompletionFunc("samples", endings("csv"))
}

func (f *bulkFlags) check(cmd *cobra.Command) error {
	switch bulk, samples := cmd.Flags().Changed("bulk"), cmd.Flags().Changed("samples"); {
	case bulk && samples:
		return &usageError{What: "both --bulk and --samples are given", Remedy: "keep the one that is meant"}
	case !bulk && !samples:
		return &usageError{What: "there is no composition to follow", Remedy: "give --bulk Di=30,Ab=35,An=35 or --samples FILE.csv"}
	}
	return nil
}

// compositions are those to follow.
func (f *bulkFlags) compositions(e *env, s *subject, quiet bool) ([]sample, error) {
	if f.Samples != "" {
		return e.loadSamples(f.Samples, s, quiet)
	}
	x, sum, err := parseBulk("--bulk", f.Bulk, s.sys.Components, s.basis)
	if err != nil {
		return nil, err
	}
	if !normalised(sum) {
		e.notice(quiet, "the bulk composition sums to %s and was normalised to 100 %s", short(sum), s.basis.Unit())
	}
	return []sample{{X: x, Sum: sum}}, nil
}

// parseBulk reads "Di=30,Ab=35,An=35" in basis b, the value of a flag. A component
// that is not named is 0. sum is the sum as written, for a notice.
func parseBulk(flag, text string, cs ternary.Components, b ternary.Basis) (x ternary.Composition, sum float64, err error) {
	var amounts [3]float64
	var seen [3]bool
	fail := func(format string, args ...any) (ternary.Composition, float64, error) {
		return x, 0, &usageError{Where: strings.TrimSpace(flag + " " + text), What: fmt.Sprintf(format, args...), Remedy: "write it like " + exampleBulk(cs)}
	}
	if strings.TrimSpace(text) == "" {
		return fail("it is empty")
	}
	for _, item := range strings.Split(text, ",") {
		symbol, number, ok := strings.Cut(item, "=")
		symbol = strings.TrimSpace(symbol)
		if !ok || symbol == "" {
			return fail("%q is not of the form SYMBOL=AMOUNT", item)
		}
		i, ok := cs.Index(symbol)
		if !ok {
			return fail("%s", unknownComponent(symbol, cs))
		}
		if seen[i] {
			return fail("%s is given twice", symbol)
		}
		seen[i] = true
		if amounts[i], err = parseAmount(number); err != nil {
			return fail("the amount of %s, %s", symbol, err)
		}
	}
	sum = amounts[0] + amounts[1] + amounts[2]
	x, err = cs.Composition(amounts, b)
	if err != nil {
		return fail("the components sum to %g, so there is nothing to normalise", sum)
	}
	return x, sum, nil
}

// largestAmount keeps sums of amounts, and their products with molar masses, finite.
const largestAmount = 1e100

// parseAmount reads a number from 0 to largestAmount. The error continues
// the sentence "the amount of Di, …".
func parseAmount(text string) (float64, error) {
	text = strings.TrimSpace(text)
	v, err := strconv.ParseFloat(text, 64)
	switch {
	case text == "":
		return 0, errors.New("is missing")
	case err != nil && math.IsInf(v, 0), err == nil && (math.IsInf(v, 0) || math.IsNaN(v)):
		return 0, fmt.Errorf("%s, is not a finite number", text)
	case err != nil:
		return 0, fmt.Errorf("%q, is not a number", text)
	case v < 0:
		return 0, fmt.Errorf("%s, is negative", text)
	case v > largestAmount:
		return 0, fmt.Errorf("%s, is too large to be added to others", text)
	}
	return v + 0, nil // -0 is 0
}

// normalised reports that amounts add up to one or to a hundred, so that
// normalising them changes nothing.
func normalised(sum float64) bool {
	return math.Abs(sum-1) < 1e-6 || math.Abs(sum-100) < 1e-4
}

func exampleBulk(cs ternary.Components) string {
	return fmt.Sprintf("%s=50,%s=20,%s=30", cs[0].Symbol, cs[1].Symbol, cs[2].Symbol)
}

// unknownComponent names a symbol that is none, and the one that may be meant.
func unknownComponent(symbol string, cs ternary.Components) string {
	for _, c := range cs {
		if strings.EqualFold(c.Symbol, symbol) || strings.EqualFold(c.Name, symbol) {
			return fmt.Sprintf("%s is not a component, but %s is", symbol, c.Symbol)
		}
	}
	return fmt.Sprintf("%s is not a component; the components are %s, %s and %s", symbol, cs[0].Symbol, cs[1].Symbol, cs[2].Symbol)
}
