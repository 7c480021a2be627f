package data

import (
	"bufio"
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"unicode"
	"unicode/utf8"

	"levelsum/display"
	"levelsum/statmech/unit"
)

// largest is the size of an uncompressed file above which Read refuses, so
// that a small compressed file cannot fill the memory.
const largest = 512 << 20

// mostColumns is the number of columns above which a header is taken for
// something else.
const mostColumns = 4096

// Read reads the table in a file. A name that ends in .gz, or contents that
// begin like gzip, are decompressed. The error of a file that is not
// understood is an [*Error], or several joined; the table is then nil, never
// half read.
func Read(name string) (*Table, error) {
	raw, err := os.ReadFile(name)
	if err != nil {
		return nil, fmt.Errorf("data: %w", err)
	}
	return recorded(name, filepath.Base(name), raw)
}

// recorded parses what was read from a file and tells the notebook session of
// it, also when it is not understood.
func recorded(path, name string, raw []byte) (*Table, error) {
	t, err := Parse(name, raw)
	if err != nil {
		sum := sha256.Sum256(raw)
		display.FileRead(path, hex.EncodeToString(sum[:]), 0)
		return nil, err
	}
	display.FileRead(path, t.SHA256, t.Len())
	return t, nil
}

// ReadFrom reads a table from r; name stands for the file in messages.
func ReadFrom(name string, r io.Reader) (*Table, error) {
	raw, err := io.ReadAll(io.LimitReader(r, largest+1))
	if err != nil {
		return nil, fmt.Errorf("data: %s: %w", name, err)
	}
	return recorded(name, name, raw)
}

// Parse reads a table from the bytes of a file.
func Parse(name string, raw []byte) (*Table, error) {
	sum := sha256.Sum256(raw)
	text := raw
	if len(raw) > 2 && raw[0] == 0x1f && raw[1] == 0x8b {
		z, err := gzip.NewReader(bytes.NewReader(raw))
		if err == nil {
			text, err = io.ReadAll(io.LimitReader(z, largest+1))
		}
		if err != nil {
			return nil, &Error{File: name, Problem: "the compressed file is damaged: " + err.Error()}
		}
	}
	if len(text) > largest {
		return nil, &Error{File: name, Problem: fmt.Sprintf("more than %d MiB", largest>>20)}
	}
	t := &Table{Name: name, SHA256: hex.EncodeToString(sum[:])}
	p := &problems{file: name}
	lines := t.lines(text, p)
	if p.empty() {
		t.parse(lines, p)
	}
	if err := p.err(); err != nil {
		return nil, err
	}
	t.assign()
	t.inspect()
	return t, nil
}

// line is a line of the file that is neither blank nor a note.
type line struct {
	number int
	text   string
}

// lines splits the text, keeps the notes and returns header and rows.
func (t *Table) lines(text []byte, p *problems) []line {
	switch {
	case bytes.HasPrefix(text, []byte("\xef\xbb\xbf")):
		text = text[3:]
		t.Warnings = append(t.Warnings, "the file begins with a byte-order mark, which was left out")
	case bytes.HasPrefix(text, []byte("\xff\xfe")), bytes.HasPrefix(text, []byte("\xfe\xff")):
		p.add(1, 0, "", "the text is UTF-16; save it as UTF-8")
		return nil
	}
	var out []line
	s := bufio.NewScanner(bytes.NewReader(text))
	s.Buffer(nil, 1<<20)
	s.Split(splitLines)
	for n := 1; s.Scan(); n++ {
		l := s.Text()
		if !utf8.ValidString(l) || strings.ContainsRune(l, 0) {
			p.add(n, 0, "", "the line is not UTF-8 text; save the file as UTF-8 (for °, ± and µ)")
			return nil
		}
		if strings.ContainsFunc(l, func(r rune) bool { return r != '\t' && unicode.IsControl(r) }) {
			p.add(n, 0, "", "a control character in the line: is this a text file?")
			return nil
		}
		l = strings.TrimSpace(l)
		if note, ok := strings.CutPrefix(l, "#"); ok {
			t.note(note)
		} else if l != "" {
			out = append(out, line{n, l})
		}
	}
	if s.Err() != nil {
		p.add(0, 0, "", "a line is longer than 1 MiB: %v", s.Err())
	}
	if len(out) == 0 {
		p.add(0, 0, "", "no header and no rows")
	}
	return out
}

// splitLines ends a line at LF, CR LF or CR.
func splitLines(data []byte, atEOF bool) (advance int, token []byte, err error) {
	i := bytes.IndexAny(data, "\r\n")
	switch {
	case i < 0 && atEOF && len(data) > 0:
		return len(data), data, nil
	case i < 0:
		return 0, nil, nil
	case data[i] == '\n':
		return i + 1, data[:i], nil
	case i+1 < len(data):
		if data[i+1] == '\n' {
			return i + 2, data[:i], nil
		}
		return i + 1, data[:i], nil
	case atEOF:
		return i + 1, data[:i], nil
	}
	return 0, nil, nil
}

// prose are keys whose value is one sentence to the end of the line, commas
// and colons included.
var prose = map[string]bool{"source": true, "where": true, "how obtained": true, "note": true, "title": true, "checked": true,
	"transcribed": true, "uncertainty": true, "licence": true, "conditions": true, "comment": true, "u(Cp)": true, "scenario": true}

