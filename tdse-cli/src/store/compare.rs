//! Whether two results are the same, bit by bit.

use std::collections::BTreeSet;

use super::contents::{Contents, Group};

/// Where two results differ in anything but their provenance and time stamps, as `harmonics/spectrum`; empty where
/// they are the same to the last bit.
pub fn differences(a: &Contents, b: &Contents) -> Vec<String> {
    let mut found = Vec::new();
    if a.provenance.title != b.provenance.title {
        found.push("title".into());
    }
    if a.scan() != b.scan() {
        found.push("scan axes".into());
    }
    let names: BTreeSet<&str> = a.groups().chain(b.groups()).map(|(path, _)| path).collect();
    let empty = Group::default();
    let group =
        |of: &Contents, name| of.groups().find(|(path, _)| *path == name).map(|(_, group)| group.clone());
    for name in names {
        let (a, b) = (group(a, name), group(b, name));
        if a.is_some() != b.is_some() {
            found.push(name.into());
        }
        let (a, b) = (a.as_ref().unwrap_or(&empty), b.as_ref().unwrap_or(&empty));
        let arrays: BTreeSet<&String> = a.arrays.keys().chain(b.arrays.keys()).collect();
        let differs = |array: &&String| match (a.arrays.get(*array), b.arrays.get(*array)) {
            (Some(a), Some(b)) => !a.is_identical(b),
            _ => true,
        };
        found.extend(arrays.into_iter().filter(differs).map(|array| format!("{name}/{array}")));
        if a.attributes != b.attributes {
            found.push(format!("{name} (remarks)"));
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::store::Provenance;

    fn result(norm: f64) -> Contents {
        let mut contents = Contents::new(Provenance::default());
        contents.insert("summary", "final_norm", norm);
        contents
    }

    #[test]
    fn the_last_bit_counts_and_the_provenance_does_not() {
        let mut other = result(0.5);
        other.provenance.end_time = "2026-03-01T12:00:07Z".into();
        assert!(differences(&result(0.5), &other).is_empty());
        assert!(differences(&result(f64::NAN), &result(f64::NAN)).is_empty());
        assert_eq!(differences(&result(0.5), &result(0.5_f64.next_up())), ["summary/final_norm"]);
        other.insert("summary", "initial_energy", -15.0);
        assert_eq!(differences(&result(0.5), &other), ["summary/initial_energy"]);
        other.remark("summary", "window", "none");
        assert!(differences(&result(0.5), &other).contains(&"summary (remarks)".to_owned()));
    }
}
