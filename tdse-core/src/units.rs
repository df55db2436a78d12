//! Constants (CODATA 2022) and the units a user may write, as factors to atomic units.

use std::f64::consts::PI;

/// Planck constant in J s, exact (SI 2019).
pub const PLANCK: f64 = 6.626_070_15e-34;
/// Elementary charge in C, exact (SI 2019).
pub const ELEMENTARY_CHARGE: f64 = 1.602_176_634e-19;
/// Speed of light in m/s, exact (SI 2019).
pub const SPEED_OF_LIGHT: f64 = 299_792_458.0;
/// Inverse fine-structure constant, the speed of light in atomic units (CODATA 2022).
pub const SPEED_OF_LIGHT_AU: f64 = 137.035_999_177;
/// Rydberg constant in 1/m (CODATA 2022).
pub const RYDBERG: f64 = 10_973_731.568_157;

/// Hartree energy in J: 2 R∞ h c.
pub const HARTREE_J: f64 = 2.0 * RYDBERG * PLANCK * SPEED_OF_LIGHT;
/// Hartree energy in eV.
pub const HARTREE_EV: f64 = HARTREE_J / ELEMENTARY_CHARGE;
/// Bohr radius in m: α/(4π R∞).
pub const BOHR_M: f64 = 1.0 / (4.0 * PI * SPEED_OF_LIGHT_AU * RYDBERG);
/// Atomic unit of time ħ/Eh in s.
pub const TIME_S: f64 = PLANCK / (2.0 * PI * HARTREE_J);
/// Atomic unit of time in fs.
pub const TIME_FS: f64 = TIME_S * 1e15;
/// Atomic unit of electric field Eh/(e a0) in V/m.
pub const FIELD_V_PER_M: f64 = HARTREE_EV / BOHR_M;
/// Atomic unit of vector potential, field times time, in V s/m.
pub const VECTOR_POTENTIAL_V_S_PER_M: f64 = FIELD_V_PER_M * TIME_S;
/// Cycle-averaged intensity ½ ε₀ c E0² of a linearly polarized wave of peak field 1 a.u., in W/cm²:
/// (c_au/8π) Eh/(t0 a0²).
pub const INTENSITY_W_PER_CM2: f64 =
    SPEED_OF_LIGHT_AU / (8.0 * PI) * HARTREE_J / (TIME_S * BOHR_M * BOHR_M) * 1e-4;
/// Eh/(t0 a0²) in W/cm²: the other quantity called atomic unit of intensity, named in messages only.
pub const ENERGY_FLUX_W_PER_CM2: f64 = HARTREE_J / (TIME_S * BOHR_M * BOHR_M) * 1e-4;
/// Photon energy in hartree of light of wavelength 1 bohr: 2π c.
pub const ENERGY_TIMES_WAVELENGTH: f64 = 2.0 * PI * SPEED_OF_LIGHT_AU;

/// Kind of a dimensional value.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Quantity {
    /// Length; atomic unit bohr.
    Length,
    /// Energy; atomic unit hartree.
    Energy,
    /// Time; atomic unit ħ/hartree.
    Time,
    /// Cycle-averaged intensity of the carrier; kept as W/cm².
    Intensity,
    /// Electric field; atomic unit hartree/(e bohr).
    ElectricField,
    /// Angle; radian.
    Angle,
    /// Linear chirp, phase per time squared.
    Chirp,
}

/// One unit: its spelling and its value in the base of its quantity (atomic units; W/cm² for intensity).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Unit {
    /// Spelling in a configuration.
    pub symbol: &'static str,
    /// Value of the unit in the quantity's base unit.
    pub factor: f64,
}

const fn unit(symbol: &'static str, factor: f64) -> Unit {
    Unit { symbol, factor }
}

const LENGTHS: &[Unit] = &[
    unit("nm", 1e-9 / BOHR_M),
    unit("um", 1e-6 / BOHR_M),
    unit("µm", 1e-6 / BOHR_M),
    unit("angstrom", 1e-10 / BOHR_M),
    unit("pm", 1e-12 / BOHR_M),
    unit("m", 1.0 / BOHR_M),
    unit("bohr", 1.0),
    unit("au", 1.0),
];
const ENERGIES: &[Unit] = &[
    unit("eV", 1.0 / HARTREE_EV),
    unit("meV", 1e-3 / HARTREE_EV),
    unit("keV", 1e3 / HARTREE_EV),
    unit("hartree", 1.0),
    unit("au", 1.0),
];
const TIMES: &[Unit] = &[
    unit("fs", 1e-15 / TIME_S),
    unit("as", 1e-18 / TIME_S),
    unit("ps", 1e-12 / TIME_S),
    unit("s", 1.0 / TIME_S),
    unit("au", 1.0),
];
const INTENSITIES: &[Unit] =
    &[unit("W/cm^2", 1.0), unit("TW/cm^2", 1e12), unit("PW/cm^2", 1e15), unit("W/m^2", 1e-4)];
const FIELDS: &[Unit] = &[
    unit("V/m", 1.0 / FIELD_V_PER_M),
    unit("MV/cm", 1e8 / FIELD_V_PER_M),
    unit("GV/m", 1e9 / FIELD_V_PER_M),
    unit("V/nm", 1e9 / FIELD_V_PER_M),
    unit("V/angstrom", 1e10 / FIELD_V_PER_M),
    unit("au", 1.0),
];
const ANGLES: &[Unit] =
    &[unit("deg", PI / 180.0), unit("rad", 1.0), unit("mrad", 1e-3), unit("pi", PI), unit("au", 1.0)];
const CHIRPS: &[Unit] = &[unit("rad/fs^2", TIME_FS * TIME_FS), unit("au", 1.0)];

impl Quantity {
    /// Every unit of this quantity, the customary one first.
    pub const fn units(self) -> &'static [Unit] {
        match self {
            Self::Length => LENGTHS,
            Self::Energy => ENERGIES,
            Self::Time => TIMES,
            Self::Intensity => INTENSITIES,
            Self::ElectricField => FIELDS,
            Self::Angle => ANGLES,
            Self::Chirp => CHIRPS,
        }
    }

    /// Name in messages.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Length => "length",
            Self::Energy => "energy",
            Self::Time => "time",
            Self::Intensity => "intensity",
            Self::ElectricField => "electric field",
            Self::Angle => "angle",
            Self::Chirp => "chirp",
        }
    }

    /// The unit with this spelling.
    pub fn unit(self, symbol: &str) -> Option<Unit> {
        self.units().iter().copied().find(|u| u.symbol == symbol)
    }
}

/// Peak field in a.u. of light of this cycle-averaged intensity in W/cm², I = ½ ε₀ c E0².
pub fn peak_field(intensity: f64) -> f64 {
    (intensity / INTENSITY_W_PER_CM2).sqrt()
}

/// Cycle-averaged intensity in W/cm² of light of this peak field in a.u.
pub fn intensity(peak_field: f64) -> f64 {
    peak_field * peak_field * INTENSITY_W_PER_CM2
}

/// Angular frequency (photon energy, hartree) of light of this wavelength in bohr.
pub fn angular_frequency(wavelength: f64) -> f64 {
    ENERGY_TIMES_WAVELENGTH / wavelength
}
