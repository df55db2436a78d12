//! Every shipped configuration is read, tuned, chosen, resolved, and resolved again to itself.

use std::path::{Path, PathBuf};

use tdse_cli::command::check;
use tdse_cli::config::Files;
use tdse_cli::scan::prepare::prepare;
use tdse_cli::scan::source::{Source, source};

fn shipped() -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs");
    let mut all: Vec<PathBuf> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|e| e == "json"))
        .collect();
    all.sort();
    assert!(!all.is_empty());
    all
}

#[test]
fn shipped_configurations_are_ready_and_resolve_to_themselves() {
    for path in shipped() {
        let prepared =
            prepare(&source(&path).unwrap(), &[]).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
        for point in [prepared.points.first(), prepared.points.last()].into_iter().flatten() {
            let inputs = point.job.inputs.iter().map(|i| (i.name.clone(), i.contents.to_string())).collect();
            let again = Source { text: point.configuration.clone(), files: Files::Stored(inputs) };
            let again = prepare(&again, &[]).unwrap();
            assert_eq!(again.points.len(), 1);
            assert_eq!(again.points[0].configuration, point.configuration, "{}", path.display());
            assert_eq!(again.points[0].identity, point.identity, "{}", path.display());
            assert_eq!(again.points[0].job, point.job, "{}", path.display());
        }
        let text = check::text(&prepared, 2);
        println!("{text}");
        assert!(text.contains("licensed laser safety officer"));
    }
}
