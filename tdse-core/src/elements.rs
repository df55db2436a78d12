//! Elements whose first ionization energy can stand for a softening.

use crate::units::HARTREE_EV;

/// An element by its symbol, with the energy that frees its first electron.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Element {
    /// Chemical symbol.
    pub symbol: &'static str,
    /// First ionization energy, eV.
    pub ionization_energy_ev: f64,
}

/// Hydrogen and the noble gases; first ionization energies of the NIST Atomic Spectra Database.
pub const ELEMENTS: [Element; 6] = [
    Element { symbol: "H", ionization_energy_ev: 13.598_434_599_702 },
    Element { symbol: "He", ionization_energy_ev: 24.587_389_011 },
    Element { symbol: "Ne", ionization_energy_ev: 21.564_541 },
    Element { symbol: "Ar", ionization_energy_ev: 15.759_611_9 },
    Element { symbol: "Kr", ionization_energy_ev: 13.999_605_5 },
    Element { symbol: "Xe", ionization_energy_ev: 12.129_843_7 },
];

impl Element {
    /// The element with this symbol.
    pub fn with_symbol(symbol: &str) -> Option<&'static Self> {
        ELEMENTS.iter().find(|element| element.symbol == symbol)
    }

    /// First ionization energy, hartree.
    pub fn ionization_energy(&self) -> f64 {
        self.ionization_energy_ev / HARTREE_EV
    }
}

#[cfg(test)]
mod tests {
    use super::Element;

    /// Hydrogen with a nucleus of finite mass, ½ m_p/(m_p + m_e) hartree (Bohr; m_p/m_e = 1836.152673426, CODATA 2022,
    /// from memory); fine structure and the Lamb shift are of order α²/8 and below.
    #[test]
    fn hydrogen_has_the_bohr_energy_to_its_fine_structure() {
        let bohr = 0.5 / (1.0 + 1.0 / 1_836.152_673_426);
        let tabulated = Element::with_symbol("H").map(Element::ionization_energy);
        let difference = tabulated.map(|energy| (energy - bohr).abs());
        assert!(difference.is_some_and(|d| d < 1e-5), "{tabulated:?} against {bohr}");
    }

    #[test]
    fn an_unknown_symbol_is_none() {
        assert_eq!(Element::with_symbol("Unobtainium"), None);
    }
}
