//! The left front quarter of an invented vehicle, one panel a file.
//!
//! All panels of the side lie on one master surface ([`side`]) or leave it
//! tangentially, so they stand flush across their shut lines. Faults are put in
//! after construction ([`fault`]).

mod bonnet;
mod bumper;
mod door;
mod fault;
mod grille;
mod lamp;
mod pillar;
mod side;
mod sill;
mod wing;

use super::patch::{CopyText, EndText, SeamText, SetText};
use crate::bezier::Side;

/// The whole set.
pub(super) fn set() -> SetText {
    let upper = side::Upper::new();
    SetText {
        name: "front quarter",
        comment: &[
            "The left front quarter of an invented vehicle, made by `chordwise demo`.",
            "",
            "Millimetres; x rearwards (front axle at x = 0), y to the right (so the left side has",
            "negative y; centre plane y = 0), z upwards from the ground. Normals point outwards.",
            "",
            "Separate panels lie a shut line of 4 mm apart. Inside a panel all joints are tangent to",
            "round-off, but for three deliberate faults and one crease that is meant:",
            "",
            "1. a gap of 0.06 mm between `sill/2` and `sill/3`;",
            "2. a tangent break of 0.8 degrees between `bumper/waist 1` and `bumper/waist 2`,",
            "   largest in the middle of the seam and zero at its ends;",
            "3. a tangent break of 0.12 degrees, just above tolerance, between `door/upper 2` and",
            "   `door/upper 3`, likewise;",
            "4. the crease of about 45 degrees where the wing turns in to the flange of the wheel arch,",
            "   demanded in `seams`.",
        ],
        panels: vec![
            bonnet::panel(&upper),
            wing::panel(&upper),
            door::panel(&upper),
            pillar::panel(&upper),
            bumper::panel(&upper),
            sill::panel(),
            lamp::glass(&upper),
            lamp::bowl(),
            grille::panel(),
        ],
        copies: vec![
            CopyText {
                of: "bonnet",
                name: "bonnet right",
            },
            CopyText {
                of: "lamp bowl",
                name: "lamp bowl right",
            },
            CopyText {
                of: "grille",
                name: "grille right",
            },
        ],
        seams: seams(),
    }
}

/// Panels that face each other across a shut line.
const SHUT_LINES: [[&str; 2]; 10] = [
    ["wing", "bonnet"],
    ["wing", "door"],
    ["wing", "pillar"],
    ["wing", "bumper"],
    ["wing", "sill"],
    ["wing", "lamp glass"],
    ["door", "sill"],
    ["door", "pillar"],
    ["bumper", "lamp glass"],
    ["bonnet", "pillar"],
];

fn seams() -> Vec<SeamText> {
    let panel = |name: &str| EndText {
        name: name.to_owned(),
        side: None,
    };
    let edge = |name: &str, side: Side| EndText {
        name: name.to_owned(),
        side: Some(side),
    };
    let mut seams: Vec<SeamText> = SHUT_LINES
        .iter()
        .enumerate()
        .map(|(k, [a, b])| SeamText {
            ends: [panel(a), panel(b)],
            demand: "open",
            comment: (k == 0).then_some("Shut lines."),
        })
        .collect();
    let tangent = |ends: [(&str, Side); 2], comment: &'static str| SeamText {
        ends: ends.map(|(name, side)| edge(name, side)),
        demand: "G1",
        comment: Some(comment),
    };
    seams.push(tangent(
        [("sill/2", Side::U1), ("sill/3", Side::U0)],
        "The faults: these seams ought to be tangent.",
    ));
    seams.extend([
        SeamText {
            comment: None,
            ..tangent(
                [("bumper/waist 1", Side::U1), ("bumper/waist 2", Side::U0)],
                "",
            )
        },
        SeamText {
            comment: None,
            ..tangent([("door/upper 2", Side::U1), ("door/upper 3", Side::U0)], "")
        },
    ]);
    for (k, (wing, flange)) in wing::flange_seams().enumerate() {
        seams.push(SeamText {
            ends: [edge(&wing, Side::V0), edge(&flange, Side::V1)],
            demand: "crease",
            comment: (k == 0).then_some("The edge of the wheel arch."),
        });
    }
    seams
}
