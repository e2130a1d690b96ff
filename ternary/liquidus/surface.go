package liquidus

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Surface answers questions about single liquids of one system. It is safe for
// use by one goroutine at a time.
type Surface struct {
	e     *engine
	hints []saturated
}

// NewSurface prepares a system for questions about single liquids.
func NewSurface(sys *gibbs.System) (*Surface, error) {
	e, err := newEngine(sys)
	if err != nil {
		return nil, err
	}
	return &Surface{e: e, hints: make([]saturated, len(sys.Solids))}, nil
}

// Liquidus returns T_L(x) in kelvin and the primary solid. T is −Inf when no
// solid ever saturates, +Inf when the liquid is oversaturated at every
// temperature up to Limit: the composition then cannot be all liquid. Whether the
// liquid has separated into two by then is not asked.
func (s *Surface) Liquidus(x ternary.Composition) (T float64, primary gibbs.State) {
	at := s.e.saturations(x, s.hints)
	if at.primary < 0 {
		return math.Inf(-1), gibbs.State{Phase: gibbs.Liquid}
	}
	y := at.all[at.primary].Y
	p := s.e.sys.Solids[at.primary]
	return at.T, gibbs.State{Phase: at.primary, Y: y, C: p.Contents(y)}
}

// Saturation returns T_φ(x), the highest temperature at which the liquid is
// saturated with a solid, in kelvin; ±Inf as in Liquidus.
func (s *Surface) Saturation(solid int, x ternary.Composition) float64 {
	c := s.e.column(x)
	return s.e.saturation(solid, &c, s.hints[solid]).T
}

// Limits returns the lowest and highest temperature of the search, K.
func (s *Surface) Limits() (low, high float64) { return s.e.tLow, s.e.tCap }
