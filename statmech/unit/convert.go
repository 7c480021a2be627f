package unit

// Celsius returns the temperature whose reading on the Celsius scale is t:
// T/K = t/°C + 273.15.
func Celsius(t float64) Temperature { return Temperature(t + 273.15) }

// Celsius returns the reading on the Celsius scale.
func (x Temperature) Celsius() float64 { return float64(x) - 273.15 }

// AsEnergy returns kT, the energy per particle that belongs to a temperature.
func (x Temperature) AsEnergy() Energy { return Energy(x) * Boltzmann }

// Beta returns β = 1/kT.
func (x Temperature) Beta() InverseEnergy { return InverseEnergy(1 / (Boltzmann * float64(x))) }

// Minus returns the temperature difference x - y.
func (x Temperature) Minus(y Temperature) TemperatureDifference { return TemperatureDifference(x - y) }

// Plus returns the temperature x + d.
func (x Temperature) Plus(d TemperatureDifference) Temperature { return x + Temperature(d) }

// AsTemperature returns x/k.
func (x Energy) AsTemperature() Temperature { return Temperature(x / Boltzmann) }

// AsWavenumber returns x/hc.
func (x Energy) AsWavenumber() Wavenumber { return Wavenumber(x / (Planck * SpeedOfLight)) }

// AsFrequency returns x/h.
func (x Energy) AsFrequency() Frequency { return Frequency(x / Planck) }

// PerMole returns N_A x, the molar energy of one mole of particles with x each.
func (x Energy) PerMole() MolarEnergy { return MolarEnergy(x * Avogadro) }

// OverKT returns x/kT.
func (x Energy) OverKT(T Temperature) float64 { return float64(x) / (Boltzmann * float64(T)) }

// AsMomentOfInertia returns ħ²/(2x), the moment of inertia of a rotor whose
// rotational constant is the energy x = hcB.
func (x Energy) AsMomentOfInertia() MomentOfInertia {
	return MomentOfInertia(ReducedPlanck * (ReducedPlanck / (2 * float64(x))))
}

// RotationalConstant returns hcB = ħ²/(2I) as an energy; in cm⁻¹ it is
// I.RotationalConstant().In(PerCm).
func (x MomentOfInertia) RotationalConstant() Energy {
	return Energy(ReducedPlanck * (ReducedPlanck / (2 * float64(x))))
}

// AsTemperature returns 1/(kx), infinite for x = 0.
func (x InverseEnergy) AsTemperature() Temperature { return Temperature(1 / (Boltzmann * float64(x))) }

// AsEnergy returns hc x, the energy of a photon with wavenumber x.
func (x Wavenumber) AsEnergy() Energy { return Energy(x * (Planck * SpeedOfLight)) }

// AsEnergy returns h x, the energy of a photon with frequency x.
func (x Frequency) AsEnergy() Energy { return Energy(x * Planck) }

// PerParticle returns x/N_A.
func (x MolarEnergy) PerParticle() Energy { return Energy(x / Avogadro) }

// Over returns x/T.
func (x MolarEnergy) Over(T Temperature) MolarEntropy { return MolarEntropy(float64(x) / float64(T)) }

// PerMass returns x/M for a substance of molar mass M.
func (x MolarEnergy) PerMass(M MolarMass) SpecificEnergy {
	return SpecificEnergy(float64(x) / float64(M))
}

// Times returns the molar energy xT.
func (x MolarEntropy) Times(T Temperature) MolarEnergy { return MolarEnergy(float64(x) * float64(T)) }

// TimesDifference returns the molar energy x ΔT.
func (x MolarEntropy) TimesDifference(d TemperatureDifference) MolarEnergy {
	return MolarEnergy(float64(x) * float64(d))
}

// PerParticle returns x/N_A.
func (x MolarEntropy) PerParticle() Entropy { return Entropy(x / Avogadro) }

// PerMass returns x/M for a substance of molar mass M.
func (x MolarEntropy) PerMass(M MolarMass) SpecificEntropy {
	return SpecificEntropy(float64(x) / float64(M))
}

// Over returns x/T.
func (x MolarEntropy) Over(T Temperature) SommerfeldCoefficient {
	return SommerfeldCoefficient(float64(x) / float64(T))
}

// PerMole returns x/n for a body of amount n.
func (x Entropy) PerMole(n Amount) MolarEntropy { return MolarEntropy(float64(x) / float64(n)) }

// PerMole returns xM, the molar quantity of a substance of molar mass M.
func (x SpecificEntropy) PerMole(M MolarMass) MolarEntropy {
	return MolarEntropy(float64(x) * float64(M))
}

// PerMole returns xM, the molar quantity of a substance of molar mass M.
func (x SpecificEnergy) PerMole(M MolarMass) MolarEnergy {
	return MolarEnergy(float64(x) * float64(M))
}

// Times returns the molar heat capacity xT.
func (x SommerfeldCoefficient) Times(T Temperature) MolarEntropy {
	return MolarEntropy(float64(x) * float64(T))
}

// PerMole returns N_A x, the mass of one mole of particles of mass x.
func (x Mass) PerMole() MolarMass { return MolarMass(x * Avogadro) }

// Over returns the amount of substance in a mass x of molar mass M.
func (x Mass) Over(M MolarMass) Amount { return Amount(float64(x) / float64(M)) }

// PerParticle returns x/N_A, the mass of one particle.
func (x MolarMass) PerParticle() Mass { return Mass(x / Avogadro) }

// Over returns the molar volume x/ρ.
func (x MolarMass) Over(rho Density) MolarVolume { return MolarVolume(float64(x) / float64(rho)) }

// Times returns the molar energy pV.
func (x Pressure) Times(V MolarVolume) MolarEnergy { return MolarEnergy(float64(x) * float64(V)) }

// Inverse returns 1/x.
func (x Pressure) Inverse() Compressibility { return Compressibility(1 / x) }

// Inverse returns 1/x.
func (x Compressibility) Inverse() Pressure { return Pressure(1 / x) }

// PerMole returns the molar volume of a substance with x per particle.
func (x Volume) PerMole() MolarVolume { return MolarVolume(x * Avogadro) }

// PerParticle returns x/N_A.
func (x MolarVolume) PerParticle() Volume { return Volume(x / Avogadro) }

// Volume returns 3x, the volume expansivity of an isotropic solid.
func (x LinearExpansivity) Volume() VolumeExpansivity { return VolumeExpansivity(3 * x) }

// Linear returns x/3, the linear expansivity of an isotropic solid.
func (x VolumeExpansivity) Linear() LinearExpansivity { return LinearExpansivity(x / 3) }
