//! Pictures and page: read back from what is written, laid out with the embedded font, fed with hostile input.

#[path = "pictures/demo.rs"]
mod demo;
#[path = "pictures/reading.rs"]
mod reading;

use reading::{Rectangle, labels, lines, parse, text_boxes, value};
use resvg::tiny_skia::Pixmap;
use resvg::usvg::roxmltree::{Document, Node, ParsingOptions};
use tdse_cli::report::figure::{Across, Curve, Figure, Panel, Trace, Up};
use tdse_cli::report::harmonics::HarmonicPicture;
use tdse_cli::report::map::{Map, Shading};
use tdse_cli::report::page::{Page, Picture, Quantity};
use tdse_cli::report::parameter::{Axis, Values};
use tdse_cli::report::scale::{Kind, Range};
use tdse_cli::report::scan::NumberScan;
use tdse_cli::report::ticks::{odd, ticks};
use tdse_cli::report::{field, figure, harmonics, map, number, page, png, populations, scan, time_frequency};

/// Every demonstration picture parses, stays small, and rasterises to two pixels a unit. They are left in the target
/// folder to be looked at.
#[test]
fn every_picture_is_small_and_rasterises_at_twice_its_size() {
    let folder = std::path::Path::new(env!("CARGO_TARGET_TMPDIR")).join("pictures");
    std::fs::create_dir_all(&folder).unwrap();
    for (name, svg) in demo::all() {
        assert!(svg.len() < 2_000_000, "{name}: {} bytes", svg.len());
        let pixels = png::from_svg(&svg).unwrap();
        let image = Pixmap::decode_png(&pixels).unwrap();
        let (_, size) = text_boxes(&svg);
        assert_eq!([image.width(), image.height()].map(f64::from), size.map(|s| 2.0 * s), "{name}");
        assert!(image.pixels().iter().any(|p| p.red() < 60), "{name}: nothing dark was drawn");
        std::fs::write(folder.join(format!("{name}.svg")), &svg).unwrap();
        std::fs::write(folder.join(format!("{name}.png")), pixels).unwrap();
    }
}

fn overlap(a: &Rectangle, b: &Rectangle) -> bool {
    // Boxes hold ascenders and descenders of the whole font; half a unit of them may meet.
    a[0] + 0.5 < b[2] && b[0] + 0.5 < a[2] && a[1] + 0.5 < b[3] && b[1] + 0.5 < a[3]
}

/// Texts stay on the sheet, off each other, and out of the frame that the first panel's data are drawn in.
#[test]
fn texts_keep_clear() {
    for (name, svg) in demo::all() {
        let (boxes, size) = text_boxes(&svg);
        for (i, (text, a)) in boxes.iter().enumerate() {
            assert!(
                a[0] >= 0.0 && a[1] >= 0.0 && a[2] <= size[0] && a[3] <= size[1],
                "{name}: '{text}' {a:?}"
            );
            for (other, b) in &boxes[..i] {
                assert!(!overlap(a, b), "{name}: '{text}' {a:?} meets '{other}' {b:?}");
            }
        }
        let (left, bottom) = (&lines(&svg, "axis left")[0], &lines(&svg, "axis bottom")[0]);
        let frame = [left[0].0, left[0].1, bottom[1].0, left[1].1];
        let inside: Vec<&str> =
            boxes.iter().filter(|(_, a)| overlap(a, &frame)).map(|(t, _)| t.as_str()).collect();
        assert!(inside.is_empty(), "{name}: {inside:?} enter {frame:?}");
    }
}

/// A column of a journal is 8.5 cm wide; 6 pt is the least that is commonly asked of letters (common practice, no source).
#[test]
fn letters_print_at_six_points_in_a_column() {
    for (name, svg) in demo::all() {
        let document = parse(&svg);
        let width: f64 = document.root_element().attribute("width").unwrap().parse().unwrap();
        for text in document.descendants().filter(|n| n.has_tag_name("text")) {
            let size: f64 = text.attribute("font-size").unwrap().parse().unwrap();
            let points = size / width * 8.5 / 2.54 * 72.0;
            assert!(points >= 6.0, "{name}: {points:.2} pt");
        }
    }
}

