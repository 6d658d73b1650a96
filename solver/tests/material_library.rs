//! The built-in library: complete, sourced, found by its names.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

use solver::material::{Library, Source, SourceKind, library};

fn stands(source: &Source) -> bool {
    source.kind != SourceKind::User && source.text.len() > 3
}

#[test]
fn every_property_of_every_material_has_a_source() {
    for material in library().unwrap().materials() {
        let name = &material.name;
        assert!(stands(&material.density_source), "{name}: density");
        assert!(stands(material.conductivity.source()), "{name}: thermal conductivity");
        assert!(stands(material.specific_heat.source()), "{name}: specific heat");
        assert!(material.resistivity.as_ref().is_none_or(|c| stands(c.source())), "{name}: resistivity");
        assert_eq!(material.emissivity.is_some(), material.emissivity_source.is_some(), "{name}: emissivity");
        assert!(material.emissivity_source.as_ref().is_none_or(stands), "{name}: emissivity");
        assert!(material.melting.as_ref().is_none_or(|m| stands(&m.source)), "{name}: melting");
        assert!(material.magnetic.as_ref().is_none_or(|m| stands(&m.source)), "{name}: magnetic");
        assert!(!material.description.is_empty(), "{name}: description");
    }
}

#[test]
fn a_library_value_without_a_source_is_refused() {
    let text =
        r#"[{ "name": "x", "density": "1000 kg/m3", "thermal_conductivity": "1 W/m/K", "specific_heat": "1 J/kg/K" }]"#;
    let error = Library::read(&[text]).unwrap_err().to_string();
    assert!(error.contains("material `x`, `density`") && error.contains("source"), "{error}");
}

#[test]
fn materials_answer_to_their_aliases_whatever_the_case_and_spacing() {
    let library = library().unwrap();
    for (alias, name) in [
        ("1045", "C45"),
        ("1.0503", "C45"),
        (" c 45 ", "C45"),
        ("AISI4140", "42CrMo4"),
        ("1.7225", "42CrMo4"),
        ("42crmo4", "42CrMo4"),
        ("1022", "C22"),
        ("1.0402", "C22"),
        ("304", "1.4301"),
        ("316L", "1.4401"),
        ("430", "1.4016"),
        ("COPPER, COIL", "copper"),
        ("coil copper", "copper"),
        ("ti6al4v", "Ti-6Al-4V"),
        ("UNS N06600", "alloy 600"),
        ("n07718", "alloy 718"),
        ("6xxx", "aluminium 6082"),
        ("Aluminum", "aluminium"),
        ("brass", "brass 70/30"),
        ("Refractory  Castable", "refractory castable"),
    ] {
        assert_eq!(library.find(alias).map(|m| m.name.as_str()), Some(name), "{alias}");
    }
    assert!(library.find("unobtainium").is_none());
    assert!(library.find("").is_none());
}

#[test]
fn a_mistyped_name_gets_the_nearest_one() {
    let library = library().unwrap();
    for (typed, meant) in [
        ("coper", "copper"),
        ("C54", "C45"),
        ("42CrMo", "42CrMo4"),
        ("alumnium", "aluminium"),
        ("grafite", "graphite"),
        ("1.4031", "1.4301"),
        ("refractory castabel", "refractory castable"),
    ] {
        assert_eq!(library.suggest(typed), Some(meant), "{typed}");
    }
    for nothing_like_it in ["xyzzyplugh", "", "q"] {
        assert_eq!(library.suggest(nothing_like_it), None, "{nothing_like_it}");
    }
}

#[test]
fn the_library_holds_what_a_forge_a_hardening_shop_and_a_foundry_need() {
    let library = library().unwrap();
    let names = library.names();
    for name in [
        "copper",
        "brass 70/30",
        "C22",
        "C45",
        "42CrMo4",
        "1.4301",
        "1.4401",
        "1.4016",
        "aluminium",
        "aluminium 6082",
        "titanium grade 2",
        "Ti-6Al-4V",
        "alloy 600",
        "alloy 718",
        "iron",
        "nickel",
        "tungsten",
        "graphite",
        "refractory castable",
        "alumina",
        "insulation wool",
        "mica",
        "air",
    ] {
        assert!(names.contains(&name), "{name}");
    }
    for metal in ["copper", "C22", "C45", "42CrMo4", "1.4301", "1.4016", "aluminium", "iron", "nickel", "tungsten"] {
        assert!(library.find(metal).unwrap().melting.is_some(), "{metal} melts");
    }
    for ferromagnet in ["C22", "C45", "42CrMo4", "1.4016", "iron", "nickel"] {
        assert!(library.find(ferromagnet).unwrap().magnetic.is_some(), "{ferromagnet} is magnetic");
    }
    for insulator in ["air", "alumina", "mica", "refractory castable", "insulation wool"] {
        let material = library.find(insulator).unwrap();
        assert!(material.resistivity.is_none(), "{insulator} insulates");
        assert_eq!(material.electrical_conductivity_s_per_m(500.0), 0.0);
    }
}

