package cell

import (
	"fmt"
	"go/scanner"
	"go/token"
	"regexp"
	"slices"
	"strings"
	"unicode/utf8"
)

// A word is a token of a line.
type word struct {
	tok     token.Token
	lit     string
	at, end int // in the line
}

// wordsOf scans a line; what does not scan is an ILLEGAL word.
func wordsOf(line string) []word {
	fset := token.NewFileSet()
	file := fset.AddFile("", fset.Base(), len(line))
	var s scanner.Scanner
	s.Init(file, []byte(line), func(token.Position, string) {}, 0)
	var out []word
	for {
		pos, tok, lit := s.Scan()
		if tok == token.EOF {
			return out
		}
		if tok == token.SEMICOLON && lit == "\n" {
			continue
		}
		if lit == "" {
			lit = tok.String()
		}
		at := file.Offset(pos)
		out = append(out, word{tok, lit, at, min(at+len(lit), len(line))})
	}
}

// A foreignLine is a line that does not parse, and the place that the parser
// has stopped at.
type foreignLine struct {
	s     *Scope
	text  string
	words []word
	at    int // the word at the error, len(words) behind all
	msg   string
}

// withHabits says, beside syntax errors, how Go writes what other languages
// write that way. One error a line is enough; where the reason is known, what
// follows from it is not said.
func (s *Scope) withHabits(src *Source, ds Diagnostics) Diagnostics {
	lines := strings.Split(src.Text, "\n")
	seen := map[int]int{} // line -> index in out
	var out Diagnostics
	known := false
	for _, d := range ds {
		if k, ok := seen[d.Line]; ok {
			// Of an illegal character the scanner says more than the parser.
			if strings.Contains(d.Msg, "illegal character") && strings.HasSuffix(out[k].Msg, "found 'ILLEGAL'") {
				d.Hint = out[k].Hint
				out[k] = d
			}
			continue
		}
		if strings.HasPrefix(d.Msg, "syntax error: ") && d.Line >= 1 && d.Line <= len(lines) {
			l := &foreignLine{s: s, text: lines[d.Line-1], words: wordsOf(lines[d.Line-1]), msg: d.Msg}
			l.at = len(l.words)
			for i, w := range l.words {
				if w.end >= d.Column {
					l.at = i
					break
				}
			}
			d.Hint = l.safeHint(d.Column - 1)
			known = known || d.Hint != ""
		}
		seen[d.Line] = len(out)
		out = append(out, d)
	}
	if known {
		out = slices.DeleteFunc(out, func(d Diagnostic) bool { return d.Hint == "" })
	}
	return out
}

func (l *foreignLine) word(i int) word {
	if i < 0 || i >= len(l.words) {
		return word{tok: token.EOF}
	}
	return l.words[i]
}

// is reports whether the word i is a name that is written this way.
func (l *foreignLine) is(i int, names ...string) bool {
	return slices.Contains(names, l.word(i).lit)
}

// find is the first word of a kind, -1 if there is none.
func (l *foreignLine) find(tok token.Token) int {
	return slices.IndexFunc(l.words, func(w word) bool { return w.tok == tok })
}

// findName is the first word written this way, -1 if there is none.
func (l *foreignLine) findName(names ...string) int {
	return slices.IndexFunc(l.words, func(w word) bool { return slices.Contains(names, w.lit) })
}

// between is the text of the words from i to before j.
func (l *foreignLine) between(i, j int) string {
	j = min(j, len(l.words))
	if i >= j {
		return ""
	}
	return l.text[l.words[i].at:l.words[j-1].end]
}

// condition is what stands from word i to the brace or colon that ends it.
func (l *foreignLine) condition(i int) string {
	j := i
	for j < len(l.words) && l.words[j].tok != token.LBRACE && l.words[j].tok != token.COLON {
		j++
	}
	return english.Replace(l.between(i, j))
}

// english writes the words for logic as Go does.
var english = strings.NewReplacer(" and ", " && ", " or ", " || ", "not ", "!", "True", "true", "False", "false", "None", "nil")

// safeHint is hint, or "" should that fall over a line.
func (l *foreignLine) safeHint(column int) (h string) {
	if !l.s.bareHints {
		defer func() {
			if recover() != nil {
				h = ""
			}
		}()
	}
	return l.hint(column)
}

// hint tries the habits one after the other.
func (l *foreignLine) hint(column int) string {
	for _, try := range []func() string{
		func() string { return l.character(column) },
		l.quoted, l.loop, l.function, l.imported, l.comprehension, l.keyword, l.choice, l.logic, l.number, l.declared, l.literal, l.bracket,
	} {
		if h := try(); h != "" {
			return h
		}
	}
	return ""
}

