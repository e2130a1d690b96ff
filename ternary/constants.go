package ternary

const (
	// R is the molar gas constant in J/(mol K): CODATA 2018, exact by the
	// definitions of the SI of 2019 (N_A·k).
	R = 8.31446261815324
	// ZeroCelsius is 0 °C in kelvin, by definition.
	ZeroCelsius = 273.15
)
