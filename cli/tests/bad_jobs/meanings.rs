//! Jobs that cannot be built or solved.

use serde_json::json;

use super::{
    Bad, SLICE, SPHERE,
    Spoil::{Remove, Set},
    bad, on,
};

#[allow(clippy::too_many_lines, reason = "a table")]
pub(crate) fn meanings() -> Vec<Bad> {
    vec![
        bad(
            "unknown material",
            Set("/parts/0/material", json!("C46")),
            &["parts.billet.material", "\"C46\"", "did you mean", "coilwright materials"],
        ),
        bad(
            "unknown copper",
            Set("/coils/0/material", json!("unobtainium")),
            &["coils.coil.material", "unobtainium", "write an object"],
        ),
        bad("title of two lines", Set("/title", json!("one\ntwo")), &["title", "one line", "note"]),
        bad("empty name", Set("/parts/0/name", json!("")), &["name", "choose another"]),
        bad("name with a point", Set("/parts/0/name", json!("a.b")), &["name", "a.b", "choose another"]),
        bad(
            "two parts of one name",
            Set("/parts/1/name", json!("billet")),
            &["parts.billet.name", "two parts", "rename"],
        ),
        bad(
            "two gauges of one name",
            Set("/pyrometers/0/name", json!("core")),
            &["pyrometers.core.name", "two gauges", "rename"],
        ),
        bad(
            "no workpiece",
            Set("/parts/0/role", json!("susceptor")),
            &["parts", "workpiece", "give one part that role"],
        ),
        bad("no parts", Set("/parts", json!([])), &["parts", "workpiece"]),
        bad(
            "overlapping parts",
            Set("/parts/1/shape/tube/inner_diameter", json!("50 mm")),
            &["parts.liner", "part `billet`", "r 25 to 38 mm", "move or shrink"],
        ),
        bad(
            "part inside a part",
            Set("/parts/1/shape", json!({ "cylinder": { "diameter": "10 mm", "length": "10 mm" } })),
            &["parts.liner", "part `billet`"],
        ),
        bad(
            "turn inside the billet",
            Set("/coils/0/winding/helix/inner_diameter", json!("40 mm")),
            &["coils.coil", "turn 2", "part `billet`", "enlarge the coil"],
        ),
        bad(
            "turn in the liner only",
            Set("/coils/0/winding/helix/inner_diameter", json!("74 mm")),
            &["turn 1", "part `liner`"],
        ),
        bad(
            "turns on each other",
            Set("/coils/0/winding/helix/length", json!("150 mm")),
            &["coils.coil.winding.helix.length", "150 mm", "conductor is 14.0000 mm", "at least 168.0000 mm"],
        ),
        bad(
            "pitch under the conductor",
            Set("/coils/0/winding", json!({ "helix": { "turns": 3, "inner_diameter": "80 mm", "pitch": "13 mm" } })),
            &["helix.pitch", "13 mm", "at least 14.0000 mm"],
        ),
        bad(
            "length and pitch",
            Set("/coils/0/winding/helix/pitch", json!("20 mm")),
            &["coils.coil.winding.helix", "twice", "either `length` or `pitch`"],
        ),
        bad(
            "neither length nor pitch",
            Remove("/coils/0/winding/helix/length"),
            &["coils.coil.winding.helix", "not said", "`pitch`"],
        ),
        bad(
            "one turn of two lengths",
            Set("/coils/0/winding/helix/turns", json!(1)),
            &["helix.length", "240 mm", "14.0000 mm", "leave `length` out"],
        ),
        bad(
            "three thousand turns in layers",
            Set(
                "/coils/0/winding/helix",
                json!({ "turns": 1000, "layers": 3, "inner_diameter": "80 mm", "pitch": "20 mm" }),
            ),
            &["coils.coil.winding", "3000 turns", "2000"],
        ),
        bad(
            "placed turns on each other",
            Set("/coils/0/winding", json!({ "placed_turns": [["50 mm", "0 mm"], ["52 mm", "3 mm"]] })),
            &["coils.coil", "turn 2", "turn 1 of coil `coil`", "move one"],
        ),
        bad(
            "turn on the axis",
            Set("/coils/0/winding", json!({ "placed_turns": [["5 mm", "200 mm"]] })),
            &["coils.coil.winding", "axis", "enlarge"],
        ),
        bad(
            "part across the axis",
            Set("/parts/1/shape", json!({ "profile": [["-5 mm", "150 mm"], ["5 mm", "150 mm"], ["5 mm", "160 mm"]] })),
            &["parts.liner.shape", "-5.0000 mm", "crosses the axis"],
        ),
        bad(
            "profile across itself",
            Set(
                "/parts/1/shape",
                json!({ "profile": [["35 mm", "0 mm"], ["38 mm", "9 mm"], ["38 mm", "0 mm"], ["35 mm", "9 mm"]] }),
            ),
            &[
                "parts.liner.shape.profile",
                "crosses or touches itself at r = 36.5000 mm, z = 4.5000 mm",
                "in their order",
            ],
        ),
        bad(
            "profile that touches itself",
            Set(
                "/parts/1/shape",
                json!({ "profile": [["34 mm", "0 mm"], ["38 mm", "0 mm"], ["38 mm", "9 mm"], ["36 mm", "0 mm"], ["34 mm", "9 mm"]] }),
            ),
            &["parts.liner.shape.profile", "touches itself at r = 36.0000 mm, z = 0.0000 mm", "in their order"],
        ),
        bad(
            "profile that begins with an arc",
            Set(
                "/parts/1/shape",
                json!({ "profile": [{ "arc": { "to": ["35 mm", "0 mm"], "centre": ["35 mm", "1 mm"], "direction": "clockwise" } }, ["38 mm", "0 mm"]] }),
            ),
            &["parts.liner.shape.profile[0]", "begins with a point"],
        ),
        bad(
            "arc off its circle",
            Set(
                "/parts/1/shape",
                json!({ "profile": [["35 mm", "0 mm"], { "arc": { "to": ["38 mm", "0 mm"], "centre": ["36 mm", "0 mm"], "direction": "clockwise" } }] }),
            ),
            &["profile[1].arc.centre", "1.0000 mm", "2.0000 mm", "correct"],
        ),
        bad(
            "fillet larger than its lines",
            Set(
                "/parts/1/shape",
                json!({ "profile": [["35 mm", "0 mm"], { "fillet": { "at": ["38 mm", "0 mm"], "radius": "4 mm" } }, ["38 mm", "9 mm"], ["35 mm", "9 mm"]] }),
            ),
            &["profile[1].fillet.radius", "4 mm", "at most 3.0000 mm", "reduce"],
        ),
        bad(
            "fillet larger than its arc",
            Set(
                "/parts/1/shape",
                json!({ "profile": [["0 mm", "150 mm"], ["10 mm", "150 mm"], { "arc": { "to": ["0 mm", "160 mm"], "centre": ["0 mm", "150 mm"], "direction": "counter-clockwise", "fillet": "9 mm" } }] }),
            ),
            &["profile[2].arc.fillet", "9 mm", "at most 5.0000 mm", "reduce"],
        ),
        bad(
            "fillet and chamfer at one corner",
            Set(
                "/parts/1/shape",
                json!({ "profile": [["0 mm", "150 mm"], ["10 mm", "150 mm"], { "arc": { "to": ["0 mm", "160 mm"], "centre": ["0 mm", "150 mm"], "direction": "counter-clockwise", "fillet": "1 mm", "chamfer": "1 mm" } }] }),
            ),
            &["profile[2].arc", "fillet", "chamfer", "remove one"],
        ),
        bad(
            "fillet on a straight line",
            Set(
                "/parts/1/shape",
                json!({ "profile": [["34 mm", "0 mm"], { "fillet": { "at": ["36 mm", "0 mm"], "radius": "1 mm" } }, ["38 mm", "0 mm"], ["38 mm", "9 mm"]] }),
            ),
            &["profile[1]", "straight on", "remove"],
        ),
        bad(
            "point twice in a row",
            Set(
                "/parts/1/shape",
                json!({ "profile": [["34 mm", "0 mm"], ["38 mm", "0 mm"], ["38 mm", "0 mm"], ["38 mm", "9 mm"]] }),
            ),
            &["profile", "r = 38.0000 mm, z = 0.0000 mm", "twice in a row", "remove"],
        ),
        bad(
            "placed twice",
            Set("/parts/0/shape/cylinder/from", json!("0 mm")),
            &["parts.billet.shape.cylinder", "more than once", "`from` with `to`"],
        ),
        bad(
            "not placed at all",
            Remove("/parts/0/shape/cylinder/length"),
            &["parts.billet.shape.cylinder", "how long", "`length`"],
        ),
        bad(
            "upside down",
            Set("/parts/0/shape/cylinder", json!({ "diameter": "60 mm", "from": "10 mm", "to": "-10 mm" })),
            &["cylinder.to", "-10 mm", "`from` (10 mm)"],
        ),
        bad("no coils", Set("/coils", json!([])), &["coils", "no coils", "applied_field"]),
        bad("no hold", Remove("/supply/hold"), &["supply", "`hold` is missing", "workpiece_power"]),
        bad(
            "field beside coils",
            Set("/supply/applied_field", json!("50 kA/m")),
            &["supply.applied_field", "`coils`", "remove one"],
        ),
        bad(
            "power in brick",
            Set("/parts/0/material", json!("refractory castable")),
            &["supply.hold.workpiece_power", "22 kW", "conducting material"],
        ),
        bad(
            "until without at_most",
            Remove("/heating/stages/0/at_most"),
            &["heating.stages.heat", "for ever", "`at_most`"],
        ),
        bad("stage without an end", Remove("/heating/stages/1/for"), &["heating.stages.soak", "not said", "`for`"]),
        bad(
            "stage with two ends",
            Set("/heating/stages/0/for", json!("10 s")),
            &["heating.stages.heat", "twice", "either `for`"],
        ),
        bad(
            "goal at no gauge",
            Set("/heating/stages/0/until/gauge", json!("surfce")),
            &["heating.stages.heat.until.gauge", "\"surfce\"", "did you mean `surface`"],
        ),
        bad(
            "hold at no gauge",
            Set("/heating/stages/1/hold/gauge", json!("top")),
            &["heating.stages.soak.hold.gauge", "\"top\"", "known here: core, surface"],
        ),
        bad(
            "gauge in no part",
            Set("/thermocouples/0/part", json!("bilet")),
            &["thermocouples.core.part", "\"bilet\"", "did you mean `billet`"],
        ),
        bad(
            "gauge in the air",
            Set("/thermocouples/0/z", json!("120 mm")),
            &["thermocouples.core", "z = 120.0000 mm", "not in part `billet`", "move the gauge"],
        ),
        bad(
            "pyrometer beside the billet",
            Set("/pyrometers/0/z", json!("101 mm")),
            &["pyrometers.surface.z", "101 mm", "no outer face", "another face"],
        ),
        bad(
            "pyrometer in a solid bar",
            Set("/pyrometers/0/face", json!("inner")),
            &["pyrometers.surface.z", "no inner face"],
        ),
        bad(
            "pyrometer with both coordinates",
            Set("/pyrometers/0/r", json!("30 mm")),
            &["pyrometers.surface", "`r` follows from the face"],
        ),
        bad("pyrometer without its coordinate", Remove("/pyrometers/0/z"), &["pyrometers.surface", "`z` is missing"]),
        bad(
            "plane off the middle",
            Set("/mirror_planes", json!(["10 mm"])),
            &["parts.billet", "no mirror image", "10.0000 mm", "remove `mirror_planes`"],
        ),
        on(
            SLICE,
            "planes upside down",
            Set("/mirror_planes", json!(["50 mm", "-50 mm"])),
            &["mirror_planes[1]", "-50 mm", "swap"],
        ),
        on(
            SLICE,
            "part outside the slice",
            Set(
                "/parts/0/shape/tube",
                json!({ "inner_diameter": "44 mm", "outer_diameter": "50 mm", "from": "60 mm", "to": "90 mm" }),
            ),
            &["parts.tube", "outside the slice", "move"],
        ),
        on(
            SLICE,
            "turn outside the slice",
            Set("/coils/0/winding/helix/turns", json!(9)),
            &["coils.coil", "turn 1", "outside the slice"],
        ),
        on(
            SLICE,
            "turn cut beside its middle",
            Set("/mirror_planes", json!(["-45 mm", "50 mm"])),
            &["coils.coil", "turn 1", "no mirror image"],
        ),
        on(
            SLICE,
            "gauge outside the slice",
            Set("/thermocouples/0/z", json!("80 mm")),
            &["thermocouples.wall", "z = 80.0000 mm", "outside the slice"],
        ),
        on(
            SPHERE,
            "hold beside a field",
            Set("/supply/hold", json!({ "coil_current": "1 A" })),
            &["supply.applied_field", "`hold`", "remove one"],
        ),
        on(
            SPHERE,
            "stage that holds in a field",
            Set("/heating", json!({ "stages": [{ "name": "a", "for": "1 s", "hold": "off" }] })),
            &["heating.stages.a.hold", "no supply", "remove"],
        ),
    ]
}
