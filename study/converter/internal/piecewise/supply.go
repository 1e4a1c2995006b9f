package piecewise

import (
	"math"

	"quietbus/study/phasor"
)

// A supply is the three phase voltages: their active orders, and their values
// at the samples.
type supply struct {
	orders []int           // rising
	peak   [3][]complex128 // by position in orders: sqrt(2) times the rms phasor
	at     []float64       // Samples x 3
	stamp  int             // changes with the voltage, so that cached responses are dropped
	first  [3]complex128   // order 1, rms
}

// circle holds exp(j cell k).
var circle = func() (c [Samples]complex128) {
	for k := range c {
		c[k] = turn(cell * float64(k))
	}
	return c
}()

// set takes over the voltages; orders below 1e-12 of the largest are left out.
func (s *supply) set(v [3]phasor.Spectrum) {
	s.stamp++
	var big float64
	top := 0
	for q := range v {
		for h := 1; h < len(v[q]); h++ {
			big = math.Max(big, cabs1(v[q][h]))
		}
		top = max(top, len(v[q])-1)
		s.peak[q] = s.peak[q][:0]
		s.first[q] = v[q].At(1)
	}
	s.orders = s.orders[:0]
	for h := 1; h <= top; h++ {
		if a, b, c := v[0].At(h), v[1].At(h), v[2].At(h); cabs1(a)+cabs1(b)+cabs1(c) > 1e-12*big {
			s.orders = append(s.orders, h)
			s.peak[0] = append(s.peak[0], a*math.Sqrt2)
			s.peak[1] = append(s.peak[1], b*math.Sqrt2)
			s.peak[2] = append(s.peak[2], c*math.Sqrt2)
		}
	}
	if s.at == nil {
		s.at = make([]float64, Samples*3)
	}
	odd := true
	for _, h := range s.orders {
		odd = odd && h%2 == 1
	}
	for k := 0; k < Samples; k++ {
		for q := 0; q < 3; q++ {
			if odd && k >= Samples/2 {
				s.at[k*3+q] = -s.at[(k-Samples/2)*3+q]
				continue
			}
			s.at[k*3+q] = sampled(s.peak[q], s.orders, k)
		}
	}
}

// sampled is the real part of a series of peak phasors at sample k.
func sampled(peak []complex128, orders []int, k int) float64 {
	var v float64
	for i, h := range orders {
		z := circle[h*k%Samples]
		v += real(peak[i])*real(z) - imag(peak[i])*imag(z)
	}
	return v
}

// series is the real part of a series of peak phasors at the powers zh.
func series(peak, zh []complex128) float64 {
	var v float64
	for i, z := range zh {
		v += real(peak[i])*real(z) - imag(peak[i])*imag(z)
	}
	return v
}

// powers writes exp(j h theta) for the active orders into dst.
func (s *supply) powers(theta float64, dst []complex128) []complex128 {
	dst = dst[:0]
	z := turn(theta)
	p, at := z, 1
	for _, h := range s.orders {
		if step := h - at; step > 4 {
			p *= turn(float64(step) * theta)
			at = h
		}
		for ; at < h; at++ {
			p *= z
		}
		dst = append(dst, p)
	}
	return dst
}

// value writes the phase voltages at the powers zh.
func (s *supply) value(zh []complex128, u *[3]float64) {
	for q := range u {
		u[q] = series(s.peak[q], zh)
	}
}

// rate writes the derivative of the phase voltages.
func (s *supply) rate(zh []complex128, u *[3]float64) {
	for q := range u {
		var v float64
		for i, h := range s.orders {
			// real part of j h peak z
			p, z := s.peak[q][i], zh[i]
			v -= float64(h) * (real(p)*imag(z) + imag(p)*real(z))
		}
		u[q] = v
	}
}

// driven is a mode's response to the supply in the frequency domain.
type driven struct {
	stamp int
	X     [][]complex128 // by state: peak phasors by position in orders
	at    []float64      // Samples x n, where known
	known []bool
}

// respond brings the mode's response up to date with the supply.
func (m *mode) respond(s *supply) {
	d := &m.drive
	if d.stamp == s.stamp {
		return
	}
	d.stamp = s.stamp
	if d.X == nil {
		d.X, d.at, d.known = make([][]complex128, m.n), make([]float64, Samples*m.n), make([]bool, Samples)
	} else {
		clear(d.known)
	}
	if len(s.orders) == 0 {
		return
	}
	inv, nn := m.inverse(s.orders[len(s.orders)-1]), m.n*m.n
	for i := range d.X {
		d.X[i] = d.X[i][:0]
	}
	var bu [16]complex128
	force := bu[:0]
	for k, h := range s.orders {
		force = force[:0]
		for i := 0; i < m.n; i++ {
			var f complex128
			for q := 0; q < 3; q++ {
				if b := m.B[i*3+q]; b != 0 {
					p := s.peak[q][k]
					f += complex(b*real(p), b*imag(p))
				}
			}
			force = append(force, f)
		}
		for i := 0; i < m.n; i++ {
			var v complex128
			for j, f := range force {
				if f != 0 {
					v += inv[h*nn+i*m.n+j] * f
				}
			}
			d.X[i] = append(d.X[i], v)
		}
	}
}

// sampled returns the response of the dynamic states at sample k.
func (m *mode) sampled(s *supply, k int) []float64 {
	k %= Samples
	d := &m.drive
	row := d.at[k*m.n : (k+1)*m.n]
	if !d.known[k] {
		d.known[k] = true
		for i := range row {
			row[i] = sampled(d.X[i], s.orders, k)
		}
	}
	return row
}

// response writes the response at the powers zh into dst.
func (m *mode) response(zh []complex128, dst []float64) {
	for i := 0; i < m.n; i++ {
		dst[i] = series(m.drive.X[i], zh)
	}
}
