package display

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"levelsum/display/internal/mark"
)

// A Column is one column of a [Table].
//
// Values is a slice of numbers, of a typed quantity, of values with
// uncertainties or of strings. A typed quantity brings its unit; to print it in
// another one give both Unit and In:
//
//	display.Column{Quantity: "E", Unit: "cm-1", Values: es, In: unit.PerCm}
//
// U holds standard uncertainties, a slice of the same kind or one number for
// all rows. Every value is rounded by its own uncertainty to two significant
// digits of it (JCGM 100:2008, 7.2.6), the digits in parentheses. Without U the
// column is rounded to Digits significant digits of its largest value, 6 if
// Digits is 0; zeros at the end of all rows are dropped. Where the smallest
// value would keep fewer than three digits of that, every value is rounded to
// Digits digits of its own; if half of them then need a power of ten, all that
// are not between 1e-3 and 1e3 have one.
type Column struct {
	Quantity string // "C_{p,m}", "\theta_D"; words stay upright, symbols are italic
	Unit     string // "J/(mol K)"
	Values   any
	U        any
	In       any
	Digits   int
}

// A Table shows columns of values as HTML, plain text and LaTeX, rounded for
// the eye; [Table.CSV] has them at full precision.
type Table struct {
	Caption string
	Columns []Column
	Notes   []string
	// Rules are the numbers of rows after which a line is drawn, as between the
	// phases of a substance: 3 draws one after the third row.
	Rules []int
	// Limit is the number of rows shown, 60 if 0; more are cut in the middle
	// with a count. The CSV has all of them.
	Limit int
}

// Notes returns notes with "; " where several conditions make one note, and
// leaves empty ones away: Notes("p° = 100 kPa", "constants: CODATA 2022").
func Notes(notes ...string) []string {
	var out []string
	for _, n := range notes {
		if n = strings.TrimSpace(n); n != "" {
			out = append(out, n)
		}
	}
	return out
}

// A sheet is a table read and checked.
type sheet struct {
	caption string
	cols    []sheetColumn
	rows    int
	notes   []string
	rules   map[int]bool // indices of rows with a line below
	limit   int
}

type sheetColumn struct {
	*column
	quantity string
	digits   int
	cells    []rounded // of the rows shown; empty entries elsewhere
	numbers  bool      // text that holds numbers
}

// Check says why the table cannot be shown.
func (t Table) Check() error {
	_, err := t.sheet()
	return err
}

func (t Table) sheet() (*sheet, error) {
	s := &sheet{caption: t.Caption, notes: Notes(t.Notes...), limit: t.Limit, rules: map[int]bool{}}
	if s.limit <= 0 {
		s.limit = 60
	}
	if len(t.Columns) == 0 {
		return nil, &Refusal{"Table", "no columns"}
	}
	uncertain := false
	for i, c := range t.Columns {
		what := fmt.Sprintf("column %d", i+1)
		if c.Quantity != "" {
			what += fmt.Sprintf(" (%s)", c.Quantity)
		}
		col, err := readColumn(what, c.Values)
		if err != nil {
			return nil, refuse("Table", err)
		}
		if c.U != nil {
			if col.u, err = readU(what, c.U, col); err != nil {
				return nil, refuse("Table", err)
			}
		}
		if err := col.applyUnit(what, c.Unit, c.In); err != nil {
			return nil, refuse("Table", err)
		}
		if i == 0 {
			s.rows = col.len()
		} else if col.len() != s.rows {
			return nil, &Refusal{"Table", fmt.Sprintf("%s has %d rows, column 1 has %d", what, col.len(), s.rows)}
		}
		if col.u != nil && len(col.u) != s.rows {
			return nil, &Refusal{"Table", fmt.Sprintf("%s has %d values and %d uncertainties", what, s.rows, len(col.u))}
		}
		for k, u := range col.u {
			if u < 0 {
				return nil, &Refusal{"Table", fmt.Sprintf("%s, row %d: the standard uncertainty is negative (%v)", what, k+1, u)}
			}
			uncertain = uncertain || u > 0
		}
		q := c.Quantity
		if q == "" {
			q = col.name
		}
		if q == "" {
			q = col.kind
		}
		if i := strings.LastIndex(q, " / "); i > 0 && col.unit == "" { // a head as data files have it
			q, col.unit = q[:i], strings.TrimSpace(q[i+3:])
			if u := col.unit; strings.HasPrefix(u, "(") && strings.HasSuffix(u, ")") {
				col.unit = u[1 : len(u)-1]
			}
		}
		s.cols = append(s.cols, sheetColumn{column: col, quantity: q, digits: c.Digits})
	}
	if uncertain {
		s.notes = append(s.notes, "In parentheses: standard uncertainty (k = 1) in the last digits.")
	}
	for _, n := range t.Rules {
		if n < 1 || n >= s.rows {
			return nil, &Refusal{"Table", fmt.Sprintf("a rule after row %d of %d", n, s.rows)}
		}
		s.rules[n-1] = true
	}
	var reasons []string
	for _, c := range s.cols {
		for _, w := range c.withheld {
			if !slices.Contains(reasons, w) {
				reasons = append(reasons, w)
				s.notes = append(s.notes, "No standard uncertainty is given where "+w+".")
			}
		}
	}
	for i := range s.cols {
		s.cols[i].format(s.shown())
	}
	return s, nil
}

