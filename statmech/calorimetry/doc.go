// Package calorimetry goes from measured heat capacities to the entropy and
// enthalpy that are published: low-temperature extrapolation, integration of
// Cp/T and Cp, transitions, vaporisation, gas imperfection, residual entropy.
//
// [ThirdLaw] joins these pieces to a [Path], which gives the entropy and the
// enthalpy increment at any temperature with standard uncertainty, the random
// part and the part common to all points apart, and a table of contributions
// with the share of each. What the data do not cover is in that table too: the
// extrapolation below the first point, and the temperature up to which it was
// taken.
//
// Integration is exact for the cubic spline through the points in ln T, and the
// result is a weighted sum of the measured values, so that its uncertainty and
// the correlation between entropies at different temperatures are exact too.
// Trapezoids would be wrong by as much as the uncertainty of good data: by
// -0.03 and +0.02 J/(mol K) for copper at 298.15 K (TestCopperEntropy).
//
// A spline never crosses a transition: pieces end there.
package calorimetry
