//! Materials as written: what is read, and how malformed data are refused.
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "tests")]

use serde_json::{Value, json};
use solver::material::{Curve, Material, MaterialData, MaterialFault, Property, Segment, Written};

fn plain() -> Value {
    json!({ "name": "test alloy", "density": "8.0 g/cm3", "resistivity": "72 µΩ cm",
            "thermal_conductivity": "15 W/(m K)", "specific_heat": "0.5 kJ/kg/K", "emissivity": 0.7 })
}

fn with(key: &str, value: Value) -> Value {
    let mut data = plain();
    data[key] = value;
    data
}

/// The error of a material with one key replaced, checked to name the material and the property.
fn refusal(key: &str, value: Value, property: Property) -> MaterialFault {
    let error = Material::from_json(&with(key, value)).expect_err(key);
    assert_eq!(error.material.as_deref(), Some("test alloy"), "{error}");
    assert_eq!(error.property, Some(property), "{error}");
    assert!(error.to_string().starts_with(&format!("material `test alloy`, `{property}`: ")), "{error}");
    error.fault
}

#[test]
fn plain_values_with_units_are_enough_for_a_material() {
    let material = Material::from_json(&plain()).unwrap();
    assert_eq!(material.density_kg_per_m3, 8000.0);
    assert!((material.resistivity.as_ref().unwrap().value(500.0) - 7.2e-7).abs() < 1e-20);
    assert_eq!(material.conductivity.value(500.0), 15.0);
    assert_eq!(material.specific_heat.value(500.0), 500.0);
    assert_eq!(material.emissivity, Some(0.7));
    assert!((material.enthalpy.value(393.15) - 50e3).abs() < 1e-9);
    assert!(material.out_of_range(10.0, 5000.0).is_empty());
}

#[test]
fn units_are_read_however_they_are_typed() {
    for text in [
        "72 µΩ cm",
        "72 μΩ·cm",
        "72 uohm cm",
        "0.72 uohm m",
        "7.2e-7 ohm m",
        "7.2e-7 Ω m",
        "720 nohm m",
        "72uohm cm",
        "0.72 Ω mm²/m",
    ] {
        let material = Material::from_json(&with("resistivity", json!(text))).unwrap();
        let value = material.resistivity.unwrap().value(300.0);
        assert!((value / 7.2e-7 - 1.0).abs() < 1e-14, "{text}: {value}");
    }
    for (text, kelvin) in [("1400 °C", 1673.15), ("1673.15 K", 1673.15), ("2552 °F", 1673.15), ("1400 degC", 1673.15)]
    {
        let melting = json!({ "solidus": text, "liquidus": "1450 °C", "latent_heat": "260 J/g" });
        let melting = Material::from_json(&with("melting", melting)).unwrap().melting.unwrap();
        assert!((melting.solidus_k - kelvin).abs() < 1e-9, "{text}: {}", melting.solidus_k);
        assert_eq!(melting.latent_heat_j_per_kg, 260e3);
    }
}

#[test]
fn a_table_and_a_formula_may_be_in_celsius_or_kelvin() {
    let celsius = json!({ "unit": "W/m/K", "table": [[20, 10], [120, 20]] });
    let kelvin = json!({ "unit": "W/m/K", "temperature_unit": "K", "table": [[293.15, 10], [393.15, 20]] });
    for table in [celsius, kelvin] {
        let material = Material::from_json(&with("thermal_conductivity", table)).unwrap();
        assert!((material.conductivity.value(343.15) - 15.0).abs() < 1e-12);
    }
    let celsius = json!({ "unit": "kJ/kg/K", "segments": [{ "from": 0, "to": 500, "polynomial": [0.4, 0.001] }] });
    let kelvin = json!({ "unit": "J/kg/K", "temperature_unit": "K",
                         "segments": [{ "from": 273.15, "to": 773.15, "polynomial": [126.85, 1.0] }] });
    for formula in [celsius, kelvin] {
        let material = Material::from_json(&with("specific_heat", formula)).unwrap();
        assert!((material.specific_heat.value(373.15) - 500.0).abs() < 1e-9);
    }
}

#[test]
fn data_written_back_read_the_same() {
    let mut data =
        with("resistivity", json!({ "unit": "µΩ cm", "table": [[20, 17.1], [100, 22.1]], "source": "mill sheet" }));
    data["magnetic"] =
        json!({ "saturation_polarisation": "2 T", "initial_relative_permeability": 100, "curie": "760 °C" });
    data["melting"] = json!({ "solidus": "1400 °C", "liquidus": "1450 °C", "latent_heat": "260 kJ/kg" });
    let read = MaterialData::from_json(&data).unwrap();
    let again = MaterialData::from_json(&serde_json::to_value(&read).unwrap()).unwrap();
    assert_eq!(read, again);
    let material = Material::try_from(read).unwrap();
    assert_eq!(material.resistivity.unwrap().source().text, "mill sheet");
    let mu = material.magnetic.unwrap().relative_permeability(293.15);
    assert!((mu - 100.0).abs() < 1e-12, "without a working value the weak-field one counts: {mu}");
}

