package unit

import (
	"fmt"
	"strconv"
)

// A Quantity is a value of any of the types of this package.
type Quantity interface {
	SI() float64    // the value in the unit that Unit returns
	Unit() Unit     // the coherent SI unit of the type
	String() string // six significant digits and the unit
}

// A Kind says what a unit measures. Kinds of one dimension that must not be
// mixed (a temperature and a temperature difference) are different.
type Kind int

// The kinds.
const (
	KindOther Kind = iota // a dimension without a name here, such as J/(mol K4)
	KindNumber
	KindTemperature
	KindTemperatureDifference
	KindEnergy
	KindInverseEnergy
	KindMolarEnergy
	KindMolarEntropy
	KindEntropy
	KindSpecificEnergy
	KindSpecificEntropy
	KindSommerfeldCoefficient
	KindAmount
	KindMass
	KindMolarMass
	KindPressure
	KindCompressibility
	KindLength
	KindArea
	KindVolume
	KindMolarVolume
	KindDensity
	KindNumberDensity
	KindFrequency
	KindWavenumber
	KindTime
	KindSpeed
	KindPower
	KindAngle
	KindMomentOfInertia
	KindLinearExpansivity
	KindVolumeExpansivity
	KindDensityOfStates
	KindMagneticFluxDensity
)

var kindNames = [...]string{
	KindOther:                 "quantity of no named kind",
	KindNumber:                "number",
	KindTemperature:           "temperature",
	KindTemperatureDifference: "temperature difference",
	KindEnergy:                "energy",
	KindInverseEnergy:         "inverse energy",
	KindMolarEnergy:           "molar energy",
	KindMolarEntropy:          "molar entropy or heat capacity",
	KindEntropy:               "entropy or heat capacity",
	KindSpecificEnergy:        "specific energy",
	KindSpecificEntropy:       "specific entropy or heat capacity",
	KindSommerfeldCoefficient: "coefficient of a linear molar heat capacity",
	KindAmount:                "amount of substance",
	KindMass:                  "mass",
	KindMolarMass:             "molar mass",
	KindPressure:              "pressure",
	KindCompressibility:       "compressibility",
	KindLength:                "length",
	KindArea:                  "area",
	KindVolume:                "volume",
	KindMolarVolume:           "molar volume",
	KindDensity:               "density",
	KindNumberDensity:         "number density",
	KindFrequency:             "frequency",
	KindWavenumber:            "wavenumber",
	KindTime:                  "time",
	KindSpeed:                 "speed",
	KindPower:                 "power",
	KindAngle:                 "angle",
	KindMomentOfInertia:       "moment of inertia",
	KindLinearExpansivity:     "linear expansivity",
	KindVolumeExpansivity:     "volume expansivity",
	KindDensityOfStates:       "density of states",
	KindMagneticFluxDensity:   "magnetic flux density",
}

// String returns the name of the kind in words.
func (k Kind) String() string {
	if k < 0 || int(k) >= len(kindNames) {
		return "Kind(" + strconv.Itoa(int(k)) + ")"
	}
	return kindNames[k]
}

// A Dimension holds the exponents of the base quantities. Plane angle and the
// crystal's cell count as base quantities here, so that "THz-1 cell-1" is not
// a time.
type Dimension struct {
	Length, Mass, Time, Temperature, Amount, Current, Angle, Cell int16
}

func (d Dimension) times(e Dimension, n int) Dimension {
	m := int16(n)
	return Dimension{d.Length + m*e.Length, d.Mass + m*e.Mass, d.Time + m*e.Time, d.Temperature + m*e.Temperature,
		d.Amount + m*e.Amount, d.Current + m*e.Current, d.Angle + m*e.Angle, d.Cell + m*e.Cell}
}

