package mathml

import (
	"maps"
	"slices"
	"strings"
)

// A symbol is what a command without arguments stands for.
type symbol struct {
	text  string
	class class
	tag   string // mi or mo
}

// symbols is filled from the tables below: pairs of command and character.
var symbols = func() map[string]symbol {
	m := map[string]symbol{}
	add := func(tag string, c class, table string) {
		f := strings.Fields(table)
		for i := 0; i < len(f); i += 2 {
			m[f[i]] = symbol{f[i+1], c, tag}
		}
	}
	add("mi", ord, lettersTable)
	add("mo", ord, `prime ′ backslash \ | ‖ vert | Vert ‖ surd √ neg ¬ lnot ¬ dagger † ddag ‡
		cdots ⋯ ldots … dots … dotsc … dotsb ⋯ dotsm ⋯ dotsi ⋯ dotso … vdots ⋮ ddots ⋱`)
	add("mo", punct, `colon :`)
	add("mo", bin, `pm ± mp ∓ times × div ÷ cdot ⋅ ast ∗ star ⋆ circ ∘ bullet ∙ cap ∩ cup ∪ uplus ⊎
		sqcap ⊓ sqcup ⊔ vee ∨ lor ∨ wedge ∧ land ∧ setminus ∖ wr ≀ diamond ⋄ oplus ⊕ ominus ⊖ otimes ⊗
		oslash ⊘ odot ⊙ amalg ⨿ dagger † ddagger ‡ intercal ⊺ ltimes ⋉ rtimes ⋊ triangleleft ◃
		triangleright ▹ smallsetminus ∖ dotplus ∔`)
	add("mo", rel, `lt < gt > leq ≤ le ≤ geq ≥ ge ≥ leqslant ⩽ geqslant ⩾ ll ≪ gg ≫ lll ⋘ ggg ⋙ equiv ≡ sim ∼ simeq ≃
		approx ≈ cong ≅ neq ≠ ne ≠ doteq ≐ propto ∝ varpropto ∝ prec ≺ succ ≻ preceq ⪯ succeq ⪰ subset ⊂
		supset ⊃ subseteq ⊆ supseteq ⊇ subsetneq ⊊ supsetneq ⊋ sqsubseteq ⊑ sqsupseteq ⊒ in ∈ ni ∋ notin ∉ mid ∣ nmid ∤ parallel ∥
		nparallel ∦ perp ⊥ vdash ⊢ dashv ⊣ models ⊨ asymp ≍ bowtie ⋈ smile ⌣ frown ⌢ lesssim ≲ gtrsim ≳
		lessapprox ⪅ gtrapprox ⪆ lessgtr ≶ approxeq ≊ triangleq ≜ coloneqq ≔ therefore ∴ because ∵ thickapprox ≈ thicksim ∼
		leqq ≦ geqq ≧ nleq ≰ ngeq ≱ nless ≮ ngtr ≯
		to → rightarrow → gets ← leftarrow ← leftrightarrow ↔ Rightarrow ⇒ Leftarrow ⇐ Leftrightarrow ⇔
		longrightarrow ⟶ longleftarrow ⟵ longleftrightarrow ⟷ Longrightarrow ⟹ Longleftarrow ⟸
		Longleftrightarrow ⟺ iff ⟺ implies ⟹ impliedby ⟸ mapsto ↦ longmapsto ⟼ uparrow ↑ downarrow ↓
		updownarrow ↕ Uparrow ⇑ Downarrow ⇓ Updownarrow ⇕ nearrow ↗ searrow ↘ swarrow ↙ nwarrow ↖
		hookrightarrow ↪ hookleftarrow ↩ rightharpoonup ⇀ rightharpoondown ⇁ leftharpoonup ↼
		leftharpoondown ↽ rightleftharpoons ⇌ leftrightharpoons ⇋ rightleftarrows ⇄ rightrightarrows ⇉
		leadsto ⇝ rightsquigarrow ⇝ nrightarrow ↛ nleftarrow ↚ nRightarrow ⇏ twoheadrightarrow ↠`)
	return m
}()

// characters has the symbols by their character; where several commands stand
// for one, the first in the alphabet counts.
var characters = func() map[string]symbol {
	m := map[string]symbol{}
	for _, name := range slices.Sorted(maps.Keys(symbols)) {
		if s := symbols[name]; m[s.text] == (symbol{}) {
			m[s.text] = s
		}
	}
	return m
}()

const lettersTable = `alpha α beta β gamma γ delta δ epsilon ϵ varepsilon ε zeta ζ eta η theta θ vartheta ϑ iota ι
	kappa κ varkappa ϰ lambda λ mu μ nu ν xi ξ omicron ο pi π varpi ϖ rho ρ varrho ϱ sigma σ varsigma ς tau τ
	upsilon υ phi ϕ varphi φ chi χ psi ψ omega ω
	Gamma Γ Delta Δ Theta Θ Lambda Λ Xi Ξ Pi Π Sigma Σ Upsilon Υ Phi Φ Psi Ψ Omega Ω
	hbar ℏ hslash ℏ ell ℓ partial ∂ nabla ∇ infty ∞ Re ℜ Im ℑ aleph ℵ beth ℶ wp ℘ emptyset ∅ varnothing ∅
	forall ∀ exists ∃ nexists ∄ angle ∠ measuredangle ∡ degree ° imath ı jmath ȷ top ⊤ bot ⊥ triangle △ Box □ square □ Diamond ◊
	clubsuit ♣ diamondsuit ♢ heartsuit ♡ spadesuit ♠ flat ♭ natural ♮ sharp ♯ checkmark ✓ eth ð
	% % $ $ # # & & _ _ S § P ¶ AA Å pounds £ copyright © mho ℧`

