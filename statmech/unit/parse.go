package unit

import (
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode"
)

// ErrUnit is matched by every [*UnitError].
var ErrUnit = errors.New("unit not understood")

// A UnitError says what part of a unit or of a header was not understood.
type UnitError struct {
	Text    string // the whole text
	Problem string // what is wrong, naming the part
}

func (e *UnitError) Error() string { return fmt.Sprintf("unit: %q %s", e.Text, e.Problem) }

// Unwrap makes errors.Is(err, ErrUnit) true.
func (e *UnitError) Unwrap() error { return ErrUnit }

type symbol struct {
	factor float64
	dim    Dimension
	prefix bool // may take an SI prefix
}

var celsius = map[string]bool{"°C": true, "degC": true, "℃": true}

// symbols are the units that Parse knows; the calorie is the thermochemical
// one and mmHg the conventional one.
var symbols = map[string]symbol{
	"1": {1, Dimension{}, false},
	"%": {1e-2, Dimension{}, false},
	"‰": {1e-3, Dimension{}, false},

	"m":   {1, Dimension{Length: 1}, true},
	"g":   {1e-3, Dimension{Mass: 1}, true},
	"s":   {1, Dimension{Time: 1}, true},
	"K":   {1, Dimension{Temperature: 1}, true},
	"mol": {1, Dimension{Amount: 1}, true},
	"A":   {1, Dimension{Current: 1}, true},
	"rad": {1, Dimension{Angle: 1}, true},

	"°C":   {1, Dimension{Temperature: 1}, false},
	"℃":    {1, Dimension{Temperature: 1}, false},
	"degC": {1, Dimension{Temperature: 1}, false},

	"deg": {float64(Deg), Dimension{Angle: 1}, false},
	"°":   {float64(Deg), Dimension{Angle: 1}, false},

	"min": {60, Dimension{Time: 1}, false},
	"h":   {3600, Dimension{Time: 1}, false},
	"Hz":  {1, Dimension{Time: -1}, true},

	"N":       {1, Dimension{Length: 1, Mass: 1, Time: -2}, true},
	"J":       {1, dimensions[KindEnergy], true},
	"W":       {1, dimensions[KindPower], true},
	"eV":      {ElementaryCharge, dimensions[KindEnergy], true},
	"cal":     {4.184, dimensions[KindEnergy], true},
	"erg":     {1e-7, dimensions[KindEnergy], false},
	"hartree": {HartreeEnergy, dimensions[KindEnergy], true},
	"Hartree": {HartreeEnergy, dimensions[KindEnergy], false},
	"E_h":     {HartreeEnergy, dimensions[KindEnergy], true},
	"R":       {GasConstant, dimensions[KindMolarEntropy], false},

	"Pa":   {1, dimensions[KindPressure], true},
	"bar":  {1e5, dimensions[KindPressure], true},
	"atm":  {101325, dimensions[KindPressure], false},
	"torr": {float64(Torr), dimensions[KindPressure], true},
	"Torr": {float64(Torr), dimensions[KindPressure], true},
	"mmHg": {float64(MmHg), dimensions[KindPressure], false},

	"u":  {AtomicMassConstant, Dimension{Mass: 1}, false},
	"Da": {AtomicMassConstant, Dimension{Mass: 1}, true},

	"Å":        {1e-10, Dimension{Length: 1}, false},
	"A\u030a":  {1e-10, Dimension{Length: 1}, false}, // A with a combining ring
	"\u212b":   {1e-10, Dimension{Length: 1}, false},
	"angstrom": {1e-10, Dimension{Length: 1}, false},
	"Angstrom": {1e-10, Dimension{Length: 1}, false},
	"bohr":     {BohrRadius, Dimension{Length: 1}, false},
	"a0":       {BohrRadius, Dimension{Length: 1}, false},
	"L":        {1e-3, dimensions[KindVolume], true},
	"l":        {1e-3, dimensions[KindVolume], true},

	"T":    {1, dimensions[KindMagneticFluxDensity], true},
	"G":    {1e-4, dimensions[KindMagneticFluxDensity], true},
	"C":    {1, Dimension{Time: 1, Current: 1}, true},
	"V":    {1, Dimension{Length: 2, Mass: 1, Time: -3, Current: -1}, true},
	"cell": {1, Dimension{Cell: 1}, false},
}

