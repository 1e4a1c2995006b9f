package phasor

import (
	"errors"
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"
)

// direct sums the series term by term: the second road to Synthesize.
func direct(s Spectrum, theta float64) float64 {
	x := real(s.At(0))
	for h := 1; h < len(s); h++ {
		x += math.Sqrt2 * cmplx.Abs(s[h]) * math.Cos(float64(h)*theta+cmplx.Phase(s[h]))
	}
	return x
}

func TestSynthesizeAgainstTheSeries(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := anySpectrum(t, rapid.IntRange(0, 60).Draw(t, "order"))
		n := rapid.IntRange(1, 300).Draw(t, "n")
		x := Synthesize(s, n, nil)
		if len(x) != n {
			t.Fatalf("%d samples, want %d", len(x), n)
		}
		for k, v := range x {
			if want := direct(s, 2*math.Pi*float64(k)/float64(n)); math.Abs(v-want) > 1e-10 {
				t.Fatalf("sample %d of %d is %.15g, want %.15g", k, n, v, want)
			}
		}
	})
}

func TestAnalyzeUndoesSynthesize(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		order := rapid.IntRange(1, 40).Draw(t, "order")
		s := anySpectrum(t, order)
		cycles := rapid.IntRange(1, 12).Draw(t, "cycles")
		one := Synthesize(s, 2*order+1+rapid.IntRange(0, 50).Draw(t, "more"), nil)
		var x []float64
		for range cycles {
			x = append(x, one...)
		}
		got, err := Analyze(x, cycles, order)
		if err != nil {
			t.Fatal(err)
		}
		for h := range s {
			if cmplx.Abs(got[h]-s[h]) > 1e-12 {
				t.Fatalf("order %d is %v, want %v", h, got[h], s[h])
			}
		}
		var mean float64
		for _, v := range x {
			mean += v * v / float64(len(x))
		}
		if math.Abs(math.Sqrt(mean)-RMS(s)) > 1e-12 { // Parseval
			t.Fatalf("rms of the samples %g, of the spectrum %g", math.Sqrt(mean), RMS(s))
		}
	})
}

// Windows of IEC 61000-4-7 (identities anyone can check, derived): ten cycles
// of 50 Hz, amplitude modulated at 5 Hz with depth m, leave order 1 alone.
func TestAnalyzeModulated(t *testing.T) {
	const n, m = 2000, 0.2
	x := make([]float64, n)
	for k := range x {
		cycle := 2 * math.Pi * 10 * float64(k) / n
		x[k] = math.Sqrt2 * (1 + m*math.Cos(cycle/10)) * math.Cos(cycle)
	}
	s, err := Analyze(x, 10, 50)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "order 1", cmplx.Abs(s[1]), 1, 1e-12)
	near(t, "distortion", Distortion(s), 0, 1e-12)
	side, err := Analyze(x, 1, 11) // one window as a single cycle of 5 Hz: orders are 5 Hz lines
	if err != nil {
		t.Fatal(err)
	}
	near(t, "line 9", cmplx.Abs(side[9]), m/2, 1e-12)
	near(t, "line 11", cmplx.Abs(side[11]), m/2, 1e-12)
}

// A sine half a line off, 252.5 Hz in a 200 ms window, leaves 2/pi in each of
// the two nearest lines (derived, negative-frequency image ignored).
func TestAnalyzeLeakage(t *testing.T) {
	const n = 20000
	x := make([]float64, n)
	for k := range x {
		x[k] = math.Sqrt2 * math.Cos(2*math.Pi*50.5*float64(k)/n)
	}
	s, err := Analyze(x, 1, 60)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "line 50", cmplx.Abs(s[50]), 0.63661977, 1e-2)
	near(t, "line 51", cmplx.Abs(s[51]), 0.63661977, 1e-2)
}

func TestAnalyzeRefuses(t *testing.T) {
	good := make([]float64, 200)
	bad := append([]float64(nil), good...)
	bad[7] = math.NaN()
	for name, f := range map[string]func() (Spectrum, error){
		"no cycles": func() (Spectrum, error) { return Analyze(good, 0, 5) },
		"no order":  func() (Spectrum, error) { return Analyze(good, 1, 0) },
		"too short": func() (Spectrum, error) { return Analyze(good, 10, 10) },
		"empty":     func() (Spectrum, error) { return Analyze(nil, 1, 1) },
		"NaN":       func() (Spectrum, error) { return Analyze(bad, 1, 5) },
	} {
		s, err := f()
		var typed *SampleError
		if s != nil || !errors.As(err, &typed) || typed.Remedy == "" {
			t.Errorf("%s: spectrum %v, error %v; want a *SampleError with a remedy", name, s, err)
		}
	}
}

func TestPeakAgainstFineSampling(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := anySpectrum(t, rapid.IntRange(1, 50).Draw(t, "order"))
		if rapid.Bool().Draw(t, "mostly order 1") { // like a voltage: sampled more coarsely
			for h := 2; h < len(s); h++ {
				s[h] *= complex(0.2/float64(h), 0)
			}
			s[1] += 1
		}
		const n = 20000
		var want float64
		for _, v := range Synthesize(s, n, nil) {
			want = max(want, math.Abs(v))
		}
		got := Peak(s)
		// Fine samples miss the crest by at most (h pi/n)^2/2 of each order.
		if got < want*(1-1e-12) || got > want*(1+5e-5) {
			t.Fatalf("peak %.12g, fine sampling %.12g", got, want)
		}
	})
}

