package unit

import "math"

// Temperatures. Readings on the Celsius scale are made by [Celsius].
const (
	K      Temperature = 1
	MilliK Temperature = 1e-3
)

// Temperature differences; a kelvin and a degree Celsius are the same.
const (
	DeltaK      TemperatureDifference = 1
	DeltaMilliK TemperatureDifference = 1e-3
)

// Energies per particle. The names say what the unit stands for: PerCm is
// hc/cm, KelvinEnergy is k·1 K, GHzEnergy is h·1 GHz, KJPerMol is 1 kJ/N_A.
// The calorie is the thermochemical one, 4.184 J.
const (
	J            Energy = 1
	EV           Energy = ElementaryCharge
	MilliEV      Energy = 1e-3 * ElementaryCharge
	Hartree      Energy = HartreeEnergy
	PerCm        Energy = Planck * SpeedOfLight * 100
	KelvinEnergy Energy = Boltzmann
	HzEnergy     Energy = Planck
	MHzEnergy    Energy = 1e6 * Planck
	GHzEnergy    Energy = 1e9 * Planck
	THzEnergy    Energy = 1e12 * Planck
	KJPerMol     Energy = 1e3 / Avogadro
	KcalPerMol   Energy = 4184 / Avogadro
)

// PerJ is one inverse joule.
const PerJ InverseEnergy = 1

// Molar energies.
const (
	JPerMol   MolarEnergy = 1
	MolarKJ   MolarEnergy = 1e3   // kJ/mol
	MolarCal  MolarEnergy = 4.184 // cal/mol, thermochemical
	MolarKcal MolarEnergy = 4184  // kcal/mol, thermochemical
)

// Molar entropies and heat capacities.
const (
	JPerMolK      MolarEntropy = 1
	MilliJPerMolK MolarEntropy = 1e-3
	KJPerMolK     MolarEntropy = 1e3
	CalPerMolK    MolarEntropy = 4.184       // thermochemical
	R             MolarEntropy = GasConstant // the molar gas constant
)

// Entropies and heat capacities of a body.
const (
	JPerK      Entropy = 1
	MilliJPerK Entropy = 1e-3
)

// Energies per mass.
const (
	JPerKg SpecificEnergy = 1
	JPerG  SpecificEnergy = 1e3
)

// Entropies and heat capacities per mass.
const (
	JPerKgK  SpecificEntropy = 1
	JPerGK   SpecificEntropy = 1e3
	CalPerGK SpecificEntropy = 4184 // thermochemical
)

// Coefficients of a heat capacity linear in T.
const (
	JPerMolK2      SommerfeldCoefficient = 1
	MilliJPerMolK2 SommerfeldCoefficient = 1e-3
)

// Amounts of substance.
const (
	Mol      Amount = 1
	MilliMol Amount = 1e-3
)

// Masses.
const (
	Kg       Mass = 1
	Gram     Mass = 1e-3
	MilliG   Mass = 1e-6
	U        Mass = AtomicMassConstant // the unified atomic mass unit (dalton)
	Electron Mass = ElectronMass
)

// Molar masses.
const (
	KgPerMol MolarMass = 1
	GPerMol  MolarMass = 1e-3
)

// Pressures and elastic moduli. MmHg is the conventional one.
const (
	Pa   Pressure = 1
	HPa  Pressure = 1e2
	KPa  Pressure = 1e3
	MPa  Pressure = 1e6
	GPa  Pressure = 1e9
	Bar  Pressure = 1e5
	Atm  Pressure = 101325
	Torr Pressure = 101325.0 / 760
	MmHg Pressure = 133.322387415
)

// PerGPa is one inverse gigapascal.
const PerGPa Compressibility = 1e-9

// Lengths.
const (
	Metre    Length = 1
	Cm       Length = 1e-2
	Mm       Length = 1e-3
	Nm       Length = 1e-9
	Angstrom Length = 1e-10
	Pm       Length = 1e-12
	Bohr     Length = BohrRadius
)

// M2 is a square metre.
const M2 Area = 1

// Volumes.
const (
	M3        Volume = 1
	Litre     Volume = 1e-3
	Cm3       Volume = 1e-6
	Angstrom3 Volume = 1e-30
)

// Molar volumes.
const (
	M3PerMol    MolarVolume = 1
	LitrePerMol MolarVolume = 1e-3
	Cm3PerMol   MolarVolume = 1e-6
)

// Densities.
const (
	KgPerM3 Density = 1
	GPerCm3 Density = 1e3
)

// Number densities.
const (
	PerM3  NumberDensity = 1
	PerCm3 NumberDensity = 1e6
)

// Frequencies.
const (
	Hz  Frequency = 1
	KHz Frequency = 1e3
	MHz Frequency = 1e6
	GHz Frequency = 1e9
	THz Frequency = 1e12
)

// Wavenumbers as such. [PerCm] is the energy that belongs to one.
const (
	InverseM  Wavenumber = 1
	InverseCm Wavenumber = 100
)

// Durations.
const (
	Second      Time = 1
	MilliSecond Time = 1e-3
	Minute      Time = 60
	Hour        Time = 3600
)

// MPerS is a metre per second.
const MPerS Speed = 1

// Powers.
const (
	W      Power = 1
	MilliW Power = 1e-3
)

// Angles.
const (
	Rad Angle = 1
	Deg Angle = math.Pi / 180
)

// Moments of inertia.
const (
	KgM2       MomentOfInertia = 1
	GCm2       MomentOfInertia = 1e-7
	UAngstrom2 MomentOfInertia = AtomicMassConstant * 1e-20
)

// Expansivities.
const (
	LinearPerK LinearExpansivity = 1
	VolumePerK VolumeExpansivity = 1
)

// Densities of states.
const (
	PerHzCell  DensityOfStates = 1
	PerTHzCell DensityOfStates = 1e-12
)

// Magnetic flux densities.
const (
	Tesla MagneticFluxDensity = 1
	Gauss MagneticFluxDensity = 1e-4
)
