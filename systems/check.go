package systems

import (
	"fmt"
	"regexp"
	"strings"

	"thalweg/ternary"
)

// checker turns the wire types into a File and reports what is wrong on the way.
type checker struct {
	*report
	w    *wireFile
	f    *File
	refs map[string][]Reactant // what a symbol may refer to
}

const (
	maxPressureGPa = 50.0 // beyond the validity of any constant ΔV
	maxSolids      = 64
)

// check does all checks of meaning. The File is complete if it reports nothing.
func (c *checker) check() {
	c.header()
	whole := c.components()
	c.mixing("liquid", c.w.Liquid, componentSymbols(c.w), &c.f.Liquid)
	c.solids(whole)
	if whole {
		c.states()
	}
}

// header checks the keys outside all tables.
func (c *checker) header() {
	w, f := c.w, c.f
	f.Title, f.About, f.Basis, f.Calibration = w.Title, w.About, w.Basis, w.Calibration
	f.TemperatureScale, f.Cautions, f.Limits = w.TemperatureScale, w.Cautions, w.Limits
	if blank(w.Title) {
		c.add("title", "the file has no title", `add title = "…"`)
	}
	switch p := w.Pressure; {
	case p == nil:
		c.add("pressure_GPa", "the reference pressure is missing", "add pressure_GPa = 0.0001 for 1 bar")
	case !finite(*p) || *p < 0 || *p > maxPressureGPa:
		c.add("pressure_GPa", fmt.Sprintf("%g GPa is not a plausible reference pressure", *p), "give GPa: 1 bar is 0.0001")
	default:
		f.PressureGPa = *p
	}
	t := w.Temperature
	switch {
	case len(t) != 2:
		c.add("temperature_C", "the range of temperature must be two numbers", "add temperature_C = [lowest, highest]")
	case !finite(t[0]) || !finite(t[1]) || t[0] < absoluteZeroC || t[1] > maxT:
		c.add("temperature_C", fmt.Sprintf("%g to %g is not a range of temperature", t[0], t[1]), "give finite degrees Celsius above -273.15")
	case t[0] >= t[1]:
		c.add("temperature_C", fmt.Sprintf("%g is not below %g", t[0], t[1]), "put the lower temperature first")
	default:
		f.TemperatureC = [2]float64{t[0], t[1]}
	}
}

var symbolPattern = regexp.MustCompile(`^[\p{L}][\p{L}0-9_+'-]*$`)

const maxSymbol = 16

// symbol checks one symbol and that it is new among those seen.
func (c *checker) symbol(path, symbol, what string, seen map[string]bool) {
	at := join(path, "symbol")
	switch {
	case symbol == "":
		c.add(at, what+" has no symbol", `add symbol = "…"`)
		return
	case !symbolPattern.MatchString(symbol) || len([]rune(symbol)) > maxSymbol:
		c.add(at, fmt.Sprintf("%q cannot be a symbol", symbol),
			fmt.Sprintf("use a letter, then letters, digits, _ + - or ', %d at most", maxSymbol))
	case seen[symbol]:
		c.add(at, fmt.Sprintf("the symbol %s is used twice", symbol), "give each its own symbol")
	}
	seen[symbol] = true
}

// formula parses one formula and reports what is wrong with it.
func (c *checker) formula(path, text string) (ternary.Formula, bool) {
	at := join(path, "formula")
	if blank(text) {
		c.add(at, "the formula is missing", `add formula = "…"`)
		return ternary.Formula{}, false
	}
	f, err := ternary.ParseFormula(text)
	if err != nil {
		c.add(at, err.Error(), "write it with element symbols and counts, such as CaMgSi2O6")
		return f, false
	}
	return f, true
}

// components checks the three components and reports whether they are usable.
func (c *checker) components() bool {
	n := len(c.w.Component)
	if n != 3 {
		at := "component"
		if n > 3 {
			at = "component[3]"
		}
		c.add(at, fmt.Sprintf("there are %d components", n), "give exactly three [[component]] tables")
		c.w.Component = c.w.Component[:min(n, 3)]
	}
	seen := map[string]bool{}
	whole := n == 3
	for i, w := range c.w.Component {
		path := fmt.Sprintf("component[%d]", i)
		c.symbol(path, w.Symbol, "this component", seen)
		f, ok := c.formula(path, w.Formula)
		whole = whole && ok && w.Symbol != ""
		c.f.Components[i] = ternary.Component{Symbol: w.Symbol, Name: orElse(w.Name, w.Symbol), Formula: f}
	}
	return whole
}

func componentSymbols(w *wireFile) []string {
	var out []string
	for _, c := range w.Component {
		out = append(out, c.Symbol)
	}
	return out
}

func orElse(s, other string) string {
	if blank(s) {
		return other
	}
	return s
}

// known renders the symbols a user may choose from.
func known(symbols []string) string {
	if len(symbols) == 0 {
		return "there is none to choose from"
	}
	return "choose from " + strings.Join(symbols, ", ")
}
