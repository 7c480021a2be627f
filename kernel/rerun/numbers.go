package rerun

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"levelsum/kernel/notebook"
)

// numbersType is the media type under which a paragraph or a derivation stores
// the numbers in it: a list of objects like that of a named result.
const numbersType = "application/vnd.levelsum.numbers+json"

// liveNumbers returns the numbers that an output stores; ok is false if it
// stores none or they are broken.
func liveNumbers(o notebook.Output) (rs []Result, ok bool) {
	list, ok := o.Data[numbersType].([]any)
	if !ok {
		return nil, false
	}
	for _, x := range list {
		r, err := parseResult(x)
		if err != nil {
			return nil, false
		}
		rs = append(rs, r)
	}
	return rs, true
}

// compareLive compares two paragraphs or derivations: each number by its name,
// and the words. A word or a numeral that is typed in the text is one of the
// words; the digits of a number that has moved are not reported twice.
func compareLive(f Finding, old, cur notebook.Output) []Finding {
	a, _ := liveNumbers(old)
	b, _ := liveNumbers(cur)
	all := compareByName("number", f.Cell, a, b)
	moved := false
	for i := range all {
		moved = moved || all[i].Verdict != Identical
		where := f.Name
		if all[i].Note != "" {
			where += "; " + all[i].Note
		}
		all[i].Note = where
	}
	f.Kind = "text"
	for _, m := range []string{"text/plain", "text/markdown", "text/html", "text/latex"} {
		x, _ := old.Data[m].(string)
		y, _ := cur.Data[m].(string)
		if moved && m != "text/plain" {
			continue // another spelling of the same
		}
		if moved {
			x = withoutNumbers(x, a)
			y = withoutNumbers(y, b)
		}
		f.take(compareText(x, y))
	}
	return append(all, f)
}

var exponentDigits = strings.NewReplacer("⁻", "", "⁺", "", "⁰", "", "¹", "", "²", "", "³", "", "⁴", "", "⁵", "", "⁶", "", "⁷", "", "⁸", "", "⁹", "")

// withoutNumbers takes out of a text what shows one of the numbers or its
// uncertainty, rounded, and how many digits it has.
func withoutNumbers(s string, live []Result) string {
	return exponentDigits.Replace(numberPattern.ReplaceAllStringFunc(s, func(token string) string {
		for _, r := range live {
			if shows(token, r.Value) || r.HasU && shows(token, r.U) {
				return "#"
			}
		}
		return token
	}))
}

// shows says whether a numeral has the leading digits of x, up to one unit of
// the last one.
func shows(token string, x float64) bool {
	mantissa, _, _ := strings.Cut(strings.ToLower(token), "e")
	digits := strings.TrimLeft(strings.Map(func(r rune) rune {
		if r >= '0' && r <= '9' {
			return r
		}
		return -1
	}, mantissa), "0")
	if digits == "" {
		return math.Abs(x) < 0.5
	}
	if len(digits) > 17 || x == 0 || math.IsNaN(x) || math.IsInf(x, 0) {
		return false
	}
	want, _, _ := strings.Cut(strconv.FormatFloat(math.Abs(x), 'e', len(digits)-1, 64), "e")
	n, err1 := strconv.ParseInt(digits, 10, 64)
	m, err2 := strconv.ParseInt(strings.Replace(want, ".", "", 1), 10, 64)
	return err1 == nil && err2 == nil && max(n-m, m-n) <= 1
}

// compareByName compares two lists of numbers: the n-th of a name belongs to
// the n-th stored one.
func compareByName(kind string, cell int, old, cur []Result) []Finding {
	type key struct {
		name string
		n    int
	}
	index := func(rs []Result) (keys []key, by map[key]Result) {
		by = map[key]Result{}
		count := map[string]int{}
		for _, r := range rs {
			k := key{r.Name, count[r.Name]}
			count[r.Name]++
			keys, by[k] = append(keys, k), r
		}
		return keys, by
	}
	place := func(r Result) int {
		if cell > 0 {
			return cell
		}
		return r.Cell
	}
	oldKeys, oldBy := index(old)
	curKeys, curBy := index(cur)
	var all []Finding
	for _, k := range curKeys {
		n := curBy[k]
		f := Finding{Kind: kind, Cell: place(n), Name: k.name, Now: n.text()}
		o, ok := oldBy[k]
		if !ok {
			f.Verdict = New
			all = append(all, f)
			continue
		}
		f.Old = o.text()
		f.Verdict, f.Note = judgeResult(o, n)
		if d := n.Value - o.Value; o.Unit == n.Unit && !math.IsNaN(d) && !math.IsInf(d, 0) {
			f.Delta = d
			if o.U > 0 {
				f.DeltaU = d / o.U
			}
		}
		all = append(all, f)
	}
	for _, k := range oldKeys {
		if _, ok := curBy[k]; !ok {
			o := oldBy[k]
			all = append(all, Finding{Kind: kind, Cell: place(o), Name: k.name, Verdict: Missing, Old: o.text()})
		}
	}
	return all
}

// text writes a result at full precision.
func (r Result) text() string {
	s := fmt.Sprint(r.Value)
	if r.HasU {
		s += fmt.Sprintf(" ± %v", r.U)
	}
	if r.Unit != "" && r.Unit != "1" {
		s += " " + r.Unit
	}
	return s
}
