package cell_test

import (
	"errors"
	"fmt"
	"strings"
	"testing"

	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/symbols/export"
)

// beginner is a scope like that of a session, with the first cell of somebody
// who is new to Go.
func beginner(t testing.TB) *cell.Scope {
	t.Helper()
	usual := map[string]string{"fmt": "fmt", "math": "math", "strings": "strings", "strconv": "strconv", "slices": "slices", "sort": "sort",
		"os": "os", "filepath": "path/filepath", "rand": "math/rand", "mat": "gonum.org/v1/gonum/mat", "display": "levelsum/display", "statmech": "levelsum/statmech"}
	for _, p := range []string{"unit", "solid", "gas", "data", "fit", "uncertain", "reaction", "derive", "calorimetry", "special", "catalogue"} {
		usual[p] = "levelsum/statmech/" + p
	}
	s := cell.NewScope(export.New(compile.List("../..")), usual)
	adopt(t, s, 1, `
T := 300 * unit.K
cu := solid.Debye{Theta: 343 * unit.K}
xs := []float64{1, 2, 3}
ts := []unit.Temperature{1 * unit.K}
x, n := 2.0, 3
gap := 200 * unit.PerCm
p := 1 * unit.Bar
m := map[string]float64{"a": 1}
mass := uncertain.Measured(3.1, 0.1)
levels, _ := statmech.NewLevels([]unit.Energy{0, gap}, nil)
table, _ := data.Read("run.csv")
const steps = 12
`)
	return s
}

func adopt(t testing.TB, s *cell.Scope, n int, source string) {
	t.Helper()
	p, err := s.Check(&cell.Source{N: n, Text: source})
	if err != nil {
		t.Fatal(err)
	}
	u, err := p.Compile(true)
	if err != nil {
		t.Fatal(err)
	}
	s.Adopt(p, u)
	s.Commit(p, func(string) bool { return true })
}

// said is what a reader is told about a cell: place and hint of each error, or
// of each warning of a cell that runs.
func said(s *cell.Scope, source string) string {
	plan, err := s.Clone().Check(&cell.Source{N: 2, Text: source}) // a clone, so that the cells know nothing of one another
	var ds cell.Diagnostics
	if err == nil {
		ds = plan.Warnings
	} else if !errors.As(err, &ds) {
		return err.Error()
	}
	var out []string
	for _, d := range ds {
		if d.Hint != "" {
			out = append(out, fmt.Sprintf("%d:%d %s", d.Line, d.Column, d.Hint))
		}
	}
	return strings.Join(out, "\n")
}

