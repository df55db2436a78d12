//! The report as one page: plain HTML that is also well-formed XML, style and pictures inside, no script.

use super::number::{significant, with_error};
use super::svg::escape;
use std::fmt::Write as _;

const CAUTION: &str = "Model prediction for one atom. Intense lasers and extreme-ultraviolet light injure; local rules \
                       and the licensed laser safety officer decide.";

const STYLE: &str = "\
:root{color:#1b2330;background:#fff;font:16px/1.5 system-ui,'DejaVu Sans',sans-serif}\
body{max-width:46rem;margin:2.5rem auto;padding:0 1.2rem}\
h1{font-size:1.5rem;line-height:1.25;margin:0 0 1.2rem}\
h2{font-size:1.05rem;margin:2.4rem 0 .6rem}\
table{border-collapse:collapse}\
th,td{text-align:left;padding:.28rem 1.4rem .28rem 0;border-bottom:1px solid #dfe3ea;vertical-align:baseline}\
thead th{font-weight:normal;color:#566070;border-bottom-color:#1b2330}\
tbody th{font-weight:normal}\
td.value{font-variant-numeric:tabular-nums}\
figure{margin:1.8rem 0 2.4rem;break-inside:avoid}\
figure svg{display:block;width:100%;height:auto}\
figcaption{color:#566070;font-size:.92rem;margin-top:.4rem}\
.caution{border-left:4px solid #b45500;padding:.3rem 0 .3rem .9rem;margin:1.5rem 0}\
pre{white-space:pre-wrap;overflow-wrap:anywhere;font-size:.85rem;margin:0}\
summary{cursor:pointer}\
@page{margin:18mm}\
@media print{body{max-width:none;margin:0;padding:0;font-size:10pt}h2{break-after:avoid}\
details::details-content{content-visibility:visible;block-size:auto}}";

/// What the page shows. All texts are plain; the page escapes them.
#[derive(Debug, Clone, Default)]
pub struct Page<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// The numbers one came for.
    pub headline: Vec<Quantity<'a>>,
    /// What else a reader should know before the pictures.
    pub notes: Vec<String>,
    /// Pictures in order.
    pub pictures: Vec<Picture<'a>>,
    /// What makes the numbers doubtful.
    pub doubts: Vec<String>,
    /// Where the numbers come from: names and texts, folded away.
    pub provenance: Vec<(&'a str, &'a str)>,
}

/// A number of the headline.
#[derive(Debug, Clone, Copy)]
pub struct Quantity<'a> {
    /// Name.
    pub name: &'a str,
    /// Value; NaN is said to be not available.
    pub value: f64,
    /// Unit; empty where there is none.
    pub unit: &'a str,
    /// Error of the value, where known.
    pub error: Option<f64>,
}

/// A picture of the page.
#[derive(Debug, Clone, Copy)]
pub struct Picture<'a> {
    /// An SVG drawn by this module's neighbours, put in as it is.
    pub svg: &'a str,
    /// What stands below it.
    pub caption: &'a str,
    /// What a reader who cannot see it is told.
    pub alternative: &'a str,
}

/// The page as HTML.
pub fn render(page: &Page<'_>) -> String {
    let title = escape(page.title);
    let mut html = format!(
        "<!DOCTYPE html>\n<html xmlns=\"http://www.w3.org/1999/xhtml\" lang=\"en\">\n<head>\n<meta charset=\"utf-8\"/>\n\
         <meta name=\"viewport\" content=\"width=device-width, initial-scale=1\"/>\n<title>{title}</title>\n\
         <style>{STYLE}</style>\n</head>\n<body>\n<main>\n<h1>{title}</h1>\n"
    );
    headline(&mut html, &page.headline);
    let _ = writeln!(html, "<p class=\"caution\" role=\"note\">{CAUTION}</p>");
    doubts(&mut html, &page.doubts);
    for note in &page.notes {
        let _ = writeln!(html, "<p>{}</p>", escape(note));
    }
    pictures(&mut html, &page.pictures);
    provenance(&mut html, &page.provenance);
    html.push_str("</main>\n</body>\n</html>\n");
    html
}

fn headline(html: &mut String, quantities: &[Quantity<'_>]) {
    if quantities.is_empty() {
        return;
    }
    html.push_str(
        "<table>\n<thead><tr><th scope=\"col\">quantity</th><th scope=\"col\">value</th>\
         <th scope=\"col\">unit</th></tr></thead>\n<tbody>\n",
    );
    for quantity in quantities {
        let value =
            quantity.error.map_or_else(|| significant(quantity.value, 6), |e| with_error(quantity.value, e));
        let _ = writeln!(
            html,
            "<tr><th scope=\"row\">{}</th><td class=\"value\">{}</td><td>{}</td></tr>",
            escape(quantity.name),
            escape(&value),
            escape(quantity.unit)
        );
    }
    html.push_str("</tbody>\n</table>\n");
}

fn doubts(html: &mut String, doubts: &[String]) {
    html.push_str("<h2>Doubts</h2>\n");
    if doubts.is_empty() {
        html.push_str("<p>None was raised.</p>\n");
        return;
    }
    html.push_str("<ul>\n");
    for doubt in doubts {
        let _ = writeln!(html, "<li>{}</li>", escape(doubt));
    }
    html.push_str("</ul>\n");
}

fn pictures(html: &mut String, pictures: &[Picture<'_>]) {
    for picture in pictures {
        let alternative = escape(picture.alternative);
        let svg = picture.svg.replacen("<svg ", &format!("<svg aria-label=\"{alternative}\" "), 1);
        let _ =
            writeln!(html, "<figure>\n{svg}<figcaption>{}</figcaption>\n</figure>", escape(picture.caption));
    }
}

fn provenance(html: &mut String, entries: &[(&str, &str)]) {
    if entries.is_empty() {
        return;
    }
    html.push_str("<details>\n<summary>Provenance</summary>\n<table>\n<tbody>\n");
    for (name, text) in entries {
        let lines: Vec<String> = text.lines().map(escape).collect();
        let text = lines.join("\n");
        let _ = writeln!(html, "<tr><th scope=\"row\">{}</th><td><pre>{text}</pre></td></tr>", escape(name));
    }
    html.push_str("</tbody>\n</table>\n</details>\n");
}
