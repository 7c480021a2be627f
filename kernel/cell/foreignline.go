package cell

import (
	"go/token"
	"go/types"
	"regexp"
	"slices"
	"strings"
)

// imported knows imports without quotes and those of single names.
func (l *foreignLine) imported() string {
	if l.is(0, "from") && l.findName("import") > 1 {
		path := l.between(1, l.findName("import"))
		name := l.word(l.findName("import") + 1).lit
		if path == "math" && name != "" && name != "*" {
			return "write math." + strings.ToUpper(name[:1]) + name[1:] + ": the package math is there without an import"
		}
		return notGo(path)
	}
	if l.is(0, "using", "require", "include") && len(l.words) > 1 && l.word(1).tok == token.IDENT {
		return notGo(l.word(1).lit)
	}
	if l.word(0).tok != token.IMPORT || l.word(1).tok != token.IDENT {
		return ""
	}
	path := l.word(1).lit
	if l.s.usual[path] != "" {
		return "delete the line: the package " + path + " is there without an import"
	}
	return notGo(path)
}

// notGo says what stands for a package of another language.
func notGo(path string) string {
	first, _, _ := strings.Cut(path, ".")
	switch first {
	case "numpy", "scipy":
		return "write math.Exp and loops over []float64; gonum has matrices, statistics and more: import \"gonum.org/v1/gonum/stat\""
	case "matplotlib", "pylab":
		return "write display.Figure{X: xs, Y: ys} as the last line of a cell"
	case "pandas":
		return `write data.Read("file.csv") for a table with units`
	}
	return `write import "` + strings.ReplaceAll(path, ".", "/") + `" with quotes, and use it as ` + path[strings.LastIndexAny(path, "./")+1:] + `.Name`
}

// comprehension knows [f(x) for x in xs].
func (l *foreignLine) comprehension() string {
	open, f, in := l.find(token.LBRACK), l.find(token.FOR), l.findName("in")
	if open < 0 || f < open || in < f {
		return ""
	}
	over := strings.TrimRight(l.between(in+1, len(l.words)), "]) ")
	return "write a loop: for _, " + l.between(f+1, in) + " := range " + over + " { out = append(out, " + l.between(open+1, f) + ") }"
}

// keyword knows words that begin lines in other languages.
func (l *foreignLine) keyword() string {
	first := l.word(0)
	switch first.lit {
	case "elif", "elsif", "elseif":
		return "write } else if " + strings.TrimSpace(l.condition(1)) + " {"
	case "else":
		return "write } else { on one line"
	case "except", "catch", "finally", "raise", "throw":
		return "write v, err := f() and if err != nil { ... }: Go has errors for exceptions"
	case "class":
		return "write type " + l.word(1).lit + " struct { ... }, and methods as func (x " + l.word(1).lit + ") Name() { ... }"
	case "print", "echo", "puts":
		if len(l.words) > 1 && l.word(1).tok != token.LPAREN {
			return "write fmt.Println(" + l.between(1, len(l.words)) + ")"
		}
	case "assert":
		return "write if !(" + l.between(1, len(l.words)) + ") { panic(\"...\") }"
	case "with":
		return "write f, err := os.Open(name), and defer f.Close() in a function"
	case "end", "endif", "done", "fi":
		return "write }"
	case "%", "%%":
		return "a cell is Go: there are no commands that begin with %"
	case "del", "global", "nonlocal", "pass":
		return "delete the line: Go needs no " + first.lit
	case "await", "async":
		return "write go f() to run a call beside the rest"
	}
	if first.tok == token.IF && l.find(token.LBRACE) < 0 && !strings.Contains(l.msg, "unexpected newline") {
		i := l.find(token.COLON)
		if i < 0 { // if (x > 1) f()
			return "write if ... { ... }: the braces are never left out"
		}
		then := l.between(i+1, len(l.words))
		if then == "" {
			then = "..."
		}
		return "write if " + strings.TrimSpace(l.condition(1)) + " { " + then + " }"
	}
	return ""
}

// choice knows y = a if c else b.
func (l *foreignLine) choice() string {
	i, e := l.find(token.IF), l.find(token.ELSE)
	set := max(l.find(token.DEFINE), l.find(token.ASSIGN))
	if set > 0 && i > set && e < 0 {
		return "write if " + l.between(i+1, len(l.words)) + " { " + l.between(0, i) + " }"
	}
	if set < 0 || i < set || e < i {
		return ""
	}
	y := l.between(0, set)
	return "write " + y + " := " + l.between(e+1, len(l.words)) + ", and if " + l.between(i+1, e) + " { " + y + " = " + l.between(set+1, i) + " } below it"
}