var prefixes = map[string]float64{
	"f": 1e-15, "p": 1e-12, "n": 1e-9, "µ": 1e-6, "μ": 1e-6, "u": 1e-6, "m": 1e-3,
	"c": 1e-2, "d": 1e-1, "h": 1e2, "k": 1e3, "M": 1e6, "G": 1e9, "T": 1e12, "P": 1e15,
}

// Parse reads the text of a unit: factors with integer exponents, separated by
// spaces or dots ("J K-1 mol-1", "J·K⁻¹·mol⁻¹", "kJ mol^-1"), at most one
// division by one factor or one parenthesis at each slash ("J/(mol K)",
// "g/cm3", "1/K"), numbers ("10^-6 K-1"), "%" and "1". SI prefixes are read
// where they are usual. "J/mol K" is refused because it is read in two ways.
//
// The kind of the result follows from the dimension; "K" and "°C" are
// temperatures and "K-1" is a volume expansivity unless [Unit.As] is asked.
//
// Parse returns a [*UnitError] that names the part it did not understand.
func Parse(text string) (Unit, error) {
	t := strings.TrimSpace(text)
	p := parser{text: t, rest: t}
	if t == "" {
		return Unit{}, &UnitError{Text: text, Problem: "has no unit; write 1 for a number"}
	}
	f, d, err := p.product()
	if err != nil {
		return Unit{}, err
	}
	if p.skip(); p.rest != "" {
		return Unit{}, p.errorf("has %q left over", p.rest)
	}
	u := Unit{Symbol: t, Kind: kindOf(d), Dim: d, Factor: f}
	if celsius[t] {
		u.Offset = 273.15
	} else if p.celsius && d == dimensions[KindTemperature] {
		return Unit{}, p.errorf("has a degree Celsius among other factors; write K")
	}
	return u, nil
}

// MustParse is Parse for texts written in a program; it panics on an error.
func MustParse(text string) Unit {
	u, err := Parse(text)
	if err != nil {
		panic(err)
	}
	return u
}

// kindOf returns the kind a dimension is read as.
func kindOf(d Dimension) Kind {
	if d == (Dimension{Temperature: -1}) {
		return KindVolumeExpansivity
	}
	for k := KindNumber; int(k) < len(dimensions); k++ {
		if dimensions[k] == d {
			return k
		}
	}
	return KindOther
}

type parser struct {
	text, rest string
	celsius    bool // a degree Celsius was seen
}

func (p *parser) errorf(format string, args ...any) error {
	return &UnitError{Text: p.text, Problem: fmt.Sprintf(format, args...)}
}

func (p *parser) skip() bool {
	t := strings.TrimLeft(p.rest, " \t\u00a0\u202f\u2009·⋅*.")
	moved := len(t) != len(p.rest)
	p.rest = t
	return moved
}

// product reads factors up to the end or a closing parenthesis.
func (p *parser) product() (float64, Dimension, error) {
	f, d := 1.0, Dimension{}
	n, slashes := 0, 0
	for {
		p.skip()
		if p.rest == "" || p.rest[0] == ')' {
			break
		}
		sign := 1
		if p.rest[0] == '/' {
			if n == 0 {
				return 0, d, p.errorf("begins with a slash; write 1/…")
			}
			p.rest = p.rest[1:]
			p.skip()
			if p.rest == "" {
				return 0, d, p.errorf("ends with a slash")
			}
			sign = -1
			slashes++
		} else if slashes > 0 {
			return 0, d, p.errorf("is read in two ways at %q; put what follows the slash in parentheses", p.rest)
		}
		g, e, err := p.factor()
		if err != nil {
			return 0, d, err
		}
		if sign < 0 {
			f /= g
		} else {
			f *= g
		}
		if d = d.times(e, sign); !d.plain() || !(f > 0) || math.IsInf(f, 0) {
			return 0, d, p.errorf("is beyond every physical quantity")
		}
		n++
	}
	if n == 0 {
		return 0, d, p.errorf("has nothing between parentheses")
	}
	return f, d, nil
}

