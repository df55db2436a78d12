//! Pictures of simpler models: of one run, and of verdicts over a scan.

use super::super::models::{
    BranchPicture, IonizationPicture, SpectraPicture, draw_branches, draw_ionization, draw_spectra,
};
use super::super::time_frequency::{self, TimeFrequencyPicture};
use super::super::verdict::{self, VerdictPicture};
use super::survey::Parameter;
use super::{Drawn, MAP_DECADES, SPECTRUM, fundamental, remark, rows, slice};
use crate::derive::models::{branches::BRANCHES, names};
use crate::scan::points::position;
use crate::store::{Contents, ScanDimension, Values};

/// What both components radiate.
const RADIATED: &str = "radiated energy per unit photon energy";

/// Pictures of one run.
pub(super) fn of_run(contents: &Contents) -> Vec<Drawn> {
    [spectra(contents), returns(contents), ionization(contents)].into_iter().flatten().collect()
}

fn spectra(contents: &Contents) -> Option<Drawn> {
    let all = names(contents);
    let of = |name: &str, group: &str, array: &str| slice(contents, &format!("models/{name}/{group}"), array);
    // Of two components what they radiate together.
    let (shown, quantity) = match rows(contents, "harmonics", "spectrum").len() {
        2 => ("radiated_energy", RADIATED),
        _ => ("spectrum", SPECTRUM),
    };
    let models: Vec<&String> = all.iter().filter(|name| !of(name, "harmonics", shown).is_empty()).collect();
    if models.is_empty() {
        return None;
    }
    let full = std::iter::once(("full result", slice(contents, "harmonics", shown)));
    let written: Vec<String> = models.iter().map(|name| name.replace('_', " ")).collect();
    let beside =
        written.iter().zip(&models).map(|(label, name)| (label.as_str(), of(name, "harmonics", shown)));
    let own = std::iter::once(slice(contents, "harmonic_yields", "yield"));
    let yields = own.chain(models.iter().map(|name| of(name, "harmonic_yields", "yield")));
    Some(Drawn {
        name: "model_spectra".into(),
        svg: draw_spectra(&SpectraPicture {
            title: &contents.provenance.title,
            photon_energy: slice(contents, "harmonics", "photon_energy"),
            spectra: full.chain(beside).collect(),
            quantity,
            fundamental: fundamental(contents)?,
            yields: yields.collect(),
            measured_cutoff: slice(contents, "summary", "cutoff_energy")
                .first()
                .copied()
                .filter(|c| c.is_finite()),
        }),
        caption: "Harmonic spectra of simpler models over the full result; below the ratio of their yields."
            .into(),
        alternative: "Logarithmic spectra against photon energy, and the ratio of yields by order.".into(),
    })
}

fn returns(contents: &Contents) -> Option<Drawn> {
    let group = "models/three_step/returns";
    let count = slice(contents, group, "time").len();
    let of = |name: &str| slice(contents, group, name).get(..count);
    let first = of("return_time")?.iter().copied().zip(of("photon_energy")?.iter().copied());
    let first: Vec<(f64, f64)> = first.filter(|(t, _)| t.is_finite()).collect();
    let map = "time_frequency";
    let turned: Vec<f64> = contents.real(map, "intensity")?.t().iter().copied().collect();
    let picture = TimeFrequencyPicture {
        title: &contents.provenance.title,
        time: slice(contents, map, "time"),
        photon_energy: slice(contents, map, "photon_energy"),
        intensity: &turned,
        quantity: SPECTRUM,
        decades: MAP_DECADES,
        window: remark(contents, map, "window"),
    };
    Some(Drawn {
        name: "classical_returns".into(),
        svg: time_frequency::draw_with_returns(&picture, &first),
        caption: "When each photon energy is emitted, and when classical electrons return with it.".into(),
        alternative: "Map of the emission over time and photon energy, with the classical returns as dots."
            .into(),
    })
}

fn ionization(contents: &Contents) -> Option<Drawn> {
    let time = slice(contents, "populations", "time");
    let left = slice(contents, "populations", "initial_population");
    if time.is_empty() || left.len() != time.len() {
        return None;
    }
    let gone: Vec<f64> = left.iter().map(|p| 1.0 - p).collect();
    let rates = [
        ("quasi-static", "tunnelling", "probability"),
        ("ADK (3D)", "tunnelling", "adk"),
        ("PPT (3D)", "tunnelling", "ppt"),
        ("curve", "curve", "probability"),
    ];
    let of = |model: &str, array| slice(contents, &format!("models/{model}/ionization"), array);
    let rates = rates.map(|(name, model, array)| (name, of(model, array)));
    let rates: Vec<_> = rates.into_iter().filter(|(_, values)| values.len() == time.len()).collect();
    if rates.is_empty() {
        return None;
    }
    Some(Drawn {
        name: "ionization".into(),
        svg: draw_ionization(&IonizationPicture {
            title: &contents.provenance.title,
            time,
            probabilities: std::iter::once(("full result", gone.as_slice())).chain(rates).collect(),
            after: slice(contents, "summary", "ionization_probability").first().copied(),
        }),
        caption: "Ionization in time: the full result and rates of tunnelling.".into(),
        alternative: "Logarithmic ionization probability against time, full and by rates.".into(),
    })
}

