package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// constantNames are the physicists' names of constants.
var constantNames = map[string]string{
	"kB": "unit.Boltzmann", "kb": "unit.Boltzmann", "k_B": "unit.Boltzmann", "KB": "unit.Boltzmann",
	"hbar": "unit.ReducedPlanck", "ħ": "unit.ReducedPlanck", "ℏ": "unit.ReducedPlanck", "h": "unit.Planck",
	"NA": "unit.Avogadro", "N_A": "unit.Avogadro", "Na": "unit.Avogadro", "c0": "unit.SpeedOfLight", "c": "unit.SpeedOfLight",
	"muB": "unit.BohrMagneton", "μB": "unit.BohrMagneton", "mu_B": "unit.BohrMagneton", "amu": "unit.AtomicMassConstant",
	"c2": "unit.SecondRadiationConstant", "e": "math.E or unit.ElementaryCharge", "π": "math.Pi",
	"inf": "math.Inf(1)", "Inf": "math.Inf(1)", "nan": "math.NaN()", "NaN": "math.NaN()",
	"None": "nil", "null": "nil", "NULL": "nil", "nullptr": "nil", "True": "true", "False": "false", "self": "the receiver's name", "this": "the receiver's name",
}

// callNames are functions that other languages have, with what Go writes; # is
// the argument.
var callNames = map[string]string{
	"printf": "fmt.Printf(#)", "cout": "fmt.Println(#)", "echo": "fmt.Println(#)", "puts": "fmt.Println(#)", "disp": "fmt.Println(#)",
	"str": "fmt.Sprint(#)", "float": "float64(#)", "double": "float64(#)", "integer": "int(#)", "ln": "math.Log(#)",
	"range": "for i := range #", "type": `fmt.Printf("%T", #)`, "typeof": `fmt.Printf("%T", #)`, "sorted": "slices.Sort(#)",
	"sum":  "a loop, for _, v := range # { total += v }, or floats.Sum(#) with import \"gonum.org/v1/gonum/floats\"",
	"mean": "stat.Mean(#, nil) with import \"gonum.org/v1/gonum/stat\"", "average": "stat.Mean(#, nil) with import \"gonum.org/v1/gonum/stat\"",
	"std": "stat.StdDev(#, nil) with import \"gonum.org/v1/gonum/stat\"", "zeros": "make([]float64, #)",
	"linspace": "unit.TemperatureSteps(from, to, step), or a loop", "arange": "unit.TemperatureSteps(from, to, step), or a loop",
	"array": "[]float64{...}", "list": "[]float64{...}", "dict": "map[string]float64{...}", "plot": "display.Figure{X: xs, Y: ys} as the last line of a cell",
	"input": "fmt.Scanln(&x)", "raw_input": "fmt.Scanln(&x)", "enumerate": "for i, v := range #", "isinstance": "switch x := x.(type) { ... }",
	"open": "os.ReadFile(#), or data.Read(#) for a table with units", "size": "len(#)", "length": "len(#)", "show": "display.Show(#)",
	"help": "=put the cursor on a name and press Shift-Tab; catalogue.All() lists what there is", "pow": "math.Pow(#)",
	"exit": "=the session ends by the Kernel menu", "quit": "=the session ends by the Kernel menu",
	"read_csv": "data.Read(#)", "loadtxt": "data.Read(#)", "genfromtxt": "data.Read(#)", "curve_fit": "fit.Curve(...), or fit.HeatCapacity(...)",
	"interp": "a fit or calorimetry.Smooth", "quad": "quad.Fixed(...) with import \"gonum.org/v1/gonum/integrate/quad\"", "trapz": "integrate.Trapezoidal(...) with import \"gonum.org/v1/gonum/integrate\"",
	"simpson": "integrate.Simpsons(...) with import \"gonum.org/v1/gonum/integrate\"",
	"append":  "append(xs, #)",
}

