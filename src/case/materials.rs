//! The built-in material library.
//!
//! Values hold near room temperature. "Handbook" means engineering handbooks and data sheets as
//! commonly quoted, from memory: good for a first judgement, to be replaced by the supplier's
//! values (an own `[[material]]`) when a margin is thin.

/// A material of the library.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LibraryMaterial {
    /// Name in the case file.
    pub name: &'static str,
    /// Thermal conductivity [W/(m·K)] along x and y of the section.
    pub conductivity: [f64; 2],
    /// Density [kg/m³].
    pub density: f64,
    /// Specific heat [J/(kg·K)].
    pub specific_heat: f64,
    /// Total hemispherical emissivity of the usual surface [-]; counts where the case models radiation.
    pub emissivity: f64,
    /// Where the numbers come from.
    pub source: &'static str,
}

const fn solid(
    name: &'static str,
    conductivity: f64,
    density: f64,
    specific_heat: f64,
    emissivity: f64,
    source: &'static str,
) -> LibraryMaterial {
    LibraryMaterial {
        name,
        conductivity: [conductivity, conductivity],
        density,
        specific_heat,
        emissivity,
        source,
    }
}

/// All materials of the library.
pub fn library() -> &'static [LibraryMaterial] {
    LIBRARY
}

/// The material of a name.
pub fn find(name: &str) -> Option<&'static LibraryMaterial> {
    LIBRARY.iter().find(|m| m.name == name)
}

