//! A field as a small indexed PNG.

use std::io;

use super::colour::{STEPS, set_off};

/// Pixels along the longer side of a field's image.
const PIXELS: f64 = 880.0;

/// Width of lines at values [pixels].
const LINE: usize = 2;

/// Where a line of places falls among cell centres: the two cells beside each place and how far it
/// is from the first to the second; beyond the outer centres the outer cell counts alone.
#[derive(Debug, Clone)]
pub struct Places(Vec<(usize, usize, f64)>);

impl Places {
    /// Equally spaced places, `count` of them, each in the middle of its share of the lines'
    /// extent.
    pub fn across(lines: &[f64], count: usize) -> Places {
        let (from, to) = (lines[0], lines[lines.len() - 1]);
        let at = |n: usize| from + (to - from) * (n as f64 + 0.5) / count as f64;
        Places((0..count).map(|n| between(lines, at(n))).collect())
    }
}

/// The cells whose centres lie before and after a place, and the weight of the second.
pub fn between(lines: &[f64], at: f64) -> (usize, usize, f64) {
    let cells = lines.len() - 1;
    let centre = |i: usize| 0.5 * (lines[i] + lines[i + 1]);
    let holds = lines.partition_point(|l| *l <= at).clamp(1, cells) - 1;
    let (a, b) = if at < centre(holds) {
        (holds.saturating_sub(1), holds)
    } else {
        (holds, (holds + 1).min(cells - 1))
    };
    if a == b {
        return (a, a, 0.0);
    }
    (a, b, ((at - centre(a)) / (centre(b) - centre(a))).clamp(0.0, 1.0))
}

/// An image of values on a mesh, its rows from the top. `position` places a value on the scale,
/// 0 to 1; thin lines are drawn at the values of `bands`. With
/// `mirror` the image also shows the other side of x = 0.
///
/// # Errors
/// What the encoder reports.
pub fn image(
    [x, y]: [&[f64]; 2],
    values: &[f64],
    colours: &[[u8; 3]; STEPS],
    position: impl Fn(f64) -> f64,
    bands: &[f64],
    mirror: bool,
) -> io::Result<Vec<u8>> {
    let extent = |lines: &[f64]| lines[lines.len() - 1] - lines[0];
    let across = extent(x) * if mirror { 2.0 } else { 1.0 };
    let per_metre = PIXELS / across.max(extent(y));
    let count = |extent: f64| ((extent * per_metre).round() as usize).max(2);
    let (half, rows) = (count(extent(x)), count(extent(y)));
    let (columns, levels) = (Places::across(x, half).0, Places::across(y, rows).0);
    let nx = x.len() - 1;
    let mut sampled = vec![0.0; half * rows];
    for (row, (j0, j1, t)) in sampled.chunks_exact_mut(half).rev().zip(&levels) {
        for (pixel, (i0, i1, s)) in row.iter_mut().zip(&columns) {
            let level = |j: &usize| {
                let (a, b) = (values[i0 + j * nx], values[i1 + j * nx]);
                a + s * (b - a)
            };
            let (below, above) = (level(j0), level(j1));
            *pixel = below + t * (above - below);
        }
    }
    let band = |v: f64| bands.partition_point(|b| *b <= v);
    let mut pixels = Vec::with_capacity(half * rows * if mirror { 2 } else { 1 });
    for (r, row) in sampled.chunks_exact(half).enumerate() {
        let start = pixels.len();
        for (c, value) in row.iter().enumerate() {
            let step = (position(*value) * (STEPS - 1) as f64).round();
            let step = if step.is_finite() { step.clamp(0.0, (STEPS - 1) as f64) as u8 } else { 0 };
            let here = band(*value);
            let differs = |n: usize| band(sampled[n]) != here;
            let on_line = (c + LINE < half && differs(r * half + c + LINE))
                || (r + LINE < rows && differs((r + LINE) * half + c));
            pixels.push(step + if on_line { STEPS as u8 } else { 0 });
        }
        if mirror {
            let right = pixels.split_off(start);
            pixels.extend(right.iter().rev());
            pixels.extend(right);
        }
    }
    let columns = if mirror { 2 * half } else { half };
    encode([columns, rows], &pixels, colours)
}

