package display

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"

	"levelsum/display/internal/mark"
)

// TableOf makes a table of a slice of structs, one column for each exported
// field. A tag gives the head, as data files have it:
//
//	type row struct {
//		T  unit.Temperature
//		Cp float64 `display:"C_p/(J/(mol K))"`
//		U  float64 `display:"u"` // standard uncertainty of the field before
//	}
func TableOf(rows any) (Table, error) {
	v := reflect.ValueOf(rows)
	if v.Kind() != reflect.Slice && v.Kind() != reflect.Array {
		return Table{}, &Refusal{"Table", fmt.Sprintf("want a slice of structs, not a %T", rows)}
	}
	st := v.Type().Elem()
	pointers := st.Kind() == reflect.Pointer
	if pointers {
		st = st.Elem()
	}
	if st.Kind() != reflect.Struct {
		return Table{}, &Refusal{"Table", fmt.Sprintf("want a slice of structs, not a %T", rows)}
	}
	n := v.Len()
	if pointers {
		for i := range n {
			if v.Index(i).IsNil() {
				return Table{}, &Refusal{"Table", fmt.Sprintf("row %d is nil", i)}
			}
		}
	}
	var t Table
	for f := range st.NumField() {
		field := st.Field(f)
		tag := field.Tag.Get("display")
		if !field.IsExported() || tag == "-" {
			continue
		}
		vals := reflect.MakeSlice(reflect.SliceOf(field.Type), n, n)
		for i := range n {
			row := v.Index(i)
			if pointers {
				row = row.Elem()
			}
			vals.Index(i).Set(row.Field(f))
		}
		if tag == "u" && len(t.Columns) > 0 {
			t.Columns[len(t.Columns)-1].U = vals.Interface()
			continue
		}
		c := Column{Quantity: field.Name, Values: vals.Interface()}
		if tag != "" {
			c.Quantity, c.Unit = splitHead(tag)
		} else if len(field.Name) > 1 {
			c.Quantity = strings.ReplaceAll(field.Name, "_", " ")
		}
		t.Columns = append(t.Columns, c)
	}
	if len(t.Columns) == 0 {
		return t, &Refusal{"Table", fmt.Sprintf("%s has no exported fields", st)}
	}
	return t, nil
}

// splitHead takes a head "quantity/unit" apart at the first slash outside
// braces and parentheses.
func splitHead(s string) (quantity, unit string) {
	depth := 0
	for i, r := range s {
		switch r {
		case '(', '{':
			depth++
		case ')', '}':
			depth--
		case '/':
			if depth > 0 {
				continue
			}
			unit = strings.TrimSpace(s[i+1:])
			if strings.HasPrefix(unit, "(") && strings.HasSuffix(unit, ")") {
				unit = unit[1 : len(unit)-1]
			}
			return strings.TrimSpace(s[:i]), unit
		}
	}
	return strings.TrimSpace(s), ""
}

// Correlation makes a table of the correlation coefficients of named
// quantities, from a matrix of correlations (Dims, At, or [][]float64) or,
// with standard uncertainties on its diagonal that are not 1, of covariances.
// It is refused if it is not a correlation matrix: not symmetric, or with
// coefficients beyond ±1.
func Correlation(names []string, m any) (Table, error) {
	z, err := readGrid("the matrix", m)
	if err != nil {
		return Table{}, refuse("Correlation", err)
	}
	n := len(names)
	if len(z) != n || n == 0 || len(z[0]) != n {
		return Table{}, &Refusal{"Correlation", fmt.Sprintf("%d names, but the matrix has %d rows", n, len(z))}
	}
	sd := make([]float64, n)
	for i := range z {
		if !(z[i][i] > 0) {
			return Table{}, &Refusal{"Correlation", fmt.Sprintf("the diagonal element of %s is %v, want a positive number", names[i], z[i][i])}
		}
		sd[i] = math.Sqrt(z[i][i])
	}
	t := Table{Caption: "Correlation coefficients", Columns: []Column{{Quantity: "", Values: plainAll(names)}}}
	for j := range n {
		col := make([]float64, n)
		for i := range n {
			r := z[i][j] / (sd[i] * sd[j])
			if math.Abs(z[i][j]-z[j][i]) > 1e-9*sd[i]*sd[j] {
				return Table{}, &Refusal{"Correlation", fmt.Sprintf("the matrix is not symmetric at %s, %s", names[i], names[j])}
			}
			if !(math.Abs(r) <= 1+1e-9) {
				return Table{}, &Refusal{"Correlation", fmt.Sprintf("the coefficient of %s and %s is %v, beyond ±1", names[i], names[j], r)}
			}
			col[i] = min(max(r, -1), 1)
		}
		t.Columns = append(t.Columns, Column{Quantity: names[j], Unit: "1", Values: col, Digits: 4})
	}
	return t, nil
}

func plainAll(names []string) []string {
	out := slices.Clone(names)
	for i := range out {
		out[i] = mark.Plain(mark.Symbol(out[i]))
	}
	return out
}
