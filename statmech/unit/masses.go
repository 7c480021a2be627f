package unit

import (
	_ "embed"
	"encoding/csv"
	"fmt"
	"strconv"
	"strings"
	"sync"
)

// An Element is a chemical element with the mean mass of its atoms in normal
// materials (standard atomic weight, IUPAC 2021, abridged) and its isotopes.
type Element struct {
	Number              int
	Symbol, Name        string
	Mass                Mass // mean mass of an atom
	StandardUncertainty Mass // as printed by IUPAC; it covers the variation among normal materials
	Isotopes            []Isotope
}

// An Isotope is a nuclide with the mass of its neutral atom (AME 2020) and its
// amount fraction in normal materials.
type Isotope struct {
	Symbol               string // of the element
	MassNumber           int
	Mass                 Mass
	StandardUncertainty  Mass // of Mass relative to u; that of u itself is in Constants
	Abundance            float64
	AbundanceUncertainty float64
	Composition          string // source of Abundance: "IUPAC 2021" or "NIST 4.1"
}

// String returns the nuclide as "35Cl".
func (i Isotope) String() string { return strconv.Itoa(i.MassNumber) + i.Symbol }

//go:embed elements.csv
var elementsCSV string

//go:embed isotopes.csv
var isotopesCSV string

// elements is the table of elements in the order of their numbers.
var elements = sync.OnceValue(func() []Element {
	var es []Element
	at := map[string]int{}
	for _, f := range rows(elementsCSV) {
		at[f[1]] = len(es)
		es = append(es, Element{Number: int(number(f[0])), Symbol: f[1], Name: f[2],
			Mass: Mass(number(f[3])) * U, StandardUncertainty: Mass(number(f[4])) * U})
	}
	for _, f := range rows(isotopesCSV) {
		e := &es[at[f[1]]]
		e.Isotopes = append(e.Isotopes, Isotope{Symbol: f[1], MassNumber: int(number(f[2])),
			Mass: Mass(number(f[3])) * U, StandardUncertainty: Mass(number(f[4])) * U,
			Abundance: number(f[5]), AbundanceUncertainty: number(f[6]), Composition: f[7]})
	}
	return es
})

// rows returns the records of an embedded table without its head.
func rows(text string) [][]string {
	r := csv.NewReader(strings.NewReader(text))
	r.Comment = '#'
	records, err := r.ReadAll()
	if err != nil {
		panic("unit: embedded table: " + err.Error())
	}
	return records[1:]
}

func number(s string) float64 {
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		panic("unit: embedded table: " + err.Error())
	}
	return x
}

// Elements returns all elements that have a standard atomic weight, in the
// order of their numbers.
func Elements() []Element { return append([]Element(nil), elements()...) }

// ElementOf returns the element with the given symbol, "Cl". It returns an
// error if there is none with a standard atomic weight.
func ElementOf(symbol string) (Element, error) {
	for _, e := range elements() {
		if e.Symbol == symbol {
			return e, nil
		}
	}
	return Element{}, fmt.Errorf("unit: no element %q with a standard atomic weight", symbol)
}

// IsotopeOf returns the isotope named "35Cl" or "Cl-35", "D" or "T". It returns
// an error if the table has none; it has the isotopes of normal materials, ³H
// and ¹⁴C.
func IsotopeOf(name string) (Isotope, error) {
	symbol, digits := name, ""
	switch {
	case name == "D":
		symbol, digits = "H", "2"
	case name == "T":
		symbol, digits = "H", "3"
	case strings.Contains(name, "-"):
		symbol, digits, _ = strings.Cut(name, "-")
	default:
		symbol = strings.TrimLeft(name, "0123456789")
		digits = name[:len(name)-len(symbol)]
	}
	n, err := strconv.Atoi(digits)
	if err == nil {
		var e Element
		if e, err = ElementOf(symbol); err == nil {
			for _, i := range e.Isotopes {
				if i.MassNumber == n {
					return i, nil
				}
			}
		}
	}
	return Isotope{}, fmt.Errorf("unit: no isotope %q known; write mass number and symbol, \"35Cl\"", name)
}

// MostAbundant returns the isotope with the largest abundance.
func (e Element) MostAbundant() Isotope {
	best := e.Isotopes[0]
	for _, i := range e.Isotopes {
		if i.Abundance > best.Abundance {
			best = i
		}
	}
	return best
}
