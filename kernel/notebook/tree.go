package notebook

import (
	"bytes"
	"encoding/json"
	"fmt"
	"sort"
	"strconv"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

type kind byte

const (
	null kind = iota
	boolean
	number
	text
	array
	object
)

func (k kind) String() string {
	return [...]string{"null", "true or false", "a number", "a string", "a list", "an object"}[k]
}

// A value is a JSON value as it stands in the file.
type value struct {
	kind    kind
	lit     string // spelling in the file, of everything but arrays and objects
	items   []*value
	members []member
}

type member struct {
	key string // decoded
	lit string // as spelled in the file, with quotes
	val *value
}

func (v *value) get(key string) *value {
	if v == nil || v.kind != object {
		return nil
	}
	for i := range v.members {
		if v.members[i].key == key {
			return v.members[i].val
		}
	}
	return nil
}

// set gives key the value w. A new key is put in its alphabetical place if the
// keys are in order, as the format's tools write them, else at the end.
func (v *value) set(key string, w *value) {
	for i := range v.members {
		if v.members[i].key == key {
			v.members[i].val = w
			return
		}
	}
	m := member{key: key, lit: quote(key), val: w}
	at := len(v.members)
	if sort.SliceIsSorted(v.members, func(i, j int) bool { return v.members[i].key < v.members[j].key }) {
		at = sort.Search(len(v.members), func(i int) bool { return v.members[i].key > key })
	}
	v.members = append(v.members, member{})
	copy(v.members[at+1:], v.members[at:])
	v.members[at] = m
}

func (v *value) remove(key string) {
	for i := range v.members {
		if v.members[i].key == key {
			v.members = append(v.members[:i], v.members[i+1:]...)
			return
		}
	}
}

// str returns the decoded string.
func (v *value) str() string {
	if v == nil || v.kind != text {
		return ""
	}
	return unquote(v.lit)
}

func newText(s string) *value { return &value{kind: text, lit: quote(s)} }
func newNull() *value         { return &value{kind: null, lit: "null"} }
func newInt(n int) *value     { return &value{kind: number, lit: strconv.Itoa(n)} }

// fromGo turns a Go value into a tree through encoding/json, keys in order and
// numbers spelled as the format's tools spell them.
func fromGo(x any) (*value, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(x); err != nil {
		return nil, err
	}
	v, err := parse(b.Bytes())
	if err != nil {
		return nil, err
	}
	v.tidy()
	return v, nil
}

// tidy gives the keys, strings and numbers of a new value the form in which
// the format's tools write them.
func (v *value) tidy() {
	switch v.kind {
	case number:
		v.lit = spellNumber(v.lit)
	case text:
		v.lit = quote(unquote(v.lit))
	}
	for _, w := range v.items {
		w.tidy()
	}
	sort.SliceStable(v.members, func(i, j int) bool { return v.members[i].key < v.members[j].key })
	for i := range v.members {
		v.members[i].lit = quote(v.members[i].key)
		v.members[i].val.tidy()
	}
}

// spellNumber spells a number so that a front end in JavaScript and a server
// in Python that read and write it again leave it unchanged: whole numbers
// below 1e21 by their digits, others shortest with an exponent of two digits
// below 1e-4 and from 1e16.
func spellNumber(lit string) string {
	if !strings.ContainsAny(lit, ".eE") {
		return lit
	}
	x, err := strconv.ParseFloat(lit, 64)
	if err != nil {
		return lit
	}
	abs := x
	if abs < 0 {
		abs = -abs
	}
	switch {
	case abs < 1e21 && x == float64(int64(x)) && abs < 1<<62:
		return strconv.FormatInt(int64(x), 10)
	case abs < 1e21 && abs >= 1<<62:
		return strconv.FormatFloat(x, 'f', -1, 64)
	case abs < 1e-4 || abs >= 1e16:
		return strconv.FormatFloat(x, 'e', -1, 64)
	}
	return strconv.FormatFloat(x, 'f', -1, 64)
}

// toGo turns the tree into the values that encoding/json would give, numbers
// as json.Number.
func (v *value) toGo() any {
	if v == nil {
		return nil
	}
	switch v.kind {
	case boolean:
		return v.lit == "true"
	case number:
		return json.Number(v.lit)
	case text:
		return v.str()
	case array:
		s := make([]any, len(v.items))
		for i, w := range v.items {
			s[i] = w.toGo()
		}
		return s
	case object:
		m := make(map[string]any, len(v.members))
		for _, x := range v.members {
			m[x.key] = x.val.toGo()
		}
		return m
	}
	return nil
}

// quote spells s as a JSON string, escaping only what JSON requires.
func quote(s string) string {
	b := make([]byte, 0, len(s)+2)
	b = append(b, '"')
	for i := 0; i < len(s); {
		c := s[i]
		switch {
		case c == '"' || c == '\\':
			b = append(b, '\\', c)
		case c == '\n':
			b = append(b, `\n`...)
		case c == '\r':
			b = append(b, `\r`...)
		case c == '\t':
			b = append(b, `\t`...)
		case c == '\b':
			b = append(b, `\b`...)
		case c == '\f':
			b = append(b, `\f`...)
		case c < 0x20:
			b = fmt.Appendf(b, `\u%04x`, c)
		case c < utf8.RuneSelf:
			b = append(b, c)
		default:
			r, n := utf8.DecodeRuneInString(s[i:])
			b = utf8.AppendRune(b, r) // U+FFFD for bytes that are no UTF-8
			i += n
			continue
		}
		i++
	}
	return string(append(b, '"'))
}

// unquote decodes a JSON string that parse has accepted. Half a surrogate pair
// becomes U+FFFD; the spelling in the file is kept elsewhere.
func unquote(lit string) string {
	s := lit[1 : len(lit)-1]
	if strings.IndexByte(s, '\\') < 0 {
		return s
	}
	b := make([]byte, 0, len(s))
	for i := 0; i < len(s); i++ {
		if s[i] != '\\' {
			b = append(b, s[i])
			continue
		}
		i++
		switch s[i] {
		case 'n':
			b = append(b, '\n')
		case 'r':
			b = append(b, '\r')
		case 't':
			b = append(b, '\t')
		case 'b':
			b = append(b, '\b')
		case 'f':
			b = append(b, '\f')
		case 'u':
			r := hex4(s[i+1:])
			i += 4
			if utf16.IsSurrogate(r) {
				if i+6 < len(s) && s[i+1] == '\\' && s[i+2] == 'u' {
					if p := utf16.DecodeRune(r, hex4(s[i+3:])); p != utf8.RuneError {
						b = utf8.AppendRune(b, p)
						i += 6
						continue
					}
				}
				r = utf8.RuneError
			}
			b = utf8.AppendRune(b, r)
		default:
			b = append(b, s[i])
		}
	}
	return string(b)
}

func hex4(s string) rune {
	n, err := strconv.ParseUint(s[:4], 16, 32)
	if err != nil {
		return utf8.RuneError
	}
	return rune(n)
}