/// A line known in closed form, log10 y = -x / 10, read back through the labels alone.
#[test]
fn curve_lies_where_the_labels_say() {
    let x = demo::even(0.0, 100.0, 201);
    let y: Vec<f64> = x.iter().map(|x| 10_f64.powf(-x / 10.0)).collect();
    let svg = harmonics::draw(&HarmonicPicture {
        title: "invented",
        photon_energy: &x,
        spectra: &[("", &y)],
        errors: &[],
        quantity: "S",
        fundamental: Some(2.5),
        cutoff_law: Some(40.0),
        measured_cutoff: Some(30.0),
        window: "none",
    });
    let across: Vec<(f64, f64)> =
        labels(&svg, "axis bottom").iter().map(|(l, x, _)| (*x, value(l))).collect();
    let orders: Vec<(f64, f64)> = labels(&svg, "axis top").iter().map(|(l, x, _)| (*x, value(l))).collect();
    let up: Vec<(f64, f64)> =
        labels(&svg, "axis left").iter().map(|(l, _, y)| (*y, value(l).log10())).collect();
    let read = |axis: &[(f64, f64)], at: f64| {
        let (a, b) = (axis[1], axis[axis.len() - 2]);
        a.1 + (at - a.0) * (b.1 - a.1) / (b.0 - a.0)
    };
    // A label's baseline lies a fixed distance below the tick it belongs to: 4.6 units.
    let points: Vec<(f64, f64)> = lines(&svg, "curve").concat();
    assert!(points.len() > 150, "{} points", points.len());
    for (px, py) in points {
        let (energy, decades) = (read(&across, px), read(&up, py + 4.6));
        assert!((decades + energy / 10.0).abs() < 2e-3, "at {energy} eV: 10^{decades}");
        assert!((read(&orders, px) - energy / 2.5).abs() < 2e-2, "order at {energy} eV");
    }
    let marks: Vec<f64> = lines(&svg, "marks").iter().map(|line| read(&across, line[0].0)).collect();
    assert_eq!(marks.len(), 2);
    for wanted in [30.0, 40.0] {
        assert!(marks.iter().any(|at| (at - wanted).abs() < 0.05), "no mark at {wanted} eV among {marks:?}");
    }
}

/// Cells of a map stand over the values of their axes: the one bright cell is found where it was put.
#[test]
fn cell_lies_where_the_labels_say() {
    let (x, y) = (demo::even(0.0, 10.0, 11), demo::even(0.0, 5.0, 6));
    let mut values = vec![0.0; 66];
    values[4 * 11 + 7] = 1.0;
    let axis = |name, values| Axis { name, unit: "", values: Values::Linear(values) };
    let svg = map::draw(&Map {
        title: "invented",
        across: axis("x", &x),
        up: axis("y", &y),
        values: &values,
        name: "z".into(),
        shading: Shading::Linear,
        notes: vec![],
    });
    let document = parse(&svg);
    let cells = document.descendants().find(|n| n.attribute("class") == Some("cells")).unwrap();
    let data: Vec<&str> = cells.children().filter_map(|n| n.attribute("d")).collect();
    assert_eq!(data.len(), 1, "{data:?}");
    let numbers: Vec<f64> =
        data[0].split(|c: char| !(c.is_ascii_digit() || c == '.')).filter_map(|n| n.parse().ok()).collect();
    let (left, top, right, bottom) = (numbers[0], numbers[1], numbers[2], numbers[3]);
    let place = |labels: &[(String, f64, f64)], wanted: f64| {
        labels.iter().find(|(label, ..)| value(label) == wanted).map(|(_, x, y)| (*x, *y - 4.6)).unwrap()
    };
    let at = |class: &str, a: f64, b: f64, wanted: f64, pick: fn((f64, f64)) -> f64| {
        let all = labels(&svg, class);
        let (from, to) = (pick(place(&all, a)), pick(place(&all, b)));
        from + (wanted - a) * (to - from) / (b - a)
    };
    assert!((f64::midpoint(left, right) - at("axis bottom", 2.0, 8.0, 7.0, |p| p.0)).abs() < 0.4);
    assert!((f64::midpoint(top, bottom) - at("axis left", 1.0, 4.0, 4.0, |p| p.1)).abs() < 0.4);
}

const HOSTILE: &str = "</svg><script>alert('&amp; \"x\"')</script> & \u{1} ]]> 80 % of <b>";