// dimensions has the dimension of every named kind.
var dimensions = [...]Dimension{
	KindOther:                 {},
	KindNumber:                {},
	KindTemperature:           {Temperature: 1},
	KindTemperatureDifference: {Temperature: 1},
	KindEnergy:                {Length: 2, Mass: 1, Time: -2},
	KindInverseEnergy:         {Length: -2, Mass: -1, Time: 2},
	KindMolarEnergy:           {Length: 2, Mass: 1, Time: -2, Amount: -1},
	KindMolarEntropy:          {Length: 2, Mass: 1, Time: -2, Temperature: -1, Amount: -1},
	KindEntropy:               {Length: 2, Mass: 1, Time: -2, Temperature: -1},
	KindSpecificEnergy:        {Length: 2, Time: -2},
	KindSpecificEntropy:       {Length: 2, Time: -2, Temperature: -1},
	KindSommerfeldCoefficient: {Length: 2, Mass: 1, Time: -2, Temperature: -2, Amount: -1},
	KindAmount:                {Amount: 1},
	KindMass:                  {Mass: 1},
	KindMolarMass:             {Mass: 1, Amount: -1},
	KindPressure:              {Length: -1, Mass: 1, Time: -2},
	KindCompressibility:       {Length: 1, Mass: -1, Time: 2},
	KindLength:                {Length: 1},
	KindArea:                  {Length: 2},
	KindVolume:                {Length: 3},
	KindMolarVolume:           {Length: 3, Amount: -1},
	KindDensity:               {Length: -3, Mass: 1},
	KindNumberDensity:         {Length: -3},
	KindFrequency:             {Time: -1},
	KindWavenumber:            {Length: -1},
	KindTime:                  {Time: 1},
	KindSpeed:                 {Length: 1, Time: -1},
	KindPower:                 {Length: 2, Mass: 1, Time: -3},
	KindAngle:                 {Angle: 1},
	KindMomentOfInertia:       {Length: 2, Mass: 1},
	KindLinearExpansivity:     {Temperature: -1},
	KindVolumeExpansivity:     {Temperature: -1},
	KindDensityOfStates:       {Time: 1, Cell: -1},
	KindMagneticFluxDensity:   {Mass: 1, Time: -2, Current: -1},
}

// A Unit is a unit as read from text: x in this unit is Factor·x + Offset in
// SI. Offset is 273.15 K for the degree Celsius as a temperature, else 0.
type Unit struct {
	Symbol string // as written
	Kind   Kind
	Dim    Dimension
	Factor float64
	Offset float64
}

// SI returns the SI value of x in the unit.
func (u Unit) SI(x float64) float64 { return float64(u.Factor*x) + u.Offset }

// From returns the SI value in the unit.
func (u Unit) From(si float64) float64 { return (si - u.Offset) / u.Factor }

// As returns the unit read as another kind of the same dimension: "K" and "°C"
// are temperatures unless they are asked to be temperature differences, and
// "K-1" is a volume expansivity unless asked to be a linear one. It returns an
// error if the dimension is another one; a wavenumber is no energy.
func (u Unit) As(k Kind) (Unit, error) {
	if u.Kind == k {
		return u, nil
	}
	if k <= KindOther || int(k) >= len(dimensions) || dimensions[k] != u.Dim {
		return u, &UnitError{Text: u.Symbol, Problem: fmt.Sprintf("is a unit of %s, not of %s", u.Kind, k)}
	}
	u.Kind, u.Offset = k, 0
	if k == KindTemperature && celsius[u.Symbol] {
		u.Offset = 273.15
	}
	return u, nil
}

// Convert returns x, given in this unit, in the unit v of the same kind.
func (u Unit) Convert(x float64, v Unit) (float64, error) {
	if u.Kind != v.Kind || u.Dim != v.Dim {
		return 0, &UnitError{Text: u.Symbol, Problem: fmt.Sprintf("is a unit of %s and cannot become %s, a unit of %s", u.Kind, v.Symbol, v.Kind)}
	}
	return v.From(u.SI(x)), nil
}

// String returns the unit as written.
func (u Unit) String() string { return u.Symbol }

// Header returns "name / unit" as [ParseHeader] reads it, with parentheses
// around a unit of several factors.
func (u Unit) Header(name string) string {
	for _, r := range u.Symbol {
		if r == ' ' || r == '/' || r == '·' || r == '*' {
			return name + " / (" + u.Symbol + ")"
		}
	}
	return name + " / " + u.Symbol
}

func format(x float64, symbol string) string {
	return strconv.FormatFloat(x, 'g', 6, 64) + " " + symbol
}

// plain reports whether no exponent is beyond what a physical quantity has.
func (d Dimension) plain() bool {
	for _, n := range [...]int16{d.Length, d.Mass, d.Time, d.Temperature, d.Amount, d.Current, d.Angle, d.Cell} {
		if n < -40 || n > 40 {
			return false
		}
	}
	return true
}
