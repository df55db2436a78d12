//! Wrong configurations of one point, and what is said of them.

/// Changes to the sound configuration, and what is said of the result.
pub struct Case {
    /// What is wrong.
    pub name: &'static str,
    /// Pointer, and JSON to write there; `None` takes the key out.
    pub edits: &'static [(&'static str, Option<&'static str>)],
    /// The whole message, line by line.
    pub says: &'static [&'static str],
}

/// Every case.
pub const CASES: &[Case] = &[
    Case {
        name: "unknown key",
        edits: &[("/field/pulses/0/wavelenght", Some(r#""800 nm""#)), ("/field/pulses/0/wavelength", None)],
        says: &[
            r#"/field/pulses/0/wavelenght: "800 nm" stands under an unknown key; allowed: the keys note, wavelength, photon_energy, intensity, peak_field, envelope, phase, delay, chirp, ellipticity, angle; as its key try "wavelength""#,
        ],
    },
    Case {
        name: "unknown key at the top",
        edits: &[("/fields", Some("{}"))],
        says: &[
            "/fields: {} stands under an unknown key; allowed: the keys $schema, note, title, atom, field, numerics, outputs, models, scan; leave it out",
        ],
    },
    Case {
        name: "key of another kind",
        edits: &[("/field/pulses/0/envelope/fwhm", Some(r#""6 fs""#))],
        says: &[
            r#"/field/pulses/0/envelope/fwhm: "6 fs" stands under an unknown key; allowed: the keys kind, note, cycles, duration; at /field/pulses/0/envelope try {"kind":"sin2","cycles":4}"#,
        ],
    },
    Case {
        name: "bare number",
        edits: &[("/field/pulses/0/wavelength", Some("800"))],
        says: &[
            r#"/field/pulses/0/wavelength: 800 has no unit; allowed: a length in nm, um, µm, angstrom, pm, m, bohr or au, from 1 nm to 100 um; try "800 nm""#,
        ],
    },
    Case {
        name: "bare number for an intensity",
        edits: &[("/field/pulses/0/intensity", Some("1e14"))],
        says: &[
            r#"/field/pulses/0/intensity: 1e14 has no unit; allowed: an intensity in W/cm^2, TW/cm^2, PW/cm^2 or W/m^2, above 0 W/cm^2, up to 1e18 W/cm^2; try "1e14 W/cm^2""#,
        ],
    },
    Case {
        name: "unit of another quantity",
        edits: &[("/field/pulses/0/wavelength", Some(r#""1.55 eV""#))],
        says: &[
            r#"/field/pulses/0/wavelength: "1.55 eV" has a unit of energy, not of length; allowed: a length in nm, um, µm, angstrom, pm, m, bohr or au, from 1 nm to 100 um; try "800 nm""#,
        ],
    },
    Case {
        name: "unknown unit",
        edits: &[("/field/pulses/0/intensity", Some(r#""1e14 W/cm2""#))],
        says: &[
            r#"/field/pulses/0/intensity: "1e14 W/cm2" has the unknown unit "W/cm2"; allowed: an intensity in W/cm^2, TW/cm^2, PW/cm^2 or W/m^2, above 0 W/cm^2, up to 1e18 W/cm^2; try "1e14 W/cm^2""#,
        ],
    },
    Case {
        name: "no space before the unit",
        edits: &[("/field/pulses/0/wavelength", Some(r#""800nm""#))],
        says: &[
            r#"/field/pulses/0/wavelength: "800nm" is not a number, a space and a unit; allowed: a length in nm, um, µm, angstrom, pm, m, bohr or au, from 1 nm to 100 um; try "800 nm""#,
        ],
    },
    Case {
        name: "quantity without unit",
        edits: &[("/field/pulses/0/phase", Some(r#""90""#))],
        says: &[
            r#"/field/pulses/0/phase: "90" is not a number, a space and a unit; allowed: an angle in deg, rad, mrad, pi or au; try "90 deg""#,
        ],
    },
    Case {
        name: "word for a number",
        edits: &[("/field/pulses/0/phase", Some(r#""inf deg""#))],
        says: &[
            r#"/field/pulses/0/phase: "inf deg" is not a number, a space and a unit; allowed: an angle in deg, rad, mrad, pi or au; try "0 deg""#,
        ],
    },
    Case {
        name: "too large for double precision",
        edits: &[("/field/pulses/0/delay", Some(r#""1e300 s""#))],
        says: &[
            r#"/field/pulses/0/delay: "1e300 s" is too large; allowed: a time in fs, as, ps, s or au, from -10 ps to 10 ps; try "1.5 fs""#,
        ],
    },
    Case {
        name: "au of intensity",
        edits: &[("/field/pulses/0/intensity", Some(r#""3 au""#))],
        says: &[
            r#"/field/pulses/0/intensity: "3 au" is ambiguous: two atomic units of intensity exist, 3.509e16 W/cm^2 (peak field 1 a.u.) and 6.436e15 W/cm^2 (hartree per bohr^2 and atomic unit of time); allowed: an intensity in W/cm^2, TW/cm^2, PW/cm^2 or W/m^2, above 0 W/cm^2, up to 1e18 W/cm^2; try "1.5e14 W/cm^2""#,
        ],
    },
    Case {
        name: "negative intensity",
        edits: &[("/field/pulses/0/intensity", Some(r#""-1e14 W/cm^2""#))],
        says: &[
            r#"/field/pulses/0/intensity: "-1e14 W/cm^2" is out of range; allowed: an intensity in W/cm^2, TW/cm^2, PW/cm^2 or W/m^2, above 0 W/cm^2, up to 1e18 W/cm^2; try "1.5e14 W/cm^2""#,
        ],
    },
    Case {
        name: "intensity zero",
        edits: &[("/field/pulses/0/intensity", Some(r#""0 W/cm^2""#))],
        says: &[
            r#"/field/pulses/0/intensity: "0 W/cm^2" is out of range; allowed: an intensity in W/cm^2, TW/cm^2, PW/cm^2 or W/m^2, above 0 W/cm^2, up to 1e18 W/cm^2; try "1.5e14 W/cm^2""#,
        ],
    },
    Case {
        name: "wavelength out of range",
        edits: &[("/field/pulses/0/wavelength", Some(r#""800 m""#))],
        says: &[
            r#"/field/pulses/0/wavelength: "800 m" is out of range; allowed: a length in nm, um, µm, angstrom, pm, m, bohr or au, from 1 nm to 100 um; try "800 nm""#,
        ],
    },
    Case {
        name: "wavelength and photon energy",
        edits: &[("/field/pulses/0/photon_energy", Some(r#""1.55 eV""#))],
        says: &[
            r#"/field/pulses/0/photon_energy: "1.55 eV" stands beside wavelength "800 nm"; allowed: one of wavelength and photon_energy; at /field/pulses/0 try {"wavelength":"800 nm","intensity":"1e14 W/cm^2","envelope":{"kind":"sin2","cycles":4}}"#,
        ],
    },
    Case {
        name: "neither wavelength nor photon energy",
        edits: &[("/field/pulses/0/wavelength", None)],
        says: &[
            r#"/field/pulses/0/wavelength: is missing, and so is photon_energy; allowed: one of wavelength and photon_energy; try "800 nm""#,
        ],
    },
    Case {
        name: "intensity and peak field",
        edits: &[("/field/pulses/0/peak_field", Some(r#""0.05 au""#))],
        says: &[
            r#"/field/pulses/0/peak_field: "0.05 au" stands beside intensity "1e14 W/cm^2"; allowed: one of intensity and peak_field; at /field/pulses/0 try {"wavelength":"800 nm","intensity":"1e14 W/cm^2","envelope":{"kind":"sin2","cycles":4}}"#,
        ],
    },
    Case {
        name: "neither intensity nor peak field",
        edits: &[("/field/pulses/0/intensity", None)],
        says: &[
            r#"/field/pulses/0/intensity: is missing, and so is peak_field; allowed: one of intensity and peak_field; try "1.5e14 W/cm^2""#,
        ],
    },
    Case {
        name: "cycles and duration",
        edits: &[("/field/pulses/0/envelope/duration", Some(r#""10 fs""#))],
        says: &[
            r#"/field/pulses/0/envelope/duration: "10 fs" stands beside cycles 4; allowed: one of cycles and duration; at /field/pulses/0/envelope try {"kind":"sin2","cycles":4}"#,
        ],
    },
    Case {
        name: "neither cycles nor duration",
        edits: &[("/field/pulses/0/envelope/cycles", None)],
        says: &[
            "/field/pulses/0/envelope/cycles: is missing, and so is duration; allowed: one of cycles and duration; try 6",
        ],
    },
    Case {
        name: "envelope shorter than a cycle",
        edits: &[("/field/pulses/0/envelope/cycles", Some("0.5"))],
        says: &[
            "/field/pulses/0/envelope/cycles: 0.5 is out of range; allowed: a number from 1 to 10000; try 6",
        ],
    },
    Case {
        name: "duration shorter than a cycle",
        edits: &[("/field/pulses/0/envelope", Some(r#"{"kind": "sin2", "duration": "2 fs"}"#))],
        says: &[
            r#"/field/pulses/0/envelope/duration: "2 fs" is shorter than a cycle; allowed: at least one cycle, 2.669 fs; try "16.01 fs""#,
        ],
    },
    Case {
        name: "unknown envelope",
        edits: &[("/field/pulses/0/envelope/kind", Some(r#""sine2""#))],
        says: &[
            r#"/field/pulses/0/envelope/kind: "sine2" is unknown; allowed: "sin2", "gaussian" or "flat_top"; try "sin2""#,
        ],
    },
    Case {
        name: "envelope as a word",
        edits: &[("/field/pulses/0/envelope", Some(r#""gaussian""#))],
        says: &[
            r#"/field/pulses/0/envelope: "gaussian" is a text; allowed: an object whose "kind" is "sin2", "gaussian" or "flat_top"; try {"kind":"gaussian","fwhm":"6 fs"}"#,
        ],
    },
    Case {
        name: "envelope without kind",
        edits: &[("/field/pulses/0/envelope/kind", None)],
        says: &[
            r#"/field/pulses/0/envelope/kind: is missing; allowed: "sin2", "gaussian" or "flat_top"; try "sin2""#,
        ],
    },
    Case {
        name: "missing envelope",
        edits: &[("/field/pulses/0/envelope", None)],
        says: &[
            r#"/field/pulses/0/envelope: is missing; allowed: an object whose "kind" is "sin2", "gaussian" or "flat_top"; try {"kind":"sin2","cycles":6}"#,
        ],
    },
    Case {
        name: "chirp through zero frequency",
        edits: &[("/field/pulses/0/chirp", Some(r#""-1 rad/fs^2""#))],
        says: &[
            r#"/field/pulses/0/chirp: "-1 rad/fs^2" makes the instantaneous frequency negative within the envelope; allowed: a chirp between 0 and -0.441 rad/fs^2; try "-0.221 rad/fs^2""#,
        ],
    },
    Case {
        name: "ellipticity above 1",
        edits: &[("/field/pulses/0/ellipticity", Some("1.5"))],
        says: &["/field/pulses/0/ellipticity: 1.5 is out of range; allowed: a number from -1 to 1; try 0"],
    },
    Case {
        name: "ellipticity in one dimension",
        edits: &[("/field/pulses/0/ellipticity", Some("0.3"))],
        says: &["/field/pulses/0/ellipticity: 0.3 needs two dimensions; allowed: 0 in one dimension; try 0"],
    },
    Case {
        name: "angle in one dimension",
        edits: &[("/field/pulses/0/angle", Some(r#""30 deg""#))],
        says: &[
            r#"/field/pulses/0/angle: "30 deg" needs two dimensions; allowed: 0 deg in one dimension; try "0 deg""#,
        ],
    },
    Case {
        name: "no field",
        edits: &[("/field/pulses", Some("[]"))],
        says: &[
            r#"/field/pulses: [] holds no pulse, and no field is sampled; allowed: at least one pulse; try [{"wavelength":"800 nm","intensity":"1e14 W/cm^2","envelope":{"kind":"sin2","cycles":6}}]"#,
        ],
    },
    Case {
        name: "pulse instead of a list",
        edits: &[("/field/pulses", Some(r#"{"wavelength": "800 nm"}"#))],
        says: &[
            r#"/field/pulses: {"wavelength":"800 nm"} is an object; allowed: a list; try [{"wavelength":"800 nm","intensity":"1e14 W/cm^2","envelope":{"kind":"sin2","cycles":6}}]"#,
        ],
    },
    Case {
        name: "missing atom",
        edits: &[("/atom", None)],
        says: &[
            r#"/atom: is missing; allowed: an object with the keys note, dimensions, potential, ionization_energy, element, state; try {"potential":{"kind":"soft_coulomb"},"element":"Ar"}"#,
        ],
    },
    Case {
        name: "angular momentum on a line",
        edits: &[("/atom/state/angular_momentum", Some("1"))],
        says: &[
            r#"/atom/state/angular_momentum: 1 needs two dimensions; allowed: the key only beside dimensions 2; at /atom/state try {"kind":"single","number":0}"#,
        ],
    },
    Case {
        name: "round absorber on a line",
        edits: &[("/numerics/absorber", Some(r#"{"kind":"smooth","shape":"round"}"#))],
        says: &[
            r#"/numerics/absorber/shape: "round" needs two dimensions; allowed: the key only beside dimensions 2; at /numerics/absorber try {"kind":"smooth"}"#,
        ],
    },
    Case {
        name: "one parity of two",
        edits: &[("/atom/dimensions", Some("2")), ("/atom/state/parity_x", Some(r#""odd""#))],
        says: &[r#"/atom/state/parity_y: is missing beside parity_x; allowed: even or odd; try "even""#],
    },
    Case {
        name: "parity beside an angular momentum",
        edits: &[
            ("/atom/dimensions", Some("2")),
            ("/atom/state/angular_momentum", Some("1")),
            ("/atom/state/parity_x", Some(r#""odd""#)),
        ],
        says: &[
            r#"/atom/state/parity_x: "odd" stands beside angular_momentum 1; allowed: angular_momentum, or parity_x with parity_y; at /atom/state try {"kind":"single","number":0,"angular_momentum":1}"#,
        ],
    },
    Case {
        name: "the same state of the plane twice",
        edits: &[
            ("/atom/dimensions", Some("2")),
            (
                "/atom/state",
                Some(
                    r#"{"kind":"superposition","terms":[{"number":0},{"number":0,"angular_momentum":1},{"number":0,"angular_momentum":0}]}"#,
                ),
            ),
        ],
        says: &["/atom/state/terms/2/number: 0 is repeated; allowed: every state at most once; try 1"],
    },
    Case {
        name: "scattering states in the plane",
        edits: &[
            ("/atom/dimensions", Some("2")),
            ("/outputs/photoelectrons", Some("{}")),
            ("/numerics/electron_method", Some(r#""scattering_states""#)),
        ],
        says: &[
            r#"/numerics/electron_method: "scattering_states" needs one dimension; allowed: outgoing_amplitude, with an absorber, in two dimensions; try "outgoing_amplitude""#,
        ],
    },
    Case {
        name: "electrons of the plane without absorber",
        edits: &[
            ("/atom/dimensions", Some("2")),
            ("/outputs/photoelectrons", Some("{}")),
            ("/numerics/absorber", Some(r#"{"kind":"none"}"#)),
        ],
        says: &[
            r#"/numerics/absorber: {"kind":"none"} takes nothing, and the electrons of two dimensions are what an absorber takes; allowed: outgoing_amplitude, with an absorber, in two dimensions; at /numerics try {"accuracy":0.0001}"#,
        ],
    },
    Case {
        name: "three dimensions",
        edits: &[("/atom/dimensions", Some("3"))],
        says: &["/atom/dimensions: 3 is out of range; allowed: a whole number from 1 to 2; try 1"],
    },
    Case {
        name: "softening and ionization energy",
        edits: &[("/atom/potential/softening", Some(r#""1.4 bohr""#))],
        says: &[
            r#"/atom/ionization_energy: "15.7596 eV" stands beside /atom/potential/softening "1.4 bohr"; allowed: one of softening, ionization_energy and element; at /atom/potential try {"kind":"soft_coulomb","charge":1}"#,
        ],
    },
    Case {
        name: "ionization energy and element",
        edits: &[("/atom/element", Some(r#""Ar""#))],
        says: &[
            r#"/atom/element: "Ar" stands beside ionization_energy "15.7596 eV"; allowed: one of ionization_energy and element; at /atom try {"dimensions":1,"potential":{"kind":"soft_coulomb","charge":1},"ionization_energy":"15.7596 eV","state":{"kind":"single","number":0}}"#,
        ],
    },
    Case {
        name: "softening without value or target",
        edits: &[("/atom/ionization_energy", None)],
        says: &[
            r#"/atom/potential/softening: is missing, and nothing tunes it; allowed: one of softening, /atom/ionization_energy and /atom/element; try "1.414 bohr""#,
        ],
    },
    Case {
        name: "unknown element",
        edits: &[("/atom/ionization_energy", None), ("/atom/element", Some(r#""Argon""#))],
        says: &[
            r#"/atom/element: "Argon" is unknown; allowed: "H", "He", "Ne", "Ar", "Kr" or "Xe"; try "Ar""#,
        ],
    },
    Case {
        name: "nothing to tune",
        edits: &[("/atom/potential", Some(r#"{"kind": "poschl_teller", "lambda": 1, "width": "1 bohr"}"#))],
        says: &[
            r#"/atom/ionization_energy: "15.7596 eV" stands beside a potential without softening; allowed: the key only with soft_coulomb and screened; at /atom try {"dimensions":1,"potential":{"kind":"poschl_teller","lambda":1,"width":"1 bohr"},"state":{"kind":"single","number":0}}"#,
        ],
    },
    Case {
        name: "missing width",
        edits: &[
            ("/atom/ionization_energy", None),
            ("/atom/potential", Some(r#"{"kind": "poschl_teller", "lambda": 1}"#)),
        ],
        says: &[
            r#"/atom/potential/width: is missing; allowed: a length in nm, um, µm, angstrom, pm, m, bohr or au, above 0 bohr; try "1 bohr""#,
        ],
    },
    Case {
        name: "lambda zero",
        edits: &[
            ("/atom/ionization_energy", None),
            ("/atom/potential", Some(r#"{"kind": "poschl_teller", "lambda": 0, "width": "1 bohr"}"#)),
        ],
        says: &["/atom/potential/lambda: 0 is out of range; allowed: a number above 0, up to 1000; try 1"],
    },
    Case {
        name: "charge as text",
        edits: &[("/atom/potential/charge", Some(r#""2""#))],
        says: &[r#"/atom/potential/charge: "2" is a text; allowed: a number above 0, up to 100; try 2"#],
    },
    Case {
        name: "state number not whole",
        edits: &[("/atom/state/number", Some("0.5"))],
        says: &[
            "/atom/state/number: 0.5 is not a whole number; allowed: a whole number from 0 to 1000; try 0",
        ],
    },
    Case {
        name: "superposition without members",
        edits: &[("/atom/state", Some(r#"{"kind": "superposition", "terms": []}"#))],
        says: &[
            r#"/atom/state/terms: [] is empty; allowed: a list with at least one element; try [{"number":0},{"number":1}]"#,
        ],
    },
    Case {
        name: "repeated member",
        edits: &[(
            "/atom/state",
            Some(r#"{"kind": "superposition", "terms": [{"number": 0}, {"number": 0}]}"#),
        )],
        says: &["/atom/state/terms/1/number: 0 is repeated; allowed: every state at most once; try 1"],
    },
    Case {
        name: "weights all zero",
        edits: &[(
            "/atom/state",
            Some(r#"{"kind": "superposition", "terms": [{"number": 0, "weight": 0}]}"#),
        )],
        says: &[
            "/atom/state/terms/0/weight: 0 is 0, and so is every other; allowed: at least one weight above 0; try 1",
        ],
    },
    Case {
        name: "negative weight",
        edits: &[(
            "/atom/state",
            Some(r#"{"kind": "superposition", "terms": [{"number": 0, "weight": -1}]}"#),
        )],
        says: &["/atom/state/terms/0/weight: -1 is out of range; allowed: a number from 0 to 1000000; try 1"],
    },
    Case {
        name: "missing file",
        edits: &[("/field/sampled", Some(r#"{"file": "pulses.csv"}"#))],
        says: &[
            r#"/field/sampled/file: "pulses.csv" cannot be read (no such file); allowed: the path of a CSV file, relative to the configuration's folder; try "pulse.csv""#,
        ],
    },
    Case {
        name: "a sampled component along y on the line",
        edits: &[("/field/sampled", Some(r#"{"file": "crossed.csv"}"#))],
        says: &[
            r#"/field/sampled/file: "crossed.csv" has a component along y, which needs two dimensions; allowed: the header time [fs],electric_field [V/m] in one dimension; at /atom/dimensions try 2"#,
        ],
    },
    Case {
        name: "a potential of both sides on a plane",
        edits: &[
            ("/atom/dimensions", Some("2")),
            ("/atom/ionization_energy", None),
            ("/atom/potential", Some(r#"{"kind": "sampled", "file": "sides.csv"}"#)),
        ],
        says: &[
            r#"/atom/potential/file: "sides.csv" begins at -500 bohr; in two dimensions its positions are distances from the centre; allowed: a table from 0 bohr on; at /atom/dimensions try 1"#,
        ],
    },
    Case {
        name: "wrong hash",
        edits: &[("/field/sampled", Some(r#"{"file": "pulse.csv", "sha256": "00"}"#))],
        says: &[
            r#"/field/sampled/sha256: "00" is not the SHA-256 of "pulse.csv"; allowed: the SHA-256 of the contents, or the key left out; try "e1fca66ebd2196442421e3b89201e94fe33d2a6f38955e0e92e995295695edf0""#,
        ],
    },
    Case {
        name: "accuracy out of range",
        edits: &[("/numerics/accuracy", Some("2"))],
        says: &["/numerics/accuracy: 2 is out of range; allowed: a number from 1e-10 to 0.1; try 0.0001"],
    },
    Case {
        name: "unknown scheme",
        edits: &[("/numerics/scheme", Some(r#""fourthorder""#))],
        says: &[
            r#"/numerics/scheme: "fourthorder" is unknown; allowed: "fourth_order" or "strang"; try "fourth_order""#,
        ],
    },
    Case {
        name: "null",
        edits: &[("/numerics/spacing", Some("null"))],
        says: &[
            r#"/numerics/spacing: null is no value; allowed: a length in nm, um, µm, angstrom, pm, m, bohr or au, above 0 bohr; try "0.4 bohr""#,
        ],
    },
    Case {
        name: "number for a truth value",
        edits: &[("/numerics/common", Some("1"))],
        says: &["/numerics/common: 1 is a number; allowed: true or false; try false"],
    },
    Case {
        name: "negative trailing time",
        edits: &[("/numerics/trailing_time", Some(r#""-1 fs""#))],
        says: &[
            r#"/numerics/trailing_time: "-1 fs" is out of range; allowed: a time in fs, as, ps, s or au, from 0 fs; try "2 fs""#,
        ],
    },
    Case {
        name: "energy step beyond the axis",
        edits: &[("/outputs/harmonics/energy_step", Some(r#""1 keV""#))],
        says: &[
            r#"/outputs/harmonics/energy_step: "1 keV" does not fit max_energy "60 eV"; allowed: a step that divides the axis into 1 to 1000000 parts; try "0.06 eV""#,
        ],
    },
    Case {
        name: "window without length",
        edits: &[("/outputs/harmonics/window", Some(r#"{"kind": "taper"}"#))],
        says: &[
            r#"/outputs/harmonics/window/length: is missing; allowed: a time in fs, as, ps, s or au, above 0 fs; try "3 fs""#,
        ],
    },
    Case {
        name: "electrons of a harmonic potential",
        edits: &[
            ("/outputs/photoelectrons", Some(r#"{"max_energy": "100 eV"}"#)),
            ("/atom/potential", Some(r#"{"kind": "harmonic", "frequency": "0.5 au"}"#)),
            ("/atom/ionization_energy", None),
        ],
        says: &[
            r#"/outputs/photoelectrons: {"max_energy":"100 eV"} asks for electrons of an atom that lets none go: a harmonic potential has no continuum; allowed: the key left out; at /outputs try {"harmonics":{"max_energy":"60 eV"}}"#,
        ],
    },
    Case {
        name: "electron step beyond the axis",
        edits: &[("/outputs/photoelectrons", Some(r#"{"max_energy": "50 eV", "energy_step": "60 eV"}"#))],
        says: &[
            r#"/outputs/photoelectrons/energy_step: "60 eV" does not fit max_energy "50 eV"; allowed: a step that divides the axis into 1 to 1000000 parts; try "0.05 eV""#,
        ],
    },
    Case {
        name: "scattering states beside an absorber",
        edits: &[
            ("/outputs/photoelectrons", Some("{}")),
            ("/numerics/electron_method", Some(r#""scattering_states""#)),
            ("/numerics/absorber", Some(r#"{"kind": "smooth"}"#)),
        ],
        says: &[
            r#"/numerics/electron_method: "scattering_states" needs a box that nothing leaves, and /numerics/absorber is smooth; allowed: outgoing_amplitude beside an absorber; try "outgoing_amplitude""#,
        ],
    },
    Case {
        name: "outgoing amplitude without an absorber",
        edits: &[
            ("/outputs/photoelectrons", Some("{}")),
            ("/numerics/electron_method", Some(r#""outgoing_amplitude""#)),
            ("/numerics/absorber", Some(r#"{"kind": "none"}"#)),
        ],
        says: &[
            r#"/numerics/electron_method: "outgoing_amplitude" collects what an absorber takes, and /numerics/absorber is none; allowed: scattering_states without an absorber; try "scattering_states""#,
        ],
    },
    Case {
        name: "a way to no electrons",
        edits: &[("/numerics/electron_method", Some(r#""scattering_states""#))],
        says: &[
            r#"/numerics/electron_method: "scattering_states" has no use without outputs.photoelectrons; allowed: the key left out; at /numerics try {"accuracy":0.0001}"#,
        ],
    },
    Case {
        name: "an unknown model",
        edits: &[("/models", Some(r#"{"three_steps": {}}"#))],
        says: &[
            r#"/models/three_steps: {} stands under an unknown key; allowed: the keys note, tolerance, three_step, strong_field, quantum_orbits, tunnelling, perturbation, recombination, curve; as its key try "three_step""#,
        ],
    },
    Case {
        name: "a model where none is",
        edits: &[("/models", Some(r#"{"barrier": {}}"#))],
        says: &[
            "/models/barrier: {} stands under an unknown key; allowed: the keys note, tolerance, three_step, strong_field, quantum_orbits, tunnelling, perturbation, recombination, curve; at /models try {}",
        ],
    },
    Case {
        name: "a tolerance below zero",
        edits: &[("/models", Some(r#"{"tolerance": {"orders": -1}, "three_step": {}}"#))],
        says: &["/models/tolerance/orders: -1 is out of range; allowed: a number from 0; try 2"],
    },
    Case {
        name: "strong field from a superposition",
        edits: &[
            ("/models", Some(r#"{"strong_field": {}}"#)),
            ("/atom/ionization_energy", None),
            ("/atom/potential/softening", Some(r#""1.4 bohr""#)),
            (
                "/atom/state",
                Some(
                    r#"{"kind": "superposition", "terms": [{"number": 0, "weight": 1}, {"number": 1, "weight": 1}]}"#,
                ),
            ),
        ],
        says: &[
            "/models/strong_field: {} starts from one bound state, and /atom/state is a superposition; allowed: three_step and curve beside a superposition; every model beside a single state; at /models try {}",
        ],
    },
    Case {
        name: "strong field from a state of a parity",
        edits: &[
            ("/models", Some(r#"{"three_step": {}, "strong_field": {}}"#)),
            ("/atom/dimensions", Some("2")),
            ("/atom/state", Some(r#"{"kind": "single", "parity_x": "odd", "parity_y": "even"}"#)),
        ],
        says: &[
            r#"/models/strong_field: {} starts from one angular momentum, and /atom/state is named by its parity; allowed: three_step, quantum_orbits and curve beside this state; every model beside one of angular momentum 0; at /models try {"three_step":{}}"#,
        ],
    },
    Case {
        name: "recombination to a state that turns",
        edits: &[
            ("/models", Some(r#"{"recombination": {}}"#)),
            ("/atom/dimensions", Some("2")),
            ("/atom/state", Some(r#"{"kind": "single", "angular_momentum": 1}"#)),
        ],
        says: &[
            "/models/recombination: {} needs a state that is the same in all directions, and /atom/state has angular momentum 1; allowed: the key beside a state of angular momentum 0; every other model beside this one; at /models try {}",
        ],
    },
    Case {
        name: "quantum orbits across the joints of a flat top",
        edits: &[
            ("/models", Some(r#"{"quantum_orbits": {}}"#)),
            (
                "/field/pulses/0/envelope",
                Some(r#"{"kind": "flat_top", "ramp_cycles": 1, "plateau_cycles": 0.3}"#),
            ),
        ],
        says: &[
            "/models/quantum_orbits: {} cannot be had: the electron of highest energy passes a joint of an envelope, where nothing continues to complex times; allowed: pulses alone: sin2, gaussian, or flat_top with a plateau of more than a cycle, not one beginning within another; at /models try {}",
        ],
    },
    Case {
        name: "quantum orbits of a sampled field",
        edits: &[
            ("/models", Some(r#"{"quantum_orbits": {}}"#)),
            ("/field/sampled", Some(r#"{"file": "pulse.csv"}"#)),
        ],
        says: &[
            "/models/quantum_orbits: {} cannot be had: a table is known at real times alone, and quantum orbits start at complex ones; allowed: pulses alone: sin2, gaussian, or flat_top with a plateau of more than a cycle, not one beginning within another; at /models try {}",
        ],
    },
    Case {
        name: "recombination without harmonics",
        edits: &[("/models", Some(r#"{"recombination": {}}"#)), ("/outputs", Some("{}"))],
        says: &[
            "/models/recombination: {} has no use without outputs.harmonics; allowed: that output, or the key left out; at /models try {}",
        ],
    },
    Case {
        name: "strong field without outputs",
        edits: &[("/models", Some(r#"{"strong_field": {}}"#)), ("/outputs", Some("{}"))],
        says: &[
            "/models/strong_field: {} has no use without outputs.harmonics or outputs.photoelectrons; allowed: one of these outputs, or the key left out; at /models try {}",
        ],
    },
    Case {
        name: "tunnelling out of a harmonic potential",
        edits: &[
            ("/models", Some(r#"{"tunnelling": {}}"#)),
            ("/atom", Some(r#"{"potential": {"kind": "harmonic", "frequency": "2 eV"}}"#)),
        ],
        says: &[
            "/models/tunnelling: {} asks for electrons of an atom that lets none go: a harmonic potential has no continuum; allowed: an atom that can be ionized; at /models try {}",
        ],
    },
    Case {
        name: "scan for one point",
        edits: &[(
            "/scan",
            Some(r#"[{"parameter": "/field/pulses/0/phase", "from": "0 deg", "to": "90 deg", "points": 2}]"#),
        )],
        says: &[
            r#"/scan: [{"parameter":"/field/pulses/0/phase","from":"0 deg","to":"90 deg","points":2}] is a scan where one point is wanted; allowed: no axis; try []"#,
        ],
    },
    Case {
        name: "several faults",
        edits: &[
            ("/numerics/accuracy", Some("0")),
            ("/field/pulses/0/phase", Some("90")),
            ("/atom/state/number", Some("-1")),
            ("/colour", Some("true")),
        ],
        says: &[
            "/atom/state/number: -1 is out of range; allowed: a whole number from 0 to 1000; try 0",
            r#"/field/pulses/0/phase: 90 has no unit; allowed: an angle in deg, rad, mrad, pi or au; try "90 deg""#,
            "/numerics/accuracy: 0 is out of range; allowed: a number from 1e-10 to 0.1; try 0.0001",
            "/colour: true stands under an unknown key; allowed: the keys $schema, note, title, atom, field, numerics, outputs, models, scan; leave it out",
        ],
    },
];
