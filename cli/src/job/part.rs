//! Parts as written: what stands in the section, of what, and what happens at its faces.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};
use solver::material::MaterialData;

use super::quantity::Quantity;
use super::units::{HeatFlux, HeatTransfer, Length, Temperature};

/// A body of revolution of one material.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Part {
    /// Name, unique among the parts; other keys refer to it.
    pub name: String,
    /// What the part is there for.
    pub role: Role,
    /// Name of a material of the library, or an object with its data.
    pub material: MaterialRef,
    /// Shape of the part.
    pub shape: Shape,
    /// Exchange with the surroundings on every face that has no condition of its own.
    #[serde(default)]
    pub surface: Surface,
    /// Condition of the faces that look away from the axis.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub outside: Option<FaceCondition>,
    /// Condition of the faces that look towards the axis.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub inside: Option<FaceCondition>,
    /// Condition of the faces that look up, towards larger z.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub top: Option<FaceCondition>,
    /// Condition of the faces that look down.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub bottom: Option<FaceCondition>,
    /// Temperature at the start, if it differs from that of the job.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub start: Option<Quantity<Temperature>>,
    /// Relative permeability instead of that of the material, at least 1.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    #[schemars(range(min = 1.0, max = 1e6))]
    pub relative_permeability: Option<f64>,
}

/// What a part is there for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Role {
    /// What is to be heated; its power counts as useful.
    Workpiece,
    /// Refractory or insulation between work and coil; heated by conduction.
    Lining,
    /// Heated by the field to heat something else.
    Susceptor,
    /// Holds a melt; heated.
    Crucible,
    /// A screen, flux ring or other body that stays at its own temperature.
    Fixture,
}

/// A material by name, or its data.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(untagged)]
pub enum MaterialRef {
    /// Name or alias of a material of the library.
    Name(String),
    /// Data of a material of one's own.
    Data(Box<MaterialData>),
}

/// Exchange with the surroundings.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Surface {
    /// Total hemispherical emissivity, 0 to 1; without it that of the material, and 0.8 where the material has none.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    #[schemars(range(min = 0.0, max = 1.0))]
    pub emissivity: Option<f64>,
    /// Heat transfer coefficient to the ambient.
    #[serde(default = "Surface::still_air")]
    pub convection: Quantity<HeatTransfer>,
}

impl Surface {
    /// Still air: common practice, no source.
    fn still_air() -> Quantity<HeatTransfer> {
        Quantity::of("10 W/m2/K")
    }
}

impl Default for Surface {
    fn default() -> Self {
        Self { emissivity: None, convection: Self::still_air() }
    }
}

/// What happens at a face.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(untagged)]
pub enum FaceCondition {
    /// No exchange.
    Word(FaceWord),
    /// A temperature.
    HeldAt(HeldAt),
    /// A heat flux.
    Flux(Flux),
    /// Convection and radiation to the ambient.
    Exchange(Surface),
}

/// A condition that is a word.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum FaceWord {
    /// No exchange.
    Insulated,
}

/// A face at a temperature.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct HeldAt {
    /// Temperature the face is held at.
    pub held_at: Quantity<Temperature>,
}

/// A face with a heat flux.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Flux {
    /// Heat flux into the part; negative where heat leaves it.
    pub flux: Quantity<HeatFlux>,
}

/// Shape of a part. Lengths along the axis are placed by `centre` (0 mm if nothing is said), or by `from` and `to`, or
/// by one of them with the length.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Shape {
    /// A solid cylinder.
    Cylinder(Cylinder),
    /// A hollow cylinder.
    Tube(Tube),
    /// A flat solid cylinder.
    Disc(Disc),
    /// A flat hollow cylinder.
    Ring(Ring),
    /// A sphere.
    Sphere(Sphere),
    /// A cone or a frustum.
    Cone(Cone),
    /// Any section, as the points of its outline in order, arcs and treated corners between; closed by a straight line.
    Profile(#[schemars(length(min = 2, max = 2000))] Vec<ProfileStep>),
}

/// A solid cylinder.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Cylinder {
    /// Diameter.
    pub diameter: Quantity<Length>,
    /// Length along the axis.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub length: Option<Quantity<Length>>,
    /// Height z of the middle.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub centre: Option<Quantity<Length>>,
    /// Height z of the lower end.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub from: Option<Quantity<Length>>,
    /// Height z of the upper end.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub to: Option<Quantity<Length>>,
}