// foreignName answers a name that other languages, or formulas, have.
func (c *checking) foreignName(path []ast.Node, name string) string {
	if len(path) == 0 {
		return ""
	}
	var parent ast.Node
	if len(path) > 1 {
		parent = path[1]
	}
	if st, ok := parent.(*ast.SendStmt); ok && st.Chan == path[0] {
		return "write " + name + " := " + c.text(st.Value) + ": <- sends on a channel"
	}
	if a, ok := parent.(*ast.AssignStmt); ok {
		for _, l := range a.Lhs {
			if l == path[0] {
				if call, ok := assigned(path); ok {
					return "write " + call + " to declare " + name
				}
			}
		}
	}
	switch name {
	case "not":
		return "write ! for not"
	case "try":
		return "write v, err := f() and if err != nil { ... }: Go has errors for exceptions"
	case "end":
		return "write }"
	case "yes", "no":
		return "write true or false"
	}
	if call, ok := parent.(*ast.CallExpr); ok && call.Fun == path[0] {
		// f(x) = ... is said as a whole.
		if len(path) > 2 {
			if a, ok := path[2].(*ast.AssignStmt); ok && len(a.Lhs) == 1 && a.Lhs[0] == call {
				return c.assignedCall(call.Pos())
			}
		}
		var args []string
		for _, x := range call.Args {
			args = append(args, c.text(x))
		}
		if how := callNames[name]; how != "" {
			if verbatim, ok := strings.CutPrefix(how, "="); ok {
				return verbatim
			}
			return "write " + strings.ReplaceAll(how, "#", strings.Join(args, ", "))
		}
		return ""
	}
	if b, ok := parent.(*ast.BinaryExpr); ok && b.Op == token.XOR && name == "e" && b.X == path[0] {
		return "write math.Exp(" + unbracketed(c.text(b.Y)) + ")"
	}
	if name == "R" {
		return c.gasConstant(path)
	}
	if u, ok := parent.(*ast.UnaryExpr); ok && u.Op == token.NOT && strings.HasPrefix(strings.TrimSpace(c.p.src.Text), "!") {
		return "a cell is Go: other programs are run by exec.Command of os/exec"
	}
	if b, ok := parent.(*ast.BinaryExpr); ok && b.Op == token.MUL && slices.Contains([]string{"k", "kB", "kb", "k_B", "KB"}, name) {
		other := b.Y
		if other == path[0] {
			other = b.X
		}
		if quantity(orInvalid(c.typeOf(other))) == "Temperature" {
			return "write " + operand(unbracketed(c.text(other))) + ".AsEnergy() for kT"
		}
	}
	if b, ok := parent.(*ast.BinaryExpr); ok && name == "cout" {
		return "write fmt.Println(" + c.text(b.Y) + ")"
	}
	if _, ok := parent.(*ast.BinaryExpr); !ok && len([]rune(name)) == 1 && name != "π" && name != "ħ" {
		return "" // a name of the user's own, most likely
	}
	if how := constantNames[name]; how != "" {
		return "write " + how
	}
	return ""
}

// gasConstant answers R, which is a quantity and a plain number: in a product
// the other factor decides.
func (c *checking) gasConstant(path []ast.Node) string {
	if len(path) < 2 {
		return ""
	}
	b, ok := path[1].(*ast.BinaryExpr)
	if !ok {
		return ""
	}
	other := b.Y
	if other == path[0] {
		other = b.X
	}
	t := c.typeOf(other)
	switch {
	case b.Op == token.MUL && t != nil && quantity(t) == "Temperature":
		return "write unit.R.Times(" + unbracketed(c.text(other)) + ")"
	case t != nil && quantity(t) != "", b.Op != token.MUL && b.Op != token.QUO:
		return ""
	}
	if lit, ok := other.(*ast.BasicLit); ok {
		return "write " + lit.Value + " " + b.Op.String() + " unit.R"
	}
	x := unbracketed(c.text(other))
	return "write unit.R " + b.Op.String() + " unit.MolarEntropy(" + x + "), or unit.GasConstant for a plain number"
}

// symbolMembers are the methods that the symbols of formulas, and their names
// elsewhere, stand for; of several the first that a type has.
var symbolMembers = map[string][]string{
	"cp": {"HeatCapacity", "HeatCapacityP"}, "cv": {"HeatCapacity", "HeatCapacityV"}, "c": {"HeatCapacity"}, "c_v": {"HeatCapacity"}, "c_p": {"HeatCapacity"},
	"specificheat": {"HeatCapacity"}, "heat": {"HeatCapacity"}, "s": {"Entropy"}, "h": {"EnthalpyIncrement"}, "enthalpy": {"EnthalpyIncrement", "EnthalpyFromReference"},
	"u": {"ThermalEnergy", "EnergyIncrement"}, "e": {"ThermalEnergy"}, "energy": {"ThermalEnergy"}, "internalenergy": {"ThermalEnergy", "EnthalpyIncrement"},
	"g": {"GibbsFunction", "GibbsEnergy"}, "gibbs": {"GibbsFunction", "GibbsEnergy"}, "gibbsenergy": {"GibbsFunction"}, "freeenergy": {"HelmholtzEnergy", "GibbsFunction"},
	"q": {"Reduced"}, "z": {"Reduced"}, "logq": {"Reduced"}, "partitionfunction": {"Reduced"}, "zpe": {"ZeroPointEnergy"},
	"theta": {"Theta"}, "thetad": {"Theta"}, "m": {"Mass"},
}

// symbolMember answers a symbol in place of the method of a type of ours.
func (c *checking) symbolMember(sel *ast.SelectorExpr) string {
	members := c.membersOf(sel.X)
	for _, m := range symbolMembers[strings.ToLower(sel.Sel.Name)] {
		if !slices.Contains(members, m) {
			continue
		}
		if m == "Reduced" {
			return "write " + c.text(sel.X) + ".Reduced(T).LogQ for ln q"
		}
		return "write " + c.text(sel.X) + "." + m
	}
	return ""
}