/// The scale itself as an image one pixel high.
///
/// # Errors
/// What the encoder reports.
pub fn strip(colours: &[[u8; 3]; STEPS]) -> io::Result<Vec<u8>> {
    let pixels: Vec<u8> = (0..STEPS as u8).collect();
    encode([STEPS, 1], &pixels, colours)
}

/// Indexed pixels; indices from `STEPS` on are those of lines.
fn encode(size: [usize; 2], pixels: &[u8], colours: &[[u8; 3]; STEPS]) -> io::Result<Vec<u8>> {
    let palette: Vec<u8> =
        colours.iter().copied().chain(colours.iter().map(|c| set_off(*c))).flatten().collect();
    let mut out = Vec::new();
    let [width, height] = size.map(|n| n as u32);
    let mut encoder = png::Encoder::new(&mut out, width, height);
    encoder.set_color(png::ColorType::Indexed);
    encoder.set_depth(png::BitDepth::Eight);
    encoder.set_palette(palette);
    encoder.set_compression(png::Compression::High);
    let mut writer = encoder.write_header().map_err(io::Error::other)?;
    writer.write_image_data(pixels).map_err(io::Error::other)?;
    writer.finish().map_err(io::Error::other)?;
    Ok(out)
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::colour::Scale;
    use super::*;

    #[test]
    fn values_between_centres_are_linear_and_flat_beyond_the_outer_ones() {
        // Centres at 0.5, 2, 4.5.
        let lines = [0.0, 1.0, 3.0, 6.0];
        assert_eq!(between(&lines, 0.2), (0, 0, 0.0));
        assert_eq!(between(&lines, 1.25), (0, 1, 0.5));
        assert_eq!(between(&lines, 2.0), (1, 2, 0.0));
        assert_eq!(between(&lines, 5.9), (2, 2, 0.0));
    }

    #[test]
    fn images_have_the_sections_proportions_top_row_first_and_mirror() {
        // 2 × 1 cells of 1 × 1 m, hot on the right: cells 0 and 1.
        let lines: [&[f64]; 2] = [&[0.0, 1.0, 2.0], &[0.0, 1.0]];
        let colours = Scale::Temperature.colours();
        let read = |png: &[u8]| {
            let mut reader = png::Decoder::new(io::Cursor::new(png)).read_info().unwrap();
            let mut pixels = vec![0; reader.output_buffer_size().unwrap()];
            let info = reader.next_frame(&mut pixels).unwrap();
            (info.width as usize, info.height as usize, pixels)
        };
        let plain = image(lines, &[0.0, 1.0], &colours, |v| v, &[], false).unwrap();
        let (w, h, pixels) = read(&plain);
        assert_eq!((w, h), (880, 440));
        assert_eq!((pixels[0], pixels[w - 1]), (0, STEPS as u8 - 1));
        let twice = image(lines, &[0.0, 1.0], &colours, |v| v, &[], true).unwrap();
        let (w, h, pixels) = read(&twice);
        assert_eq!((w, h), (880, 220));
        assert!(pixels.chunks_exact(w).all(|row| row.iter().eq(row.iter().rev())));
        // Two rows, hot above.
        let lines: [&[f64]; 2] = [&[0.0, 1.0], &[0.0, 1.0, 2.0]];
        let (_, _, pixels) = read(&image(lines, &[0.0, 1.0], &colours, |v| v, &[], false).unwrap());
        assert_eq!((pixels[0], *pixels.last().unwrap()), (STEPS as u8 - 1, 0));
    }

    #[test]
    fn lines_between_bands_lie_where_the_value_is_passed() {
        let lines: [&[f64]; 2] = [&[0.0, 1.0, 2.0], &[0.0, 1.0]];
        let colours = Scale::Speed.colours();
        let png = image(lines, &[0.0, 1.0], &colours, |v| v, &[0.5], false).unwrap();
        let mut reader = png::Decoder::new(io::Cursor::new(&png)).read_info().unwrap();
        let mut pixels = vec![0; reader.output_buffer_size().unwrap()];
        reader.next_frame(&mut pixels).unwrap();
        let dark: Vec<usize> = (0..880).filter(|n| pixels[*n] >= STEPS as u8).collect();
        assert_eq!(dark, [438, 439], "halfway between the centres of the cells");
    }
}