// readU reads uncertainties: a slice, or one number for all rows.
func readU(what string, x any, c *column) ([]float64, error) {
	if m, err := readNumber(x); err == nil {
		if c.typ != nil && m.typ != nil && m.typ != c.typ && !sameUnit(m.unit, c.unit) {
			return nil, fmt.Errorf("%s: values are of type %s, the uncertainty of type %s", what, c.typ, m.typ)
		}
		us := make([]float64, len(c.v))
		for i := range us {
			us[i] = m.v
		}
		return us, nil
	}
	cu, err := readColumn("the uncertainties of "+what, x)
	if err != nil {
		return nil, err
	}
	if cu.text != nil {
		return nil, fmt.Errorf("the uncertainties of %s are text", what)
	}
	if c.typ != nil && cu.typ != nil && cu.typ != c.typ && !sameUnit(cu.unit, c.unit) {
		return nil, fmt.Errorf("%s: values are of type %s, uncertainties of type %s", what, c.typ, cu.typ)
	}
	if len(cu.v) != len(c.v) {
		return nil, fmt.Errorf("%s has %d values and %d uncertainties", what, len(c.v), len(cu.v))
	}
	return cu.v, nil
}

// shown returns the rows that are printed, -1 where rows are left out.
func (s *sheet) shown() []int {
	var out []int
	if s.rows <= s.limit+1 {
		for i := range s.rows {
			out = append(out, i)
		}
		return out
	}
	head := (s.limit + 1) / 2
	for i := range head {
		out = append(out, i)
	}
	out = append(out, -1)
	for i := s.rows - (s.limit - head); i < s.rows; i++ {
		out = append(out, i)
	}
	return out
}

// numberText matches numbers that have been written already, so that columns of
// them are aligned as numbers are; noNumber are words that stand for none.
var (
	numberText = regexp.MustCompile(`^\s*[-+−±]?\d+(\.\d*)?(\(\d+(\.\d+)?\))?([eE][-+]?\d+|×10[⁰¹²³⁴-⁹⁻]+)?\s*%?$`)
	noNumber   = map[string]bool{"": true, "-": true, "−": true, "—": true, "–": true, "n/a": true, "∞": true, "exact": true, "NaN": true}
)

// format rounds the cells of the rows shown.
func (c *sheetColumn) format(rows []int) {
	c.cells = make([]rounded, len(rows))
	if c.text != nil {
		c.numbers = slices.ContainsFunc(c.text, numberText.MatchString) &&
			!slices.ContainsFunc(c.text, func(s string) bool { return !numberText.MatchString(s) && !noNumber[s] })
		for k, i := range rows {
			if i >= 0 {
				c.cells[k] = rounded{word: c.text[i], split: c.numbers}
			}
		}
		return
	}
	var bare []float64
	for _, i := range rows {
		if i >= 0 && (c.u == nil || !(c.u[i] > 0)) {
			bare = append(bare, c.v[i])
		}
	}
	digits := c.digits
	if digits <= 0 {
		digits = 6
	}
	d, uniform := commonDecimals(bare, digits)
	for k, i := range rows {
		switch {
		case i < 0:
		case c.u != nil && c.u[i] > 0:
			c.cells[k] = round(c.v[i], c.u[i])
		case c.integer && math.Abs(c.v[i]) < 1<<53:
			c.cells[k] = rounded{digits: fixed(c.v[i], 0)}
		case uniform && !math.IsNaN(c.v[i]) && !math.IsInf(c.v[i], 0):
			c.cells[k] = rounded{digits: fixed(c.v[i], d)}
		default:
			c.cells[k] = plainNumber(c.v[i], digits)
		}
	}
	c.agree(rows, digits)
}

