//! Jobs of another form: keys, words, types and plain numbers.

use serde_json::{Value, json};

use super::{
    Bad,
    Spoil::{Remove, Set},
    bad,
};

#[allow(clippy::too_many_lines, reason = "a table")]
pub(crate) fn forms() -> Vec<Bad> {
    vec![
        bad(
            "unknown key",
            Set("/parts/0/shape/cylinder/diametre", json!("60 mm")),
            &["parts.billet.shape.cylinder.diametre", "did you mean `diameter`", "length"],
        ),
        bad("unknown key at the top", Set("/suply", json!({})), &["suply", "did you mean `supply`"]),
        bad(
            "unknown key far from any",
            Set("/parts/0/colour", json!("red")),
            &["parts.billet.colour", "remove or correct", "material"],
        ),
        bad(
            "unknown shape",
            Set("/parts/0/shape", json!({ "cilinder": {} })),
            &["parts.billet.shape.cilinder", "did you mean `cylinder`"],
        ),
        bad(
            "two shapes",
            Set("/parts/0/shape/disc", json!({ "diameter": "6 mm" })),
            &["only one of `cylinder` and `disc`", "remove"],
        ),
        bad("no shape", Set("/parts/0/shape", json!({})), &["parts.billet.shape", "nothing is chosen", "tube"]),
        bad(
            "unknown role",
            Set("/parts/0/role", json!("workpice")),
            &["parts.billet.role", "workpice", "did you mean `workpiece`"],
        ),
        bad(
            "unknown winding word",
            Set("/coils/0/sense", json!("backward")),
            &["coils.coil.sense", "backward", "reversed"],
        ),
        bad(
            "missing key",
            Remove("/parts/0/shape/cylinder/diameter"),
            &["parts.billet.shape.cylinder", "`diameter` is missing", "60 mm"],
        ),
        bad("missing supply", Remove("/supply"), &["`supply` is missing", "frequency"]),
        bad("missing name", Remove("/parts/1/name"), &["parts[1]", "`name` is missing"]),
        bad(
            "bare number",
            Set("/parts/0/shape/cylinder/diameter", json!(60)),
            &["parts.billet.shape.cylinder.diameter", "value 60", "mm, cm, m", "\"60 mm\""],
        ),
        bad("bare number in a list", Set("/mirror_planes", json!([0])), &["mirror_planes[0]", "value 0", "mm"]),
        bad("null", Set("/coils/0/temperature", Value::Null), &["coils.coil.temperature", "null", "leave the key out"]),
        bad(
            "text for a number",
            Set("/coils/0/winding/helix/turns", json!("12")),
            &["coils.coil.winding.helix.turns", "\"12\"", "whole number"],
        ),
        bad("half a turn", Set("/coils/0/winding/helix/turns", json!(12.5)), &["helix.turns", "12.5", "whole number"]),
        bad(
            "no turns",
            Set("/coils/0/winding/helix/turns", json!(0)),
            &["helix.turns", "value 0", "from 1 to 2000", "correct"],
        ),
        bad(
            "negative turns",
            Set("/coils/0/winding/helix/turns", json!(-3)),
            &["helix.turns", "value -3", "from 1 to 2000"],
        ),
        bad(
            "too many turns",
            Set("/coils/0/winding/helix/turns", json!(5_000_000_000_u64)),
            &["helix.turns", "5000000000", "from 1 to 2000"],
        ),
        bad(
            "emissivity over one",
            Set("/parts/0/surface/emissivity", json!(1.2)),
            &["parts.billet.surface.emissivity", "1.2", "from 0 to 1"],
        ),
        bad(
            "permeability under one",
            Set("/parts/0/relative_permeability", json!(0.5)),
            &["parts.billet.relative_permeability", "0.5", "from 1"],
        ),
        bad("order four", Set("/mesh", json!({ "order": 4 })), &["mesh.order", "value 4", "from 1 to 3"]),
        bad("fineness zero", Set("/mesh", json!({ "fineness": 0 })), &["mesh.fineness", "value 0", "from 0.1 to 10"]),
        bad("no stages", Set("/heating/stages", json!([])), &["heating.stages", "0 items", "at least 1", "add"]),
        bad(
            "three mirror planes",
            Set("/mirror_planes", json!(["0 mm", "1 mm", "2 mm"])),
            &["mirror_planes", "3 items", "at most 2"],
        ),
        bad(
            "point of one number",
            Set("/coils/0/winding", json!({ "placed_turns": [["40 mm"]] })),
            &["placed_turns[0]", "1 items", "exactly 2"],
        ),
        bad(
            "not yet: parallel",
            Set("/coils/0/connection", json!("parallel")),
            &["coils.coil.connection", "parallel", "not in this version"],
        ),
        bad(
            "not yet: mesh accuracy",
            Set("/mesh_accuracy", json!("0.5 %")),
            &["mesh_accuracy", "not in this version", "remove"],
        ),
        bad("not yet: tank", Set("/supply/tank", json!({})), &["supply.tank", "not in this version"]),
        bad("not yet: travel", Set("/parts/0/travel", json!([])), &["parts.billet.travel", "not in this version"]),
        bad(
            "not yet: conical winding",
            Set("/coils/0/winding", json!({ "conical": {} })),
            &["coils.coil.winding.conical", "not in this version"],
        ),
        bad("note that is no text", Set("/parts/0/note", json!(3)), &["parts.billet.note", "value 3", "text"]),
        bad(
            "face with two conditions",
            Set("/parts/1/outside", json!({ "held_at": "60 °C", "flux": "1 W/m2" })),
            &["parts.liner.outside", "only one of", "remove"],
        ),
        bad(
            "face with an unknown word",
            Set("/parts/1/outside", json!("isolated")),
            &["parts.liner.outside", "isolated", "insulated"],
        ),
        bad(
            "material data with a stray key",
            Set("/parts/0/material", json!({ "name": "x", "densty": "1 kg/m3" })),
            &["parts.billet.material.densty", "did you mean `density`"],
        ),
    ]
}