// upright are the letters that are not set in italics.
func upright(r string) bool {
	return strings.Contains("ΓΔΘΛΞΠΣΥΦΨΩ∂∇ℏ", r)
}

// large operators; true if their limits go above and below in display style.
var large = map[string]struct {
	text   string
	limits bool
}{
	"sum": {"∑", true}, "prod": {"∏", true}, "coprod": {"∐", true},
	"bigcup": {"⋃", true}, "bigcap": {"⋂", true}, "bigoplus": {"⨁", true}, "bigotimes": {"⨂", true},
	"bigodot": {"⨀", true}, "bigvee": {"⋁", true}, "bigwedge": {"⋀", true}, "bigsqcup": {"⨆", true},
	"biguplus": {"⨄", true},
	"int":      {"∫", false}, "iint": {"∬", false}, "iiint": {"∭", false}, "oint": {"∮", false}, "oiint": {"∯", false},
}

// functions with a name; true if their limits go below in display style.
var functions = map[string]bool{
	"arccos": false, "arcsin": false, "arctan": false, "arg": false, "cos": false, "cosh": false,
	"cot": false, "coth": false, "csc": false, "deg": false, "dim": false, "exp": false, "hom": false,
	"ker": false, "lg": false, "ln": false, "log": false, "sec": false, "sin": false, "sinh": false,
	"tan": false, "tanh": false,
	"det": true, "gcd": true, "inf": true, "lim": true, "max": true, "min": true, "Pr": true, "sup": true,
	"liminf": true, "limsup": true,
}

// delimiters that open (o), close (c) or do both (x), by command.
var delimiters = map[string]struct {
	text string
	side class
}{
	"(": {"(", opening}, ")": {")", closing}, "[": {"[", opening}, "]": {"]", closing},
	`\{`: {"{", opening}, `\}`: {"}", closing}, `\lbrace`: {"{", opening}, `\rbrace`: {"}", closing},
	`\lbrack`: {"[", opening}, `\rbrack`: {"]", closing},
	`\langle`: {"⟨", opening}, `\rangle`: {"⟩", closing}, "<": {"⟨", opening}, ">": {"⟩", closing},
	`\lvert`: {"|", opening}, `\rvert`: {"|", closing}, `\lVert`: {"‖", opening}, `\rVert`: {"‖", closing},
	`\lfloor`: {"⌊", opening}, `\rfloor`: {"⌋", closing}, `\lceil`: {"⌈", opening}, `\rceil`: {"⌉", closing},
	"|": {"|", ord}, `\vert`: {"|", ord}, `\|`: {"‖", ord}, `\Vert`: {"‖", ord},
	"/": {"/", ord}, `\backslash`: {`\`, ord}, `\uparrow`: {"↑", rel}, `\downarrow`: {"↓", rel},
	`\updownarrow`: {"↕", rel}, `\Uparrow`: {"⇑", rel}, `\Downarrow`: {"⇓", rel}, ".": {"", ord},
}

// accents, and whether they stretch.
var accents = map[string]struct {
	text    string
	stretch bool
}{
	"hat": {"^", false}, "widehat": {"^", true}, "tilde": {"~", false}, "widetilde": {"~", true},
	"bar": {"¯", false}, "vec": {"→", false}, "dot": {"˙", false}, "ddot": {"¨", false}, "dddot": {"⃛", false},
	"check": {"ˇ", false}, "breve": {"˘", false}, "acute": {"´", false}, "grave": {"`", false},
	"mathring": {"˚", false}, "overrightarrow": {"→", true}, "overleftarrow": {"←", true},
	"overleftrightarrow": {"↔", true},
}

var mathFonts = map[string]font{
	"mathrm": roman, "mathbf": bold, "mathit": italic, "mathsf": sansSerif, "mathtt": typewriter,
	"mathcal": script, "mathscr": script, "mathbb": blackboard, "mathfrak": fraktur, "boldsymbol": boldItalic,
	"bm": boldItalic, "mathnormal": plain, "symbf": bold, "symup": roman, "mathup": roman,
}

var fontSwitches = map[string]font{"rm": roman, "bf": bold, "it": italic, "sf": sansSerif, "tt": typewriter, "cal": script}

var textFonts = map[string]font{
	"text": plain, "textrm": plain, "mbox": plain, "hbox": plain, "textnormal": plain, "textup": plain,
	"textbf": bold, "textit": italic, "emph": italic, "textsf": sansSerif, "texttt": typewriter,
}

// spaces by width in em.
var spaces = map[string]string{
	",": "0.1667em", "thinspace": "0.1667em", ":": "0.2222em", ">": "0.2222em", "medspace": "0.2222em",
	";": "0.2778em", "thickspace": "0.2778em", "!": "-0.1667em", "negthinspace": "-0.1667em",
	"enspace": "0.5em", "quad": "1em", "qquad": "2em",
}

// negated has the relations with a stroke that are one character.
var negated = map[string]string{
	"=": "≠", "<": "≮", ">": "≯", "≤": "≰", "≥": "≱", "∈": "∉", "∋": "∌", "⊂": "⊄", "⊃": "⊅", "⊆": "⊈",
	"⊇": "⊉", "∼": "≁", "≃": "≄", "≈": "≉", "≅": "≇", "≡": "≢", "∣": "∤", "∥": "∦", "→": "↛", "←": "↚",
}
