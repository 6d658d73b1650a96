//! stub
use crate::drawing::Drawing;
use crate::ids::Point;
use crate::noding::Graph;
use crate::note::MeshNote;
use crate::plan::{Cell, Tag};
use crate::size_field::{Gaps, SizeField, SizeSource};
#[derive(Default)]
pub(crate) struct Strips {
    pub(crate) points: Vec<Point>,
    pub(crate) divisions: Vec<Option<Vec<u32>>>,
    pub(crate) pins: Vec<[Vec<(f64, u32)>; 2]>,
    pub(crate) edges: Vec<(u32, u32, u32)>,
    pub(crate) tags: Vec<Tag>,
    pub(crate) cells: Vec<Cell>,
    pub(crate) notes: Vec<MeshNote>,
}
impl Strips {
    pub(crate) fn is_empty(&self) -> bool { true }
    pub(crate) fn sources(&self, _: &Graph, _: &[f64], _: &Gaps) -> Vec<SizeSource> { vec![] }
}
pub(crate) fn build(_: &Drawing, graph: &Graph, _: &SizeField, _: f64) -> Strips {
    Strips { divisions: vec![None; graph.stretches.len()], pins: vec![[vec![], vec![]]; graph.stretches.len()], ..Strips::default() }
}
