package special

// poly11 and poly12 evaluate polynomials pairwise in t² and t⁴, the last two
// steps plain Horner; see poly8.
func poly11(c *[12]float64, t float64) float64 {
	t2 := float64(t * t)
	t4 := float64(t2 * t2)
	a := float64(c[3]*t) + c[2] + float64(t2*(float64(c[5]*t)+c[4]))
	b := float64(c[7]*t) + c[6] + float64(t2*(float64(c[9]*t)+c[8]))
	b += float64(t4 * (float64(c[11]*t) + c[10]))
	return float64((float64((a+float64(t4*b))*t)+c[1])*t) + c[0]
}

func poly12(c *[13]float64, t float64) float64 {
	t2 := float64(t * t)
	t4 := float64(t2 * t2)
	a := float64(c[3]*t) + c[2] + float64(t2*(float64(c[5]*t)+c[4]))
	b := float64(c[7]*t) + c[6] + float64(t2*(float64(c[9]*t)+c[8]))
	b += float64(t4 * (float64(t2*c[12]) + float64(c[11]*t) + c[10]))
	return float64((float64((a+float64(t4*b))*t)+c[1])*t) + c[0]
}
