//! Everything about a factorisation that does not depend on the values: done once a pattern.
//!
//! A front is a dense block of `pivots + border` rows. Its first columns are eliminated; what they leave on the border
//! is added into the front of its parent. Fronts are numbered in postorder, so every subtree is a contiguous range.
//! Convention: columns and rows are numbered by elimination step; panels are stored by columns.

use std::fmt;
use std::ops::Range;
use std::sync::Arc;

use super::adjacency::Adjacency;
use super::error::LinalgError;
use super::etree::{self, NONE};
use super::order;
use super::pattern::Pattern;
use super::supernodes::{Supernode, supernodes};

/// A dense front.
#[derive(Debug, Clone)]
pub(super) struct Front {
    /// First pivot column.
    pub(super) first: usize,
    /// Number of pivot columns.
    pub(super) pivots: usize,
    /// Number of rows below the pivot block.
    pub(super) border: usize,
    /// Where its border rows lie in [`Plan::relative`].
    pub(super) rows: Range<usize>,
    /// Where its panel, `(pivots + border)` rows by `pivots` columns, lies among the factor's values.
    pub(super) panel: Range<usize>,
    /// Where its matrix entries lie in [`Plan::scatter`].
    pub(super) entries: Range<usize>,
    /// Where its children lie in [`Plan::children`].
    pub(super) children: Range<usize>,
    /// First front of its subtree.
    pub(super) subtree: usize,
    /// Cost of its subtree in operations, memory traffic included.
    pub(super) work: f64,
}

impl Front {
    /// Rows of the front.
    pub(super) fn height(&self) -> usize {
        self.pivots + self.border
    }
}

/// Elimination order and symbolic factorisation of a pattern.
pub struct Plan {
    pattern: Arc<Pattern>,
    /// Unknown eliminated at each step.
    pub(super) order: Vec<u32>,
    /// Fronts in postorder.
    pub(super) fronts: Vec<Front>,
    /// For each border row of a front, its row in the parent's front.
    pub(super) relative: Vec<u32>,
    /// For each matrix entry: its slot in the pattern, and its place in the panel of its front.
    pub(super) scatter: Vec<[u32; 2]>,
    /// Children of all fronts, rising within each.
    pub(super) children: Vec<u32>,
    /// Fronts without a parent.
    pub(super) roots: Vec<u32>,
    fill: usize,
    flops: f64,
}

impl Plan {
    /// Orders and analyses a pattern.
    ///
    /// `coordinates` holds one point per unknown, in any unit; non-finite points (border unknowns) are placed between
    /// their neighbours. Without coordinates the order is approximate minimum degree. `last` names unknowns to be
    /// eliminated last: dense rows (circuit unknowns) and the clique of an open boundary.
    ///
    /// # Errors
    /// [`LinalgError::Size`] for a wrong number of points, [`LinalgError::NoSuchUnknown`] if `last` names one outside
    /// the system, [`LinalgError::TooLarge`] if minimum degree runs out of memory.
    pub fn new(pattern: Arc<Pattern>, coordinates: Option<&[[f64; 2]]>, last: &[u32]) -> Result<Self, LinalgError> {
        let graph = Adjacency::new(&pattern);
        let first_order = order::order(&graph, coordinates, last)?;
        let parent = etree::elimination_tree(&graph, &first_order, &etree::inverse(&first_order));
        let post = etree::postorder(&parent);
        let order: Vec<u32> = post.iter().map(|&step| first_order[step as usize]).collect();
        let parent = etree::renumber(&parent, &post);
        let place = etree::inverse(&order);
        let counts = etree::column_counts(&graph, &order, &place, &parent);
        let nodes = supernodes(&parent, &counts);

        let mut build = Build::new(&graph, &order, &place, &nodes);
        for (k, node) in nodes.iter().enumerate() {
            build.add_front(k, *node, &pattern);
        }
        let relative = build.relative_rows();
        let fill = build.fronts.iter().map(|f| f.pivots * (f.pivots + 1) / 2 + f.pivots * f.border).sum();
        let flops = build.fronts.iter().map(operations).sum();
        let (fronts, scatter) = (build.fronts, build.scatter);
        let (children, roots) = (build.children, build.roots);
        Ok(Self { pattern, order, fronts, relative, scatter, children, roots, fill, flops })
    }