// wrongCells are what a physicist who is new to Go types, with the lines that say
// what to write, each with its place.
var wrongCells = []struct{ source, want string }{
	{"x**2", "1:4 write x*x or math.Pow(x, 2)"},
	{"y := x^2", "1:6 write x*x or math.Pow(x, 2)"},
	{"for i in range(10) {\n\tfmt.Println(i)\n}", "1:7 write for i := range 10 {"},
	{"for i in range(10):\n    print(i)", "1:7 write for i := range 10 {"},
	{"for i := 0; i < len(x); i++ {\n\tfmt.Println(i)\n}", "1:21 len is for slices, strings and maps: to count to n write for i := range n"},
	{"y = 3", "1:1 write y := 3 to declare y"},
	{"z = [1, 2, 3]", "1:7 write []float64{1, 2, 3}"},
	{"z := [1, 2, 3]", "1:8 write []float64{1, 2, 3}"},
	{"# a comment\nx", "1:1 write // before a comment"},
	{"x + 1 # plus one", "1:7 write // before a comment"},
	{"f\"{x}\"", "1:2 write fmt.Sprintf(\"%v\", x)"},
	{"fmt.Println(f\"T = {x}\")", "1:14 write fmt.Sprintf(\"T = %v\", x)"},
	{"'hello'", "1:1 write \"hello\": single quotes are for one character"},
	{"def f(x):\n    return x**2", "1:5 write func f(x float64) float64 { return ... }"},
	{"import numpy as np", "1:14 write math.Exp and loops over []float64; gonum has matrices, statistics and more: import \"gonum.org/v1/gonum/stat\""},
	{"from math import sqrt", "1:6 write math.Sqrt: the package math is there without an import"},
	{"lambda x: x**2", "1:8 write func(x float64) float64 { return math.Pow(x, 2) }"},
	{"func g(x float64) float64 {\n\tx * 2\n}", "2:2 write return x * 2\n3:1 write return x * 2"},
	{"func g(x float64) {\n\treturn x * 2\n}", "2:9 write the type of the result behind the brackets: func f(...) float64 {"},
	{"func g(x) {\n\treturn x\n}", "1:8 write x float64: a parameter has a type\n2:9 write the type of the result behind the brackets: func f(...) float64 {"},
	{"func g(float64 x) float64 {\n\treturn x\n}", "1:16 write x float64: the name comes before its type"},
	{"float64 y = 3", "1:9 write var y float64 = 3"},
	{"int k = 3", "1:5 write var k int = 3"},
	{"double q = 3.0", "1:8 write q := 3.0"},
	{"var y = 1/2 * x\ny", "1:10 write 1.0 / 2"},
	{"1/2", "1:2 write 1.0 / 2"},
	{"n * x", "1:1 write float64(n) * x"},
	{"x * n", "1:1 write x * float64(n)"},
	{"math.sqrt(x)", "1:6 did you mean math.Sqrt?"},
	{"math.log(x)", "1:6 write math.Log"},
	{"sqrt(x)", "1:1 did you mean math.Sqrt or uncertain.Sqrt?"},
	{"np.exp(x)", "1:1 write math.Exp"},
	{"exp(-x)", "1:1 did you mean math.Exp or uncertain.Exp?"},
	{"R*math.Log(1+x)", "1:1 write unit.R * unit.MolarEntropy(math.Log(1+x)), or unit.GasConstant for a plain number"},
	{"k*T", "1:1 write T.AsEnergy() for kT"},
	{"kB * T", "1:1 write T.AsEnergy() for kT"},
	{"cu.HeatCapacity(300)", "1:17 give it a unit: 300 * unit.K"},
	{"cu.HeatCapacity(x)", "1:17 write unit.Temperature(x) * unit.K"},
	{"cu.HeatCapacity(300 K)", "1:21 write 300 * unit.K"},
	{"300 K", "1:5 write 300 * unit.K"},
	{"300K", "1:4 write 300 * unit.K"},
	{"300 * K", "1:7 did you mean unit.K?"},
	{"cu.HeatCapacity(gap)", "1:17 write gap.AsTemperature()"},
	{"cu.HeatCapacity()", "1:17 it is called as cu.HeatCapacity(T unit.Temperature)"},
	{"cu.HeatCapacity(T, p)", "1:20 it is called as cu.HeatCapacity(T unit.Temperature)"},
	{"solid.Debye(343 * unit.K)", "1:13 write solid.Debye{Theta: 343 * unit.K}"},
	{"solid.Debye{343}", "1:16 write solid.Debye{Theta: 343}: name the fields"},
	{"solid.Debye{Theta = 343 * unit.K}", "1:19 write Theta: with a colon"},
	{"solid.Debye{Theta: 343}", "1:20 give it a unit: 343 * unit.K"},
	{"solid.Debye{Theta: 343 * unit.K,\n\tModes: 3\n}", "2:10 end the line with a comma, or close the } on it"},
	{"solid.debye{Theta: 343 * unit.K}", "1:7 did you mean solid.Debye?"},
	{"Debye{Theta: 343 * unit.K}", "1:1 did you mean solid.Debye?"},
	{"if x > 1: fmt.Println(\"yes\")", "1:9 write if x > 1 { fmt.Println(\"yes\") }"},
	{"if (x > 1) fmt.Println(\"yes\")", "1:12 write if ... { ... }: the braces are never left out"},
	{"if x > 1\n{\n\tfmt.Println(\"a\")\n}", "1:9 put the { at the end of this line"},
	{"if x = 1 {\n}", "1:4 write == to compare"},
	{"if x > 1 and x < 3 {\n}", "1:10 write && for and"},
	{"while x > 1 {\n\tx--\n}", "1:7 write for x > 1 {"},
	{"x++ + 1", "1:5 ++ has no value: write x++ on a line of its own"},
	{"y := x++", "1:7 ++ has no value: write x++ on a line of its own"},
	{"not x", "1:5 write ! for not"},
	{"True", "1:1 write true"},
	{"None", "1:1 write nil"},
	{"null", "1:1 write nil"},
	{"len(x)", "1:5 len is for slices, strings and maps: to count to n write for i := range n"},
	{"xs.append(4)", "1:4 write xs = append(xs, 4)"},
	{"xs[-1]", "1:4 write xs[len(xs)-1] to count from the end"},
	{"xs + 1", "1:1 write a loop: for i := range xs { xs[i] = xs[i] + 1 }"},
	{"xs * 2", "1:1 write a loop: for i := range xs { xs[i] = xs[i] * 2 }"},
	{"sum(xs)", "1:1 write a loop, for _, v := range xs { total += v }, or floats.Sum(xs) with import \"gonum.org/v1/gonum/floats\""},
	{"max(xs)", "1:5 write slices.Max(xs)"},
	{"abs(x)", "1:1 did you mean math.Abs or uncertain.Abs?"},
	{"for x in xs {\n}", "1:7 write for _, x := range xs {"},
	{"for i, v := range xs {\n\tfmt.Println(v)\n}", "1:5 write for _, v := range xs {"},
	{"for i := range xs {\n\ty := 3\n}", "1:5 write for range xs {\n2:2 delete it, or write _ = y"},
	{"return x", "1:8 write the value alone as the cell's last line: a cell does not return"},
	{"v, err := strconv.Atoi(\"12x\")\nif err != nil {\n\treturn err\n}", "3:9 delete the if: an error that nothing reads ends the cell and is shown"},
	{"v := strconv.Atoi(\"12\")", "1:6 write v, err := strconv.Atoi(\"12\")"},
	{"rand.NewPCG(1, 2)", "1:6 write import \"math/rand/v2\" to use this package rand"},
	{"unit.Dalton", "1:6 write unit.U"},
	{"unit.DegC", "1:6 write unit.Celsius(25): a Celsius temperature is no multiple of a unit"},
	{"25 * unit.C", "1:11 write unit.Celsius(25): a Celsius temperature is no multiple of a unit"},
	{"1 * unit.atm", "1:10 write unit.Atm"},
	{"1 * unit.kJ", "1:10 write unit.MolarKJ for a molar energy in kJ/mol, unit.KJPerMol for the energy of one particle"},
	{"12 * unit.KJ", "1:11 write unit.MolarKJ for a molar energy in kJ/mol, unit.KJPerMol for the energy of one particle"},
	{"12 * unit.kJPerMol", "1:11 write unit.KJPerMol"},
	{"var e unit.MolarEnergy = 12 * unit.KJPerMol", "1:26 write 12 * unit.MolarKJ"},
	{"var e unit.Energy = 12 * unit.MolarKJ", "1:21 write 12 * unit.KJPerMol"},
	{"T + 273.15", "1:5 write unit.Celsius(25) for a temperature in °C, or 273.15 * unit.K"},
	{"T * T", "1:3 write float64(x) * y to scale y by a number; products of physics have methods, as S.Times(T)"},
	{"T / T", "1:3 write float64(T / T)"},
	{"gap / T", "1:1 write gap.OverKT(T) for the ratio to kT"},
	{"gap * T", "1:1 no method makes a quantity of these two: for a plain number in SI write gap.SI() * T.SI()"},
	{"x * T", "1:1 write unit.Temperature(x) * T"},
	{"n * T", "1:1 write unit.Temperature(n) * T"},
	{"T * x", "1:1 write T * unit.Temperature(x)"},
	{"math.Exp(-gap / T)", "1:10 write (-gap).OverKT(T) for the ratio to kT"},
	{"math.Exp(-gap/(unit.Boltzmann*T))", "1:10 write (-gap).OverKT(T) for the ratio to kT"},
	{"math.Sqrt(T)", "1:11 write T.In(unit.K)"},
	{"float(x)", "1:1 write float64(x)"},
	{"str(x)", "1:1 write fmt.Sprint(x)"},
	{"\"a\" + 1", "1:1 write fmt.Sprint(\"a\", 1)"},
	{"\"a\" + x", "1:1 write fmt.Sprint(\"a\", x)"},
	{"fmt.Printf(\"%d\\n\", x)", "1:1 write %g"},
	{"fmt.Println(\"x = %f\", x)", "1:1 write fmt.Printf(...)"},
	{"fmt.println(x)", "1:5 write fmt.Println"},
	{"Println(x)", "1:1 did you mean fmt.Println or println?"},
	{"printf(\"%g\", x)", "1:1 write fmt.Printf(\"%g\", x)"},
	{"cout << x", "1:1 write fmt.Println(x)"},
	{"y := x > 1 ? 1 : 2", "1:12 write if ... { } else { }: Go has no ? : operator"},
	{"y := 1 if x > 1 else 2", "1:8 write y := 2, and if x > 1 { y = 1 } below it"},
	{"[v*2 for v in xs]", "1:6 write a loop: for _, v := range xs { out = append(out, v*2) }"},
	{"const g = x", "1:11 write g := x for a value that is computed"},
	{"x, y := 3", "1:9 write x, y := 3, 3"},
	{"var a [3]float64 = {1, 2, 3}", "1:20 write var a = [3]float64{1, 2, 3}"},
	{"a := {1, 2, 3}", "1:6 write []float64{1, 2, 3}"},
	{"m := {\"a\": 1}", "1:6 write map[string]float64{\"a\": 1}"},
	{"try:\n    x", "1:1 write v, err := f() and if err != nil { ... }: Go has errors for exceptions\n2:5 write fmt.Println(x) to see it, or make it the cell's last line"},
	{"import math", "1:12 delete the line: the package math is there without an import"},
	{"fmt.Sprintf(\"%d\", x)\ny := 2", "1:1 the call has no other effect: give the result a name, or delete the line\n1:1 write %g"},
	{"!x", "1:2 write x == 0 or x != 0: only what is true or false can be a condition"},
	{"x == n", "1:6 write x == float64(n)"},
	{"cu.Theta = 300", "1:12 give it a unit: 300 * unit.K"},
	{"cu.Thetas", "1:4 did you mean Theta?"},
	{"let y = 3", "1:5 write y := 3"},
	{"y <- 3", "1:1 write y := 3: <- sends on a channel"},
	{"x.In(unit.K)", "1:3 x is a plain number: give it a unit, as in 300 * unit.K, to read it in another"},
	{"T.In(K)", "1:6 did you mean unit.K?"},
	{"T.In(\"K\")", "1:6 write unit.K"},
	{"T.to(\"cm-1\")", "1:3 write T.In(unit.K)"},
	{"T.In(unit.PerCm)", "1:6 write T.AsEnergy().In(unit.PerCm)"},
	{"f := open(\"a.txt\")", "1:6 write os.ReadFile(\"a.txt\"), or data.Read(\"a.txt\") for a table with units"},
	{"display.Plot(xs, xs)", "1:9 write display.Figure{X: xs, Y: ys} as the last line of a cell"},
	{"plot(xs, xs)", "1:1 write display.Figure{X: xs, Y: ys} as the last line of a cell"},
	{"help(solid.Debye)", "1:1 put the cursor on a name and press Shift-Tab; catalogue.All() lists what there is"},
	{"?solid.Debye", "1:1 put the cursor on a name and press Shift-Tab to read about it; catalogue.All() lists what there is"},
	{"%time x", "1:1 a cell is Go: there are no commands that begin with %"},
	{"!ls", "1:2 a cell is Go: other programs are run by exec.Command of os/exec"},
	{"exit()", "1:1 the session ends by the Kernel menu"},
	{"fmt.Println(\"a\"", "1:16 close the ) on this line, or end the line with a comma"},
	{"fmt.Println(\"a))", "1:13 close the text with \" on the same line"},
	{"func f() { return 1 }", "1:19 write the type of the result behind the brackets: func f(...) float64 {"},
	{"1e-3 * R", "1:8 write 1e-3 * unit.R"},
	{"3 unit.K", "1:3 write 3 * unit.K"},
	{"var T1 unit.Temperature = 25", "1:27 give it a unit: 25 * unit.K"},
	{"T1 := 25 * unit.Celsius", "1:7 write unit.Celsius(25)"},
	{"gas.FromLibrary(\"H2O\").Entropy(T)", "1:1 write v, err := gas.FromLibrary(\"H2O\") first, then use v"},
	{"reaction.New(\"H2 + O2 = H2O\")", "1:29 it is called as reaction.New(equation string, kind reaction.EnergyKind, molecules ...*gas.Molecule)"},
	{"T := 300 K", "1:10 write 300 * unit.K"},
	{"n*math.Log(1+x)", "1:1 write float64(n) * math.Log(1+x)"},
	{"10^-3", "1:3 write 1e-3"},
	{"2^10", "1:2 write math.Pow(2, 10)"},
	{"n^2", "1:2 write n*n"},
	{"float64(n/2)", "1:1 write float64(n) / 2"},
	{"n // 2", "1:3 write / for a division of whole numbers that drops the remainder"},
	{"T / (250*unit.K)", "1:3 write float64(T / (250 * unit.K))"},
	{"T / unit.K", "1:3 write T.In(unit.K)"},
	{"math.Exp(-gap / T.AsEnergy())", "1:10 write float64(-gap / T.AsEnergy()): the ratio is a plain number"},
	{"cu.HeatCapacity(unit.Temperatures([]float64{1, 2}, unit.K))", "1:17 write cu.HeatCapacities(unit.Temperatures([]float64{1, 2}, unit.K))"},
	{"cu.HeatCapacities(T)", "1:19 write []unit.Temperature{T}"},
	{"statmech.Audit(cu)", "1:18 it is called as statmech.Audit(m statmech.Mode, o statmech.AuditOptions)"},
	{"for _, s := range []string{\"1\", \"x\"} {\n\tv, err := strconv.Atoi(s)\n\tfmt.Println(v)\n}", "2:5 look at it: if err != nil { panic(err) } ends the cell and shows it"},
	{"f(y) = y*2", "1:1 write func f(y float64) float64 { return y*2 }"},
	{"x := 1,5", "1:6 write 1.5 with a point, if it is one number"},
	{"y := x²", "1:7 write x*x or math.Pow(x, 2)"},
	{"s := “hello”", "1:6 write \" for “"},
	{"a − b", "1:3 write - for −"},
	{"fmt.Printf(\"%f\", n)", "1:1 write %d"},
	{"for i = 0; i < 3; i++ {\n}", "1:5 write i := 0 to declare i"},
	{"for (int i = 0; i < 3; i++) {\n}", "1:10 write for i := 0; i < 3; i++ {"},
	{"x = \"a\"", "1:5 write x := \"a\" to declare x anew: a variable keeps its type"},
	{"n = 2.5", "1:5 write n := 2.5 to declare n anew: a variable keeps its type"},
	{"var q int = 2.5", "1:13 write var q float64 = 2.5"},
	{"if n { }", "1:4 write a comparison: x != 0"},
	{"def f(x, y=2):", "1:5 write func f(x, y float64) float64 { return ... }"},
	{"print x", "1:7 write fmt.Println(x)"},
	{"1.5d0", "1:4 write 1.5e0"},
	{"x := []float64{1, 2, 3", "1:23 end the line with a comma, or close the } on it"},
	{"func h(x float64) -> float64 {\n\treturn x\n}", "1:19 write func h(x float64) float64 {"},
	{"func h(x float64): float64 {\n\treturn x\n}", "1:18 write func h(x float64) float64 {"},
	{"const k = 3\nk = 4", "2:1 k is a constant: declare it by k := 3 to change it"},
	{"m := map[string]float64{\"a\": 1}\nm.a", "2:3 write m[\"a\"]"},
	{"T.AsEnergy / gap", "1:1 write T.AsEnergy(): a function is called with brackets"},
	{"solid.Debye{Theta: 343 * unit.K}.HeatCapacity(25 * unit.Celsius(1))", "1:50 write unit.Celsius(25) for 25 °C"},
	{"a := 12 * unit.KJPerMol + 3 * unit.MolarKJ", "1:6 write 12 * unit.KJPerMol + 3 * unit.KJPerMol, or 12 * unit.MolarKJ + 3 * unit.MolarKJ"},
	{"statmech.NewLevels([]float64{0, 100}, []float64{1, 3})", "1:20 write unit.Energies([]float64{0, 100}, unit.PerCm)"},
	{"statmech.NewLevels([0, 100], [1, 3])", "1:22 write []float64{0, 100}"},
	{"lv, err := statmech.NewLevels([]unit.Energy{0, 100}, []float64{1, 3})", "1:48 give it a unit: 100 * unit.PerCm"},
	{"gas.Monatomic{Mass: 39.95}", "1:21 give it a unit: 39.95 * unit.U"},
	{"gas.Monatomic{Mass: 39.95 * unit.GPerMol}", "1:21 write (39.95 * unit.GPerMol).PerParticle()"},
	{"for i := range 3 {\n\ti * 2\n}", "2:2 write fmt.Println(i * 2) to see it"},
	{"var T2 = 300\ncu.HeatCapacity(T2)", "2:17 write unit.Temperature(T2) * unit.K"},
	{"gap / T.AsEnergy()", "1:5 write float64(gap / T.AsEnergy())"},
	{"n*math.Log(1+2.0)", "1:1 write float64(n) * math.Log(1+2.0)"},
	{"25 * unit.Celsius", "1:1 write unit.Celsius(25)"},
	{"T + 25*unit.Celsius(1)", "1:7 write unit.Celsius(25) for 25 °C"},
	{"x ** -0.5", "1:6 write math.Pow(x, -0.5)"},
	{"10**-3", "1:5 write 1e-3"},
	{"def f():", "1:5 write func f() float64 { return ... }"},
	{"for i in range(1, 10):", "1:7 write for i := 1; i < 10; i++ {"},
	{"for i in range(0, 10, 2):", "1:7 write for i := 0; i < 10; i += 2 {"},
	{"for i in range(len(xs)):", "1:7 write for i := range xs {"},
	{"for i, v in enumerate(xs):", "1:5 write for i, v := range xs {"},
	{"for k, v in m.items():", "1:5 write for k, v := range m {"},
	{"elif x > 2:", "1:6 write } else if x > 2 {"},
	{"if x > 1:\n    y = 2", "1:9 write if x > 1 { ... }"},
	{"if x > 1 {\n}\nelse {\n}", "3:1 write } else { on one line"},
	{"x === 2", "1:5 write =="},
	{"x = = 3", "1:5 write one = to assign, == to compare"},
	{"if x <> 1 {\n}", "1:7 write !="},
	{"if not (x > 1) {\n}", "1:4 write ! for not"},
	{"class Foo:", "1:7 write type Foo struct { ... }, and methods as func (x Foo) Name() { ... }"},
	{"raise ValueError(\"a\")", "1:7 write v, err := f() and if err != nil { ... }: Go has errors for exceptions"},
	{"end", "1:1 write }"},
	{"#include <math.h>", "1:1 write import and a path in quotes; the usual packages are there without"},
	{"n % 2.5", "1:5 an int holds whole numbers: make it a float64, as in n := 3.0"},
	{"x % 2", "1:1 write math.Mod(x, 2)"},
	{"3x", "1:2 write 3 * x"},
	{"s := \"a\nb\"", "1:6 close the text with \" on the same line"},
	{"\"\"\" text\nmore \"\"\"", "2:8 write text of several lines between backquotes: `...`"},
	{"y = x if x > 1 else 2", "1:7 write y := 2, and if x > 1 { y = x } below it"},
	{"function f(x)", "1:10 write func f(x float64) float64 { return ... }"},
	{"fn f(x: f64) -> f64 {", "1:4 write func f(x float64) float64 { return ... }"},
	{"var y float64 := 3", "1:15 write var y float64 = 3"},
	{"const y := 3", "1:9 write const y = 3"},
	{"y: float = 3", "1:1 write y := ... : a word with a colon is a label\n1:4 write float := 3 to declare float"},
	{"import pandas as pd", "1:15 write data.Read(\"file.csv\") for a table with units"},
	{"import matplotlib.pyplot as plt", "1:18 write display.Figure{X: xs, Y: ys} as the last line of a cell"},
	{"plt.plot(xs, xs)", "1:1 write display.Figure{X: xs, Y: ys} as the last line of a cell"},
	{"np.array([1, 2])", "1:12 write []float64{1, 2}"},
	{"np.linspace(0, 1, 10)", "1:1 write unit.TemperatureSteps(from, to, step), or a loop"},
	{"[[1, 2], [3, 4]]", "1:1 write [][]float64{{1, 2}, {3, 4}}"},
	{"[]", "1:3 write []float64{}"},
	{"f(T=300)", "1:4 give the values alone, in order: Go has no named arguments"},
	{"cu.HeatCapacity(T=300)", "1:18 give the values alone, in order: Go has no named arguments"},
	{"x = 1; y = 2", "1:8 write y := 2 to declare y"},
	{"xs.len()", "1:4 write len(xs)"},
	{"xs.sort()", "1:4 write slices.Sort(xs)"},
	{"len xs", "1:5 write len(xs)"},
	{"mean(xs)", "1:1 write stat.Mean(xs, nil) with import \"gonum.org/v1/gonum/stat\""},
	{"pow(x, 2)", "1:1 write math.Pow(x, 2)"},
	{"ln(x)", "1:1 write math.Log(x)"},
	{"log10(x)", "1:1 did you mean math.Log10 or uncertain.Log10?"},
	{"pi * x", "1:1 did you mean math.Pi?"},
	{"hbar * x", "1:1 write unit.ReducedPlanck"},
	{"NA * x", "1:1 write unit.Avogadro"},
	{"e^x", "1:1 write math.Exp(x)"},
	{"xs[x]", "1:4 write xs[int(x)]"},
	{"for i := range x {\n}", "1:16 write range int(x) to count, or range over a slice"},
	{"s := \"T = \" + T", "1:6 write fmt.Sprint(\"T = \", T)"},
	{"cu.HeatCapacity(298.15)", "1:17 give it a unit: 298.15 * unit.K"},
	{"cu.HeatCapacity(ts)", "1:17 write cu.HeatCapacities(ts)"},
	{"cu.Entropy(T, p)", "1:15 it is called as cu.Entropy(T unit.Temperature)"},
	{"solid.Einstein(T)", "1:16 write solid.Einstein{Theta: T}"},
	{"x == 2.0 and n == 3", "1:10 write && for and"},
	{"try {\n}", "1:1 write v, err := f() and if err != nil { ... }: Go has errors for exceptions"},
	{"gas.Monatomic{Mass: 40 * unit.Dalton}", "1:31 write unit.U"},
	{"unit.Energy(300 * unit.K)", "1:1 write (300 * unit.K).AsEnergy()"},
	{"var w unit.Temperature = 300 * unit.PerCm", "1:26 write (300 * unit.PerCm).AsTemperature()"},
	{"var w unit.Energy = 300 * unit.K", "1:21 write (300 * unit.K).AsEnergy()"},
	{"var w unit.Pressure = 1", "1:23 give it a unit: 1 * unit.Bar"},
	{"var w unit.Pressure = 101325", "1:23 give it a unit: 101325 * unit.Pa"},
	{"25°", "1:3 write unit.Celsius(25)"},
	{"T = 25", "1:5 give it a unit: 25 * unit.K"},
	{"p + T", "1:1 they measure different things, and no call makes one of the other"},
	{"T < 300", "1:5 give it a unit: 300 * unit.K"},
	{"T < gap", "1:5 write T < gap.AsTemperature(), or T.AsEnergy() < gap"},
	{"T == 0.5", "1:6 give it a unit: 0.5 * unit.K"},
	{"T - 273.15", "1:5 write unit.Celsius(25) for a temperature in °C, or 273.15 * unit.K"},
	{"math.Log(p / (1 * unit.Bar))", "1:10 write float64(p / (1 * unit.Bar)): the ratio is a plain number"},
	{"math.Pow(T, 2)", "1:10 write T.In(unit.K)"},
	{"unit.R * T", "1:1 write unit.R.Times(T)"},
	{"unit.R * T * x", "1:1 write unit.R.Times(T)"},
	{"cu.HeatCapacity(T) * T", "1:1 write cu.HeatCapacity(T).Times(T)"},
	{"cu.HeatCapacity(T) / unit.R", "1:20 write cu.HeatCapacity(T).In(unit.R)"},
	{"cu.HeatCapacity(T) + 3", "1:22 give it a unit: 3 * unit.JPerMolK"},
	{"n += 0.5", "1:6 an int holds whole numbers: make it a float64, as in n := 3.0"},
	{"n := 3\nfor {\n\tn = n + x\n}", "3:6 write float64(n) + x"},
	{"func f(x float64) float64 {\n\tif x > 1 {\n\t\treturn 1\n\t}\n}", "5:1 write return and a value at the end of the function"},
	{"func f() float64 {\n\ty := 3.0\n}", "3:1 write return y at the end of the function"},
	{"func f() (float64, error) {\n\tv, err := strconv.ParseFloat(\"1\", 64)\n\treturn v, nil\n}", "2:5 look at it: if err != nil { return ..., err }"},
	{"func f(T) { }", "1:8 write T float64: a parameter has a type"},
	{"func f(x: float64) { }", "1:9 write x float64 without the colon"},
	{"y := func(x) { return x }", "1:11 write x float64: a parameter has a type\n1:23 write the type of the result behind the brackets: func f(...) float64 {"},
	{"a, b := xs", "1:9 write a, b := xs[0], xs[1]"},
	{"fmt.Printl(x)", "1:5 did you mean fmt.Print or fmt.Printf?"},
	{"fmt.Println(x", "1:14 close the ) on this line, or end the line with a comma"},
	{"fmt.Print(x))", "1:13 delete one )"},
	{"\"a\".upper()", "1:5 write strings.ToUpper(...)"},
	{"cu.Theta()", "1:1 write cu.Theta without brackets"},
	{"solid.Debye{343 * unit.K}", "1:25 write solid.Debye{Theta: 343 * unit.K}: name the fields"},
	{"solid.Debey{}", "1:7 did you mean solid.Debye?"},
	{"display.Table(xs)", "1:15 write display.Table{Caption: xs}"},
	{"os.exit(1)", "1:4 write os.Exit"},
	{"var a []float64 = [1.0, 2.0]", "1:23 write []float64{1.0, 2.0}"},
	{"a := [3]{1, 2, 3}", "1:9 write [3]float64{1, 2, 3}"},
	{"x = x +", "1:8 finish the expression, or close the brackets that are open"},
	{"while True:", "1:7 write for {"},
	{"x := yes", "1:6 write true or false"},
	{"T.In(unit.k)", "1:11 write unit.K"},
	{"p.In(unit.atm)", "1:11 write unit.Atm"},
	{"p.In(unit.mmHg)", "1:11 write unit.MmHg"},
	{"gap.In(unit.eV)", "1:13 write unit.EV"},
	{"gap.In(unit.K)", "1:8 write gap.AsTemperature().In(unit.K)"},
	{"gap.In(unit.KJ)", "1:13 write unit.MolarKJ for a molar energy in kJ/mol, unit.KJPerMol for the energy of one particle"},
	{"k_B * T", "1:1 write T.AsEnergy() for kT"},
	{"boltzmann * T", "1:1 did you mean unit.Boltzmann?"},
	{"h * x", "1:1 write unit.Planck"},
	{"c * x", "1:1 write unit.SpeedOfLight"},
	{"unit.kB", "1:6 write unit.Boltzmann"},
	{"unit.NA", "1:6 write unit.Avogadro"},
	{"unit.hbar", "1:6 write unit.ReducedPlanck"},
	{"unit.Boltzmann * T", "1:16 write T.AsEnergy()"},
	{"T * unit.Boltzmann", "1:3 write T.AsEnergy()"},
	{"gap / unit.Boltzmann", "1:5 write gap.AsTemperature()"},
	{"gap * unit.Avogadro", "1:5 write gap.PerMole()"},
	{"unit.GasConstant * T", "1:18 write unit.R.Times(T)"},
	{"cu.HeatCapacity(T) / unit.GasConstant", "1:20 write cu.HeatCapacity(T).In(unit.R)"},
	{"1 / (unit.Boltzmann * T)", "1:1 give it a unit: 1 * unit.K\n1:21 write T.AsEnergy()"},
	{"p * unit.Avogadro", "1:3 write it with plain numbers in SI: p.SI()"},
	{"0.5 * unit.EV / unit.Boltzmann / T", "1:1 write (0.5 * unit.EV).OverKT(T) for the ratio to kT"},
	{"for T := range unit.TemperatureSteps(1*unit.K, 5*unit.K, 1*unit.K) {\n\tcu.HeatCapacity(T)\n}",
		"2:18 write for _, T := range unit.TemperatureSteps(1*unit.K, 5*unit.K, 1*unit.K) { ... }: the first variable counts"},
	{"for T := range ts {\n\tfmt.Println(T * unit.K)\n}", "2:14 write for _, T := range ts { ... }: the first variable counts"},
	{"s := 0.0\nfor _, T := range ts {\n\ts += T\n}", "3:2 write var s unit.Temperature to declare it"},
	{"gas.FromLibrary(\"H2\").Entropy([]unit.Temperature{T}[0])", "1:1 write v, err := gas.FromLibrary(\"H2\") first, then use v"},
	{"type Morse struct{}\nfunc (m Morse) Reduced(T float64) float64 { return 1 }\nstatmech.Audit(Morse{}, statmech.AuditOptions{})",
		"3:16 write the method as Reduced(unit.Temperature) statmech.Reduced"},
	{"cu.HeatCapacity(T).round(2)", "1:20 write fmt.Sprintf(\"%.2f\", cu.HeatCapacity(T))"},
	{"mass * 2", "1:1 write mass.Scale(2)"},
	{"2 * mass", "1:1 write mass.Scale(2)"},
	{"mass / 2", "1:1 write mass.Scale(1 / 2)"},
	{"mass + mass", "1:1 write mass.Plus(mass)"},
	{"mass / mass", "1:1 write mass.Over(mass)"},
	{"1 - mass", "1:1 write mass.Scale(-1).Shift(1)"},
	{"x / mass", "1:1 write uncertain.Exact(x).Over(mass)"},
	{"math.Exp(mass)", "1:10 write uncertain.Exp(mass)"},
	{"math.Gamma(mass)", "1:12 write mass.Value() for the value alone"},
	{"y := []float64{mass}", "1:16 write mass.Value() for the value alone"},
	{"levels.Entropy(T)", "1:8 write statmech.Molar{Mode: levels}.Entropy"},
	{"levels.Cp(T)", "1:8 write statmech.Molar{Mode: levels}.HeatCapacity"},
	{"table[\"T\"]", "1:1 write table.T"},
	{"table[\"mass\"]", "1:1 write table.Column(\"mass\")"},
	{"display.Table{Columns: []display.Column{{\"T\", ts}}}", "1:49 write {Quantity: \"T\"}: name the fields"},
	{"func f() statmech.Reduced {\n\treturn {LogQ: x}\n}", "2:9 write the type before {: a literal has one"},
	{"cu.Cp(T)", "1:4 write cu.HeatCapacity"},
	{"cu.S(T)", "1:4 write cu.Entropy"},
	{"cu.PartitionFunction(T)", "1:4 write cu.Reduced(T).LogQ for ln q"},
	{"solid.Debye{Theta: 343 * unit.K, N: 3}", "1:34 its fields are Theta, Modes"},
	{"solid.Debye{Tehta: 343 * unit.K}", "1:13 did you mean Theta?"},
	{"statmech.Boltzmann", "1:10 did you mean unit.Boltzmann?"},
	{"solid.Levels{}", "1:7 did you mean statmech.Levels?"},
	{"gas.Debye{}", "1:5 did you mean solid.Debye?"},
	{"1 * unit.Atmosphere", "1:10 write unit.Atm"},
	{"var c unit.MolarHeatCapacity", "1:12 write unit.MolarEntropy: heat capacities have the type of entropies"},
	{"for T := 10; T < 300; T += 10 {\n\tcu.HeatCapacity(T * unit.K)\n}", "2:18 write unit.Temperature(T) * unit.K"},
	{"for (i in 1:3) {\n}", "1:8 write for i := 1; i <= 3; i++ {"},
	{"x = 5 if x > 3", "1:7 write if x > 3 { x = 5 }"},
	{"y := xs.apply(math.Sqrt)", "1:9 write a loop: for _, x := range xs { ... }"},
	{"import numpy", "1:13 write math.Exp and loops over []float64; gonum has matrices, statistics and more: import \"gonum.org/v1/gonum/stat\""},
	{"fmt.Println(T.In(unit.C))", "1:23 write unit.Celsius(25): a Celsius temperature is no multiple of a unit"},
	{"assert x == 2", "1:8 write if !(x == 2) { panic(\"...\") }"},
	{"T := 300 * unit.K,", "1:19 finish the expression, or close the brackets that are open"},
}

