//! Field files of known arrays. The tests leave the files and their arrays as plain text in the
//! build's `tmp` folder, where `.ci/read_vtr.py` compares them bit by bit with what an
//! independent reader finds.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

use std::fmt::Write as _;
use std::fs::{self, File};
use std::path::PathBuf;

use ventrise::output::vtk::{Field, Fields, Values};

/// Uneven lines and fields whose values no two cells share.
fn sample(nx: usize, ny: usize) -> Fields {
    let line = |n: usize| 1e-3 * (n as f64 + 0.37 * (n as f64).sqrt());
    let x = (0..=nx).map(line).collect();
    let y = (0..=ny).map(|n| 2.0 * line(n)).collect();
    let cells = nx * ny;
    let mut scalar: Vec<f64> = (0..cells).map(|n| 20.0 + (n as f64 * 0.7).sin() / 3.0).collect();
    scalar[0] = -0.0;
    scalar[1] = f64::MIN_POSITIVE / 4.0;
    let vector = (0..cells).map(|n| [(n as f64).cos() * 1e-9, 0.1 - n as f64 / 7.0]).collect();
    let index = (0..cells).map(|n| if n % 5 == 0 { -1 } else { n as i32 }).collect();
    Fields {
        x,
        y,
        fields: vec![
            Field { name: "temperature", values: Values::Scalar(scalar) },
            Field { name: "velocity", values: Values::Vector(vector) },
            Field { name: "block", values: Values::Index(index) },
        ],
    }
}

/// The arrays as text, one line each, floats as the hexadecimal digits of their bits.
fn plain(fields: &Fields) -> String {
    let mut text = String::new();
    let mut line = |name: &str, values: &[f64]| {
        write!(text, "{name} f64").unwrap();
        values.iter().for_each(|v| write!(text, " {:016x}", v.to_bits()).unwrap());
        text.push('\n');
    };
    line("x", &fields.x);
    line("y", &fields.y);
    for field in &fields.fields {
        match &field.values {
            Values::Scalar(v) => line(field.name, v),
            Values::Vector(v) => line(field.name, v.as_flattened()),
            Values::Index(_) => {}
        }
    }
    for field in &fields.fields {
        if let Values::Index(v) = &field.values {
            write!(text, "{} i32", field.name).unwrap();
            v.iter().for_each(|v| write!(text, " {v}").unwrap());
            text.push('\n');
        }
    }
    text
}

fn leave(name: &str, fields: &Fields, sectors: usize) {
    let folder = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join("vtk");
    fs::create_dir_all(&folder).unwrap();
    let file = |ending: &str| folder.join(format!("{name}.{ending}"));
    fields.write_rectilinear(File::create(file("vtr")).unwrap()).unwrap();
    fields.write_revolved(sectors, File::create(file("vts")).unwrap()).unwrap();
    fs::write(file("txt"), format!("sectors {sectors}\n{}", plain(fields))).unwrap();
}

#[test]
fn small_uneven_section() {
    leave("small", &sample(5, 3), 7);
}

#[test]
fn arrays_that_fill_whole_compressed_blocks() {
    // 64 × 64 doubles are exactly 32 768 bytes, one block of the compressor.
    leave("whole-blocks", &sample(64, 64), 4);
}

#[test]
fn arrays_beyond_one_compressed_block() {
    leave("several-blocks", &sample(123, 61), 3);
}