// Fourier series of textbook waves (derived): the synthesised wave has the
// shape, and the samples of the shape have the spectrum.
func TestSeries(t *testing.T) {
	const n = 1 << 16
	theta := func(k int) float64 { return 2 * math.Pi * (float64(k) + 0.5) / n }
	shapes := map[string]struct {
		s    Spectrum
		wave func(x float64) float64
	}{
		"square":    {SquareWave(1, 49), func(x float64) float64 { return math.Copysign(1, math.Cos(x)) }},
		"triangle":  {TriangleWave(1, 49), func(x float64) float64 { return math.Asin(math.Cos(x)) * 2 / math.Pi }},
		"half-wave": {HalfWaveSine(1, 49), func(x float64) float64 { return max(0, math.Cos(x)) }},
		"full-wave": {FullWaveSine(1, 49), func(x float64) float64 { return math.Abs(math.Cos(x)) }},
	}
	for name, c := range shapes {
		x := make([]float64, n)
		for k := range x {
			x[k] = c.wave(theta(k))
		}
		got, err := Analyze(x, 1, 49)
		if err != nil {
			t.Fatal(err)
		}
		for h := range got {
			shifted := got[h] * cmplx.Rect(1, -math.Pi*float64(h)/n) // samples stand half a step late
			if cmplx.Abs(shifted-c.s[h]) > 1e-7 {
				t.Errorf("%s order %d: series %v, samples %v", name, h, c.s[h], shifted)
			}
		}
	}
	near(t, "THD square, all orders", 100*THD(SquareWave(1, 1<<20)), 48.3426, 2e-6)
	near(t, "THD triangle, all orders", 100*THD(TriangleWave(1, 1<<12)), 12.1153, 1e-5)

	half := HalfWaveSine(1, 1<<12)
	for h, want := range map[int]float64{2: 0.21220659, 4: 0.042441318, 6: 0.018189136, 8: 0.010105076, 10: 0.0064305028} {
		near(t, "half-wave", math.Sqrt2*cmplx.Abs(half[h]), want, 1e-8)
	}
	near(t, "half-wave dc", real(half[0]), 0.3183098862, 1e-10)
	near(t, "half-wave order 1", math.Sqrt2*real(half[1]), 0.5, 1e-15)
	near(t, "half-wave rms", RMS(half), 0.5, 1e-8)
	near(t, "half-wave form factor", RMS(half)/real(half[0]), 1.5707963, 1e-7)
	near(t, "half-wave crest", Peak(half[:51]), 1, 1e-2)
	for h := 3; h <= 49; h += 2 {
		if half[h] != 0 {
			t.Errorf("half-wave rectified sine holds odd order %d", h)
		}
	}
}

// A 50 Hz period is 20 ms, and a sine of 18.8 V peak to peak is 6.65 V rms:
// arithmetic (derived); that low-voltage measuring transformers give about
// that is common practice, no source.
func TestPeriodAndPeakToPeak(t *testing.T) {
	near(t, "period at 50 Hz in ms", 1000*Period(50), 20, 1e-15)
	near(t, "period at 60 Hz in ms", 1000*Period(60), 16.666667, 1e-7)
	near(t, "rms", SineRMS(18.8), 6.646804, 1e-7)
	s := New(1)
	s[1] = complex(SineRMS(18.8), 0)
	near(t, "peak to peak", PeakToPeak(s, 1000), 18.8, 1e-12)
	near(t, "crest of a sine", Crest(s), math.Sqrt2, 1e-12)
}

func TestHotPathDoesNotAllocate(t *testing.T) {
	s := HalfWaveSine(1, 50)
	dst := make([]float64, 512)
	if n := testing.AllocsPerRun(100, func() { dst = Synthesize(s, 512, dst) }); n != 0 {
		t.Errorf("Synthesize allocates %v times", n)
	}
	if n := testing.AllocsPerRun(100, func() { Peak(s) }); n != 0 {
		t.Errorf("Peak allocates %v times", n)
	}
}

func full(order int) Spectrum {
	s := New(order)
	for h := 1; h <= order; h++ {
		s[h] = cmplx.Rect(1/float64(h), float64(h*h))
	}
	return s
}

func BenchmarkSynthesize512(b *testing.B) {
	s, dst := full(50), make([]float64, 512)
	for b.Loop() {
		dst = Synthesize(s, 512, dst)
	}
}

func BenchmarkPeak50(b *testing.B) {
	s := full(50)
	for b.Loop() {
		Peak(s)
	}
}

func BenchmarkPeakOfVoltage(b *testing.B) {
	s := full(50)
	for h := 2; h <= 50; h++ {
		s[h] *= complex(0.2/float64(h), 0)
	}
	for b.Loop() {
		Peak(s)
	}
}

func BenchmarkSequences50(b *testing.B) {
	abc := Balanced(full(50))
	for b.Loop() {
		SequencesOf(abc)
	}
}
