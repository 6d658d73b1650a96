//! Finite elements on meridian sections: Lagrange triangles of order 1 to 3, straight or curved, no physics.
//!
//! Data goes one way: [`reference::Reference`] (basis and quadrature on the unit triangle) and a
//! [`mesher::NodeSet`] make a [`space::Space`]; it hands out [`element::ElementPoints`], from which operators
//! compute dense element blocks that [`assemble`] adds into a matrix.

#![allow(
    clippy::inline_always,
    reason = "code inside a run-time dispatch is compiled for its vector unit only if inlined there"
)]

pub mod assemble;
pub mod edge;
pub mod element;
pub mod measure;
pub mod reference;
pub mod rows;
pub mod space;