// number knows a number with its unit behind it, and other ways to write one.
func (l *foreignLine) number() string {
	i := l.at
	if l.word(i-1).tok != token.INT && l.word(i-1).tok != token.FLOAT {
		return ""
	}
	n, next := l.word(i-1), l.word(i)
	if next.tok != token.IDENT {
		return ""
	}
	if exponent := regexp.MustCompile(`^[dD]([+-]?\d+)$`).FindStringSubmatch(next.lit); exponent != nil && n.end == next.at {
		return "write " + n.lit + "e" + exponent[1]
	}
	name := next.lit
	if name == "unit" && l.word(i+1).tok == token.PERIOD {
		return "write " + n.lit + " * unit." + l.word(i+2).lit
	}
	if u := unitAlias(name); u != "" {
		return "write " + n.lit + " * unit." + u
	}
	if o := l.s.unitNamed(name); o != "" {
		return "write " + n.lit + " * unit." + o
	}
	return "write " + n.lit + " * " + name
}

// declared knows declarations with the type first, and := where = stands.
func (l *foreignLine) declared() string {
	a, b, c := l.word(0), l.word(1), l.word(2)
	switch {
	case a.tok == token.VAR && l.find(token.DEFINE) > 0, a.tok == token.CONST && l.find(token.DEFINE) > 0:
		i := l.find(token.DEFINE)
		return "write " + l.between(0, i) + " = " + l.between(i+1, len(l.words))
	case a.tok == token.IDENT && b.tok == token.IDENT && (c.tok == token.ASSIGN || c.tok == token.DEFINE):
		name, t := b.lit, a.lit
		if isBasic(b.lit) {
			name, t = a.lit, b.lit
		}
		value := l.between(3, len(l.words))
		if isBasic(t) {
			return "write var " + name + " " + t + " = " + value
		}
		return "write " + name + " := " + value
	case a.tok == token.IDENT && b.tok == token.COLON && c.tok == token.IDENT && l.word(3).tok == token.ASSIGN:
		return "write " + a.lit + " := " + l.between(4, len(l.words))
	case a.tok == token.VAR && l.word(len(l.words)-1).tok == token.ASSIGN:
		return "write a value behind ="
	}
	return ""
}

// isBasic reports whether name is one of Go's own types.
func isBasic(name string) bool {
	_, ok := types.Universe.Lookup(name).(*types.TypeName)
	return ok
}

// isBuiltin reports whether name is one of Go's own functions.
func isBuiltin(name string) bool {
	_, ok := types.Universe.Lookup(name).(*types.Builtin)
	return ok
}

// literal knows lists and maps without their type.
func (l *foreignLine) literal() string {
	for i, w := range l.words {
		if w.tok != token.LBRACK && w.tok != token.LBRACE || i > l.at {
			continue
		}
		switch l.word(i - 1).tok {
		case token.ASSIGN, token.DEFINE, token.LPAREN, token.COMMA, token.RETURN, token.EOF:
		default:
			continue
		}
		if w.tok == token.LBRACE && (i == 0 || l.word(0).tok == token.FUNC) {
			continue
		}
		depth, j := 0, i
		for ; j < len(l.words); j++ {
			switch l.words[j].tok {
			case token.LBRACK, token.LBRACE, token.LPAREN:
				depth++
			case token.RBRACK, token.RBRACE, token.RPAREN:
				depth--
			}
			if depth == 0 {
				break
			}
		}
		inner := l.between(i+1, j)
		if w.tok == token.LBRACK {
			switch l.word(j + 1).tok {
			case token.IDENT, token.MUL, token.LBRACK, token.FUNC, token.MAP, token.STRUCT, token.CHAN, token.INTERFACE, token.LPAREN:
				continue // the length of an array
			}
		}
		if w.tok == token.LBRACK && l.word(j+1).tok == token.LBRACE {
			return "write " + l.between(i, j+1) + "float64" + l.between(j+1, len(l.words))
		}
		if w.tok == token.LBRACE && l.word(i+1).tok == token.IDENT && l.word(i+2).tok == token.COLON {
			return "write the type before {: a literal has one"
		}
		if w.tok == token.LBRACE && slices.ContainsFunc(l.words[i:min(j, len(l.words))], func(w word) bool { return w.tok == token.COLON }) {
			return "write map[string]float64{" + inner + "}"
		}
		if a := l.find(token.ASSIGN); l.word(0).tok == token.VAR && a > 2 && w.tok == token.LBRACE {
			return "write var " + l.word(1).lit + " = " + l.between(2, a) + "{" + inner + "}"
		}
		t := "[]float64"
		switch l.word(i + 1).tok {
		case token.STRING:
			t = "[]string"
		case token.LBRACK, token.LBRACE:
			t = "[][]float64"
			inner = strings.NewReplacer("[", "{", "]", "}").Replace(inner)
		}
		return "write " + t + "{" + inner + "}"
	}
	return ""
}

