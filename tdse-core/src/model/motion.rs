//! A free electron in the field: A, its integral and E at any time.

use crate::field::Field;
use crate::quantities::samples;

/// ∫A dt over the whole field in small steps, so that a classical path costs a look into a table.
#[derive(Clone, Debug)]
pub struct Motion {
    field: Field,
    start: f64,
    step: f64,
    /// α = ∫A dt from the start to every sample, bohr.
    integral: Vec<[f64; 2]>,
}

impl Motion {
    /// Table over the whole of `field`, a hundred and twenty-eight samples in its shortest period.
    pub fn new(field: &Field) -> Self {
        let (start, end) = field.interval();
        let count = 2 * samples(field, end - start);
        let step = (end - start) / count as f64;
        let mut integral = Vec::with_capacity(count + 1);
        let mut sum = [0.0; 2];
        integral.push(sum);
        for i in 0..count {
            let ([x, y], _) = field.potential_integrals(start + i as f64 * step, step);
            sum = [sum[0] + x, sum[1] + y];
            integral.push(sum);
        }
        Self { field: field.clone(), start, step, integral }
    }

    /// Times of the table, a.u.
    pub fn times(&self) -> Vec<f64> {
        (0..self.integral.len()).map(|i| self.time(i)).collect()
    }

    /// The field.
    pub fn field(&self) -> &Field {
        &self.field
    }

    /// α(t) = ∫A dt from the field's start, bohr.
    pub fn integral(&self, t: f64) -> [f64; 2] {
        let i = ((t - self.start) / self.step).clamp(0.0, (self.integral.len() - 1) as f64) as usize;
        let from = self.time(i);
        let ([x, y], _) = self.field.potential_integrals(from, t - from);
        [self.integral[i][0] + x, self.integral[i][1] + y]
    }

    pub(super) fn time(&self, i: usize) -> f64 {
        self.start + i as f64 * self.step
    }

    /// α at the samples.
    pub(super) fn samples(&self) -> &[[f64; 2]] {
        &self.integral
    }

    /// First sample behind `t`.
    pub(super) fn after(&self, t: f64) -> usize {
        ((t - self.start) / self.step).floor().max(-1.0) as usize + 1
    }
}
