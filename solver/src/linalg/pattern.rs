//! Where a symmetric matrix may be non-zero: the lower triangle, by columns.
//! Convention: the diagonal is always stored and comes first in its column; row numbers rise within a column.

use super::error::LinalgError;

/// Sparsity of a symmetric matrix of order `n`: its lower triangle by columns, diagonal included.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Pattern {
    starts: Vec<usize>,
    rows: Vec<u32>,
}

impl Pattern {
    /// Pattern in which all unknowns of each clique are coupled with each other.
    ///
    /// Cliques are lists of unknowns (those of an element, of an open boundary, of a circuit) in any order; repeated
    /// unknowns do no harm. Unknowns at or beyond `n` are left out, so that [`Pattern::clique_slots`] refuses them.
    pub fn from_cliques<'a>(n: usize, cliques: impl Iterator<Item = &'a [u32]>) -> Self {
        let (mut members, mut ends) = (Vec::new(), vec![0_usize]);
        for clique in cliques {
            members.extend(clique.iter().copied().filter(|&v| (v as usize) < n));
            ends.push(members.len());
        }
        let (owner_starts, owners) = cliques_of_unknowns(n, &members, &ends);

        let mut starts = Vec::with_capacity(n + 1);
        let mut rows: Vec<u32> = Vec::with_capacity(members.len() * 2 + n);
        let mut seen = vec![u32::MAX; n];
        starts.push(0);
        for col in 0..n {
            let first = rows.len();
            rows.push(col as u32);
            seen[col] = col as u32;
            for &clique in &owners[owner_starts[col]..owner_starts[col + 1]] {
                for &row in &members[ends[clique as usize]..ends[clique as usize + 1]] {
                    if row as usize > col && seen[row as usize] != col as u32 {
                        seen[row as usize] = col as u32;
                        rows.push(row);
                    }
                }
            }
            rows[first + 1..].sort_unstable();
            starts.push(rows.len());
        }
        rows.shrink_to_fit();
        Self { starts, rows }
    }

    /// Order of the matrix: its number of unknowns.
    pub fn n(&self) -> usize {
        self.starts.len() - 1
    }

    /// Number of stored entries (lower triangle with the diagonal).
    pub fn nnz(&self) -> usize {
        self.rows.len()
    }

    /// First entry of each column, and the end of the last: `n + 1` positions in the value array.
    pub fn starts(&self) -> &[usize] {
        &self.starts
    }

    /// Row of each stored entry.
    pub fn rows(&self) -> &[u32] {
        &self.rows
    }

    /// Rows of column `col`, rising, the diagonal first.
    pub fn column(&self, col: usize) -> &[u32] {
        &self.rows[self.starts[col]..self.starts[col + 1]]
    }

    /// Position in the value array of entry `(row, col)`, which is also that of `(col, row)`.
    pub fn slot(&self, row: u32, col: u32) -> Option<usize> {
        let (row, col) = (row.max(col), row.min(col) as usize);
        if row as usize >= self.n() {
            return None;
        }
        let found = self.column(col).binary_search(&row).ok()?;
        Some(self.starts[col] + found)
    }

    /// Slots of a dense symmetric block over `dofs`, packed by rows: (0,0), (1,0), (1,1), (2,0), ...
    ///
    /// `out` is cleared first and holds `dofs.len() (dofs.len() + 1) / 2` slots afterwards.
    ///
    /// # Errors
    /// [`LinalgError::NotInPattern`] if two of the unknowns are not coupled, or one does not exist.
    pub fn clique_slots(&self, dofs: &[u32], out: &mut Vec<u32>) -> Result<(), LinalgError> {
        out.clear();
        for (i, &row) in dofs.iter().enumerate() {
            for &col in &dofs[..=i] {
                let slot =
                    self.slot(row, col).ok_or(LinalgError::NotInPattern { row: row as usize, col: col as usize })?;
                out.push(slot as u32);
            }
        }
        Ok(())
    }
}

/// Transpose of the clique lists: the cliques of each unknown, rising.
fn cliques_of_unknowns(n: usize, members: &[u32], ends: &[usize]) -> (Vec<usize>, Vec<u32>) {
    let mut starts = vec![0_usize; n + 1];
    for &v in members {
        starts[v as usize + 1] += 1;
    }
    for v in 0..n {
        starts[v + 1] += starts[v];
    }
    let mut next = starts.clone();
    let mut owners = vec![0_u32; members.len()];
    for clique in 0..ends.len() - 1 {
        for &v in &members[ends[clique]..ends[clique + 1]] {
            owners[next[v as usize]] = clique as u32;
            next[v as usize] += 1;
        }
    }
    (starts, owners)
}