// characters says what to type instead of a character that Go does not know.
var characters = map[rune]string{
	'−': "write -", '–': "write -", '—': "write -", '‐': "write -",
	'×': "write *", '·': "write *", '⋅': "write *", '∙': "write *", '÷': "write /",
	'“': `write "`, '”': `write "`, '„': `write "`, '‘': `write "`, '’': `write "`, '′': "names are made of letters, digits and _",
	'≤': "write <=", '≥': "write >=", '≠': "write !=", '≈': "write math.Abs(x-y) < tolerance",
	'±': "write uncertain.Measured(value, u)", '√': "write math.Sqrt(x)", '∞': "write math.Inf(1)",
	'²': "write x*x or math.Pow(x, 2)", '³': "write x*x*x or math.Pow(x, 3)", '¹': "write math.Pow(x, n)", '⁻': "write math.Pow(x, -n)",
	'°': "write unit.Celsius(25)", '∑': "write a loop: for _, x := range xs { sum += x }",
	'$': "formulas between $ belong in a Markdown cell", '@': "Go has no @: call the function, or write a loop over the elements",
	'\\':     `no \ is needed: a line goes on behind an operator, a comma or an open bracket`,
	'\u00a0': "this space is not a plain one: type it again", '\u2009': "this space is not a plain one: type it again", '\u202f': "this space is not a plain one: type it again",
}

func (l *foreignLine) character(column int) string {
	i := strings.IndexFunc(l.text[min(max(column, 0), len(l.text)):], func(r rune) bool { return r != ' ' && r != '\t' })
	if i < 0 || l.word(l.at).tok != token.ILLEGAL && !strings.Contains(l.msg, "illegal character") && !strings.Contains(l.msg, "quotation mark") {
		return ""
	}
	r, _ := utf8.DecodeRuneInString(l.text[column+i:])
	switch r {
	case '#':
		if strings.HasPrefix(strings.TrimSpace(l.text), "#include") {
			return "write import and a path in quotes; the usual packages are there without"
		}
		return "write // before a comment"
	case '?':
		if strings.HasPrefix(strings.TrimSpace(l.text), "?") || strings.HasSuffix(strings.TrimSpace(l.text), "?") {
			return "put the cursor on a name and press Shift-Tab to read about it; catalogue.All() lists what there is"
		}
		return "write if ... { } else { }: Go has no ? : operator"
	}
	h := characters[r]
	if len(h) <= len("write >=") && strings.HasPrefix(h, "write ") {
		h += " for " + string(r)
	}
	return h
}

var (
	inText     = regexp.MustCompile(`\{([^{}:]+)(?::([^{}]*))?\}`)
	formatSpec = regexp.MustCompile(`^\.?\d*[efgd%]?$`)
)

// quoted knows strings that are not in double quotes.
func (l *foreignLine) quoted() string {
	for i, w := range l.words {
		next := l.word(i + 1)
		if w.tok != token.IDENT || next.tok != token.STRING || w.end != next.at {
			continue
		}
		switch w.lit {
		case "f", "F":
			var args []string
			text := inText.ReplaceAllStringFunc(next.lit, func(s string) string {
				m := inText.FindStringSubmatch(s)
				args = append(args, ", "+m[1])
				if spec := strings.TrimLeft(m[2], "<>+"); spec != "" && formatSpec.MatchString(spec) {
					return "%" + spec
				}
				return "%v"
			})
			return "write fmt.Sprintf(" + text + strings.Join(args, "") + ")"
		case "r", "R":
			return "write `" + strings.Trim(next.lit, `"`) + "`"
		}
	}
	if strings.Contains(l.msg, "rune literal") {
		i := strings.IndexByte(l.text, '\'')
		if j := strings.LastIndexByte(l.text, '\''); i >= 0 && j > i {
			return `write "` + l.text[i+1:j] + `": single quotes are for one character`
		}
		return `write text in double quotes: "..."`
	}
	if strings.Contains(l.msg, "string literal not terminated") {
		if strings.Contains(l.text, `"""`) {
			return "write text of several lines between backquotes: `...`"
		}
		return `close the text with " on the same line`
	}
	return ""
}