// logic knows operators of other languages.
func (l *foreignLine) logic() string {
	if strings.Contains(l.msg, "found assignment") {
		return "write == to compare"
	}
	for _, i := range []int{l.at, l.at - 1} {
		switch l.word(i).lit {
		case "and":
			return "write && for and"
		case "or":
			return "write || for or"
		case "not":
			return "write ! for not"
		case "is":
			return "write == for is"
		}
		switch {
		case l.word(i).tok == token.ASSIGN && (l.word(i-1).tok == token.EQL || l.word(i-1).tok == token.NEQ):
			return "write " + l.word(i-1).lit
		case l.word(i).tok == token.ASSIGN && l.word(i-1).tok == token.ASSIGN:
			return "write one = to assign, == to compare"
		case l.word(i).tok == token.GTR && l.word(i-1).tok == token.LSS:
			return "write !="
		case l.word(i).tok == token.INC || l.word(i).tok == token.DEC:
			return l.word(i).lit + " has no value: write x" + l.word(i).lit + " on a line of its own"
		}
	}
	return ""
}

// bracket knows what is missing at the end of a line.
func (l *foreignLine) bracket() string {
	equals := l.word(l.at).tok == token.ASSIGN
	switch {
	case strings.Contains(l.msg, "in composite literal") && equals:
		return "write " + l.word(l.at-1).lit + ": with a colon"
	case strings.HasPrefix(l.msg, "syntax error: expected '=='") && equals && l.word(l.at-2).tok != token.IF,
		strings.Contains(l.msg, "in argument list") && equals:
		return "give the values alone, in order: Go has no named arguments"
	case strings.Contains(l.msg, "in parameter list") && l.word(l.at).tok == token.COLON:
		return "write " + l.word(l.at-1).lit + " " + l.word(l.at+1).lit + " without the colon"
	case strings.HasSuffix(l.msg, "found ')'") && strings.Count(l.text, ")") > strings.Count(l.text, "("):
		return "delete one )"
	case strings.Contains(l.msg, "the cell ends too early"):
		return "finish the expression, or close the brackets that are open"
	case strings.Contains(l.msg, "expected ';'") && l.at == 1 && l.word(1).tok == token.IDENT && l.word(0).tok == token.IDENT && isBuiltin(l.word(0).lit):
		return "write " + l.word(0).lit + "(" + l.between(1, len(l.words)) + ")"
	case strings.Contains(l.msg, "before newline in composite literal"):
		return "end the line with a comma, or close the } on it"
	case strings.Contains(l.msg, "before newline in argument list"):
		return "close the ) on this line, or end the line with a comma"
	case strings.Contains(l.msg, "unexpected newline, expecting {"):
		return "put the { at the end of this line"
	}
	return ""
}

// unitNamed is the unit constant that is written like name but for case.
func (s *Scope) unitNamed(name string) string {
	p, err := s.importer.Import(unitPath)
	if err != nil {
		return ""
	}
	fold := ""
	for _, n := range p.Scope().Names() {
		k, ok := p.Scope().Lookup(n).(*types.Const)
		switch {
		case !ok || quantity(k.Type()) == "":
		case n == name:
			return n
		case strings.EqualFold(n, name):
			fold = n
		}
	}
	return fold
}

// unitAlias is the constant that a unit has under another of its names, "" if
// none.
func unitAlias(name string) string {
	switch strings.ToLower(name) {
	case "dalton", "da", "amu":
		return "U"
	case "kelvin":
		return "K"
	case "joule", "joules":
		return "J"
	case "ev", "electronvolt":
		return "EV"
	case "mev":
		return "MilliEV"
	case "ha", "eh":
		return "Hartree"
	case "cm1", "wavenumber", "cminv", "invcm":
		return "PerCm"
	case "a", "ang":
		return "Angstrom"
	case "pascal":
		return "Pa"
	case "atmosphere", "atmospheres":
		return "Atm"
	case "kjmol", "kj_mol", "kjpermole":
		return "KJPerMol"
	case "kcalmol", "kcalpermole":
		return "KcalPerMol"
	}
	return ""
}
