package lanes

import (
	"encoding/binary"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// bigExp is exp(x) to about 50 digits: the series at x/2²⁴, squared 24 times.
func bigExp(x float64) *big.Float {
	const precision = 260
	number := func(v float64) *big.Float { return new(big.Float).SetPrec(precision).SetFloat64(v) }
	r := new(big.Float).SetPrec(precision).SetMantExp(number(x), -24)
	sum, term := number(1), number(1)
	for k := 1.0; k < 40; k++ {
		term.Mul(term, r)
		term.Quo(term, number(k))
		sum.Add(sum, term)
	}
	for range 24 {
		sum.Mul(sum, sum)
	}
	return sum
}

// Exp against 50 digits, and the ends of the domain against math.Exp.
func TestExpAccuracy(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	x := []float64{0, 1, -1, 0.34657359027997, -0.34657359027998, 1e-300, -5e-324, 1e-20, -1e-10, 707.99, -707.99}
	for range 2000 {
		x = append(x, expEnd*(2*r.Float64()-1), r.NormFloat64())
	}
	for _, use := range []bool{false, hasVector()} {
		useVector(use)
		dst := make([]float64, len(x))
		Exp(dst, x)
		worst, at := 0.0, 0.0
		for k, v := range x {
			want := bigExp(v)
			d := new(big.Float).SetPrec(260).SetFloat64(dst[k])
			d.Sub(d, want).Quo(d, want)
			if rel, _ := d.Float64(); math.Abs(rel) > worst {
				worst, at = math.Abs(rel), v
			}
		}
		t.Logf("vector loop %v: largest relative error %.2f eps, at %g", use, worst/0x1p-52, at)
		if worst > 0x1p-52 {
			t.Errorf("vector loop %v: relative error %.3g at %g, above 1 eps", use, worst, at)
		}
		ends := []float64{math.NaN(), math.Inf(1), math.Inf(-1), 708, -708, 709.7, 710, -745.1, -746, 1e300, -1e300, math.Copysign(0, -1)}
		Exp(dst, ends)
		for k, v := range ends {
			if want := math.Exp(v); math.Float64bits(dst[k]) != math.Float64bits(want) && !math.IsNaN(want) || math.IsNaN(want) != math.IsNaN(dst[k]) {
				t.Errorf("Exp of %g is %g, want %g", v, dst[k], want)
			}
		}
	}
	useVector(hasVector())
}

// Both loops give the same bits, in place too, every length from 0 to 67.
func TestExpSameBits(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for n := range 68 {
		for range 20 {
			x := arguments(r, n, 800)
			for i := range x {
				if r.IntN(2) == 0 {
					x[i] = -x[i]
				}
			}
			both(t, "Exp", func() []float64 {
				y := append([]float64(nil), x...)
				Exp(y, y)
				return y
			})
		}
	}
}

func FuzzExp(f *testing.F) {
	f.Add([]byte("\x00\x00\x00\x00\x00\x00\xf0?\x00\x00\x00\x00\x00\x00\xf0\xff"))
	f.Fuzz(func(t *testing.T, data []byte) {
		var x []float64
		for ; len(data) >= 8; data = data[8:] {
			x = append(x, math.Float64frombits(binary.LittleEndian.Uint64(data)))
		}
		for len(x) > 0 && len(x) < 16 {
			x = append(x, x...)
		}
		both(t, "Exp", func() []float64 {
			y := make([]float64, len(x))
			Exp(y, x)
			for i, v := range y {
				if math.IsNaN(v) {
					y[i] = 0 // which bits a NaN has is left open
				}
			}
			return y
		})
	})
}

func BenchmarkExp(b *testing.B) {
	x, dst := make([]float64, 512), make([]float64, 512)
	for i := range x {
		x[i] = 0.03 * float64(i-256)
	}
	for name, f := range map[string]func(){
		"Exp": func() { Exp(dst, x) },
		"math": func() {
			for k, v := range x {
				dst[k] = math.Exp(v)
			}
		},
	} {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				f()
			}
		})
	}
}
