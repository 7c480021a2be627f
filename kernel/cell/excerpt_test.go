package cell

import (
	"strings"
	"testing"
	"unicode/utf8"
)

func TestExcerpt(t *testing.T) {
	long := strings.Repeat("αβ+", 100)
	for _, test := range []struct {
		line   string
		column int
		want   string // what the caret stands under
	}{
		{"x := y", 6, "y"},
		{"\t\tx := y", 8, "y"},
		{"\tθ := é", 8, "é"},
		{"x := 1 +", 9, ""},
		{"", 1, ""},
		{"\t", 2, ""},
		{long + "!", len(long) + 1, "!"},
		{"!" + long, 1, "!"},
		{long + "!" + long, len(long) + 1, "!"},
		{strings.Repeat("x", 60) + "!" + long, 61, "!"},
	} {
		text, before := excerpt(test.line, test.column)
		rs := []rune(text)
		if before > len(rs) || !strings.HasPrefix(string(rs[before:]), test.want) || test.want == "" && before != len(rs) {
			t.Errorf("%.20q, column %d: %q, the caret after %d", test.line, test.column, text, before)
		}
		if n := utf8.RuneCountInString(text); n > excerptWidth+4 || strings.Contains(text, "\t") || before > 0 && strings.HasPrefix(text, "  ") {
			t.Errorf("%.20q, column %d: %q has %d characters", test.line, test.column, text, n)
		}
	}
}
