package special

import (
	"encoding/csv"
	"math"
	"math/big"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

const eps = 0x1p-52

// sink keeps results that benchmarks compute.
var sink float64

// readReference returns the rows below the header of a file of testdata and
// fails if the file does not say where its digits came from.
func readReference(t testing.TB, source, name string) [][]string {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", "testdata", source, name))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"# source: ", "# how obtained: "} {
		if !strings.Contains(string(text), want) {
			t.Fatalf("%s/%s does not state %q", source, name, want)
		}
	}
	r := csv.NewReader(strings.NewReader(string(text)))
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) < 2 {
		t.Fatalf("%s/%s is empty", source, name)
	}
	return rows[1:]
}

func exactly(t testing.TB, s string) *big.Float {
	t.Helper()
	f, _, err := big.ParseFloat(s, 10, 160, big.ToNearestEven)
	if err != nil {
		t.Fatalf("%q: %v", s, err)
	}
	return f
}

func number(t testing.TB, s string) float64 {
	t.Helper()
	f, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// difference returns got - want, rounded once.
func difference(got float64, want *big.Float) float64 {
	if math.IsNaN(got) || math.IsInf(got, 0) {
		return math.Inf(1)
	}
	d, _ := new(big.Float).SetPrec(160).Sub(new(big.Float).SetFloat64(got), want).Float64()
	return d
}

// worst keeps the largest error of one function, where it was, and between
// which arguments it was looked for.
type worst struct {
	err, limit float64
	where      string
	from, to   float64
	n          int
}

// see compares got with want. The error is |got-want|/max(|want|, floor) in
// eps; one above limit is a failure of the test.
func (w *worst) see(t testing.TB, what, where string, got float64, want *big.Float, floor, limit float64) {
	t.Helper()
	ref, _ := want.Float64()
	scale := max(math.Abs(ref), floor)
	e := math.Abs(difference(got, want)) / scale / eps
	if scale == 0 {
		e = 0
		if got != 0 {
			e = math.Inf(1)
		}
	}
	if e > w.err {
		w.err, w.where = e, where
	}
	x := number(t, where[strings.LastIndex(where, " ")+1:]) // "order, argument" or "argument"
	if w.n == 0 {
		w.from, w.to = x, x
	}
	w.from, w.to, w.limit = min(w.from, x), max(w.to, x), max(w.limit, limit)
	w.n++
	if !(e <= limit) {
		t.Errorf("%s(%s) = %.17g, want %.17g: %.3g eps, limit %g", what, where, got, ref, e, limit)
	}
}

// log writes what the test found as a line of the table of accuracies (go
// generate levelsum/statmech). of says what the error is relative to, if that
// is not the value.
func (w *worst) log(t testing.TB, what, of string) {
	t.Helper()
	if of == "" {
		of = "relative"
	}
	t.Logf("largest error %.2f eps at %s", w.err, w.where)
	t.Logf("accuracy: %s | %d arguments from %.3g to %.3g | eps, %s | %.3g | %g | 30 digits (mpmath)", what, w.n, w.from, w.to, of, w.err, w.limit)
}
