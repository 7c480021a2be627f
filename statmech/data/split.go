package data

import (
	"errors"
	"strings"
)

// separator returns the separator of the fields: a tab, a semicolon or a comma
// if the header has one outside parentheses and quotes, else white space.
func separator(header string) byte {
	out := outsideParentheses(outsideQuotes(header))
	for _, sep := range []byte{'\t', ';', ','} {
		if strings.IndexByte(out, sep) >= 0 {
			return sep
		}
	}
	if strings.HasPrefix(header, `"`) && strings.TrimSpace(out) == "" {
		return ',' // one column, quoted
	}
	return ' '
}

// outsideParentheses returns s without what stands in parentheses or brackets.
func outsideParentheses(s string) string {
	var b strings.Builder
	depth := 0
	for i := range len(s) {
		switch s[i] {
		case '(', '[', '{':
			depth++
		case ')', ']', '}':
			depth = max(0, depth-1)
		default:
			if depth == 0 {
				b.WriteByte(s[i])
			}
		}
	}
	return b.String()
}

func outsideQuotes(s string) string {
	parts := strings.Split(s, `"`)
	var b strings.Builder
	for i := 0; i < len(parts); i += 2 {
		b.WriteString(parts[i])
	}
	return b.String()
}

// splitCells splits a line at the separator. A field in double quotes may hold
// the separator, and a quote written twice. In a header a separator in
// parentheses belongs to the field.
func splitCells(s string, sep byte, header bool) ([]string, error) {
	var cells []string
	var b strings.Builder
	quoted, wasQuoted, depth := false, false, 0
	end := func() {
		cell := b.String()
		if !wasQuoted {
			cell = strings.TrimSpace(cell)
		}
		cells = append(cells, cell)
		b.Reset()
		wasQuoted = false
	}
	for i := 0; i < len(s); i++ {
		ch := s[i]
		switch {
		case quoted && ch == '"' && i+1 < len(s) && s[i+1] == '"':
			b.WriteByte('"')
			i++
		case quoted && ch == '"':
			quoted = false
		case quoted:
			b.WriteByte(ch)
		case ch == '"' && strings.TrimSpace(b.String()) == "" && !wasQuoted:
			b.Reset()
			quoted, wasQuoted = true, true
		case ch == '"':
			return nil, errors.New("a double quote inside a field")
		case (ch == sep || sep == ' ' && ch == '\t') && depth == 0:
			end()
		case wasQuoted && ch != ' ' && ch != '\t':
			return nil, errors.New("text after the closing quote of a field")
		case wasQuoted:
		default:
			if header && (ch == '(' || ch == '[' || ch == '{') {
				depth++
			} else if header && (ch == ')' || ch == ']' || ch == '}') {
				depth = max(0, depth-1)
			}
			b.WriteByte(ch)
		}
	}
	if quoted {
		return nil, errors.New("a quoted field does not end in its line")
	}
	end()
	if sep == ' ' { // runs of blanks separate fields
		kept := cells[:0]
		for _, c := range cells {
			if c != "" {
				kept = append(kept, c)
			}
		}
		cells = kept
	}
	return cells, nil
}

// splitGroups splits at white space outside parentheses and brackets.
func splitGroups(s string) []string {
	var out []string
	var b strings.Builder
	depth := 0
	flush := func() {
		if b.Len() > 0 {
			out = append(out, b.String())
			b.Reset()
		}
	}
	for i := range len(s) {
		switch ch := s[i]; {
		case (ch == ' ' || ch == '\t') && depth == 0:
			flush()
		default:
			if ch == '(' || ch == '[' || ch == '{' {
				depth++
			} else if ch == ')' || ch == ']' || ch == '}' {
				depth = max(0, depth-1)
			}
			b.WriteByte(ch)
		}
	}
	flush()
	return out
}

// joinHeader puts the words of a white-space header "T / K Cp / (J K-1)" back
// together as "T / K" and "Cp / (J K-1)".
func joinHeader(words []string) []string {
	var out []string
	for i := 0; i < len(words); i++ {
		if i+2 < len(words) && words[i+1] == "/" {
			out = append(out, words[i]+" / "+words[i+2])
			i += 2
			continue
		}
		out = append(out, words[i])
	}
	return out
}

// balanced reports whether every parenthesis, bracket and brace that is opened
// is closed, and none before it is opened.
func balanced(s string) bool {
	depth := 0
	for i := range len(s) {
		switch s[i] {
		case '(', '[', '{':
			depth++
		case ')', ']', '}':
			if depth--; depth < 0 {
				return false
			}
		}
	}
	return depth == 0
}
