//! Reads back `fields.vtr` as [`Fields::write_rectilinear`] writes it: inline arrays in base64,
//! compressed with LZ4 block by block, little-endian, 64-bit headers.
//!
//! An array is `[n][size][last][c₁ … c_n]` (64-bit numbers: blocks, bytes of a block, bytes of a
//! shorter last block or 0, compressed bytes of each), encoded on its own, then all blocks, encoded
//! together. It reads no other files; what does not fit is an error, never a guess.

use base64::Engine as _;
use base64::engine::general_purpose::STANDARD;

use super::vtk::{Field, Fields, Values};

/// Fields that are read.
const NAMES: [&str; 5] = ["temperature", "velocity", "speed", "block", "heat_flux"];
/// Largest block that is believed [bytes].
const LARGEST_BLOCK: usize = 1 << 24;

/// Reads the text of a file.
///
/// # Errors
/// What does not fit, in words.
pub fn read(text: &str) -> Result<Fields, String> {
    for wanted in ["byte_order=\"LittleEndian\"", "header_type=\"UInt64\"", "vtkLZ4DataCompressor"]
    {
        if !text.contains(wanted) {
            return Err(format!("{wanted} is not in it"));
        }
    }
    let section = |name: &str| {
        let start = text.find(&format!("<{name}")).ok_or(format!("{name} is not in it"))?;
        let length = text[start..].find(&format!("</{name}>"));
        Ok::<&str, String>(&text[start..start + length.ok_or(format!("{name} has no end"))?])
    };
    let lines = arrays(section("Coordinates")?);
    let [x, y, ..] = &lines[..] else { return Err("mesh lines are not in it".into()) };
    let (x, y) = (doubles(x.1)?, doubles(y.1)?);
    let mut fields = Vec::new();
    for (tag, data) in arrays(section("CellData")?) {
        let Some(name) = NAMES.into_iter().find(|n| attribute(tag, "Name") == Some(n)) else {
            continue;
        };
        let values = match (attribute(tag, "type"), attribute(tag, "NumberOfComponents")) {
            (Some("Float64"), None | Some("1")) => Values::Scalar(doubles(data)?),
            (Some("Float64"), Some("3")) => {
                Values::Vector(doubles(data)?.chunks_exact(3).map(|v| [v[0], v[1]]).collect())
            }
            (Some("Int32"), None | Some("1")) => {
                let number = |b: &[u8]| i32::from_le_bytes([b[0], b[1], b[2], b[3]]);
                Values::Index(bytes(data)?.chunks_exact(4).map(number).collect())
            }
            _ => return Err(format!("{name} has values of an unexpected kind")),
        };
        fields.push(Field { name, values });
    }
    Ok(Fields { x, y, fields })
}

/// Tag and content of every array in a part of the file.
fn arrays(part: &str) -> Vec<(&str, &str)> {
    let array = |text| {
        let (tag, rest): (&str, &str) = str::split_once(text, '>')?;
        Some((tag, rest.split_once("</DataArray>")?.0.trim()))
    };
    part.split("<DataArray").skip(1).filter_map(array).collect()
}

/// An attribute's value in a tag.
fn attribute<'t>(tag: &'t str, name: &str) -> Option<&'t str> {
    let start = tag.find(&format!(" {name}=\""))? + name.len() + 3;
    tag[start..].split('"').next()
}

fn doubles(data: &str) -> Result<Vec<f64>, String> {
    let number = |b: &[u8]| f64::from_le_bytes([b[0], b[1], b[2], b[3], b[4], b[5], b[6], b[7]]);
    Ok(bytes(data)?.chunks_exact(8).map(number).collect())
}

/// The bytes of an array.
fn bytes(data: &str) -> Result<Vec<u8>, String> {
    let short = || "an array is cut short".to_string();
    let decoded = |text: &str| STANDARD.decode(text).map_err(|e| format!("an array: {e}"));
    let letters = |bytes: usize| bytes.div_ceil(3) * 4;
    // The count of blocks lies in the first nine bytes; three bytes are four letters.
    let first = decoded(data.get(..12).ok_or_else(short)?)?;
    let blocks = numbers(&first)[0];
    if blocks > data.len() {
        return Err(short());
    }
    let header = letters(8 * (3 + blocks));
    let sizes = numbers(&decoded(data.get(..header).ok_or_else(short)?)?);
    let packed = decoded(&data[header..])?;
    let [_, size, last] = sizes[..3] else { return Err(short()) };
    if size > LARGEST_BLOCK || last > size {
        return Err("an array has blocks of an unexpected size".into());
    }
    let mut out = Vec::new();
    let mut at = 0usize;
    for (n, length) in sizes[3..].iter().enumerate() {
        let end = at.checked_add(*length).ok_or_else(short)?;
        let block = packed.get(at..end).ok_or_else(short)?;
        let is_last = n + 1 == blocks;
        let whole = if is_last && last > 0 { last } else { size };
        let unpacked = lz4_flex::block::decompress(block, whole);
        let unpacked = unpacked.map_err(|e| format!("an array: {e}"))?;
        // After whole blocks the writer leaves an empty one.
        let is_empty = is_last && last == 0 && unpacked.is_empty();
        if unpacked.len() != whole && !is_empty {
            return Err(short());
        }
        out.extend(unpacked);
        at = end;
    }
    Ok(out)
}

/// 64-bit numbers; what is too large for this machine becomes the largest it has.
fn numbers(bytes: &[u8]) -> Vec<usize> {
    let number = |b: &[u8]| u64::from_le_bytes([b[0], b[1], b[2], b[3], b[4], b[5], b[6], b[7]]);
    bytes.chunks_exact(8).map(|b| usize::try_from(number(b)).unwrap_or(usize::MAX)).collect()
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    /// Sizes around the compressor's block of 32 768 bytes: 4096 numbers.
    fn sample(nx: usize, ny: usize) -> Fields {
        let line = |count: usize| (0..=count).map(|n| n as f64 * 0.37).collect();
        let value = |n: usize| (n as f64 * 0.7).sin() / 3.0;
        let cells = nx * ny;
        let vector = (0..cells).map(|n| [value(n), -value(3 * n)]).collect();
        let field = |name, values| Field { name, values };
        Fields {
            x: line(nx),
            y: line(ny),
            fields: vec![
                field("temperature", Values::Scalar((0..cells).map(value).collect())),
                field("velocity", Values::Vector(vector)),
                field("block", Values::Index((0..cells).map(|n| n as i32 - 1).collect())),
            ],
        }
    }

    fn written(fields: &Fields) -> String {
        let mut out = Vec::new();
        fields.write_rectilinear(&mut out).unwrap();
        String::from_utf8(out).unwrap()
    }

    #[test]
    fn fields_come_back_bit_by_bit() {
        for size in [[3, 2], [64, 64], [64, 65], [123, 70]] {
            let fields = sample(size[0], size[1]);
            assert_eq!(read(&written(&fields)).unwrap(), fields, "{size:?}");
        }
    }

    #[test]
    fn damaged_files_are_refused_without_a_panic() {
        let text = written(&sample(40, 30));
        for n in (0..text.len()).step_by(97) {
            assert!(read(&text[..n]).is_err(), "cut at {n}");
            let mut damaged = text.clone().into_bytes();
            damaged[n] = if damaged[n] == b'Q' { b'/' } else { b'Q' };
            // What is read may differ, but reading ends.
            let _ = read(&String::from_utf8(damaged).unwrap());
        }
    }
}
