package uncertain

import (
	"fmt"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Of returns a new input from a quantity and its standard uncertainty of the
// same kind, in the SI unit of that kind: Of(343.2*unit.K, 0.7*unit.K). A
// temperature may have a temperature difference as its uncertainty.
func Of(value, u unit.Quantity) Quantity {
	if value.Unit().Dim != u.Unit().Dim {
		panic(&statmech.DomainError{Func: "uncertain.Of", Arg: "u", Value: u.String(), Want: fmt.Sprintf("a %s as %s is", value.Unit().Kind, value)})
	}
	return Measured(value.SI(), u.SI()).WithUnit(value.Unit().Symbol)
}

// In returns q in another unit of the same kind than the one it carries:
// q.In("mJ/(mol K2)"). It panics with a [*statmech.DomainError] if q has no
// unit or the two are of different kinds.
func (q Quantity) In(unitText string) Quantity {
	bad := func(value, want string) {
		panic(&statmech.DomainError{Func: "uncertain.Quantity.In", Arg: "unit", Value: value, Want: want})
	}
	to, err := unit.Parse(unitText)
	if err != nil {
		bad(fmt.Sprintf("%q", unitText), "a unit: "+err.Error())
	}
	from, err := unit.Parse(q.Unit())
	if err != nil {
		bad(fmt.Sprintf("%q", unitText), fmt.Sprintf("a quantity with a unit to start from; it has %q", q.Unit()))
	}
	if from.Dim != to.Dim || from.Kind != to.Kind {
		bad(fmt.Sprintf("%q", unitText), fmt.Sprintf("a unit of %s, as %q is", from.Kind, q.Unit()))
	}
	out := q.Scale(from.Factor / to.Factor)
	if shift := (from.Offset - to.Offset) / to.Factor; shift != 0 {
		out = out.Shift(shift)
	}
	return out.Named(q.Name()).WithUnit(unitText)
}
