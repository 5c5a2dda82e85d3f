//! The section on the page: where metres come to lie, its axes, its edge and its blocks.

use ventrise_mesh::{Geometry, Rectangle, Side};
use ventrise_solver::SideCondition;

use crate::case::{Case, Slot};

use super::colour::{FAINT, INK};
use super::lettering::width;
use super::svg::{Anchor, Box, Stroke, Svg, Type};
use super::ticks::Ticks;

/// Width of every picture.
pub const WIDTH: f64 = 480.0;
/// Size of lesser letters.
pub const SMALL: f64 = 12.5;
/// Most room for the section; a slender one may grow taller, so that its width shows something.
const MOST: [f64; 2] = [244.0, 400.0];
/// Most height of a slender section.
const TALLEST: f64 = 580.0;
/// Width up to which a section counts as slender.
const SLENDER: f64 = 100.0;
/// Room left of the section for its axis.
pub const LEFT: f64 = 72.0;
/// Width of a flat section, whose names are listed below it.
const FLAT_WIDTH: f64 = 392.0;
/// Width over height from which a section counts as flat.
const FLAT: f64 = 1.7;
/// Least room for names beside it.
const NAMES: f64 = 164.0;

/// Where the section lies on the page. Axisymmetric sections are drawn on both sides of the axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Frame {
    /// The whole section.
    pub section: Box,
    /// Page units per metre.
    scale: f64,
    /// Height of the section [m].
    height: f64,
    /// Page position of x = 0.
    origin: f64,
    mirrored: bool,
    flat: bool,
}

impl Frame {
    /// As large as the room allows, its upper end at `top`.
    pub fn fit(case: &Case, top: f64) -> Frame {
        let section = case.section();
        let mirrored = section.geometry == Geometry::Axisymmetric;
        let across = if mirrored { 2.0 * section.width } else { section.width };
        let slender = (SLENDER / across).min(TALLEST / section.height);
        let flat = across > FLAT * section.height;
        let most = if flat { FLAT_WIDTH } else { MOST[0] };
        let scale = (most / across).min(MOST[1] / section.height).max(slender);
        let (w, h) = (across * scale, section.height * scale);
        // What a slender section leaves over goes to both sides of it.
        let spare = WIDTH - LEFT - w - NAMES;
        let x = LEFT + (0.5 * (spare - 70.0)).max(0.0);
        let origin = if mirrored { x + 0.5 * w } else { x };
        Frame {
            section: Box { x, y: top, w, h },
            scale,
            height: section.height,
            origin,
            mirrored,
            flat,
        }
    }

    /// Whether the section is drawn on both sides of its axis.
    pub fn is_mirrored(&self) -> bool {
        self.mirrored
    }

    /// Whether it is too wide for names beside it.
    pub fn is_flat(&self) -> bool {
        self.flat
    }

    /// Page position of a place [m].
    pub fn at(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        [self.origin + x * self.scale, self.section.y + (self.height - y) * self.scale]
    }

    /// The part of the section that is computed: right of the axis if it is drawn twice.
    pub fn computed(&self) -> Box {
        let Box { x, y, w, h } = self.section;
        if self.mirrored { Box { x: self.origin, y, w: 0.5 * w, h } } else { Box { x, y, w, h } }
    }

    /// A place on the page on the other side of the axis.
    pub fn opposite(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        [2.0 * self.origin - x, y]
    }

    /// A rectangle on the page, right of the axis.
    pub fn rect(&self, r: &Rectangle) -> Box {
        let [x, y] = self.at([r.x[0], r.y[1]]);
        let size = |extent: [f64; 2]| (extent[1] - extent[0]) * self.scale;
        Box { x, y, w: size(r.x), h: size(r.y) }
    }

    /// A rectangle on the page, on both sides of the axis where that is drawn.
    pub fn rects(&self, r: &Rectangle) -> Vec<Box> {
        let right = self.rect(r);
        if !self.mirrored {
            return vec![right];
        }
        if r.x[0] <= 0.0 {
            return vec![Box { x: right.x - right.w, w: 2.0 * right.w, ..right }];
        }
        let x = 2.0 * self.origin - right.x - right.w;
        vec![right, Box { x, ..right }]
    }

