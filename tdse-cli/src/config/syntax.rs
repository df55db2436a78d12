//! JSON text to a tree: syntax errors by line and column, repeated keys refused.

use std::fmt;

use serde::de::{Deserialize, DeserializeSeed, Deserializer, Error, MapAccess, SeqAccess, Visitor};
use serde_json::{Map, Value};

use super::complaint::{Complaint, Complaints, Fix};

/// Reads JSON in which no object has a key twice.
pub fn parse(text: &str) -> Result<Value, Complaints> {
    tree(text).map_err(|error| complaint(text, &error).into())
}

fn tree(text: &str) -> serde_json::Result<Value> {
    let mut deserializer = serde_json::Deserializer::from_str(text);
    let value = Tree.deserialize(&mut deserializer)?;
    deserializer.end()?;
    Ok(value)
}

fn complaint(text: &str, error: &serde_json::Error) -> Complaint {
    let (line, column) = (error.line(), error.column());
    let message = error.to_string();
    let what = message.rsplit_once(" at line ").map_or(message.as_str(), |(what, _)| what);
    let mut complaint =
        Complaint::new(format!("line {line}, column {column}"), None, format!("is refused: {what}"))
            .allowed("JSON (RFC 8259), every key once")
            .fix(Fix::Words(way_out(text, error)));
    complaint.written = text.lines().nth(line.saturating_sub(1)).map(|line| format!("`{}`", line.trim()));
    complaint
}

fn way_out(text: &str, error: &serde_json::Error) -> String {
    let repaired = if error.is_syntax() { repair(text, error.line(), error.column()) } else { None };
    match repaired {
        Some((number, line)) => format!("write line {number} as `{}`", line.trim()),
        None if error.is_eof() && tree(&format!("{text}{}", closers(text))).is_ok() => {
            format!("write `{}` at the end", closers(text))
        }
        None => "correct this line".into(),
    }
}

/// The brackets that close what `text` leaves open.
fn closers(text: &str) -> String {
    let (mut open, mut in_string, mut escaped) = (Vec::new(), false, false);
    for c in text.chars() {
        match c {
            '"' if !escaped => in_string = !in_string,
            '{' if !in_string => open.push('}'),
            '[' if !in_string => open.push(']'),
            '}' | ']' if !in_string => drop(open.pop()),
            _ => {}
        }
        escaped = c == '\\' && !escaped;
    }
    open.into_iter().rev().collect()
}

/// Number and text of the line that makes the whole text readable once one comma is added or taken out.
fn repair(text: &str, line: usize, column: usize) -> Option<(usize, String)> {
    let start: usize = text.split_inclusive('\n').take(line.checked_sub(1)?).map(str::len).sum();
    let error = (start + column.saturating_sub(1)).min(text.len());
    let before = text.get(..error)?.trim_end().len();
    let with_comma = format!("{},{}", &text[..before], &text[before..]);
    let bare = text[..before].strip_suffix(',').map(|head| format!("{head}{}", &text[before..]));
    let repaired = std::iter::once(with_comma).chain(bare).find(|candidate| tree(candidate).is_ok())?;
    let changed = text.lines().zip(repaired.lines()).position(|(old, new)| old != new)?;
    Some((changed + 1, repaired.lines().nth(changed)?.into()))
}

/// Builds a tree and refuses repeated keys, of which `serde_json` would silently keep the last.
struct Tree;

impl<'de> DeserializeSeed<'de> for Tree {
    type Value = Value;

    fn deserialize<D: Deserializer<'de>>(self, deserializer: D) -> Result<Value, D::Error> {
        deserializer.deserialize_any(self)
    }
}

impl<'de> Visitor<'de> for Tree {
    type Value = Value;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a JSON value")
    }

    fn visit_unit<E>(self) -> Result<Value, E> {
        Ok(Value::Null)
    }

    fn visit_bool<E>(self, value: bool) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_i64<E>(self, value: i64) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_u64<E>(self, value: u64) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_f64<E>(self, value: f64) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_str<E>(self, value: &str) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut items: A) -> Result<Value, A::Error> {
        let mut list = Vec::new();
        while let Some(item) = items.next_element_seed(Self)? {
            list.push(item);
        }
        Ok(list.into())
    }

    fn visit_map<A: MapAccess<'de>>(self, mut entries: A) -> Result<Value, A::Error> {
        let mut map = Map::new();
        while let Some(key) = entries.next_key_seed(Key)? {
            if map.contains_key(&key) {
                return Err(A::Error::custom(format!("key {key:?} is repeated")));
            }
            let value = entries.next_value_seed(Self)?;
            map.insert(key, value);
        }
        Ok(map.into())
    }
}

struct Key;

impl<'de> DeserializeSeed<'de> for Key {
    type Value = String;

    fn deserialize<D: Deserializer<'de>>(self, deserializer: D) -> Result<String, D::Error> {
        String::deserialize(deserializer)
    }
}

#[cfg(test)]
mod tests {
    use super::parse;

    fn message(text: &str) -> String {
        parse(text).map_or_else(|complaints| complaints.to_string(), |tree| format!("accepted {tree}"))
    }

    #[test]
    fn broken_text_is_refused_with_line_column_and_a_line_that_passes() {
        assert_eq!(
            message("{\n  \"a\": 1\n  \"b\": 2\n}"),
            "line 3, column 3: `\"b\": 2` is refused: expected `,` or `}`; allowed: JSON (RFC 8259), every key once; \
             write line 2 as `\"a\": 1,`"
        );
        assert_eq!(
            message("{\n  \"a\": 1,\n}"),
            "line 3, column 1: `}` is refused: trailing comma; allowed: JSON (RFC 8259), every key once; write line 2 \
             as `\"a\": 1`"
        );
    }

    #[test]
    fn text_that_ends_early_is_refused_with_the_brackets_it_lacks() {
        assert_eq!(
            message("{\"a\": [\"}\\\"\""),
            "line 1, column 12: `{\"a\": [\"}\\\"\"` is refused: EOF while parsing a list; allowed: JSON (RFC 8259), \
             every key once; write `]}` at the end"
        );
    }

    #[test]
    fn a_repeated_key_is_refused() {
        assert_eq!(
            message("{\"phase\": 1, \"phase\": 2}"),
            "line 1, column 20: `{\"phase\": 1, \"phase\": 2}` is refused: key \"phase\" is repeated; allowed: JSON \
             (RFC 8259), every key once; correct this line"
        );
    }

    #[test]
    fn every_json_value_is_read_as_serde_json_reads_it() {
        let text = r#"{"a": [1, -2, 2.5e-3, true, null, "µ\n"], "b": {"c": {}}}"#;
        assert_eq!(parse(text).ok(), serde_json::from_str(text).ok());
    }
}
