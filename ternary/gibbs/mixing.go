package gibbs

// Extension says how binary excess terms are carried into a mixture of three.
type Extension int

const (
	// Muggianu et al. 1975 (J. Chim. Phys. 72, 83–88): the Redlich–Kister
	// argument is y_i − y_j of the ternary mixture itself.
	Muggianu Extension = iota
	// Kohler 1960 (Monatsh. Chem. 91, 738–740): the binary at the same ratio
	// y_i : y_j, with weight (y_i + y_j)².
	Kohler
	// Toop 1965 (Trans. AIME 233, 850–855): asymmetric; binaries with the odd
	// member are taken at its own fraction, the other pair by Kohler.
	Toop
)

// Pair is the excess Gibbs energy y_i·y_j·Σ_k L_k·(y_i − y_j)^k of two
// end-members (Redlich & Kister 1948), J per mole of formula unit.
type Pair struct {
	I, J int
	L    []TFunc // L[k] multiplies (y_i − y_j)^k
}

// Mixing is the model of mixing of a phase's end-members:
//
//	Sites·RT Σ y ln y + Σ pairs + y0·y1·y2·Σ Ternary_k·y_k
type Mixing struct {
	Sites     float64 // sites of mixing per formula unit; 0 means 1
	Pairs     []Pair
	Ternary   [3]TFunc
	Extension Extension
	Odd       int // the odd end-member of Toop's extension
}

// excess is the excess Gibbs energy at y with its derivatives with respect to
// y0, y1 and y2 taken as independent.
type excess struct {
	g float64
	d [3]float64
	h [3][3]float64
}

// ideal reports that there are no excess terms.
func (m *Mixing) ideal() bool {
	return len(m.Pairs) == 0 && m.Ternary == [3]TFunc{}
}

// excess evaluates the excess terms with their temperature functions weighted
// by w. It does not allocate.
func (m *Mixing) excess(y *[3]float64, w weights, out *excess) {
	*out = excess{}
	for k := range m.Pairs {
		m.pair(&m.Pairs[k], y, w, out)
	}
	if m.Ternary != [3]TFunc{} {
		m.triple(y, w, out)
	}
}

// pair adds f = y_i·y_j·P(u) and its derivatives, where P is the polynomial of
// the pair and u its argument under the extension in force.
func (m *Mixing) pair(p *Pair, y *[3]float64, w weights, out *excess) {
	i, j := p.I, p.J
	a, b := y[i], y[j]
	if len(p.L) == 1 { // P is constant
		l := w.of(p.L[0])
		out.g += a * b * l
		out.d[i] += b * l
		out.d[j] += a * l
		out.h[i][j] += l
		out.h[j][i] += l
		return
	}
	var u, ui, uj, uii, ujj, uij float64
	switch {
	case m.Extension == Muggianu:
		u, ui, uj = a-b, 1, -1
	case m.Extension == Toop && m.Odd == i:
		u, ui = 2*a-1, 2
	case m.Extension == Toop && m.Odd == j:
		u, uj = 1-2*b, -2
	default: // Kohler, and Toop's pair without the odd one
		s := a + b
		if s <= 0 {
			return // f and its gradient vanish with both fractions
		}
		u = (a - b) / s
		ui, uj = 2*b/(s*s), -2*a/(s*s)
		uii, ujj = -2*ui/s, -2*uj/s
		uij = 2 * u / (s * s)
	}
	var q, q1, q2 float64 // P, P', P'' by Horner's scheme
	for k := len(p.L) - 1; k >= 0; k-- {
		q2 = q2*u + 2*q1
		q1 = q1*u + q
		q = q*u + w.of(p.L[k])
	}
	ab := a * b
	out.g += ab * q
	out.d[i] += b*q + ab*q1*ui
	out.d[j] += a*q + ab*q1*uj
	out.h[i][i] += 2*b*q1*ui + ab*(q2*ui*ui+q1*uii)
	out.h[j][j] += 2*a*q1*uj + ab*(q2*uj*uj+q1*ujj)
	c := q + b*q1*uj + a*q1*ui + ab*(q2*ui*uj+q1*uij)
	out.h[i][j] += c
	out.h[j][i] += c
}

// triple adds y0·y1·y2·(t0·y0 + t1·y1 + t2·y2).
func (m *Mixing) triple(y *[3]float64, w weights, out *excess) {
	t := [3]float64{w.of(m.Ternary[0]), w.of(m.Ternary[1]), w.of(m.Ternary[2])}
	s := t[0]*y[0] + t[1]*y[1] + t[2]*y[2]
	prod := y[0] * y[1] * y[2]
	out.g += prod * s
	for i := 0; i < 3; i++ {
		j, k := (i+1)%3, (i+2)%3
		rest := y[j] * y[k]
		out.d[i] += rest*s + prod*t[i]
		out.h[i][i] += 2 * rest * t[i]
		// mixed derivative with respect to y_i and y_j
		c := y[k]*s + rest*t[j] + y[i]*y[k]*t[i]
		out.h[i][j] += c
		out.h[j][i] += c
	}
}
