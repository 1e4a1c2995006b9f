package grid

import (
	"math"
	"math/cmplx"
)

// RoundSkin returns Rac/Rdc of a solid round conductor with argument
// x = sqrt(8 pi f 1e-7 / R'), R' being the dc resistance in ohm/m: the real
// part of (k/2) I0(k)/I1(k), k = x sqrt(j) (exact solution in Bessel
// functions; the argument is that of IEC 60287-1-1).
func RoundSkin(x float64) float64 {
	if x < 1e-3 {
		return 1
	}
	k := complex(x, 0) * cmplx.Sqrt(1i)
	q := k * k / 4
	// I0 = sum q^n/(n!)^2, I1 = (k/2) sum q^n/(n!(n+1)!)
	i0, i1, a, b := complex128(1), complex128(1), complex128(1), complex128(1)
	for n := 1.0; n < 400; n++ {
		a *= q / complex(n*n, 0)
		b *= q / complex(n*(n+1), 0)
		i0 += a
		i1 += b
		if cmplxAbs1(a) < 1e-17*cmplxAbs1(i0) {
			break
		}
	}
	return real(i0 / i1)
}

// IECSkin returns 1 + ys of IEC 60287-1-1 for the same argument, ks = 1.
func IECSkin(x float64) float64 {
	switch {
	case x <= 2.8:
		x4 := x * x * x * x
		return 1 + x4/(192+0.8*x4)
	case x <= 3.8:
		return 1 - 0.136 - 0.0177*x + 0.0563*x*x
	}
	return 1 + 0.354*x - 0.733
}

// SkinLaw returns R(h)/R(1) of a conductor of the given resistance in ohm/m by
// RoundSkin or IECSkin. The values up to order are worked out at once, at every
// quarter of an order, and those between by a parabola (error below 1e-5; none
// at whole orders); the law may be shared between networks.
func SkinLaw(law func(x float64) float64, ohmPerM, f1 float64, order int) func(h float64) float64 {
	const steps = 4
	square := 8 * math.Pi * f1 * 1e-7 / ohmPerM
	first := law(math.Sqrt(square))
	at := func(h float64) float64 { return law(math.Sqrt(square*h)) / first }
	table := make([]float64, steps*order+2)
	for i := range table {
		table[i] = at(float64(i) / steps)
	}
	return func(h float64) float64 {
		i := int(h*steps + 0.5)
		if i < 1 || i+1 >= len(table) {
			return at(h)
		}
		t := h*steps - float64(i)
		a, b, c := table[i-1], table[i], table[i+1]
		return b + t*((c-a)+t*(a-2*b+c))/2
	}
}
