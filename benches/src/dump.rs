//! Systems as raw files for other solvers. Convention: little-endian; the lower triangle by columns (which is the upper triangle by
//! rows), diagonal first in each column, numbers from 0: `starts` (64-bit), `rows` (32-bit), `values` and `rhs` (64-bit floats, complex
//! ones as pairs).

use std::fs;
use std::io;
use std::path::Path;

use num_complex::Complex64;

use crate::systems::System;

/// A number that can be written to a file.
pub trait Raw: Copy {
    /// Appends its bytes.
    fn put(self, out: &mut Vec<u8>);
}

impl Raw for f64 {
    fn put(self, out: &mut Vec<u8>) {
        out.extend(self.to_le_bytes());
    }
}

impl Raw for Complex64 {
    fn put(self, out: &mut Vec<u8>) {
        self.re.put(out);
        self.im.put(out);
    }
}

impl Raw for u32 {
    fn put(self, out: &mut Vec<u8>) {
        out.extend(self.to_le_bytes());
    }
}

impl Raw for u64 {
    fn put(self, out: &mut Vec<u8>) {
        out.extend(self.to_le_bytes());
    }
}

/// Writes a system into a folder.
///
/// # Errors
/// A file that cannot be written.
pub fn write<T: Raw>(system: &System<T>, folder: &Path) -> io::Result<()> {
    fs::create_dir_all(folder)?;
    let pattern = &system.matrix.pattern;
    put(pattern.starts().iter().map(|&s| s as u64), &folder.join("starts"))?;
    put(pattern.rows().iter().copied(), &folder.join("rows"))?;
    put(system.matrix.values.iter().copied(), &folder.join("values"))?;
    put(system.rhs.iter().copied(), &folder.join("rhs"))
}

/// Writes numbers into a file.
///
/// # Errors
/// A file that cannot be written.
pub fn put<T: Raw>(numbers: impl Iterator<Item = T>, file: &Path) -> io::Result<()> {
    let mut bytes = Vec::new();
    numbers.for_each(|x| x.put(&mut bytes));
    fs::write(file, bytes)
}
