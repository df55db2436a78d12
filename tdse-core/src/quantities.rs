//! Derived quantities of a pulse and an atom: what a theorist computes on the back of an envelope before a run.

use num_complex::Complex;

use crate::field::{Field, Pulse};
use crate::grid::{Transform, good_length};

/// Keldysh parameter √(Ip/2Up) (Keldysh, Sov. Phys. JETP 20, 1307 (1965)).
pub fn keldysh_parameter(ionization_energy: f64, ponderomotive_energy: f64) -> f64 {
    (ionization_energy / (2.0 * ponderomotive_energy)).sqrt()
}

/// Field at which the barrier of a Coulomb potential -Z/r is pulled down to -Ip, Ip²/(4Z), a.u.
/// (Augst et al., Phys. Rev. Lett. 63, 2212 (1989), eq. 2).
pub fn barrier_suppression_field(ionization_energy: f64, charge: f64) -> f64 {
    ionization_energy * ionization_energy / (4.0 * charge)
}

/// Photons of `photon` that ionize without field, hartree both.
pub fn photons_to_ionize(ionization_energy: f64, photon: f64) -> f64 {
    (ionization_energy / photon).ceil()
}

/// Classical cutoff Ip + 3.17 Up, hartree (Krause, Schafer, Kulander, Phys. Rev. Lett. 68, 3535 (1992)); 3.173136… is the
/// maximum of the return energy.
pub fn classical_cutoff(ionization_energy: f64, ponderomotive_energy: f64) -> f64 {
    ionization_energy + 3.173_136_566_678_666_6 * ponderomotive_energy
}

/// Shape of a field as it is, carrier and all.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Shape {
    /// Mean angular frequency of the power spectrum, hartree.
    pub centroid: f64,
    /// Largest |E|, a.u.
    pub peak: f64,
    /// Time of the largest |E|, a.u.
    pub peak_time: f64,
    /// Full width at half maximum of |E|² without its carrier (squared modulus of the analytic signal), a.u. of time.
    pub duration: f64,
    /// Largest |A|, a.u.
    pub peak_potential: f64,
}

/// Shape of one pulse.
pub fn pulse_shape(pulse: &Pulse) -> Shape {
    field_shape(&Field { pulses: vec![*pulse], sampled: None })
}

/// Shape of a whole field; zeros for none.
pub fn field_shape(field: &Field) -> Shape {
    let (start, end) = field.interval();
    if end <= start {
        return Shape { centroid: 0.0, peak: 0.0, peak_time: 0.0, duration: 0.0, peak_potential: 0.0 };
    }
    // Half of the transform's period stays empty, so that the analytic signal does not meet itself.
    let samples = samples(field, end - start);
    let step = (end - start) / samples as f64;
    let points: Vec<([f64; 2], [f64; 2])> =
        (0..=samples).map(|i| field.potential_and_field(start + i as f64 * step)).collect();
    let size = |v: [f64; 2]| v[0].hypot(v[1]);
    let (peak_time, peak) = largest(&points.iter().map(|p| size(p.1)).collect::<Vec<_>>(), step);
    let (_, peak_potential) = largest(&points.iter().map(|p| size(p.0)).collect::<Vec<_>>(), step);
    let mut power = vec![0.0; samples + 1];
    let (mut weight, mut first) = (0.0, 0.0);
    for axis in 0..2 {
        let signal: Vec<f64> = points.iter().map(|p| p.1[axis]).collect();
        let (analytic, moments) = analytic_signal(&signal, step);
        for (p, a) in power.iter_mut().zip(&analytic) {
            *p += a.norm_sqr();
        }
        weight += moments[0];
        first += moments[1];
    }
    Shape {
        centroid: first / weight,
        peak,
        peak_time: start + peak_time,
        duration: width(&power, step),
        peak_potential,
    }
}

/// Enough samples for 64 per shortest period, and a thousand at least.
pub(crate) fn samples(field: &Field, length: f64) -> usize {
    let fastest = field
        .pulses
        .iter()
        .map(|p| p.frequency + p.chirp.abs() * p.envelope.half_length())
        .fold(0.0, f64::max);
    ((64.0 * fastest * length / (2.0 * std::f64::consts::PI)) as usize).clamp(1024, 1 << 20)
}

/// Position and value of the largest sample, improved by the parabola through it and its neighbours.
fn largest(values: &[f64], step: f64) -> (f64, f64) {
    let i = (0..values.len()).max_by(|&i, &j| values[i].total_cmp(&values[j])).unwrap_or(0);
    if i == 0 || i + 1 == values.len() {
        return (i as f64 * step, values[i]);
    }
    let (before, here, after) = (values[i - 1], values[i], values[i + 1]);
    let curvature = before - 2.0 * here + after;
    let shift = if curvature < 0.0 { 0.5 * (before - after) / curvature } else { 0.0 };
    ((i as f64 + shift) * step, here - 0.25 * (before - after) * shift)
}

