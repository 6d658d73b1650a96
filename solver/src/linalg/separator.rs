//! A small vertex separator of a graph in the plane.
//!
//! Candidate cuts are straight lines and circles through the median of the points: planes through the points lifted to
//! the unit sphere. The cheapest gives a first separator, which vertex moves then improve.
//! Sources: G. L. Miller, S.-H. Teng and S. A. Vavasis, Proc. 32nd FOCS (1991) 538-547 (circles from the lifted points);
//! C. M. Fiduccia and R. M. Mattheyses, Proc. 19th DAC (1982) 175-181 (moves with roll-back), in the form for vertex
//! separators.

use super::dissect::Part;

/// Mark of a separator vertex among the sides 0 and 1.
pub(super) const SEPARATOR: u8 = 2;

/// Normals of the candidate planes; the third component bends a line into a circle.
const NORMALS: [[f64; 3]; 13] = [
    [1.0, 0.0, 0.0],
    [0.0, 1.0, 0.0],
    [1.0, 1.0, 0.0],
    [1.0, -1.0, 0.0],
    [0.0, 0.0, 1.0],
    [1.0, 0.0, 1.0],
    [1.0, 0.0, -1.0],
    [0.0, 1.0, 1.0],
    [0.0, 1.0, -1.0],
    [1.0, 1.0, 1.0],
    [1.0, 1.0, -1.0],
    [1.0, -1.0, 1.0],
    [1.0, -1.0, -1.0],
];
/// Number of candidates tried on small parts: the straight ones.
const STRAIGHT: usize = 4;
/// Parts of more vertices than this try the circles too (below, circles are not worth their search).
const CIRCLES_ABOVE: usize = 1000;
/// Passes of improvement.
const PASSES: usize = 3;
/// Largest share of the vertices one side may hold.
const LARGEST_SIDE: f64 = 0.58;
/// Weight of imbalance against separator size.
const IMBALANCE_WEIGHT: f64 = 0.3;

/// A part cut in two.
pub(super) struct Bisection {
    /// Side of each own vertex: 0, 1 or [`SEPARATOR`].
    pub(super) sides: Vec<u8>,
    /// Vertices of sides 0 and 1.
    pub(super) sizes: [usize; 2],
    normal: [f64; 3],
    centre: [f64; 2],
}

impl Bisection {
    /// A coordinate that runs along the cut: the angle for a circle, the distance for a line.
    pub(super) fn along(&self, point: [f64; 2]) -> f64 {
        let (x, y) = (point[0] - self.centre[0], point[1] - self.centre[1]);
        if self.normal[0] == 0.0 && self.normal[1] == 0.0 {
            y.atan2(x)
        } else {
            self.normal[0] * y - self.normal[1] * x
        }
    }
}

/// Cuts a part of at least two vertices in two.
pub(super) fn bisect(part: &Part) -> Bisection {
    let n = part.n();
    let circles = n > CIRCLES_ABOVE;
    let (centre, lifted) = lift(&part.points, circles);
    let normal = best_normal(part, &lifted, if circles { NORMALS.len() } else { STRAIGHT });
    let mut keys: Vec<(f64, u32)> = lifted.iter().zip(0..).map(|(&p, v)| (dot(p, normal), v)).collect();
    let by_key = |a: &(f64, u32), b: &(f64, u32)| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1));
    keys.select_nth_unstable_by(n / 2, by_key);
    let mut sides = vec![1_u8; n];
    for &(_, v) in &keys[..n / 2] {
        sides[v as usize] = 0;
    }
    let separator: Vec<u32> =
        (0..n as u32).filter(|&v| sides[v as usize] == 1 && part.own(v as usize).any(|w| sides[w] == 0)).collect();
    for &v in &separator {
        sides[v as usize] = SEPARATOR;
    }
    let sizes = [n / 2, n - n / 2 - separator.len()];
    let mut refinement = Refinement::new(part, sides, sizes, separator);
    for _ in 0..PASSES {
        if !refinement.pass() {
            break;
        }
    }
    Bisection { sides: refinement.sides, sizes: refinement.sizes, normal, centre }
}

