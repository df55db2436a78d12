//! A free electron's motion in the field, sample by sample.

use num_complex::Complex;

use crate::step::Drive;

/// Motion up to one sample, a.u.; A and its integral are counted from their last values, so that final momenta are
/// kinetic and displacements vanish at the end.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Motion {
    /// Time since the start.
    pub time: f64,
    /// A.
    pub potential: f64,
    /// α = ∫A dt: where the electron is, beside where it would be without field.
    pub displacement: f64,
    /// ∫A² dt since the start.
    pub square: f64,
}

impl Motion {
    /// Motion at every sample of a run, from its drives and A at every sample, both along x.
    pub fn samples(drives: &[Drive], potential: &[[f64; 2]], time_step: f64) -> Vec<Self> {
        let last = potential.last().map_or(0.0, |a| a[0]);
        let mut now = Self::default();
        let mut motion: Vec<Self> = Vec::with_capacity(drives.len());
        for (drive, a) in drives.iter().zip(potential) {
            motion.push(Self { potential: a[0] - last, ..now });
            let first = drive.potential_integral[0][0] + drive.potential_integral[1][0];
            let second = drive.square_integral[0] + drive.square_integral[1];
            now.time += time_step;
            now.displacement += first - last * time_step;
            now.square += second - 2.0 * last * first + last * last * time_step;
        }
        let end = motion.last().map_or(0.0, |m| m.displacement);
        for m in &mut motion {
            m.displacement -= end;
        }
        motion
    }

    /// e^{i(k²t + ∫A²)/2}.
    pub(super) fn phase(&self, k: f64) -> Complex<f64> {
        Complex::cis(0.5 * (k * k * self.time + self.square))
    }
}
