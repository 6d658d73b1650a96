//! A tree of boxes for nearest and containing queries. Convention: every item has a box and a weight; a query prunes by
//! `weight + slope * distance`. Items are reordered; `order` gives the original index. Source: common practice.

use crate::ids::Point;

#[derive(Debug, Clone, Copy)]
pub(crate) struct Item {
    pub(crate) lo: Point,
    pub(crate) hi: Point,
    pub(crate) weight: f64,
}

#[derive(Debug, Clone, Copy)]
struct Node {
    lo: Point,
    hi: Point,
    weight: f64,
    /// First item, or first of two children.
    first: u32,
    /// Number of items; zero for an inner node.
    count: u32,
}

#[derive(Debug, Clone, Default)]
pub(crate) struct Tree {
    nodes: Vec<Node>,
    order: Vec<u32>,
}

const LEAF: usize = 3;

impl Tree {
    pub(crate) fn new(items: &[Item]) -> Self {
        let mut tree = Self { nodes: Vec::with_capacity(items.len()), order: (0..items.len() as u32).collect() };
        if items.is_empty() {
            return tree;
        }
        let mut order = std::mem::take(&mut tree.order);
        tree.nodes.push(Node { lo: [0.0; 2], hi: [0.0; 2], weight: 0.0, first: 0, count: 0 });
        let mut open = vec![(0usize, 0usize, items.len())];
        while let Some((id, from, to)) = open.pop() {
            let mut node = enclose(items, &order[from..to]);
            if to - from <= LEAF {
                (node.first, node.count) = (from as u32, (to - from) as u32);
            } else {
                let axis = usize::from(node.hi[1] - node.lo[1] > node.hi[0] - node.lo[0]);
                let middle = usize::midpoint(from, to);
                let centre = |i: &u32| items[*i as usize].lo[axis] + items[*i as usize].hi[axis];
                order[from..to]
                    .select_nth_unstable_by(middle - from, |a, b| centre(a).total_cmp(&centre(b)).then(a.cmp(b)));
                let child = tree.nodes.len();
                tree.nodes.extend([node, node]);
                (node.first, node.count) = (child as u32, 0);
                open.extend([(child, from, middle), (child + 1, middle, to)]);
            }
            tree.nodes[id] = node;
        }
        tree.order = order;
        tree
    }

    /// The least `value(item)`, if under `limit`, where no value is under `weight + slope * distance of the box from p`.
    pub(crate) fn least(&self, p: Point, slope: f64, limit: f64, mut value: impl FnMut(u32) -> f64) -> f64 {
        let mut best = limit;
        if self.nodes.is_empty() {
            return best;
        }
        let bound = |n: &Node| {
            let dx = (n.lo[0] - p[0]).max(p[0] - n.hi[0]).max(0.0);
            let dy = (n.lo[1] - p[1]).max(p[1] - n.hi[1]).max(0.0);
            n.weight + slope * (dx * dx + dy * dy).sqrt()
        };
        let mut stack = [(0u32, 0.0f64); 96];
        stack[0] = (0, bound(&self.nodes[0]));
        let mut top = 1;
        while top > 0 {
            top -= 1;
            let (id, least) = stack[top];
            if least >= best {
                continue;
            }
            let node = &self.nodes[id as usize];
            if node.count > 0 {
                for &item in &self.order[node.first as usize..(node.first + node.count) as usize] {
                    best = best.min(value(item));
                }
                continue;
            }
            let (a, b) = (node.first, node.first + 1);
            let (near, far) = (bound(&self.nodes[a as usize]), bound(&self.nodes[b as usize]));
            let pair = if near < far { [(b, far), (a, near)] } else { [(a, near), (b, far)] };
            stack[top] = pair[0];
            stack[top + 1] = pair[1];
            top += 2;
        }
        best
    }

    /// Calls `visit` for the items whose box meets the given one, until it returns true; whether it did.
    pub(crate) fn any(&self, lo: Point, hi: Point, mut visit: impl FnMut(u32) -> bool) -> bool {
        let mut stack: Vec<u32> = Vec::with_capacity(64);
        if !self.nodes.is_empty() {
            stack.push(0);
        }
        while let Some(id) = stack.pop() {
            let node = &self.nodes[id as usize];
            if (0..2).any(|k| node.lo[k] > hi[k] || node.hi[k] < lo[k]) {
                continue;
            }
            if node.count == 0 {
                stack.extend([node.first + 1, node.first]);
                continue;
            }
            for &item in &self.order[node.first as usize..(node.first + node.count) as usize] {
                if visit(item) {
                    return true;
                }
            }
        }
        false
    }
}

fn enclose(items: &[Item], ids: &[u32]) -> Node {
    let mut node =
        Node { lo: [f64::INFINITY; 2], hi: [f64::NEG_INFINITY; 2], weight: f64::INFINITY, first: 0, count: 0 };
    for &i in ids {
        let item = &items[i as usize];
        for k in 0..2 {
            node.lo[k] = node.lo[k].min(item.lo[k]);
            node.hi[k] = node.hi[k].max(item.hi[k]);
        }
        node.weight = node.weight.min(item.weight);
    }
    node
}
