// Package fit fits models to data by weighted nonlinear least squares and says
// what the result is worth.
//
// A model is any Go value that is evaluated with its present field values; the
// fit is told which numbers are free by their addresses:
//
//	deb := solid.Debye{Theta: 320 * unit.K}
//	gam := solid.Electronic{...}
//	res, err := fit.HeatCapacity(solid.Sum{&deb, &gam}, run, fit.Vary(&deb.Theta, &gam.Gamma), fit.AbsoluteSigma)
//
// After the call the fields hold the best values. [HeatCapacity] takes modes
// and heat-capacity terms and a data table, [Curve] any function of one
// variable, [Curves] one that works on a slice, which is much faster for a
// function written in a notebook cell.
//
// # What the standard uncertainties mean
//
// The caller chooses, there is no rule for all data. [AbsoluteSigma] takes the
// standard uncertainties of the data as known and independent. [ScaledSigma]
// takes only their ratios as known and scales them so that χ² equals its
// degrees of freedom. [CommonSigma] takes them as one error shared by all
// points, as the accuracy bound of a smoothed table is; the scatter then gives
// the random part. A column of common uncertainties (u_c) is propagated once
// for all points in every case. Absolute standard uncertainties are withheld
// if χ² shows that the model does not describe the data.
//
// A [Result] holds the covariance, and everything computed from it with
// [Result.Function] carries the covariance on, also into Monte Carlo.
//
// # Method
//
// Damped Gauss-Newton steps (Levenberg 1944, Marquardt 1963, Moré 1978) with a
// QR factorisation, bounds by an active set, derivatives from the model where
// it gives them and extrapolated central differences elsewhere. The certified
// parameters of the NIST reference sets are found to more than six digits, the
// standard deviations to more than four (TestNIST).
package fit
