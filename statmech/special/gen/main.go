// Gen writes the coefficient tables of package special and of internal/heats. It is run by
// go generate in that package's folder; its output depends on nothing but this
// source, so that a second run leaves no difference.
//
// Every coefficient is computed with math/big at 320 bits and rounded once to
// float64.
package main

func main() {
	debyeTables()
	einsteinTable()
	fermiTables()
	inverseTables()
	boseTables()
}
