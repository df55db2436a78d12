//! Units of HDF5 files in the spelling of the Python library pint: products and quotients of names with whole powers, such as
//! `bohr**2 / atomic_unit_of_time**2`, `1/eV` or `electron_volt ** -1`.

use tdse_core::units::{BOHR_M, FIELD_V_PER_M, HARTREE_EV, TIME_S};

/// Elementary charge, C: joule per electronvolt (CODATA 2022, exact).
const EV_J: f64 = 1.602_176_634e-19;
/// Powers of energy, time, length and charge.
type Powers = [i32; 4];
const ENERGY: Powers = [1, 0, 0, 0];
const TIME: Powers = [0, 1, 0, 0];
const LENGTH: Powers = [0, 0, 1, 0];
const CHARGE: Powers = [0, 0, 0, 1];
const VOLT: Powers = [1, 0, 0, -1];
const WATT: Powers = [1, -1, 0, 0];

/// A unit: its size in atomic units, and of what it is.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Size {
    factor: f64,
    powers: Powers,
}

/// Long and short name, size in atomic units, and whether decimal prefixes go with it.
const UNITS: [(&[&str], f64, Powers, Prefixes); 12] = [
    (&["electron_volt", "eV"], 1.0 / HARTREE_EV, ENERGY, Prefixes::Any),
    (&["hartree", "E_h", "Eh"], 1.0, ENERGY, Prefixes::None),
    (&["joule", "J"], 1.0 / (HARTREE_EV * EV_J), ENERGY, Prefixes::Any),
    (&["second", "s"], 1.0 / TIME_S, TIME, Prefixes::Any),
    (&["atomic_unit_of_time", "a_u_time"], 1.0, TIME, Prefixes::None),
    (&["meter", "metre", "m"], 1.0 / BOHR_M, LENGTH, Prefixes::Any),
    (&["angstrom", "Å"], 1e-10 / BOHR_M, LENGTH, Prefixes::None),
    (&["bohr", "a_0", "atomic_unit_of_length"], 1.0, LENGTH, Prefixes::None),
    (&["elementary_charge", "e"], 1.0, CHARGE, Prefixes::None),
    (&["volt", "V"], 1.0 / (FIELD_V_PER_M * BOHR_M), VOLT, Prefixes::Any),
    (&["watt", "W"], TIME_S / (HARTREE_EV * EV_J), WATT, Prefixes::Any),
    (&["atomic_unit_of_electric_field", "a_u_electric_field"], 1.0, [1, 0, -1, -1], Prefixes::None),
];

#[derive(Clone, Copy, Debug, PartialEq)]
enum Prefixes {
    Any,
    None,
}

const PREFIXES: [(&str, &str, f64); 12] = [
    ("atto", "a", 1e-18),
    ("femto", "f", 1e-15),
    ("pico", "p", 1e-12),
    ("nano", "n", 1e-9),
    ("micro", "u", 1e-6),
    ("micro", "µ", 1e-6),
    ("milli", "m", 1e-3),
    ("centi", "c", 1e-2),
    ("kilo", "k", 1e3),
    ("mega", "M", 1e6),
    ("giga", "G", 1e9),
    ("tera", "T", 1e12),
];

/// Factor from the unit `from` to the unit `to`; `None` where one is not understood, or they measure different things.
pub fn factor(from: &str, to: &str) -> Option<f64> {
    let (from, to) = (size(from)?, size(to)?);
    (from.powers == to.powers).then(|| from.factor / to.factor)
}

/// Size of a product of units.
fn size(text: &str) -> Option<Size> {
    let text = text.replace("**", "^");
    let mut whole = Size { factor: 1.0, powers: [0; 4] };
    // From left to right: the sign before a factor holds for that factor alone.
    for (i, over) in text.split('/').enumerate() {
        for (j, part) in over.split('*').enumerate() {
            let (name, power) = match part.split_once('^') {
                Some((name, power)) => (name.trim(), power.trim().parse::<i32>().ok()?),
                None => (part.trim(), 1),
            };
            if name == "1" && power == 1 {
                continue;
            }
            let power = if i > 0 && j == 0 { -power } else { power };
            let unit = named(name)?;
            whole.factor *= unit.factor.powi(power);
            whole.powers.iter_mut().zip(unit.powers).for_each(|(sum, own)| *sum += power * own);
        }
    }
    Some(whole)
}

fn named(name: &str) -> Option<Size> {
    let size = |factor, powers| Some(Size { factor, powers });
    for (names, factor, powers, prefixes) in UNITS {
        if names.contains(&name) {
            return size(factor, powers);
        }
        let prefixed = PREFIXES.iter().find(|(long, short, _)| {
            // Long prefixes go with long names, short ones with the symbol, which stands last.
            let (symbol, full) = names.split_last().expect("every unit has a name");
            name.strip_prefix(short) == Some(symbol)
                || name.strip_prefix(long).is_some_and(|rest| full.contains(&rest))
        });
        if let (Some((.., scale)), Prefixes::Any) = (prefixed, prefixes) {
            return size(scale * factor, powers);
        }
    }
    None
}

#[cfg(test)]
mod tests {
    use super::factor;

    /// CODATA 2022 through pint 0.24's registry names; the field from 1 V/Å and the intensity by definition.
    #[test]
    fn units_are_those_that_pint_reads() {
        for (from, to, expected) in [
            ("meV", "eV", 1e-3),
            ("kiloelectron_volt", "eV", 1e3),
            ("hartree", "eV", 27.211_386_245_981),
            ("joule", "eV", 1.0 / 1.602_176_634e-19),
            ("bohr**2 / atomic_unit_of_time**2", "bohr ** 2 / atomic_unit_of_time ** 2", 1.0),
            ("1 / hartree", "1/eV", 1.0 / 27.211_386_245_981),
            ("electron_volt ** -1", "1 / eV", 1.0),
            ("1/s", "1/fs", 1e-15),
            ("1 / atomic_unit_of_time", "1 / femtosecond", 41.341_373_335),
            ("V/angstrom", "V/m", 1e10),
            ("GV / m", "volt / meter", 1e9),
            ("hartree / elementary_charge / bohr", "V/m", 5.142_206_751_12e11),
            ("W/m**2", "W/cm**2", 1e-4),
            ("V / m * nm", "V", 1e-9),
            ("joule / fs * ps / bohr * angstrom", "J", 1e3 / 0.529_177_210_544),
            ("TW / centimeter^2", "W/cm**2", 1e12),
        ] {
            let found = factor(from, to).unwrap_or_else(|| panic!("{from} to {to}"));
            assert!((found / expected - 1.0).abs() < 1e-9, "{from} to {to}: {found} against {expected}");
        }
    }

    #[test]
    fn units_of_something_else_are_not_taken() {
        for (from, to) in [
            ("nm", "eV"),
            ("1/eV", "eV"),
            ("", "eV"),
            ("eV*", "eV"),
            ("kbohr", "m"),
            ("au", "eV"),
            ("eV^x", "eV"),
        ] {
            assert_eq!(factor(from, to), None, "{from} to {to}");
        }
    }
}
