//! `tdse report`: pictures and one page of a folder's results.

use std::fmt;
use std::path::{Path, PathBuf};

use clap::Args;

use super::exit::{Exit, Trouble};
use super::output::data;
use crate::report::gallery::{self, Drawn};
use crate::report::png;
use crate::store::{self, Contents, Folder};

/// What `report` takes.
#[derive(Debug, Args)]
pub struct Options {
    /// Folder that `tdse run` filled
    #[arg(value_name = "DIR")]
    pub dir: PathBuf,
    /// Draw one point of a scan: its number in points.csv, counted from 0, or its identity
    #[arg(long, value_name = "POINT")]
    pub point: Option<String>,
}

/// Why pictures could not be drawn.
#[derive(Debug)]
pub enum DrawError {
    /// A result could not be read, or a picture not written.
    Store(store::Error),
    /// A drawing could not be rasterised.
    Png(png::Error),
}

impl fmt::Display for DrawError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Store(error) => write!(f, "{error}"),
            Self::Png(error) => write!(f, "{error}"),
        }
    }
}

impl std::error::Error for DrawError {}

impl From<store::Error> for DrawError {
    fn from(error: store::Error) -> Self {
        Self::Store(error)
    }
}

impl From<png::Error> for DrawError {
    fn from(error: png::Error) -> Self {
        Self::Png(error)
    }
}

/// Draws everything that a folder holds, or one point of it, and prints where.
///
/// # Errors
/// Refused where it is no folder of results, has none yet, or does not have the point.
pub fn report(options: &Options) -> Result<Exit, Trouble> {
    let folder = Folder::open(&options.dir).map_err(Trouble::refused)?;
    let page = match &options.point {
        None => {
            if !folder.result().is_file() {
                let path = folder.result();
                let advice =
                    "allowed: a folder with a result; `tdse gather` makes one of the points that exist";
                return Err(Trouble::refused(format!("{}: is not there; {advice}", path.display())));
            }
            draw(&folder).map_err(Trouble::incomplete)?
        }
        Some(wanted) => {
            let (path, name) = point_file(&folder, wanted)?;
            let contents = store::read(&path).map_err(Trouble::incomplete)?;
            let place = folder.root().join("report").join(format!("point-{name}"));
            put(&folder, &place, &contents).map_err(Trouble::incomplete)?
        }
    };
    data(format!("{}\n", page.display()));
    Ok(Exit::Complete)
}

/// File and name of a point, by its number or identity.
fn point_file(folder: &Folder, wanted: &str) -> Result<(PathBuf, String), Trouble> {
    let rows = folder.rows().map_err(Trouble::refused)?;
    let found = match wanted.parse::<usize>() {
        Ok(number) if wanted.len() < 16 => rows.get(number),
        _ => rows.iter().find(|row| row.identity == wanted),
    };
    let row = found.ok_or_else(|| {
        let last = rows.len().saturating_sub(1);
        Trouble::refused(format!(
            "--point {wanted}: no such point; allowed: 0 to {last}, or an identity in points.csv"
        ))
    })?;
    let path = folder.root().join(&row.path);
    if !path.is_file() {
        return Err(Trouble::refused(format!(
            "--point {wanted}: is {}; allowed: a point that is done",
            row.status
        )));
    }
    Ok((path, row.identity.clone()))
}

/// Draws pictures and page of the result in a folder; returns the page.
///
/// # Errors
/// Whatever the disk refuses.
pub fn draw(folder: &Folder) -> Result<PathBuf, DrawError> {
    let contents = store::read(&folder.result())?;
    put(folder, &folder.root().join("report"), &contents)
}

/// Writes every picture as SVG and PNG, and the page.
fn put(folder: &Folder, place: &Path, contents: &Contents) -> Result<PathBuf, DrawError> {
    let pictures = gallery::pictures(contents);
    for Drawn { name, svg, .. } in &pictures {
        folder.put(&place.join(format!("{name}.svg")), svg.as_bytes())?;
        folder.put(&place.join(format!("{name}.png")), &png::from_svg(svg)?)?;
    }
    let page = place.join("index.html");
    folder.put(&page, gallery::page(contents, &pictures).as_bytes())?;
    Ok(page)
}
