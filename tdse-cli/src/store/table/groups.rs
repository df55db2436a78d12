//! The table itself.

use super::models::{BRANCHES, COMPARISON, IONIZATION, ORBITS, RETURNS};
use super::{Dataset, Form, Group, Kind, Role};

const ACCELERATION: &str = "bohr / atomic_unit_of_time**2";
/// Of |a(ω)|², a(ω) = ∫ a(t) w(t) exp(iωt) dt.
const SPECTRUM: &str = "bohr**2 / atomic_unit_of_time**2";
const DIPOLE: &str = "elementary_charge * bohr";
const MOMENTUM: &str = "hbar / bohr";
const PER_ENERGY: &str = "1 / eV";
const NUMBER: &str = "1";

pub(super) const TIME: Dataset = axis("time", "fs", "Time");
const PHOTON_ENERGY: Dataset = axis("photon_energy", "eV", "Photon energy");
const HELICITY: Dataset = count("helicity", "Helicity of light along +z: +1 turns from x to y");
const COMPONENT: Dataset = count("component", "Component: 0 along x, 1 along y");

/// The groups in the order in which the first one present becomes the default.
pub static GROUPS: &[Group] = &[
    Group {
        name: "field",
        title: "Laser field",
        signal: "electric_field",
        auxiliary: &[],
        datasets: &[
            COMPONENT,
            TIME,
            vector("electric_field", "V/m", &["component", "time"], "Electric field"),
            vector("vector_potential", "V*s/m", &["component", "time"], "Vector potential"),
        ],
    },
    Group {
        name: "dynamics",
        title: "Motion of the electron",
        signal: "dipole_acceleration",
        auxiliary: &["dipole"],
        datasets: &[
            COMPONENT,
            TIME,
            vector("dipole_acceleration", ACCELERATION, &["component", "time"], "Dipole acceleration"),
            vector("dipole", DIPOLE, &["component", "time"], "Dipole"),
            value("norm", NUMBER, &["time"], "Norm in the box"),
        ],
    },
    Group {
        name: "populations",
        title: "Populations of the initial state and of bound states",
        signal: "initial_population",
        auxiliary: &[],
        datasets: &[
            count("state", "Number of the bound state"),
            TIME,
            coordinate("energy", "eV", &["state"], "Energy of the bound state"),
            value("initial_population", NUMBER, &["time"], "Population of the initial state"),
            value("populations", NUMBER, &["state", "time"], "Population"),
        ],
    },
    Group {
        name: "harmonics",
        title: "Harmonic spectrum",
        signal: "spectrum",
        auxiliary: &[],
        datasets: &[
            COMPONENT,
            PHOTON_ENERGY,
            coordinate(
                "harmonic_order",
                NUMBER,
                &["photon_energy"],
                "Photon energy in photons of the first pulse",
            ),
            vector("spectrum", SPECTRUM, &["component", "photon_energy"], "Harmonic intensity"),
            vector("spectral_phase", "rad", &["component", "photon_energy"], "Spectral phase"),
            value("radiated_energy", NUMBER, &["photon_energy"], "Radiated energy per unit photon energy"),
            HELICITY,
            value("helicity_spectrum", SPECTRUM, &["helicity", "photon_energy"], "Harmonic intensity"),
            value(
                "harmonic_ellipticity",
                NUMBER,
                &["photon_energy"],
                "Ellipticity, positive where helicity +1 is the stronger",
            ),
            value("harmonic_orientation", "rad", &["photon_energy"], "Angle of the major axis to x"),
        ],
    },
    Group {
        name: "harmonic_yields",
        title: "Harmonic yields",
        signal: "yield",
        auxiliary: &[],
        datasets: &[
            count("order", "Harmonic order"),
            value("yield", "eV", &["order"], "Energy radiated within half a photon of the order"),
            HELICITY,
            value("helicity_yield", "eV", &["helicity", "order"], "The same by helicity"),
        ],
    },
    Group {
        name: "time_frequency",
        title: "Time-frequency map of the dipole acceleration",
        signal: "intensity",
        auxiliary: &[],
        datasets: &[
            TIME,
            PHOTON_ENERGY,
            value("intensity", SPECTRUM, &["time", "photon_energy"], "Windowed harmonic intensity"),
        ],
    },
    Group {
        name: "photoelectrons",
        title: "Photoelectron spectrum",
        signal: "yield",
        auxiliary: &["left", "right"],
        datasets: &[
            axis("energy", "eV", "Kinetic energy"),
            value("yield", PER_ENERGY, &["energy"], "Ionization probability per unit energy"),
            value("left", PER_ENERGY, &["energy"], "The same, towards negative x"),
            value("right", PER_ENERGY, &["energy"], "The same, towards positive x"),
            axis("emission_angle", "rad", "Angle of the momentum to x"),
            value(
                "angular_distribution",
                "1 / rad",
                &["emission_angle"],
                "Ionization probability per unit angle",
            ),
        ],
    },
    Group {
        name: "momentum",
        title: "Photoelectron momentum distribution",
        signal: "density",
        auxiliary: &[],
        datasets: &[
            axis("momentum", MOMENTUM, "Momentum"),
            axis("momentum_y", MOMENTUM, "Momentum along y"),
            axis("momentum_x", MOMENTUM, "Momentum along x"),
            Dataset {
                name: "density",
                long_name: "Probability per unit momentum",
                kind: Kind::Real,
                role: Role::Value,
                line: Form { axes: &["momentum"], units: Some("bohr / hbar") },
                plane: Form { axes: &["momentum_y", "momentum_x"], units: Some("bohr**2 / hbar**2") },
            },
        ],
    },
    Group {
        name: "refinement",
        title: "What each choice of numerics contributes to the errors",
        signal: "harmonic_yields",
        auxiliary: &["electron_spectrum"],
        datasets: &[
            count("cause", "Choice of numerics that was made finer"),
            value("harmonic_yields", NUMBER, &["cause"], "Median relative error of the harmonic yields"),
            value("electron_spectrum", NUMBER, &["cause"], "Median relative error of the electron spectrum"),
            value("cutoff_energy", "eV", &["cause"], "Error of the measured cutoff"),
            value("ionization_probability", NUMBER, &["cause"], "Error of the ionization probability"),
        ],
    },
    Group {
        name: "model_atoms",
        title: "The same field on other model atoms of the same ionization energy",
        signal: "ionization_probability",
        auxiliary: &[],
        datasets: &[
            count("model", "Model atom: 0 the one asked for, then those that the attribute names"),
            count("order", "Harmonic order"),
            value("yield", "eV", &["model", "order"], "Energy radiated within half a photon of the order"),
            value("cutoff_energy", "eV", &["model"], "Measured cutoff of the harmonic spectrum"),
            value("ionization_probability", NUMBER, &["model"], "Ionization probability"),
        ],
    },
    Group {
        name: "levels",
        title: "Bound states after the field",
        signal: "population",
        auxiliary: &[],
        datasets: &[
            count("state", "Number of the bound state"),
            value("energy", "eV", &["state"], "Energy of the bound state"),
            value("population", NUMBER, &["state"], "Population at the end"),
        ],
    },
    Group {
        name: "summary",
        title: "Headline numbers",
        signal: "ionization_probability",
        auxiliary: &[],
        datasets: &[
            value("ionization_probability", NUMBER, &[], "Ionization probability"),
            value("initial_energy", "eV", &[], "Mean energy of the initial state on the grid"),
            value("cutoff_energy", "eV", &[], "Measured cutoff of the harmonic spectrum"),
            value(
                "classical_cutoff",
                "eV",
                &[],
                "Cutoff by the classical law Ip + 3.17 Up, all pulses together",
            ),
            value("ponderomotive_energy", "eV", &[], "Ponderomotive energy Up, all pulses together"),
            value("first_photon_energy", "eV", &[], "Photon energy of the first pulse"),
            value("final_norm", NUMBER, &[], "Norm in the box at the end"),
            value("bound_population", NUMBER, &[], "Population of all bound states at the end"),
            value("initial_population", NUMBER, &[], "Population of the initial state at the end"),
            value("electron_yield", NUMBER, &[], "Probability of an electron within the energy axis"),
            value("asymmetry", NUMBER, &[], "Asymmetry of the electrons, (right - left)/(right + left)"),
            value(
                "unaccounted_probability",
                NUMBER,
                &[],
                "One minus all bound states and the electrons within the energy axis",
            ),
            value(
                "lowest_clean_momentum",
                MOMENTUM,
                &[],
                "Slowest electron that the absorber takes without reflecting it",
            ),
            value(
                "coulomb_shift",
                "eV",
                &[],
                "Energy by which the ion's pull beyond the absorber may shift electrons",
            ),
            value(
                "coulomb_sideband",
                NUMBER,
                &[],
                "Relative amplitude that the ion's pull beyond the absorber may move by one photon",
            ),
            Dataset {
                kind: Kind::Integer,
                ..value("electron_method", NUMBER, &[], "Way to the electron spectrum")
            },
            Dataset { kind: Kind::Integer, ..value("status", NUMBER, &[], "How far the point has come") },
            text("reason", "Why the point is doubtful or not there"),
        ],
    },
    RETURNS,
    ORBITS,
    BRANCHES,
    IONIZATION,
    COMPARISON,
];

