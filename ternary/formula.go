package ternary

import (
	"fmt"
	"math"
	"regexp"
	"sort"
	"strconv"
	"strings"
	"unicode/utf8"
)

// ElementCount is one element of a formula unit with its number of atoms.
type ElementCount struct {
	Symbol string
	Count  float64
}

// Formula is a chemical formula: what one mole of a component, end-member or
// solid is. Properties that hold for every Formula from [ParseFormula]:
//
//  1. it has at least one element, and every count is positive and finite;
//  2. ParseFormula(f.String()) equals f.
//
// The zero Formula has no elements, mass 0 and prints as "".
type Formula struct {
	text     string
	elements []ElementCount // sorted by symbol
	mass     float64
}

// FormulaError says what is wrong with a formula and where.
type FormulaError struct {
	Text   string // the formula as written
	Column int    // 1 is the first character
	Reason string
}

// Error names the formula, the column and the reason.
func (e *FormulaError) Error() string {
	if e.Text == "" {
		return "formula is empty"
	}
	return fmt.Sprintf("formula %q, column %d: %s", e.Text, e.Column, e.Reason)
}

// Limits of what is read as a formula; beyond them it is a slip of the pen.
const (
	maxFormulaLength = 256
	maxCount         = 1e6 // atoms of one kind in a formula unit
)

// ParseFormula reads a chemical formula. It understands
//
//   - element symbols with whole or decimal counts: CaMgSi2O6, Fe0.95O;
//   - groups in parentheses, nested at will: Ca5(PO4)3F, (Mg0.9Fe0.1)2SiO4;
//   - parts joined by '·' or '.', each with an optional leading multiplier:
//     3Al2O3.2SiO2, CaSO4·0.5H2O.
//
// A '.' between two digits is a decimal point, as in Mg1.8Fe0.2SiO4, unless it
// reads better as a joint: outside parentheses, after a whole count of two or
// more on O, S, a halogen or a group, with a part of two or more elements and
// whole counts behind it, as in CuSO4.5H2O. Write '·' where that is not what is meant.
//
// The error is a [*FormulaError].
func ParseFormula(s string) (Formula, error) {
	if strings.TrimSpace(s) == "" {
		return Formula{}, &FormulaError{Text: s, Column: 1, Reason: "it is empty"}
	}
	if len(s) > maxFormulaLength {
		return Formula{}, &FormulaError{"…", 1, fmt.Sprintf("it is longer than %d bytes", maxFormulaLength)}
	}
	if !utf8.ValidString(s) {
		return Formula{}, &FormulaError{s, 1, "it is not valid UTF-8"}
	}
	counts := map[string]float64{}
	for _, part := range splitParts(s) {
		if err := parsePart(s, part, counts); err != nil {
			return Formula{}, err
		}
	}
	return newFormula(s, counts)
}

// newFormula sorts the counts and sums the mass.
func newFormula(text string, counts map[string]float64) (Formula, error) {
	f := Formula{text: text}
	for symbol, n := range counts {
		f.elements = append(f.elements, ElementCount{symbol, n})
	}
	sort.Slice(f.elements, func(i, j int) bool { return f.elements[i].Symbol < f.elements[j].Symbol })
	for _, e := range f.elements {
		if e.Count > maxCount {
			return Formula{}, &FormulaError{text, 1, fmt.Sprintf("%g atoms of %s are more than a formula unit holds", e.Count, e.Symbol)}
		}
		f.mass += e.Count * atomicWeights[e.Symbol]
	}
	return f, nil
}

// span is the half-open range of bytes [from, to) of a formula's text.
type span struct{ from, to int }

var (
	countBeforeJoint = regexp.MustCompile(`(?:O|S|F|Cl|Br|I|\))(?:[2-9]|[1-9][0-9]+)$`)
	partAfterJoint   = regexp.MustCompile(`^[0-9]+[A-Z(][^.]*$`)
	elementSymbol    = regexp.MustCompile(`[A-Z][a-z]?`)
)

// splitParts cuts a formula at its joints. It goes from right to left, so that
// a '.' between digits is judged by the whole part behind it.
func splitParts(s string) []span {
	depth := make([]int, len(s)+1)
	for i := 0; i < len(s); i++ {
		depth[i+1] = depth[i]
		switch s[i] {
		case '(':
			depth[i+1]++
		case ')':
			depth[i+1]--
		}
	}
	var parts []span
	end := len(s)
	for i := len(s) - 1; i >= 0; i-- {
		size := 1
		switch {
		case depth[i] != 0:
			continue
		case strings.HasPrefix(s[i:], "·"):
			size = len("·")
		case s[i] == '.' && isJoint(s[:i], s[i+1:end]):
		default:
			continue
		}
		parts = append(parts, span{i + size, end})
		end = i
	}
	parts = append(parts, span{0, end})
	for i, j := 0, len(parts)-1; i < j; i, j = i+1, j-1 {
		parts[i], parts[j] = parts[j], parts[i]
	}
	return parts
}

// isJoint reports whether a '.' between before and after (up to the next joint)
// joins two parts rather than being a decimal point.
func isJoint(before, after string) bool {
	if before == "" || after == "" {
		return true // an empty part, to be reported as such
	}
	if !isDigit(before[len(before)-1]) || !isDigit(after[0]) {
		return true
	}
	if !countBeforeJoint.MatchString(before) || !partAfterJoint.MatchString(after) {
		return false
	}
	distinct := map[string]bool{}
	for _, symbol := range elementSymbol.FindAllString(after, -1) {
		distinct[symbol] = true
	}
	return len(distinct) >= 2
}

