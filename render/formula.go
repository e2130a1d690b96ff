package render

import "strings"

// piece is a stretch of a label, set on the baseline or as a subscript.
type piece struct {
	text string
	sub  bool
}

// elementSymbols lists the chemical elements, hydrogen to oganesson.
var elementSymbols = func() map[string]bool {
	const list = "H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn " +
		"Ga Ge As Se Br Kr Rb Sr Y Zr Nb Mo Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm " +
		"Sm Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn Fr Ra Ac Th Pa U " +
		"Np Pu Am Cm Bk Cf Es Fm Md No Lr Rf Db Sg Bh Hs Mt Ds Rg Cn Nh Fl Mc Lv Ts Og"
	m := make(map[string]bool)
	for _, e := range strings.Fields(list) {
		m[e] = true
	}
	return m
}()

// splitFormulas cuts a label into pieces. Words are runs of letters, digits,
// brackets, commas and dots; each is tried as a formula on its own, without
// punctuation around it when it does not parse with it.
func splitFormulas(s string) []piece {
	var out pieces
	for s != "" {
		n := strings.IndexFunc(s, isFormulaRune)
		if n < 0 {
			n = len(s)
		}
		out.add(s[:n], false)
		s = s[n:]
		n = strings.IndexFunc(s, func(r rune) bool { return !isFormulaRune(r) })
		if n < 0 {
			n = len(s)
		}
		out.addWord(s[:n])
		s = s[n:]
	}
	return out
}

func isFormulaRune(r rune) bool {
	return 'a' <= r && r <= 'z' || 'A' <= r && r <= 'Z' || isDigit(r) || strings.ContainsRune("()[].,·", r)
}

// pieces joins neighbours of the same kind as they are added.
type pieces []piece

func (p *pieces) add(text string, sub bool) {
	if text == "" {
		return
	}
	if n := len(*p); n > 0 && (*p)[n-1].sub == sub {
		(*p)[n-1].text += text
		return
	}
	*p = append(*p, piece{text, sub})
}

// addWord adds a word as a formula when it is one, first as it stands, then
// without the punctuation around it, then as a comma-separated list.
func (p *pieces) addWord(w string) {
	if f, ok := parseFormula(w); ok {
		for _, q := range f {
			p.add(q.text, q.sub)
		}
		return
	}
	for _, around := range []string{".,", "()[].,"} {
		if core := strings.Trim(w, around); core != "" && core != w {
			i := strings.Index(w, core)
			p.add(w[:i], false)
			p.addWord(core)
			p.add(w[i+len(core):], false)
			return
		}
	}
	if a, b, ok := strings.Cut(w, ","); ok {
		p.addWord(a)
		p.add(",", false)
		p.addWord(b)
		return
	}
	p.add(w, false)
}

// formulaParser reads
//
//	formula = part { ("." | "·") part }
//	part    = [ number ] unit { unit }
//	unit    = ( element | "(" unit { [","] unit } ")" ) [ count ]
type formulaParser struct {
	rest string
	out  pieces
	subs int
}

// parseFormula returns the pieces of w and whether w is a formula with at
// least one count. A lone element with count 1, such as P1 or C1, is a name
// and not a formula.
func parseFormula(w string) ([]piece, bool) {
	p := formulaParser{rest: w}
	if !p.part() {
		return nil, false
	}
	for p.dot() {
		if !p.part() {
			return nil, false
		}
	}
	if p.rest != "" || p.subs == 0 {
		return nil, false
	}
	if n := len(p.out); n == 2 && p.out[1].text == "1" && elementSymbols[p.out[0].text] {
		return nil, false
	}
	return p.out, true
}

func (p *formulaParser) part() bool {
	p.out.add(p.take(p.digits(0)), false)
	units := 0
	for p.unit() {
		units++
	}
	return units > 0
}

// dot reads the joint of two parts and sets it as a raised dot.
func (p *formulaParser) dot() bool {
	for _, d := range []string{".", "·"} {
		if rest, ok := strings.CutPrefix(p.rest, d); ok {
			p.rest = rest
			p.out.add("·", false)
			return true
		}
	}
	return false
}

func (p *formulaParser) unit() bool {
	if !p.element() && !p.group('(', ')') && !p.group('[', ']') {
		return false
	}
	if n := p.count(); n > 0 {
		p.out.add(p.take(n), true)
		p.subs++
	}
	return true
}

func (p *formulaParser) element() bool {
	for n := min(2, len(p.rest)); n > 0; n-- {
		if elementSymbols[p.rest[:n]] {
			p.out.add(p.take(n), false)
			return true
		}
	}
	return false
}

// group reads a bracketed group; on failure the whole word is no formula, so
// nothing needs undoing.
func (p *formulaParser) group(open, shut byte) bool {
	if p.rest == "" || p.rest[0] != open {
		return false
	}
	p.out.add(p.take(1), false)
	for first := true; p.rest != "" && p.rest[0] != shut; first = false {
		if !first && p.rest[0] == ',' {
			p.out.add(p.take(1), false)
		}
		if !p.unit() {
			return false
		}
	}
	if p.rest == "" {
		return false
	}
	p.out.add(p.take(1), false)
	return true
}

// count returns the length of the count at the front. A decimal is read only
// when it begins with 0 or 1 (Fe0.95O, Sr1.5): after larger numbers the dot
// joins two parts, as in Al2O3.2SiO2, where a count of 1 is never written.
func (p *formulaParser) count() int {
	n := p.digits(0)
	if n == 1 && (p.rest[0] == '0' || p.rest[0] == '1') && len(p.rest) > 2 && p.rest[1] == '.' {
		if m := p.digits(2); m > 2 {
			return m
		}
	}
	return n
}

// digits returns the end of the digits that start at i.
func (p *formulaParser) digits(i int) int {
	for i < len(p.rest) && isDigit(rune(p.rest[i])) {
		i++
	}
	return i
}

func (p *formulaParser) take(n int) string {
	t := p.rest[:n]
	p.rest = p.rest[n:]
	return t
}