// foreignMember answers a method that other languages give to slices, strings
// and numbers.
func (c *checking) foreignMember(sel *ast.SelectorExpr) string {
	x := c.text(sel.X)
	t := c.typeOf(sel.X)
	if t == nil {
		return ""
	}
	name := strings.ToLower(sel.Sel.Name)
	if h := c.symbolMember(sel); h != "" {
		return h
	}
	if h := c.molarMember(sel); h != "" {
		return h
	}
	if quantity(t) != "" {
		switch name {
		case "round", "format", "tofixed":
			return "write fmt.Sprintf(\"%.2f\", " + x + ")"
		case "to", "as", "convert", "value", "magnitude", "m_as":
			return "write " + x + ".In(unit." + unitOrExample(quantity(t)) + ")"
		}
		return ""
	}
	args := ""
	if call := around[*ast.CallExpr](c, sel.Pos()); call != nil && call.Fun == sel {
		var all []string
		for _, a := range call.Args {
			all = append(all, c.text(a))
		}
		args = strings.Join(all, ", ")
	}
	switch t.Underlying().(type) {
	case *types.Slice, *types.Basic, *types.Array:
	case *types.Map:
		if !slices.Contains([]string{"keys", "items", "len", "length", "size", "count"}, name) {
			return "write " + x + "[\"" + sel.Sel.Name + "\"]"
		}
	default:
		return ""
	}
	switch name {
	case "append", "push", "add":
		return "write " + x + " = append(" + x + ", " + args + ")"
	case "len", "length", "size", "shape", "count":
		return "write len(" + x + ")"
	case "sort":
		return "write slices.Sort(" + x + ")"
	case "sum", "mean", "std":
		return "write " + strings.ReplaceAll(callNames[name], "#", x)
	case "max", "min":
		return "write slices." + strings.ToUpper(name[:1]) + name[1:] + "(" + x + ")"
	case "map", "filter", "apply", "foreach":
		return "write a loop: for _, x := range " + x + " { ... }"
	case "keys":
		return "write for k := range " + x
	case "items":
		return "write for k, v := range " + x
	case "upper", "lower", "split", "strip", "replace", "join":
		return "write strings." + map[string]string{"upper": "ToUpper", "lower": "ToLower", "split": "Split", "strip": "TrimSpace", "replace": "ReplaceAll", "join": "Join"}[name] + "(...)"
	case "in":
		if b, ok := t.Underlying().(*types.Basic); ok && b.Info()&types.IsNumeric != 0 {
			return x + " is a plain number: give it a unit, as in 300 * unit.K, to read it in another"
		}
	}
	return ""
}

func unitOrExample(q string) string {
	if u := exampleUnit(q); !strings.Contains(u, " ") {
		return u
	}
	return "..."
}

// foreignCall answers a member of a package that other languages have, or that
// people expect in one of ours; inMath are the names of the package math.
func foreignCall(pkg, member string, inMath []string) string {
	switch pkg {
	case "np", "numpy", "scipy", "sp", "jnp", "cmath", "Math", "std", "numbers", "integrate", "optimize":
		for _, m := range inMath {
			if strings.EqualFold(m, member) {
				return "write math." + m
			}
		}
	case "plt", "pyplot", "ax", "matplotlib", "display", "plot":
		switch member {
		case "plot", "Plot", "scatter", "Scatter", "errorbar", "show", "Line", "LinePlot", "Chart", "Graph":
			return "write display.Figure{X: xs, Y: ys} as the last line of a cell"
		}
	case "pd", "pandas":
	case "sys", "console", "System":
		return "write fmt.Println(...)"
	default:
		return ""
	}
	if how := callNames[member]; how != "" {
		return "write " + strings.ReplaceAll(how, "#", "...")
	}
	return ""
}

// unitHint answers a name that the package of units does not have.
func (c *checking) unitHint(pkg, member string) string {
	if c.pathOf(pkg) != unitPath {
		return ""
	}
	if how, ok := strings.CutPrefix(constantNames[member], "unit."); ok && member != "c" && member != "h" && member != "amu" {
		return "write " + pkg + "." + how
	}
	switch member {
	case "C", "DegC", "degC", "Degc", "CelsiusDegree", "celsius", "OC":
		return "write " + pkg + ".Celsius(25): a Celsius temperature is no multiple of a unit"
	case "F", "DegF", "degF", "Fahrenheit":
		return "write " + pkg + ".Celsius((f - 32) / 1.8)"
	case "KJ", "kJ", "Kj", "kj", "KJmol", "kJmol", "KJMol":
		return "write " + pkg + ".MolarKJ for a molar energy in kJ/mol, " + pkg + ".KJPerMol for the energy of one particle"
	case "Kcal", "kcal", "KCal", "Cal", "cal":
		return "write " + pkg + ".MolarKcal or " + pkg + ".MolarCal for a molar energy, " + pkg + ".KcalPerMol for the energy of one particle"
	case "JPerMolPerK", "JPerK_Mol", "JPerKMol", "JMolK", "JPerKPerMol", "JmolK":
		return "write " + pkg + ".JPerMolK"
	}
	if u := unitAlias(member); u != "" {
		return "write " + pkg + "." + u
	}
	switch strings.ToLower(member) {
	case "molarheatcapacity", "heatcapacity":
		return "write " + pkg + ".MolarEntropy: heat capacities have the type of entropies"
	case "molarenthalpy", "enthalpy":
		return "write " + pkg + ".MolarEnergy"
	}
	return ""
}
