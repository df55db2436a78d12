//! Every unit a configuration may hold, against the values of CODATA and NIST.

use std::f64::consts::PI;

use tdse_cli::config::quantity::{self, QUANTITIES, Refusal};
use tdse_core::units::Quantity;

// CODATA 2022 (Mohr, Newell, Taylor, Tiesinga, Rev. Mod. Phys. 97, 025002 (2025)): relative uncertainties below 4e-10.
const BOHR_M: f64 = 5.291_772_105_43e-11;
const HARTREE_EV: f64 = 27.211_386_245_981;
const TIME_S: f64 = 2.418_884_326_586_3e-17;
const FIELD_V_PER_M: f64 = 5.142_206_751_13e11;

/// What "1 unit" is in the base of its quantity, written out from the definitions of the prefixes (SI brochure, 2019).
const UNITS: [(Quantity, &str, f64); 35] = [
    (Quantity::Length, "nm", 1e-9 / BOHR_M),
    (Quantity::Length, "um", 1e-6 / BOHR_M),
    (Quantity::Length, "µm", 1e-6 / BOHR_M),
    (Quantity::Length, "angstrom", 1e-10 / BOHR_M),
    (Quantity::Length, "pm", 1e-12 / BOHR_M),
    (Quantity::Length, "m", 1.0 / BOHR_M),
    (Quantity::Length, "bohr", 1.0),
    (Quantity::Length, "au", 1.0),
    (Quantity::Energy, "eV", 1.0 / HARTREE_EV),
    (Quantity::Energy, "meV", 1e-3 / HARTREE_EV),
    (Quantity::Energy, "keV", 1e3 / HARTREE_EV),
    (Quantity::Energy, "hartree", 1.0),
    (Quantity::Energy, "au", 1.0),
    (Quantity::Time, "fs", 1e-15 / TIME_S),
    (Quantity::Time, "as", 1e-18 / TIME_S),
    (Quantity::Time, "ps", 1e-12 / TIME_S),
    (Quantity::Time, "s", 1.0 / TIME_S),
    (Quantity::Time, "au", 1.0),
    (Quantity::Intensity, "W/cm^2", 1.0),
    (Quantity::Intensity, "TW/cm^2", 1e12),
    (Quantity::Intensity, "PW/cm^2", 1e15),
    (Quantity::Intensity, "W/m^2", 1e-4),
    (Quantity::ElectricField, "V/m", 1.0 / FIELD_V_PER_M),
    (Quantity::ElectricField, "MV/cm", 1e8 / FIELD_V_PER_M),
    (Quantity::ElectricField, "GV/m", 1e9 / FIELD_V_PER_M),
    (Quantity::ElectricField, "V/nm", 1e9 / FIELD_V_PER_M),
    (Quantity::ElectricField, "V/angstrom", 1e10 / FIELD_V_PER_M),
    (Quantity::ElectricField, "au", 1.0),
    (Quantity::Angle, "deg", PI / 180.0),
    (Quantity::Angle, "rad", 1.0),
    (Quantity::Angle, "mrad", 1e-3),
    (Quantity::Angle, "pi", PI),
    (Quantity::Angle, "au", 1.0),
    (Quantity::Chirp, "rad/fs^2", (TIME_S * 1e15) * (TIME_S * 1e15)),
    (Quantity::Chirp, "au", 1.0),
];

#[test]
fn every_unit_has_the_value_of_codata() {
    for (quantity, symbol, expected) in UNITS {
        let value = quantity::value(quantity, &format!("2.5e0 {symbol}"));
        assert!((value / (2.5 * expected) - 1.0).abs() < 1e-9, "{symbol}: {value} against 2.5 x {expected}");
    }
}

#[test]
fn no_unit_is_left_unchecked() {
    for quantity in QUANTITIES {
        for unit in quantity.units() {
            let checked = UNITS.iter().any(|(q, symbol, _)| *q == quantity && *symbol == unit.symbol);
            assert!(checked, "{} of {}", unit.symbol, quantity.name());
        }
    }
}

/// Photon energy of 800 nm from the exact SI constants, hc = 1239.841984332 eV nm; E0 of 1e14 W/cm² from CODATA 2022.
#[test]
fn light_has_the_photon_energy_and_peak_field_of_the_constants() {
    let frequency = tdse_core::units::angular_frequency(quantity::value(Quantity::Length, "800 nm"));
    assert!((frequency * HARTREE_EV - 1_239.841_984_332 / 800.0).abs() < 1e-9, "{frequency}");
    let field = tdse_core::units::peak_field(quantity::value(Quantity::Intensity, "1e14 W/cm^2"));
    assert!((field - 0.053_380_267_7).abs() < 1e-10, "{field}");
}

#[test]
fn what_is_no_quantity_is_refused() {
    let shape = Err(Refusal::Shape);
    for text in
        ["", "1", "1nm", " 1 nm", "nm", "one nm", "nan nm", "inf nm", "1,5 nm", "0x10 nm", "1e nm", "1 2 nm"]
    {
        let parsed = quantity::parse(Quantity::Length, text);
        let unknown = matches!(parsed, Err(Refusal::UnknownUnit { .. }));
        assert!(parsed == shape || (text == "1 2 nm" && unknown), "{text:?}: {parsed:?}");
    }
    assert_eq!(quantity::parse(Quantity::Intensity, "1 au"), Err(Refusal::Ambiguous));
    assert_eq!(quantity::parse(Quantity::Length, "1e308 m"), Err(Refusal::TooLarge));
    assert_eq!(quantity::parse(Quantity::Time, "1 eV"), Err(Refusal::OtherQuantity(Quantity::Energy)));
}

#[test]
fn numbers_are_read_as_written() {
    for (text, expected) in [("1 au", 1.0), ("-.5 au", -0.5), ("+2. au", 2.0), ("1.5E-3  au", 1.5e-3)] {
        assert_eq!(
            quantity::parse(Quantity::Time, text).map(|parsed| parsed.value()),
            Ok(expected),
            "{text}"
        );
    }
}
