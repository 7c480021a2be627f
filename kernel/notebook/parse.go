package notebook

import (
	"bytes"
	"fmt"
	"strings"
	"unicode/utf8"
)

// maxDepth bounds the nesting of a document.
const maxDepth = 1000

// A syntaxError says where a file stops being JSON.
type syntaxError struct {
	line, column int // from 1; column in bytes
	reason       string
}

func (e *syntaxError) Error() string {
	return fmt.Sprintf("line %d, column %d: %s", e.line, e.column, e.reason)
}

type parser struct {
	data []byte
	at   int
}

// parse reads one JSON value (RFC 8259), strictly, and nothing after it. A
// key that occurs twice in one object is an error: one of the two would be
// lost.
func parse(data []byte) (v *value, err error) {
	if !utf8.Valid(data) {
		n := 0
		for n < len(data) {
			r, size := utf8.DecodeRune(data[n:])
			if r == utf8.RuneError && size == 1 {
				break
			}
			n += size
		}
		return nil, (&parser{data: data, at: n}).fail("not UTF-8 text")
	}
	p := &parser{data: data}
	if v, err = p.value(0); err != nil {
		return nil, err
	}
	p.space()
	if p.at < len(p.data) {
		return nil, p.fail("more text after the end of the document")
	}
	return v, nil
}

func (p *parser) fail(reason string) error {
	before := p.data[:p.at]
	line := bytes.Count(before, []byte("\n"))
	start := bytes.LastIndexByte(before, '\n') + 1
	end := len(p.data)
	if i := bytes.IndexByte(p.data[p.at:], '\n'); i >= 0 {
		end = p.at + i
	}
	for _, mark := range []string{"<<<<<<<", "=======", ">>>>>>>", "|||||||"} {
		if strings.HasPrefix(string(p.data[start:end]), mark) {
			reason = "a mark of an unfinished merge (" + mark + ")"
		}
	}
	return &syntaxError{line: line + 1, column: p.at - start + 1, reason: reason}
}

func (p *parser) space() {
	for p.at < len(p.data) {
		switch p.data[p.at] {
		case ' ', '\t', '\n', '\r':
			p.at++
		default:
			return
		}
	}
}

// next returns the next byte that is not space, 0 at the end.
func (p *parser) next() byte {
	p.space()
	if p.at == len(p.data) {
		return 0
	}
	return p.data[p.at]
}

func (p *parser) value(depth int) (*value, error) {
	if depth > maxDepth {
		return nil, p.fail(fmt.Sprintf("nested deeper than %d levels", maxDepth))
	}
	switch c := p.next(); {
	case c == '{':
		return p.object(depth)
	case c == '[':
		return p.array(depth)
	case c == '"':
		lit, err := p.text()
		return &value{kind: text, lit: lit}, err
	case c == '-' || c >= '0' && c <= '9':
		return p.number()
	case c == 't':
		return p.word("true", boolean)
	case c == 'f':
		return p.word("false", boolean)
	case c == 'n':
		return p.word("null", null)
	case p.at == len(p.data):
		return nil, p.fail("the file ends in the middle of the document")
	}
	return nil, p.fail("a JSON value is wanted here")
}

func (p *parser) word(w string, k kind) (*value, error) {
	if !bytes.HasPrefix(p.data[p.at:], []byte(w)) {
		return nil, p.fail("a JSON value is wanted here")
	}
	p.at += len(w)
	return &value{kind: k, lit: w}, nil
}

func (p *parser) array(depth int) (*value, error) {
	v := &value{kind: array}
	p.at++
	if p.next() == ']' {
		p.at++
		return v, nil
	}
	for {
		w, err := p.value(depth + 1)
		if err != nil {
			return nil, err
		}
		v.items = append(v.items, w)
		switch p.next() {
		case ',':
			p.at++
		case ']':
			p.at++
			return v, nil
		default:
			return nil, p.fail("a comma or ] is wanted here")
		}
	}
}

