// Package pressure follows the liquidus projection of a system from pressure to
// pressure.
//
// In: what builds the system at a pressure, and a list of pressures. Out: a [Series]:
// the invariant points at each, and the [Change]s between them, located: where a solid
// gains or loses its primary field, where a point appears or vanishes, and where it
// becomes one of another kind, such as a eutectic that turns into a reaction point.
//
//	series.go  projections at all pressures
//	track.go   points matched from one pressure to the next
//	change.go  the pressures at which something changes, by bisection
//
// What comes and goes again between two neighbouring pressures is not seen, so the list
// must be as fine as what is looked for. Every projection is that of package liquidus,
// with its checks.
package pressure
