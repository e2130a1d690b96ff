package liquidus_test

import (
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

const (
	bowenAndersen = "Bowen & Andersen 1914, Am. J. Sci. 37, 487–500 (from memory; used in the fit)"
	greig         = "Greig 1927, Am. J. Sci. 13, 1–44 (from memory; used in the fit)"
	osbornMuan    = "Osborn & Muan 1960 (from memory; used in the fit)"
	andersen      = "Andersen 1915, Am. J. Sci. 39, 407–454 (from memory; temperature used in the fit)"
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