func (p *parser) object(depth int) (*value, error) {
	v := &value{kind: object}
	p.at++
	if p.next() == '}' {
		p.at++
		return v, nil
	}
	seen := map[string]bool{}
	for {
		if p.next() != '"' {
			return nil, p.fail("a key in double quotes is wanted here")
		}
		start := p.at
		lit, err := p.text()
		if err != nil {
			return nil, err
		}
		key := unquote(lit)
		if seen[key] {
			p.at = start
			return nil, p.fail("key " + lit + " occurs twice in one object")
		}
		seen[key] = true
		if p.next() != ':' {
			return nil, p.fail("a colon is wanted here")
		}
		p.at++
		w, err := p.value(depth + 1)
		if err != nil {
			return nil, err
		}
		v.members = append(v.members, member{key: key, lit: lit, val: w})
		switch p.next() {
		case ',':
			p.at++
		case '}':
			p.at++
			return v, nil
		default:
			return nil, p.fail("a comma or } is wanted here")
		}
	}
}

func (p *parser) text() (string, error) {
	start := p.at
	p.at++
	for p.at < len(p.data) {
		switch c := p.data[p.at]; {
		case c == '"':
			p.at++
			return string(p.data[start:p.at]), nil
		case c < 0x20:
			return "", p.fail("a control character or line end inside a string")
		case c == '\\':
			p.at++
			if p.at == len(p.data) {
				return "", p.fail("the file ends in the middle of a string")
			}
			switch e := p.data[p.at]; e {
			case '"', '\\', '/', 'b', 'f', 'n', 'r', 't':
			case 'u':
				for i := 1; i <= 4; i++ {
					if p.at+i >= len(p.data) || !isHex(p.data[p.at+i]) {
						return "", p.fail(`\u without four hexadecimal digits`)
					}
				}
				p.at += 4
			default:
				return "", p.fail("an unknown escape in a string")
			}
		}
		p.at++
	}
	return "", p.fail("the file ends in the middle of a string")
}

func isHex(c byte) bool {
	return c >= '0' && c <= '9' || c >= 'a' && c <= 'f' || c >= 'A' && c <= 'F'
}

func (p *parser) number() (*value, error) {
	start := p.at
	digits := func() bool {
		n := p.at
		for p.at < len(p.data) && p.data[p.at] >= '0' && p.data[p.at] <= '9' {
			p.at++
		}
		return p.at > n
	}
	if p.data[p.at] == '-' {
		p.at++
	}
	if p.at < len(p.data) && p.data[p.at] == '0' {
		p.at++
	} else if !digits() {
		return nil, p.fail("a digit is wanted here")
	}
	if p.at < len(p.data) && p.data[p.at] == '.' {
		p.at++
		if !digits() {
			return nil, p.fail("a digit is wanted here")
		}
	}
	if p.at < len(p.data) && (p.data[p.at] == 'e' || p.data[p.at] == 'E') {
		p.at++
		if p.at < len(p.data) && (p.data[p.at] == '+' || p.data[p.at] == '-') {
			p.at++
		}
		if !digits() {
			return nil, p.fail("a digit is wanted here")
		}
	}
	return &value{kind: number, lit: string(p.data[start:p.at])}, nil
}

// write appends v in the layout of the format's tools: one space a level,
// ": " after a key, empty lists and objects closed on their line.
func (v *value) write(b []byte, depth int) []byte {
	line := func(d int) {
		b = append(b, '\n')
		for range d {
			b = append(b, ' ')
		}
	}
	switch v.kind {
	case array:
		if len(v.items) == 0 {
			return append(b, "[]"...)
		}
		b = append(b, '[')
		for i, w := range v.items {
			if i > 0 {
				b = append(b, ',')
			}
			line(depth + 1)
			b = w.write(b, depth+1)
		}
		line(depth)
		return append(b, ']')
	case object:
		if len(v.members) == 0 {
			return append(b, "{}"...)
		}
		b = append(b, '{')
		for i, m := range v.members {
			if i > 0 {
				b = append(b, ',')
			}
			line(depth + 1)
			b = append(b, m.lit...)
			b = append(b, ": "...)
			b = m.val.write(b, depth+1)
		}
		line(depth)
		return append(b, '}')
	}
	return append(b, v.lit...)
}
