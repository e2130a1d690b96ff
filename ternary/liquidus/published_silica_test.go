package liquidus_test

import (
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

const (
	bowenAndersen   = "Bowen & Andersen 1914, Am. J. Sci. 37, 487–500 (from memory; used in the fit)"
	greig           = "Greig 1927, Am. J. Sci. 13, 1–44 (from memory; used in the fit)"
	osbornMuan      = "Osborn & Muan 1960 (from memory; used in the fit)"
	schairer1950    = "Schairer 1950, J. Geol. 58, 512–517 (used in the fit)"
	schairerBowen56 = "Schairer & Bowen 1956, Am. J. Sci. 254, 129–195 (from memory; used in the fit)"
	schairerBowen55 = "Schairer & Bowen 1955, Am. J. Sci. 253, 681–746 (from memory; used in the fit)"
	// the lowest pressure for which there is a minimum, and the nearest to a dry one
	tuttleBowen = "Tuttle & Bowen 1958, GSA Mem. 74 (from memory): saturated with water at 0.5 kbar, water left out of the composition"
	andersen    = "Andersen 1915, Am. J. Sci. 39, 407–454 (from memory; temperature used in the fit)"
)

// silicaTable is the part of the published numbers that concerns liquids with
// silica. On forsterite–silica MgO and SiO2 by weight of the sources are those of
// Mg2SiO4 and SiO2: 1 wt% MgO is 1.7454 wt% forsterite.
var silicaTable = []published{
	{"fo-an-silica", "peritectic Fo + En, T", 1557, 10, "°C", bowenAndersen, nodeT(ternary.Mass, 1, "peritectic")},
	{"fo-an-silica", "peritectic Fo + En, Fo", 39 * mgoToFo, 2, "wt%", bowenAndersen, nodeX(ternary.Mass, 1, "peritectic", 0)},
	{"fo-an-silica", "eutectic En + Crs, T", 1543, 10, "°C", bowenAndersen, nodeT(ternary.Mass, 1, "eutectic")},
	{"fo-an-silica", "eutectic En + Crs, Fo", 35 * mgoToFo, 2, "wt%", bowenAndersen, nodeX(ternary.Mass, 1, "eutectic", 0)},
	{"fo-an-silica", "monotectic, T", 1695, 10, "°C", greig, monotecticT(1, 0)},
	{"fo-an-silica", "monotectic, first liquid, Fo", 31 * mgoToFo, 2, "wt%", greig, monotecticX(1, 0, 0)},
	{"fo-an-silica", "monotectic, second liquid, Fo", 0.8 * mgoToFo, 2, "wt%", greig, monotecticX(1, 0, 1)},
	{"fo-an-silica", "eutectic An + Trd, T", 1368, 10, "°C", osbornMuan, nodeT(ternary.Mass, 0, "eutectic")},
	{"fo-an-silica", "eutectic An + Trd, An", 52.5, 2, "wt%", osbornMuan, nodeX(ternary.Mass, 0, "eutectic", 1)},
	{"fo-an-silica", "Fo + En + An, T", 1260, 10, "°C", andersen, nodeT(ternary.Mass, -1, "reaction point")},
	{"fo-an-silica", "En + An + Trd, T", 1222, 10, "°C", andersen, nodeT(ternary.Mass, -1, "eutectic")},
	{"ab-or-silica", "minimum of the feldspars, T", 1063, 5, "°C", schairer1950, lowestOn(2).T},
	{"ab-or-silica", "minimum of the feldspars, Or", 35, 2, "wt%", schairer1950, lowestOn(2).X(1)},
	{"ab-or-silica", "eutectic Ab + Trd, T", 1062, 5, "°C", schairerBowen56, nodeT(ternary.Mass, 1, "eutectic")},
	{"ab-or-silica", "eutectic Ab + Trd, silica", 31.5, 2, "wt%", schairerBowen56, nodeX(ternary.Mass, 1, "eutectic", 2)},
	{"ab-or-silica", "eutectic sanidine + Trd, T", 990, 20, "°C", schairerBowen55, nodeT(ternary.Mass, 0, "eutectic")},
	{"ab-or-silica", "eutectic sanidine + Trd, silica", 42, 2, "wt%", schairerBowen55, nodeX(ternary.Mass, 0, "eutectic", 2)},
	{"ab-or-silica", "minimum with silica, silica", 39, 6, "wt%", tuttleBowen, nodeX(ternary.Mass, -1, "minimum", 2)},
	{"ab-or-silica", "minimum with silica, Ab", 30, 6, "wt%", tuttleBowen, nodeX(ternary.Mass, -1, "minimum", 0)},
}

// mgoToFo is the mass of forsterite for one of MgO.
const mgoToFo = 140.693 / (2 * 40.304)

// coexisting returns the two liquids of the only monotectic on an edge, the one
// richer in component c first.
func coexisting(t *testing.T, p *liquidus.Projection, edge, c int) [2]liquidus.Node {
	t.Helper()
	var found []liquidus.Node
	for _, n := range p.Nodes {
		if n.Edge == edge && n.Kind == liquidus.Monotectic {
			found = append(found, n)
		}
	}
	if len(found) != 2 {
		t.Fatalf("%d liquids of monotectics on edge %d, want 2", len(found), edge)
	}
	if found[0].Liquid[c] < found[1].Liquid[c] {
		found[0], found[1] = found[1], found[0]
	}
	return [2]liquidus.Node{found[0], found[1]}
}

func monotecticT(edge, c int) func(*testing.T, *liquidus.Projection) float64 {
	return func(t *testing.T, p *liquidus.Projection) float64 {
		return coexisting(t, p, edge, c)[0].T - ternary.ZeroCelsius
	}
}

func monotecticX(edge, c, which int) func(*testing.T, *liquidus.Projection) float64 {
	return func(t *testing.T, p *liquidus.Projection) float64 {
		return 100 * p.System.Components.Fractions(coexisting(t, p, edge, c)[which].Liquid, ternary.Mass)[c]
	}
}

// lowestOn is the only minimum of a solid solution on an edge.
type lowestOn int

func (k lowestOn) find(t *testing.T, p *liquidus.Projection) liquidus.Node {
	t.Helper()
	var found []liquidus.Node
	for _, n := range p.Extrema {
		if n.Edge == int(k) && n.Kind == liquidus.Minimum {
			found = append(found, n)
		}
	}
	if len(found) != 1 {
		t.Fatalf("%d minima on edge %d, want 1", len(found), int(k))
	}
	return found[0]
}

func (k lowestOn) T(t *testing.T, p *liquidus.Projection) float64 {
	return k.find(t, p).T - ternary.ZeroCelsius
}

// X is component c in wt%.
func (k lowestOn) X(c int) func(*testing.T, *liquidus.Projection) float64 {
	return func(t *testing.T, p *liquidus.Projection) float64 {
		return 100 * p.System.Components.Fractions(k.find(t, p).Liquid, ternary.Mass)[c]
	}
}
