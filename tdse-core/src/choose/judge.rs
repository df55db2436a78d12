//! Objections to what the user pinned, and to a field that leaves electrons moving.

use std::f64::consts::SQRT_2;

use super::rules::Needs;
use super::{Finding, Knob, Verdict, Wish, ladder};
use crate::absorber::reflection;
use crate::grid::Grid;
use crate::problem::{Absorber, Numerics};
use crate::step::resonant_step;

/// Part of the needed momentum below which a spacing is inadequate rather than doubtful.
const COARSE: f64 = 0.6;
/// Vector potential left at the end of a field, as part of its largest value, that raises a doubt.
const LEFT_OVER: f64 = 1e-6;

pub(super) fn judge(wish: &Wish, needs: &Needs, numerics: &Numerics) -> Vec<Finding> {
    [
        spacing(needs, numerics),
        extent(needs, numerics),
        domain(wish, numerics),
        absorber(needs, numerics),
        time_step(needs, numerics),
        left_over_potential(wish),
    ]
    .into_iter()
    .flatten()
    .collect()
}

fn spacing(needs: &Needs, numerics: &Numerics) -> Option<Finding> {
    let held = numerics.grid.x.largest_momentum();
    if held >= needs.momentum {
        return None;
    }
    let verdict = if held < COARSE * needs.momentum { Verdict::Inadequate } else { Verdict::Doubtful };
    Some(Finding {
        knob: Some(Knob::Spacing),
        verdict,
        reason: format!("holds momenta up to {held:.2} / bohr where {:.2} / bohr are needed", needs.momentum),
        allowed: format!("at most {:.4} bohr", needs.spacing),
        passes: ladder::at_most(needs.spacing),
    })
}

fn extent(needs: &Needs, numerics: &Numerics) -> Option<Finding> {
    let (extent, width) = (numerics.grid.x.extent(), numerics.absorber.width());
    let passes = ladder::at_least(2.0 * (needs.inner(numerics.absorber) + width));
    let allowed = format!("at least {:.1} bohr", 2.0 * (needs.inner(numerics.absorber) + width));
    let inner = 0.5 * extent - width;
    let finding =
        |verdict, reason| Some(Finding { knob: Some(Knob::Extent), verdict, reason, allowed, passes });
    if inner <= 0.0 {
        let reason = format!("leaves no room between two absorbers of {width} bohr each");
        return finding(Verdict::Impossible, reason);
    }
    let wanted = needs.inner(numerics.absorber);
    let least = needs.without_diffuse(numerics.absorber);
    if inner < 0.5 * least {
        let reason = format!("leaves {inner:.1} bohr to each side where electrons need {least:.1} bohr");
        return finding(Verdict::Inadequate, reason);
    }
    if inner < 0.8 * least {
        let reason = format!("leaves {inner:.1} bohr to each side where electrons may need {least:.1} bohr");
        return finding(Verdict::Doubtful, reason);
    }
    if inner < 0.8 * wanted {
        let reason = format!(
            "leaves {inner:.1} bohr to each side where electrons that stay bound come {wanted:.1} bohr far: the ionization probability may miss the accuracy"
        );
        return finding(Verdict::Doubtful, reason);
    }
    None
}

/// A sampled potential is not known outside its table; in two dimensions it is one of the distance from the centre, from zero
/// to the corners.
fn domain(wish: &Wish, numerics: &Numerics) -> Option<Finding> {
    let (first, last) = wish.problem.potential.domain();
    let edge = 0.5 * numerics.grid.x.extent();
    let finding = |reason, allowed, passes| {
        Some(Finding { knob: Some(Knob::Extent), verdict: Verdict::Impossible, reason, allowed, passes })
    };
    if numerics.grid.dimensions() == 1 {
        if edge <= last && -edge >= first {
            return None;
        }
        let reason = format!(
            "reaches {edge:.1} bohr to each side; the potential's table ends at {first} and {last} bohr"
        );
        let allowed = format!("a box within the table, or a table over at least {edge:.1} bohr to each side");
        return finding(reason, allowed, within(2.0 * last.min(-first), &numerics.grid));
    }
    let corner = edge * SQRT_2;
    if corner <= last && first <= 0.0 {
        return None;
    }
    let reason = format!(
        "reaches from 0 to {corner:.1} bohr in its corners; the potential's table, along the radius, from {first} to {last} bohr"
    );
    let allowed = format!("a box within the table, or a table from 0 to at least {corner:.1} bohr");
    finding(reason, allowed, if first <= 0.0 { within(SQRT_2 * last, &numerics.grid) } else { 0.0 })
}

/// Largest rung at which a box is no wider than `limit` though its points are rounded up to a good number; zero where none is.
fn within(limit: f64, grid: &Grid) -> f64 {
    let mut rung = limit;
    while rung >= grid.x.spacing {
        rung = ladder::at_most(rung);
        if grid.covering([rung; 2], grid.spacings()).x.extent() <= limit {
            return rung;
        }
        rung *= 0.99;
    }
    0.0
}

fn absorber(needs: &Needs, numerics: &Numerics) -> Option<Finding> {
    let passes = ladder::at_least(needs.absorber_width.max(super::rules::NARROWEST_ABSORBER));
    match numerics.absorber {
        Absorber::Smooth { width } | Absorber::Round { width } if width < 0.7 * needs.absorber_width => {
            Some(Finding {
                knob: Some(Knob::Absorber),
                verdict: if width < 0.25 * needs.absorber_width {
                    Verdict::Inadequate
                } else {
                    Verdict::Doubtful
                },
                reason: format!(
                    "reflects {:.1e} of the electrons of {:.3} / bohr, 1.5 times as fast as the slowest that come back within the run",
                    reflection(needs.slowest, width),
                    needs.slowest
                ),
                allowed: format!("at least {:.1} bohr", needs.absorber_width),
                passes,
            })
        }
        _ => None,
    }
}

fn time_step(needs: &Needs, numerics: &Numerics) -> Option<Finding> {
    let largest = numerics.grid.largest_along_axis();
    let resonance = resonant_step(largest, needs.binding);
    let longest = needs.time_step(numerics.scheme, largest);
    let step = numerics.time_step;
    let finding = |verdict, reason, limit: f64| {
        Some(Finding {
            knob: Some(Knob::TimeStep),
            verdict,
            reason,
            allowed: format!("below {limit:.4} au"),
            passes: ladder::at_most(longest),
        })
    };
    if step >= resonance {
        let reason = format!(
            "is above the splitting's resonance at {resonance:.4} au for momenta up to {largest:.2} / bohr"
        );
        return finding(Verdict::Inadequate, reason, resonance);
    }
    if step > 1.3 * longest {
        let reason = format!("is longer than the {longest:.4} au that the accuracy asks for");
        return finding(Verdict::Doubtful, reason, longest);
    }
    None
}

fn left_over_potential(wish: &Wish) -> Option<Finding> {
    let field = &wish.problem.field;
    field.sampled.as_ref()?;
    let [x, y] = field.vector_potential(field.interval().1);
    let left = x.hypot(y);
    let largest = super::rules::Strength::of(field).vector_potential;
    (left > LEFT_OVER * largest && left > 0.0).then(|| Finding {
        knob: None,
        verdict: Verdict::Doubtful,
        reason: format!(
            "the field leaves a vector potential of {left:.2e} a.u., {:.1e} of its largest: momenta at the end are kinetic",
            left / largest
        ),
        allowed: "a table whose field has no net area".into(),
        passes: 0.0,
    })
}
