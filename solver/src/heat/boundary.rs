//! What happens at the surfaces of heated parts: which side has which condition, and the heat it lets through.
//!
//! Convention: heat flows are positive into the part unless a name says lost; temperatures in kelvin. Radiation is to
//! the ambient, `eps sigma (T^4 - Ta^4)` (grey, small body in large surroundings), continued as `T |T|^3` so that the
//! law stays monotone while Newton's method is on its way.

use crate::constants::STEFAN_BOLTZMANN;
use crate::fem::edge::Side;
use crate::fem::reference::EDGE_POINTS;
use crate::fem::space::Space;
use crate::model::{Face, FaceCondition, Part};

/// Most nodes an edge has (order 3).
pub(super) const MAX_EDGE_NODES: usize = 4;

/// Heat law of a side that takes part in the equations.
#[derive(Debug, Clone, Copy)]
pub(super) enum SideLaw {
    /// Convection in W/(m^2 K) and emissivity, to the ambient.
    Exchange { convection: f64, emissivity: f64 },
    /// Flux into the part in W/m^2.
    Flux(f64),
}

/// A side with its law and its quadrature.
#[derive(Debug, Clone)]
pub(super) struct ActiveSide {
    pub(super) law: SideLaw,
    /// Nodes of the edge, as local nodes of the element.
    pub(super) nodes: [usize; MAX_EDGE_NODES],
    /// How many they are.
    pub(super) count: usize,
    /// Surface in m^2 and basis values of the edge's nodes, one a quadrature point.
    pub(super) points: [(f64, [f64; MAX_EDGE_NODES]); EDGE_POINTS],
}

/// Flux lost by a surface at one temperature.
#[derive(Debug, Clone, Copy)]
pub(super) struct SurfaceLoss {
    /// By radiation, W/m^2.
    pub(super) radiated: f64,
    /// By convection, W/m^2.
    pub(super) convected: f64,
    /// Derivative of the sum with respect to the temperature, W/(m^2 K).
    pub(super) slope: f64,
}

/// Flux lost at temperature `t` by a surface with convection and emissivity.
pub(super) fn exchange(t: f64, ambient: f64, convection: f64, emissivity: f64) -> SurfaceLoss {
    let es = emissivity * STEFAN_BOLTZMANN;
    let cube = t.abs().powi(3);
    SurfaceLoss {
        radiated: es * (t * cube - ambient.powi(4)),
        convected: convection * (t - ambient),
        slope: convection + 4.0 * es * cube,
    }
}

/// All sides that exchange heat, and the unknowns that are held.
#[derive(Debug, Clone)]
pub(super) struct Boundary {
    starts: Vec<u32>,
    sides: Vec<ActiveSide>,
    /// Held unknowns with their temperatures, rising.
    pub(super) held: Vec<(u32, f64)>,
}

impl Boundary {
    /// Sorts the exposed sides of the space by what `part_of` and its conditions say.
    ///
    /// Sides on the boundary of the mesh (the axis, mirror planes) are insulated. An unknown on two held faces takes
    /// the temperature of the side that comes first.
    pub(super) fn new<'a>(space: &Space, part_of: impl Fn(usize) -> &'a Part) -> Self {
        let mut by_element = vec![Vec::new(); space.element_count()];
        let mut held: Vec<(u32, f64)> = Vec::new();
        for (side, across) in space.boundary_sides() {
            if across.is_none() {
                continue;
            }
            let part = part_of(side.element);
            match condition(part, face_of(space, side)) {
                FaceCondition::Insulated => {}
                FaceCondition::Exchange(surface) => {
                    let law =
                        SideLaw::Exchange { convection: surface.convection_w_per_m2_k, emissivity: surface.emissivity };
                    by_element[side.element].push(active(space, side, law));
                }
                FaceCondition::Flux(flux) => {
                    by_element[side.element].push(active(space, side, SideLaw::Flux(flux)));
                }
                FaceCondition::HeldAt(t) => {
                    let (nodes, count) = edge_nodes(space.reference().order(), side.edge);
                    held.extend(nodes[..count].iter().map(|&i| (space.element(side.element)[i], t)));
                }
            }
        }
        held.sort_by_key(|&(unknown, _)| unknown);
        held.dedup_by_key(|&mut (unknown, _)| unknown);
        let mut starts = vec![0];
        let mut sides = Vec::new();
        for list in by_element {
            sides.extend(list);
            starts.push(sides.len() as u32);
        }
        Self { starts, sides, held }
    }

    /// Sides of element `e` that take part in its equations.
    pub(super) fn of(&self, e: usize) -> &[ActiveSide] {
        &self.sides[self.starts[e] as usize..self.starts[e + 1] as usize]
    }
}

/// Local nodes of an edge: its two corners, then its inner nodes.
pub(super) fn edge_nodes(order: usize, edge: usize) -> ([usize; MAX_EDGE_NODES], usize) {
    let mut nodes = [edge, (edge + 1) % 3, 0, 0];
    for k in 0..order - 1 {
        nodes[2 + k] = 3 + edge * (order - 1) + k;
    }
    (nodes, order + 1)
}

/// Face a side belongs to, by its mean outward normal; a slope of 45 degrees counts as radial.
fn face_of(space: &Space, side: Side) -> Face {
    let mut normal = [0.0; 2];
    for p in space.side_points(side) {
        normal[0] += p.length * p.normal[0];
        normal[1] += p.length * p.normal[1];
    }
    if normal[0].abs() >= 0.999_999 * normal[1].abs() {
        if normal[0] > 0.0 { Face::Outside } else { Face::Inside }
    } else if normal[1] > 0.0 {
        Face::Top
    } else {
        Face::Bottom
    }
}

fn condition(part: &Part, face: Face) -> FaceCondition {
    let own = part.faces.iter().find(|(f, _)| *f == face).map(|&(_, c)| c);
    own.unwrap_or(FaceCondition::Exchange(part.surface))
}

fn active(space: &Space, side: Side, law: SideLaw) -> ActiveSide {
    let (nodes, count) = edge_nodes(space.reference().order(), side.edge);
    let points = space.side_points(side).map(|p| {
        let mut value = [0.0; MAX_EDGE_NODES];
        for (slot, &i) in value.iter_mut().zip(&nodes[..count]) {
            *slot = p.value[i];
        }
        (p.surface, value)
    });
    ActiveSide { law, nodes, count, points }
}