#[test]
fn values_that_are_not_positive_are_refused() {
    let not_positive = |fault: &MaterialFault| matches!(fault, MaterialFault::NotPositive { .. });
    assert!(not_positive(&refusal("density", json!("-7850 kg/m3"), Property::Density)));
    assert!(not_positive(&refusal("resistivity", json!("0 ohm m"), Property::Resistivity)));
    assert!(not_positive(&refusal("thermal_conductivity", json!("0 W/m/K"), Property::ThermalConductivity)));
    assert!(not_positive(&refusal("specific_heat", json!("-1 J/kg/K"), Property::SpecificHeat)));
    let table = json!({ "unit": "uohm cm", "table": [[20, 17], [700, -90], [800, 110]] });
    let fault = refusal("resistivity", table, Property::Resistivity);
    assert!(matches!(fault, MaterialFault::NotPositive { at_c: Some(t), .. } if (t - 700.0).abs() < 1e-9), "{fault}");
    let segments = json!({ "unit": "J/kg/K", "segments": [{ "from": 0, "to": 1000, "polynomial": [400, -1] }] });
    assert!(not_positive(&refusal("specific_heat", segments, Property::SpecificHeat)));
}

#[test]
fn numbers_that_are_not_finite_are_refused() {
    // JSON has no NaN, so these come from code or from text.
    let fault = refusal("density", json!("NaN kg/m3"), Property::Density);
    assert!(matches!(fault, MaterialFault::NotFinite { .. }), "{fault}");
    let fault = refusal("specific_heat", json!("1e400 J/kg/K"), Property::SpecificHeat);
    assert!(matches!(fault, MaterialFault::NotFinite { .. }), "{fault}");
    let mut data = MaterialData::from_json(&plain()).unwrap();
    data.emissivity = Some(Written::Plain(f64::NAN));
    let error = Material::try_from(data).unwrap_err();
    assert_eq!((error.property, error.material.as_deref()), (Some(Property::Emissivity), Some("test alloy")));
    for points in
        [[(300.0, f64::NAN), (400.0, 1.0)], [(f64::NAN, 1.0), (400.0, 1.0)], [(300.0, 1.0), (f64::INFINITY, 1.0)]]
    {
        let error = Curve::table(&points).unwrap_err();
        assert!(matches!(error.fault, MaterialFault::NotFinite { .. }), "{error}");
    }
    assert!(matches!(Curve::constant(f64::INFINITY).unwrap_err().fault, MaterialFault::NotFinite { .. }));
    assert!(matches!(
        Segment::new(300.0, 400.0, 0.0, vec![f64::NAN], None).unwrap_err().fault,
        MaterialFault::NotFinite { .. }
    ));
}

#[test]
fn tables_out_of_order_repeated_or_empty_are_refused() {
    let table = |rows: Value| json!({ "unit": "W/m/K", "table": rows });
    let property = Property::ThermalConductivity;
    let fault = refusal("thermal_conductivity", table(json!([[20, 1], [200, 2], [100, 3]])), property);
    assert!(matches!(fault, MaterialFault::RowsNotRising { row: 3, .. }), "{fault}");
    let fault = refusal("thermal_conductivity", table(json!([[20, 1], [20, 2]])), property);
    assert!(matches!(fault, MaterialFault::RowsNotRising { row: 2, .. }), "{fault}");
    let fault = refusal("thermal_conductivity", table(json!([])), property);
    assert_eq!(fault, MaterialFault::EmptyTable);
    let fault = refusal("thermal_conductivity", table(json!([[-300, 1]])), property);
    assert!(matches!(fault, MaterialFault::BelowAbsoluteZero { .. }), "{fault}");
}

#[test]
fn segments_with_a_gap_a_pole_or_a_wrong_order_are_refused() {
    let property = Property::SpecificHeat;
    let segments = |list: Value| json!({ "unit": "J/kg/K", "segments": list });
    let gap = json!([{ "from": 20, "to": 600, "polynomial": [400] }, { "from": 601, "to": 700, "polynomial": [400] }]);
    assert!(matches!(refusal("specific_heat", segments(gap), property), MaterialFault::SegmentsApart { .. }));
    let pole = json!([{ "from": 20, "to": 800, "polynomial": [666], "pole": { "numerator": -13002, "at": 738 } }]);
    assert!(matches!(refusal("specific_heat", segments(pole), property), MaterialFault::PoleInside { .. }));
    let order = json!([{ "from": 600, "to": 20, "polynomial": [400] }]);
    assert!(matches!(refusal("specific_heat", segments(order), property), MaterialFault::SegmentBackwards { .. }));
    assert_eq!(refusal("specific_heat", segments(json!([])), property), MaterialFault::NoSegments);
}

