//! The palette measured with formulas from outside the project.
//!
//! Contrast: WCAG 2.2, definitions of relative luminance and contrast ratio. Dichromats: Viénot, Brettel and Mollon,
//! Color Res. Appl. 24, 243 (1999); their matrices are from memory, checked by the property that white stays white.
//! Differences and lightness: CIE 1976 L*a*b*, D65. Thresholds are invented by us.

use tdse_cli::report::palette::{INK, SHADES, SOFT, STYLES, shade};

type Triple = [f64; 3];

fn linear(colour: &str) -> Triple {
    let channel = |from: usize| f64::from(u8::from_str_radix(&colour[from..from + 2], 16).unwrap()) / 255.0;
    [1, 3, 5].map(|from| {
        let c = channel(from);
        if c <= 0.04045 { c / 12.92 } else { ((c + 0.055) / 1.055).powf(2.4) }
    })
}

fn times(matrix: [Triple; 3], v: Triple) -> Triple {
    matrix.map(|row| row[0] * v[0] + row[1] * v[1] + row[2] * v[2])
}

fn lab(rgb: Triple) -> Triple {
    let xyz = times(
        [
            [0.412_456, 0.357_576, 0.180_438],
            [0.212_673, 0.715_152, 0.072_175],
            [0.019_334, 0.119_192, 0.950_304],
        ],
        rgb,
    );
    let f = |t: f64| if t > 216.0 / 24389.0 { t.cbrt() } else { (24389.0 / 27.0 * t + 16.0) / 116.0 };
    let [x, y, z] = [f(xyz[0] / 0.95047), f(xyz[1]), f(xyz[2] / 1.08883)];
    [116.0 * y - 16.0, 500.0 * (x - y), 200.0 * (y - z)]
}

fn difference(a: Triple, b: Triple) -> f64 {
    (0..3).map(|i| (a[i] - b[i]).powi(2)).sum::<f64>().sqrt()
}

const TO_CONES: [Triple; 3] =
    [[17.8824, 43.5161, 4.119_35], [3.455_65, 27.1554, 3.867_14], [0.029_956_6, 0.184_309, 1.467_09]];

fn from_cones(v: Triple) -> Triple {
    let [[a, b, c], [d, e, f], [g, h, i]] = TO_CONES;
    let determinant = a * (e * i - f * h) - b * (d * i - f * g) + c * (d * h - e * g);
    let adjugate = [
        [e * i - f * h, c * h - b * i, b * f - c * e],
        [f * g - d * i, a * i - c * g, c * d - a * f],
        [d * h - e * g, b * g - a * h, a * e - b * d],
    ];
    times(adjugate, v).map(|x| x / determinant)
}

fn protanope(rgb: Triple) -> Triple {
    let [_, m, s] = times(TO_CONES, rgb);
    from_cones([2.023_44 * m - 2.525_81 * s, m, s]).map(|c| c.clamp(0.0, 1.0))
}

fn deuteranope(rgb: Triple) -> Triple {
    let [l, _, s] = times(TO_CONES, rgb);
    from_cones([l, 0.494_207 * l + 1.248_27 * s, s]).map(|c| c.clamp(0.0, 1.0))
}

#[test]
fn white_stays_white_for_every_eye() {
    for eye in [protanope, deuteranope] {
        assert!(difference(eye([1.0; 3]), [1.0; 3]) < 1e-3);
    }
}

#[test]
fn letters_and_curves_stand_out_against_white() {
    for colour in STYLES.iter().map(|style| style.colour).chain([INK, SOFT]) {
        let [r, g, b] = linear(colour);
        let contrast = 1.05 / (0.2126 * r + 0.7152 * g + 0.0722 * b + 0.05);
        assert!(contrast >= 4.5, "{colour}: {contrast:.2}");
    }
}

#[test]
fn curves_differ_for_every_eye_and_without_colour() {
    for eye in [|c| c, protanope, deuteranope] {
        for (i, a) in STYLES.iter().enumerate() {
            for b in &STYLES[..i] {
                let distance = difference(lab(eye(linear(a.colour))), lab(eye(linear(b.colour))));
                assert!(distance >= 20.0, "{} and {}: {distance:.1}", a.colour, b.colour);
                assert!(a.dash != b.dash && a.marker != b.marker, "{} and {}", a.colour, b.colour);
            }
        }
    }
}

#[test]
fn map_darkens_in_even_steps_for_every_eye() {
    for eye in [|c| c, protanope, deuteranope] {
        let stations: Vec<Triple> = (0..SHADES).map(|step| lab(eye(linear(shade(step))))).collect();
        for pair in stations.windows(2) {
            assert!(pair[1][0] < pair[0][0], "lightness {} to {}", pair[0][0], pair[1][0]);
        }
    }
    // CIELAB and OKLab disagree by up to about a factor of two on blues, so even steps there are even within that here.
    let stations: Vec<Triple> = (0..SHADES).map(|step| lab(linear(shade(step)))).collect();
    let steps: Vec<f64> = stations.windows(2).map(|pair| difference(pair[0], pair[1])).collect();
    let mean = steps.iter().sum::<f64>() / steps.len() as f64;
    for (number, step) in steps.iter().enumerate() {
        assert!((0.4..2.2).contains(&(step / mean)), "step {number}: {:.2} of the mean", step / mean);
    }
}