// agree writes numbers that are not between 1e-3 and 1e3 with a power of ten if
// half of the column have one, so that they can be compared.
func (c *sheetColumn) agree(rows []int, digits int) {
	with, all := 0, 0
	for _, r := range c.cells {
		if r.word == "" && r.digits != "" && strings.Trim(r.digits, "-0.") != "" {
			all++
			with += min(1, max(r.exp, -r.exp))
		}
	}
	if with == 0 || 2*with < all {
		return
	}
	for k, i := range rows {
		r := c.cells[k]
		switch {
		case i < 0 || r.word != "" || r.exp != 0 || math.Abs(c.v[i]) >= 1e-3 && math.Abs(c.v[i]) < 1e3 || c.v[i] == 0:
		case c.u != nil && c.u[i] > 0:
			c.cells[k] = roundScientific(c.v[i], c.u[i])
		default:
			c.cells[k] = scientific(c.v[i], digits)
		}
	}
}

// commonDecimals returns the decimals at which the largest of vs has n
// significant digits, less the zeros that all of them end in. It reports false
// where one number of decimals would not show the small values: they would
// keep fewer than three digits.
func commonDecimals(vs []float64, n int) (d int, ok bool) {
	big, small := 0.0, math.Inf(1)
	for _, v := range vs {
		if a := math.Abs(v); a > 0 && !math.IsInf(a, 0) {
			big, small = math.Max(big, a), math.Min(small, a)
		}
	}
	if big == 0 {
		return 0, true
	}
	d = decimalsOf(big, n)
	if d < 0 || big < 1e-3 || big >= 1e9 {
		return 0, false
	}
	if exponent(small)+d < 2 {
		exact := true
		for _, v := range vs {
			shown, _ := strconv.ParseFloat(fixed(v, d), 64)
			exact = exact && (math.IsNaN(v) || math.IsInf(v, 0) || math.Abs(shown-v) <= 1e-9*math.Abs(v))
		}
		if !exact {
			return 0, false
		}
	}
	need := 0
	for _, v := range vs {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			continue
		}
		if _, frac, found := strings.Cut(trimZeros(fixed(v, d)), "."); found {
			need = max(need, len(frac))
		}
	}
	return need, true
}

// Save writes the table to a file; the ending decides the form: .csv at full
// precision, .tex, .html, .txt.
func (t Table) Save(path string) error {
	s, err := t.sheet()
	if err != nil {
		return err
	}
	var out string
	switch ext := strings.ToLower(filepath.Ext(path)); ext {
	case ".csv":
		out = s.csv()
	case ".tex":
		out = s.latex()
	case ".html":
		out = "<!DOCTYPE html>\n<html lang=\"en\"><head><meta charset=\"utf-8\"/><title>" + mark.Escape(t.Caption) +
			"</title><style>:root{color-scheme:light dark}</style></head><body>\n" + s.html() + "</body></html>\n"
	case ".txt":
		out = s.text() + "\n"
	default:
		return &Refusal{"Table", fmt.Sprintf("cannot write %q: the ending is one of .csv, .tex, .html, .txt", filepath.Base(path))}
	}
	return os.WriteFile(path, []byte(out), 0o666)
}

// CSV returns the table at full precision, with "quantity / unit" heads.
func (t Table) CSV() (string, error) {
	s, err := t.sheet()
	if err != nil {
		return "", err
	}
	return s.csv(), nil
}

// LaTeX returns the table for the package booktabs.
func (t Table) LaTeX() (string, error) {
	s, err := t.sheet()
	if err != nil {
		return "", err
	}
	return s.latex(), nil
}

// View shows the table.
func (t Table) View() View {
	s, err := t.sheet()
	if err != nil {
		return refused(err)
	}
	return View{Data: map[string]any{
		"text/plain": s.text(),
		"text/html":  s.html(),
		"text/latex": s.latex(),
	}}
}
