package main

import (
	"math"
	"strconv"

	"thalweg/ternary"
)

// celsius turns kelvin into °C.
func celsius(T float64) float64 { return T - ternary.ZeroCelsius }

// fixed writes a number with so many decimals, never as minus zero; what is not
// a number is a dash.
func fixed(v float64, decimals int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "–"
	}
	s := strconv.FormatFloat(v, 'f', decimals, 64)
	if z, err := strconv.ParseFloat(s, 64); err == nil && z == 0 && s[0] == '-' {
		return s[1:]
	}
	return s
}

// digits is the number of significant digits in JSON and CSV.
const digits = 10

// exact writes a number for another program to read; "" stands for what is not a
// number. What lies below the resolution of a percentage is zero.
func exact(v float64) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return ""
	}
	if v == 0 {
		return "0"
	}
	return strconv.FormatFloat(v, 'g', digits, 64)
}

// part writes a percentage or fraction for another program to read, without the
// rounding noise around zero.
func part(v float64) float64 {
	if math.Abs(v) < 1e-12 {
		return 0
	}
	return v
}

// short writes a number as people would.
func short(v float64) string { return strconv.FormatFloat(v, 'g', 6, 64) }

// drive writes an affinity, J/mol, for another program to read: zero when it is
// within rounding of saturation.
func drive(v float64) float64 {
	if math.Abs(v) < 1e-5 {
		return 0
	}
	return v
}
