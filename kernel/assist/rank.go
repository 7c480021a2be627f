package assist

import (
	"go/ast"
	"go/types"
	"slices"
	"strings"
)

// hooks are methods by which a value serves other code, not its user: how it is
// printed, shown, stored.
var hooks = []string{"String", "GoString", "Format", "View", "Check", "Unwrap", "Is", "As", "MarshalJSON", "UnmarshalJSON", "MarshalText", "UnmarshalText", "MarshalBinary", "UnmarshalBinary"}

// seldom are methods of models that fits and checks need.
var seldom = []string{"GroundDegeneracy", "ModeCount", "HighTemperatureHeatCapacity", "Reduced", "ReducedAt", "SI", "Unit"}

// asked are members of the physics library that are asked for most, the first
// most of all.
var asked = []string{"HeatCapacity", "HeatCapacityP", "HeatCapacityV", "Entropy", "EnthalpyIncrement", "GibbsFunction", "ThermalEnergy", "HeatCapacities", "Entropies",
	"Debye", "Einstein", "Schottky", "Levels", "NewLevels", "FromLibrary", "Molecule", "New", "Monatomic", "Diatomic", "Torsion", "Read", "ThirdLaw", "Measured", "Vary", "AbsoluteSigma",
	"Figure", "Table", "Result", "Show", "In"}

// usual orders the members of the physics library that have one rank.
func usual(p *types.Package, name string) int {
	if p == nil || !strings.HasPrefix(p.Path(), "levelsum/") {
		return 0
	}
	if p.Path() == unitPath {
		if name == "In" {
			return 0
		}
		return familiar(name) + 1
	}
	if i := slices.Index(asked, name); i >= 0 {
		return i
	}
	return len(asked)
}

// rankOfMethod puts what computes a quantity first and what serves other code
// last.
func rankOfMethod(o types.Object) int {
	f, ok := o.(*types.Func)
	if !ok {
		return rankMember
	}
	if slices.Contains(hooks, f.Name()) || takesPointers(f.Signature()) {
		return rankPlumbing
	}
	if strings.HasPrefix(pkgPath(f), "levelsum/") && slices.Contains(seldom, f.Name()) {
		return rankOther
	}
	if r := f.Signature().Results(); r.Len() > 0 && !isQuantity(r.At(0).Type()) && strings.HasPrefix(pkgPath(f), "levelsum/statmech") {
		return rankOther
	}
	return rankMember
}

func pkgPath(o types.Object) string {
	if o.Pkg() == nil {
		return ""
	}
	return o.Pkg().Path()
}

// takesPointers reports whether a function reaches into the numbers of its
// caller, as fits do.
func takesPointers(s *types.Signature) bool {
	for v := range s.Params().Variables() {
		t := v.Type()
		if l, ok := t.(*types.Slice); ok {
			t = l.Elem()
		}
		if p, ok := t.(*types.Pointer); ok {
			if _, ok := p.Elem().(*types.Basic); ok {
				return true
			}
		}
	}
	return false
}

// isQuantity reports whether t is a quantity, a number with its uncertainty or
// a plain number, or many of these.
func isQuantity(t types.Type) bool {
	if l, ok := t.(*types.Slice); ok {
		t = l.Elem()
	}
	if n, ok := types.Unalias(t).(*types.Named); ok {
		if p := pkgPath(n.Obj()); p == "levelsum/statmech/uncertain" {
			return true
		}
	}
	b, ok := t.Underlying().(*types.Basic)
	return ok && b.Info()&types.IsFloat != 0
}

// behind are members of packages that other code needs more than cells do.
var behind = map[string][]string{
	"levelsum/display":  {"Current", "FileRead", "Interrupted", "Render", "SetRenderer", "SetSink", "Sink", "Transient", "ViewOf", "View", "Viewer", "Checker", "Refusal", "Slot", "Slots", "Number", "NumberOf", "Text"},
	"levelsum/statmech": {"CheckPositive", "CheckRatio", "CheckTemperature"},
}

// rankInPackage ranks what a package offers: units before all else in the
// package of units; models and functions before constants and interfaces, and
// errors last.
func rankInPackage(p *types.Package, o types.Object) int {
	if slices.Contains(behind[p.Path()], o.Name()) {
		return rankPlumbing
	}
	if !strings.HasPrefix(p.Path(), "levelsum/") {
		return rankMember
	}
	switch o := o.(type) {
	case *types.Const:
		switch {
		case isUnit(o):
			return rankField
		case p.Path() == unitPath && strings.HasPrefix(o.Name(), "Kind"):
			return rankPlumbing
		}
		return rankOther
	case *types.Var:
		return rankPlumbing
	case *types.TypeName:
		if strings.HasSuffix(o.Name(), "Error") || types.IsInterface(o.Type()) && o.Name() != "Mode" {
			return rankPlumbing
		}
		if isModel(o.Type()) {
			return rankField
		}
		if structOf(o.Type()) != nil && !exportsFields(o.Type()) {
			return rankOther // a result
		}
	case *types.Func:
		if strings.HasPrefix(o.Name(), "Must") {
			return rankOther
		}
	}
	return rankMember
}

// isTypePlace reports whether the expression at the start of path stands where
// only a type can.
func isTypePlace(path []ast.Node) bool {
	element := false // of a slice, an array, a map
	for i := 0; i+1 < len(path); i++ {
		x := path[i]
		switch p := path[i+1].(type) {
		case *ast.StarExpr, *ast.Ellipsis:
		case *ast.ArrayType:
			if p.Elt != x {
				return false
			}
			element = true
		case *ast.MapType, *ast.ChanType:
			element = true
		case *ast.ValueSpec:
			return p.Type == x
		case *ast.Field:
			return p.Type == x
		case *ast.TypeSpec:
			return p.Type == x
		case *ast.CompositeLit:
			return p.Type == x && i > 0 // []T{ but not T{, which may be a call
		case *ast.TypeAssertExpr:
			return p.Type == x
		default:
			return element
		}
	}
	return element
}

// typesFirst ranks types before all else.
func typesFirst(all []Match) {
	for i := range all {
		if all[i].Kind == "type" {
			all[i].rank = rankWanted
		} else if all[i].rank < rankLocal {
			all[i].rank = rankLocal
		}
	}
}

// isModel reports whether values of a type have a heat capacity.
func isModel(t types.Type) bool {
	if structOf(t) == nil {
		return false
	}
	o, _, _ := types.LookupFieldOrMethod(types.NewPointer(t), true, nil, "HeatCapacity")
	_, ok := o.(*types.Func)
	return ok
}
