package engine

import (
	"regexp"
	"strings"
	"unicode/utf8"
)

// A cleaner turns the bytes of a stream into text that never ends in the
// middle of a character.
type cleaner struct{ tail []byte }

// whole returns the text that is complete; bytes that begin a character wait
// for the next call.
func (c *cleaner) whole(b []byte) string {
	b = append(c.tail, b...)
	cut := len(b)
	for i := 1; i < utf8.UTFMax && i <= len(b); i++ {
		if utf8.RuneStart(b[len(b)-i]) {
			if !utf8.FullRune(b[len(b)-i:]) {
				cut = len(b) - i
			}
			break
		}
	}
	c.tail = append([]byte(nil), b[cut:]...)
	return string(b[:cut])
}

// rest returns what waits for more when no more comes.
func (c *cleaner) rest() string {
	s := string(c.tail)
	c.tail = nil
	return s
}

// setMarkers is told the letters that the child puts into names and that no
// reader is to see.
func (c *child) setMarkers(letters string) {
	var pairs []string
	for _, r := range letters {
		pairs = append(pairs, string(r), "")
	}
	c.strip = strings.NewReplacer(pairs...)
}

func (c *child) clean(s string) string {
	if c.strip == nil {
		return s
	}
	s = c.strip.Replace(s)
	if strings.Contains(s, "cell/k") {
		s = unitPath.ReplaceAllString(s, "cell")
	}
	return s
}

// unitPath is the path of a package of compiled cells, which reflection prints
// in the name of an instance: F[cell/k3f9....foo].
var unitPath = regexp.MustCompile(`\bcell/k[0-9a-f]{16}\b`)
