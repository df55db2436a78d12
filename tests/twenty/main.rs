//! The accuracy asked for is the accuracy reached: twenty configurations, three accuracies.
//!
//! The short form takes the cases and accuracies whose reference is quick. The long form is
//! `cargo test --release -p tdse-core --test twenty -- --ignored --nocapture`, an hour or more;
//! `TDSE_TWENTY_MOST` leaves out references of more points times steps than that, and says so; `TDSE_TWENTY_KEEP` names a
//! folder that keeps them for the next call.

mod cases;
mod measure;
mod table;

/// The twenty as they were fixed, before any rule was tuned on them.
const FIXED: [&str; 20] = [
    "soft      589 nm 1.8e13 W/cm2 3.4 cycles Ip 0.49",
    "harmonic  447 nm 1.6e13 W/cm2 7.7 cycles Ip 0.88",
    "screened  340 nm 2.9e14 W/cm2 6.1 cycles Ip 0.67",
    "sampled   258 nm 6.3e13 W/cm2 4.4 cycles Ip 0.47",
    "poeschl  2946 nm 2.1e14 W/cm2 2.8 cycles Ip 0.86",
    "soft     2239 nm 4.4e13 W/cm2 7.1 cycles Ip 0.65",
    "gaussian 1701 nm 5.4e12 W/cm2 5.5 cycles Ip 0.44",
    "screened 1293 nm 5.8e14 W/cm2 3.8 cycles Ip 0.83",
    "harmonic  983 nm 1.6e14 W/cm2 2.2 cycles Ip 0.62",
    "poeschl   747 nm 3.0e13 W/cm2 6.5 cycles Ip 0.41",
    "sampled   568 nm 9.6e13 W/cm2 4.9 cycles Ip 0.80",
    "gaussian  431 nm 1.4e13 W/cm2 3.3 cycles Ip 0.60",
    "soft      328 nm 1.0e15 W/cm2 7.6 cycles Ip 0.99",
    "harmonic  249 nm 3.4e14 W/cm2 6.0 cycles Ip 0.78",
    "screened 2840 nm 8.3e13 W/cm2 4.3 cycles Ip 0.57",
    "sampled  2159 nm 1.9e14 W/cm2 2.7 cycles Ip 0.96",
    "poeschl  1641 nm 3.3e13 W/cm2 7.0 cycles Ip 0.75",
    "soft     1247 nm 2.1e12 W/cm2 5.4 cycles Ip 0.54",
    "gaussian  948 nm 6.5e14 W/cm2 3.7 cycles Ip 0.93",
    "screened  720 nm 1.9e14 W/cm2 2.1 cycles Ip 0.73",
];

/// The rule still gives the twenty that were fixed, and their atoms bind the electron as it says.
#[test]
fn the_list_is_fixed() {
    let all = cases::all();
    assert_eq!(all.len(), FIXED.len());
    for (case, fixed) in all.iter().zip(FIXED) {
        assert_eq!(case.name, fixed, "case {}", case.number);
        let potential = &case.problem.potential;
        if !potential.is_confining() {
            let energy = tdse_core::stationary::level(potential, 0).unwrap().energy;
            assert!((energy + case.binding).abs() < 1e-9, "{fixed}: {energy}");
        }
    }
}
