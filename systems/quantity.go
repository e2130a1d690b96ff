package systems

import (
	"fmt"
	"math"
	"strings"
)

// wanted is one quantity of a table as written, with what is allowed of it.
type wanted struct {
	key         string // key of the number: T_C
	errorKey    string // key of its uncertainty
	stem        string // prefix of its own source keys: T, or "" if it has none
	unit        string
	value, err  *float64
	source      string
	recalled    *bool
	fittedTo    string
	lo, hi      float64 // open bounds of plausible values
	unitRemedy  string  // what to do when out of bounds
	required    bool
	strictlyPos bool
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }

// quantity checks one number of the table at path and finds its provenance: its
// own, or else the table's.
func (r *report) quantity(path string, w wanted, table wireSource) Quantity {
	at := join(path, w.key)
	if w.value == nil {
		r.orphans(path, w)
		if w.required {
			r.add(at, "this number is missing", "add "+w.key)
		}
		return Quantity{Unit: w.unit}
	}
	v := *w.value
	switch {
	case !finite(v):
		r.add(at, "it is not a finite number", "give the number, or leave the key out")
	case w.strictlyPos && v <= 0:
		r.add(at, fmt.Sprintf("%g is not positive", v), w.unitRemedy)
	case v <= w.lo || v >= w.hi:
		r.add(at, fmt.Sprintf("%g is outside what is plausible, %g to %g %s", v, w.lo, w.hi, w.unit), w.unitRemedy)
	}
	q := Quantity{Given: true, Value: v, Unit: w.unit, Uncertainty: r.uncertainty(path, w), Provenance: provenance(w, table)}
	r.checkProvenance(at, path, w, q, table)
	return q
}

// orphans reports keys about a number that is not there.
func (r *report) orphans(path string, w wanted) {
	if w.err != nil {
		r.add(join(path, w.errorKey), "there is an uncertainty but no "+w.key, "add "+w.key+" or remove this key")
	}
	for _, ending := range []string{"_source", "_recalled", "_fitted_to"} {
		if key := join(path, w.stem+ending); w.stem != "" && r.index.has(key) {
			r.add(key, "there is no "+w.key+" that this could be about", "add "+w.key+" or remove this key")
		}
	}
}

func (r *report) uncertainty(path string, w wanted) float64 {
	if w.err == nil {
		return 0
	}
	if !finite(*w.err) || *w.err < 0 {
		r.add(join(path, w.errorKey), "an uncertainty must be finite and not negative", "give one standard error, or leave the key out")
		return 0
	}
	return *w.err
}

// provenance prefers what is said of the number itself.
func provenance(w wanted, table wireSource) Provenance {
	p := Provenance(table)
	if w.source != "" || w.fittedTo != "" {
		p.Source, p.FittedTo, p.Recalled = w.source, w.fittedTo, false
	}
	if w.recalled != nil {
		p.Recalled = *w.recalled
	}
	return p
}

// checkProvenance insists that the number has one, and one only.
func (r *report) checkProvenance(at, path string, w wanted, q Quantity, table wireSource) {
	remedy := "add source = \"citation\" (and recalled = true if it was not read there) or fitted_to = \"measurements\""
	switch {
	case blank(q.Source) && blank(q.FittedTo):
		r.add(at, "this number has no source", remedy)
	case !blank(q.Source) && !blank(q.FittedTo):
		r.add(at, "this number has both a source and fitted_to", "keep the one that is true")
	case !blank(q.FittedTo) && w.err == nil && q.Value != 0:
		r.add(at, "a fitted number must carry its standard error", "add "+w.errorKey)
	case !blank(q.FittedTo) && q.Recalled:
		r.add(at, "a fitted number cannot be recalled from a source", "remove recalled")
	}
}

func blank(s string) bool { return strings.TrimSpace(s) == "" }

// Bounds beyond which a number is taken for a slip of unit.
const (
	absoluteZeroC = -273.15
	maxT          = 5000.0 // °C; no known solid melts above 4300
	maxH          = 1e5    // kJ/mol; the entropy is checked more closely
	maxV          = 1000.0 // cm³/mol
	maxPerAtom    = 200.0  // J/(mol K) per atom: the highest entropy or heat capacity change
	minFusionS    = 0.05   // J/(mol K) per atom: the lowest entropy of fusion
	maxTermKJ     = 2000.0 // kJ/mol
	maxTermJ      = 2000.0 // J/(mol K)
)

func (q wireT) want() wanted {
	return wanted{key: "T_C", errorKey: "T_uncertainty_C", stem: "T", unit: "°C", value: q.T, err: q.TError,
		source: q.TSource, recalled: q.TRecalled, fittedTo: q.TFittedTo, lo: absoluteZeroC, hi: maxT,
		unitRemedy: "give degrees Celsius", required: true}
}

