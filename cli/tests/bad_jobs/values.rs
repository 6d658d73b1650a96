//! Jobs with values out of range or in other units.

use serde_json::json;

use super::{Bad, Spoil::Set, bad};

#[allow(clippy::too_many_lines, reason = "a table")]
pub(crate) fn values() -> Vec<Bad> {
    vec![
        bad(
            "unit of another dimension",
            Set("/parts/0/shape/cylinder/diameter", json!("60 V")),
            &["parts.billet.shape.cylinder.diameter", "60 V", "`V` is no unit of a length", "mm"],
        ),
        bad("no unit", Set("/supply/frequency", json!("3000")), &["supply.frequency", "3000", "no unit", "kHz"]),
        bad(
            "decimal comma",
            Set("/parts/0/shape/cylinder/diameter", json!("60,5 mm")),
            &["cylinder.diameter", "60,5 mm", "point before the decimals"],
        ),
        bad(
            "words for a number",
            Set("/supply/frequency", json!("three kHz")),
            &["supply.frequency", "three kHz", "a frequency", "3 kHz"],
        ),
        bad(
            "NaN as text",
            Set("/parts/0/shape/cylinder/length", json!("NaN mm")),
            &["cylinder.length", "NaN mm", "a length"],
        ),
        bad(
            "zero diameter",
            Set("/parts/0/shape/cylinder/diameter", json!("0 mm")),
            &["parts.billet.shape.cylinder.diameter", "0 mm", "from 1 um to 100 m", "correct"],
        ),
        bad(
            "negative length",
            Set("/parts/0/shape/cylinder/length", json!("-200 mm")),
            &["cylinder.length", "-200 mm", "from 1 um"],
        ),
        bad(
            "huge diameter",
            Set("/parts/0/shape/cylinder/diameter", json!("60 km")),
            &["cylinder.diameter", "60 km", "mm"],
        ),
        bad(
            "hundred kilometres in metres",
            Set("/parts/0/shape/cylinder/length", json!("1e5 m")),
            &["cylinder.length", "1e5 m", "100 m"],
        ),
        bad(
            "infinite by exponent",
            Set("/parts/0/shape/cylinder/length", json!("1e400 mm")),
            &["cylinder.length", "1e400 mm", "100 m"],
        ),
        bad(
            "frequency too low",
            Set("/supply/frequency", json!("0.1 Hz")),
            &["supply.frequency", "0.1 Hz", "from 1 Hz to 10 MHz"],
        ),
        bad("frequency too high", Set("/supply/frequency", json!("2 GHz")), &["supply.frequency", "2 GHz", "MHz"]),
        bad(
            "frequency of 50 MHz",
            Set("/supply/frequency", json!("50 MHz")),
            &["supply.frequency", "50 MHz", "10 MHz"],
        ),
        bad("below absolute zero", Set("/heating/start", json!("-300 °C")), &["heating.start", "-300 °C", "0 K"]),
        bad(
            "above 4000 K",
            Set("/heating/stages/0/until/reaches", json!("5000 °C")),
            &["heating.stages.heat.until.reaches", "5000 °C", "4000 K"],
        ),
        bad(
            "difference in degrees",
            Set("/heating/step_tolerance", json!("2 °C")),
            &["heating.step_tolerance", "2 °C", "\"2 K\""],
        ),
        bad(
            "elements of no size",
            Set("/mesh", json!({ "largest": "0 mm" })),
            &["mesh.largest", "0 mm", "from 1 um to 100 m"],
        ),
        bad(
            "zero power",
            Set("/supply/hold/workpiece_power", json!("0 kW")),
            &["supply.hold.workpiece_power", "0 kW", "MW"],
        ),
        bad(
            "negative limit",
            Set("/supply/limits/voltage", json!("-800 V")),
            &["supply.limits.voltage", "-800 V", "correct"],
        ),
        bad(
            "boiling inlet",
            Set("/coils/0/water/inlet", json!("120 °C")),
            &["coils.coil.water.inlet", "120 °C", "100 °C"],
        ),
        bad(
            "no flow",
            Set("/coils/0/water/flow_per_path", json!("0 l/min")),
            &["coils.coil.water.flow_per_path", "0 l/min", "correct"],
        ),
        bad(
            "negative convection",
            Set("/parts/0/surface/convection", json!("-10 W/m2/K")),
            &["parts.billet.surface.convection", "-10 W/m2/K"],
        ),
        bad(
            "endless stage",
            Set("/heating/stages/1/for", json!("5000 h")),
            &["heating.stages.soak.for", "5000 h", "1000 h"],
        ),
        bad(
            "wall of half the tube",
            Set("/coils/0/conductor/rectangular_tube/wall", json!("5 mm")),
            &["rectangular_tube.wall", "5 mm", "half of the conductor", "reduce"],
        ),
        bad(
            "corner over half a side",
            Set("/coils/0/conductor/rectangular_tube/corner_radius", json!("6 mm")),
            &["rectangular_tube.corner_radius", "6 mm", "half of the shorter side"],
        ),
        bad(
            "tube inside out",
            Set("/parts/1/shape/tube/inner_diameter", json!("80 mm")),
            &["parts.liner.shape.tube.outer_diameter", "76 mm", "`inner_diameter` (80 mm)", "enlarge"],
        ),
    ]
}