const fn dataset(name: &'static str, long_name: &'static str, role: Role, form: Form) -> Dataset {
    Dataset { name, long_name, kind: Kind::Real, role, line: form, plane: form }
}

pub(super) const fn value(
    name: &'static str,
    units: &'static str,
    axes: &'static [&'static str],
    long_name: &'static str,
) -> Dataset {
    dataset(name, long_name, Role::Value, Form { axes, units: Some(units) })
}

/// A value that in two dimensions has the further axis that comes first in `axes`.
const fn vector(
    name: &'static str,
    units: &'static str,
    axes: &'static [&'static str],
    long_name: &'static str,
) -> Dataset {
    let (_, rest) = axes.split_at(1);
    Dataset { line: Form { axes: rest, units: Some(units) }, ..value(name, units, axes, long_name) }
}

pub(super) const fn coordinate(
    name: &'static str,
    units: &'static str,
    axes: &'static [&'static str],
    long_name: &'static str,
) -> Dataset {
    dataset(name, long_name, Role::Coordinate, Form { axes, units: Some(units) })
}

/// An axis; the axes of its form stay empty, since it runs along itself.
const fn axis(name: &'static str, units: &'static str, long_name: &'static str) -> Dataset {
    dataset(name, long_name, Role::Axis, Form { axes: &[], units: Some(units) })
}

pub(super) const fn count(name: &'static str, long_name: &'static str) -> Dataset {
    Dataset { kind: Kind::Integer, ..axis(name, NUMBER, long_name) }
}

/// A whole number that stands for a word, see [`Dataset::flags`].
pub(super) const fn flag(
    name: &'static str,
    axes: &'static [&'static str],
    long_name: &'static str,
) -> Dataset {
    Dataset { kind: Kind::Integer, ..value(name, NUMBER, axes, long_name) }
}

const fn text(name: &'static str, long_name: &'static str) -> Dataset {
    Dataset { kind: Kind::Text, ..dataset(name, long_name, Role::Value, Form { axes: &[], units: None }) }
}
