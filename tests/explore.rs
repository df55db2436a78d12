#[path = "twenty/cases.rs"]
mod cases;
#[path = "twenty/measure.rs"]
mod measure;
use measure::*;
use tdse_core::choose::{PinnedAbsorber, Pins};
use tdse_core::problem::Absorber;
#[test]
#[ignore]
fn spacing() {
    let wanted: Vec<u32> = std::env::var("CASES").unwrap().split(',').map(|c| c.parse().unwrap()).collect();
    let list = |name: &str| -> Vec<f64> {
        std::env::var(name).unwrap().split(',').map(|c| c.parse().unwrap()).collect()
    };
    let (hs, dts) = (list("HS"), list("DTS"));
    for number in wanted {
        let case = cases::case(number);
        let base = chosen(&case, 1e-3, &Pins::default());
        let pins = |h: f64, dt: f64| Pins {
            spacing: Some(h),
            time_step: Some(dt),
            extent: Some(base.grid.x.extent()),
            absorber: Some(match base.absorber {
                Absorber::None => PinnedAbsorber::None,
                a => PinnedAbsorber::Width(a.width()),
            }),
            ..Pins::default()
        };
        let (h0, dt0) = (hs[0], dts[0]);
        let n0 = chosen(&case, 1e-3, &pins(h0, dt0));
        println!("{} extent {:.1} work {:.1e}", case.name, base.grid.x.extent(), work(&case, &n0));
        let exact = outcome(&case, &n0);
        println!("  {:.1} s, survival {}", exact.seconds, exact.survival);
        for &h in &hs[1..] {
            let n = chosen(&case, 1e-3, &pins(h, dt0));
            let e = errors(&case, &outcome(&case, &n), &exact);
            println!(
                "  h {h} n {}: rms {:.1e} harm {:.1e} ({}) surv {:.1e}",
                n.grid.x.points, e.rms, e.harmonic, e.order, e.survival
            );
        }
        for &dt in &dts[1..] {
            let n = chosen(&case, 1e-3, &pins(h0, dt));
            let e = errors(&case, &outcome(&case, &n), &exact);
            println!(
                "  dt {dt}: rms {:.1e} harm {:.1e} ({}) surv {:.1e}",
                e.rms, e.harmonic, e.order, e.survival
            );
        }
    }
}
#[test]
#[ignore]
fn levels() {
    use tdse_core::grid::{Axis, Grid};
    use tdse_core::stationary::{bound_states, level};
    for number in [20, 3, 8, 15, 4, 11, 16] {
        let case = cases::case(number);
        let p = &case.problem.potential;
        let exact = level(p, 0).unwrap().energy;
        let f = tdse_core::choose::AtomFacts::new(p, &case.problem.initial).unwrap();
        print!("l {:.3} ", f.analytic_length);
        print!(
            "{} kink {:.3}: {:?}\n ",
            case.name,
            p.kink(),
            if let tdse_core::potential::Potential::Screened { softening, screening_length, .. } = p {
                (*softening, *screening_length)
            } else {
                (0.0, 0.0)
            }
        );
        for h in [0.05f64, 0.1, 0.15, 0.2, 0.25, 0.3, 0.4, 0.5] {
            let n = 8 * (80.0 / h / 8.0).ceil() as usize;
            let grid = Grid { x: Axis { points: n, spacing: h }, y: None };
            let e = bound_states(p, &grid, 1).unwrap();
            print!(" {h}: {:.1e}", e.energies[0] - exact);
        }
        println!();
    }
}
#[test]
#[ignore]
fn harmonic() {
    for number in [2, 9, 14] {
        let case = cases::case(number);
        let tdse_core::potential::Potential::Harmonic { frequency: w } = case.problem.potential else {
            panic!()
        };
        for accuracy in [1e-3, 1e-4, 1e-6, 0.0] {
            let mut n = chosen(&case, if accuracy == 0.0 { 1e-6 } else { accuracy }, &Pins::default());
            if accuracy == 0.0 {
                n = reference(&case, &[1e-6], 4e9);
            }
            let o = outcome(&case, &n);
            // classical path by fine midpoint sums
            let times = o.schedule.times();
            let (mut c, mut s) = (0.0, 0.0);
            let sub = 40;
            let mut worst = (0.0f64, 0.0f64, 0.0f64);
            let (mut num, mut den) = (0.0, 0.0);
            for (k, &t) in times.iter().enumerate() {
                let e = case.problem.field.electric_field(t)[0];
                let x = -(w * t).sin() / w * c + (w * t).cos() / w * s;
                let a = w * w * x + e;
                num += (o.acceleration[k] - a).powi(2);
                den += a * a;
                worst = if (o.acceleration[k] - a).abs() > worst.0 {
                    ((o.acceleration[k] - a).abs(), t, a)
                } else {
                    worst
                };
                let h = o.schedule.time_step / f64::from(sub);
                for i in 0..sub {
                    let u = t + (f64::from(i) + 0.5) * h;
                    // two-point Gauss
                    for g in [-1.0, 1.0] {
                        let u = u + g * h * 0.5 / 3f64.sqrt();
                        let e = case.problem.field.electric_field(u)[0];
                        c += 0.5 * h * e * (w * u).cos();
                        s += 0.5 * h * e * (w * u).sin();
                    }
                }
            }
            println!(
                "{} {accuracy:e}: n {} h {} dt {:.4} rms {:.1e} worst {:.1e} at {:.1} (of {:.1})",
                case.name,
                n.grid.x.points,
                n.grid.x.spacing,
                n.time_step,
                (num / den).sqrt(),
                worst.0,
                worst.1,
                times.last().unwrap()
            );
        }
    }
}
#[test]
#[ignore]
fn weak() {
    let case = cases::case(18);
    for accuracy in [1e-4, 1e-6] {
        let n = chosen(&case, accuracy, &Pins::default());
        let o = outcome(&case, &n);
        let (m, c) = o.acceleration.iter().fold((0.0f64, 0), |(m, c), a| (m.max(a.abs()), c + 1));
        println!(
            "{accuracy:e} first {:.2e} last {:.2e} max {m:.2e} of {c}",
            o.acceleration[0],
            o.acceleration.last().unwrap()
        );
    }
}
#[test]
#[ignore]
fn absorber() {
    let wanted: Vec<u32> = std::env::var("CASES").unwrap().split(',').map(|c| c.parse().unwrap()).collect();
    for number in wanted {
        let case = cases::case(number);
        let accuracies = [1e-3, 1e-4, 1e-6];
        let finer = reference(&case, &accuracies, 4e9);
        let exact = kept(&case, &finer);
        for accuracy in [1e-3, 1e-4, 1e-6] {
            let base = chosen(&case, accuracy, &Pins::default());
            let (width, inner) = (base.absorber.width(), 0.5 * base.grid.x.extent() - base.absorber.width());
            print!("{:2} {accuracy:.0e} {} w {width} inner {inner:.0}:", number, case.name);
            for factor in [1.0, 1.5, 2.0, 3.0, 4.0] {
                let mut n = base.clone();
                n.absorber = Absorber::Smooth { width: width / factor };
                n.grid.x.points = 8 * (2.0 * (width / factor + inner) / n.grid.x.spacing / 8.0).round() as usize;
                let e = errors(&case, &outcome(&case, &n), &exact);
                print!("  {:.1e}/{:.1e}", e.harmonic, e.rms);
            }
            println!();
        }
    }
}
