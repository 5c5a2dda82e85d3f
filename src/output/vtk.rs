//! Fields for any VTK viewer: rectilinear `.vtr` and, revolved about the axis, structured `.vts`.
//!
//! XML with inline base64 arrays, compressed block by block. All fields are cell data.

use std::f64::consts::PI;
use std::io::{self, Write};

use vtkio::IOBuffer;
use vtkio::model::{
    Attribute, Attributes, ByteOrder, Coordinates, DataArray, DataSet, ElementType, Extent, Piece,
    RectilinearGridPiece, StructuredGridPiece, Version, Vtk,
};
use vtkio::xml::Compressor;

/// Values of one field, one per cell of the section, row-major.
#[derive(Debug, Clone, PartialEq)]
pub enum Values {
    /// Numbers.
    Scalar(Vec<f64>),
    /// Components along x (radius) and y (axis).
    Vector(Vec<[f64; 2]>),
    /// Indices.
    Index(Vec<i32>),
}

/// A named field.
#[derive(Debug, Clone, PartialEq)]
pub struct Field {
    /// Array name in the file.
    pub name: &'static str,
    /// Values.
    pub values: Values,
}

/// Fields on a section's mesh.
#[derive(Debug, Clone, PartialEq)]
pub struct Fields {
    /// Mesh lines along x (radius) [m].
    pub x: Vec<f64>,
    /// Mesh lines along y (axis) [m].
    pub y: Vec<f64>,
    /// The fields.
    pub fields: Vec<Field>,
}

impl Fields {
    /// Writes the section as a rectilinear grid in the plane z = 0; vectors get a third
    /// component 0.
    ///
    /// # Errors
    /// What the writer reports.
    pub fn write_rectilinear(&self, out: impl Write) -> io::Result<()> {
        let extent = extent([self.x.len(), self.y.len(), 1]);
        let arrays = self.fields.iter().map(|field| {
            array(field, |values| match values {
                Values::Scalar(v) => IOBuffer::F64(v.clone()),
                Values::Index(v) => IOBuffer::I32(v.clone()),
                Values::Vector(v) => {
                    IOBuffer::F64(v.iter().flat_map(|v| [v[0], v[1], 0.0]).collect())
                }
            })
        });
        let data = Attributes { point: Vec::new(), cell: arrays.collect() };
        let coords = Coordinates {
            x: IOBuffer::F64(self.x.clone()),
            y: IOBuffer::F64(self.y.clone()),
            z: IOBuffer::F64(vec![0.0]),
        };
        let set = DataSet::RectilinearGrid {
            extent: extent.clone(),
            meta: None,
            pieces: vec![Piece::Inline(Box::new(RectilinearGridPiece { extent, coords, data }))],
        };
        write(set, out)
    }

    /// Writes the section revolved about x = 0 in `sectors` equal sectors of a full turn as a
    /// structured grid: the axis points along z, axes run (radius, turn, height). Vectors turn
    /// with the middle of their sector.
    ///
    /// # Errors
    /// What the writer reports.
    pub fn write_revolved(&self, sectors: usize, out: impl Write) -> io::Result<()> {
        let extent = extent([self.x.len(), sectors + 1, self.y.len()]);
        let mut points = Vec::with_capacity(3 * self.x.len() * (sectors + 1) * self.y.len());
        for z in &self.y {
            for turn in 0..=sectors {
                // The last plane is the first one again, to the bit.
                let (sin, cos) = direction((turn % sectors) as f64, sectors);
                points.extend(self.x.iter().flat_map(|r| [r * cos, r * sin, *z]));
            }
        }
        let nx = self.x.len() - 1;
        let arrays = self.fields.iter().map(|field| {
            array(field, |values| match values {
                Values::Scalar(v) => IOBuffer::F64(turned(v, nx, sectors, |v, _| [*v])),
                Values::Index(v) => IOBuffer::I32(turned(v, nx, sectors, |v, _| [*v])),
                Values::Vector(v) => IOBuffer::F64(turned(v, nx, sectors, |v, (sin, cos)| {
                    [v[0] * cos, v[0] * sin, v[1]]
                })),
            })
        });
        let data = Attributes { point: Vec::new(), cell: arrays.collect() };
        let piece = StructuredGridPiece { extent: extent.clone(), points: points.into(), data };
        let set = DataSet::StructuredGrid {
            extent,
            meta: None,
            pieces: vec![Piece::Inline(Box::new(piece))],
        };
        write(set, out)
    }
}

/// Sine and cosine of a sector's direction, `turn` counted in sectors.
fn direction(turn: f64, sectors: usize) -> (f64, f64) {
    (2.0 * PI * turn / sectors as f64).sin_cos()
}

/// Every row repeated for every sector.
fn turned<T, U, const N: usize>(
    values: &[T],
    nx: usize,
    sectors: usize,
    turn: impl Fn(&T, (f64, f64)) -> [U; N],
) -> Vec<U> {
    let mut all = Vec::with_capacity(N * values.len() * sectors);
    for row in values.chunks_exact(nx) {
        for sector in 0..sectors {
            let middle = direction(sector as f64 + 0.5, sectors);
            all.extend(row.iter().flat_map(|value| turn(value, middle)));
        }
    }
    all
}

/// Point counts to the inclusive index ranges that the XML format wants.
fn extent(points: [usize; 3]) -> Extent {
    Extent::Ranges(points.map(|count| 0..=(count - 1) as i32))
}

fn array(field: &Field, data: impl Fn(&Values) -> IOBuffer) -> Attribute {
    let elem = match field.values {
        Values::Vector(_) => ElementType::Vectors,
        _ => ElementType::Scalars { num_comp: 1, lookup_table: None },
    };
    Attribute::DataArray(DataArray { name: field.name.into(), elem, data: data(&field.values) })
}

fn write(data: DataSet, out: impl Write) -> io::Result<()> {
    let vtk = Vtk {
        version: Version::new_xml(1, 0),
        byte_order: ByteOrder::LittleEndian,
        title: String::new(),
        data,
        file_path: None,
    };
    let xml = vtk.try_into_xml_format(Compressor::LZ4, 1).map_err(io::Error::other)?;
    xml.write(out).map_err(io::Error::other)
}