func (q wireH) want() wanted {
	return wanted{key: "dH_kJ", errorKey: "dH_uncertainty_kJ", stem: "dH", unit: "kJ/mol", value: q.H, err: q.HError,
		source: q.HSource, recalled: q.HRecalled, fittedTo: q.HFittedTo, lo: -maxH, hi: maxH,
		unitRemedy: "give kJ per mole of formula unit", required: true}
}

func (q wireS) want() wanted {
	return wanted{key: "dS_J", errorKey: "dS_uncertainty_J", stem: "dS", unit: "J/(mol K)", value: q.S, err: q.SError,
		source: q.SSource, recalled: q.SRecalled, fittedTo: q.SFittedTo, lo: -1e5, hi: 1e5,
		unitRemedy: "give J/(mol K) per mole of formula unit", required: true}
}

func (q wireCp) want() wanted {
	return wanted{key: "dCp_J", errorKey: "dCp_uncertainty_J", stem: "dCp", unit: "J/(mol K)", value: q.Cp, err: q.CpError,
		source: q.CpSource, recalled: q.CpRecalled, fittedTo: q.CpFittedTo, lo: -1e5, hi: 1e5,
		unitRemedy: "give J/(mol K) per mole of formula unit"}
}

func (q wireV) want() wanted {
	return wanted{key: "dV_cm3", errorKey: "dV_uncertainty_cm3", stem: "dV", unit: "cm³/mol", value: q.V, err: q.VError,
		source: q.VSource, recalled: q.VRecalled, fittedTo: q.VFittedTo, lo: -maxV, hi: maxV,
		unitRemedy: "give cm³ per mole of formula unit"}
}

func (q wireVP) want() wanted {
	return wanted{key: "dV_change_cm3_per_GPa", errorKey: "dV_change_uncertainty_cm3_per_GPa", stem: "dV_change", unit: "cm³/(mol GPa)", value: q.VP, err: q.VPError,
		source: q.VPSource, recalled: q.VPRecalled, fittedTo: q.VPFittedTo, lo: -maxV, hi: maxV,
		unitRemedy: "give cm³ per mole of formula unit and GPa"}
}

func (q wireSlope) want() wanted {
	return wanted{key: "slope_C_per_GPa", errorKey: "slope_uncertainty_C_per_GPa", stem: "slope", unit: "°C/GPa", value: q.Slope, err: q.SlopeError,
		source: q.SlopeSource, recalled: q.SlopeRecalled, fittedTo: q.SlopeFittedTo, lo: -2000, hi: 2000,
		unitRemedy: "give degrees per GPa: 10 °C/kbar are 100 °C/GPa"}
}

// wantA and wantC are the two numbers of a curve, with one source.
func (q wireCurve) wantA() wanted {
	return wanted{key: "simon_a_GPa", errorKey: "simon_a_uncertainty_GPa", stem: "simon", unit: "GPa", value: q.CurveA, err: q.CurveAError,
		source: q.CurveSource, recalled: q.CurveRecalled, fittedTo: q.CurveFittedTo, lo: 0, hi: 1000, strictlyPos: true, unitRemedy: "give GPa, above 0"}
}

func (q wireCurve) wantC() wanted {
	return wanted{key: "simon_c", errorKey: "simon_c_uncertainty", stem: "simon", unit: "", value: q.CurveC, err: q.CurveCError,
		source: q.CurveSource, recalled: q.CurveRecalled, fittedTo: q.CurveFittedTo, lo: 0, hi: 100, strictlyPos: true, unitRemedy: "give the exponent's reciprocal, above 0"}
}

// coefficients checks the a, b and c of a mixing term.
func (r *report) coefficients(path string, c wireCoefficients, src wireSource) (a, b, t Quantity) {
	if c.A == nil && c.B == nil && c.C == nil {
		r.add(path, "this term has no coefficient", "add a_kJ, b_J_per_K or c_J_per_K, or remove the term")
	}
	a = r.quantity(path, wanted{key: "a_kJ", errorKey: "a_standard_error_kJ", unit: "kJ/mol", value: c.A, err: c.AError,
		lo: -maxTermKJ, hi: maxTermKJ, unitRemedy: "give kJ per mole"}, src)
	b = r.quantity(path, wanted{key: "b_J_per_K", errorKey: "b_standard_error_J_per_K", unit: "J/(mol K)", value: c.B, err: c.BError,
		lo: -maxTermJ, hi: maxTermJ, unitRemedy: "give J/(mol K)"}, src)
	t = r.quantity(path, wanted{key: "c_J_per_K", errorKey: "c_standard_error_J_per_K", unit: "J/(mol K)", value: c.C, err: c.CError,
		lo: -maxTermJ, hi: maxTermJ, unitRemedy: "give J/(mol K)"}, src)
	return a, b, t
}
