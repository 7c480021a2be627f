package rerun

import (
	"encoding/json"
	"fmt"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
)

// numberPattern finds numbers in text; digits that belong to a word (H2, In[3]
// is not one) are left to the text.
var numberPattern = regexp.MustCompile(`[-+−]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?`)

// compareText compares two texts line by line: what is not a number must be
// equal, numbers are compared as numbers.
func compareText(old, now string) Finding {
	if old == now {
		return Finding{}
	}
	a, b := strings.Split(old, "\n"), strings.Split(now, "\n")
	f := Finding{}
	differ := 0
	for i := range max(len(a), len(b)) {
		var x, y string
		if i < len(a) {
			x = a[i]
		}
		if i < len(b) {
			y = b[i]
		}
		v := Moved
		if i < len(a) && i < len(b) {
			v = judgeLine(x, y)
		}
		if v.Differs() {
			differ++
		}
		f.take(Finding{Verdict: v, Old: clip(strings.TrimSpace(x), 60), Now: clip(strings.TrimSpace(y), 60)})
	}
	if differ > 1 {
		f.Note = fmt.Sprintf("%d lines differ", differ)
	}
	return f
}

func judgeLine(a, b string) Verdict {
	if a == b {
		return Identical
	}
	na, nb := numberPattern.FindAllStringIndex(a, -1), numberPattern.FindAllStringIndex(b, -1)
	if len(na) != len(nb) {
		return Moved
	}
	v := Identical
	ia, ib := 0, 0
	for k := range na {
		if a[ia:na[k][0]] != b[ib:nb[k][0]] {
			return Moved
		}
		x, y := a[na[k][0]:na[k][1]], b[nb[k][0]:nb[k][1]]
		if x != y {
			p, errp := readNumber(x)
			q, errq := readNumber(y)
			if errp != nil || errq != nil {
				return Moved
			}
			// Numbers that are the same but spelled otherwise (1.0, 1.00) are
			// a change of the text.
			if w := judge(p, q, math.Abs(p)); w == Identical || w == Moved {
				return Moved
			}
			v = Rounding
		}
		ia, ib = na[k][1], nb[k][1]
	}
	if a[ia:] != b[ib:] {
		return Moved
	}
	return v
}

func readNumber(s string) (float64, error) {
	return strconv.ParseFloat(strings.Replace(s, "−", "-", 1), 64)
}

// A textTable is a table in the plain form in which display writes it: a line
// of titles, a line of dashes that says where the columns are, the rows, and
// notes after an empty line.
type textTable struct {
	before, after string
	titles        []string
	rows          [][]string
}

// readTable reads a table; ok is false if s is none.
func readTable(s string) (t textTable, ok bool) {
	lines := strings.Split(s, "\n")
	at := slices.IndexFunc(lines, func(l string) bool {
		return strings.HasPrefix(l, "-") && strings.Trim(l, "- ") == ""
	})
	if at < 1 {
		return t, false
	}
	var starts []int
	for i, c := range lines[at] {
		if c == '-' && (i == 0 || lines[at][i-1] == ' ') {
			starts = append(starts, i)
		}
	}
	cut := func(l string) []string {
		r := []rune(l)
		var cells []string
		for i, from := range starts {
			to := len(r)
			if i+1 < len(starts) {
				to = min(to, starts[i+1])
			}
			cells = append(cells, strings.TrimSpace(string(r[min(from, len(r)):to])))
		}
		return cells
	}
	// A line that writes across the gap between two columns is no row.
	isRow := func(l string) bool {
		r := []rune(l)
		for _, from := range starts[1:] {
			if from <= len(r) && strings.TrimSpace(string(r[max(from-2, 0):from])) != "" {
				return false
			}
		}
		return strings.TrimSpace(l) != ""
	}
	t.before = strings.Join(lines[:at-1], "\n")
	t.titles = cut(lines[at-1])
	end := at + 1
	for end < len(lines) && isRow(lines[end]) {
		t.rows = append(t.rows, cut(lines[end]))
		end++
	}
	t.after = strings.Join(lines[end:], "\n")
	return t, true
}

// A cell of a table: a number with its uncertainty in the last digits in
// parentheses, 343.21(70), perhaps with a power of ten.
var cellPattern = regexp.MustCompile(`^([-+−]?\d+)(?:\.(\d+))?(?:\((\d+)\))?(×10([⁻⁺⁰¹²³⁴⁵⁶⁷⁸⁹]+))?$`)

var plainDigits = strings.NewReplacer("⁻", "-", "⁺", "+", "⁰", "0", "¹", "1", "²", "2", "³", "3", "⁴", "4", "⁵", "5",
	"⁶", "6", "⁷", "7", "⁸", "8", "⁹", "9")