/// Markup in titles and names stays text: the parsed document says the very words and holds no foreign element.
#[test]
fn hostile_texts_stay_texts() {
    let words = vec![HOSTILE.to_owned(), "b".to_owned()];
    let axis = Axis { name: HOSTILE, unit: HOSTILE, values: Values::Text(&words) };
    let one = [1.0, 2.0];
    let pictures = [
        harmonics::draw(&HarmonicPicture {
            title: HOSTILE,
            photon_energy: &one,
            spectra: &[("", &one)],
            errors: &[],
            quantity: HOSTILE,
            fundamental: Some(1.0),
            cutoff_law: Some(1.5),
            measured_cutoff: None,
            window: HOSTILE,
        }),
        scan::numbers(&NumberScan {
            title: HOSTILE,
            parameter: axis,
            series: &[(HOSTILE, &one), ("b", &one)],
            quantity: HOSTILE,
            up: Up::Linear,
        }),
        map::draw(&Map {
            title: HOSTILE,
            across: axis,
            up: axis,
            values: &[1.0, 2.0, 3.0, f64::NAN],
            name: HOSTILE.into(),
            shading: Shading::Decades(3.0),
            notes: vec![HOSTILE.into()],
        }),
    ];
    for svg in &pictures {
        let document = parse(svg);
        let known = ["svg", "title", "g", "rect", "path", "polyline", "text"];
        let foreign =
            document.descendants().filter(|n| n.is_element() && !known.contains(&n.tag_name().name()));
        assert_eq!(foreign.count(), 0);
        let title = document.descendants().find(|n| n.has_tag_name("title")).unwrap();
        assert_eq!(title.text().unwrap(), HOSTILE.replace('\u{1}', "\u{fffd}"));
        png::from_svg(svg).unwrap();
    }
}

/// All pictures over the same odd values; none may panic, all must rasterise.
fn pictures_of(x: &[f64], y: &[f64]) -> Vec<String> {
    let axis = |values| Axis { name: "a", unit: "eV", values };
    let series: [(&str, &[f64]); 2] = [("one", y), ("two", x)];
    let map = |shading, values| {
        map::draw(&Map {
            title: "",
            across: axis(values),
            up: axis(values),
            values: y,
            name: String::new(),
            shading,
            notes: vec![],
        })
    };
    let numbers = |values, up| {
        scan::numbers(&NumberScan { title: "", parameter: axis(values), series: &series, quantity: "", up })
    };
    vec![
        harmonics::draw(&HarmonicPicture {
            title: "",
            photon_energy: x,
            spectra: &[("", y)],
            errors: &[],
            quantity: "",
            fundamental: y.first().copied(),
            cutoff_law: y.first().copied(),
            measured_cutoff: x.last().copied(),
            window: "",
        }),
        field::draw(&field::FieldPicture {
            title: "",
            time: x,
            electric_field: &series,
            vector_potential: &[],
        }),
        populations::draw(&populations::PopulationPicture { title: "", time: x, norm: y, states: &series }),
        time_frequency::draw(&time_frequency::TimeFrequencyPicture {
            title: "",
            time: x,
            photon_energy: x,
            intensity: y,
            quantity: "",
            decades: 6.0,
            window: "",
        }),
        map(Shading::Linear, Values::Linear(x)),
        map(Shading::Decades(f64::NAN), Values::Log(x)),
        map(Shading::Decades(-1.0), Values::Log(y)),
        numbers(Values::Log(x), Up::Decades(1e9)),
        numbers(Values::Linear(x), Up::Fixed(Kind::Log, Range { low: -1.0, high: f64::NAN })),
        scan::spectrum(&scan::SpectrumScan {
            title: "",
            parameter: axis(Values::Linear(x)),
            energy: axis(Values::Linear(x)),
            spectrum: y,
            quantity: "",
            decades: 3.0,
        }),
    ]
}

#[test]
fn nothing_breaks_on_odd_values() {
    let (nan, inf) = (f64::NAN, f64::INFINITY);
    let cases: [&[f64]; 11] = [
        &[],
        &[1.0],
        &[0.0, 0.0, 0.0],
        &[nan, nan],
        &[nan, 1.0, 0.0, -3.0, inf, -inf, 2.0],
        &[f64::MAX, f64::MIN, f64::MIN_POSITIVE],
        &[5e-324, 1e-320, 0.0],
        &[1.0, 1.0 + f64::EPSILON],
        &[1e-300, 1e300],
        &[3.0, 1.0, 2.0, 1.0],
        &[1e15, 1e15 + 1.0, 1e15 + 2.0],
    ];
    for x in cases {
        for y in cases {
            for (number, svg) in pictures_of(x, y).iter().enumerate() {
                assert!(!svg.contains("NaN") && !svg.contains("inf"), "picture {number} of {x:?}, {y:?}");
                parse(svg);
            }
        }
        for svg in pictures_of(x, x) {
            png::from_svg(&svg).unwrap_or_else(|reason| panic!("{x:?}: {reason}"));
        }
    }
}

