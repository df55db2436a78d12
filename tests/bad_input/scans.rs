//! Wrong scans, and what is said of them.

/// Axes of a scan over the sound configuration, and what is said of them.
pub struct Scan {
    /// What is wrong.
    pub name: &'static str,
    /// JSON of the axes.
    pub axes: &'static str,
    /// The whole message, line by line.
    pub says: &'static [&'static str],
}

/// Every case.
pub const SCANS: &[Scan] = &[
    Scan {
        name: "pointer that leads nowhere",
        axes: r#"[{"parameter": "/field/pulses/0/phases", "values": ["0 deg"]}]"#,
        says: &[
            r#"/scan/0/parameter: "/field/pulses/0/phases" leads nowhere; allowed: a JSON Pointer (RFC 6901) into /atom, /field, /numerics or /outputs, to a key of the schema or an existing list element; try "/field/pulses/0/phase""#,
        ],
    },
    Scan {
        name: "pulse that does not exist",
        axes: r#"[{"parameter": "/field/pulses/1/phase", "values": ["0 deg"]}]"#,
        says: &[
            r#"/scan/0/parameter: "/field/pulses/1/phase" leads nowhere; allowed: a JSON Pointer (RFC 6901) into /atom, /field, /numerics or /outputs, to a key of the schema or an existing list element; try "/field/pulses/0/phase""#,
        ],
    },
    Scan {
        name: "axis over the title",
        axes: r#"[{"parameter": "/title", "values": ["a", "b"]}]"#,
        says: &[
            r#"/scan/0/parameter: "/title" leads nowhere; allowed: a JSON Pointer (RFC 6901) into /atom, /field, /numerics or /outputs, to a key of the schema or an existing list element; try "/field""#,
        ],
    },
    Scan {
        name: "unequal axes moving together",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "from": "0 deg", "to": "90 deg", "points": 3, "together": "pair"}, {"parameter": "/field/pulses/0/envelope/cycles", "values": [2, 4], "together": "pair"}]"#,
        says: &[
            "/scan/1/values: [2,4] makes 2 values where the axes it moves with have 3; allowed: equal numbers of values along axes that move together; try [2,4,2]",
        ],
    },
    Scan {
        name: "unequal points",
        axes: r#"[{"parameter": "/field/pulses/0/envelope/cycles", "values": [2, 4], "together": "pair"}, {"parameter": "/field/pulses/0/phase", "from": "0 deg", "to": "90 deg", "points": 3, "together": "pair"}]"#,
        says: &[
            "/scan/1/points: 3 makes 3 values where the axes it moves with have 2; allowed: equal numbers of values along axes that move together; try 2",
        ],
    },
    Scan {
        name: "no values",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "values": []}]"#,
        says: &[
            r#"/scan/0/values: [] is empty; allowed: a list with at least one element; try ["0 deg","90 deg"]"#,
        ],
    },
    Scan {
        name: "no points",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "from": "0 deg", "to": "90 deg", "points": 0}]"#,
        says: &["/scan/0/points: 0 is out of range; allowed: a whole number from 2 to 1000000; try 24"],
    },
    Scan {
        name: "log from zero",
        axes: r#"[{"parameter": "/field/pulses/0/delay", "from": "0 fs", "to": "9 fs", "points": 3, "spacing": "log"}]"#,
        says: &[
            r#"/scan/0/from: "0 fs" cannot be an end of logarithmic spacing; allowed: ends above 0, or linear spacing; at /scan/0/spacing try "linear""#,
        ],
    },
    Scan {
        name: "unit of another kind",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "from": "0 deg", "to": "90 fs", "points": 3}]"#,
        says: &[
            r#"/scan/0/to: "90 fs" has a unit of time, not of angle; allowed: an angle in deg, rad, mrad, pi or au; try "0 deg""#,
        ],
    },
    Scan {
        name: "bare end",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "from": 0, "to": "90 deg", "points": 3}]"#,
        says: &[r#"/scan/0/from: 0 has no unit; allowed: an angle in deg, rad, mrad, pi or au; try "0 deg""#],
    },
    Scan {
        name: "unit for a number",
        axes: r#"[{"parameter": "/field/pulses/0/envelope/cycles", "from": 2, "to": "4 fs", "points": 3}]"#,
        says: &[r#"/scan/0/to: "4 fs" is not a number; allowed: a number from 1 to 10000; try 6"#],
    },
    Scan {
        name: "name that results use",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "name": "time", "values": ["0 deg"]}]"#,
        says: &[
            r#"/scan/0/name: "time" is a name that results use; allowed: letters, digits and _, a letter first, and no name of the results; try "scan_time""#,
        ],
    },
    Scan {
        name: "name that is no name",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "name": "my phase", "values": ["0 deg"]}]"#,
        says: &[
            r#"/scan/0/name: "my phase" is no name; allowed: letters, digits and _, a letter first, and no name of the results; try "scan_my_phase""#,
        ],
    },
    Scan {
        name: "name used twice",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "name": "x", "values": ["0 deg"]}, {"parameter": "/field/pulses/0/delay", "name": "x", "values": ["0 fs"]}]"#,
        says: &[r#"/scan/1/name: "x" is the name of another axis; allowed: every name once; try "x_1""#],
    },
    Scan {
        name: "place varied twice",
        axes: r#"[{"parameter": "/field/pulses/0/envelope", "values": [{"kind": "sin2", "cycles": 3}]}, {"parameter": "/field/pulses/0/envelope/cycles", "values": [2, 4]}]"#,
        says: &[
            r#"/scan/1/parameter: "/field/pulses/0/envelope/cycles" varies what axis "field_pulses_0_envelope" varies; allowed: every place on one axis; leave one axis out"#,
        ],
    },
    Scan {
        name: "values and ends",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "from": "0 deg", "values": ["0 deg"]}]"#,
        says: &[
            r#"/scan/0: {"parameter":"/field/pulses/0/phase","from":"0 deg","values":["0 deg"]} does not say its values in one way; allowed: from, to and points, or values; try {"parameter":"/field/pulses/0/phase","values":["0 deg"]}"#,
        ],
    },
    Scan {
        name: "neither values nor ends",
        axes: r#"[{"parameter": "/field/pulses/0/phase"}]"#,
        says: &[
            r#"/scan/0: {"parameter":"/field/pulses/0/phase"} does not say its values in one way; allowed: from, to and points, or values; try {"parameter":"/field/pulses/0/phase","values":["0 deg"]}"#,
        ],
    },
    Scan {
        name: "ends of a choice",
        axes: r#"[{"parameter": "/numerics/scheme", "from": "strang", "to": "fourth_order", "points": 2}]"#,
        says: &[
            r#"/scan/0/from: "strang" is an end where there is nothing between; allowed: values, listed one by one; at /scan/0 try {"parameter":"/numerics/scheme","values":["fourth_order"]}"#,
        ],
    },
    Scan {
        name: "unknown key of an axis",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "value": ["0 deg"]}]"#,
        says: &[
            r#"/scan/0/value: ["0 deg"] stands under an unknown key; allowed: the keys note, parameter, name, from, to, points, spacing, values, together; as its key try "values""#,
        ],
    },
    Scan {
        name: "too many points",
        axes: r#"[{"parameter": "/field/pulses/0/phase", "from": "0 deg", "to": "90 deg", "points": 2000}, {"parameter": "/field/pulses/0/delay", "from": "0 fs", "to": "9 fs", "points": 2000}]"#,
        says: &[
            r#"/scan: [{"parameter":"/field/pulses/0/phase","from":"0 deg","to":"90 deg","points":2000… has 2000 x 2000 points; allowed: at most 1000000 points; split the scan"#,
        ],
    },
    Scan {
        name: "invalid point in the middle of a grid",
        axes: r#"[{"parameter": "/field/pulses/0/envelope/cycles", "name": "cycles", "values": [2, 0.5, 4]}, {"parameter": "/field/pulses/0/phase", "name": "cep", "from": "0 deg", "to": "90 deg", "points": 2}]"#,
        says: &[
            r#"at cycles = 0.5, cep = "0 deg": /field/pulses/0/envelope/cycles: 0.5 is out of range; allowed: a number from 1 to 10000; try 6"#,
            r#"at cycles = 0.5, cep = "90 deg": /field/pulses/0/envelope/cycles: 0.5 is out of range; allowed: a number from 1 to 10000; try 6"#,
        ],
    },
    Scan {
        name: "fault of all points",
        axes: r#"[{"parameter": "/field/pulses/0/intensity", "name": "intensity", "values": ["3 au", "-1 W/cm^2"]}, {"parameter": "/numerics/accuracy", "name": "accuracy", "values": [2]}]"#,
        says: &[
            "/numerics/accuracy: 2 is out of range; allowed: a number from 1e-10 to 0.1; try 0.0001",
            r#"at intensity = "3 au", accuracy = 2: /field/pulses/0/intensity: "3 au" is ambiguous: two atomic units of intensity exist, 3.509e16 W/cm^2 (peak field 1 a.u.) and 6.436e15 W/cm^2 (hartree per bohr^2 and atomic unit of time); allowed: an intensity in W/cm^2, TW/cm^2, PW/cm^2 or W/m^2, above 0 W/cm^2, up to 1e18 W/cm^2; try "1.5e14 W/cm^2""#,
            r#"at intensity = "-1 W/cm^2", accuracy = 2: /field/pulses/0/intensity: "-1 W/cm^2" is out of range; allowed: an intensity in W/cm^2, TW/cm^2, PW/cm^2 or W/m^2, above 0 W/cm^2, up to 1e18 W/cm^2; try "1.5e14 W/cm^2""#,
        ],
    },
];
