//! Line or plane: one match per call.

use num_complex::Complex;

use super::{Drive, Line, LineWorkspace, Moments, Plane, PlaneWorkspace};
use crate::potential::PotentialOnGrid;
use crate::problem::{Mirror, Numerics};

type C = Complex<f64>;

/// The step in one or two dimensions.
#[derive(Clone, Debug)]
pub enum Step {
    /// One dimension.
    Line(Box<Line>),
    /// Two dimensions.
    Plane(Box<Plane>),
}

/// Scratch of a [`Step`]; holds nothing between calls.
#[derive(Clone, Debug)]
pub struct StepWorkspace {
    kernel: KernelWorkspace,
    /// A wave function of the line; the plane closes into its own scratch.
    psi: Vec<C>,
}

#[derive(Clone, Debug)]
enum KernelWorkspace {
    Line(Box<LineWorkspace>),
    Plane(Box<PlaneWorkspace>),
}

impl StepWorkspace {
    /// A wave function and the scratch of a line.
    pub(crate) fn of_line(&mut self) -> Option<(&mut [C], &mut LineWorkspace)> {
        match &mut self.kernel {
            KernelWorkspace::Line(work) => Some((&mut self.psi, work)),
            KernelWorkspace::Plane(_) => None,
        }
    }

    /// The scratch of a plane.
    pub(crate) fn of_plane(&mut self) -> Option<&mut PlaneWorkspace> {
        match &mut self.kernel {
            KernelWorkspace::Line(_) => None,
            KernelWorkspace::Plane(work) => Some(work),
        }
    }
}

impl Step {
    /// The step on the grid of `numerics`; under a `mirror` on half the plane.
    ///
    /// # Panics
    /// As [`Line::new`] and [`Plane::new`].
    pub fn new(potential: &PotentialOnGrid, numerics: &Numerics, mirror: Option<Mirror>) -> Self {
        match numerics.grid.y {
            None => Self::Line(Box::new(Line::new(potential, numerics))),
            Some(_) => Self::Plane(Box::new(Plane::new(potential, numerics, mirror))),
        }
    }

    /// Workspace for `threads` threads; a line uses one.
    pub fn make_workspace(&self, threads: usize) -> StepWorkspace {
        match self {
            Self::Line(line) => StepWorkspace {
                psi: vec![C::default(); line.len()],
                kernel: KernelWorkspace::Line(Box::new(line.make_workspace())),
            },
            Self::Plane(plane) => StepWorkspace {
                psi: Vec::new(),
                kernel: KernelWorkspace::Plane(Box::new(plane.make_workspace(threads))),
            },
        }
    }

    /// Largest electric field for which the gradient correction is evaluated to rounding, a.u.
    pub fn largest_field(&self) -> f64 {
        match self {
            Self::Line(line) => line.largest_field(),
            Self::Plane(plane) => plane.largest_field(),
        }
    }

    /// The mirror under which half the plane is kept.
    pub fn mirror(&self) -> Option<Mirror> {
        match self {
            Self::Line(_) => None,
            Self::Plane(plane) => plane.mirror(),
        }
    }

    /// Advances the open `psi` by one step; returns the moments at its start.
    pub fn advance(&self, psi: &mut [C], drive: &Drive, work: &mut StepWorkspace) -> Moments {
        match (self, &mut work.kernel) {
            (Self::Line(line), KernelWorkspace::Line(work)) => line.step(psi, drive, work),
            (Self::Plane(plane), KernelWorkspace::Plane(work)) => plane.step(psi, drive, work),
            _ => foreign_workspace(),
        }
    }

    /// Moments of `psi` without a step.
    pub fn moments_of(&self, psi: &[C], work: &mut StepWorkspace) -> Moments {
        match (self, &mut work.kernel) {
            (Self::Line(line), KernelWorkspace::Line(work)) => line.moments_of(psi, work),
            (Self::Plane(plane), KernelWorkspace::Plane(work)) => plane.moments_of(psi, work),
            _ => foreign_workspace(),
        }
    }

    /// The part that is kept of ψ on the whole grid.
    pub fn folded(&self, psi: Vec<C>) -> Vec<C> {
        match self {
            Self::Line(_) => psi,
            Self::Plane(plane) => plane.folded(&psi),
        }
    }

    /// The open form of the part of ψ that is kept.
    pub fn opened(&self, kept: &[C], field: [f64; 2]) -> Vec<C> {
        let mut open = kept.to_vec();
        match self {
            Self::Line(line) => line.open(&mut open, field[0]),
            Self::Plane(plane) => plane.open(&mut open, field),
        }
        open
    }

    /// ψ in length gauge of the part kept, from the open form at a time of this `field` and vector `potential`.
    pub fn closed<'w>(
        &self,
        psi: &[C],
        field: [f64; 2],
        potential: [f64; 2],
        work: &'w mut StepWorkspace,
    ) -> &'w [C] {
        match (self, &mut work.kernel) {
            (Self::Line(line), KernelWorkspace::Line(scratch)) => {
                work.psi.copy_from_slice(psi);
                line.close(&mut work.psi, field[0], potential[0], scratch);
                &work.psi
            }
            (Self::Plane(plane), KernelWorkspace::Plane(scratch)) => {
                plane.closed(psi, field, potential, scratch)
            }
            _ => foreign_workspace(),
        }
    }

    /// ψ on the whole grid from the part kept.
    pub fn unfold(&self, kept: &[C], out: &mut [C]) {
        match self {
            Self::Line(_) => out.copy_from_slice(kept),
            Self::Plane(plane) => plane.unfold(kept, out),
        }
    }

    /// Row `j` of the whole grid from the part kept.
    pub fn row(&self, kept: &[C], j: usize, out: &mut [C]) {
        match self {
            Self::Line(_) => out.copy_from_slice(kept),
            Self::Plane(plane) => plane.row(kept, j, out),
        }
    }

    /// ∫ f* ψ without the volume element, of f on the whole grid and the part of ψ kept.
    pub fn overlap(&self, f: impl Fn(usize) -> C, kept: &[C]) -> C {
        match self {
            Self::Line(_) => kept.iter().enumerate().map(|(i, p)| f(i).conj() * p).sum(),
            Self::Plane(plane) => plane.overlap(f, kept),
        }
    }
}

#[cold]
fn foreign_workspace() -> ! {
    panic!("a workspace made by the same step")
}