// note keeps one "# key: value" line, or several pairs in one line separated
// by commas. A comment without a colon is kept with an empty key.
func (t *Table) note(text string) {
	text = strings.TrimSpace(text)
	for text != "" {
		key, value, ok := strings.Cut(text, ":")
		if !ok || !isKey(key) {
			t.Notes = append(t.Notes, Note{"", text})
			return
		}
		key, value = strings.TrimSpace(key), strings.TrimSpace(value)
		text = ""
		if !prose[key] {
			for i := 0; i < len(value); i++ {
				if value[i] != ',' {
					continue
				}
				next := strings.TrimSpace(value[i+1:])
				if k, rest, ok := strings.Cut(next, ":"); ok && isKey(k) && (rest == "" || rest[0] == ' ') {
					value, text = strings.TrimSpace(value[:i]), next
					break
				}
			}
		}
		t.Notes = append(t.Notes, Note{key, value})
	}
}

// isKey reports whether s may be a key: short, and without separators.
func isKey(s string) bool {
	s = strings.TrimSpace(s)
	return s != "" && len(s) <= 48 && !strings.ContainsAny(s, ",;\"#")
}

// parse understands header and rows.
func (t *Table) parse(lines []line, p *problems) {
	head := lines[0]
	p.head = head.number
	sep := separator(head.text)
	var cells []string
	if sep == ' ' {
		cells = joinHeader(splitGroups(head.text))
	} else {
		var err error
		if cells, err = splitCells(head.text, sep, true); err != nil {
			p.add(head.number, 0, "", "%v", err)
			return
		}
	}
	rest := lines[1:]
	units, isUnits := t.unitsRow(cells, rest, sep)
	if isUnits {
		rest = rest[1:]
	}
	if len(cells) > mostColumns {
		p.add(head.number, 0, "", "%d columns, more than %d", len(cells), mostColumns)
		return
	}
	for i, cell := range cells {
		t.header(cell, i, units, head.number, p)
	}
	if !p.empty() {
		return
	}
	if len(rest) == 0 {
		p.add(0, 0, "", "a header and no rows")
		return
	}
	rows := make([][]string, 0, len(rest))
	for i, l := range rest {
		row := strings.Fields(l.text)
		if sep != ' ' || strings.Contains(l.text, `"`) {
			var err error
			if row, err = splitCells(l.text, sep, false); err != nil {
				p.add(l.number, i+1, "", "%v", err)
				continue
			}
		}
		if len(row) != len(cells) {
			hint := ""
			if sep == ',' && len(row) == 2*len(cells) {
				hint = "; a decimal comma needs another separator between the columns, a semicolon or a tab"
			}
			p.add(l.number, i+1, "", "%d fields, the header has %d%s", len(row), len(cells), hint)
			continue
		}
		rows = append(rows, row)
	}
	if !p.empty() {
		return
	}
	number := make([]int, len(rest))
	for i, l := range rest {
		number[i] = l.number
	}
	t.cells(rows, number, p)
	if p.empty() {
		t.convert(p, number)
	}
}

// header makes a column of a header cell.
func (t *Table) header(cell string, i int, units []string, number int, p *problems) {
	if cell = strings.TrimSpace(cell); cell == "" {
		p.add(number, 0, "", "column %d has no name", i+1)
		return
	}
	if !balanced(cell) {
		p.add(number, 0, cell, "a parenthesis is not closed, or closed twice")
		return
	}
	var c Column
	if units != nil {
		c.Symbol = cell
		if units[i] == "" {
			c.bare = true
		} else {
			u, err := unit.Parse(units[i])
			if err != nil {
				p.add(number+1, 0, cell, "%v", err)
				return
			}
			c.Unit = u
		}
	} else if !strings.Contains(outsideParentheses(cell), "/") {
		c.Symbol, c.bare = cell, true // allowed for text and counts, decided with the cells
	} else {
		name, u, err := unit.ParseHeader(cell)
		if err != nil {
			p.add(number, 0, cell, "%v", err)
			return
		}
		c.Symbol, c.Unit = name, u
	}
	c.of, c.part = uncertaintyOf(c.Symbol)
	for _, other := range t.Columns {
		if other.Symbol == c.Symbol {
			p.add(number, 0, c.Symbol, "a column of this name is there twice")
			return
		}
	}
	t.Columns = append(t.Columns, c)
}

// unitsRow returns the cells of a row of units under a header that names none:
// a row without numbers above a row that has numbers where it has units.
func (t *Table) unitsRow(cells []string, rest []line, sep byte) ([]string, bool) {
	if len(rest) == 0 {
		return nil, false
	}
	for _, c := range cells {
		if strings.Contains(outsideParentheses(c), "/") {
			return nil, false
		}
	}
	var units []string
	if sep == ' ' {
		units = splitGroups(rest[0].text)
	} else {
		var err error
		if units, err = splitCells(rest[0].text, sep, true); err != nil {
			return nil, false
		}
	}
	if len(units) != len(cells) {
		return nil, false
	}
	if len(rest) < 2 {
		return nil, false
	}
	next := strings.Fields(rest[1].text)
	if sep != ' ' {
		var err error
		if next, err = splitCells(rest[1].text, sep, false); err != nil {
			return nil, false
		}
	}
	numbers := false
	for i, u := range units {
		u = strings.TrimSpace(u)
		if len(u) > 1 && (u[0] == '[' && u[len(u)-1] == ']' || u[0] == '(' && u[len(u)-1] == ')') {
			u = strings.TrimSpace(u[1 : len(u)-1])
		}
		if u == "-" || u == "–" {
			u = ""
		}
		units[i] = u
		if u == "" {
			continue
		}
		if u != "1" && isNumeric(u) || labels[cells[i]] {
			return nil, false
		}
		numbers = numbers || i < len(next) && isNumeric(next[i])
	}
	if !numbers {
		return nil, false
	}
	return units, true
}