/// Signal with its negative frequencies removed and the rest doubled, and ∫|E(ω)|², ∫ω|E(ω)|² over ω > 0.
fn analytic_signal(signal: &[f64], step: f64) -> (Vec<Complex<f64>>, [f64; 2]) {
    let length = good_length(4 * signal.len());
    let transform = Transform::new(length);
    let mut scratch = transform.make_scratch();
    let mut work: Vec<Complex<f64>> = signal.iter().map(|&s| Complex::new(s, 0.0)).collect();
    work.resize(length, Complex::default());
    transform.forward(&mut work, &mut scratch);
    let spacing = 2.0 * std::f64::consts::PI / (length as f64 * step);
    let mut moments = [0.0; 2];
    for (m, w) in work.iter_mut().enumerate() {
        if m == 0 || m > length / 2 {
            *w = Complex::default();
        } else {
            let power = w.norm_sqr();
            moments[0] += power;
            moments[1] += power * spacing * m as f64;
            *w *= 2.0 / length as f64;
        }
    }
    transform.inverse(&mut work, &mut scratch);
    work.truncate(signal.len());
    (work, moments)
}

/// Distance between the outermost crossings of half the maximum.
fn width(power: &[f64], step: f64) -> f64 {
    let half = 0.5 * power.iter().copied().fold(0.0, f64::max);
    let crossing = |i: usize, j: usize| (half - power[i]) / (power[j] - power[i]);
    let first = power.iter().position(|&p| p >= half).unwrap_or(0);
    let last = power.iter().rposition(|&p| p >= half).unwrap_or(0);
    let left = if first > 0 { first as f64 - 1.0 + crossing(first - 1, first) } else { 0.0 };
    let right =
        if last + 1 < power.len() { last as f64 + 1.0 - crossing(last + 1, last) } else { last as f64 };
    (right - left) * step
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::field::Envelope;
    use crate::units::{self, Quantity};

    fn pulse(cycles: f64) -> Pulse {
        let frequency = units::angular_frequency(800.0 * Quantity::Length.unit("nm").unwrap().factor);
        let duration = cycles * 2.0 * std::f64::consts::PI / frequency;
        Pulse {
            frequency,
            peak_field: 0.05,
            envelope: Envelope::Sin2 { duration },
            phase: 0.0,
            centre: 0.0,
            chirp: 0.0,
            ellipticity: 0.0,
            angle: 0.0,
        }
    }

    /// Power centroids stated in the project's design for 2, 3, 4 and 5 cycles.
    #[test]
    fn centroids_of_few_cycle_pulses() {
        for (cycles, expected) in [(2.0, 693.0), (3.0, 747.0), (4.0, 769.0), (5.0, 780.0)] {
            let centroid = pulse_shape(&pulse(cycles)).centroid;
            let wavelength =
                units::ENERGY_TIMES_WAVELENGTH / centroid / Quantity::Length.unit("nm").unwrap().factor;
            assert!(
                (wavelength - expected).abs() < 0.6,
                "{cycles} cycles: {wavelength} nm against {expected}"
            );
        }
    }

    /// Closed form: the intensity FWHM of a sin² field envelope is (1 - (2/π) asin 2^(-1/4)) T = 0.364 T; a long pulse
    /// has its envelope's width and peak.
    #[test]
    fn long_pulses_have_the_width_of_their_envelope() {
        let long = pulse(60.0);
        let shape = pulse_shape(&long);
        let expected = 0.364_056_663_773_876_7 * 2.0 * long.envelope.half_length();
        assert!((shape.duration / expected - 1.0).abs() < 1e-3, "{} against {expected}", shape.duration);
        assert!((shape.peak / long.peak_field - 1.0).abs() < 1e-3, "{}", shape.peak);
        let potential = shape.peak_potential * long.frequency / long.peak_field;
        assert!((potential - 1.0).abs() < 1e-3, "{potential}");
    }

    /// Gaussian: the FWHM asked for is the FWHM of the intensity.
    #[test]
    fn gaussian_has_the_width_asked_for() {
        let mut long = pulse(1.0);
        long.envelope = Envelope::Gaussian { fwhm: 20_000.0 };
        assert!((pulse_shape(&long).duration / 20_000.0 - 1.0).abs() < 1e-4);
    }
}
