// Package scene is a figure after its data have been read and checked: plain
// numbers in the units of the axes, ready to be drawn. display makes it,
// display/draw draws it.
package scene

import "levelsum/display/internal/mark"

// A Figure is one drawing: panels under each other that share the x axis.
type Figure struct {
	Width, Height float64 // mm
	X             Axis
	Panels        []Panel
	Categories    []string // names of columns in place of an x axis (level diagrams)
	Legend        string   // "" automatic, "none", "above", or a corner: "top left" ...
	Notes         []string
	Alt           string
}

// A Panel has its own y axis.
type Panel struct {
	Weight float64 // its part of the height
	Y      Axis
	Right  *Axis
	Zero   bool // a line at y = 0
	Layers []Layer
}

// An Axis is in the unit that its label says.
type Axis struct {
	Quantity, Unit string
	Text           string // a label that is not quantity / unit
	Min, Max       float64
	Log            bool
}

// Label returns quantity / unit; the values have been divided by 10^power.
func (a Axis) Label(power int) []mark.Run { return mark.OverPower(a.Quantity, a.Unit, a.Text, power) }

// A Layer is one of the types below.
type Layer interface{ layer() }

// Style says how marks look; Colour and Marker count through the theme's, Dash
// through its line patterns.
type Style struct {
	Colour, Marker, Dash int
	Width                float64 // 0: the theme's
	Name                 string  // in the legend, if not empty
}

// Points are marks with error bars (nil: none; NaN: none at this point).
type Points struct {
	X, Y, XErr, YErr []float64
	Right            bool
	Of               int  // number of points before thinning
	Joined           bool // by a line with the dashes of Style, which the legend shows as well
	Style
}

// A Line joins points.
type Line struct {
	X, Y  []float64
	Right bool
	Style
}

// A Band is the area between two curves.
type Band struct {
	X, Lower, Upper []float64
	Right           bool
	Style
}

// Bars are a histogram.
type Bars struct {
	Edges, Heights []float64
	Style
}

// Cells are a heat map. Z[j][i] is the value between YEdges[j], YEdges[j+1]
// and XEdges[i], XEdges[i+1].
type Cells struct {
	XEdges, YEdges []float64
	Z              [][]float64
	Scale          Axis // of the colours
	Diverging      bool
}

// Contours are lines of equal Z over the grid X, Y.
type Contours struct {
	X, Y   []float64
	Z      [][]float64
	Levels []float64
	Style
}

// A Rule is a line across the panel with a label.
type Rule struct {
	At       float64
	Vertical bool
	Label    string
	Style
}

// A Ladder is one column of a level diagram.
type Ladder struct {
	Column     int
	Y          []float64
	Labels     []string  // one for each level, or none
	Degeneracy []int     // one for each level, or none
	Population []float64 // from 0 to 1, or none
	Style
}

func (Points) layer()   {}
func (Line) layer()     {}
func (Band) layer()     {}
func (Bars) layer()     {}
func (Cells) layer()    {}
func (Contours) layer() {}
func (Rule) layer()     {}
func (Ladder) layer()   {}