func TestWrongCells(t *testing.T) {
	s := beginner(t)
	for _, test := range wrongCells {
		if got := said(s, test.source); got != test.want {
			t.Errorf("%q:\n%s\nwant\n%s", test.source, got, test.want)
		}
	}
}

// A name that stands in a cell with an error is not there; the cell is named.
func TestNameOfAFailedCell(t *testing.T) {
	s := beginner(t)
	if _, err := s.Check(&cell.Source{N: 7, Text: "width := nosuch\ndepth := 1"}); err == nil {
		t.Fatal("no error")
	}
	if got, want := said(s, "depth + 1"), "1:1 depth stands in In[7], which had an error and so declared nothing: mend it and run it again"; got != want {
		t.Errorf("%s, want %s", got, want)
	}
	adopt(t, s, 8, "depth := 1")
	if got := said(s, "depth + 1"); got != "" {
		t.Errorf("%s, want nothing", got)
	}
}

// Whatever is wrong, looking for a hint does not fail.
func FuzzHints(f *testing.F) {
	for _, c := range wrongCells {
		f.Add(c.source)
	}
	s := beginner(f)
	f.Add("for 0,A:=range xs{B00(0)}")
	s.BareHints()
	f.Fuzz(func(t *testing.T, text string) {
		_, err := s.Clone().Check(&cell.Source{N: 2, Text: text})
		var ds cell.Diagnostics
		if err != nil && !errors.As(err, &ds) {
			t.Errorf("%q: error %T", text, err)
		}
		for _, d := range ds {
			if strings.Contains(d.Hint, "\n") {
				t.Errorf("%q: a hint of several lines: %q", text, d.Hint)
			}
		}
	})
}
