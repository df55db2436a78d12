//! `atom`.

use std::borrow::Cow;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::{Deserialize, Serialize};
use serde_json::json;
use tdse_core::elements::ELEMENTS;

use super::{Angle, Energy, Length};

/// A model atom with one active electron.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Atom {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Dimensions of space.
    #[serde(default = "one_dimension")]
    #[schemars(range(min = 1, max = 2))]
    pub dimensions: u32,
    /// Potential energy of the electron.
    #[schemars(example = json!({ "kind": "soft_coulomb", "charge": 1, "softening": "1.414 bohr" }))]
    pub potential: Potential,
    /// Energy that frees the electron from `state`; tunes the softening (of a superposition: from its lowest member).
    #[schemars(example = "15.76 eV", extend("x-exclusive-minimum" = "0 eV", "x-maximum" = "1 keV"))]
    pub ionization_energy: Option<Energy>,
    /// Element whose first ionization energy (NIST) tunes the softening.
    #[schemars(example = &"Ar")]
    pub element: Option<ElementSymbol>,
    /// State before the field; states are numbered from 0 by rising energy.
    #[serde(default)]
    pub state: State,
}

fn one_dimension() -> u32 {
    1
}

fn unity() -> f64 {
    1.0
}

/// Symbol of an element in [`ELEMENTS`].
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(transparent)]
pub struct ElementSymbol(pub String);

impl JsonSchema for ElementSymbol {
    fn inline_schema() -> bool {
        true
    }

    fn schema_name() -> Cow<'static, str> {
        "ElementSymbol".into()
    }

    fn json_schema(_: &mut SchemaGenerator) -> Schema {
        json_schema!({ "type": "string", "enum": ELEMENTS.map(|element| element.symbol) })
    }
}

/// Potential energy of the electron at distance r.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Potential {
    /// -charge / sqrt(r^2 + softening^2).
    SoftCoulomb {
        /// Anything worth remembering.
        note: Option<String>,
        /// Charge of the ion.
        #[serde(default = "unity")]
        #[schemars(extend("exclusiveMinimum" = 0, "maximum" = 100))]
        charge: f64,
        /// Softening; left out where the atom's `ionization_energy` or `element` tunes it.
        #[schemars(example = "1.414 bohr", extend("x-minimum" = "0.001 bohr", "x-maximum" = "1000 bohr"))]
        softening: Option<Length>,
    },
    /// -charge exp(-r / screening_length) / sqrt(r^2 + softening^2).
    Screened {
        /// Anything worth remembering.
        note: Option<String>,
        /// Charge at short distance.
        #[serde(default = "unity")]
        #[schemars(extend("exclusiveMinimum" = 0, "maximum" = 100))]
        charge: f64,
        /// Softening; left out where the atom's `ionization_energy` or `element` tunes it.
        #[schemars(example = "1.414 bohr", extend("x-minimum" = "0.001 bohr", "x-maximum" = "1000 bohr"))]
        softening: Option<Length>,
        /// Distance over which the charge is screened.
        #[schemars(example = "10 bohr", extend("x-exclusive-minimum" = "0 bohr"))]
        screening_length: Length,
    },
    /// -lambda (lambda + 1) / (2 width^2) sech^2(r / width), atomic units.
    PoschlTeller {
        /// Anything worth remembering.
        note: Option<String>,
        /// Depth parameter.
        #[schemars(example = 1.0, extend("exclusiveMinimum" = 0, "maximum" = 1000))]
        lambda: f64,
        /// Width.
        #[schemars(example = "1 bohr", extend("x-exclusive-minimum" = "0 bohr"))]
        width: Length,
    },
    /// -depth exp(-r^2 / (2 width^2)).
    GaussianWell {
        /// Anything worth remembering.
        note: Option<String>,
        /// Depth.
        #[schemars(example = "20 eV", extend("x-exclusive-minimum" = "0 eV"))]
        depth: Energy,
        /// Width.
        #[schemars(example = "2 bohr", extend("x-exclusive-minimum" = "0 bohr"))]
        width: Length,
    },
    /// frequency^2 r^2 / 2, atomic units: nothing ionizes; for checks.
    Harmonic {
        /// Anything worth remembering.
        note: Option<String>,
        /// Energy of one quantum.
        #[schemars(example = "0.5 au", extend("x-exclusive-minimum" = "0 eV"))]
        frequency: Energy,
    },
    /// Values from a CSV file with the header `position [bohr],potential [eV]` (any units), joined by a cubic spline; in two dimensions
    /// the position is the distance from the centre, from 0 to the corners of the box.
    Sampled {
        /// Anything worth remembering.
        note: Option<String>,
        /// Path, relative to the configuration's folder.
        #[schemars(example = "potential.csv")]
        file: String,
        /// SHA-256 that the contents must have.
        sha256: Option<String>,
    },
}

/// State before the field.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum State {
    /// One bound state.
    Single {
        /// Anything worth remembering.
        note: Option<String>,
        /// Number of the state, from 0 by rising energy; in two dimensions among those of its symmetry.
        #[serde(default)]
        #[schemars(range(max = 1000))]
        number: u32,
        /// Angular momentum about the centre, two dimensions only; 0 where no symmetry is given.
        #[schemars(range(min = -50, max = 50), example = 1)]
        angular_momentum: Option<i32>,
        /// Parity along x, two dimensions only; instead of the angular momentum.
        #[schemars(example = &"odd")]
        parity_x: Option<Parity>,
        /// Parity along y, two dimensions only; instead of the angular momentum.
        #[schemars(example = &"even")]
        parity_y: Option<Parity>,
    },
    /// Coherent sum of bound states.
    Superposition {
        /// Anything worth remembering.
        note: Option<String>,
        /// The members, each state at most once.
        #[schemars(length(min = 1), example = json!([{ "number": 0 }, { "number": 1 }]))]
        terms: Vec<Term>,
    },
}

impl Default for State {
    fn default() -> Self {
        Self::Single { note: None, number: 0, angular_momentum: None, parity_x: None, parity_y: None }
    }
}

/// Behaviour under a mirror.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Parity {
    /// The same on both sides.
    Even,
    /// Of opposite sign.
    Odd,
}

/// One member of a superposition.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Term {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Number of the state, from 0 by rising energy; in two dimensions among those of its symmetry.
    #[schemars(range(max = 1000), example = 0)]
    pub number: u32,
    /// Angular momentum about the centre, two dimensions only; 0 where no symmetry is given.
    #[schemars(range(min = -50, max = 50), example = 1)]
    pub angular_momentum: Option<i32>,
    /// Parity along x, two dimensions only; instead of the angular momentum.
    #[schemars(example = &"odd")]
    pub parity_x: Option<Parity>,
    /// Parity along y, two dimensions only; instead of the angular momentum.
    #[schemars(example = &"even")]
    pub parity_y: Option<Parity>,
    /// Probability of the state; the sum over all members is scaled to 1.
    #[serde(default = "unity")]
    #[schemars(extend("minimum" = 0, "maximum" = 1e6))]
    pub weight: f64,
    /// Phase of the state when the run starts.
    #[serde(default = "super::field::zero_angle")]
    pub phase: Angle,
}
