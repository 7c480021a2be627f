package special

import (
	"math"

	"levelsum/statmech/internal/lanes"
)

// boseSeries is Li_s: z·mid(z) on segments of width 1/8 for -1 <= z <= 1/2, and
// for z > 1/2 in α = -ln z the sum of one(α) and of the branch
//
//	branch·α^(s-1)  (half-integer s),  branch·α^(s-1) ln α  (integer s).
type boseSeries struct {
	mid    *[12][13]float64
	one    *[13]float64
	twoS   int
	branch float64
	logs   bool
	atOne  float64 // Li_s(1) = ζ(s)
	fermi  *fermiSeries
	near   *boseNear // for half-integer s
}

// boseNear is Li_s as z·upper(z) on [1/2, 3/4), and beyond, in δ = 1-z on
// [0, 3/8), as regular(δ) + branch(δ) δ^(s-1).
type boseNear struct{ upper, regular, branch lanes.Table12 }

func nearOf(upper, regular, branch [][13]float64) *boseNear {
	return &boseNear{
		upper:   lanes.Table12{Rows: upper, From: 0.5, PerUnit: 16},
		regular: lanes.Table12{Rows: regular, PerUnit: 8},
		branch:  lanes.Table12{Rows: branch, PerUnit: 8},
	}
}

// Γ(1/2), Γ(-1/2), Γ(-3/2) and ζ(3/2), ζ(2), ζ(5/2), ζ(3), mpmath 1.4.1.
const (
	gammaHalf       = 1.77245385090551602729816748334
	gammaMinusHalf  = -2 * gammaHalf
	gammaMinusThree = 4 * gammaHalf / 3
	zetaThreeHalf   = 2.61237534868548834334856756792
	zetaTwo         = 1.64493406684822643647241516665
	zetaFiveHalf    = 1.34148725725091717975676969335
	zetaThree       = 1.20205690315959428539973816151
)

var (
	boseOrder1 = boseSeries{&bose1Mid, &bose1One[0], 1, gammaHalf, false, math.Inf(1), &fermiOrderM1, nearOf(bose1Upper[:], bose1NearRegular[:], bose1NearBranch[:])}
	boseOrder3 = boseSeries{&bose3Mid, &bose3One[0], 3, gammaMinusHalf, false, zetaThreeHalf, &fermiOrder1, nearOf(bose3Upper[:], bose3NearRegular[:], bose3NearBranch[:])}
	boseOrder4 = boseSeries{&bose4Mid, &bose4One[0], 4, 1, true, zetaTwo, &fermiOrder2, nil}
	boseOrder5 = boseSeries{&bose5Mid, &bose5One[0], 5, gammaMinusThree, false, zetaFiveHalf, &fermiOrder3, nearOf(bose5Upper[:], bose5NearRegular[:], bose5NearBranch[:])}
	boseOrder6 = boseSeries{&bose6Mid, &bose6One[0], 6, -0.5, true, zetaThree, &fermiOrder4, nil}
)

func boseOrder(s float64) *boseSeries {
	switch s {
	case 0.5:
		return &boseOrder1
	case 1.5:
		return &boseOrder3
	case 2:
		return &boseOrder4
	case 2.5:
		return &boseOrder5
	case 3:
		return &boseOrder6
	}
	return nil
}

// at returns Li_s(z).
func (b *boseSeries) at(z float64) float64 {
	switch {
	case z >= -1 && z <= 0.5:
		return b.middle(z)
	case z < -1:
		return -b.fermi.at(math.Log(-z)) // Li_s(-e^η) = -F_(s-1)(η)
	case z > 0.5 && z < 1 && b.near != nil:
		if z < 0.75 {
			return z * b.near.upper.At(z)
		}
		delta := 1 - z // exact
		return b.joined(b.near.regular.At(delta), b.near.branch.At(delta), delta)
	case z <= 1:
		return b.nearOne(-math.Log1p(z - 1)) // z-1 is exact here
	}
	return math.NaN()
}

// joined returns regular + branch·δ^(s-1) for s = 1/2, 3/2, 5/2.
func (b *boseSeries) joined(regular, branch, delta float64) float64 {
	root := math.Sqrt(delta)
	switch b.twoS {
	case 1:
		return regular + branch/root
	case 3:
		return regular + float64(branch*root)
	}
	return regular + float64(branch*float64(delta*root))
}

// fill is at for a slice.
func (b *boseSeries) fill(dst, z []float64) {
	const size = 512
	if b.near == nil {
		for k, v := range z {
			dst[k] = b.at(v)
		}
		return
	}
	mid := lanes.Table12{Rows: b.mid[:], From: -1, PerUnit: 8}
	// Sorted by the table that they belong to, so that every loop is long.
	var x [3][size]float64
	var where [3][size]int
	var p, branch [size]float64
	for at := 0; at < len(z); at += size {
		dst := dst[at:min(at+size, len(z))]
		var n [3]int
		for k, v := range z[at : at+len(dst)] {
			var j int
			switch {
			case v >= -1 && 8*(v+1) < 12: // as rounded
			case v > 0.5 && v < 0.75:
				j = 1
			case v >= 0.75 && v < 1:
				j, v = 2, 1-v
			default:
				dst[k] = b.at(v)
				continue
			}
			x[j][n[j]], where[j][n[j]] = v, k
			n[j]++
		}
		mid.Fill(p[:n[0]], x[0][:n[0]], nil)
		for i, k := range where[0][:n[0]] {
			dst[k] = x[0][i] * p[i]
		}
		b.near.upper.Fill(p[:n[1]], x[1][:n[1]], nil)
		for i, k := range where[1][:n[1]] {
			dst[k] = x[1][i] * p[i]
		}
		b.near.regular.Fill(p[:n[2]], x[2][:n[2]], nil)
		b.near.branch.Fill(branch[:n[2]], x[2][:n[2]], nil)
		for i, k := range where[2][:n[2]] {
			dst[k] = b.joined(p[i], branch[i], x[2][i])
		}
	}
}

