//! Reading a picture back as a stranger would: from its text and lines alone.

use resvg::usvg::{self, roxmltree::Document};
use tdse_cli::report::png;

/// A rectangle: left, top, right, bottom.
pub type Rectangle = [f64; 4];

/// The document, parsed strictly.
pub fn parse(svg: &str) -> Document<'_> {
    Document::parse(svg).unwrap_or_else(|reason| panic!("not well-formed: {reason}\n{svg}"))
}

/// Texts and points of the labels of an axis: (label, x, y).
pub fn labels(svg: &str, class: &str) -> Vec<(String, f64, f64)> {
    let document = parse(svg);
    let group = document.descendants().find(|n| n.attribute("class") == Some(class));
    let texts = group.into_iter().flat_map(|g| g.children().filter(|n| n.has_tag_name("text")));
    let number = |text: Option<&str>| text.unwrap().parse::<f64>().unwrap();
    texts
        .map(|t| (t.text().unwrap_or("").to_owned(), number(t.attribute("x")), number(t.attribute("y"))))
        .collect()
}

/// Points of every line in the groups of a class.
pub fn lines(svg: &str, class: &str) -> Vec<Vec<(f64, f64)>> {
    let document = parse(svg);
    let groups = document.descendants().filter(|n| n.attribute("class") == Some(class));
    let lines = groups.flat_map(|g| g.children().filter(|n| n.has_tag_name("polyline")));
    lines
        .map(|line| {
            let numbers: Vec<f64> =
                line.attribute("points").unwrap().split_whitespace().map(|n| n.parse().unwrap()).collect();
            numbers.chunks(2).map(|pair| (pair[0], pair[1])).collect()
        })
        .collect()
}

/// The value a label stands for: `−2.5`, `10⁻⁶`, `2·10⁻³`.
pub fn value(label: &str) -> f64 {
    let plain: String = label
        .chars()
        .map(|c| match c {
            '−' | '⁻' => '-',
            '⁰' => '0',
            '¹' => '1',
            '²' => '2',
            '³' => '3',
            '⁴'..='⁹' => char::from(b'4' + (c as u32 - '⁴' as u32) as u8),
            _ => c,
        })
        .collect();
    let raised = label.chars().any(|c| "⁻⁰¹²³⁴⁵⁶⁷⁸⁹".contains(c));
    if !raised {
        return plain.parse().unwrap_or_else(|_| panic!("label {label}"));
    }
    let (mantissa, power) = plain.split_once('·').unwrap_or(("1", &plain));
    mantissa.parse::<f64>().unwrap() * 10_f64.powi(power.strip_prefix("10").unwrap().parse().unwrap())
}

/// Boxes of all texts as laid out with the embedded font, and the size of the picture.
pub fn text_boxes(svg: &str) -> (Vec<(String, Rectangle)>, [f64; 2]) {
    let options = usvg::Options { fontdb: png::fonts(), ..usvg::Options::default() };
    let tree = usvg::Tree::from_str(svg, &options).unwrap();
    let mut boxes = Vec::new();
    collect(tree.root(), &mut boxes);
    (boxes, [f64::from(tree.size().width()), f64::from(tree.size().height())])
}

fn collect(group: &usvg::Group, boxes: &mut Vec<(String, Rectangle)>) {
    for node in group.children() {
        match node {
            usvg::Node::Group(inner) => collect(inner, boxes),
            usvg::Node::Text(text) => {
                let b = text.abs_bounding_box();
                let words = text.chunks().iter().map(usvg::TextChunk::text).collect();
                let corners = [b.left(), b.top(), b.right(), b.bottom()].map(f64::from);
                boxes.push((words, corners));
            }
            _ => {}
        }
    }
}
