//! Groups of the simpler models: what a full run has no counterpart of, and how far a model is from it.

use tdse_core::model::metrics::Verdict;

use super::groups::{TIME, count, flag, value};
use super::{Dataset, Group};

const NUMBER: &str = "1";
const DECADES: &str = "1";

/// Returns of classical electrons.
pub(super) const RETURNS: Group = Group {
    name: "returns",
    title: "Classical electrons that start at rest and return",
    signal: "photon_energy",
    auxiliary: &[],
    datasets: &[
        count("return_number", "Number of the return"),
        Dataset { long_name: "Time at which the electron starts", ..TIME },
        value("return_time", "fs", BY_RETURN, "Time of the return"),
        value("return_energy", "eV", BY_RETURN, "Kinetic energy at the return"),
        value("photon_energy", "eV", BY_RETURN, "Ionization energy plus energy at the return"),
        value("backscattered_energy", "eV", BY_RETURN, "Energy after the field of electrons scattered back"),
        flag("branch", BY_RETURN, "Short or long path"),
    ],
};
const BY_RETURN: &[&str] = &["return_number", "time"];

/// Quantum orbits.
pub(super) const ORBITS: Group = Group {
    name: "orbits",
    title: "Quantum orbits of the crest that gives the highest photon energy",
    signal: "dipole_phase",
    auxiliary: &[],
    datasets: &[
        count("orbit", "Orbit: 0 the short one, 1 the long one"),
        count("order", "Harmonic order"),
        value("emission_time", "fs", BY_ORBIT, "Time of the start, real part"),
        value("barrier_time", "fs", BY_ORBIT, "Time of the start, imaginary part"),
        value("return_time", "fs", BY_ORBIT, "Time of the return, real part"),
        value("dipole_phase", "rad", BY_ORBIT, "Real part of the action: phase of the contribution"),
        value("weight", NUMBER, BY_ORBIT, "exp(-2 Im action); zero where the orbit does not contribute"),
        value("harmonic_amplitude", AMPLITUDE, &["order"], "Amplitude |a| of the full result at the order"),
        value("harmonic_phase", "rad", &["order"], "Phase of a of the full result at the order"),
    ],
};
/// Of a(ω) = ∫ a(t) w(t) exp(iωt) dt.
const AMPLITUDE: &str = "bohr / atomic_unit_of_time";
const BY_ORBIT: &[&str] = &["orbit", "order"];

/// Short and long paths of the full result, of a scan over the intensity.
pub(super) const BRANCHES: Group = Group {
    name: "branches",
    title: "Short and long paths of the full result by the slope of the dipole phase over the intensity",
    signal: "phase_slope",
    auxiliary: &["orbit_phase_slope"],
    datasets: &[
        count("orbit", "Paths: 0 the short ones, 1 the long ones"),
        count("order", "Harmonic order"),
        value("phase_slope", SLOPE, BY_ORBIT, "Slope of the dipole phase over the intensity, downwards"),
        value("orbit_phase_slope", SLOPE, BY_ORBIT, "The same of the quantum orbit"),
        value(
            "branch_amplitude",
            AMPLITUDE,
            BY_ORBIT,
            "What these paths contribute to |a| of the full result",
        ),
        value("branch_phase", "rad", BY_ORBIT, "Phase of that contribution"),
        value(
            "median_difference",
            SLOPE,
            &["orbit"],
            "Median of |full - orbit| over harmonics at which the two are told apart",
        ),
    ],
};
const SLOPE: &str = "rad*cm**2/W";

/// Ionization in time.
pub(super) const IONIZATION: Group = Group {
    name: "ionization",
    title: "Ionization in time by rates",
    signal: "probability",
    auxiliary: &["adk", "ppt"],
    datasets: &[
        TIME,
        value(
            "probability",
            NUMBER,
            &["time"],
            "Ionization by the model's rate: of tunnelling, the quasi-static one of the model atom",
        ),
        value("adk", NUMBER, &["time"], "Ionization by the ADK rate in three dimensions"),
        value(
            "ppt",
            NUMBER,
            &["time"],
            "Ionization by the PPT rate in three dimensions, averaged over the cycle",
        ),
    ],
};

