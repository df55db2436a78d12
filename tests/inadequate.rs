//! Every kind of inadequacy, provoked on purpose, is named rightly: before the run by the rules, after it by the watch.
//! A run with chosen numerics raises no doubt. Scenarios are invented.

mod support;

use std::sync::Arc;

use support::*;
use tdse_core::choose::{AtomFacts, Choice, Knob, PinnedAbsorber, Pins, Verdict, choose};
use tdse_core::cubic::Cubic;
use tdse_core::field::{Field, SampledField};
use tdse_core::grid::Grid;
use tdse_core::problem::{Absorber, Numerics, Problem, Scheme};
use tdse_core::spectrum::Window;
use tdse_core::watch::{Kind, Watched, doubts, ending};

const ACCURACY: f64 = 1e-4;

fn problem() -> Problem {
    ground(SQRT_2_ATOM, field(near_infrared()))
}

fn choice(problem: &Problem, pins: &Pins) -> Choice {
    let facts = AtomFacts::new(&problem.potential, &problem.initial).unwrap();
    choose(&wish(problem, &facts, pins, ACCURACY))
}

/// Verdicts of the one knob that is objected to, and of nothing else.
fn verdict(pins: &Pins, knob: Knob) -> Option<Verdict> {
    let findings = choice(&problem(), pins).findings;
    assert!(findings.iter().all(|f| f.knob == Some(knob)), "{findings:?}");
    for finding in &findings {
        assert!(finding.reason.chars().any(char::is_numeric), "{}", finding.reason);
        assert!(finding.passes > 0.0, "a value that passes");
    }
    findings.first().map(|f| f.verdict)
}

#[test]
fn a_pinned_spacing_is_judged() {
    let of = |spacing| verdict(&Pins { spacing: Some(spacing), ..Pins::default() }, Knob::Spacing);
    assert_eq!(of(0.25), None);
    assert_eq!(of(0.5), Some(Verdict::Doubtful));
    assert_eq!(of(1.0), Some(Verdict::Inadequate));
}

/// At a spacing of 0.3 bohr the extents are 1152, 768, 576 and 384 points.
#[test]
fn a_pinned_box_is_judged() {
    let of = |extent| {
        let absorber = Some(PinnedAbsorber::Width(60.0));
        let pins = Pins { spacing: Some(0.3), extent: Some(extent), absorber, ..Pins::default() };
        verdict(&pins, Knob::Extent)
    };
    assert_eq!(of(345.6), None);
    assert_eq!(of(230.4), Some(Verdict::Doubtful));
    assert_eq!(of(172.8), Some(Verdict::Inadequate));
    assert_eq!(of(115.2), Some(Verdict::Impossible));
}

#[test]
fn a_pinned_absorber_is_judged() {
    let chosen = choice(&problem(), &Pins::default()).numerics;
    let of = |part: f64| {
        let width = part * chosen.absorber.width();
        verdict(&Pins { absorber: Some(PinnedAbsorber::Width(width)), ..Pins::default() }, Knob::Absorber)
    };
    assert_eq!(of(1.0), None);
    assert_eq!(of(0.5), Some(Verdict::Doubtful));
    assert_eq!(of(0.2), Some(Verdict::Inadequate));
}

#[test]
fn a_pinned_step_is_judged() {
    let of = |step| {
        let pins = Pins { time_step: Some(step), scheme: Some(Scheme::Strang), ..Pins::default() };
        verdict(&pins, Knob::TimeStep)
    };
    assert_eq!(of(0.005), None);
    assert_eq!(of(0.05), Some(Verdict::Doubtful));
    assert_eq!(of(0.4), Some(Verdict::Inadequate), "above the resonance");
}

#[test]
fn a_field_with_a_net_area_is_doubted() {
    let time: Vec<f64> = (0..=200).map(f64::from).collect();
    let half_cycle = time.iter().map(|t| 0.05 * (std::f64::consts::PI * t / 200.0).sin().powi(2)).collect();
    let sampled = SampledField { components: [Some(Arc::new(Cubic::new(time, half_cycle))), None] };
    let problem = ground(SQRT_2_ATOM, Field { pulses: Vec::new(), sampled: Some(sampled) });
    let findings = choice(&problem, &Pins::default()).findings;
    assert_eq!(findings.len(), 1);
    assert_eq!((findings[0].knob, findings[0].verdict), (None, Verdict::Doubtful));
    assert!(findings[0].reason.contains("vector potential"), "{}", findings[0].reason);
}

