package calorimetry

import (
	"fmt"
	"math"
	"strings"

	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/unit"
)

// Coefficients of T90 - T68 in K: from 13.8 K to 83.8 K in powers of (T-40)/40,
// from 83.8 K to 903.89 K in powers of t/630, t in °C.
//
// Reference: R. L. Rusby, J. Chem. Thermodyn. 23, 1153 (1991); H. Preston-Thomas,
// Metrologia 27, 3 (1990). From memory, checked against the printed table of
// differences (TestScale).
var (
	its90Low = [...]float64{-0.005903, 0.008174, -0.061924, -0.193388, 1.490793, 1.252347, -9.835868, 1.411912, 25.277595,
		-19.183815, -18.437089, 27.000895, -8.716324}
	its90High = [...]float64{0, -0.148759, -0.267408, 1.080760, 1.269056, -4.089591, -1.871251, 7.438081, -3.536296}
)

// Range of the conversion from IPTS-68.
const (
	ipts68From = 13.81
	ipts68To   = 903.89
)

// fromIPTS68 returns T90 - T68 and its slope in T68.
func fromIPTS68(T float64) (d, slope float64) {
	c, x, scale := its90High[:], (T-273.15)/630, 630.0
	if T < 83.8 {
		c, x, scale = its90Low[:], (T-40)/40, 40
	}
	for i := len(c) - 1; i >= 0; i-- {
		slope = slope*x + d
		d = d*x + c[i]
	}
	return d, slope / scale
}

// FromIPTS68 returns the ITS-90 temperature of a temperature read on IPTS-68,
// to about 1.5 mK; 373.15 K becomes 373.124 K. A panic with a
// [*statmech.DomainError] if T is outside 13.81 K to 903.89 K.
func FromIPTS68(T unit.Temperature) unit.Temperature {
	x := float64(T)
	if !(x >= ipts68From && x <= ipts68To) {
		panic(&statmech.DomainError{Func: "calorimetry.FromIPTS68", Arg: "T", Value: T.String(), Want: "between 13.81 K and 903.89 K"})
	}
	d, _ := fromIPTS68(x)
	return unit.Temperature(x + d)
}

// ToITS90 returns the table with temperatures and heat capacities on ITS-90.
// The file must say "# temperature scale: IPTS-68". A heat capacity is heat per
// change of temperature, so that
//
//	Cp(T90) = Cp(T68) / (1 + d(T90-T68)/dT68)
//
// (T. B. Douglas, J. Res. Natl. Bur. Stand. 73A, 451 (1969)).
func ToITS90(run *data.Table) (*data.Table, error) {
	scale := run.Note("temperature scale")
	switch {
	case strings.Contains(strings.ReplaceAll(scale, " ", "-"), "ITS-90"):
		return run, nil
	case !strings.Contains(strings.ReplaceAll(scale, " ", "-"), "IPTS-68"):
		return nil, fmt.Errorf("calorimetry: ToITS90: the temperature scale of %s is %q, want IPTS-68; write \"# temperature scale: IPTS-68\" into the file if that is what it is", run.Name, scale)
	}
	ts, cs := make([]float64, len(run.T)), make([]float64, len(run.Cp))
	largest := 0.0
	for i, T := range run.T {
		x := float64(T)
		if x < ipts68From || x > ipts68To {
			return nil, fmt.Errorf("calorimetry: ToITS90: row %d: T = %v, and IPTS-68 is converted between 13.81 K and 903.89 K", i+1, T)
		}
		d, slope := fromIPTS68(x)
		ts[i] = x + d
		if len(cs) > 0 {
			cs[i] = float64(run.Cp[i]) / (1 + slope)
			largest = max(largest, math.Abs(slope))
		}
	}
	out, err := run.Replace("T", ts)
	if err != nil {
		return nil, err
	}
	if len(cs) > 0 {
		if out, err = out.ReplaceHeatCapacity(cs); err != nil {
			return nil, err
		}
	}
	out = out.WithNote("temperature scale", "ITS-90")
	out.Readings = append(out.Readings, fmt.Sprintf("temperatures and heat capacities were converted from IPTS-68 to ITS-90; Cp changed by up to %.2g %%", 100*largest))
	return out, nil
}
