package solid

import (
	"math"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"

	"levelsum/statmech/internal/lanes"
)

// A rule is a quadrature over a density of states: ∫ g f dω ≈ Σ weightᵢ f(wᵢ)
// for the f of a harmonic mode at every temperature from low on.
//
// The frequencies are cut into panels that double in width from ω = 0 up to
// 4 low, are 4 low wide up to ω = 45 low and grow as ω beyond, where only
// temperatures above ω/45 still see them. In each, f is replaced by its
// interpolation at 20 Chebyshev nodes, and the weights of the nodes are the
// integrals of g times Lagrange's polynomials. Panels with fewer points than
// that keep their points.
type rule struct {
	low       float64 // K
	first     float64 // K, where the lowest panel begins; Gauss points below
	w, weight []float64
}

const (
	panelNodes = lanes.Chebyshevs
	// rulesKept is how many rules a Phonons remembers.
	rulesKept = 4
)

// rule returns a rule for temperatures from T on.
func (p *Phonons) rule(T float64) rule {
	// A lowest temperature of a few fixed ones in a decade, so that single
	// calls at different temperatures share rules. Nothing is gained above the
	// highest frequency.
	top := p.knots[len(p.knots)-1].w
	low := min(T, top)
	low = math.Exp2(math.Floor(math.Log2(low)))
	p.mu.Lock()
	defer p.mu.Unlock()
	for _, r := range p.rules {
		if r.low == low {
			return r
		}
	}
	r := p.makeRule(low)
	p.rules = append([]rule{r}, p.rules[:min(len(p.rules), rulesKept-1)]...)
	return r
}

func (p *Phonons) makeRule(low float64) rule {
	r := rule{low: low}
	top := p.knots[len(p.knots)-1].w
	// The lowest panel begins where what is below no longer counts: g grows as
	// ω², so 2^-18 of the first interval holds 2^-54 of its states; a density
	// that does not vanish at 0 needs more.
	first := p.knots[0].w
	if first == 0 {
		doublings := 18
		if p.knots[0].g > 0 {
			doublings = 56
		}
		start := min(p.knots[1].w, 4*low)
		first = start * math.Exp2(-float64(doublings))
		r.first = first
		r.piece(p, 0, 0, first, first)
	}
	// The panels, then their points, which are independent.
	var panels []panel
	cell := 0
	for a := first; a < top; {
		width := a
		if width > 4*low {
			width = max(4*low, a*4/45)
		}
		b := min(a+width, top)
		if top-b < 1e-9*top {
			b = top
		}
		for p.knots[cell+1].w <= a {
			cell++
		}
		panels = append(panels, panel{a, b, cell})
		a = b
	}
	parts := make([]rule, len(panels))
	inTurn(len(panels), len(p.knots) > 4000, func(next func() (int, bool)) {
		var points rule
		for i, ok := next(); ok; i, ok = next() {
			c := panels[i]
			points.w, points.weight = points.w[:0], points.weight[:0]
			for k := c.cell; k < len(p.knots)-1 && p.knots[k].w < c.b; k++ {
				if k = points.wholeCells(p, k, c); k == len(p.knots)-1 || p.knots[k].w >= c.b {
					break
				}
				points.piece(p, k, max(c.a, p.knots[k].w), min(c.b, p.knots[k+1].w), c.b-c.a)
			}
			w, weight := points.condensed(c.a, c.b)
			if len(w) == len(points.w) {
				w, weight = slices.Clone(w), slices.Clone(weight)
			}
			parts[i] = rule{w: w, weight: weight}
		}
	})
	for _, part := range parts {
		r.add(part.w, part.weight)
	}
	return r
}

// A panel reaches from a to b, from the cell between two knots on.
type panel struct {
	a, b float64
	cell int
}

// inTurn calls f on every processor if the work is worth it, else once, and
// waits. Each f asks next for indexes from 0 … n-1 until there are no more.
func inTurn(n int, worth bool, f func(next func() (int, bool))) {
	var taken atomic.Int64
	next := func() (int, bool) {
		i := int(taken.Add(1)) - 1
		return i, i < n
	}
	workers := min(runtime.GOMAXPROCS(0), n)
	if !worth || workers < 2 {
		f(next)
		return
	}
	var wait sync.WaitGroup
	for range workers {
		wait.Go(func() { f(next) })
	}
	wait.Wait()
}

func (r *rule) add(w, weight []float64) {
	r.w = append(r.w, w...)
	r.weight = append(r.weight, weight...)
}

