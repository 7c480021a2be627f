package guard

import (
	"io"
	"os"
)

// Plain takes out of text what only compiled cells have: the letters in front
// of lower-case names and the paths of units (package cell, marker.go). It is
// for text that a cell makes of its values and keeps; what it prints is cleaned
// where it is read.
func Plain(s string) string {
	if _, _, found := odd(s); !found {
		return s
	}
	return string(plain([]byte(s)))
}

// pathLength is that of a unit's path, cell/k and 16 digits; the first four
// letters stay.
const pathLength = 22

// odd finds the first part of s that is not plain: s[i:j] is to go.
func odd[T string | []byte](s T) (i, j int, found bool) {
	for i := 0; i+2 < len(s); i++ {
		switch {
		case s[i] == 0xe2 && s[i+1] == 0xb1 && (s[i+2] == 0xaf || s[i+2] == 0xb0):
			return i, i + 3, true
		case s[i] == 'c' && isPath(s[i:]):
			return i + 4, i + pathLength, true
		}
	}
	return 0, 0, false
}

func isPath[T string | []byte](s T) bool {
	if len(s) < pathLength || string(s[:6]) != "cell/k" {
		return false
	}
	for i := 6; i < pathLength; i++ {
		if c := s[i]; (c < '0' || c > '9') && (c < 'a' || c > 'f') {
			return false
		}
	}
	return true
}

// plain takes what is not plain out of b, in its place.
func plain(b []byte) []byte {
	out := b[:0]
	for {
		i, j, found := odd(b)
		if !found {
			return append(out, b...)
		}
		out = append(out, b[:i]...)
		b = b[j:]
	}
}

// Out is w for text that package fmt makes, in one piece: what is written to a
// file or kept is plain.
func Out(w io.Writer) io.Writer {
	if f, ok := w.(*os.File); w == nil || ok && (f == os.Stdout || f == os.Stderr) {
		return w
	}
	return plainWriter{w}
}

type plainWriter struct{ io.Writer }

func (w plainWriter) Write(b []byte) (int, error) {
	if _, _, found := odd(b); !found {
		return w.Writer.Write(b)
	}
	return w.Writer.Write(plain(append([]byte(nil), b...)))
}
