package filter

import (
	"fmt"
	"math"
)

// Error says which rating cannot be built and why.
type Error struct{ Field, Problem string }

func (e *Error) Error() string { return e.Field + " " + e.Problem }

func need(field string, v float64) error {
	if !(v > 0) || math.IsInf(v, 0) {
		return &Error{field, fmt.Sprintf("is %v; it must be above zero", v)}
	}
	return nil
}

func rating(output, v, f1 float64) error {
	for _, c := range []struct {
		field string
		v     float64
	}{{"output", output}, {"voltage", v}, {"frequency", f1}} {
		if err := need(c.field, c.v); err != nil {
			return err
		}
	}
	return nil
}

func loss(perVar float64) error {
	if !(perVar >= 0 && perVar < 1) {
		return &Error{"capacitor loss", fmt.Sprintf("is %v W/var; it must be from 0 to below 1", perVar)}
	}
	return nil
}

func tuned(output, v, f1, n, q float64) error {
	if err := rating(output, v, f1); err != nil {
		return err
	}
	if err := aboveOne("tuned order", n); err != nil {
		return err
	}
	return need("quality factor", q)
}

func aboveOne(field string, n float64) error {
	if !(n > 1) || math.IsInf(n, 0) {
		return &Error{field, fmt.Sprintf("is %v; it must be above 1, or the branch is tuned to nothing", n)}
	}
	return nil
}

// Bank returns a plain capacitor bank of the given output (var) at v volts
// line to line, with a capacitor loss in W per var, taken as a constant series
// resistance.
func Bank(output, v, f1, lossPerVar float64) (*Branch, error) {
	if err := rating(output, v, f1); err != nil {
		return nil, err
	}
	if err := loss(lossPerVar); err != nil {
		return nil, err
	}
	xc := v * v / output
	return &Branch{Kind: KindBank, F1: f1, Xc: xc, Rc: lossPerVar * xc}, nil
}

// Detuned returns a bank behind a reactor of share p of the capacitor's
// reactance (0.07 for 7 %), with reactor quality q = X/R at order 1. It
// resonates at order 1/sqrt(p), and the capacitor's voltage rises by 1/(1-p).
func Detuned(output, v, f1, p, q, lossPerVar float64) (*Branch, error) {
	if err := rating(output, v, f1); err != nil {
		return nil, err
	}
	if !(p > 0 && p < 1) {
		return nil, &Error{"detuning", fmt.Sprintf("is %.3g %%; it must lie between 0 and 100 %%", 100*p)}
	}
	if err := need("reactor X/R", q); err != nil {
		return nil, err
	}
	if err := loss(lossPerVar); err != nil {
		return nil, err
	}
	xc := v * v / output / (1 - p)
	return &Branch{Kind: KindDetuned, F1: f1, Xc: xc, Rc: lossPerVar * xc, Xl: p * xc, Rl: p * xc / q}, nil
}

// capacitor returns the reactance of the capacitor of a branch tuned to n:
// XC = V^2/Q n^2/(n^2-1), resistances left out.
func capacitor(output, v, n float64) float64 { return v * v / output * n * n / (n*n - 1) }

// SingleTuned returns a filter tuned to order n: XL = XC/n^2, R = n XL/Q, with
// the quality factor Q at the tuned order.
func SingleTuned(output, v, f1, n, q float64) (*Branch, error) {
	if err := tuned(output, v, f1, n, q); err != nil {
		return nil, err
	}
	xc := capacitor(output, v, n)
	xl := xc / (n * n)
	return &Branch{Kind: KindSingleTuned, F1: f1, Xc: xc, Xl: xl, Rl: n * xl / q}, nil
}

// HighPass returns a second-order high-pass: L and C as in the single-tuned
// filter, with R = Q n XL in parallel with the reactor.
func HighPass(output, v, f1, n, q float64) (*Branch, error) {
	if err := tuned(output, v, f1, n, q); err != nil {
		return nil, err
	}
	xc := capacitor(output, v, n)
	xl := xc / (n * n)
	return &Branch{Kind: KindHighPass, F1: f1, Xc: xc, Xl: xl, Rp: q * n * xl}, nil
}

