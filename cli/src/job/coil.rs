//! Coils as written: winding, conductor, water. Turns are rings; diameters are to bare copper.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::part::{MaterialRef, SectionPoint, origin};
use super::quantity::Quantity;
use super::units::{Flow, Length, Temperature};

/// A coil: turns in series, in series with the other coils of the job.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Coil {
    /// Name, unique among the coils.
    pub name: String,
    /// Where the turns are.
    pub winding: Winding,
    /// Section of the conductor.
    pub conductor: Conductor,
    /// Name of a material of the library, or an object with its data.
    #[serde(default = "Coil::copper")]
    pub material: MaterialRef,
    /// Temperature of the conductor. Without it, the water inlet + 15 K; without water too, 50 °C (common practice, no
    /// source).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub temperature: Option<Quantity<Temperature>>,
    /// How the turns are connected.
    #[serde(default = "Coil::series")]
    pub connection: Connection,
    /// Which way the current runs compared with the other coils.
    #[serde(default = "Coil::forward")]
    pub sense: Sense,
    /// Cooling water.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub water: Option<Water>,
}

impl Coil {
    fn copper() -> MaterialRef {
        MaterialRef::Name("copper".to_owned())
    }

    fn series() -> Connection {
        Connection::Series
    }

    fn forward() -> Sense {
        Sense::Forward
    }
}

/// How the turns of a coil are connected.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Connection {
    /// One after the other.
    Series,
}

/// Which way the current of a coil runs.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Sense {
    /// With the others.
    Forward,
    /// Against the others.
    Reversed,
}

/// Where the turns are.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Winding {
    /// Turns above each other at one diameter, in one or more layers.
    Helix(Helix),
    /// Turns within each other at one height, in one or more layers.
    Pancake(Pancake),
    /// Turns one by one: the centre `[r, z]` of each section, in electrical order.
    PlacedTurns(#[schemars(length(min = 1, max = 2000))] Vec<SectionPoint>),
}

/// Turns above each other.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Helix {
    /// Turns of one layer, a whole number; leads are excluded.
    #[schemars(range(min = 1, max = 2000))]
    pub turns: u32,
    /// Diameter inside the bare copper of the innermost layer.
    pub inner_diameter: Quantity<Length>,
    /// Length from copper face to copper face.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub length: Option<Quantity<Length>>,
    /// Distance from turn to turn, centre to centre, instead of the length.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub pitch: Option<Quantity<Length>>,
    /// Number of layers; the second is wound back over the first, and so on.
    #[serde(default = "one")]
    #[schemars(range(min = 1, max = 100))]
    pub layers: u32,
    /// Radial gap between the copper of neighbouring layers.
    #[serde(default = "layer_gap")]
    pub layer_gap: Quantity<Length>,
    /// Height z of the middle of the winding.
    #[serde(default = "origin")]
    pub centre: Quantity<Length>,
}

fn one() -> u32 {
    1
}

/// Room for insulation between layers: common practice, no source.
fn layer_gap() -> Quantity<Length> {
    Quantity::of("1 mm")
}

/// Turns within each other.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Pancake {
    /// Turns of one layer, a whole number; leads are excluded.
    #[schemars(range(min = 1, max = 2000))]
    pub turns: u32,
    /// Diameter inside the bare copper of the innermost turn.
    pub inner_diameter: Quantity<Length>,
    /// Diameter outside the bare copper of the outermost turn.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub outer_diameter: Option<Quantity<Length>>,
    /// Radial distance from turn to turn, centre to centre, instead of the outer diameter.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub pitch: Option<Quantity<Length>>,
    /// Number of layers, from the bottom up; the second is wound back over the first, and so on.
    #[serde(default = "one")]
    #[schemars(range(min = 1, max = 100))]
    pub layers: u32,
    /// Axial gap between the copper of neighbouring layers.
    #[serde(default = "layer_gap")]
    pub layer_gap: Quantity<Length>,
    /// Height z of the middle of the winding.
    #[serde(default = "origin")]
    pub centre: Quantity<Length>,
}

/// Section of a conductor, of bare copper.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Conductor {
    /// A rectangular tube, cooled inside.
    RectangularTube(RectangularTube),
    /// A round tube, cooled inside.
    RoundTube(RoundTube),
    /// A rectangular bar.
    SolidBar(SolidBar),
    /// A round wire.
    RoundWire(RoundWire),
    /// A bundle of strands that carries its current evenly; strand losses are left out.
    Stranded(Stranded),
}

/// A rectangular tube.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RectangularTube {
    /// Outside size along z.
    pub axial: Quantity<Length>,
    /// Outside size along r.
    pub radial: Quantity<Length>,
    /// Wall thickness.
    pub wall: Quantity<Length>,
    /// Radius of the outside corners; the bore follows at the wall thickness.
    #[serde(default = "origin")]
    pub corner_radius: Quantity<Length>,
}

/// A round tube.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RoundTube {
    /// Outside diameter.
    pub diameter: Quantity<Length>,
    /// Wall thickness.
    pub wall: Quantity<Length>,
}

/// A rectangular bar.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SolidBar {
    /// Size along z.
    pub axial: Quantity<Length>,
    /// Size along r.
    pub radial: Quantity<Length>,
    /// Radius of the corners.
    #[serde(default = "origin")]
    pub corner_radius: Quantity<Length>,
}

/// A round wire.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RoundWire {
    /// Diameter.
    pub diameter: Quantity<Length>,
}

/// A bundle of strands in a rectangular window.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Stranded {
    /// Window size along z.
    pub axial: Quantity<Length>,
    /// Window size along r.
    pub radial: Quantity<Length>,
    /// Copper area over window area, 0 to 1.
    #[schemars(range(min = 0.001, max = 1.0))]
    pub fill: f64,
}

/// Cooling water of a coil.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Water {
    /// Number of equal water paths; they are not electrical paths.
    #[serde(default = "one")]
    #[schemars(range(min = 1, max = 1000))]
    pub paths: u32,
    /// Inlet temperature.
    pub inlet: Quantity<Temperature>,
    /// Flow of one water path.
    pub flow_per_path: Quantity<Flow>,
}
