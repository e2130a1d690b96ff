// Package render draws results of the other rooms as figures for print.
//
// Data flow: a [Figure] names a liquidus projection, the paths and samples to
// lay over it, the basis, a [Style] and a width. [Figure.Scene] turns it into a
// [Scene]: flat shapes and lines of text in named layers, in millimetres on a
// page whose box is the figure's. [Scene.WriteFile] writes a scene as PDF, SVG
// or PNG.
//
// Compositions come in as mole fractions of the components in the system's
// order and temperatures in kelvin; they are turned to the figure's basis and
// to degrees Celsius here, and nowhere else. Component 0 stands on top, 1 at
// the lower left, 2 at the lower right.
//
// A figure is made in three strokes. First the lines: frame, boundary curves
// (smooth curves through the computed points), isotherms, paths, and the
// symbols on them. Then the words: every label brings a list of places where
// it could stand, and the placer chooses places so that no two labels touch,
// none covers a symbol or an arrowhead, and none leaves the page; what finds
// no room is left out, the least needed first, and the scene's description
// says so. Last the isotherms are cut where words stand on them.
//
// The general tools are bezier.go and cutting.go (smooth curves with arc
// length, and gaps in them), geometry.go (oriented boxes, polygons), index.go
// (lines near a box), place.go (labels) and table.go (lines of cells); they
// know nothing of triangles. triangle.go and frame.go are the board on which
// any triangular diagram is drawn; projection.go composes the liquidus
// projection on it.
//
// This package is the only one that draws. It does no thermodynamics.
package render
