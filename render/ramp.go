package render

import "math"

// lab is a colour in CIELAB for the white of sRGB (D65): CIE 15:2004, with the
// matrix and the transfer function of IEC 61966-2-1:1999.
type lab struct{ L, a, b float64 }

// whitePoint is D65 as the sum of the rows of the matrix of sRGB.
var whitePoint = [3]float64{0.95047, 1, 1.08883}

// colour is the nearest colour of sRGB.
func (c lab) colour() Colour {
	f := [3]float64{(c.L+16)/116 + c.a/500, (c.L + 16) / 116, (c.L+16)/116 - c.b/200}
	var xyz [3]float64
	for i, v := range f {
		if v > 6.0/29 {
			xyz[i] = whitePoint[i] * v * v * v
		} else {
			xyz[i] = whitePoint[i] * 3 * (6.0 / 29) * (6.0 / 29) * (v - 4.0/29)
		}
	}
	x, y, z := xyz[0], xyz[1], xyz[2]
	return Colour{
		encodeSRGB(3.2404542*x - 1.5371385*y - 0.4985314*z),
		encodeSRGB(-0.9692660*x + 1.8760108*y + 0.0415560*z),
		encodeSRGB(0.0556434*x - 0.2040259*y + 1.0572252*z),
	}
}

func encodeSRGB(v float64) uint8 {
	if v <= 0.0031308 {
		v *= 12.92
	} else {
		v = 1.055*math.Pow(v, 1/2.4) - 0.055
	}
	return uint8(math.Round(255 * math.Max(0, math.Min(1, v))))
}

// Ends of the scale of temperatures: a warm cream for the hottest, a soft blue
// for the coldest. It is this program's own, a straight line in CIELAB: every
// step has the same colour difference, lightness falls all the way, so that the
// order survives in grey and for every kind of colour vision; and the dark end is
// light enough for black words at 4.5:1 and for all lines at 3:1.
var (
	rampHot  = lab{97, 0, 13}
	rampCold = lab{78, -7, -12}
)

// temperatureRamp is the scale of temperatures in n even steps, hottest first.
func temperatureRamp(n int) []Colour {
	out := make([]Colour, n)
	for i := range out {
		t := float64(i) / float64(n-1)
		mix := func(a, b float64) float64 { return a + t*(b-a) }
		out[i] = lab{mix(rampHot.L, rampCold.L), mix(rampHot.a, rampCold.a), mix(rampHot.b, rampCold.b)}.colour()
	}
	return out
}
