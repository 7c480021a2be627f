package uncertain

import (
	"math"
	"math/rand/v2"
	"sync"
)

// The standard normal density is covered by layers of equal area: the lowest
// reaches to zigguratEnd and holds the tail beyond it.
const (
	layers       = 256
	zigguratEnd  = 3.6541528853610088
	zigguratArea = 0.00492867323399
	mantissa     = 1 << 53
)

// A ziggurat draws from the standard normal distribution by the method of G.
// Marsaglia and W. W. Tsang, J. Stat. Softw. 5, 8 (2000), with 256 layers and
// the layer taken from other bits of the random word than the place in it (J. A.
// Doornik, An improved ziggurat method to generate normal random samples,
// University of Oxford (2005)). The place has 53 bits, so a draw is as fine as
// its layer allows.
type ziggurat struct {
	inside [layers]int64   // places below are under the curve whatever the height
	width  [layers]float64 // of a layer, per place
	height [layers + 1]float64
}

// normalLayers computes the table: the layers from the widest to the top.
var normalLayers = sync.OnceValue(func() *ziggurat {
	z := new(ziggurat)
	density := func(x float64) float64 { return math.Exp(-x * x / 2) }
	var edge [layers + 1]float64
	edge[0], edge[1] = zigguratArea/density(zigguratEnd), zigguratEnd
	for i := 2; i < layers; i++ {
		edge[i] = math.Sqrt(-2 * math.Log(zigguratArea/edge[i-1]+density(edge[i-1])))
	}
	for i := range layers {
		z.width[i] = edge[i] / mantissa
		z.inside[i] = int64(edge[i+1] / edge[i] * mantissa)
		z.height[i] = density(edge[i])
	}
	z.height[layers] = 1
	return z
})

// normals fills out with x + u times standard normal draws.
func normals(out []float64, x, u float64, source *rand.PCG) {
	z := normalLayers()
	for k := range out {
		word := source.Uint64()
		i := word & (layers - 1)
		place := int64(word) >> 10 // 53 bits and the sign
		if max(place, -place) < z.inside[i] {
			out[k] = x + float64(u*(float64(place)*z.width[i]))
			continue
		}
		out[k] = x + float64(u*z.edge(int(i), place, source))
	}
}

// edge draws where the place is beyond the next layer's width.
func (z *ziggurat) edge(i int, place int64, source *rand.PCG) float64 {
	r := rand.New(source)
	for {
		v := float64(place) * z.width[i]
		if max(place, -place) < z.inside[i] {
			return v
		}
		if i == 0 { // the tail: G. Marsaglia, Technometrics 6, 101 (1964)
			for {
				a, b := -math.Log(1-r.Float64())/zigguratEnd, -math.Log(1-r.Float64())
				if 2*b > a*a {
					return math.Copysign(zigguratEnd+a, v)
				}
			}
		}
		low, high := z.height[i], z.height[i+1]
		if low+r.Float64()*(high-low) < math.Exp(-v*v/2) {
			return v
		}
		word := source.Uint64()
		i, place = int(word&(layers-1)), int64(word)>>10
	}
}