    /// Draws both axes in millimetres, `gap` away from the section; returns how far down they go.
    pub fn axes(&self, svg: &mut Svg, gap: f64) -> f64 {
        let Box { x, y, w, h } = self.section;
        let stroke = Stroke::new(FAINT, 1.0);
        let letters = Type::new(SMALL).coloured(FAINT);
        let millimetre = self.scale / 1e3;
        // Heights, on the left.
        let at = x - gap;
        svg.line([at, y], [at, y + h], stroke);
        let ticks = Ticks::of(0.0, h / millimetre, (h / 34.0) as usize);
        for tick in &ticks.at {
            let level = y + h - tick * millimetre;
            svg.line([at - 4.0, level], [at, level], stroke);
            let place = [at - 7.0, level + 4.4];
            svg.text(place, &ticks.text(*tick), letters.anchored(Anchor::End));
        }
        svg.text([4.0, y - gap - 8.0], "height, mm", letters);
        // Across, below.
        let base = y + h + gap;
        svg.line([x, base], [x + w, base], stroke);
        let extent = self.computed().w;
        let name = if self.mirrored { "radius, mm" } else { "across, mm" };
        let room = width("0000", SMALL, false) + 6.0;
        let most = ((extent / room) as usize).max(if extent > 40.0 { 2 } else { 1 });
        let ticks = Ticks::of(0.0, extent / millimetre, most);
        for tick in &ticks.at {
            let text = ticks.text(*tick);
            for sign in if self.mirrored && *tick > 0.0 { &[-1.0, 1.0][..] } else { &[1.0] } {
                let place = self.origin + sign * tick * millimetre;
                svg.line([place, base], [place, base + 4.0], stroke);
                let set = letters.anchored(Anchor::Middle);
                svg.text([place, base + 17.0], &text, set);
            }
        }
        let middle = (x + 0.5 * w).max(0.5 * width(name, SMALL, false) + 4.0);
        svg.text([middle, base + 34.0], name, letters.anchored(Anchor::Middle));
        svg.reach(base + 42.0);
        base + 42.0
    }

    /// Draws the section's edge: every side in the manner of its condition, slots left open
    /// between two short strokes.
    pub fn edge(&self, svg: &mut Svg, case: &Case) {
        for side in Side::ALL {
            let axis = self.mirrored && side == Side::Left;
            let condition = if axis { SideCondition::Symmetry } else { case.sides()[side.index()] };
            let mut spans = vec![self.extent(case, side)];
            for slot in case.slots().iter().filter(|s| s.side == side) {
                spans = spans.into_iter().flat_map(|span| without(span, slot.span)).collect();
            }
            for span in spans.into_iter().filter(|s| s[1] > s[0]) {
                let ends = [self.on_side(case, side, span[0]), self.on_side(case, side, span[1])];
                let overhang = if axis { 10.0 } else { 0.0 };
                let [a, b] = ends;
                let ends = [[a[0], a[1] + overhang], [b[0], b[1] - overhang]];
                self.both(svg, ends, self.outward(side), condition);
            }
        }
        for slot in case.slots() {
            self.slot_ends(svg, case, slot);
        }
    }

    fn both(&self, svg: &mut Svg, ends: [[f64; 2]; 2], out: [f64; 2], as_is: SideCondition) {
        side_line(svg, ends, out, as_is);
        if self.mirrored && as_is != SideCondition::Symmetry {
            side_line(svg, ends.map(|e| self.opposite(e)), [-out[0], out[1]], as_is);
        }
    }

    fn slot_ends(&self, svg: &mut Svg, case: &Case, slot: &Slot) {
        let [ox, oy] = self.outward(slot.side);
        for end in slot.span {
            let [x, y] = self.on_side(case, slot.side, end);
            let stroke = Stroke::new(INK, 1.4);
            let ends = [[x - 3.0 * ox, y - 3.0 * oy], [x + 4.0 * ox, y + 4.0 * oy]];
            svg.line(ends[0], ends[1], stroke);
            if self.mirrored {
                svg.line(self.opposite(ends[0]), self.opposite(ends[1]), stroke);
            }
        }
    }

    fn extent(&self, case: &Case, side: Side) -> [f64; 2] {
        match side {
            Side::Left | Side::Right => [0.0, case.section().height],
            Side::Bottom | Side::Top => [0.0, case.section().width],
        }
    }

    /// Page position of a place along a side [m].
    pub fn on_side(&self, case: &Case, side: Side, along: f64) -> [f64; 2] {
        let section = case.section();
        self.at(match side {
            Side::Left => [0.0, along],
            Side::Right => [section.width, along],
            Side::Bottom => [along, 0.0],
            Side::Top => [along, section.height],
        })
    }

    /// Direction out of the section on the page.
    pub fn outward(&self, side: Side) -> [f64; 2] {
        match side {
            Side::Left => [-1.0, 0.0],
            Side::Right => [1.0, 0.0],
            Side::Bottom => [0.0, 1.0],
            Side::Top => [0.0, -1.0],
        }
    }
}

