//! One field operator for many frequencies and properties, and what is derived from its solutions. SI units.
#![allow(clippy::unwrap_used, reason = "tests")]

use std::sync::Arc;

use mesher::Outline;
use num_complex::Complex64;
use serde_json::json;
use solver::SolveError;
use solver::constants::MU_0;
use solver::fem::element::ElementPoints;
use solver::fem::space::Space;
use solver::magnetics::operator::Operator;
use solver::magnetics::properties::{PointProperties, PointTemperatures, StartTemperatures};
use solver::magnetics::report::Numbers;
use solver::magnetics::unit_field::{UnitField, electric_field, flux_density, local};
use solver::material::Material;
use solver::model::{
    Coil, ConductorKind, Drive, Hold, Limits, MeshSettings, Mirrors, Model, Part, Role, Surface, Turn,
};
use solver::overview::Meshed;
use solver::results::RegionName;

fn steel() -> Arc<Material> {
    let data = json!({
        "name": "steel", "density": "7800 kg/m3", "thermal_conductivity": "30 W/m/K", "specific_heat": "600 J/kg/K",
        "resistivity": { "unit": "µΩ cm", "table": [[20, 20], [400, 50], [800, 110]], "source": "made up" },
        "magnetic": { "saturation_polarisation": "2 T", "initial_relative_permeability": 40, "curie": "760 °C" },
    });
    Arc::new(Material::from_json(&data).unwrap())
}

fn copper() -> Arc<Material> {
    let data = json!({
        "name": "copper", "density": "8900 kg/m3", "thermal_conductivity": "390 W/m/K", "specific_heat": "390 J/kg/K",
        "resistivity": "1.9 µΩ cm",
    });
    Arc::new(Material::from_json(&data).unwrap())
}

fn part(name: &str, low: [f64; 2], high: [f64; 2]) -> Part {
    Part {
        name: name.to_owned(),
        role: Role::Workpiece,
        outline: Outline::rectangle(low, high).unwrap(),
        material: steel(),
        surface: Surface { emissivity: 0.0, convection_w_per_m2_k: 0.0 },
        faces: Vec::new(),
        start_k: 293.15,
    }
}

fn coil(name: &str, conductor: ConductorKind, z: f64) -> Coil {
    let turn = |z: f64| Turn {
        outline: Outline::rectangle([0.03, z], [0.036, z + 0.006]).unwrap(),
        bore: None,
        centre: [0.033, z + 0.003],
    };
    Coil {
        name: name.to_owned(),
        turns: vec![turn(z), turn(z + 0.01)],
        material: copper(),
        temperature_k: 293.15,
        conductor,
        reversed: false,
        water: None,
    }
}

/// Two steel bars on one axis in a coil of solid turns and one of stranded turns.
fn device(order: usize) -> Model {
    Model {
        title: "two bars".to_owned(),
        parts: vec![part("lower", [0.0, -0.03], [0.02, -0.002]), part("upper", [0.0, 0.002], [0.02, 0.03])],
        coils: vec![
            coil("solid", ConductorKind::Solid, -0.02),
            coil("stranded", ConductorKind::Stranded { fill: 0.6 }, 0.004),
        ],
        drive: Drive::Supply { frequency_hz: 1e3, hold: Hold::CoilCurrent(1.0), limits: Limits::default() },
        mirrors: Mirrors::None,
        heating: None,
        gauges: Vec::new(),
        start_k: 293.15,
        mesh: MeshSettings { order, fineness: 0.5, ..MeshSettings::default() },
    }
}

/// A model with its mesh.
struct Case {
    model: Model,
    meshed: Meshed,
    space: Arc<Space>,
}

impl Case {
    fn new(order: usize) -> Self {
        let model = device(order);
        let meshed = Meshed::new(&model, &|| false).unwrap();
        let space = Arc::new(Space::new(&meshed.mesh, &meshed.nodes, |_| true));
        Self { model, meshed, space }
    }

    fn regions(&self) -> &[RegionName] {
        &self.meshed.layout.regions
    }

    fn operator(&self, frequency_hz: f64) -> Operator {
        let drive = Drive::Supply { frequency_hz, hold: Hold::CoilCurrent(1.0), limits: Limits::default() };
        let model = Model { drive, ..self.model.clone() };
        let open_boundary = self.meshed.layout.open_boundary;
        Operator::new(Arc::clone(&self.space), self.regions(), open_boundary, &model).unwrap()
    }

    fn properties(&self, temperatures: &dyn PointTemperatures) -> PointProperties {
        PointProperties::new(&self.space, self.regions(), &self.model, temperatures)
    }

    fn part_of(&self, e: usize) -> Option<usize> {
        match self.regions()[self.space.region(e).0 as usize] {
            RegionName::Part(part, _) => Some(part),
            _ => None,
        }
    }
}

/// Temperatures that vary from point to point, in every second triangle of a mesh.
struct Uneven {
    from_k: f64,
}

impl Uneven {
    fn kelvin(&self, triangle: usize, q: usize) -> f64 {
        self.from_k + (triangle % 101) as f64 + 3.0 * q as f64
    }
}

impl PointTemperatures for Uneven {
    fn is_heated(&self, triangle: usize) -> bool {
        triangle % 2 == 1
    }

    fn at(&self, triangle: usize, out: &mut [f64]) {
        for (q, out) in out.iter_mut().enumerate() {
            *out = self.kelvin(triangle, q);
        }
    }
}

/// Everything a solve gives, as bits.
fn bits(field: &UnitField) -> Vec<u64> {
    let unknowns = field.x.iter().flat_map(|x| [x.re, x.im]);
    let sums =
        field.by_element.iter().flat_map(|s| [s.loss_w, s.energy_j, s.largest_loss_w_per_m3, s.largest_field_a_per_m]);
    let totals = [field.energy_j, field.source_power_w, field.backward_error];
    unknowns.chain(sums).chain(totals).chain(field.loss_w_per_m3.iter().copied()).map(f64::to_bits).collect()
}