// FirstOrder returns a first-order high-pass, a capacitor in series with a
// resistor of its reactance at order n. Its losses at order 1 are high.
func FirstOrder(output, v, f1, n float64) (*Branch, error) {
	if err := rating(output, v, f1); err != nil {
		return nil, err
	}
	if err := aboveOne("corner order", n); err != nil {
		return nil, err
	}
	unit := Branch{Kind: KindFirstOrder, F1: f1, Xc: 1, Rl: 1 / n}
	return unit.scaledTo(output, v), nil
}

// ThirdOrder returns a third-order high-pass: C in series with a reactor L, and
// across the reactor a resistor R = Q n XL in series with a second capacitor
// equal to the first, which keeps order 1 out of the resistor. L and C cancel
// at order n.
func ThirdOrder(output, v, f1, n, q float64) (*Branch, error) {
	if err := tuned(output, v, f1, n, q); err != nil {
		return nil, err
	}
	unit := Branch{Kind: KindThirdOrder, F1: f1, Xc: 1, Xl: 1 / (n * n), Rp: q / n, Xc3: 1}
	return unit.scaledTo(output, v), nil
}

// scaledTo returns the branch with every impedance scaled so that its output,
// resistances included, is as stated.
func (b *Branch) scaledTo(output, v float64) *Branch {
	k := b.Output(v) / output
	return &Branch{b.Kind, b.F1, k * b.Xc, k * b.Rc, k * b.Xl, k * b.Rl, k * b.Xc2, k * b.Rp, k * b.Xc3, k * b.XcT, k * b.XlT, k * b.RlT}
}

// CType returns a C-type filter tuned to order n: its reactor and second
// capacitor resonate at order 1, so that the resistor across them carries no
// fundamental current. XL = XC2 = XC/(n^2-1); R = Q XC/n, Q being R over the
// reactance of the arm at the tuned order.
func CType(output, v, f1, n, q float64) (*Branch, error) {
	if err := tuned(output, v, f1, n, q); err != nil {
		return nil, err
	}
	xc := v * v / output
	xl := xc / (n*n - 1)
	return &Branch{Kind: KindCType, F1: f1, Xc: xc, Xl: xl, Xc2: xl, Rp: q * xc / n}, nil
}

// DoubleTuned returns a double-tuned filter that stands for two single-tuned
// branches of half the output each, at orders n1 < n2. Q is that of both
// reactors at the geometric mean of the two orders.
func DoubleTuned(output, v, f1, n1, n2, q float64) (*Branch, error) {
	if err := tuned(output, v, f1, n1, q); err != nil {
		return nil, err
	}
	if !(n2 > n1) || math.IsInf(n2, 0) {
		return nil, &Error{"second tuned order", fmt.Sprintf("is %v; it must be above the first, %v", n2, n1)}
	}
	w := 2 * math.Pi * f1
	xa, xb := capacitor(output/2, v, n1), capacitor(output/2, v, n2)
	b := combine(1/(w*xa), xa/(n1*n1)/w, 1/(w*xb), xb/(n2*n2)/w, f1)
	mean := math.Sqrt(n1 * n2)
	b.Rl, b.RlT = mean*b.Xl/q, mean*b.XlT/q
	return b, nil
}

// combine returns the double-tuned branch, without resistances, that equals
// two single-tuned branches in parallel (F and H).
func combine(ca, la, cb, lb, f1 float64) *Branch {
	sum, cross := ca+cb, la*ca-lb*cb
	l1 := la * lb / (la + lb)
	l2 := cross * cross / (sum * sum * (la + lb))
	c2 := ca * cb * sum * (la + lb) * (la + lb) / (cross * cross)
	w := 2 * math.Pi * f1
	return &Branch{Kind: KindDoubleTuned, F1: f1, Xc: 1 / (w * sum), Xl: w * l1, XcT: 1 / (w * c2), XlT: w * l2}
}
