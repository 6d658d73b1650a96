//! Heating and gauges as written.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::quantity::Quantity;
use super::supply::StageHold;
use super::units::{Length, Temperature, TemperatureDifference, Time};

/// The heating; without it the job is a field solve alone.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Heating {
    /// Temperature of all parts at the start.
    #[serde(default = "Heating::room")]
    pub start: Quantity<Temperature>,
    /// Temperature of the surroundings.
    #[serde(default = "Heating::room")]
    pub ambient: Quantity<Temperature>,
    /// Error allowed in one heat step.
    #[serde(default = "Heating::step_tolerance")]
    pub step_tolerance: Quantity<TemperatureDifference>,
    /// Stages in order.
    #[schemars(length(min = 1, max = 1000))]
    pub stages: Vec<Stage>,
}

impl Heating {
    /// Room temperature, also of a job without heating.
    pub(crate) fn room() -> Quantity<Temperature> {
        Quantity::of("20 °C")
    }

    fn step_tolerance() -> Quantity<TemperatureDifference> {
        Quantity::of("2 K")
    }
}

/// One stage: `for` a time, or `until` a gauge reaches a temperature and `at_most` a time.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Stage {
    /// Name, unique among the stages.
    pub name: String,
    /// Duration of the stage.
    #[serde(default, rename = "for", skip_serializing_if = "Option::is_none")]
    pub duration: Option<Quantity<Time>>,
    /// What ends the stage.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub until: Option<Until>,
    /// Longest duration of a stage with `until`; reaching it ends the run, and the result says so.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub at_most: Option<Quantity<Time>>,
    /// What is held instead of the supply's own.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub hold: Option<StageHold>,
}

/// A gauge and the temperature at which a stage ends.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Until {
    /// Name of a thermocouple or pyrometer.
    pub gauge: String,
    /// Temperature it reaches, from either side.
    pub reaches: Quantity<Temperature>,
}

/// A point in a heated part.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Thermocouple {
    /// Name, unique among all gauges.
    pub name: String,
    /// Name of the part it is in.
    pub part: String,
    /// Radius.
    pub r: Quantity<Length>,
    /// Height.
    pub z: Quantity<Length>,
}

/// A point on the surface of a heated part.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Pyrometer {
    /// Name, unique among all gauges.
    pub name: String,
    /// Name of the part it looks at.
    pub part: String,
    /// Side of the part it looks at.
    pub face: PyrometerFace,
    /// Height of the point, on the outer or inner face.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub z: Option<Quantity<Length>>,
    /// Radius of the point, on the top or bottom face.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub r: Option<Quantity<Length>>,
}

/// Side of a part.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum PyrometerFace {
    /// Farthest from the axis at the height z.
    Outer,
    /// The same as `outer`.
    Outside,
    /// Nearest to the axis at the height z.
    Inner,
    /// The same as `inner`.
    Inside,
    /// Highest at the radius r.
    Top,
    /// Lowest at the radius r.
    Bottom,
}