/// A hollow cylinder.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Tube {
    /// Diameter of the hole.
    pub inner_diameter: Quantity<Length>,
    /// Outer diameter.
    pub outer_diameter: Quantity<Length>,
    /// Length along the axis.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub length: Option<Quantity<Length>>,
    /// Height z of the middle.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub centre: Option<Quantity<Length>>,
    /// Height z of the lower end.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub from: Option<Quantity<Length>>,
    /// Height z of the upper end.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub to: Option<Quantity<Length>>,
}

/// A flat solid cylinder.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Disc {
    /// Diameter.
    pub diameter: Quantity<Length>,
    /// Thickness along the axis.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub thickness: Option<Quantity<Length>>,
    /// Height z of the middle.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub centre: Option<Quantity<Length>>,
    /// Height z of the lower face.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub from: Option<Quantity<Length>>,
    /// Height z of the upper face.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub to: Option<Quantity<Length>>,
}

/// A flat hollow cylinder.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Ring {
    /// Diameter of the hole.
    pub inner_diameter: Quantity<Length>,
    /// Outer diameter.
    pub outer_diameter: Quantity<Length>,
    /// Thickness along the axis.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub thickness: Option<Quantity<Length>>,
    /// Height z of the middle.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub centre: Option<Quantity<Length>>,
    /// Height z of the lower face.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub from: Option<Quantity<Length>>,
    /// Height z of the upper face.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub to: Option<Quantity<Length>>,
}

/// A sphere.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Sphere {
    /// Diameter.
    pub diameter: Quantity<Length>,
    /// Height z of the middle.
    #[serde(default = "origin")]
    pub centre: Quantity<Length>,
}

/// The height of what is not placed otherwise.
pub(super) fn origin() -> Quantity<Length> {
    Quantity::of("0 mm")
}

/// A cone or a frustum.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Cone {
    /// Diameter of the lower end; 0 mm for a point.
    pub bottom_diameter: Quantity<Length>,
    /// Diameter of the upper end; 0 mm for a point.
    pub top_diameter: Quantity<Length>,
    /// Length along the axis.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub length: Option<Quantity<Length>>,
    /// Height z of the middle.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub centre: Option<Quantity<Length>>,
    /// Height z of the lower end.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub from: Option<Quantity<Length>>,
    /// Height z of the upper end.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub to: Option<Quantity<Length>>,
}

/// A point of the section: radius r and height z, each a length with its unit.
pub type SectionPoint = (Quantity<Length>, Quantity<Length>);

/// A step along the outline of a profile.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(untagged)]
pub enum ProfileStep {
    /// A straight line to a point `[r, z]`.
    To(SectionPoint),
    /// A curve or a treated corner.
    Curve(ProfileCurve),
}

/// A curve or a treated corner of a profile.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum ProfileCurve {
    /// A circular arc from the point before it.
    Arc(ProfileArc),
    /// A corner that a straight line leads to, rounded; a line or an arc may follow.
    Fillet(ProfileFillet),
    /// A corner that a straight line leads to, cut off; a line or an arc may follow.
    Chamfer(ProfileChamfer),
}

/// A circular arc of a profile. The centre may be rounded: it is moved to where both ends are equally far from it.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ProfileArc {
    /// End point `[r, z]`.
    pub to: SectionPoint,
    /// Centre of the circle `[r, z]`.
    pub centre: SectionPoint,
    /// Direction of travel, with r to the right and z up.
    pub direction: Direction,
    /// Radius by which the corner at its end is rounded.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub fillet: Option<Quantity<Length>>,
    /// Length by which the corner at its end is cut off, along both of its sides.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub chamfer: Option<Quantity<Length>>,
}

/// Direction of travel along an arc.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
pub enum Direction {
    /// From r towards z.
    CounterClockwise,
    /// From z towards r.
    Clockwise,
}

/// A rounded corner of a profile.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ProfileFillet {
    /// The corner `[r, z]` before it is rounded.
    pub at: SectionPoint,
    /// Radius of the fillet.
    pub radius: Quantity<Length>,
}

/// A corner of a profile that is cut off.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ProfileChamfer {
    /// The corner `[r, z]` before it is cut.
    pub at: SectionPoint,
    /// Length taken off each of the two sides.
    pub size: Quantity<Length>,
}
