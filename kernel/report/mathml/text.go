package mathml

import (
	"strconv"
	"strings"
)

// emOf returns a length as CSS writes it; 18 mu are an em.
func emOf(number, unit string) string {
	if unit != "mu" {
		return number + unit
	}
	x, _ := strconv.ParseFloat(number, 64) // the pattern has checked it
	return strconv.FormatFloat(x/18, 'f', 4, 64) + "em"
}

// text reads the argument of \text and its kin: words, with mathematics
// between dollar signs.
func (p *parser) text(t token, f font, at state) (*node, error) {
	s, err := p.braced(t)
	if err != nil {
		return nil, err
	}
	var row []*node
	var words strings.Builder
	flush := func() {
		if words.Len() > 0 {
			// Blanks at the ends of an mtext would be dropped.
			w := strings.ReplaceAll(words.String(), " ", "\u00a0")
			row = append(row, leaf("mtext", restyle(w, f), ord))
			words.Reset()
		}
	}
	for i := 0; i < len(s); i++ {
		switch c := s[i]; c {
		case '$':
			end := dollar(s[i+1:])
			if end < 0 {
				return nil, p.fail(t, "$ is not closed")
			}
			flush()
			n, err := p.inside(t, s[i+1:i+1+end], state{max(at.style, text), plain})
			if err != nil {
				return nil, err
			}
			row = append(row, n)
			i += end + 1
		case '{', '}':
		case '~', '\n', '\t', '\r':
			words.WriteByte(' ')
		case '\\':
			if i+1 >= len(s) {
				return nil, p.fail(t, `\ at the end of a text`)
			}
			i++
			switch s[i] {
			case '%', '$', '#', '&', '_', '{', '}', ' ':
				words.WriteByte(s[i])
			case ',', ';', ':':
				words.WriteString("\u2009")
			default:
				j := i
				for j < len(s) && (s[j] >= 'a' && s[j] <= 'z' || s[j] >= 'A' && s[j] <= 'Z') {
					j++
				}
				word, ok := textWords[s[i:j]]
				if !ok {
					return nil, p.fail(t, `\`+s[i:max(j, i+1)]+" is not known in text")
				}
				words.WriteString(word)
				for j < len(s) && s[j] == ' ' {
					j++
				}
				i = j - 1
			}
		default:
			words.WriteByte(c)
		}
	}
	flush()
	if len(row) == 0 {
		return elem("mrow"), nil
	}
	return group(row), nil
}

var textWords = map[string]string{"textdegree": "°", "degree": "°", "textmu": "µ", "AA": "Å", "ss": "ß", "S": "§",
	"textbackslash": `\`, "ldots": "…", "dots": "…", "textendash": "–", "textemdash": "—", "quad": "\u2003"}

// dollar returns the place of the first dollar sign that is not escaped, -1 if
// there is none.
func dollar(s string) int {
	for i := 0; i < len(s); i++ {
		switch s[i] {
		case '\\':
			i++
		case '$':
			return i
		}
	}
	return -1
}

// tag reads the number of an equation and puts it behind the formula.
func (p *parser) tag(t token, at state) (*node, error) {
	bare := p.peek().is("*")
	if bare {
		p.next()
	}
	n, err := p.text(t, plain, at)
	if err != nil {
		return nil, err
	}
	row := []*node{leaf("mspace", "", space, "width", "2em"), n}
	if !bare {
		row = []*node{row[0], leaf("mtext", "(", ord), n, leaf("mtext", ")", ord)}
	}
	return elem("mrow", row...), nil
}