#[test]
fn unknown_keys_are_refused_with_the_property_they_stand_in() {
    let fault = refusal("resistivity", json!({ "unit": "uohm cm", "tabel": [[20, 17]] }), Property::Resistivity);
    assert!(fault.to_string().contains("tabel"), "{fault}");
    let melting = json!({ "solidus": "1 °C", "liquidus": "2 °C", "latent_heat": "1 kJ/kg", "latent": 3 });
    let fault = refusal("melting", melting, Property::Melting);
    assert!(fault.to_string().contains("latent"), "{fault}");
    let error = Material::from_json(&with("colour", json!("red"))).unwrap_err();
    assert!(error.to_string().contains("test alloy") && error.to_string().contains("colour"), "{error}");
    let mut missing = plain();
    missing.as_object_mut().unwrap().remove("specific_heat");
    let error = Material::from_json(&missing).unwrap_err();
    assert!(error.to_string().contains("specific_heat"), "{error}");
    for value in [json!(3), json!([]), json!(null), json!("C45")] {
        Material::from_json(&value).unwrap_err();
    }
}

#[test]
fn bare_numbers_and_foreign_units_are_refused_with_what_would_do() {
    let fault = refusal("density", json!(7850), Property::Density);
    assert!(fault.to_string().contains("bare number 7850"), "{fault}");
    let fault = refusal("density", json!("7850"), Property::Density);
    assert!(fault.to_string().contains("kg/m3"), "{fault}");
    let fault = refusal("density", json!("7850 m"), Property::Density);
    assert!(matches!(fault, MaterialFault::UnknownUnit { .. }), "{fault}");
    let fault = refusal("resistivity", json!("heavy"), Property::Resistivity);
    assert!(matches!(fault, MaterialFault::NotAQuantity { .. }), "{fault}");
    let fault = refusal("resistivity", json!({ "table": [[20, 17]] }), Property::Resistivity);
    assert!(matches!(fault, MaterialFault::UnitMissing { .. }), "{fault}");
    let fault = refusal("resistivity", json!({ "constant": "1 ohm m", "unit": "ohm m" }), Property::Resistivity);
    assert_eq!(fault, MaterialFault::UnitTwice);
    let both = json!({ "constant": "1 ohm m", "unit": "ohm m", "table": [[20, 17]] });
    assert_eq!(refusal("resistivity", both, Property::Resistivity), MaterialFault::FormCount { count: 2 });
    assert_eq!(refusal("resistivity", json!({}), Property::Resistivity), MaterialFault::FormCount { count: 0 });
}

#[test]
fn emissivity_melting_and_magnetic_data_outside_their_limits_are_refused() {
    assert!(matches!(refusal("emissivity", json!(1.2), Property::Emissivity), MaterialFault::TooHigh { .. }));
    assert!(matches!(refusal("emissivity", json!(-0.1), Property::Emissivity), MaterialFault::TooLow { .. }));
    let melting = |solidus: &str, liquidus: &str, heat: &str| json!({ "solidus": solidus, "liquidus": liquidus, "latent_heat": heat });
    let fault = refusal("melting", melting("1500 °C", "1400 °C", "250 kJ/kg"), Property::Liquidus);
    assert!(matches!(fault, MaterialFault::LiquidusBelowSolidus { .. }), "{fault}");
    let fault = refusal("melting", melting("1400 °C", "1500 °C", "0 kJ/kg"), Property::LatentHeat);
    assert!(matches!(fault, MaterialFault::NotPositive { .. }), "{fault}");
    let fault = refusal("melting", melting("-400 °C", "1500 °C", "1 kJ/kg"), Property::Solidus);
    assert!(matches!(fault, MaterialFault::BelowAbsoluteZero { .. }), "{fault}");
    let magnetic = |mu: f64, js: &str, initial: f64, curie: &str| {
        json!({ "relative_permeability_20c": mu, "saturation_polarisation": js,
                "initial_relative_permeability": initial, "curie": curie })
    };
    for (data, property) in [
        (magnetic(0.5, "2 T", 100.0, "770 °C"), Property::Permeability20C),
        (magnetic(17.0, "-2 T", 100.0, "770 °C"), Property::SaturationPolarisation),
        (magnetic(17.0, "2 T", 0.0, "770 °C"), Property::InitialPermeability),
        (magnetic(17.0, "2 T", 100.0, "-20 °C"), Property::Curie),
    ] {
        let fault = refusal("magnetic", data, property);
        assert!(matches!(fault, MaterialFault::TooLow { .. }), "{fault}");
    }
    assert_eq!(refusal_of_name(), MaterialFault::NameEmpty);
}

fn refusal_of_name() -> MaterialFault {
    Material::from_json(&with("name", json!(" "))).unwrap_err().fault
}

#[test]
fn the_schema_of_the_data_form_refuses_unknown_keys_and_knows_the_known_ones() {
    let schema = serde_json::to_value(schemars::schema_for!(MaterialData)).unwrap();
    assert_eq!(schema["additionalProperties"], json!(false));
    for key in
        ["name", "density", "resistivity", "thermal_conductivity", "specific_heat", "melting", "magnetic", "note"]
    {
        assert!(schema["properties"].get(key).is_some(), "{key}");
    }
    assert_eq!(schema["required"], json!(["name", "density", "thermal_conductivity", "specific_heat"]));
}
