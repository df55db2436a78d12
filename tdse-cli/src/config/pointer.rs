//! JSON Pointers (RFC 6901).

use serde_json::{Map, Value};

/// The reference tokens of a pointer, unescaped.
pub fn segments(pointer: &str) -> impl Iterator<Item = String> {
    pointer.split('/').skip(1).map(|token| token.replace("~1", "/").replace("~0", "~"))
}

/// `pointer` with one more token.
pub fn join(pointer: &str, token: &str) -> String {
    format!("{pointer}/{}", token.replace('~', "~0").replace('/', "~1"))
}

/// The pointer without its last token, and that token; `None` for the root.
pub fn split(pointer: &str) -> Option<(&str, String)> {
    let (parent, token) = pointer.rsplit_once('/')?;
    Some((parent, token.replace("~1", "/").replace("~0", "~")))
}

/// The list index that a token names.
pub fn index(token: &str) -> Option<usize> {
    let plain = token == "0" || (!token.starts_with('0') && token.bytes().all(|b| b.is_ascii_digit()));
    if plain { token.parse().ok() } else { None }
}

/// Writes `value` at `pointer`, making the objects on the way.
///
/// # Panics
/// If the pointer names a list element that does not exist; [`super::schema::at`] knows.
pub fn put(tree: &mut Value, pointer: &str, value: Value) {
    let mut here = tree;
    for token in segments(pointer) {
        if let Value::Array(list) = here {
            let index = index(&token).filter(|index| *index < list.len());
            here = &mut list[index.expect("an element of the list")];
        } else {
            if !here.is_object() {
                *here = Value::Object(Map::new());
            }
            here = &mut here[token];
        }
    }
    *here = value;
}

/// The one of `known` that is spelled most like `word`.
pub fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let lower = word.to_lowercase();
    let distance = |candidate: &&str| strsim::damerau_levenshtein(&lower, &candidate.to_lowercase());
    known.into_iter().min_by_key(distance)
}

/// Whether one spelling may be meant for the other: at least half of the letters agree.
pub fn is_near(word: &str, known: &str) -> bool {
    strsim::normalized_damerau_levenshtein(&word.to_lowercase(), known) >= 0.5
}
