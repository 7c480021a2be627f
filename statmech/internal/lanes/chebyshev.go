package lanes

// Chebyshevs is how many polynomials [ChebyshevMoments] uses.
const Chebyshevs = 20

// ChebyshevMoments returns Σ weightᵢ Tₖ(tᵢ), k = 0 … 19, with t = (w-mid)/half in
// [-1, 1]. The points are added up in eight lanes, the lanes at the end.
func ChebyshevMoments(w, weight []float64, mid, half float64) (moment [Chebyshevs]float64) {
	weight = weight[:len(w)]
	var sum [Chebyshevs][Width]float64
	k := 0
	if vector && len(w) >= Width {
		chebyshev8(&sum, &w[0], &weight[0], len(w)/Width, mid, half)
		k = len(w) &^ (Width - 1)
	}
	for ; k < len(w); k++ {
		l := k % Width
		t := (w[k] - mid) / half
		// The recurrence carries the weight along.
		t0 := weight[k]
		t1 := float64(t0 * t)
		t += t
		for n := 0; n < Chebyshevs; n += 2 {
			sum[n][l] += t0
			sum[n+1][l] += t1
			t0 = float64(t*t1) - t0
			t1 = float64(t*t0) - t1
		}
	}
	for n, s := range sum {
		moment[n] = ((s[0] + s[1]) + (s[2] + s[3])) + ((s[4] + s[5]) + (s[6] + s[7]))
	}
	return moment
}