#[test]
fn room_temperature_values_lie_where_handbooks_have_them() {
    // Ranges over several grades and handbooks, from memory: resistivity in µΩ cm, conductivity in W/(m K), heat in J/(kg K).
    let rows = [
        ("copper", 1.67..1.78, 380.0..405.0, 380.0..390.0),
        ("brass 70/30", 5.8..6.7, 105.0..125.0, 370.0..390.0),
        ("C45", 16.0..20.0, 45.0..55.0, 430.0..490.0),
        ("42CrMo4", 19.0..23.0, 38.0..48.0, 430.0..490.0),
        ("1.4301", 69.0..74.0, 13.5..16.5, 450.0..510.0),
        ("1.4401", 72.0..76.0, 13.0..16.5, 450.0..510.0),
        ("1.4016", 55.0..62.0, 22.0..27.0, 440.0..470.0),
        ("aluminium", 2.65..2.9, 220.0..240.0, 880.0..910.0),
        ("aluminium 6082", 3.5..4.3, 160.0..200.0, 880.0..920.0),
        ("titanium grade 2", 42.0..58.0, 15.0..23.0, 510.0..530.0),
        ("Ti-6Al-4V", 165.0..180.0, 6.5..7.5, 520.0..570.0),
        ("alloy 600", 98.0..106.0, 14.0..15.5, 430.0..470.0),
        ("alloy 718", 118.0..128.0, 8.5..11.8, 420.0..440.0),
        ("iron", 9.5..10.0, 75.0..82.0, 440.0..455.0),
        ("nickel", 6.8..7.3, 85.0..93.0, 435.0..450.0),
        ("tungsten", 5.2..5.6, 165.0..180.0, 128.0..136.0),
        ("graphite", 800.0..1500.0, 70.0..140.0, 690.0..720.0),
    ];
    for (name, resistivity, conductivity, heat) in rows {
        let material = library().unwrap().find(name).unwrap();
        let t = 293.15;
        let rho = material.resistivity.as_ref().unwrap().value(t) * 1e8;
        assert!(resistivity.contains(&rho), "{name}: {rho} µΩ cm");
        let k = material.conductivity.value(t);
        assert!(conductivity.contains(&k), "{name}: {k} W/(m K)");
        let c = material.specific_heat.value(t);
        assert!(heat.contains(&c), "{name}: {c} J/(kg K)");
    }
}

#[test]
fn pure_metals_follow_the_wiedemann_franz_law_from_room_temperature_on() {
    // Sommerfeld value 2.44e-8 W ohm/K2; measured Lorenz numbers of these metals lie within 25 % of it
    // (C. Kittel, Introduction to Solid State Physics, table of Lorenz numbers, from memory; tungsten 3.0e-8, iron 2.9e-8).
    for name in ["copper", "aluminium", "iron", "nickel", "tungsten"] {
        let material = library().unwrap().find(name).unwrap();
        for t in [300.0, 400.0, 600.0, 800.0] {
            let lorenz = material.conductivity.value(t) * material.resistivity.as_ref().unwrap().value(t) / t;
            assert!((lorenz / 2.44e-8 - 1.0).abs() < 0.35, "{name} at {t} K: Lorenz number {lorenz:.3e}");
        }
    }
}

#[test]
fn a_name_taken_twice_is_refused() {
    let one = r#"[{ "name": "x", "aliases": ["X "],
        "density": { "value": "1 kg/m3", "source": { "kind": "common_practice", "text": "made up for the test" } },
        "thermal_conductivity": { "constant": "1 W/m/K", "source": { "kind": "common_practice", "text": "made up" } },
        "specific_heat": { "constant": "1 J/kg/K", "source": { "kind": "common_practice", "text": "made up" } } }]"#;
    let error = Library::read(&[one]).unwrap_err().to_string();
    assert!(error.contains("already belongs to `x`"), "{error}");
}
