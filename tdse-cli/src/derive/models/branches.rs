//! Short and long paths of the full result over the intensity axis of a scan, beside the quantum orbits, from the arrays of the
//! gathered result alone.

use ndarray::{ArrayD, IxDyn};
use num_complex::Complex;
use tdse_core::model::branches::IntensityWindow;

use crate::store::{Contents, ScanDimension};

const ORBITS: &str = "models/quantum_orbits/orbits";
/// Part of the window's width by which a centre may stand too near an end.
const ROUNDING: f64 = 1e-9;
/// The group that is written.
pub const BRANCHES: &str = "models/quantum_orbits/branches";

/// How the phase is looked at.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Look {
    /// Dimension of the scan that is the intensity.
    pub dimension: usize,
    /// First intensity, W/cm².
    pub first: f64,
    /// Step between intensities, W/cm².
    pub step: f64,
    /// Full width at half maximum of the window, W/cm².
    pub width: f64,
}

impl Look {
    fn window(&self, place: usize) -> IntensityWindow {
        let centre = self.first + place as f64 * self.step;
        IntensityWindow { first: self.first, step: self.step, centre, width: self.width }
    }
}

/// One harmonic over the intensity: amplitudes of the full result, and dipole phases of both orbits.
struct Harmonic {
    amplitudes: Vec<Complex<f64>>,
    phases: [Vec<f64>; 2],
}

/// What is found at one intensity, short and long; NaN where nothing is.
#[derive(Clone, Copy)]
struct Found {
    slopes: [f64; 2],
    orbits: [f64; 2],
    parts: [Complex<f64>; 2],
}

const NOTHING: Found = Found {
    slopes: [f64::NAN; 2],
    orbits: [f64::NAN; 2],
    parts: [Complex { re: f64::NAN, im: f64::NAN }; 2],
};

impl Harmonic {
    /// Slopes of both orbits at an intensity, downwards, by the neighbours on both sides.
    fn orbits(&self, place: usize, step: f64) -> Option<[f64; 2]> {
        let slope =
            |phases: &[f64]| Some((phases[place.checked_sub(1)?] - phases.get(place + 1)?) / (2.0 * step));
        let [short, long] =
            self.phases.each_ref().map(|phases| slope(phases).filter(|slope| slope.is_finite()));
        Some([short?, long?])
    }

    /// The strongest slope on either side of the middle between the orbits, no further from its orbit than the window tells slopes
    /// apart; where it does not tell the orbits apart, the strongest for both.
    fn found(&self, look: &Look, place: usize) -> Found {
        let Some(orbits) = self.orbits(place, look.step) else { return NOTHING };
        let (window, [short, long]) = (look.window(place), orbits);
        let (reach, middle) = (window.resolution(), f64::midpoint(short, long));
        let last = look.window(self.amplitudes.len() - 1).centre;
        let room = (window.centre - look.first).min(last - window.centre);
        if room < look.width * (1.0 - ROUNDING) || long + reach > window.largest_slope() {
            return Found { orbits, ..NOTHING };
        }
        let peak = |range| window.peak(&self.amplitudes, range).unwrap_or(f64::NAN);
        if long - short < reach {
            return Found { slopes: [peak(middle - reach..middle + reach); 2], orbits, ..NOTHING };
        }
        let sides = [short - reach..middle, middle..long + reach];
        let parts = sides.clone().map(|side| window.part(&self.amplitudes, side).amplitude);
        Found { slopes: sides.map(peak), orbits, parts }
    }
}

/// Puts the group in; nothing where the points hold no orbits.
pub fn put(contents: &mut Contents, look: &Look) {
    let flat = |name: &str| contents.real(ORBITS, name).and_then(|array| array.as_slice());
    let (Some(phases), Some(sizes), Some(turns)) =
        (flat("dipole_phase"), flat("harmonic_amplitude"), flat("harmonic_phase"))
    else {
        return;
    };
    let [orbit, order] = ["orbit", "order"].map(|name| contents.get(ORBITS, name).expect("an axis").clone());
    let mut shape: Vec<usize> = contents.scan().iter().map(ScanDimension::length).collect();
    let (orders, intensities) = (order.shape()[0], shape[look.dimension]);
    let points: usize = shape.iter().product();
    // Points of neighbouring intensities are so far apart.
    let stride: usize = shape[look.dimension + 1..].iter().product();
    let mut found = vec![NOTHING; points * orders];
    for first in (0..points).filter(|point| (point / stride).is_multiple_of(intensities)) {
        let lane: Vec<usize> = (0..intensities).map(|n| first + n * stride).collect();
        // Odd orders alone: symmetric atoms in long pulses emit no others.
        for q in (0..orders).step_by(2) {
            let phases =
                [0, 1].map(|o| lane.iter().map(|point| phases[(2 * point + o) * orders + q]).collect());
            let amplitude =
                |point: &usize| Complex::from_polar(sizes[point * orders + q], turns[point * orders + q]);
            let harmonic = Harmonic { amplitudes: lane.iter().map(amplitude).collect(), phases };
            for (place, point) in lane.iter().enumerate() {
                found[point * orders + q] = harmonic.found(look, place);
            }
        }
    }
    let by_orbit = |value: &dyn Fn(&Found, usize) -> f64| -> Vec<f64> {
        let of_point = |point: &[Found]| -> Vec<f64> {
            (0..2).flat_map(|o| point.iter().map(move |f| value(f, o))).collect()
        };
        found.chunks(orders).flat_map(of_point).collect()
    };
    let slopes = by_orbit(&|f, o| f.slopes[o]);
    let expected = by_orbit(&|f, o| f.orbits[o]);
    let (sizes, turns) = (by_orbit(&|f, o| f.parts[o].norm()), by_orbit(&|f, o| f.parts[o].arg()));
    let medians: Vec<f64> =
        found.chunks(orders).flat_map(|point| [0, 1].map(|o| median_distance(point, o))).collect();
    contents.insert(BRANCHES, "orbit", orbit);
    contents.insert(BRANCHES, "order", order);
    shape.push(2);
    contents.insert(BRANCHES, "median_difference", shaped(&shape, medians));
    shape.push(orders);
    for (name, values) in [
        ("phase_slope", slopes),
        ("orbit_phase_slope", expected),
        ("branch_amplitude", sizes),
        ("branch_phase", turns),
    ] {
        contents.insert(BRANCHES, name, shaped(&shape, values));
    }
    let window = look.window(0);
    let text = format!(
        "gaussian, {:.4e} W/cm**2 full width at half maximum; slopes closer than {:.3e} rad*cm**2/W are not told apart, nor those \
         above {:.3e}",
        look.width,
        window.resolution(),
        window.largest_slope()
    );
    contents.remark(BRANCHES, "window", &text);
}

fn shaped(shape: &[usize], values: Vec<f64>) -> ArrayD<f64> {
    ArrayD::from_shape_vec(IxDyn(shape), values).expect("a value for every point")
}

/// Over the harmonics where short and long are told apart.
fn median_distance(point: &[Found], orbit: usize) -> f64 {
    let apart = point.iter().filter(|found| found.parts[orbit].re.is_finite());
    let distances = apart.map(|found| (found.slopes[orbit] - found.orbits[orbit]).abs());
    let mut all: Vec<f64> = distances.filter(|distance| distance.is_finite()).collect();
    all.sort_by(f64::total_cmp);
    all.get(all.len() / 2).copied().unwrap_or(f64::NAN)
}
