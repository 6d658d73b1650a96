//! `fields/NNNN.vtu`: the maps of one snapshot in the XML unstructured-grid format of the Visualization Toolkit.
//!
//! Points are the nodes of the elements at `(x, y, z) = (r, z, 0)` in metres; vectors are `(r, z, 0)` components.
//! Elements of order 1, 2 and 3 are cells of type 5 (triangle), 22 (quadratic triangle) and 69 (Lagrange triangle), whose
//! nodes have the order of ours: corners, then the edges (0,1), (1,2), (2,0), then the inside.
//! Point data are the continuous fields: temperature in degrees Celsius (`NaN` where none is solved for), hottest
//! temperature, the vector potential and the flux function `r A` (flux lines are its contours).
//! Cell data are the fields that jump between elements, as means over each element: loss, current density, flux density,
//! force density, the number of the region and of the part (from 0 in the order of the job, -1 elsewhere). Phasors are peak values at `e^{+jwt}`, real and imaginary part apart.
//! Arrays are little-endian, base64, each led by its length in bytes as `UInt64`. Source: VTK File Formats,
//! chapter "XML File Formats" of The VTK User's Guide, Kitware.

use std::io;

use base64::Engine;
use base64::engine::general_purpose::STANDARD;
use mesher::RegionId;
use num_complex::Complex64;
use quick_xml::Writer;
use quick_xml::events::{BytesDecl, BytesText, Event};
use solver::constants::ZERO_CELSIUS_K;
use solver::results::{FieldMaps, RegionName, Results, Section, Snapshot};

use super::EncodeError;

/// What the cell array `part` holds outside parts.
const NO_PART: i64 = -1;

type Xml = Writer<Vec<u8>>;

/// The file of one snapshot.
///
/// # Errors
/// The XML could not be written.
pub fn snapshot(results: &Results, snapshot: &Snapshot) -> Result<Vec<u8>, EncodeError> {
    let section = &results.section;
    let mut xml = Writer::new_with_indent(Vec::new(), b' ', 1);
    xml.write_event(Event::Decl(BytesDecl::new("1.0", None, None)))?;
    let file =
        [("type", "UnstructuredGrid"), ("version", "1.0"), ("byte_order", "LittleEndian"), ("header_type", "UInt64")];
    xml.create_element("VTKFile").with_attributes(file).write_inner_content(|xml| {
        xml.create_element("UnstructuredGrid").write_inner_content(|xml| {
            xml.create_element("FieldData").write_inner_content(|xml| single(xml, "TimeValue", snapshot.time_s))?;
            let points = section.nodes.points.len().to_string();
            let cells = section.mesh.triangles().len().to_string();
            let piece = [("NumberOfPoints", points.as_str()), ("NumberOfCells", cells.as_str())];
            xml.create_element("Piece").with_attributes(piece).write_inner_content(|xml| {
                geometry(xml, section)?;
                xml.create_element("PointData").write_inner_content(|xml| point_data(xml, results, snapshot))?;
                xml.create_element("CellData").write_inner_content(|xml| cell_data(xml, section, snapshot))?;
                Ok(())
            })?;
            Ok(())
        })?;
        Ok(())
    })?;
    let mut bytes = xml.into_inner();
    bytes.push(b'\n');
    Ok(bytes)
}

fn geometry(xml: &mut Xml, section: &Section) -> io::Result<()> {
    let nodes = &section.nodes;
    xml.create_element("Points").write_inner_content(|xml| {
        let points: Vec<f64> = nodes.points.iter().flat_map(|p| [p[0], p[1], 0.0]).collect();
        floats(xml, "Points", 3, &points)
    })?;
    xml.create_element("Cells").write_inner_content(|xml| {
        let cells = section.mesh.triangles().len();
        let stride = nodes_of_order(nodes.order);
        integers(xml, "connectivity", nodes.elements.iter().map(|&node| u64::from(node)))?;
        integers(xml, "offsets", (1..=cells).map(|cell| (cell * stride) as u64))?;
        array(xml, "UInt8", "types", 1, &vec![cell_type(nodes.order); cells])
    })?;
    Ok(())
}

fn nodes_of_order(order: usize) -> usize {
    (order + 1) * (order + 2) / 2
}

fn cell_type(order: usize) -> u8 {
    match order {
        1 => 5,
        2 => 22,
        _ => 69,
    }
}

fn point_data(xml: &mut Xml, results: &Results, snapshot: &Snapshot) -> io::Result<()> {
    for (name, kelvin) in
        [("temperature_degC", &snapshot.temperature_k), ("peak_temperature_degC", &results.peak_temperature_k)]
    {
        if !kelvin.is_empty() {
            let degc: Vec<f64> = kelvin.iter().map(|kelvin| kelvin - ZERO_CELSIUS_K).collect();
            floats(xml, name, 1, &degc)?;
        }
    }
    let factor = snapshot.field_factor;
    let potential = &snapshot.field.vector_potential_wb_per_m;
    let radius = || results.section.nodes.points.iter().map(|point| point[0]);
    let of = |value: fn(&Complex64) -> f64| potential.iter().map(|a| factor * value(a)).collect::<Vec<f64>>();
    let flux = |value: fn(&Complex64) -> f64| {
        potential.iter().zip(radius()).map(|(a, r)| r * factor * value(a)).collect::<Vec<f64>>()
    };
    floats(xml, "A_phi_re_peak_wb_per_m", 1, &of(|a| a.re))?;
    floats(xml, "A_phi_im_peak_wb_per_m", 1, &of(|a| a.im))?;
    floats(xml, "A_phi_abs_peak_wb_per_m", 1, &of(|a| a.norm()))?;
    floats(xml, "r_A_re_peak_wb", 1, &flux(|a| a.re))?;
    floats(xml, "r_A_im_peak_wb", 1, &flux(|a| a.im))
}

