package join

import "thalweg/ternary"

// Share is the share of the end To at X, 0 to 1, in a basis; Mole is X itself.
func (d *Diagram) Share(x float64, b ternary.Basis) float64 {
	if b == ternary.Mole {
		return x
	}
	from, to := d.weights()
	return x * to / ((1-x)*from + x*to)
}

// X is the reverse of Share.
func (d *Diagram) X(share float64, b ternary.Basis) float64 {
	if b == ternary.Mole {
		return share
	}
	from, to := d.weights()
	return share * from / ((1-share)*to + share*from)
}

// weights are the masses of one mole of components of the two ends, g.
func (d *Diagram) weights() (from, to float64) {
	for i, m := range d.System.Components.MolarMasses() {
		from += m * d.From[i]
		to += m * d.To[i]
	}
	return from, to
}
