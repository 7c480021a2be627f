package data

import (
	"bytes"
	"compress/gzip"
	"fmt"
	"io"
	"os"
	"strconv"
	"strings"
)

// Write writes the table in the form that [Read] reads: notes, header with
// units, comma-separated rows. Every number is written in its unit with as many
// digits as give the same float64 back.
func (t *Table) Write(w io.Writer) error {
	var b bytes.Buffer
	for _, n := range t.Notes {
		if n.Key == "" {
			fmt.Fprintf(&b, "# %s\n", n.Value)
		} else {
			fmt.Fprintf(&b, "# %s: %s\n", n.Key, n.Value)
		}
	}
	for k := range t.Columns {
		c := &t.Columns[k]
		if k > 0 {
			b.WriteString(", ")
		}
		if c.bare {
			b.WriteString(field(c.Symbol, len(t.Columns) == 1))
		} else {
			b.WriteString(field(c.Unit.Header(c.Symbol), len(t.Columns) == 1))
		}
	}
	b.WriteByte('\n')
	for i := range t.Len() {
		for k := range t.Columns {
			c := &t.Columns[k]
			if k > 0 {
				b.WriteString(", ")
			}
			switch {
			case c.Text != nil:
				b.WriteString(field(c.Text[i], len(t.Columns) == 1 || k == 0))
			case c.Missing != nil && c.Missing[i]:
				b.WriteString(field("", len(t.Columns) == 1))
			default:
				b.WriteString(strconv.FormatFloat(c.raw[i], 'g', -1, 64))
			}
		}
		b.WriteByte('\n')
	}
	if _, err := w.Write(b.Bytes()); err != nil {
		return fmt.Errorf("data: %s: %w", t.Name, err)
	}
	return nil
}

// Save writes the table to a file, gzip-compressed if the name ends in .gz.
// The file holds no time, so that the same table gives the same bytes.
func (t *Table) Save(name string) error {
	var b bytes.Buffer
	if err := t.Write(&b); err != nil {
		return err
	}
	if strings.HasSuffix(name, ".gz") {
		var z bytes.Buffer
		w := gzip.NewWriter(&z)
		if _, err := w.Write(b.Bytes()); err != nil {
			return fmt.Errorf("data: %s: %w", name, err)
		}
		if err := w.Close(); err != nil {
			return fmt.Errorf("data: %s: %w", name, err)
		}
		b = z
	}
	if err := os.WriteFile(name, b.Bytes(), 0o666); err != nil {
		return fmt.Errorf("data: %w", err)
	}
	return nil
}

// field quotes a text that would not be read back as it is. always quotes it
// anyway: a text that stands first or alone in its line.
func field(s string, always bool) string {
	if always || !balanced(s) || strings.ContainsAny(s, "\",;\t#") || s != strings.TrimSpace(s) {
		return `"` + strings.ReplaceAll(s, `"`, `""`) + `"`
	}
	return s
}