/// Most slices of a scan over more than two dimensions that are drawn.
const MOST_SLICES: usize = 12;

/// Verdicts over a scan: over its last two dimensions, one picture for every value of those before.
pub(super) fn of_scan(contents: &Contents) -> Vec<Drawn> {
    let scan = contents.scan();
    let (before, shown) = scan.split_at(scan.len().saturating_sub(2));
    let [parameters, outer] = [shown, before].map(|part| part.iter().map(Parameter::of).collect::<Vec<_>>());
    let lengths: Vec<usize> = before.iter().map(ScanDimension::length).collect();
    let slices: usize = lengths.iter().product();
    let drawn = slices.min(MOST_SLICES);
    // Evenly among all, the first and the last with them.
    let numbers = (0..drawn).map(|n| n * (slices - 1) / drawn.saturating_sub(1).max(1));
    let slice = |number: usize| {
        let place = position(number, &lengths);
        let said: Vec<String> = outer.iter().zip(place).map(|(parameter, i)| parameter.said(i)).collect();
        verdicts(contents, &parameters, (number, slices), &said.join(", "))
    };
    numbers.filter_map(slice).collect()
}

/// One slice of so many, which stands at these values of the other parameters.
fn verdicts(
    contents: &Contents,
    parameters: &[Parameter],
    (number, slices): (usize, usize),
    said: &str,
) -> Option<Drawn> {
    let (first, second) = match parameters {
        [first] => (first, None),
        [first, second] => (first, Some(second)),
        _ => return None,
    };
    let names = names(contents);
    let group = |name: &str| format!("models/{name}/comparison");
    let models: Vec<(&str, Vec<i64>)> = names
        .iter()
        .filter_map(|name| match contents.get(&group(name), "verdict")? {
            Values::Integer(verdicts) => {
                let size = verdicts.len() / slices;
                Some((name.as_str(), verdicts.iter().copied().skip(number * size).take(size).collect()))
            }
            _ => None,
        })
        .collect();
    let keldysh = slice(contents, &group(models.first()?.0), "keldysh_parameter");
    let size = keldysh.len() / slices;
    let title = &contents.provenance.title;
    let (name, title) = match slices {
        1 => ("verdict".into(), title.clone()),
        _ => (format!("verdict_{}", number + 1), format!("{title}, {said}")),
    };
    Some(Drawn {
        name,
        svg: verdict::draw(&VerdictPicture {
            title: &title,
            first: first.axis(),
            second: second.map(Parameter::axis),
            models: models.iter().map(|(name, verdicts)| (*name, verdicts.as_slice())).collect(),
            keldysh: keldysh.get(number * size..(number + 1) * size).unwrap_or_default(),
        }),
        caption: "Where each simpler model stays within the tolerance; γ is the Keldysh parameter.".into(),
        alternative: "Cells over the scanned parameters, coloured by the verdict on every model.".into(),
    })
}

/// Phase slopes of short and long paths in the middle of the scan.
pub(super) fn branches(contents: &Contents) -> Option<Drawn> {
    let Values::Integer(orders) = contents.get(BRANCHES, "order")? else { return None };
    let orders: Vec<f64> = orders.iter().map(|&order| order as f64).collect();
    let middle = contents.scan().iter().fold(0, |point, d| point * d.length() + d.length() / 2);
    let rows = |name: &str| -> Option<[&[f64]; 2]> {
        let all = slice(contents, BRANCHES, name).chunks(orders.len()).skip(2 * middle).take(2);
        all.collect::<Vec<_>>().try_into().ok()
    };
    let place: Vec<String> = contents.scan().iter().map(|d| Parameter::of(d).said(d.length() / 2)).collect();
    Some(Drawn {
        name: "branches".into(),
        svg: draw_branches(&BranchPicture {
            title: &contents.provenance.title,
            orders: &orders,
            full: rows("phase_slope")?,
            orbits: rows("orbit_phase_slope")?,
            place: &format!("At {}", place.join(", ")),
        }),
        caption: "How fast the phase of every harmonic turns with the intensity: the paths of the full result, and quantum orbits."
            .into(),
        alternative: "Phase slope against harmonic order: orbits as lines, the full result as points.".into(),
    })
}
