//! Pictures of a scan over one or two parameters.

use super::super::figure::Up;
use super::super::map::Shading;
use super::super::number::significant;
use super::super::parameter::{Axis, Values as Spread};
use super::super::scan::{self, NumberMap, NumberScan, SpectrumScan};
use super::{Drawn, MAP_DECADES, SPECTRUM, shared, slice, summary_numbers};
use crate::store::{Contents, ScanAxis, ScanDimension, Values};

/// Orders of magnitude above which a number is drawn logarithmically.
const WIDE: f64 = 100.0;

pub(super) fn pictures(contents: &Contents) -> Vec<Drawn> {
    let owned: Vec<Parameter> = contents.scan().iter().map(Parameter::of).collect();
    match &owned[..] {
        [one] => {
            let spectra = SPECTRA.iter().filter_map(|asked| spectrum(contents, one, asked));
            spectra.chain(curves(contents, one)).collect()
        }
        [first, second] => maps(contents, first, second),
        _ => Vec::new(),
    }
}

/// A scan axis with values that pictures can hold on to.
pub(super) struct Parameter {
    name: String,
    unit: String,
    numbers: Vec<f64>,
    words: Vec<String>,
}

impl Parameter {
    /// The first axis of a dimension stands for those that move with it.
    pub(super) fn of(dimension: &ScanDimension) -> Self {
        let ScanAxis { name, units, values, .. } = &dimension.axes[0];
        let (numbers, words) = match values {
            Values::Real(numbers) => (numbers.iter().copied().collect(), Vec::new()),
            Values::Integer(numbers) => (numbers.iter().map(|&n| n as f64).collect(), Vec::new()),
            Values::Text(words) => (Vec::new(), words.iter().cloned().collect()),
        };
        Self {
            name: name.clone(),
            unit: units.clone().unwrap_or_default().replace("**2", "²"),
            numbers,
            words,
        }
    }

    pub(super) fn axis(&self) -> Axis<'_> {
        let values = if self.words.is_empty() && self.is_geometric() {
            Spread::Log(&self.numbers)
        } else if self.words.is_empty() {
            Spread::Linear(&self.numbers)
        } else {
            Spread::Text(&self.words)
        };
        Axis { name: &self.name, unit: if self.unit == "1" { "" } else { &self.unit }, values }
    }

    /// Name and one value with its unit.
    pub(super) fn said(&self, place: usize) -> String {
        let value = self.numbers.get(place).map(|&number| significant(number, 4));
        let value = value.or_else(|| self.words.get(place).cloned()).unwrap_or_default();
        format!("{} {value} {}", self.name, self.axis().unit).trim_end().to_owned()
    }

    /// Whether equal ratios, rather than equal differences, lead from value to value.
    fn is_geometric(&self) -> bool {
        let n = self.numbers.len();
        if n < 3 || self.numbers.iter().any(|v| *v <= 0.0) {
            return false;
        }
        let ratio = (self.numbers[n - 1] / self.numbers[0]).powf(1.0 / (n - 1) as f64);
        let expected = |i: usize| self.numbers[0] * ratio.powi(i as i32);
        (ratio - 1.0).abs() > 1e-6
            && self.numbers.iter().enumerate().all(|(i, v)| (v / expected(i) - 1.0).abs() < 1e-6)
    }
}

/// A spectrum that is drawn as a map over energy and parameter.
struct Asked {
    group: &'static str,
    energy: &'static str,
    axis: &'static str,
    spectrum: &'static str,
    quantity: &'static str,
    caption: &'static str,
}

const SPECTRA: [Asked; 2] = [
    Asked {
        group: "harmonics",
        energy: "photon_energy",
        axis: "photon energy",
        spectrum: "spectrum",
        quantity: SPECTRUM,
        caption: "Harmonic spectra",
    },
    Asked {
        group: "photoelectrons",
        energy: "energy",
        axis: "kinetic energy",
        spectrum: "yield",
        quantity: "yield (1/eV)",
        caption: "Photoelectron spectra",
    },
];