#[test]
fn empty_pictures_say_so() {
    for svg in pictures_of(&[], &[]) {
        assert!(svg.contains(">no data<"), "{svg}");
    }
}

/// A gap breaks the line; a zero on a logarithmic axis leads off its lower end.
#[test]
fn gaps_and_zeros() {
    let curve = |y: Vec<f64>| Curve {
        name: "".into(),
        x: vec![0.0, 1.0, 2.0, 3.0, 4.0].into(),
        y: y.into(),
        trace: Trace::Line,
    };
    let draw = |y| {
        figure::draw(&Figure {
            title: "invented",
            across: Across::linear("x"),
            panels: vec![Panel::new("y", Up::Decades(6.0), vec![curve(y)])],
            notes: vec![],
        })
    };
    let broken = lines(&draw(vec![1.0, 0.1, f64::NAN, 0.1, 1.0]), "curve");
    assert_eq!(broken.iter().map(Vec::len).collect::<Vec<_>>(), [2, 2]);
    let svg = draw(vec![1.0, 0.1, 0.0, 0.1, 1.0]);
    let bottom = lines(&svg, "axis bottom")[0][0].1;
    let led_off = lines(&svg, "curve");
    assert_eq!(led_off.len(), 2);
    assert!((led_off[0].last().unwrap().1 - bottom).abs() < 0.02, "{led_off:?}");
}

/// The spectrum's range is its own: no more than 14 decades, and no lower than its floor.
#[test]
fn spectrum_stops_at_its_floor() {
    let energy = demo::even(0.0, 100.0, 2000);
    for (floor, decades) in [(1e-9, 6.0..9.0), (1e-30, 13.0..14.1)] {
        let spectrum = demo::invented_spectrum(&energy, 1.5, 40.0, floor);
        let range = Range::above_floor(spectrum.iter().copied(), 14.0).unwrap();
        let length = (range.high / range.low).log10();
        assert!(decades.contains(&length), "floor {floor}: {length} decades");
    }
}

/// Along one parameter that leaves it alone, the Keldysh parameter is said once; else round values of it are marked.
#[test]
fn the_keldysh_parameter_is_said() {
    let of = |wanted: &str| demo::all().into_iter().find(|(name, _)| *name == wanted).unwrap().1;
    assert!(of("verdict_one_keldysh").contains("Keldysh parameter 1.07<"));
    let marked = of("verdict_numbers");
    assert!(marked.contains("Keldysh parameter<") && marked.contains(">1.2<") && !marked.contains(">1.07<"));
    assert!(of("verdict_words").contains(">1.4<"));
}

/// Missing points are counted in the title of a map, below a curve, and hatched.
#[test]
fn missing_points_are_said() {
    let text = |name: &str| demo::all().into_iter().find(|(n, _)| *n == name).unwrap().1;
    assert!(text("scan_spectrum").contains("3 of 24 points missing"));
    assert!(text("scan_two_axes").contains("3 of 108 points missing"));
    assert!(text("scan_log").contains("1 of 14 points missing"));
    // The law is there at every point, so that none is missing.
    assert!(text("scan_numbers").contains("measured: 1 of 24 points have no such number"));
    assert!(lines(&text("scan_spectrum"), "missing").len() > 20);
    assert!(lines(&text("time_frequency"), "missing").is_empty());
}

#[test]
fn ticks_are_round() {
    let shown = |kind, low, high, wanted| -> Vec<String> {
        ticks(kind, Range { low, high }, wanted).major.into_iter().map(|(_, label)| label).collect()
    };
    assert_eq!(shown(Kind::Linear, 0.0, 1.0, 5), ["0.0", "0.2", "0.4", "0.6", "0.8", "1.0"]);
    assert_eq!(
        shown(Kind::Linear, -0.03, 0.03, 6),
        ["−0.03", "−0.02", "−0.01", "0.00", "0.01", "0.02", "0.03"]
    );
    assert_eq!(shown(Kind::Linear, 0.0, 3e14, 3), ["0", "1·10¹⁴", "2·10¹⁴", "3·10¹⁴"]);
    assert_eq!(shown(Kind::Log, 1e-13, 10.0, 7), ["10⁻¹²", "10⁻¹⁰", "10⁻⁸", "10⁻⁶", "10⁻⁴", "10⁻²", "1"]);
    assert_eq!(shown(Kind::Log, 2.0, 40.0, 7), ["2", "5", "10", "20"]);
    assert_eq!(shown(Kind::Degrees, 0.0, 345.0, 8), ["0", "45", "90", "135", "180", "225", "270", "315"]);
    let orders: Vec<f64> = odd(Range { low: 0.0, high: 62.0 }, 8).major.into_iter().map(|(v, _)| v).collect();
    assert_eq!(orders, [1.0, 11.0, 21.0, 31.0, 41.0, 51.0, 61.0]);
}

