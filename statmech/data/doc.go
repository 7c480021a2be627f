// Package data reads and writes tables of measured or computed numbers whose
// units are part of the file.
//
// A file is plain text, gzip-compressed or not: lines "# key: value" that say
// what the numbers are, a header, and rows. Fields are separated by commas,
// semicolons, tabs or white space. A header cell is "quantity / unit", or a
// row of units follows the header:
//
//	# substance: copper (cr), M/(g mol-1): 63.546, per: mole of atoms
//	# temperature scale: ITS-90, coverage of u: k=1
//	T / K, Cp / (J K-1 mol-1), u_r(Cp) / %, u_c(Cp) / %
//	5.102, 0.0315, 1.0, 0.2
//
// A column u(X) holds standard uncertainties of column X, in its unit or in
// per cent of it; u_r(X) is the part that is independent from row to row,
// u_c(X) the part that is common to all rows, such as a calibration. A column
// without a unit is text; counts (step, g, J, n, run ...) need none.
//
// What is not certain is refused, with file, line, row and column in the
// message: an unknown or missing unit, a column twice, a temperature that is
// not positive on the Kelvin scale, a negative uncertainty, a cell that is no
// number, mixed decimal separators, a row of another length. What is only
// suspicious is a warning: rows out of order, a temperature twice, a gap, an
// uncertainty of 0, a byte-order mark. A [Table] shows what was understood.
//
// Values are converted to SI; the numbers as they stood in the file are kept,
// and [Table.Write] writes them back in the same form at full precision. The
// SHA-256 of the file and the number of rows identify the data in a report.
package data
