package display

import (
	"fmt"
	"math"
	"sort"
	"strings"
)

// Values are what the slots of a [Paragraph] or the symbols of a formula name.
type Values map[string]any

// NumbersMediaType is the media type under which a paragraph or derivation
// stores the numbers that it shows: a list of objects as under
// [ResultMediaType].
const NumbersMediaType = "application/vnd.levelsum.numbers+json"

// A piece of a text with slots: text, or the name in a slot and how it is to
// be written.
type piece struct {
	text string
	slot string
	form string // "", "value", "unit"
}

// splitSlots takes a text apart at its slots, [[name]] or [[name|value]]. A
// backslash before [[ makes it two ordinary brackets.
func splitSlots(s string) ([]piece, error) {
	var out []piece
	for {
		i := strings.Index(s, "[[")
		if i < 0 {
			return append(out, piece{text: s}), nil
		}
		if i > 0 && s[i-1] == '\\' {
			out = append(out, piece{text: s[:i-1] + "[["})
			s = s[i+2:]
			continue
		}
		n := strings.Index(s[i:], "]]")
		if n < 0 {
			return nil, fmt.Errorf("the slot %q has no end", cut(s[i:], 20))
		}
		out = append(out, piece{text: s[:i]})
		name, form, _ := strings.Cut(s[i+2:i+n], "|")
		p := piece{slot: strings.TrimSpace(name), form: strings.TrimSpace(form)}
		if p.slot == "" {
			return nil, fmt.Errorf("a slot without a name")
		}
		if p.form != "" && p.form != "value" && p.form != "unit" {
			return nil, fmt.Errorf("the slot [[%s|%s]]: the word after | is value or unit", p.slot, p.form)
		}
		out = append(out, p)
		s = s[i+n+2:]
	}
}

func cut(s string, n int) string {
	rs := []rune(s)
	if len(rs) <= n {
		return s
	}
	return string(rs[:n]) + "…"
}

// A slotValue is what a slot shows.
type slotValue struct {
	number bool
	m      measured
	text   string
}

func readSlot(name string, v any) (slotValue, error) {
	switch x := v.(type) {
	case string:
		return slotValue{text: x}, nil
	case nil:
		return slotValue{}, fmt.Errorf("the value of [[%s]] is nil", name)
	}
	m, err := readNumber(v)
	if err != nil {
		if s, ok := v.(fmt.Stringer); ok {
			return slotValue{text: safeText(s)}, nil
		}
		return slotValue{}, fmt.Errorf("[[%s]]: %w", name, err)
	}
	if math.IsNaN(m.v) || math.IsInf(m.v, 0) {
		return slotValue{}, fmt.Errorf("the value of [[%s]] is %v", name, m.v)
	}
	if m.typ != nil && m.unit == "" {
		return slotValue{}, fmt.Errorf("the value of [[%s]] is a %s, whose unit is not known", name, m.typ)
	}
	if m.hasU && (m.u < 0 || math.IsNaN(m.u) || math.IsInf(m.u, 0)) {
		return slotValue{}, fmt.Errorf("the standard uncertainty of [[%s]] is %v", name, m.u)
	}
	return slotValue{number: true, m: m}, nil
}

func safeText(s fmt.Stringer) string { return oneLine(s) }

// A namedSlot is a value with the name of its slot.
type namedSlot struct {
	name string
	slotValue
}

// stored lists numbers for the comparison of two runs, each once: a symbol that
// stands for one number in one step and for another in the next is there twice.
func stored(all []namedSlot) []map[string]any {
	seen := map[Number]bool{}
	list := []map[string]any{}
	for _, v := range all {
		if !v.number {
			continue
		}
		n := Number{Name: v.m.name, Value: v.m.v, Unit: v.m.unit, Withheld: v.m.withheld}
		if n.Name == "" {
			n.Name = v.name
		}
		if v.m.hasU {
			n.U = v.m.u
		}
		if !seen[n] {
			seen[n] = true
			list = append(list, n.stored())
		}
	}
	return list
}

// known lists names for an error.
func known(v Values) string {
	var names []string
	for k := range v {
		names = append(names, k)
	}
	sort.Strings(names)
	if len(names) == 0 {
		return "there are no values"
	}
	return "the values are " + cut(strings.Join(names, ", "), 200)
}
