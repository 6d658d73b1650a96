//! Smoothing: free vertices move to where the worst angle around them is larger, and edges flip to stay Delaunay. Convention: vertices on
//! lines and in strips stay. Source: L. Chen, J. Xu, "Optimal Delaunay triangulations", 2004 (area-weighted circumcentres).

use crate::ids::{Point, between, cross, distance_squared, sub};
use crate::predicates::{circumcircle, in_circle};
use crate::triangulate::{LAST, NEXT, NONE, Triangulation};

/// Sine squared of the angle above which a vertex is left alone: 50 degrees.
const GOOD_ENOUGH: f64 = 0.586_824;

pub(crate) fn smooth(mesh: &mut Triangulation, passes: usize) {
    let movable = movable(mesh);
    for _ in 0..passes {
        for v in 0..mesh.points.len() as u32 {
            if movable[v as usize] {
                move_vertex(mesh, v);
            }
        }
        for _ in 0..3 {
            if !flip_all(mesh) {
                break;
            }
        }
    }
    while flip_all(mesh) {}
}

fn movable(mesh: &Triangulation) -> Vec<bool> {
    let mut movable: Vec<bool> = mesh.face_at.iter().map(|&f| f != NONE).collect();
    for face in &mesh.faces {
        for i in 0..3 {
            if face.tag[i] != 0 || face.side == NONE || face.cell != NONE {
                movable[face.v[NEXT[i]] as usize] = false;
                movable[face.v[LAST[i]] as usize] = false;
            }
        }
    }
    movable
}

fn move_vertex(mesh: &mut Triangulation, v: u32) {
    let mut ring: Vec<(Point, Point)> = Vec::with_capacity(8);
    mesh.around::<()>(v, |face, k| {
        let f = &mesh.faces[face as usize];
        ring.push((mesh.point(f.v[NEXT[k]]), mesh.point(f.v[LAST[k]])));
        None
    });
    let worst = |x: Point| ring.iter().fold(f64::INFINITY, |least, &(a, b)| least.min(sine_squared(x, a, b)));
    let here = mesh.point(v);
    let before = worst(here);
    if before > GOOD_ENOUGH {
        return;
    }
    let (mut sum, mut whole) = ([0.0; 2], 0.0);
    for &(a, b) in &ring {
        let area = cross(sub(a, here), sub(b, here));
        let (centre, _) = circumcircle(here, a, b);
        sum[0] += area * centre[0];
        sum[1] += area * centre[1];
        whole += area;
    }
    let optimal = [sum[0] / whole, sum[1] / whole];
    let n = ring.len() as f64;
    let mean = [ring.iter().map(|e| e.0[0]).sum::<f64>() / n, ring.iter().map(|e| e.0[1]).sum::<f64>() / n];
    let tries = [optimal, between(here, optimal, 0.5), mean, between(here, mean, 0.5)];
    if let Some(&better) = tries.iter().find(|&&x| worst(x) > before) {
        mesh.points[v as usize] = better;
    }
}

/// Flips every free edge that is not Delaunay, once; whether there was one.
fn flip_all(mesh: &mut Triangulation) -> bool {
    let mut any = false;
    for t in 0..mesh.faces.len() as u32 {
        for i in 0..3 {
            let face = &mesh.faces[t as usize];
            let n = face.n[i];
            if face.side == NONE || face.cell != NONE || face.tag[i] != 0 || n == NONE || n >> 2 < t {
                continue;
            }
            let w = mesh.faces[(n >> 2) as usize].v[(n & 3) as usize];
            let [a, b, c] = mesh.corners(t);
            if in_circle(a, b, c, mesh.point(w)) > 0.0 {
                mesh.flip(4 * t + i as u32);
                any = true;
            }
        }
    }
    any
}

/// Square of the sine of the least angle; -1 if the triangle is not counter-clockwise.
fn sine_squared(a: Point, b: Point, c: Point) -> f64 {
    let area = cross(sub(b, a), sub(c, a));
    if area <= 0.0 || area.is_nan() {
        return -1.0;
    }
    let (x, y, z) = (distance_squared(a, b), distance_squared(b, c), distance_squared(c, a));
    area * area * x.min(y).min(z) / (x * y * z)
}