/// Kinds of doubt that a run of the problem raises.
fn watched(numerics: &Numerics) -> Vec<Kind> {
    let (plan, state) = solve(&problem(), numerics);
    let found =
        doubts(&Watched { state: &state, numerics, steps: plan.schedule().steps, accuracy: ACCURACY });
    println!("{:?} {:?} {:?}", state.series.local_error, state.series.free_energy, found);
    found.into_iter().map(|doubt| doubt.kind).collect()
}

fn chosen() -> Numerics {
    Numerics { trailing_time: 100.0, ..choice(&problem(), &Pins::default()).numerics }
}

#[test]
fn chosen_numerics_raise_no_doubt() {
    assert_eq!(watched(&chosen()), []);
}

#[test]
fn a_coarse_grid_shows_at_the_top_of_its_momenta() {
    let mut numerics = chosen();
    numerics.grid.x.spacing *= 2.0;
    assert!(watched(&numerics).contains(&Kind::MomentumTop));
}

#[test]
fn a_small_box_shows_at_its_edge() {
    let mut numerics = chosen();
    numerics.absorber = Absorber::None;
    numerics.grid.x.points = 576;
    assert!(watched(&numerics).contains(&Kind::BoxEdge));
}

#[test]
fn a_state_in_the_absorber_is_seen() {
    let mut numerics = chosen();
    numerics.absorber = Absorber::Smooth { width: 9.0 };
    (numerics.grid, numerics.time_step) = (Grid::line(192, 0.1), 0.02);
    assert!(watched(&numerics).contains(&Kind::StateInAbsorber));
}

#[test]
fn a_long_step_shows_when_it_is_doubled() {
    let mut numerics = chosen();
    numerics.time_step *= 4.0;
    assert!(watched(&numerics).contains(&Kind::LocalError));
}

/// A step of fifth order in its length loses a factor 32 when it is halved.
#[test]
fn the_local_error_is_of_fifth_order() {
    let of = |factor: f64| {
        let mut numerics = chosen();
        numerics.time_step *= factor;
        solve(&problem(), &numerics).1.series.local_error[0]
    };
    let ratio = of(1.0) / of(0.5);
    println!("{ratio}");
    assert!((25.0..40.0).contains(&ratio), "{ratio}");
}

#[test]
fn an_end_that_leaks_is_named_by_its_window() {
    let (plan, state) = solve(&problem(), &choice(&problem(), &Pins::default()).numerics);
    let (series, schedule) = (acceleration(&plan, &state), plan.schedule());
    let photons = [near_infrared().frequency, 1.2];
    let kind = |window| ending(&series, schedule, window, photons).map(|doubt| doubt.kind);
    assert_eq!(kind(Window::Hann), None);
    assert_eq!(kind(Window::Blackman), None);
    // Cut at the pulse's centre, where the acceleration is far from zero.
    let cut = schedule.steps / 2;
    let short = tdse_core::simulate::Schedule { steps: cut, end: schedule.time(cut), ..schedule.clone() };
    let kind = |window| ending(&series[..=cut], &short, window, photons).map(|doubt| doubt.kind);
    assert_eq!(kind(Window::None), Some(Kind::TrailingTime));
    assert_eq!(kind(Window::Taper { length: 2.0 }), Some(Kind::WindowLeak));
}

/// What no run of ours gets wrong, on series made up for it: a norm that grows, and an energy that is not kept.
#[test]
fn a_norm_that_grows_and_an_energy_that_drifts_are_named() {
    let (plan, mut state) = solve(&problem(), &chosen());
    let steps = plan.schedule().steps;
    let kinds = |state: &tdse_core::simulate::State| {
        let found = doubts(&Watched { state, numerics: &chosen(), steps, accuracy: ACCURACY });
        found.into_iter().map(|doubt| doubt.kind).collect::<Vec<_>>()
    };
    let middle = steps / 2;
    state.series.norm[middle] += 1e-6;
    assert_eq!(kinds(&state), [Kind::NormBalance]);
    state.series.norm.fill(1.0);
    state.series.free_energy[1] = state.series.free_energy[0] - 1e-3;
    assert_eq!(kinds(&state), [Kind::FreeEnergy]);
}