    /// Pattern this plan was made for.
    pub fn pattern(&self) -> &Arc<Pattern> {
        &self.pattern
    }

    /// Number of unknowns.
    pub fn n(&self) -> usize {
        self.order.len()
    }

    /// Stored entries of the factor, diagonal and explicit zeros included.
    pub fn fill(&self) -> usize {
        self.fill
    }

    /// Multiplications of one factorisation (each with an addition), in the scalar of the matrix.
    pub fn flops(&self) -> f64 {
        self.flops
    }

    /// Children of a front.
    pub(super) fn children(&self, front: &Front) -> &[u32] {
        &self.children[front.children.clone()]
    }

    /// First front from `k` down that has not exactly one heavy child: above it there is nothing to do in parallel.
    pub(super) fn branch(&self, k: usize, heavy: impl Fn(u32) -> bool) -> usize {
        let mut branch = k;
        loop {
            let mut children = self.children(&self.fronts[branch]).iter().filter(|&&child| heavy(child));
            match (children.next(), children.next()) {
                (Some(&only), None) => branch = only as usize,
                _ => return branch,
            }
        }
    }

    /// Values of the largest panel or border block.
    pub(super) fn largest_block(&self) -> usize {
        self.fronts.iter().map(|front| front.panel.len().max(front.border * front.border)).max().unwrap_or(0)
    }

    /// Values of the factor, panels one after the other.
    pub(super) fn panel_values(&self) -> usize {
        self.fronts.last().map_or(0, |front| front.panel.end)
    }
}

impl fmt::Debug for Plan {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mut shape = f.debug_struct("Plan");
        shape.field("unknowns", &self.n()).field("fronts", &self.fronts.len()).field("fill", &self.fill);
        shape.finish_non_exhaustive()
    }
}

/// Multiplications that eliminate the pivots of a front.
fn operations(front: &Front) -> f64 {
    let (p, b) = (front.pivots as f64, front.border as f64);
    p * p * p / 6.0 + p * p * b / 2.0 + p * b * (b + 1.0) / 2.0
}

/// State of the symbolic factorisation.
struct Build<'a> {
    graph: &'a Adjacency,
    order: &'a [u32],
    place: &'a [u32],
    /// Front of each column.
    front_of: Vec<u32>,
    /// Children found so far, as linked lists: the last child of a front and the sibling before it.
    last_child: Vec<u32>,
    previous_sibling: Vec<u32>,
    /// Last front that listed a row, and the row's place in that front.
    seen: Vec<u32>,
    position: Vec<u32>,
    fronts: Vec<Front>,
    rows: Vec<u32>,
    scatter: Vec<[u32; 2]>,
    children: Vec<u32>,
    roots: Vec<u32>,
}

impl<'a> Build<'a> {
    fn new(graph: &'a Adjacency, order: &'a [u32], place: &'a [u32], nodes: &[Supernode]) -> Self {
        let n = order.len();
        let mut front_of = vec![0_u32; n];
        for (k, node) in nodes.iter().enumerate() {
            front_of[node.first as usize..(node.first + node.pivots) as usize].fill(k as u32);
        }
        Self {
            graph,
            order,
            place,
            front_of,
            last_child: vec![NONE; nodes.len()],
            previous_sibling: vec![NONE; nodes.len()],
            seen: vec![NONE; n],
            position: vec![0; n],
            fronts: Vec::with_capacity(nodes.len()),
            rows: Vec::new(),
            scatter: Vec::new(),
            children: Vec::with_capacity(nodes.len()),
            roots: Vec::new(),
        }
    }

