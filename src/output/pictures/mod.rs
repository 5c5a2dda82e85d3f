//! Pictures of a solve: SVG drawings that stand alone.

mod chart;
mod colour;
mod fields;
mod frame;
mod history;
mod layout;
mod lettering;
mod margins;
mod names;
mod profiles;
mod raster;
mod svg;
mod ticks;
mod trace;

use std::io;

use super::results::Results;

pub use layout::draw as layout;
pub use svg::escaped;

/// A picture as it is written.
#[derive(Debug, Clone, PartialEq)]
pub struct Picture {
    /// File name.
    pub file: &'static str,
    /// What to read from it.
    pub caption: &'static str,
    /// The drawing.
    pub svg: String,
}

/// All pictures that the results give cause for, in the order of a report.
///
/// # Errors
/// What the image encoder reports.
pub fn pictures(results: &Results) -> io::Result<Vec<Picture>> {
    let fields = &results.fields;
    let mut pictures = Vec::new();
    let mut add = |file, caption, svg: Option<String>| {
        pictures.extend(svg.map(|svg| Picture { file, caption, svg }));
    };
    add(
        "margins.svg",
        "How far every part's hottest place is from ambient and from its limit.",
        margins::draw(results),
    );
    add(
        "layout.svg",
        "The section as computed, to scale.",
        Some(layout(&results.case, &fields.x, &fields.y)),
    );
    add(
        "temperature.svg",
        "Dark is cold, light is hot; thin lines join places at the temperatures marked on \
         the scale, arrows follow the air.",
        Some(fields::temperature(results)?),
    );
    add(
        "speed.svg",
        "The palest air stands still; arrows follow the air, and their length tells nothing.",
        fields::speed(results)?,
    );
    add(
        "heat-flux.svg",
        "Heat that is conducted; what moving air carries is not in it.",
        fields::heat_flux(results)?,
    );
    add(
        "profiles.svg",
        "Along every probe line, from its first end; grey where it lies in a block.",
        profiles::draw(results),
    );
    add(
        "history.svg",
        "How the residuals fell and the watched temperatures came to rest; upright lines where \
         the work passed on to a finer mesh.",
        history::draw(results),
    );
    Ok(pictures)
}