func isDigit(b byte) bool { return '0' <= b && b <= '9' }

// formulaReader walks over one part of a formula.
type formulaReader struct {
	text    string
	at, end int // byte offsets
}

// parsePart adds the atoms of one part, with its multiplier, to counts.
func parsePart(text string, part span, counts map[string]float64) error {
	r := &formulaReader{text, part.from, part.to}
	multiplier, err := r.number()
	if err != nil {
		return err
	}
	if r.at == r.end {
		return r.fail(part.from, "a part of the formula is missing here")
	}
	return r.group(multiplier, 0, counts)
}

// group reads units up to the end, or up to the ')' that closes it if depth > 0,
// and adds them to counts.
func (r *formulaReader) group(multiplier float64, depth int, counts map[string]float64) error {
	for r.at < r.end {
		c := r.text[r.at]
		switch {
		case c == ')':
			if depth == 0 {
				return r.fail(r.at, "')' closes a parenthesis that was not opened")
			}
			return nil
		case c == '(':
			if err := r.parenthesis(multiplier, depth, counts); err != nil {
				return err
			}
		case 'A' <= c && c <= 'Z':
			if err := r.element(multiplier, counts); err != nil {
				return err
			}
		default:
			return r.unexpected()
		}
	}
	return nil
}

// parenthesis reads ( … ) and the count behind it.
func (r *formulaReader) parenthesis(multiplier float64, depth int, counts map[string]float64) error {
	open := r.at
	r.at++
	inner := map[string]float64{}
	if err := r.group(1, depth+1, inner); err != nil {
		return err
	}
	if r.at == r.end {
		return r.fail(open, "'(' is never closed")
	}
	if len(inner) == 0 {
		return r.fail(open, "the parentheses hold nothing")
	}
	r.at++
	n, err := r.number()
	if err != nil {
		return err
	}
	for symbol, m := range inner {
		counts[symbol] += multiplier * n * m
	}
	return nil
}

// element reads a symbol and its count.
func (r *formulaReader) element(multiplier float64, counts map[string]float64) error {
	start := r.at
	r.at++
	for r.at < r.end && 'a' <= r.text[r.at] && r.text[r.at] <= 'z' {
		r.at++
	}
	symbol := r.text[start:r.at]
	if _, ok := atomicWeights[symbol]; !ok {
		return r.fail(start, fmt.Sprintf("%q is not an element with a standard atomic weight", symbol))
	}
	n, err := r.number()
	if err != nil {
		return err
	}
	counts[symbol] += multiplier * n
	return nil
}

// number reads a count, 1 if there is none.
func (r *formulaReader) number() (float64, error) {
	start := r.at
	for r.at < r.end && (isDigit(r.text[r.at]) || r.text[r.at] == '.') {
		r.at++
	}
	if r.at == start {
		return 1, nil
	}
	v, err := strconv.ParseFloat(r.text[start:r.at], 64)
	switch {
	case err != nil || math.IsInf(v, 0):
		return 0, r.fail(start, fmt.Sprintf("%q is not a count", r.text[start:r.at]))
	case v <= 0:
		return 0, r.fail(start, "a count must be positive")
	case v > maxCount:
		return 0, r.fail(start, fmt.Sprintf("a count of %g is more than a formula unit holds", v))
	}
	return v, nil
}

// unexpected reports the character at the reader's place.
func (r *formulaReader) unexpected() error {
	c, _ := utf8.DecodeRuneInString(r.text[r.at:])
	reason := fmt.Sprintf("%q has no meaning in a formula", c)
	if 'a' <= c && c <= 'z' {
		reason += ": element symbols begin with a capital"
	}
	return r.fail(r.at, reason)
}

func (r *formulaReader) fail(at int, reason string) error {
	return &FormulaError{r.text, utf8.RuneCountInString(r.text[:at]) + 1, reason}
}

// MolarMass is the mass of one mole in g.
func (f Formula) MolarMass() float64 { return f.mass }

// String is the formula as it was written.
func (f Formula) String() string { return f.text }

// Elements lists the elements with their counts, sorted by symbol.
func (f Formula) Elements() []ElementCount {
	return append([]ElementCount(nil), f.elements...)
}

// Count is the number of atoms of an element in the formula unit.
func (f Formula) Count(symbol string) float64 {
	for _, e := range f.elements {
		if e.Symbol == symbol {
			return e.Count
		}
	}
	return 0
}

// countTol is the relative rounding error allowed between two ways of writing
// the same counts: (Mg0.9Fe0.1)2SiO4 and Mg1.8Fe0.2SiO4.
const countTol = 1e-12

// Equal reports that two formulas have the same atoms, however written.
// Formulas that are multiples of one another (SiO2, Si2O4) are not equal.
func (f Formula) Equal(g Formula) bool {
	if len(f.elements) != len(g.elements) {
		return false
	}
	for i, e := range f.elements {
		h := g.elements[i]
		if e.Symbol != h.Symbol || math.Abs(e.Count-h.Count) > countTol*(e.Count+h.Count) {
			return false
		}
	}
	return true
}