#[test]
fn frequencies_and_properties_in_turn_give_the_bits_of_fresh_operators() {
    let case = Case::new(2);
    let warm = [300.0, 700.0].map(|from_k| case.properties(&Uneven { from_k }));
    let cold = case.properties(&StartTemperatures);
    let mut kept = case.operator(50.0);
    for (frequency_hz, properties) in [(50.0, &cold), (2e3, &warm[0]), (2e3, &warm[1]), (300.0, &cold), (50.0, &cold)] {
        kept.set_frequency(frequency_hz).unwrap();
        let mut fresh = case.operator(frequency_hz);
        let fields = [kept.solve(properties).unwrap(), fresh.solve(properties).unwrap()];
        assert!(bits(&fields[0]) == bits(&fields[1]), "fields at {frequency_hz} Hz");
        let of = |operator: &Operator, field| {
            let numbers = Numbers::new(field, operator, properties, case.regions(), &case.model);
            format!("{numbers:?}")
        };
        assert_eq!(of(&kept, &fields[0]), of(&fresh, &fields[1]), "numbers at {frequency_hz} Hz");
    }
}

#[test]
fn a_frequency_that_is_not_a_positive_number_is_refused_and_changes_nothing() {
    let case = Case::new(1);
    let mut operator = case.operator(1e3);
    let before = operator.omega();
    for frequency_hz in [0.0, -50.0, f64::NAN, f64::INFINITY] {
        let refusal = operator.set_frequency(frequency_hz).unwrap_err();
        assert!(matches!(refusal, SolveError::Value { unit: "Hz", .. }), "{frequency_hz}: {refusal}");
        assert_eq!(operator.omega(), before);
    }
}

#[test]
fn properties_are_those_of_the_material_at_the_temperatures_of_each_point() {
    let case = Case::new(2);
    let uneven = Uneven { from_k: 500.0 };
    let properties = case.properties(&uneven);
    let steel = steel();
    let mut seen = [0; 3];
    for e in 0..case.space.element_count() {
        let triangle = case.space.triangle(e);
        let part = case.part_of(e);
        seen[part.map_or(0, |_| 1 + usize::from(uneven.is_heated(triangle)))] += 1;
        for (q, (&sigma, &nu)) in properties.sigma(e).iter().zip(properties.nu(e)).enumerate() {
            let kelvin = if uneven.is_heated(triangle) { uneven.kelvin(triangle, q) } else { 293.15 };
            let expected = match &case.regions()[case.space.region(e).0 as usize] {
                RegionName::Part(..) => {
                    let mu = steel.relative_permeability(kelvin);
                    (steel.electrical_conductivity_s_per_m(kelvin), 1.0 / (MU_0 * mu))
                }
                RegionName::Turn(0, ..) => (copper().electrical_conductivity_s_per_m(293.15), 1.0 / MU_0),
                RegionName::Turn(..) | RegionName::Air => (0.0, 1.0 / MU_0),
            };
            assert_eq!((sigma, nu), expected, "element {e}, point {q}");
        }
    }
    assert!(seen.iter().all(|&count| count > 10), "elements outside, at the start and heated: {seen:?}");
}

#[test]
fn losses_and_energies_are_those_of_the_field_point_by_point() {
    for order in 1..=3 {
        let case = Case::new(order);
        let properties = case.properties(&Uneven { from_k: 400.0 });
        let mut operator = case.operator(2e3);
        let field = operator.solve(&properties).unwrap();
        let mut points = ElementPoints::default();
        let mut energy = 0.0;
        for e in 0..case.space.element_count() {
            case.space.fill(e, &mut points);
            let (u, w): (Vec<Complex64>, _) = local(&operator, &field.x, e);
            let (mut loss_w, mut largest) = (0.0, [0.0_f64; 2]);
            for (q, p) in points.points().iter().enumerate() {
                let (sigma, nu) = (properties.sigma(e)[q], properties.nu(e)[q]);
                let loss = 0.5 * sigma * electric_field(p, &u, w, operator.omega()).norm_sqr();
                let b = flux_density(p, &u);
                let square = b[0].norm_sqr() + b[1].norm_sqr();
                assert_eq!(field.loss(e)[q], loss, "order {order}, element {e}, point {q}");
                loss_w += loss * p.volume;
                energy += 0.25 * nu * square * p.volume;
                largest = [largest[0].max(loss), largest[1].max(nu * square.sqrt())];
            }
            let sums = &field.by_element[e];
            assert_eq!([sums.loss_w, sums.largest_loss_w_per_m3], [loss_w, largest[0]], "order {order}, element {e}");
            assert_eq!(sums.largest_field_a_per_m, largest[1], "order {order}, element {e}");
        }
        let whole = energy + 0.25 * operator.exterior_form(&field.x);
        assert!((field.energy_j / whole - 1.0).abs() < 1e-12, "order {order}: {} and {whole}", field.energy_j);
    }
}

#[test]
fn a_field_is_the_same_bits_for_any_number_of_threads() {
    let case = Case::new(2);
    let solve = || {
        let properties = case.properties(&Uneven { from_k: 400.0 });
        let field = case.operator(2e3).solve(&properties).unwrap();
        (bits(&field), properties)
    };
    let in_pool = |threads| rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap().install(solve);
    let (alone, five) = (in_pool(1), in_pool(5));
    assert!(alone.0 == five.0, "fields differ");
    assert!(alone.1 == five.1, "properties differ");
}
