package mathml

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// A token is a command (\name, \,) or one character.
type token struct {
	text   string
	offset int
	eof    bool
}

func (t token) is(s string) bool { return t.text == s }

// command returns the name of a command.
func (t token) command() (string, bool) {
	if len(t.text) > 1 && t.text[0] == '\\' {
		return t.text[1:], true
	}
	return "", false
}

type parser struct {
	src   string
	pos   int
	depth int
}

// maxDepth bounds how deep groups may stand in each other; each counts twice.
const maxDepth = 200

func (p *parser) fail(t token, reason string) error {
	return &Error{Source: p.src, Offset: t.offset, Reason: reason}
}

// skip goes over blanks and comments.
func (p *parser) skip() {
	for p.pos < len(p.src) {
		switch c := p.src[p.pos]; {
		case c == '%':
			if i := strings.IndexByte(p.src[p.pos:], '\n'); i >= 0 {
				p.pos += i + 1
			} else {
				p.pos = len(p.src)
			}
		case c == ' ' || c == '\t' || c == '\n' || c == '\r':
			p.pos++
		default:
			return
		}
	}
}

func (p *parser) next() token {
	p.skip()
	t := token{offset: p.pos}
	if p.pos >= len(p.src) {
		t.eof = true
		return t
	}
	_, n := utf8.DecodeRuneInString(p.src[p.pos:])
	if p.src[p.pos] == '\\' && p.pos+1 < len(p.src) {
		i := p.pos + 1
		for i < len(p.src) && (p.src[i] >= 'a' && p.src[i] <= 'z' || p.src[i] >= 'A' && p.src[i] <= 'Z') {
			i++
		}
		if i == p.pos+1 {
			_, n := utf8.DecodeRuneInString(p.src[i:])
			i += n
		}
		n = i - p.pos
	}
	t.text = p.src[p.pos : p.pos+n]
	p.pos += n
	return t
}

func (p *parser) peek() token {
	pos := p.pos
	t := p.next()
	p.pos = pos
	return t
}

// digits reads the rest of a number whose first digit has been read.
func (p *parser) digits() string {
	i := p.pos
	for i < len(p.src) {
		c := p.src[i]
		if c >= '0' && c <= '9' || c == '.' && i+1 < len(p.src) && p.src[i+1] >= '0' && p.src[i+1] <= '9' {
			i++
			continue
		}
		break
	}
	s := p.src[p.pos:i]
	p.pos = i
	return s
}

// letters reads the letters that follow in a word.
func (p *parser) letters() string {
	i := p.pos
	for i < len(p.src) {
		r, n := utf8.DecodeRuneInString(p.src[i:])
		if !unicode.IsLetter(r) {
			break
		}
		i += n
	}
	s := p.src[p.pos:i]
	p.pos = i
	return s
}

// braced reads a group as it is written, without its braces, or one token.
func (p *parser) braced(of token) (string, error) {
	t := p.next()
	if t.eof {
		return "", p.fail(of, of.text+" lacks its argument")
	}
	if !t.is("{") {
		return t.text, nil
	}
	start, level := p.pos, 1
	for i := p.pos; i < len(p.src); i++ {
		switch p.src[i] {
		case '\\':
			i++
		case '{':
			level++
		case '}':
			if level--; level == 0 {
				p.pos = i + 1
				return p.src[start:i], nil
			}
		}
	}
	return "", p.fail(t, "{ is not closed")
}

// bracketed reads an optional argument as it is written.
func (p *parser) bracketed() (s string, ok bool, err error) {
	open := p.peek()
	if !open.is("[") {
		return "", false, nil
	}
	p.next()
	start, level := p.pos, 0
	for i := p.pos; i < len(p.src); i++ {
		switch p.src[i] {
		case '\\':
			i++
		case '{':
			level++
		case '}':
			level--
		case ']':
			if level == 0 {
				p.pos = i + 1
				return p.src[start:i], true, nil
			}
		}
	}
	return "", false, p.fail(open, "[ is not closed")
}