fn cell_data(xml: &mut Xml, section: &Section, snapshot: &Snapshot) -> io::Result<()> {
    let field: &FieldMaps = &snapshot.field;
    let (order, factor) = (section.nodes.order, snapshot.field_factor);
    let square = factor * factor;
    let regions = section.mesh.regions();
    integers(xml, "region", regions.iter().map(|region| u64::from(region.0)))?;
    parts(xml, section)?;
    let loss = means(order, &field.joule_loss_w_per_m3, |&loss| [square * loss]);
    floats(xml, "joule_loss_w_per_m3", 1, &loss)?;
    let current = &field.current_density_a_per_m2;
    floats(xml, "J_phi_re_peak_a_per_m2", 1, &means(order, current, |j| [factor * j.re]))?;
    floats(xml, "J_phi_im_peak_a_per_m2", 1, &means(order, current, |j| [factor * j.im]))?;
    let flux = &field.flux_density_t;
    floats(xml, "B_re_peak_t", 3, &means(order, flux, |b| [factor * b[0].re, factor * b[1].re, 0.0]))?;
    floats(xml, "B_im_peak_t", 3, &means(order, flux, |b| [factor * b[0].im, factor * b[1].im, 0.0]))?;
    let strength = &field.field_strength_a_per_m;
    floats(xml, "H_re_peak_a_per_m", 3, &means(order, strength, |h| [factor * h[0].re, factor * h[1].re, 0.0]))?;
    floats(xml, "H_im_peak_a_per_m", 3, &means(order, strength, |h| [factor * h[0].im, factor * h[1].im, 0.0]))?;
    let force = means(order, &field.force_density_n_per_m3, |f| [square * f[0], square * f[1], 0.0]);
    floats(xml, "force_density_n_per_m3", 3, &force)
}

/// The part each element belongs to.
fn parts(xml: &mut Xml, section: &Section) -> io::Result<()> {
    let part_of = |region: &RegionId| match section.regions.get(region.0 as usize) {
        Some(RegionName::Part(part, _)) => i64::try_from(*part).unwrap_or(NO_PART),
        _ => NO_PART,
    };
    let bytes: Vec<u8> = section.mesh.regions().iter().flat_map(|region| part_of(region).to_le_bytes()).collect();
    array(xml, "Int64", "part", 1, &bytes)
}

/// Mean over each element, `n` components a cell, from one value a local node: the integral of the Lagrange basis over a
/// straight triangle.
fn means<T, const N: usize>(order: usize, values: &[T], components: impl Fn(&T) -> [f64; N]) -> Vec<f64> {
    let weights = mean_weights(order);
    let mut out = Vec::with_capacity(values.len() / weights.len() * N);
    for element in values.chunks_exact(weights.len()) {
        let mut mean = [0.0; N];
        for (value, weight) in element.iter().zip(weights) {
            for (sum, component) in mean.iter_mut().zip(components(value)) {
                *sum += weight * component;
            }
        }
        out.extend(mean);
    }
    out
}

/// Integral of each basis function over the area of the triangle.
fn mean_weights(order: usize) -> &'static [f64] {
    const CORNER: f64 = 1.0 / 30.0;
    const EDGE: f64 = 3.0 / 40.0;
    const THIRD: f64 = 1.0 / 3.0;
    match order {
        1 => &[THIRD; 3],
        2 => &[0.0, 0.0, 0.0, THIRD, THIRD, THIRD],
        _ => &[CORNER, CORNER, CORNER, EDGE, EDGE, EDGE, EDGE, EDGE, EDGE, 9.0 / 20.0],
    }
}

fn floats(xml: &mut Xml, name: &str, components: usize, values: &[f64]) -> io::Result<()> {
    let bytes: Vec<u8> = values.iter().flat_map(|value| value.to_le_bytes()).collect();
    array(xml, "Float64", name, components, &bytes)
}

fn integers(xml: &mut Xml, name: &str, values: impl Iterator<Item = u64>) -> io::Result<()> {
    let bytes: Vec<u8> = values.flat_map(u64::to_le_bytes).collect();
    array(xml, "UInt64", name, 1, &bytes)
}

fn array(xml: &mut Xml, kind: &str, name: &str, components: usize, bytes: &[u8]) -> io::Result<()> {
    let mut block = Vec::with_capacity(bytes.len() + 8);
    block.extend((bytes.len() as u64).to_le_bytes());
    block.extend(bytes);
    let components = components.to_string();
    let attributes =
        [("type", kind), ("Name", name), ("NumberOfComponents", components.as_str()), ("format", "binary")];
    let text = STANDARD.encode(block);
    xml.create_element("DataArray").with_attributes(attributes).write_text_content(BytesText::from_escaped(text))?;
    Ok(())
}

fn single(xml: &mut Xml, name: &str, value: f64) -> io::Result<()> {
    let attributes = [("type", "Float64"), ("Name", name), ("NumberOfTuples", "1"), ("format", "ascii")];
    let text = format!("{value:?}");
    xml.create_element("DataArray").with_attributes(attributes).write_text_content(BytesText::new(&text))?;
    Ok(())
}
