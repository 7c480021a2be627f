package unit

import (
	"fmt"
	"math"
	"strings"
)

// The constants that define the SI, exact, in SI units.
const (
	Boltzmann        = 1.380649e-23    // k, J/K
	Planck           = 6.62607015e-34  // h, J s
	Avogadro         = 6.02214076e23   // N_A, 1/mol
	ElementaryCharge = 1.602176634e-19 // e, C
	SpeedOfLight     = 299792458       // c, m/s
)

// Constants that follow from the defining ones, exact.
const (
	GasConstant             = Boltzmann * Avogadro              // R = k N_A, J/(mol K)
	ReducedPlanck           = Planck / (2 * math.Pi)            // ħ = h/2π, J s
	SecondRadiationConstant = Planck * SpeedOfLight / Boltzmann // c₂ = hc/k, m K
	Faraday                 = ElementaryCharge * Avogadro       // F = e N_A, C/mol
	StefanBoltzmann         = 2 * math.Pi * math.Pi * math.Pi * math.Pi * math.Pi * Boltzmann * Boltzmann * Boltzmann * Boltzmann /
		(15 * Planck * Planck * Planck * SpeedOfLight * SpeedOfLight) // σ = 2π⁵k⁴/(15h³c²), W/(m² K⁴)
)

// Measured constants, CODATA 2022, in SI units. [Constants] gives their
// standard uncertainties.
const (
	AtomicMassConstant    = 1.66053906892e-27   // m_u, kg
	ElectronMass          = 9.1093837139e-31    // m_e, kg
	ProtonMass            = 1.67262192595e-27   // m_p, kg
	BohrRadius            = 5.29177210544e-11   // a₀, m
	HartreeEnergy         = 4.3597447222060e-18 // E_h, J
	RydbergConstant       = 10973731.568157     // R_∞, 1/m
	BohrMagneton          = 9.2740100657e-24    // μ_B, J/T
	NuclearMagneton       = 5.0507837393e-27    // μ_N, J/T
	FineStructureConstant = 7.2973525643e-3     // α
)

// MolarMassConstant is M_u = N_A m_u in kg/mol; since 2019 it is measured and
// differs from 1e-3 kg/mol by 1.05e-9 of itself.
const MolarMassConstant = Avogadro * AtomicMassConstant

// A Constant is one line of the set of constants in force.
type Constant struct {
	Name, Symbol        string
	Value               float64
	StandardUncertainty float64 // 0 if exact
	Unit                string
	Exact               bool   // exact by the definition of the SI, or derived from such
	Source              string // the adjustment, or the relation
}

// A ConstantSet prints itself as a table.
type ConstantSet []Constant

// ConstantsSource names the adjustment of the measured constants.
const ConstantsSource = "CODATA 2022"

// Constants returns the set of constants in force. Values and standard
// uncertainties of the measured ones: P. J. Mohr, D. B. Newell, B. N. Taylor,
// E. Tiesinga, CODATA recommended values of the fundamental physical constants:
// 2022, Rev. Mod. Phys. 97, 025002 (2025).
func Constants() ConstantSet {
	const def, der = "SI definition", "derived, exact"
	return ConstantSet{
		{"Boltzmann constant", "k", Boltzmann, 0, "J/K", true, def},
		{"Planck constant", "h", Planck, 0, "J s", true, def},
		{"Avogadro constant", "N_A", Avogadro, 0, "1/mol", true, def},
		{"elementary charge", "e", ElementaryCharge, 0, "C", true, def},
		{"speed of light in vacuum", "c", SpeedOfLight, 0, "m/s", true, def},
		{"molar gas constant", "R = k N_A", GasConstant, 0, "J/(mol K)", true, der},
		{"reduced Planck constant", "ħ = h/2π", ReducedPlanck, 0, "J s", true, der},
		{"second radiation constant", "c2 = hc/k", SecondRadiationConstant, 0, "m K", true, der},
		{"Faraday constant", "F = e N_A", Faraday, 0, "C/mol", true, der},
		{"Stefan-Boltzmann constant", "σ", StefanBoltzmann, 0, "W/(m2 K4)", true, der},
		{"atomic mass constant", "m_u", AtomicMassConstant, 5.2e-37, "kg", false, ConstantsSource},
		{"molar mass constant", "M_u = N_A m_u", MolarMassConstant, 3.1e-13, "kg/mol", false, ConstantsSource},
		{"electron mass", "m_e", ElectronMass, 2.8e-40, "kg", false, ConstantsSource},
		{"proton mass", "m_p", ProtonMass, 5.2e-37, "kg", false, ConstantsSource},
		{"Bohr radius", "a0", BohrRadius, 8.2e-21, "m", false, ConstantsSource},
		{"Hartree energy", "E_h", HartreeEnergy, 4.8e-30, "J", false, ConstantsSource},
		{"Rydberg constant", "R_inf", RydbergConstant, 1.2e-5, "1/m", false, ConstantsSource},
		{"Bohr magneton", "mu_B", BohrMagneton, 2.9e-33, "J/T", false, ConstantsSource},
		{"nuclear magneton", "mu_N", NuclearMagneton, 1.6e-36, "J/T", false, ConstantsSource},
		{"fine-structure constant", "α", FineStructureConstant, 1.1e-12, "1", false, ConstantsSource},
	}
}

// String returns the set as a plain-text table.
func (s ConstantSet) String() string {
	var b strings.Builder
	fmt.Fprintf(&b, "Constants: %s\n", ConstantsSource)
	for _, c := range s {
		u := "exact"
		if !c.Exact {
			u = fmt.Sprintf("u = %.2g", c.StandardUncertainty)
		}
		fmt.Fprintf(&b, "%-26s %-14s %-22.15g %-12s %-12s %s\n", c.Name, c.Symbol, c.Value, c.Unit, u, c.Source)
	}
	return b.String()
}