func (b *boseSeries) middle(z float64) float64 {
	y := 8 * (z + 1)
	if z < 0 {
		y = 8 + 8*z // the same, exact for small |z| too
	}
	i := min(int(y), len(b.mid)-1)
	return z * lanes.Poly12(&b.mid[i], y-(float64(i)+0.5))
}

// nearOne returns Li_s(e^-α) for 0 <= α <= ln 2.
func (b *boseSeries) nearOne(alpha float64) float64 {
	if alpha == 0 {
		return b.atOne
	}
	regular := lanes.Poly12(b.one, alpha)
	var singular float64
	switch b.twoS {
	case 1:
		singular = b.branch / math.Sqrt(alpha)
	case 3:
		singular = b.branch * math.Sqrt(alpha)
	case 4:
		singular = alpha * math.Log(alpha)
	case 5:
		singular = b.branch * (alpha * math.Sqrt(alpha))
	case 6:
		singular = b.branch * (alpha * alpha) * math.Log(alpha)
	}
	return regular + singular
}

// atAlpha returns Li_s(e^-α).
func (b *boseSeries) atAlpha(alpha float64) float64 {
	switch {
	case alpha > math.Ln2:
		return b.middle(math.Exp(-alpha))
	case alpha >= 0:
		return b.nearOne(alpha)
	}
	return math.NaN()
}

// Bose returns the Bose function of order s, the polylogarithm
//
//	g_s(z) = Li_s(z) = Σ_{k>=1} zᵏ/kˢ = 1/Γ(s) ∫₀^∞ t^(s-1)/(eᵗ/z-1) dt
//
// for s = 1/2, 1, 3/2, 2, 5/2, 3 and real z <= 1, where z is the fugacity
// e^(μ/kT) of a Bose gas.
//
// Special cases are:
//
//	Bose(s, 1) = +Inf for s <= 1, else ζ(s)
//	Bose(s, ±0) = ±0
//	Bose(s, -Inf) = -Inf
//	Bose(s, z) = NaN for z > 1, where Li_s is complex, and for NaN
//	Bose(s, z) = NaN for any other order
//
// Accuracy: 3 eps relative for the z given (TestBoseAccuracy, -1e9 to 1).
// Near z = 1 the functions of low order change fast: if z comes from a chemical
// potential, give α = -ln z = -μ/kT to [BoseAlpha] instead.
//
// Reference: J. E. Robinson, Physical Review 83, 678 (1951),
// doi:10.1103/PhysRev.83.678 (the expansion about α = 0); NIST Digital Library
// of Mathematical Functions, section 25.12.
func Bose(s, z float64) float64 {
	if b := boseOrder(s); b != nil {
		return b.at(z)
	}
	if s == 1 && z <= 1 {
		return -math.Log1p(-z)
	}
	return math.NaN()
}

// Boses is [Bose] for every element of z.
func Boses(dst []float64, s float64, z []float64) []float64 {
	dst = destination("Boses", dst, z)
	if b := boseOrder(s); b != nil {
		b.fill(dst, z)
		return dst
	}
	for i, v := range z {
		dst[i] = Bose(s, v)
	}
	return dst
}

// BoseAlpha returns Li_s(e^-α), [Bose] given α = -ln z = -μ/kT >= 0, which
// keeps its accuracy as α → 0.
//
// Special cases are:
//
//	BoseAlpha(s, 0) = +Inf for s <= 1, else ζ(s)
//	BoseAlpha(s, +Inf) = 0
//	BoseAlpha(s, alpha) = NaN for alpha < 0, for NaN and for any other order
//
// Accuracy: 7 eps relative (TestBoseAccuracy, α from 1e-300 to 700).
func BoseAlpha(s, alpha float64) float64 {
	if b := boseOrder(s); b != nil {
		return b.atAlpha(alpha)
	}
	if s == 1 {
		return EinsteinLogQ(alpha) // -ln(1-e^-α)
	}
	return math.NaN()
}

// BoseAlphas is [BoseAlpha] for every element of alpha.
func BoseAlphas(dst []float64, s float64, alpha []float64) []float64 {
	dst = destination("BoseAlphas", dst, alpha)
	b := boseOrder(s)
	for i, v := range alpha {
		if b != nil {
			dst[i] = b.atAlpha(v)
		} else {
			dst[i] = BoseAlpha(s, v)
		}
	}
	return dst
}