// loop knows "for x in xs" and "while".
func (l *foreignLine) loop() string {
	if l.is(0, "while", "until") && len(l.words) > 1 {
		if l.is(1, "True", "true") {
			return "write for {"
		}
		return "write for " + strings.TrimSpace(l.condition(1)) + " {"
	}
	if l.word(0).tok != token.FOR {
		return ""
	}
	in := l.findName("in")
	if in < 0 && l.word(1).tok == token.LPAREN && l.find(token.SEMICOLON) > 0 {
		head := strings.TrimSuffix(strings.TrimSpace(l.condition(2)), ")")
		first, rest, _ := strings.Cut(head, ";")
		if f := strings.Fields(first); len(f) > 1 && isBasic(f[0]) {
			first = strings.TrimSpace(strings.TrimPrefix(first, f[0]))
			first = strings.Replace(first, "=", ":=", 1)
		}
		return "write for " + first + ";" + rest + " {"
	}
	if in < 0 {
		if strings.Contains(l.msg, "found ':'") || l.word(len(l.words)-1).tok == token.COLON {
			return "write for ... { and a } at the end of the loop"
		}
		return ""
	}
	names := strings.Trim(l.between(1, in), "() ")
	if i := in + 2; l.word(i).tok == token.COLON && l.word(i+1).tok != token.EOF { // for i in 1:n
		return fmt.Sprintf("write for %s := %s; %s <= %s; %s++ {", names, l.word(i-1).lit, names, l.word(i+1).lit, names)
	}
	over := l.condition(in + 1)
	call := func(name string) (string, bool) {
		inner, ok := strings.CutPrefix(over, name+"(")
		return strings.TrimSuffix(inner, ")"), ok
	}
	if n, ok := call("range"); ok {
		args := strings.Split(n, ",")
		for i := range args {
			args[i] = strings.TrimSpace(args[i])
		}
		switch {
		case strings.HasPrefix(n, "len(") && len(args) == 1:
			return "write for " + names + " := range " + strings.TrimSuffix(strings.TrimPrefix(n, "len("), ")") + " {"
		case len(args) == 1:
			return "write for " + names + " := range " + n + " {"
		case len(args) == 2:
			return fmt.Sprintf("write for %s := %s; %s < %s; %s++ {", names, args[0], names, args[1], names)
		}
		return fmt.Sprintf("write for %s := %s; %s < %s; %s += %s {", names, args[0], names, args[1], names, args[2])
	}
	if xs, ok := call("enumerate"); ok {
		return "write for " + names + " := range " + xs + " {"
	}
	if m, ok := strings.CutSuffix(over, ".items()"); ok {
		return "write for " + names + " := range " + m + " {"
	}
	if strings.Contains(names, ",") {
		return "write for " + names + " := range " + over + " {"
	}
	return "write for _, " + names + " := range " + over + " {"
}

var starStar = regexp.MustCompile(`([\pL\pN_.]+)\s*\*\*\s*(-?[\pL\pN_.]+)`)

// function knows how other languages declare one.
func (l *foreignLine) function() string {
	if i := l.findName("lambda"); i >= 0 {
		args := l.between(i+1, i+2)
		if args == ":" {
			args = ""
		}
		body := "..."
		if j := l.find(token.COLON); j > i && j+1 < len(l.words) {
			args, body = l.between(i+1, j), strings.TrimRight(l.between(j+1, len(l.words)), ") ")
		}
		return "write func(" + typedParams(args) + ") float64 { return " + starStar.ReplaceAllString(body, "math.Pow($1, $2)") + " }"
	}
	keyword := l.is(0, "def", "function", "fn", "sub")
	if keyword && l.word(1).tok == token.IDENT && l.word(2).tok == token.LPAREN {
		params := ""
		if j := l.find(token.RPAREN); j > 3 {
			params = l.between(3, j)
		}
		return "write func " + l.word(1).lit + "(" + typedParams(params) + ") float64 { return ... }"
	}
	if l.word(0).tok == token.FUNC && l.at > 1 {
		for i := 1; i < len(l.words); i++ {
			arrow := l.words[i].tok == token.SUB && l.word(i+1).tok == token.GTR
			if l.word(i-1).tok == token.RPAREN && (arrow || l.words[i].tok == token.COLON) {
				n := i + 1
				if arrow {
					n++
				}
				return "write " + l.between(0, i) + " " + strings.TrimSpace(l.condition(n)) + " {"
			}
		}
	}
	return ""
}

// typedParams gives parameters without a type the one that numbers have.
func typedParams(params string) string {
	params = strings.TrimSpace(params)
	if params == "" || strings.ContainsAny(params, ":= \t") && !strings.Contains(params, ",") {
		name, _, _ := strings.Cut(params, ":")
		name, _, _ = strings.Cut(name, "=")
		if name = strings.TrimSpace(name); name == "" {
			return ""
		}
		return name + " float64"
	}
	var names []string
	for p := range strings.SplitSeq(params, ",") {
		name, _, _ := strings.Cut(p, ":")
		name, _, _ = strings.Cut(name, "=")
		names = append(names, strings.TrimSpace(name))
	}
	return strings.Join(names, ", ") + " float64"
}
