package draw

import (
	"math"
	"strconv"
	"strings"

	"levelsum/display/internal/mark"
	"levelsum/display/internal/scene"
)

// A tick is a place on an axis; a minor one has no label.
type tick struct {
	at    float64
	label []mark.Run
	major bool
}

// A ruler maps the values of an axis to places on the drawing.
type ruler struct {
	scene.Axis
	from, to float64 // places of Min and Max
	ticks    []tick
	power    int // labels are values divided by 10^power
}

// place returns where v is.
func (r *ruler) place(v float64) float64 {
	if r.Log {
		return r.from + (r.to-r.from)*math.Log(v/r.Min)/math.Log(r.Max/r.Min)
	}
	return r.from + (r.to-r.from)*(v-r.Min)/(r.Max-r.Min)
}

// newRuler makes an axis from place from to place to, with a major tick about
// every apart points.
func newRuler(a scene.Axis, from, to, apart float64) *ruler {
	r := &ruler{Axis: a, from: from, to: to}
	n := max(3, int(math.Abs(to-from)/apart))
	if a.Log {
		r.logTicks(n)
		return r
	}
	r.linearTicks(n)
	// Two labels at least, three if there is room.
	for k := n + 1; k <= 2*n && r.majors() < 3; k++ {
		r.linearTicks(k)
	}
	return r
}

func (r *ruler) majors() int {
	n := 0
	for _, t := range r.ticks {
		if t.major {
			n++
		}
	}
	return n
}

// step returns the smallest 1, 2 or 5 times a power of ten that divides span
// into at most n parts, its mantissa and its exponent.
func step(span float64, n int) (size float64, mantissa, exponent int) {
	raw := span / float64(n)
	e := int(math.Floor(math.Log10(raw)))
	for ; ; e++ {
		for _, m := range []int{1, 2, 5} {
			if s := tenth(float64(m), e); s >= raw*(1-1e-9) {
				return s, m, e
			}
		}
	}
}

// tenth returns m·10^e, rounded once.
func tenth(m float64, e int) float64 {
	v, _ := strconv.ParseFloat(strconv.FormatFloat(m, 'g', -1, 64)+"e"+strconv.Itoa(e), 64)
	return v
}

func (r *ruler) linearTicks(n int) {
	r.ticks, r.power = r.ticks[:0], 0
	span := r.Max - r.Min
	_, m, e := step(span, n)
	if big := math.Max(math.Abs(r.Min), math.Abs(r.Max)); big >= 1e5 || big < 1e-2 {
		r.power = 3 * int(math.Floor(math.Log10(big)/3))
	}
	decimals := max(0, r.power-e)
	minor := map[int]int{1: 5, 2: 4, 5: 5}[m]
	unit := tenth(float64(m), e)
	first := int(math.Ceil(r.Min/unit*float64(minor) - 1e-9))
	for k := first; ; k++ {
		v := float64(k) / float64(minor) * unit
		if v > r.Max+1e-9*span {
			break
		}
		if k%minor != 0 {
			r.ticks = append(r.ticks, tick{at: v})
			continue
		}
		// From whole numbers, so that 0.3 is not 0.30000000000000004.
		shown := tenth(float64(k/minor*m), e-r.power)
		r.ticks = append(r.ticks, tick{at: tenth(float64(k/minor*m), e), label: decimal(shown, decimals), major: true})
	}
}

// decimal writes a tick's label with a true minus sign and no negative zero.
func decimal(v float64, decimals int) []mark.Run {
	s := strconv.FormatFloat(v, 'f', decimals, 64)
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	return []mark.Run{{Text: strings.Replace(s, "-", "−", 1)}}
}

func (r *ruler) logTicks(n int) {
	lo, hi := math.Log10(r.Min), math.Log10(r.Max)
	first, last := int(math.Floor(lo+1e-12)), int(math.Ceil(hi-1e-12))
	decades := hi - lo
	if decades < 0.7 {
		// Too short for decades: places as on a linear axis.
		r.linearTicks(n)
		return
	}
	every := 1
	for _, e := range []int{1, 2, 3, 5, 10, 20, 50, 100} {
		every = e
		if decades/float64(e) <= float64(n) {
			break
		}
	}
	plain := lo > -3.01 && hi < 4.01
	also := map[int]bool{}
	switch {
	case decades < 1.6 && float64(n) >= 3*decades:
		also[2], also[5] = true, true
	case decades < 2.2 && float64(n) >= 2*decades:
		also[3] = true
	}
	for e := first; e <= last; e++ {
		for m := 1; m <= 9; m++ {
			v := tenth(float64(m), e)
			if v < r.Min*(1-1e-9) || v > r.Max*(1+1e-9) {
				continue
			}
			switch {
			case m == 1 && e%every == 0 || also[m] && every == 1:
				t := tick{at: v, major: true}
				switch {
				case plain:
					t.label = decimal(v, max(0, -e))
				case m == 1:
					t.label = []mark.Run{{Text: "10"}, {Text: strings.Replace(strconv.Itoa(e), "-", "−", 1), Shift: 1}}
				default:
					t.label = []mark.Run{{Text: strconv.Itoa(m) + "×10"}, {Text: strings.Replace(strconv.Itoa(e), "-", "−", 1), Shift: 1}}
				}
				r.ticks = append(r.ticks, t)
			case every == 1 || m == 1:
				r.ticks = append(r.ticks, tick{at: v})
			}
		}
	}
}

// widest returns the width of the widest label.
func (r *ruler) widest(size float64) float64 {
	w := 0.0
	for _, t := range r.ticks {
		w = max(w, width(t.label, size))
	}
	return w
}