/// A model beside the full run.
pub(super) const COMPARISON: Group = Group {
    name: "comparison",
    title: "Distance of the model from the full result",
    signal: "verdict",
    auxiliary: &[],
    datasets: &[
        flag("verdict", &[], "Worst verdict of the numbers the model stands for"),
        value("keldysh_parameter", NUMBER, &[], "Keldysh parameter, all pulses together"),
        value("cutoff_energy", "eV", &[], "Cutoff of the model"),
        value(
            "full_cutoff",
            "eV",
            &[],
            "Cutoff of the full result, by the upper half of the plateau as the model's",
        ),
        value("ionization_probability", NUMBER, &[], "Ionization probability of the model"),
        value(
            "electron_yield",
            NUMBER,
            &[],
            "Probability of an electron within the energy axis, of the model",
        ),
        value("direct_limit", "eV", &[], "Largest energy of classical electrons that do not return"),
        value("rescattering_limit", "eV", &[], "Largest energy of classical electrons scattered back"),
        value(
            "saturation_intensity",
            "W/cm**2",
            &[],
            "Intensity at which the quasi-static rate ionizes 1 - 1/e",
        ),
        value("plateau_first", NUMBER, &[], "First order of the plateau: above the ionization energy"),
        value("plateau_last", NUMBER, &[], "Last order of the plateau: up to the full run's measured cutoff"),
        value("cutoff_difference", NUMBER, &[], "Difference of the cutoffs in photons, model - full"),
        value("slope_difference", DECADES, &[], "Difference of the plateau's slopes in decades per order"),
        value("level_difference", DECADES, &[], "Difference of the plateau's levels in decades"),
        value("distance", DECADES, &[], "Root-mean-square distance over the plateau in decades"),
        value("shifted_distance", DECADES, &[], "The same after the vertical shift that makes it smallest"),
        value("vertical_shift", DECADES, &[], "That shift, in decades to add to the model"),
        value("harmonic_yield_ratio", NUMBER, &[], "Yield of the plateau, model / full"),
        value(
            "phase_difference",
            "rad",
            &[],
            "Root-mean-square difference of harmonic phases, common offset removed",
        ),
        value("electron_first", "eV", &[], "First electron energy compared"),
        value("electron_last", "eV", &[], "Last one, a millionth of the highest yield"),
        value(
            "electron_distance",
            DECADES,
            &[],
            "Root-mean-square distance of the electron spectra in decades",
        ),
        value(
            "electron_shifted_distance",
            DECADES,
            &[],
            "The same after the vertical shift that makes it smallest",
        ),
        value("electron_shift", DECADES, &[], "That shift, in decades to add to the model"),
        value("direct_break", "eV", &[], "Energy at which the full electron spectrum breaks first"),
        value(
            "rescattering_break",
            "eV",
            &[],
            "Energy at which its plateau of electrons scattered back ends",
        ),
        value("direct_difference", NUMBER, &[], "Largest classical energy less the first break, in photons"),
        value(
            "rescattering_difference",
            NUMBER,
            &[],
            "Largest energy scattered back less the plateau's end, in photons",
        ),
        value("ionization_ratio", NUMBER, &[], "Ionization probability, model / full"),
        value("electron_yield_ratio", NUMBER, &[], "Electron yield, model / full"),
        flag("cutoff_verdict", &[], "Verdict on the cutoff"),
        flag("slope_verdict", &[], "Verdict on the plateau's slope"),
        flag("level_verdict", &[], "Verdict on the plateau's level"),
        flag("distance_verdict", &[], "Verdict on the distance"),
        flag("shape_verdict", &[], "Verdict on the distance after the shift"),
        flag("harmonic_yield_verdict", &[], "Verdict on the plateau's yield"),
        flag("phase_verdict", &[], "Verdict on the phases"),
        flag("ionization_verdict", &[], "Verdict on the ionization"),
        flag("electron_distance_verdict", &[], "Verdict on the distance of the electron spectra"),
        flag("electron_shape_verdict", &[], "Verdict on that distance after the shift"),
        flag("direct_verdict", &[], "Verdict on the first break"),
        flag("rescattering_verdict", &[], "Verdict on the plateau's end"),
        flag("electron_yield_verdict", &[], "Verdict on the electron yield"),
    ],
};

/// The number of a verdict in files; what a gathered file lacks reads as missing.
pub fn verdict_number(verdict: Verdict) -> i64 {
    match verdict {
        Verdict::Missing => -1,
        Verdict::WithinError => 0,
        Verdict::WithinTolerance => 1,
        Verdict::Different => 2,
    }
}

/// Words for those numbers.
pub(super) fn verdicts() -> Vec<(i64, &'static str)> {
    [Verdict::Missing, Verdict::WithinError, Verdict::WithinTolerance, Verdict::Different]
        .map(|verdict| (verdict_number(verdict), verdict.name()))
        .to_vec()
}

/// Words for the numbers of `branch`.
pub(super) fn branches() -> Vec<(i64, &'static str)> {
    vec![(-1, "none"), (0, "short"), (1, "long")]
}