    /// Adds front `k`, all earlier ones being there.
    fn add_front(&mut self, k: usize, node: Supernode, pattern: &Pattern) {
        let columns = node.first..node.first + node.pivots;
        let children = self.collect_children(k);
        let rows = self.collect_rows(k, columns.clone(), children.clone());
        let pivots = node.pivots as usize;
        let height = pivots + rows.len();
        let entries = self.scatter_entries(columns, height, pattern);
        let start = self.fronts.last().map_or(0, |front| front.panel.end);
        let below = self.children[children.clone()].iter().map(|&c| &self.fronts[c as usize]);
        let (mut work, mut subtree) = (0.0, k);
        for child in below {
            work += child.work;
            subtree = subtree.min(child.subtree);
        }
        if let Some(&row) = self.rows[rows.clone()].first() {
            let parent = self.front_of[row as usize] as usize;
            self.previous_sibling[k] = self.last_child[parent];
            self.last_child[parent] = k as u32;
        } else {
            self.roots.push(k as u32);
        }
        let mut front = Front {
            first: node.first as usize,
            pivots,
            border: rows.len(),
            rows,
            panel: start..start + height * pivots,
            entries,
            children,
            subtree,
            work,
        };
        // Filling and adding an entry of the front is taken to cost six multiplications (an estimate).
        front.work += operations(&front) + 6.0 * (height * height) as f64;
        self.fronts.push(front);
    }

    fn collect_children(&mut self, k: usize) -> Range<usize> {
        let start = self.children.len();
        let mut child = self.last_child[k];
        while child != NONE {
            self.children.push(child);
            child = self.previous_sibling[child as usize];
        }
        self.children[start..].reverse();
        start..self.children.len()
    }

    /// Rows below the pivots: those of the matrix and those the children leave.
    fn collect_rows(&mut self, k: usize, columns: Range<u32>, children: Range<usize>) -> Range<usize> {
        let start = self.rows.len();
        for column in columns.clone() {
            for &neighbour in self.graph.of(self.order[column as usize] as usize) {
                let row = self.place[neighbour as usize];
                if row >= columns.end && self.seen[row as usize] != k as u32 {
                    self.seen[row as usize] = k as u32;
                    self.rows.push(row);
                }
            }
        }
        for child in &self.children[children] {
            for position in self.fronts[*child as usize].rows.clone() {
                let row = self.rows[position];
                if row >= columns.end && self.seen[row as usize] != k as u32 {
                    self.seen[row as usize] = k as u32;
                    self.rows.push(row);
                }
            }
        }
        self.rows[start..].sort_unstable();
        for (offset, &row) in self.rows[start..].iter().enumerate() {
            self.position[row as usize] = columns.len() as u32 + offset as u32;
        }
        start..self.rows.len()
    }

    /// Where the matrix entries of these columns go in the panel.
    fn scatter_entries(&mut self, columns: Range<u32>, height: usize, pattern: &Pattern) -> Range<usize> {
        let start = self.scatter.len();
        for column in columns.clone() {
            let unknown = self.order[column as usize] as usize;
            let local = column - columns.start;
            let top = local * height as u32;
            self.scatter.push([pattern.starts()[unknown] as u32, top + local]);
            for (neighbour, slot) in self.graph.with_slots(unknown) {
                let row = self.place[neighbour as usize];
                if row > column {
                    let inside = row < columns.end;
                    let local = if inside { row - columns.start } else { self.position[row as usize] };
                    self.scatter.push([slot, top + local]);
                }
            }
        }
        start..self.scatter.len()
    }

    /// Place of every border row in the parent's front.
    fn relative_rows(&self) -> Vec<u32> {
        let mut relative = Vec::with_capacity(self.rows.len());
        for front in &self.fronts {
            let rows = &self.rows[front.rows.clone()];
            let Some(&lowest) = rows.first() else {
                continue;
            };
            let parent = &self.fronts[self.front_of[lowest as usize] as usize];
            let above = &self.rows[parent.rows.clone()];
            let end = parent.first + parent.pivots;
            let mut k = 0;
            for &row in rows {
                if (row as usize) < end {
                    relative.push(row - parent.first as u32);
                } else {
                    while above[k] < row {
                        k += 1;
                    }
                    relative.push((parent.pivots + k) as u32);
                }
            }
        }
        relative
    }
}
