// Package uncertain is for numbers with a standard uncertainty that remember
// where the uncertainty came from.
//
// A [Quantity] is a value, the inputs it was computed from and the way it was
// computed. [Measured] makes an input; Plus, Minus, Times, Over, [Exp], [Log]
// and the others, or [Function] for any function of several quantities, make
// new quantities from old ones. Because every quantity knows its inputs, a
// shared input is counted once: a.Minus(a) is exactly 0 ± 0.
//
// Two ways lead from the inputs to the uncertainty of a result, both from the
// same quantity. [Quantity.StandardUncertainty] is the law of propagation of
// uncertainty, first order in the inputs, correlations included (JCGM 100:2008,
// 5.1.2 and 5.2.2); [Quantity.Budget] shows it term by term.
// [MonteCarlo] draws the inputs and evaluates the same expression (JCGM
// 101:2008, with its adaptive procedure 7.9). [Quantity.Linearity] says whether
// the first order is enough.
//
// An input is random (a draw of its own) or common: an error that many
// observations share, such as a calibration ([Common]). The two parts of a
// result are reported apart by [Quantity.RandomPart] and [Quantity.CommonPart].
//
// Terms: a standard uncertainty u is one standard deviation (k = 1). An
// expanded uncertainty is printed only by [Quantity.Expanded], which names k.
// Rounding happens only in print; a Quantity holds full precision.
//
// Values are plain float64 in whatever unit the caller keeps; [Quantity.WithUnit]
// attaches a unit for printing.
//
// References: JCGM 100:2008, Evaluation of measurement data - Guide to the
// expression of uncertainty in measurement; JCGM 101:2008, Supplement 1,
// Propagation of distributions using a Monte Carlo method; JCGM 102:2011,
// Supplement 2, Extension to any number of output quantities.
package uncertain