#[test]
fn numbers_read_well() {
    assert_eq!(number::with_error(61.8437, 0.123), "61.84 ± 0.12");
    assert_eq!(number::with_error(-0.670_123_4, 1.2e-5), "−0.670123 ± 0.000012");
    assert_eq!(number::with_error(2.345e-7, 3.1e-9), "(2.345 ± 0.031)·10⁻⁷");
    assert_eq!(number::with_error(61.8437, f64::NAN), "61.8437");
    assert_eq!(number::significant(1.5e14, 6), "1.5·10¹⁴");
    assert_eq!(number::significant(f64::NAN, 6), "not available");
    assert_eq!(number::significant(-0.5, 4), "−0.5");
    assert_eq!(number::significant(999_999.9, 3), "1·10⁶");
}

/// The page is well-formed XML, says every text as written, keeps its promises without script.
#[test]
fn page_is_well_formed_and_says_everything() {
    let (_, svg) = demo::all().swap_remove(0);
    let html = page::render(&Page {
        notes: vec![],
        title: HOSTILE,
        headline: vec![
            Quantity { name: HOSTILE, value: 61.8437, unit: "eV", error: Some(0.123) },
            Quantity { name: "missing", value: f64::NAN, unit: "", error: None },
        ],
        pictures: vec![Picture { svg: &svg, caption: HOSTILE, alternative: HOSTILE }; 2],
        doubts: vec![HOSTILE.into()],
        provenance: vec![(HOSTILE, "{\n  \"title\": \"</pre><script>\"\n}")],
    });
    std::fs::write(std::path::Path::new(env!("CARGO_TARGET_TMPDIR")).join("page.html"), &html).unwrap();
    let options = ParsingOptions { allow_dtd: true, ..ParsingOptions::default() };
    let document = Document::parse_with_options(&html, options).unwrap();
    let count = |name: &str| document.descendants().filter(|n| n.tag_name().name() == name).count();
    assert_eq!(
        [count("script"), count("svg"), count("li"), count("b"), count("link"), count("img")],
        [0, 2, 1, 0, 0, 0]
    );
    let text: String = document.descendants().filter(Node::is_text).filter_map(|n| n.text()).collect();
    let said = HOSTILE.replace('\u{1}', "\u{fffd}");
    assert!(text.matches(&said).count() >= 7, "{text}");
    assert!(text.contains("61.84 ± 0.12") && text.contains("not available"));
    assert!(text.contains("{\n  \"title\": \"</pre><script>\"\n}"));
    assert!(text.contains(
        "Model prediction for one atom. Intense lasers and extreme-ultraviolet light injure; local rules and the \
         licensed laser safety officer decide."
    ));
    for picture in document.descendants().filter(|n| n.tag_name().name() == "svg") {
        assert_eq!(
            (picture.attribute("aria-label"), picture.attribute("role")),
            (Some(said.as_str()), Some("img"))
        );
    }
}

/// Teeth stand at the energies asked for: nω + E - Up, here 2.1 eV, 5.2 eV, 8.3 eV, … (worked by hand).
#[test]
fn teeth_of_the_comb_stand_at_the_expected_peaks() {
    let svg = demo::all().into_iter().find(|(name, _)| *name == "photoelectrons").unwrap().1;
    // The axis line runs from 0 to 75 eV.
    let axis = &lines(&svg, "axis bottom")[0];
    let energy = |x: f64| 75.0 * (x - axis[0].0) / (axis[1].0 - axis[0].0);
    let teeth: Vec<f64> = lines(&svg, "comb").iter().map(|line| energy(line[0].0)).collect();
    // The lowest above zero is 7 · 3.1 - 13.6 - 6 = 2.1; the picture ends at 75.
    assert_eq!(teeth.len(), 24, "{teeth:?}");
    for (number, tooth) in teeth.iter().enumerate() {
        assert!((tooth - (2.1 + 3.1 * number as f64)).abs() < 0.05, "tooth {number} at {tooth} eV");
    }
}