// piece adds Gauss points for the part from a to b of the cubic between knots i
// and i+1, in a panel of the given width. Six points are exact for the cubic
// times a polynomial of degree eight; parts that are wide against their
// distance from ω = 0 are cut, and four points do for parts that are small
// against the panel.
func (r *rule) piece(p *Phonons, i int, a, b, panel float64) {
	if !(b > a) {
		return
	}
	parts := 1
	if b-a > a/8 && a > 0 {
		parts = min(8, int(math.Ceil(8*(b-a)/a)))
	}
	nodes, weights := gauss6Nodes[:], gauss6Weights[:]
	if b-a < panel/16 {
		nodes, weights = gauss4Nodes[:], gauss4Weights[:]
	}
	n := len(nodes)
	at := len(r.w)
	r.w, r.weight = slices.Grow(r.w, parts*n)[:at+parts*n], slices.Grow(r.weight, parts*n)[:at+parts*n]
	h := (b - a) / float64(parts)
	for k := range parts {
		mid := a + h*(float64(k)+0.5)
		for j, node := range nodes {
			v := mid + h/2*node
			r.w[at], r.weight[at] = v, h/2*weights[j]*p.density(i, v)
			at++
		}
	}
}

// wholeCells adds the points of piece for the cells from i on that are whole and
// small in the panel, and returns the first that is not. These are most cells of
// a long table; the points are at known places between the knots.
func (r *rule) wholeCells(p *Phonons, i int, c panel) int {
	if p.knots[i].w < c.a {
		return i
	}
	small := (c.b - c.a) / 16
	for ; i < len(p.knots)-1; i++ {
		x, y := &p.knots[i], &p.knots[i+1]
		h := y.w - x.w
		if y.w > c.b || h >= small || h > x.w/8 {
			break
		}
		const n = len(inCell4)
		at := len(r.w)
		if at+n > min(cap(r.w), cap(r.weight)) {
			r.w, r.weight = slices.Grow(r.w, n), slices.Grow(r.weight, n)
		}
		r.w, r.weight = r.w[:at+n], r.weight[:at+n]
		w, weight := (*[n]float64)(r.w[at:]), (*[n]float64)(r.weight[at:])
		half := h / 2
		mid, slopeX, slopeY := x.w+half, h*x.slope, h*y.slope
		for j := range inCell4 {
			q := &inCell4[j]
			w[j] = mid + float64(half*q.node)
			density := (float64(q.gX*x.g) + float64(q.gY*y.g)) + (float64(q.slopeX*slopeX) + float64(q.slopeY*slopeY))
			weight[j] = half * q.weight * density
		}
	}
	return i
}

// inCell is a Gauss point of a cell from -1 to 1, and what the values and slopes
// at the two knots contribute to the cubic there.
type inCell struct{ node, weight, gX, gY, slopeX, slopeY float64 }

func inCellAt(j int) inCell {
	node := gauss4Nodes[j]
	t, u := (1+node)/2, (1-node)/2
	return inCell{node, gauss4Weights[j], u * u * (1 + 2*t), t * t * (1 + 2*u), t * u * u, -t * t * u}
}

var inCell4 = [...]inCell{inCellAt(0), inCellAt(1), inCellAt(2), inCellAt(3)}

// condensed returns the panel's points, or Chebyshev nodes in their place if
// those are fewer.
func (r rule) condensed(a, b float64) (w, weight []float64) {
	if len(r.w) <= panelNodes {
		return r.w, r.weight
	}
	mid, half := (a+b)/2, (b-a)/2
	w, weight = make([]float64, 0, panelNodes), make([]float64, panelNodes)
	moment := lanes.ChebyshevMoments(r.w, r.weight, mid, half) // ∫ g Tₖ dω
	// Weight of node j: (1/n) Σ' 2 Tₖ(tⱼ) moment_k.
	for j := range panelNodes {
		t := math.Cos(math.Pi * (float64(j) + 0.5) / panelNodes)
		w = append(w, mid+half*t)
		sum := moment[0]
		t0, t1 := 1.0, t
		for k := 1; k < panelNodes; k++ {
			t0, t1 = t1, 2*t*t1-t0
			sum += 2 * t0 * moment[k]
		}
		weight[j] = sum / panelNodes
	}
	return w, weight
}

// Gauss-Legendre points on [-1, 1]: Abramowitz and Stegun, table 25.4, n = 4
// and 6.
var (
	gauss4Nodes   = [...]float64{-0.861136311594052575223946488893, -0.339981043584856264802665759103, 0.339981043584856264802665759103, 0.861136311594052575223946488893}
	gauss4Weights = [...]float64{0.347854845137453857373063949222, 0.652145154862546142626936050778, 0.652145154862546142626936050778, 0.347854845137453857373063949222}

	gauss6Nodes = [...]float64{
		-0.932469514203152027812301554494, -0.661209386466264513661399595020, -0.238619186083196908630501721681,
		0.238619186083196908630501721681, 0.661209386466264513661399595020, 0.932469514203152027812301554494,
	}
	gauss6Weights = [...]float64{
		0.171324492379170345040296142173, 0.360761573048138607569833513838, 0.467913934572691047389870343990,
		0.467913934572691047389870343990, 0.360761573048138607569833513838, 0.171324492379170345040296142173,
	}
)
