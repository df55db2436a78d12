//! Which bound state of two dimensions is meant: by angular momentum, or by parity along both axes.

use serde_json::json;
use tdse_core::problem::{Parity, PlaneLabel, Symmetry};

use super::Check;
use crate::config::complaint::Fix;
use crate::config::pointer::join;
use crate::config::raw;

const KEYS: [&str; 3] = ["angular_momentum", "parity_x", "parity_y"];

/// A state as written.
#[derive(Clone, Copy, Debug)]
pub(super) struct Written {
    pub number: u32,
    pub angular_momentum: Option<i32>,
    pub parity: [Option<raw::Parity>; 2],
}

/// On a line there is no symmetry to choose.
pub(super) fn on_the_line(check: &mut Check, object: &str) {
    for key in KEYS {
        let place = join(object, key);
        if check.tree.pointer(&place).is_some() {
            let fix = check.without(object, key);
            check.complain(&place, "needs two dimensions", "the key only beside dimensions 2", fix);
        }
    }
}

/// The state in the plane; without any symmetry the angular momentum is zero.
pub(super) fn on_the_plane(check: &mut Check, object: &str, written: Written) -> PlaneLabel {
    let [x, y] = written.parity;
    if let Some(m) = written.angular_momentum {
        for key in &KEYS[1..] {
            let place = join(object, key);
            if check.tree.pointer(&place).is_some() {
                let fix = check.without(object, key);
                let reason = format!("stands beside angular_momentum {m}");
                check.complain(&place, reason, "angular_momentum, or parity_x with parity_y", fix);
            }
        }
    } else if x.is_some() != y.is_some() {
        let [there, missing] = if x.is_some() { ["parity_x", "parity_y"] } else { ["parity_y", "parity_x"] };
        let reason = format!("is missing beside {there}");
        check.complain(&join(object, missing), reason, "even or odd", Fix::Value(json!("even")));
    }
    let parity = |written: Option<raw::Parity>| match written {
        Some(raw::Parity::Odd) => Parity::Odd,
        Some(raw::Parity::Even) | None => Parity::Even,
    };
    let symmetry = match (written.angular_momentum, x, y) {
        (Some(m), ..) => Symmetry::Angular(m),
        (None, None, None) => Symmetry::Angular(0),
        (None, ..) => Symmetry::Mirror([parity(x), parity(y)]),
    };
    PlaneLabel { symmetry, number: written.number as usize }
}
