package mathml

// A font is one of the alphabets of mathematics.
type font string

const (
	plain      font = ""
	roman      font = "normal"
	bold       font = "bold"
	italic     font = "italic"
	boldItalic font = "bold-italic"
	script     font = "script"
	fraktur    font = "fraktur"
	blackboard font = "double-struck"
	sansSerif  font = "sans-serif"
	typewriter font = "monospace"
)

// alphabets has the places of A, a, 0, Α and α in the Unicode block of
// mathematical letters; 0 where there is none.
var alphabets = map[font][5]rune{
	bold:       {0x1D400, 0x1D41A, 0x1D7CE, 0x1D6A8, 0x1D6C2},
	italic:     {0x1D434, 0x1D44E, 0, 0x1D6E2, 0x1D6FC},
	boldItalic: {0x1D468, 0x1D482, 0x1D7CE, 0x1D71C, 0x1D736},
	script:     {0x1D49C, 0x1D4B6, 0, 0, 0},
	fraktur:    {0x1D504, 0x1D51E, 0, 0, 0},
	blackboard: {0x1D538, 0x1D552, 0x1D7D8, 0, 0},
	sansSerif:  {0x1D5A0, 0x1D5BA, 0x1D7E2, 0, 0},
	typewriter: {0x1D670, 0x1D68A, 0x1D7F6, 0, 0},
}

// older has the letters that stood elsewhere in Unicode before the block came.
var older = map[font]map[rune]rune{
	italic: {'h': 'ℎ'},
	script: {'B': 'ℬ', 'E': 'ℰ', 'F': 'ℱ', 'H': 'ℋ', 'I': 'ℐ', 'L': 'ℒ', 'M': 'ℳ', 'R': 'ℛ',
		'e': 'ℯ', 'g': 'ℊ', 'o': 'ℴ'},
	fraktur:    {'C': 'ℭ', 'H': 'ℌ', 'I': 'ℑ', 'R': 'ℜ', 'Z': 'ℨ'},
	blackboard: {'C': 'ℂ', 'H': 'ℍ', 'N': 'ℕ', 'P': 'ℙ', 'Q': 'ℚ', 'R': 'ℝ', 'Z': 'ℤ'},
}

// late has the signs that follow ω in the alphabets.
var late = map[rune]rune{'∂': 25, 'ϵ': 26, 'ϑ': 27, 'ϰ': 28, 'ϕ': 29, 'ϱ': 30, 'ϖ': 31}

// variant returns the letter or digit in a font, and r where it has none.
func variant(r rune, f font) rune {
	if o, ok := older[f][r]; ok {
		return o
	}
	a, ok := alphabets[f]
	if !ok {
		return r
	}
	at := func(first, offset rune) rune {
		if first == 0 {
			return r
		}
		return first + offset
	}
	switch {
	case r >= 'A' && r <= 'Z':
		return at(a[0], r-'A')
	case r >= 'a' && r <= 'z':
		return at(a[1], r-'a')
	case r >= '0' && r <= '9':
		return at(a[2], r-'0')
	case r >= 'Α' && r <= 'Ω':
		return at(a[3], r-'Α')
	case r >= 'α' && r <= 'ω':
		return at(a[4], r-'α')
	}
	if n, ok := late[r]; ok {
		return at(a[4], n)
	}
	if r == '∇' && a[3] != 0 {
		return a[3] + 25
	}
	return r
}

func restyle(s string, f font) string {
	out := make([]rune, 0, len(s))
	for _, r := range s {
		out = append(out, variant(r, f))
	}
	return string(out)
}