fn spectrum(contents: &Contents, parameter: &Parameter, asked: &Asked) -> Option<Drawn> {
    let energies = slice(contents, asked.group, asked.energy);
    if energies.is_empty() {
        return None;
    }
    // Of two components the sum.
    let all = slice(contents, asked.group, asked.spectrum);
    let summed: Vec<f64> = match contents.real(asked.group, asked.spectrum)?.shape() {
        [_, components, length] => {
            all.chunks(components * length).flat_map(|point| sum(point, *length)).collect()
        }
        _ => all.to_vec(),
    };
    Some(Drawn {
        name: asked.group.into(),
        svg: scan::spectrum(&SpectrumScan {
            title: &contents.provenance.title,
            parameter: parameter.axis(),
            energy: Axis { name: asked.axis, unit: "eV", values: Spread::Linear(energies) },
            spectrum: &summed,
            quantity: asked.quantity,
            decades: 2.0 * MAP_DECADES,
        }),
        caption: format!("{} against {}.", asked.caption, parameter.name),
        alternative: format!(
            "Map of {} over energy and the scanned parameter.",
            asked.caption.to_lowercase()
        ),
    })
}

/// Sum of rows that lie behind one another.
fn sum(rows: &[f64], length: usize) -> Vec<f64> {
    (0..length).map(|i| rows.iter().skip(i).step_by(length).sum()).collect()
}

/// Every number of the summary that is not the same at all points.
fn numbers(contents: &Contents) -> impl Iterator<Item = (&'static str, String, &[f64])> {
    summary_numbers().filter_map(|(name, long_name, units)| {
        let values = slice(contents, "summary", name);
        let quantity = if units.is_empty() { long_name.into() } else { format!("{long_name} ({units})") };
        let there = values.iter().any(|v| v.is_finite());
        (there && shared(values).is_none()).then_some((name, quantity, values))
    })
}

/// Whether positive values spread over orders of magnitude.
fn is_wide(values: &[f64]) -> bool {
    let finite = || values.iter().copied().filter(|v| v.is_finite());
    let (least, most) = (finite().fold(f64::INFINITY, f64::min), finite().fold(0.0, f64::max));
    least > 0.0 && most / least > WIDE
}

fn curves(contents: &Contents, parameter: &Parameter) -> Vec<Drawn> {
    let law = slice(contents, "summary", "classical_cutoff");
    numbers(contents)
        .filter(|(name, ..)| *name != "classical_cutoff")
        .map(|(name, quantity, values)| {
            let both = [("measured", values), ("Ip + 3.17 Up", law)];
            let alone = [("", values)];
            let compared = name == "cutoff_energy" && !law.is_empty();
            let svg = scan::numbers(&NumberScan {
                title: &contents.provenance.title,
                parameter: parameter.axis(),
                series: if compared { &both } else { &alone },
                quantity: &quantity,
                up: if is_wide(values) { Up::Decades(16.0) } else { Up::Linear },
            });
            drawn(name, svg, &quantity, &parameter.name)
        })
        .collect()
}

fn maps(contents: &Contents, first: &Parameter, second: &Parameter) -> Vec<Drawn> {
    numbers(contents)
        .map(|(name, quantity, values)| {
            let svg = scan::number_map(&NumberMap {
                title: &contents.provenance.title,
                first: first.axis(),
                second: second.axis(),
                numbers: values,
                quantity: &quantity,
                shading: if is_wide(values) { Shading::Decades(16.0) } else { Shading::Linear },
            });
            drawn(name, svg, &quantity, &format!("{} and {}", first.name, second.name))
        })
        .collect()
}

fn drawn(name: &str, svg: String, quantity: &str, against: &str) -> Drawn {
    let caption = format!("{quantity} against {against}.");
    Drawn { name: name.into(), svg, alternative: caption.clone(), caption }
}
