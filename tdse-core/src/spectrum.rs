//! Spectra from recorded series: harmonics, their yields and cutoff, time–frequency maps, the dipole; photoelectrons.

mod chirp;
mod cutoff;
mod dipole;
mod electrons;
mod harmonics;
mod polarization;
mod time_frequency;

pub use chirp::FourierSum;
pub use cutoff::{Cutoff, measured_cutoff};
pub use dipole::twice_integrated;
pub use electrons::{ContinuumAmplitude, Electrons, asymmetry, momenta_of, uniform_momenta, without_bound};
pub use harmonics::{
    EnergyAxis, Harmonics, Window, harmonics, order_yields, radiated_energy, sampled_by_order, sums_by_order,
};
pub use polarization::{Helicity, PlaneHarmonics, helicity_yields};
pub use time_frequency::{GaborMap, TAPER, TimeFrequency, gabor};
