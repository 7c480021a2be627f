package rerun

import (
	"fmt"
	"math"
	"strconv"
)

// A Verdict says how a number or an output that was computed again stands to
// the stored one. A larger verdict is a worse one.
type Verdict int

const (
	// Identical: the same to the last bit, or the same text.
	Identical Verdict = iota
	// Rounding: a relative difference of at most 1e-9, or an absolute one below
	// 1e-12 of the scale. Machines and compilers differ by that much.
	Rounding
	// InsideU: a difference of at most one standard uncertainty of the stored
	// result, whose uncertainty itself has not changed by more than a tenth.
	InsideU
	// Noted: something else than a number differs that may explain a difference
	// and is none by itself, such as the version of Go.
	Noted
	// Moved: anything else.
	Moved
	// New: there is nothing stored to compare with.
	New
	// Missing: what is stored was not computed again.
	Missing
)

var verdictWords = [...]string{"identical", "rounding-level", "inside u", "noted", "moved", "new", "missing"}

func (v Verdict) String() string { return verdictWords[v] }

// MarshalText gives the verdict's words in JSON.
func (v Verdict) MarshalText() ([]byte, error) { return []byte(v.String()), nil }

// Differs says that the stored document does not say what a run gives.
func (v Verdict) Differs() bool { return v >= Moved }

const (
	relativeRounding = 1e-9
	absoluteRounding = 1e-12 // of the scale
	changeOfU        = 0.1   // house rule: above this the uncertainty itself has moved
)

// judge compares two numbers; scale is the natural size of what they belong
// to, for numbers near zero.
func judge(old, now, scale float64) Verdict {
	switch {
	case old == now || math.IsNaN(old) && math.IsNaN(now):
		return Identical
	case math.IsNaN(old) || math.IsNaN(now) || math.IsInf(old, 0) || math.IsInf(now, 0):
		return Moved
	}
	d := math.Abs(now - old)
	if d <= relativeRounding*math.Max(math.Abs(old), math.Abs(now)) || d < absoluteRounding*scale {
		return Rounding
	}
	return Moved
}

// judgeResult compares a named result with the stored one and says in words
// what changed if it is not the value alone.
func judgeResult(old, now Result) (Verdict, string) {
	switch {
	case old.Unit != now.Unit:
		return Moved, fmt.Sprintf("the unit was %q, now %q", old.Unit, now.Unit)
	case old.HasU && !now.HasU:
		return Moved, "it had a standard uncertainty, now none"
	case !old.HasU && now.HasU:
		return Moved, "it had no standard uncertainty, now one"
	}
	v := judge(old.Value, now.Value, math.Max(math.Abs(old.Value), old.U))
	if !old.HasU {
		if v != Moved && old.Withheld != now.Withheld {
			return Moved, "the reason for giving no standard uncertainty changed"
		}
		return v, ""
	}
	du := judge(old.U, now.U, old.U)
	if v == Moved && math.Abs(now.Value-old.Value) <= old.U {
		v = InsideU
	}
	if du == Moved {
		if math.Abs(now.U-old.U) > changeOfU*old.U {
			return Moved, "the standard uncertainty was " + shortNumber(old.U) + ", now " + shortNumber(now.U)
		}
		du = InsideU
	}
	return max(v, du), ""
}

// shortNumber writes a number with what matters of it for a message.
func shortNumber(x float64) string { return strconv.FormatFloat(x, 'g', 4, 64) }