func (p *parser) factor() (float64, Dimension, error) {
	if p.rest[0] == '(' {
		p.rest = p.rest[1:]
		f, d, err := p.product()
		if err != nil {
			return 0, d, err
		}
		if p.rest == "" || p.rest[0] != ')' {
			return 0, d, p.errorf("lacks a closing parenthesis")
		}
		p.rest = p.rest[1:]
		n, err := p.exponent()
		if err != nil {
			return 0, d, err
		}
		return power(f, n), Dimension{}.times(d, n), nil
	}
	if c := p.rest[0]; c >= '0' && c <= '9' {
		return p.number()
	}
	i := strings.IndexFunc(p.rest, func(r rune) bool {
		return !(unicode.IsLetter(r) || r == '_' || r == '%' || r == '‰' || r == '°' || r == '\u030a') || superscript(r) >= 0
	})
	if i < 0 {
		i = len(p.rest)
	}
	if strings.HasPrefix(p.rest, "a0") {
		i = 2
	}
	if i == 0 {
		return 0, Dimension{}, p.errorf("has %q where a unit is wanted", p.rest)
	}
	name := p.rest[:i]
	s, ok := lookup(name)
	if !ok {
		return 0, Dimension{}, p.errorf("has %q, which is no unit known here", name)
	}
	if celsius[name] {
		p.celsius = true
	}
	p.rest = p.rest[i:]
	n, err := p.exponent()
	if err != nil {
		return 0, Dimension{}, err
	}
	return power(s.factor, n), Dimension{}.times(s.dim, n), nil
}

// lookup finds a symbol as it stands, or with an SI prefix.
func lookup(name string) (symbol, bool) {
	if s, ok := symbols[name]; ok {
		return s, true
	}
	for i := range name {
		if i == 0 {
			continue
		}
		f, ok := prefixes[name[:i]]
		if !ok {
			return symbol{}, false
		}
		s, ok := symbols[name[i:]]
		s0 := s.factor
		if !ok || !s.prefix {
			return symbol{}, false
		}
		s.factor *= f
		if f < 1 {
			s.factor = s0 / power(f, -1) // one rounding
		}
		return s, true
	}
	return symbol{}, false
}

// number reads 1, 1000, 1e-6, 10^-6, 10⁻⁶ or 10-6.
func (p *parser) number() (float64, Dimension, error) {
	i := 0
	for i < len(p.rest) && (p.rest[i] >= '0' && p.rest[i] <= '9' || p.rest[i] == '.' || i > 0 && (p.rest[i] == 'e' || p.rest[i] == 'E') ||
		i > 0 && (p.rest[i-1] == 'e' || p.rest[i-1] == 'E') && (p.rest[i] == '-' || p.rest[i] == '+')) {
		i++
	}
	x, err := strconv.ParseFloat(p.rest[:i], 64)
	if err != nil || x <= 0 {
		return 0, Dimension{}, p.errorf("has %q, which is no positive number", p.rest[:i])
	}
	p.rest = p.rest[i:]
	n, err := p.exponent()
	if err != nil {
		return 0, Dimension{}, err
	}
	return power(x, n), Dimension{}, nil
}

