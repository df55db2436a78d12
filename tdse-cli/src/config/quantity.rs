//! Values with a unit: `"1.5e14 W/cm^2"`.

use tdse_core::units::{ENERGY_FLUX_W_PER_CM2, INTENSITY_W_PER_CM2, Quantity, Unit};

/// Every quantity a configuration may hold.
pub const QUANTITIES: [Quantity; 7] = [
    Quantity::Length,
    Quantity::Energy,
    Quantity::Time,
    Quantity::Intensity,
    Quantity::ElectricField,
    Quantity::Angle,
    Quantity::Chirp,
];

/// A number and its unit, as written.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Parsed {
    /// The number before the unit.
    pub number: f64,
    /// The unit.
    pub unit: Unit,
}

impl Parsed {
    /// Value in the base of its quantity: atomic units, W/cm² for intensity.
    pub fn value(&self) -> f64 {
        self.number * self.unit.factor
    }
}

/// Why a text is no value of a quantity.
#[derive(Clone, Debug, PartialEq)]
pub enum Refusal {
    /// Not a number, a space and a unit.
    Shape,
    /// `au` of intensity.
    Ambiguous,
    /// The unit belongs to another quantity; the number is kept.
    OtherQuantity(Quantity),
    /// No quantity has this unit.
    UnknownUnit {
        /// The number before the unit.
        number: String,
        /// The unit as written.
        unit: String,
    },
    /// Too large for double precision.
    TooLarge,
}

impl Refusal {
    /// What is wrong with the text, said after it.
    pub fn reason(&self, quantity: Quantity) -> String {
        match self {
            Self::Shape => "is not a number, a space and a unit".into(),
            Self::Ambiguous => format!(
                "is ambiguous: two atomic units of intensity exist, {INTENSITY_W_PER_CM2:.3e} W/cm^2 (peak field \
                 1 a.u.) and {ENERGY_FLUX_W_PER_CM2:.3e} W/cm^2 (hartree per bohr^2 and atomic unit of time)"
            ),
            Self::OtherQuantity(other) => {
                format!("has a unit of {}, not of {}", other.name(), quantity.name())
            }
            Self::UnknownUnit { unit, .. } => format!("has the unknown unit {unit:?}"),
            Self::TooLarge => "is too large".into(),
        }
    }
}

/// Reads a number, at least one space, and a unit of `quantity`.
pub fn parse(quantity: Quantity, text: &str) -> Result<Parsed, Refusal> {
    let (number_text, unit_text) = text.split_once(' ').ok_or(Refusal::Shape)?;
    let number = number(number_text).ok_or(Refusal::Shape)?;
    let unit_text = unit_text.trim_start_matches(' ');
    let unit = quantity.unit(unit_text).ok_or_else(|| wrong_unit(quantity, number_text, unit_text))?;
    let parsed = Parsed { number, unit };
    if parsed.value().is_finite() { Ok(parsed) } else { Err(Refusal::TooLarge) }
}

/// Value in the base of the quantity.
///
/// # Panics
/// If `text` is no value of `quantity`: every text that reaches this has passed the structure check.
pub fn value(quantity: Quantity, text: &str) -> f64 {
    match parse(quantity, text) {
        Ok(parsed) => parsed.value(),
        Err(refusal) => panic!("unchecked quantity: {text:?} {}", refusal.reason(quantity)),
    }
}

/// The quantity called `name`.
pub fn named(name: &str) -> Option<Quantity> {
    QUANTITIES.into_iter().find(|quantity| quantity.name() == name)
}

/// Shortest decimal that reads back as the same number.
pub fn digits(number: f64) -> String {
    if number != 0.0 && !(1e-4..1e6).contains(&number.abs()) {
        format!("{number:e}")
    } else {
        format!("{number}")
    }
}

/// A JSON number in its shortest spelling: `1e14`, not `100000000000000.0`.
pub fn number_text(number: &serde_json::Number) -> String {
    match number.as_f64() {
        Some(value) if number.is_f64() => digits(value),
        _ => number.to_string(),
    }
}

/// The nearest number with this many significant decimal digits.
pub fn rounded(number: f64, significant: usize) -> f64 {
    format!("{number:.*e}", significant.saturating_sub(1)).parse().unwrap_or(number)
}

/// A regular expression (ECMA 262, as JSON Schema wants it) for the texts that [`parse`] reads.
pub fn pattern(quantity: Quantity) -> String {
    let units: Vec<String> = quantity.units().iter().map(|unit| unit.symbol.replace('^', "\\^")).collect();
    format!("^[+-]?([0-9]+(\\.[0-9]*)?|\\.[0-9]+)([eE][+-]?[0-9]+)? +({})$", units.join("|"))
}

/// A decimal number, without the words for infinity and undefined that Rust would read too.
pub fn number(text: &str) -> Option<f64> {
    let decimal = text.bytes().all(|b| matches!(b, b'0'..=b'9' | b'+' | b'-' | b'.' | b'e' | b'E'));
    if decimal { text.parse().ok() } else { None }
}

fn wrong_unit(quantity: Quantity, number: &str, unit: &str) -> Refusal {
    if quantity == Quantity::Intensity && unit == "au" {
        return Refusal::Ambiguous;
    }
    let owner = QUANTITIES.into_iter().find(|other| other.unit(unit).is_some());
    owner.map_or_else(
        || Refusal::UnknownUnit { number: number.into(), unit: unit.into() },
        Refusal::OtherQuantity,
    )
}