fn dot(a: [f64; 3], b: [f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

/// Centre of the points, and the points about it in units of their spread: lifted to the sphere, or left in the plane.
fn lift(points: &[[f64; 2]], to_sphere: bool) -> ([f64; 2], Vec<[f64; 3]>) {
    let n = points.len() as f64;
    let mean = |d: usize| points.iter().map(|p| p[d]).sum::<f64>() / n;
    let centre = [mean(0), mean(1)];
    let square = |p: &[f64; 2]| (p[0] - centre[0]).powi(2) + (p[1] - centre[1]).powi(2);
    let spread = (points.iter().map(square).sum::<f64>() / n).sqrt();
    let scale = if spread > 0.0 && spread.is_finite() { 1.0 / spread } else { 1.0 };
    let lifted = points.iter().map(|p| {
        let (x, y) = ((p[0] - centre[0]) * scale, (p[1] - centre[1]) * scale);
        if !to_sphere {
            return [x, y, 0.0];
        }
        let q = x * x + y * y;
        let w = 1.0 / (1.0 + q);
        [2.0 * x * w, 2.0 * y * w, (q - 1.0) * w]
    });
    (centre, lifted.collect())
}

/// Of the first `count` normals, the one whose median plane has the fewest vertices on its edge.
fn best_normal(part: &Part, lifted: &[[f64; 3]], count: usize) -> [f64; 3] {
    let n = part.n();
    let stride = (n / 2000).clamp(1, 8);
    let mut sample = Vec::with_capacity(n / stride + 1);
    // Bit k of a vertex: whether it lies beyond the median plane of normal k.
    let mut beyond = vec![0_u16; n];
    for (k, &normal) in NORMALS[..count].iter().enumerate() {
        sample.clear();
        sample.extend(lifted.iter().step_by(stride).map(|&p| dot(p, normal)));
        let middle = sample.len() / 2;
        let median = *sample.select_nth_unstable_by(middle, f64::total_cmp).1;
        for (bits, &p) in beyond.iter_mut().zip(lifted) {
            *bits |= u16::from(dot(p, normal) >= median) << k;
        }
    }
    let mut crossings = [0_usize; NORMALS.len()];
    for (v, &bits) in beyond.iter().enumerate() {
        let common = part.own(v).fold(u16::MAX, |common, w| common & beyond[w]);
        let mut edge = bits & !common;
        while edge != 0 {
            crossings[edge.trailing_zeros() as usize] += 1;
            edge &= edge - 1;
        }
    }
    let best = (0..count).min_by_key(|&k| (crossings[k], k)).unwrap_or(0);
    NORMALS[best]
}

/// Number of buckets of a [`Queue`]; worse moves share the last.
const BUCKETS: usize = 48;

/// Moves by gain, the best first and of equals the latest; entries may be out of date.
struct Queue {
    buckets: Vec<Vec<(i32, u32, u8)>>,
    best: usize,
}

impl Queue {
    fn new() -> Self {
        Self { buckets: vec![Vec::new(); BUCKETS], best: BUCKETS }
    }

    fn push(&mut self, gain: i32, vertex: u32, side: u8) {
        // No move gains more than the moved vertex itself.
        let bucket = usize::try_from(1 - gain).unwrap_or(0).min(BUCKETS - 1);
        self.buckets[bucket].push((gain, vertex, side));
        self.best = self.best.min(bucket);
    }

    fn pop(&mut self) -> Option<(i32, u32, u8)> {
        while self.best < BUCKETS {
            let found = self.buckets[self.best].pop();
            if found.is_some() {
                return found;
            }
            self.best += 1;
        }
        None
    }

    fn clear(&mut self) {
        self.buckets.iter_mut().for_each(Vec::clear);
        self.best = BUCKETS;
    }
}

/// One move, kept for the roll-back.
struct Move {
    vertex: u32,
    side: u8,
    pulled: usize,
}

/// Improvement of a separator by moving its vertices to a side, which pulls their neighbours across into it.
struct Refinement<'a> {
    part: &'a Part,
    sides: Vec<u8>,
    sizes: [usize; 2],
    separator: Vec<u32>,
    /// Shrinkage of the separator if the vertex moved to side 0 or 1; true for separator vertices only.
    gains: Vec<[i32; 2]>,
    locked: Vec<bool>,
    queue: Queue,
    moves: Vec<Move>,
    pulled: Vec<u32>,
    length: usize,
}

impl<'a> Refinement<'a> {
    fn new(part: &'a Part, sides: Vec<u8>, sizes: [usize; 2], separator: Vec<u32>) -> Self {
        Self {
            part,
            sizes,
            gains: vec![[0; 2]; sides.len()],
            locked: vec![false; sides.len()],
            sides,
            queue: Queue::new(),
            moves: Vec::new(),
            pulled: Vec::new(),
            length: separator.len(),
            separator,
        }
    }

    /// One pass of moves, rolled back to its best state; whether that is better than before.
    fn pass(&mut self) -> bool {
        let start = self.score();
        let limit = (LARGEST_SIDE * self.part.n() as f64) as usize;
        let patience = (self.length / 4).clamp(60, 300);
        for k in 0..self.separator.len() {
            self.offer(self.separator[k]);
        }
        let (mut best, mut kept, mut idle) = (start, 0, 0);
        while let Some((gain, vertex, side)) = self.queue.pop() {
            let (v, s) = (vertex as usize, usize::from(side));
            let stale = self.sides[v] != SEPARATOR || self.locked[v] || self.gains[v][s] != gain;
            if stale || self.sizes[s] + 1 > limit {
                continue;
            }
            self.move_vertex(vertex, side);
            let score = self.score();
            if score < best - 1e-9 {
                (best, kept, idle) = (score, self.moves.len(), 0);
            } else {
                idle += 1;
                if idle > patience {
                    break;
                }
            }
        }
        self.finish(kept);
        best < start - 1e-9
    }

    /// Separator size, raised by the imbalance of the sides.
    fn score(&self) -> f64 {
        let difference = self.sizes[0].abs_diff(self.sizes[1]) as f64;
        self.length as f64 * (1.0 + IMBALANCE_WEIGHT * difference / self.part.n() as f64)
    }

    /// Computes the gains of a separator vertex and queues both its moves.
    fn offer(&mut self, vertex: u32) {
        let mut gains = [1, 1];
        for w in self.part.own(vertex as usize) {
            match self.sides[w] {
                0 => gains[1] -= 1,
                1 => gains[0] -= 1,
                _ => {}
            }
        }
        self.gains[vertex as usize] = gains;
        if !self.locked[vertex as usize] {
            self.queue.push(gains[0], vertex, 0);
            self.queue.push(gains[1], vertex, 1);
        }
    }

    /// Changes one gain of a separator vertex and queues the move again.
    fn adjust(&mut self, v: usize, side: u8, change: i32) {
        let gain = &mut self.gains[v][usize::from(side)];
        *gain += change;
        if !self.locked[v] {
            self.queue.push(*gain, v as u32, side);
        }
    }

    fn move_vertex(&mut self, vertex: u32, side: u8) {
        let (v, other) = (vertex as usize, 1 - side);
        let part = self.part;
        self.sides[v] = side;
        self.locked[v] = true;
        self.sizes[usize::from(side)] += 1;
        self.length -= 1;
        let first = self.pulled.len();
        for w in part.own(v) {
            if self.sides[w] == other {
                self.sides[w] = SEPARATOR;
                self.sizes[usize::from(other)] -= 1;
                self.length += 1;
                self.pulled.push(w as u32);
                for x in part.own(w) {
                    if self.sides[x] == SEPARATOR && x != w {
                        self.adjust(x, side, 1);
                    }
                }
            } else if self.sides[w] == SEPARATOR {
                self.adjust(w, other, -1);
            }
        }
        for k in first..self.pulled.len() {
            self.offer(self.pulled[k]);
        }
        self.moves.push(Move { vertex, side, pulled: self.pulled.len() - first });
    }

    /// Undoes all moves beyond the first `kept` and gathers the separator anew.
    fn finish(&mut self, kept: usize) {
        let mut candidates = std::mem::take(&mut self.separator);
        candidates.extend_from_slice(&self.pulled);
        for undone in self.moves.drain(kept..).rev() {
            let other = 1 - undone.side;
            for w in self.pulled.drain(self.pulled.len() - undone.pulled..) {
                self.sides[w as usize] = other;
                self.sizes[usize::from(other)] += 1;
            }
            self.length = self.length + 1 - undone.pulled;
            self.sides[undone.vertex as usize] = SEPARATOR;
            self.sizes[usize::from(undone.side)] -= 1;
            self.locked[undone.vertex as usize] = false;
        }
        for done in self.moves.drain(..) {
            self.locked[done.vertex as usize] = false;
        }
        self.pulled.clear();
        self.queue.clear();
        candidates.sort_unstable();
        candidates.dedup();
        candidates.retain(|&v| self.sides[v as usize] == SEPARATOR);
        self.separator = candidates;
    }
}
