package display

import (
	"levelsum/display/internal/scene"
)

// Widths in mm of figures for one and two columns of a journal page.
const (
	OneColumn  = 86.0
	TwoColumns = 178.0
)

// A Figure plots data. The short form has one set of points and what belongs
// to it:
//
//	display.Figure{X: run.T, Y: run.Cp, Err: run.U, Curve: res.Curve(), Residuals: true}
//
// X and Y are slices of numbers or of a typed quantity, which brings its unit;
// Err and XErr are standard uncertainties, drawn as bars. More sets of points,
// lines and bands go into Series. A figure that would mislead is refused: data
// without a unit that need one, a logarithmic axis with values that are not
// positive, slices of different lengths, residuals from a curve that was
// fitted to other data.
//
// A figure shows itself as SVG if a renderer has been registered
// (display/draw), else it shows its numbers.
type Figure struct {
	X, Y      any
	Err, XErr any
	Name      string // in the legend
	// Curve is a function of x (func(unit.Temperature) unit.MolarEntropy,
	// func(float64) float64, or the form that takes and gives slices), a
	// [Curve], or a slice of these. A function gets x in the unit of X's type.
	Curve any
	// Residuals adds a panel below with y minus the first curve, on the same x
	// axis; RelativeResiduals has them in percent of the curve.
	Residuals         bool
	RelativeResiduals bool

	Series    []Series
	Histogram *Histogram
	Map       *Map
	Ladders   []Ladder
	Marks     []Mark

	XAxis, YAxis, RightAxis Axis

	Width, Height float64 // mm; 0: 130 wide, and as high as suits
	Legend        string  // "" finds a place, "none", "above", "top left", "bottom right", ...
	Caption       string
	Alt           string // what a reader who cannot see the figure is told; made from the data if empty
}

// An Axis says what is on an axis of a [Figure].
type Axis struct {
	Quantity string // "C_{p,m}"; words stay upright, symbols are italic
	Unit     string // needed for plain numbers, known for typed quantities; "1" for none
	In       any    // the unit itself, to convert a typed quantity: unit.PerCm
	Log      bool
	// Min and Max limit the axis. Both 0: from the data; one alone leaves the
	// other end to the data (Max alone begins at 0, unless Log). Of data beyond
	// a limited x axis the y axes take no notice.
	Min, Max float64
	// Factor makes the right axis another scale for the same data: right = Factor × left.
	Factor float64
}

// A Series is one set of data in a [Figure].
type Series struct {
	Name         string
	X, Y         any
	Err, XErr    any
	Line         bool // a line through the points, without marks
	Marks        bool // with Line: marks as well
	Right        bool // belongs to the right axis
	Lower, Upper any  // a band; with or without Y
	Curve        any  // as in [Figure]; drawn in the colour of the series
}

// A Curve is a function, or the values of one, with its uncertainty.
type Curve struct {
	Name string
	F    any // func of x
	X, Y any // in place of F: values in ascending order of X
	// U gives the standard uncertainty of the curve, a function of x or a slice
	// as long as Y; a band of ± K·U is drawn (K = 0 means 1).
	U any
	K float64
}

// A Histogram counts values.
type Histogram struct {
	Values  any
	Bins    int  // 0: by the rule of Freedman and Diaconis (1981)
	Density bool // per unit of x, area 1, in place of counts
	Name    string
}

// A Map shows a function of two variables as colours, as contour lines, or
// both. Z is a matrix (Dims, At) or a [][]float64; row j belongs to Y[j],
// column i to X[i].
type Map struct {
	X, Y, Z        any
	Quantity, Unit string // of Z
	In             any
	Contours       []float64 // levels of contour lines, in the unit of Z
	LinesOnly      bool
	Diverging      bool // colours that part at zero
	Log            bool
}

// A Ladder is a column of a level diagram.
type Ladder struct {
	Name         string
	Energies     any
	Labels       []string
	Degeneracies []int
	Populations  []float64
}

// A Mark is a line across the figure at a value of x (or y), such as a
// transition temperature.
type Mark struct {
	X, Y  any // one of them
	Label string
}

// A renderer draws a figure in some formats: "svg" (colours of the page it
// stands in), "svg file" (stands alone), "pdf", "png".
var renderer func(f *scene.Figure, formats ...string) ([][]byte, error)

// SetRenderer is called by display/draw's Register, once, before figures are
// shown.
func SetRenderer(r func(f *scene.Figure, formats ...string) ([][]byte, error)) { renderer = r }