/// A span without another one.
fn without(span: [f64; 2], gone: [f64; 2]) -> Vec<[f64; 2]> {
    if gone[0] >= span[1] || gone[1] <= span[0] {
        return vec![span];
    }
    vec![[span[0], gone[0]], [gone[1], span[1]]]
}

/// A line in the manner of a side's condition, with marks on its outer side.
pub fn side_line(svg: &mut Svg, ends: [[f64; 2]; 2], out: [f64; 2], condition: SideCondition) {
    let [a, b] = ends;
    let plain = |width| Stroke::new(INK, width);
    match condition {
        SideCondition::Symmetry => svg.line(a, b, plain(1.0).dashed("10 3 2 3")),
        SideCondition::Open => svg.line(a, b, plain(1.0).dashed("3 4")),
        SideCondition::Adiabatic | SideCondition::Sliding(_) => svg.line(a, b, plain(1.8)),
        SideCondition::Temperature(_) => svg.line(a, b, plain(4.0)),
        SideCondition::Film { .. } | SideCondition::Outside(_) | SideCondition::Flux(_) => {
            svg.line(a, b, plain(1.8));
            let length = (b[0] - a[0]).hypot(b[1] - a[1]);
            let apart = if matches!(condition, SideCondition::Flux(_)) { 9.0 } else { 6.0 };
            let count = (length / apart) as usize;
            let mark = |n: usize| {
                let s = (n as f64 + 0.5) / count as f64;
                let foot = [0, 1].map(|k| a[k] + s * (b[k] - a[k]));
                vec![foot, [0, 1].map(|k| foot[k] + 4.5 * out[k])]
            };
            let marks: Vec<Vec<[f64; 2]>> = (0..count).map(mark).collect();
            svg.lines(&marks, plain(1.0));
            if matches!(condition, SideCondition::Flux(_)) {
                // Heat comes in: the marks get heads.
                for mark in &marks {
                    svg.circle(mark[0], 1.6, INK, None);
                }
            }
        }
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    fn case(section: &str) -> Case {
        let text = format!(
            "[section]\n{section}\n[ambient]\ntemperature = \"20 degC\"\n[sides]\nright = {{ \
             temperature = \"30 degC\" }}\n"
        );
        Case::parse(&text, "x.toml").unwrap()
    }

    #[test]
    fn an_axisymmetric_section_lies_on_both_sides_of_its_axis_to_scale() {
        let case = case("geometry = \"axisymmetric\"\nwidth = \"50 mm\"\nheight = \"200 mm\"");
        let frame = Frame::fit(&case, 60.0);
        let Box { x, y, w, h } = frame.section;
        assert!((w / h - 0.5).abs() < 1e-12, "twice 50 mm to 200 mm");
        assert_eq!(frame.at([0.0, 0.2]), [x + 0.5 * w, y]);
        let ring = Rectangle { x: [0.01, 0.02], y: [0.0, 0.1] };
        let [right, left] = frame.rects(&ring)[..] else { panic!("not two") };
        assert!((right.x + right.w + left.x - 2.0 * (x + 0.5 * w)).abs() < 1e-9);
        let core = Rectangle { x: [0.0, 0.02], y: [0.0, 0.1] };
        assert_eq!(frame.rects(&core).len(), 1);
    }

    #[test]
    fn a_planar_section_fits_into_its_room_whatever_its_shape() {
        for size in [("1 mm", "900 mm"), ("900 mm", "1 mm"), ("80 mm", "80 mm")] {
            let case = case(&format!(
                "geometry = \"planar\"\nwidth = \"{}\"\nheight = \"{}\"\ndepth = \"1 m\"",
                size.0, size.1
            ));
            let frame = Frame::fit(&case, 60.0);
            let Box { x, w, h, .. } = frame.section;
            let beside = if frame.is_flat() { 10.0 } else { NAMES };
            assert!(h <= TALLEST + 1e-9 && x >= LEFT, "{size:?}: {x} {h}");
            assert!(x + w + beside <= WIDTH + 1e-9, "{size:?}: {x} {w}");
        }
    }

    #[test]
    fn slots_cut_a_side() {
        assert_eq!(without([0.0, 10.0], [2.0, 3.0]), [[0.0, 2.0], [3.0, 10.0]]);
        assert_eq!(without([0.0, 10.0], [12.0, 13.0]), [[0.0, 10.0]]);
    }
}
