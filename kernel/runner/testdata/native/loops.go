package native

// Tight loops, of which TestPollingCost runs the text below in a cell too.

// Harmonic sums a series.
func Harmonic(n int) float64 {
	s := 0.0
	for i := 1; i <= n; i++ {
		s += 1 / float64(i)
	}
	return s
}

// Dot is a product of two vectors with itself as often as n says.
func Dot(n int) float64 {
	a, b := make([]float64, 1000), make([]float64, 1000)
	for i := range a {
		a[i], b[i] = float64(i), float64(1000-i)
	}
	s := 0.0
	for range n / 1000 {
		for i, x := range a {
			s += x * b[i]
		}
	}
	return s
}

// Masked sums a table over and over.
func Masked(n int) float64 {
	var table [1024]float64
	for i := range table {
		table[i] = float64(i)
	}
	s := 0.0
	for i := range n {
		s += table[i&1023]
	}
	return s
}

// Mix is an integer generator.
func Mix(n int) uint64 {
	x := uint64(88172645463325252)
	for range n {
		x ^= x << 13
		x ^= x >> 7
		x ^= x << 17
	}
	return x
}

// Relax smooths a line of points.
func Relax(n int) float64 {
	u := make([]float64, 1002)
	u[0], u[1001] = 1, 2
	for range n / 1000 {
		for i := 1; i <= 1000; i++ {
			u[i] = (u[i-1] + u[i+1]) / 2
		}
	}
	return u[500]
}

// Fib is a recursion.
func Fib(n int) int {
	if n < 2 {
		return n
	}
	return Fib(n-1) + Fib(n-2)
}