// exponent reads an optional integer exponent: -1, ^-1, ^(-1), **-1, ⁻¹.
func (p *parser) exponent() (int, error) {
	t := p.rest
	marked := false
	if strings.HasPrefix(t, "^") {
		t, marked = t[1:], true
	} else if strings.HasPrefix(t, "**") {
		t, marked = t[2:], true
	}
	closing := false
	if marked && (strings.HasPrefix(t, "(") || strings.HasPrefix(t, "{")) {
		t, closing = t[1:], true
	}
	var digits strings.Builder
	used := 0
	for i, r := range t {
		if v := superscript(r); v >= 0 {
			digits.WriteByte("0123456789-+"[v])
		} else if r >= '0' && r <= '9' || i == 0 && (r == '-' || r == '+') {
			digits.WriteRune(r)
		} else if i == 0 && r == '−' {
			digits.WriteByte('-')
		} else {
			break
		}
		used = i + len(string(r))
	}
	if used == 0 {
		if marked {
			return 0, p.errorf("lacks an exponent at %q", p.rest)
		}
		return 1, nil
	}
	n, err := strconv.Atoi(digits.String())
	if err != nil || n == 0 || n < -12 || n > 12 {
		return 0, p.errorf("has the exponent %q, want a non-zero integer", t[:used])
	}
	t = t[used:]
	if closing {
		if t == "" || t[0] != ')' && t[0] != '}' {
			return 0, p.errorf("lacks a closing parenthesis")
		}
		t = t[1:]
	}
	p.rest = t
	return n, nil
}

// superscript returns the value of a superscript digit, 10 for the minus and
// 11 for the plus, or -1.
func superscript(r rune) int {
	switch r {
	case '¹':
		return 1
	case '²':
		return 2
	case '³':
		return 3
	case '⁻':
		return 10
	case '⁺':
		return 11
	}
	if r == '⁰' || r >= '⁴' && r <= '⁹' {
		return int(r - '⁰')
	}
	return -1
}

// power returns xⁿ, exactly rounded where x is a power of ten.
func power(x float64, n int) float64 {
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(x, 'e', -1, 64), "e")
	if e, err := strconv.Atoi(exponent); err == nil && mantissa == "1" {
		if y, err := strconv.ParseFloat("1e"+strconv.Itoa(e*n), 64); err == nil {
			return y
		}
	}
	if n < 0 {
		return 1 / power(x, -n)
	}
	y := 1.0
	for range n {
		y *= x
	}
	return y
}

// ParseHeader reads a column header of the form "quantity / unit",
// "Cp / (J K-1 mol-1)", and returns the name of the quantity and the unit. A
// slash inside the name is allowed if the one before the unit has spaces
// around it: "H-H(0) / (kJ/mol)", "g1/g0 / 1".
//
// It returns a [*UnitError] if there is no unit or if it is not understood.
func ParseHeader(text string) (name string, u Unit, err error) {
	t := strings.TrimSpace(text)
	at, width := splitHeader(t)
	if at < 0 {
		return t, Unit{}, &UnitError{Text: t, Problem: "has no unit; write \"quantity / unit\", with 1 for a number"}
	}
	name = strings.TrimSpace(t[:at])
	if name == "" {
		return "", Unit{}, &UnitError{Text: t, Problem: "has no quantity before the slash"}
	}
	text = strings.TrimSpace(t[at+width:])
	if enclosed(text) {
		text = strings.TrimSpace(text[1 : len(text)-1])
	}
	u, err = Parse(text)
	if err != nil {
		var ue *UnitError
		if errors.As(err, &ue) {
			return name, Unit{}, &UnitError{Text: t, Problem: ue.Problem}
		}
		return name, Unit{}, err
	}
	return name, u, nil
}

// splitHeader returns where the slash between quantity and unit begins and how
// wide it is: the first one with spaces around it, else the first, outside
// parentheses.
func splitHeader(t string) (at, width int) {
	depth, first := 0, -1
	for i := range len(t) {
		switch t[i] {
		case '(', '[', '{':
			depth++
		case ')', ']', '}':
			depth--
		case '/':
			if depth != 0 {
				continue
			}
			if i > 0 && i+1 < len(t) && t[i-1] == ' ' && t[i+1] == ' ' {
				return i, 1
			}
			if first < 0 {
				first = i
			}
		}
	}
	return first, 1
}

// enclosed reports whether one pair of parentheses holds all of t.
func enclosed(t string) bool {
	if len(t) < 2 || t[0] != '(' || t[len(t)-1] != ')' {
		return false
	}
	depth := 0
	for i := range len(t) {
		switch t[i] {
		case '(':
			depth++
		case ')':
			if depth--; depth == 0 && i < len(t)-1 {
				return false
			}
		}
	}
	return true
}
