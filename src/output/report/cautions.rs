//! What a reader must know before relying on the numbers.

use ventrise_mesh::Geometry;

use crate::output::results::Results;
use crate::output::words::mm;

/// The cautions that apply, each with its heading.
pub fn cautions(results: &Results) -> Vec<[String; 2]> {
    let mut cautions: Vec<[String; 2]> = Vec::new();
    let mut add = |heading: &str, text: String| cautions.push([heading.into(), text]);
    let section = results.case.section();
    add(
        "A section, not a body.",
        match section.geometry {
            Geometry::Planar { depth } => format!(
                "The section is taken to be the same over a depth of {} mm, and nothing happens at \
             its two ends: end walls, cables and whatever varies along the depth are not in it.",
                mm(depth)
            ),
            Geometry::Axisymmetric => {
                "Everything is taken to be round about the axis: feet, brackets, \
                                   cables and openings that do not run all the way round are not \
                                   in it."
                    .into()
            }
        },
    );
    add(
        "Laminar air, linear density.",
        "The flow is computed as laminar, with air of constant properties whose density falls \
         linearly with temperature (Boussinesq). The table above says how far this case is inside \
         that range. Turbulent air would mix and cool more, and unsteadily."
            .into(),
    );
    add("Radiation.", match results.case.radiates() {
        true => "Radiation is computed between grey, diffuse surfaces, and to surroundings at \
                 ambient temperature through slots and open sides. Emissivities are assumptions: \
                 a surface that ages, gets dirty or is painted changes them. Sunshine counts only \
                 as far as the case gives it as heat."
            .into(),
        false => "Heat by radiation is not counted. Painted, anodised and plastic surfaces often give \
              off as much heat by radiation as to the air; such parts get less warm than told \
              here. Sunshine and hotter surroundings, which heat a housing, are not counted \
              either."
            .into(),
    });
    let joints = results.case_text.matches("[[joint]]").count();
    add("Joints.", match joints {
        0 => "Blocks that touch are taken to be in perfect contact. Dry joints, pads and glue add \
              resistance, and parts behind them get warmer."
            .into(),
        n => format!(
            "{n} {} the resistance that the case assumes; all other blocks that touch are taken to \
             be in perfect contact.",
            if n == 1 { "joint has" } else { "joints have" }
        ),
    });
    add(
        "Still air outside.",
        "The air outside is still, at the ambient temperature, and finds its way to every opening \
         unhindered. Wind, nearby walls, other heat sources, dust and insect screens that clog \
         change the draught."
            .into(),
    );
    add(
        "Numerical uncertainty: not assessed.",
        "The numbers come from one mesh. How much they depend on it is not known from this run; \
         solve the case again with half the cell size, and count the difference as part of the \
         margin that is needed."
            .into(),
    );
    if results.told.verdict == "swaying" {
        add(
            "A swaying draught.",
            "The flow keeps moving; pictures show one state of it. Bands were found in the plane \
             of the section, where a sway can be larger than in a real body."
                .into(),
        );
    }
    add(
        "Given numbers.",
        "Heat, limits, materials and losses are those of the case. A margin is worth no more than \
         they are."
            .into(),
    );
    add(
        "Hot surfaces and openings.",
        "Surfaces at the temperatures told here can burn skin, sealed batteries can vent, and \
         openings that let air through can let fire, tools and water through. What this page says \
         of temperatures and openings is information, not a statement of conformity with any \
         standard. Local codes and licensed practice decide."
            .into(),
    );
    cautions
}
