// Package mathml writes formulas in a subset of LaTeX's mathematics as MathML
// that browsers draw without scripts and fonts of ours (MathML Core).
//
//	m, err := mathml.Convert(`\frac{C}{T} = \gamma + \beta T^2`, mathml.Display)
//
// Known are:
//
//   - letters, digits, ' for primes, ~ and the escaped characters \% \$ \# \& \_ \{ \};
//   - Greek letters with their variants, \hbar \ell \partial \nabla \infty \Re
//     \Im \aleph \emptyset \forall \exists \angle \degree and the dots;
//   - _ and ^, with \limits and \nolimits;
//   - \frac \dfrac \tfrac \cfrac \binom \over \choose \sqrt[n]{} \substack;
//   - \left \middle \right and \big \Big \bigg \Bigg with l, r, m;
//   - \sum \prod \coprod, the integrals, \bigcup \bigcap and the like;
//   - \ln \exp \sin \lim \max and the other named functions, \operatorname,
//     \operatorname*, \bmod \pmod \mod;
//   - \mathrm \mathbf \mathit \mathsf \mathtt \mathcal \mathscr \mathbb \mathfrak
//     \boldsymbol \bm, the switches \rm \bf \it, \text with $...$ inside and
//     its kin;
//   - accents, \overline \underline \overbrace \underbrace, \overset \underset
//     \stackrel, \xrightarrow \xleftarrow;
//   - binary operators, relations, \not, arrows;
//   - spacing, \hspace \phantom \vphantom \hphantom \smash, \displaystyle and
//     its kin, \color \textcolor, \boxed, \tag;
//   - the environments matrix (with p, b, B, v, V, small), array, cases,
//     rcases, aligned, align, split, gathered, gather, equation, with or
//     without a star; lines broken by \\.
//
// Anything else, macros of the user's among them, is an [*Error] for the whole
// formula: half a formula is worse than its source. Known and without effect
// on the drawing are \label, \nonumber and \notag.
//
// Spacing follows TeX's classes of atoms: a minus sign after a bracket is a
// sign and gets no space, a named function keeps its distance from what stands
// beside it, and operators in scripts stand close.
package mathml