// readCell reads a number of a table and its uncertainty, 0 if it has none.
func readCell(s string) (x, u float64, ok bool) {
	m := cellPattern.FindStringSubmatch(s)
	if m == nil {
		x, err := readNumber(s)
		return x, 0, err == nil
	}
	exp := ""
	if m[5] != "" {
		exp = "e" + plainDigits.Replace(m[5])
	}
	digits := m[1]
	if m[2] != "" {
		digits += "." + m[2]
	}
	x, err := readNumber(digits + exp)
	if err != nil {
		return 0, 0, false
	}
	if m[3] != "" {
		n, err := strconv.ParseFloat(m[3], 64)
		if err != nil {
			return 0, 0, false
		}
		scale := math.Pow10(-len(m[2]))
		if exp != "" {
			e, err := strconv.Atoi(exp[1:])
			if err != nil {
				return 0, 0, false
			}
			scale *= math.Pow10(e)
		}
		u = n * scale
	}
	return x, u, true
}

// compareTables compares two tables cell by cell.
func compareTables(old, now string) Finding {
	if old == now {
		return Finding{}
	}
	a, _ := readTable(old)
	b, _ := readTable(now)
	if !slices.Equal(a.titles, b.titles) {
		return Finding{Verdict: Moved, Old: strings.Join(a.titles, ", "), Now: strings.Join(b.titles, ", "), Note: "the columns differ"}
	}
	f := compareText(a.before, b.before)
	f.take(compareText(a.after, b.after))
	if len(a.rows) != len(b.rows) {
		f.take(Finding{Verdict: Moved, Old: fmt.Sprintf("%d rows", len(a.rows)), Now: fmt.Sprintf("%d rows", len(b.rows))})
	}
	differ := 0
	for c, title := range a.titles {
		scale := 0.0
		for _, r := range a.rows {
			if x, _, ok := readCell(r[c]); ok {
				scale = math.Max(scale, math.Abs(x))
			}
		}
		for r := range min(len(a.rows), len(b.rows)) {
			s, n := a.rows[r][c], b.rows[r][c]
			if s == n {
				continue
			}
			g := Finding{Verdict: Moved, Old: s, Now: n, Note: fmt.Sprintf("row %d, %s", r+1, title)}
			x, u, ok1 := readCell(s)
			y, w, ok2 := readCell(n)
			if ok1 && ok2 {
				g.Delta = y - x
				if g.Verdict = judge(x, y, scale); g.Verdict == Identical {
					g.Verdict = Moved // the uncertainty or the spelling changed
				}
				if u > 0 {
					g.DeltaU = g.Delta / u
					if g.Verdict == Moved && math.Abs(g.Delta) <= u && math.Abs(w-u) <= changeOfU*u {
						g.Verdict = InsideU
					}
				}
			}
			if g.Verdict.Differs() {
				differ++
			}
			f.take(g)
		}
	}
	f.addMore(differ, "cell")
	return f
}

// addMore says that the finding stands for several places.
func (f *Finding) addMore(differ int, what string) {
	switch {
	case differ <= 1:
		return
	case differ > 2:
		what += "s"
	}
	if f.Note != "" {
		f.Note += ", and "
	}
	f.Note += fmt.Sprintf("%d more %s", differ-1, what)
}

// compareJSON compares two JSON values; numbers of one list share its scale.
func compareJSON(old, now any) Finding {
	var f Finding
	differ := 0
	walkJSON(&f, &differ, "", old, now, 0)
	f.addMore(differ, "number")
	return f
}

func walkJSON(f *Finding, differ *int, at string, old, now any, scale float64) {
	moved := func(note string) {
		*differ++
		f.take(Finding{Verdict: Moved, Old: clip(fmt.Sprint(old), 60), Now: clip(fmt.Sprint(now), 60), Note: strings.TrimPrefix(at, ".") + note})
	}
	switch a := old.(type) {
	case json.Number:
		b, ok := now.(json.Number)
		if !ok {
			moved("")
			return
		}
		x, errx := a.Float64()
		y, erry := b.Float64()
		if errx != nil || erry != nil {
			moved("")
			return
		}
		switch v := judge(x, y, math.Max(scale, math.Abs(x))); {
		case v.Differs():
			moved("")
			if f.Delta == 0 {
				f.Delta = y - x
			}
		default:
			f.take(Finding{Verdict: v})
		}
	case []any:
		b, ok := now.([]any)
		if !ok || len(a) != len(b) {
			moved(fmt.Sprintf(": %d values", len(a)))
			return
		}
		s := 0.0
		for _, x := range a {
			if n, ok := x.(json.Number); ok {
				if v, err := n.Float64(); err == nil {
					s = math.Max(s, math.Abs(v))
				}
			}
		}
		for i := range a {
			walkJSON(f, differ, fmt.Sprintf("%s[%d]", at, i), a[i], b[i], s)
		}
	case map[string]any:
		b, ok := now.(map[string]any)
		if !ok {
			moved("")
			return
		}
		for _, k := range sortedKeys(a, b) {
			x, ok1 := a[k]
			y, ok2 := b[k]
			if ok1 != ok2 {
				*differ++
				f.take(Finding{Verdict: Moved, Note: strings.TrimPrefix(at+"."+k, ".")})
				continue
			}
			walkJSON(f, differ, at+"."+k, x, y, 0)
		}
	default:
		if old != now {
			moved("")
		}
	}
}

func sortedKeys(a, b map[string]any) []string {
	var keys []string
	for k := range a {
		keys = append(keys, k)
	}
	for k := range b {
		if _, ok := a[k]; !ok {
			keys = append(keys, k)
		}
	}
	slices.Sort(keys)
	return keys
}
