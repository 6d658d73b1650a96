//! Committed inputs for speed and size: sections to be meshed, devices to be solved, and what is measured on them.
//! Convention: metres and SI units throughout; dimensions are common practice, no source.

pub mod angles;
pub mod boundary;
pub mod devices;
pub mod dump;
pub mod memory;
pub mod sections;
pub mod solving;
pub mod systems;
pub mod whole;