#[rustfmt::skip]
const LIBRARY: &[LibraryMaterial] = &[
    // name, k [W/(m K)], density [kg/m3], specific heat [J/(kg K)], emissivity, source
    solid("aluminium", 200.0, 2700.0, 900.0, 0.09, "wrought aluminium, general; handbook value, from memory (99.5 % pure 220-235, 6063-T5 200-218); emissivity: commercial sheet 0.09"),
    solid("aluminium 99.5", 225.0, 2705.0, 900.0, 0.09, "EN AW-1050A; handbook value, from memory (220-235); emissivity: commercial sheet 0.09"),
    solid("aluminium 6063", 205.0, 2700.0, 900.0, 0.09, "EN AW-6063 T5, extrusions; handbook value, from memory (200-218); emissivity: commercial sheet 0.09"),
    solid("aluminium 6061", 167.0, 2700.0, 896.0, 0.09, "EN AW-6061 T6; handbook value, from memory (167); emissivity: commercial sheet 0.09"),
    solid("aluminium 5052", 138.0, 2680.0, 900.0, 0.09, "EN AW-5052, sheet; handbook value, from memory (138); emissivity: commercial sheet 0.09"),
    solid("aluminium, anodised", 200.0, 2700.0, 900.0, 0.80, "wrought aluminium, general, as \"aluminium\"; handbook value, from memory; emissivity: anodised 0.77-0.85"),
    solid("aluminium, painted", 200.0, 2700.0, 900.0, 0.92, "wrought aluminium, general, as \"aluminium\"; handbook value, from memory; emissivity: lacquer or paint 0.92-0.94"),
    solid("aluminium, die-cast", 100.0, 2740.0, 963.0, 0.15, "EN AC-46000 (A380, ADC12); handbook value, from memory (92-109); emissivity: cast skin, from memory"),
    solid("magnesium, die-cast", 65.0, 1810.0, 1020.0, 0.15, "AZ91D; handbook value, from memory (51-72); emissivity: from memory"),
    solid("zinc, die-cast", 109.0, 6600.0, 419.0, 0.20, "ZP0400/ZP0410; handbook value, from memory (105-113); emissivity: from memory"),
    solid("copper", 390.0, 8930.0, 385.0, 0.05, "Cu-ETP; handbook value, from memory (385-400); emissivity: bright to lightly tarnished, from memory"),
    solid("brass", 116.0, 8470.0, 380.0, 0.10, "CuZn37; handbook value, from memory (110-120); emissivity: from memory"),
    solid("steel", 50.0, 7850.0, 470.0, 0.25, "low-carbon steel; handbook value, from memory (45-60); emissivity: cold-rolled, not bright, from memory"),
    solid("steel, galvanised", 50.0, 7850.0, 470.0, 0.25, "low-carbon sheet; handbook value, from memory (45-60); emissivity: burnished to oxidised zinc 0.23-0.28"),
    solid("steel, painted", 50.0, 7850.0, 470.0, 0.92, "low-carbon sheet; handbook value, from memory (45-60); emissivity: lacquer or paint 0.92-0.94"),
    solid("steel, stainless", 15.0, 7900.0, 500.0, 0.20, "1.4301 (304); handbook value, from memory (15-16.3); emissivity: rolled sheet, from memory"),
    solid("cast iron", 50.0, 7200.0, 500.0, 0.80, "grey cast iron; handbook value, from memory (45-55); emissivity: oxidised 0.74-0.8"),
    solid("electrical steel, along", 28.0, 7650.0, 480.0, 0.60, "non-oriented lamination stack, heat flow in the sheet's plane; handbook value, from memory (20-45); emissivity: from memory"),
    solid("electrical steel, across", 2.0, 7650.0, 480.0, 0.60, "lamination stack, heat flow through the sheets; handbook value, from memory (1-5, depends on coating and pressure); emissivity: from memory"),
    solid("ferrite", 4.0, 4800.0, 750.0, 0.90, "MnZn power ferrite; data-sheet value, from memory (3.5-5); emissivity: from memory"),
    solid("solder", 58.0, 7400.0, 230.0, 0.10, "SAC305; data-sheet value, from memory (55-60); emissivity: from memory"),
    solid("silicon", 148.0, 2330.0, 700.0, 0.60, "at 25 degC; handbook value, from memory; emissivity: from memory"),
    solid("alumina", 25.0, 3850.0, 850.0, 0.80, "96 % Al2O3; handbook value, from memory (24-30); emissivity: from memory"),
    solid("aluminium nitride", 170.0, 3300.0, 740.0, 0.80, "substrate grade; data-sheet value, from memory (150-180); emissivity: from memory"),
    solid("glass", 1.0, 2500.0, 840.0, 0.84, "soda-lime; handbook value, from memory (0.8-1.1); emissivity: window glass 0.84"),
    solid("board, bare", 0.30, 1850.0, 1100.0, 0.90, "FR-4 laminate without copper; handbook value, from memory (0.25-0.35 through, 0.3-0.9 in plane); emissivity: solder mask 0.9"),
    LibraryMaterial { name: "board, 4 layers, upright", conductivity: [0.35, 20.0], density: 1950.0, specific_heat: 1050.0, emissivity: 0.90, source: "FR-4 with 4 layers of 35 um copper (two of them planes) in 1.6 mm, standing along y: in plane from the copper's share, through as laminate; estimate, common practice, no source" },
    LibraryMaterial { name: "board, 4 layers, flat", conductivity: [20.0, 0.35], density: 1950.0, specific_heat: 1050.0, emissivity: 0.90, source: "as \"board, 4 layers, upright\", lying along x" },
    solid("ABS", 0.18, 1050.0, 1400.0, 0.92, "handbook value, from memory (0.17-0.2); emissivity: plastics 0.90-0.95"),
    solid("PC", 0.20, 1200.0, 1200.0, 0.92, "polycarbonate; handbook value, from memory (0.19-0.22); emissivity: plastics 0.90-0.95"),
    solid("PC/ABS", 0.20, 1130.0, 1300.0, 0.92, "blend; handbook value, from memory (0.2); emissivity: plastics 0.90-0.95"),
    solid("PA66", 0.25, 1140.0, 1670.0, 0.92, "dry; handbook value, from memory (0.23-0.27); emissivity: plastics 0.90-0.95"),
    solid("PA66-GF30", 0.33, 1370.0, 1400.0, 0.92, "30 % glass fibre, dry; handbook value, from memory (0.3-0.36); emissivity: plastics 0.90-0.95"),
    solid("PBT-GF30", 0.27, 1530.0, 1250.0, 0.92, "30 % glass fibre; handbook value, from memory (0.25-0.3); emissivity: plastics 0.90-0.95"),
    solid("PP", 0.20, 905.0, 1800.0, 0.92, "polypropylene; handbook value, from memory (0.17-0.22); emissivity: plastics 0.90-0.95"),
    solid("PE-HD", 0.45, 955.0, 1900.0, 0.92, "high-density polyethylene; handbook value, from memory (0.4-0.5); emissivity: plastics 0.90-0.95"),
    solid("PVC", 0.17, 1400.0, 1000.0, 0.92, "rigid; handbook value, from memory (0.15-0.19); emissivity: plastics 0.90-0.95"),
    solid("PMMA", 0.19, 1185.0, 1470.0, 0.92, "acrylic glass; handbook value, from memory (0.17-0.2); emissivity: plastics 0.90-0.95"),
    solid("epoxy", 0.20, 1200.0, 1100.0, 0.92, "unfilled resin; handbook value, from memory (0.2); emissivity: plastics 0.90-0.95"),
    solid("potting, epoxy", 0.60, 1600.0, 1100.0, 0.92, "mineral-filled epoxy; data-sheet value, from memory (0.4-1.2); emissivity: plastics 0.90-0.95"),
    solid("potting, silicone", 0.70, 1400.0, 1300.0, 0.92, "filled silicone; data-sheet value, from memory (0.2-1.5); emissivity: plastics 0.90-0.95"),
    solid("potting, polyurethane", 0.40, 1300.0, 1400.0, 0.92, "filled polyurethane; data-sheet value, from memory (0.2-0.7); emissivity: plastics 0.90-0.95"),
    solid("silicone rubber", 0.20, 1150.0, 1300.0, 0.92, "unfilled; handbook value, from memory (0.18-0.25); emissivity: plastics 0.90-0.95"),
    solid("gap pad", 3.0, 2700.0, 1000.0, 0.92, "filled silicone pad, middle grade; data-sheet value, from memory (1-6); emissivity: plastics 0.90-0.95"),
    solid("battery cell, radial", 1.0, 2700.0, 1000.0, 0.85, "cylindrical lithium-ion cell across its winding; published measurements scatter, from memory (0.4-1.5); emissivity: sleeve, from memory"),
    solid("mica", 0.50, 2800.0, 880.0, 0.75, "sheet; handbook value, from memory (0.4-0.7); emissivity: from memory"),
    solid("pressboard", 0.20, 1200.0, 1500.0, 0.90, "transformer board, dry; handbook value, from memory (0.15-0.25); emissivity: from memory"),
    solid("mineral wool", 0.040, 60.0, 840.0, 0.90, "handbook value, from memory (0.035-0.045); emissivity: from memory"),
    solid("EPS foam", 0.035, 25.0, 1450.0, 0.90, "expanded polystyrene; handbook value, from memory (0.033-0.04); emissivity: from memory"),
    solid("PUR foam", 0.028, 35.0, 1400.0, 0.90, "rigid polyurethane; handbook value, from memory (0.022-0.03); emissivity: from memory"),
    solid("plywood", 0.13, 550.0, 1600.0, 0.90, "softwood plywood; handbook value, from memory (0.12-0.15); emissivity: from memory"),
    solid("wood, softwood", 0.12, 500.0, 1600.0, 0.90, "across the grain; handbook value, from memory (0.10-0.14); emissivity: from memory"),
    solid("plasterboard", 0.25, 900.0, 1000.0, 0.90, "handbook value, from memory (0.2-0.28); emissivity: from memory"),
    solid("brick", 0.70, 1800.0, 840.0, 0.93, "common brick; handbook value, from memory (0.5-0.9); emissivity: from memory"),
    solid("concrete", 1.6, 2300.0, 900.0, 0.92, "normal weight; handbook value, from memory (1.2-2.0); emissivity: from memory"),
    solid("granite", 2.8, 2650.0, 800.0, 0.90, "handbook value, from memory (2-3.5); emissivity: from memory"),
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_library_is_large_named_once_and_within_the_bounds_of_solids() {
        assert!(LIBRARY.len() >= 25);
        let mut names: Vec<&str> = LIBRARY.iter().map(|m| m.name).collect();
        names.sort_unstable();
        names.dedup();
        assert_eq!(names.len(), LIBRARY.len());
        for m in LIBRARY {
            assert!(m.conductivity.iter().all(|k| (0.02..=400.0).contains(k)), "{m:?}");
            assert!((10.0..=9000.0).contains(&m.density), "{m:?}");
            // Volumetric heat capacity of dense solids is 1 to 4 MJ/(m3 K); foams and wool less.
            let dense = m.density > 400.0;
            let capacity = m.density * m.specific_heat;
            assert!(!dense || (0.8e6..=4.5e6).contains(&capacity), "{m:?}");
            assert!((0.02..1.0).contains(&m.emissivity), "{m:?}");
            assert!(m.source.len() > 20, "{m:?}");
        }
    }
}
