package session

import "unicode/utf8"

// byteOffset turns a cursor that counts code points into an offset in bytes.
// Nil, and what is beyond the end, is the end.
func byteOffset(code string, cursor *int) int {
	if cursor == nil {
		return len(code)
	}
	n := *cursor
	for i := range code {
		if n <= 0 {
			return i
		}
		n--
	}
	return len(code)
}

// runeOffset turns an offset in bytes into one that counts code points.
func runeOffset(code string, offset int) int {
	return utf8.RuneCountInString(code[:max(0, min(offset, len(code)))])
}
