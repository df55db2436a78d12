//! What is asked and how it is computed, as plain data: [`Problem`], [`Numerics`], [`Record`].

use crate::field::Field;
use crate::grid::Grid;
use crate::potential::Potential;

/// One model atom in one field.
#[derive(Clone, Debug, PartialEq)]
pub struct Problem {
    /// Potential energy of the active electron.
    pub potential: Potential,
    /// State before the field.
    pub initial: InitialState,
    /// The laser field.
    pub field: Field,
}

/// State of the electron before the field, in terms of bound states counted from 0 by rising energy; in two dimensions in
/// the order of the atom's own list.
#[derive(Clone, Debug, PartialEq)]
pub enum InitialState {
    /// One bound state.
    Single(usize),
    /// Coherent superposition of bound states; the weights are probabilities and are normalised to sum 1.
    Superposition(Vec<Term>),
}

impl InitialState {
    /// The lowest state number that takes part.
    pub fn lowest(&self) -> usize {
        match self {
            Self::Single(number) => *number,
            Self::Superposition(terms) => terms.iter().map(|t| t.number).min().unwrap_or(0),
        }
    }

    /// The state numbers that take part.
    pub fn numbers(&self) -> Vec<usize> {
        match self {
            Self::Single(number) => vec![*number],
            Self::Superposition(terms) => terms.iter().map(|t| t.number).collect(),
        }
    }

    /// The highest state number that takes part.
    pub fn highest(&self) -> usize {
        match self {
            Self::Single(number) => *number,
            Self::Superposition(terms) => terms.iter().map(|t| t.number).max().unwrap_or(0),
        }
    }
}

/// One member of a superposition: √weight e^{i phase} |number⟩, with ⟨x|number⟩ > 0 for x → +∞.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Term {
    /// Number of the bound state.
    pub number: usize,
    /// Probability, before normalisation.
    pub weight: f64,
    /// Phase at the start of the run, rad.
    pub phase: f64,
}

/// Behaviour under a mirror.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Parity {
    /// ψ(-x) = ψ(x).
    Even,
    /// ψ(-x) = -ψ(x).
    Odd,
}

impl Parity {
    /// +1 or -1.
    pub fn sign(self) -> f64 {
        match self {
            Self::Even => 1.0,
            Self::Odd => -1.0,
        }
    }
}

/// A mirror of the plane that a run keeps, with the parity of its wave function: half the plane is then computed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mirror {
    /// x → -x: the field is along y.
    X(Parity),
    /// y → -y: the field is along x.
    Y(Parity),
}

/// Symmetry of a bound state in two dimensions.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Symmetry {
    /// ψ = R(r) e^{imφ}; the number counts the nodes of R.
    Angular(i32),
    /// Parity in x and in y; the number counts by rising energy within the symmetry.
    Mirror([Parity; 2]),
}

/// A bound state in two dimensions.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct PlaneLabel {
    /// Its symmetry.
    pub symmetry: Symmetry,
    /// Its number within the symmetry, from 0.
    pub number: usize,
}

/// Splitting of a time step.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Scheme {
    /// Fourth order with gradient-corrected potential (Chin, Chen, J. Chem. Phys. 117, 1409 (2002), scheme 4A).
    FourthOrder,
    /// Second order (Strang, SIAM J. Numer. Anal. 5, 506 (1968)).
    Strang,
}

/// Gauge in which the equation is solved.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Gauge {
    /// H = p²/2 + V + r·E.
    Length,
    /// H = (p + A)²/2 + V.
    Velocity,
}

/// What happens at the edges of the box.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Absorber {
    /// Nothing: the box is periodic, and nothing may reach its edge.
    None,
    /// Smooth complex absorber of this width at each side, bohr.
    Smooth {
        /// Width per side, bohr.
        width: f64,
    },
    /// The same in a ring, two dimensions only: it begins at one distance from the centre in all directions.
    Round {
        /// Width, bohr.
        width: f64,
    },
}

impl Absorber {
    /// Width per side, bohr.
    pub fn width(&self) -> f64 {
        match self {
            Self::None => 0.0,
            Self::Smooth { width } | Self::Round { width } => *width,
        }
    }
}

/// Way to the electron spectrum.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ElectronMethod {
    /// Projection on scattering states at the end, in a box that nothing leaves.
    ScatteringStates = 0,
    /// What the absorber takes, collected coherently, and the rest on scattering states.
    OutgoingAmplitude = 1,
}

impl ElectronMethod {
    /// The word for it in configurations and files.
    pub fn name(self) -> &'static str {
        match self {
            Self::ScatteringStates => "scattering_states",
            Self::OutgoingAmplitude => "outgoing_amplitude",
        }
    }
}

/// Every choice that fixes the bits of a run.
#[derive(Clone, Debug, PartialEq)]
pub struct Numerics {
    /// Grid in space.
    pub grid: Grid,
    /// Time step τ, a.u.
    pub time_step: f64,
    /// Splitting.
    pub scheme: Scheme,
    /// Gauge.
    pub gauge: Gauge,
    /// Edges.
    pub absorber: Absorber,
    /// Field-free time after the field, a.u.
    pub trailing_time: f64,
}

/// What is recorded beside field, acceleration and norm.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub struct Record {
    /// Number of bound states, from the lowest, whose populations are recorded in time.
    pub populations: usize,
}
