//! The numbers of one field solve for the whole device, scaled to the state it belongs to.

use num_complex::Complex64;

use super::drive::PerAmpere;
use super::operator::Operator;
use super::poynting::power_into;
use super::properties::PointProperties;
use super::unit_field::UnitField;
use crate::constants::skin_depth;
use crate::model::{Coil, Model, Role, Water};
use crate::results::{CoilNumbers, Electrical, PartNumbers, RegionName, Terminals, TurnRow};

/// Heat capacity of a cubic metre of water at 35 °C and 3 bar, in `J/(m^3 K)`: density 994.1 times specific heat 4178.5.
///
/// Source: IAPWS-IF97 (computed between the rows for 30 and 40 °C).
const WATER_J_PER_M3_K: f64 = 994.1 * 4178.5;

/// A field solve reduced to numbers per unit drive, for the whole device.
#[derive(Debug, Clone)]
pub struct Numbers {
    /// What one ampere gives; zero impedance with an applied field.
    pub per: PerAmpere,
    turn_voltages: Vec<Complex64>,
    turn_losses_w: Vec<f64>,
    parts: Vec<UnitPart>,
    energy_j: f64,
    balance_relative: f64,
    backward_error: f64,
}

#[derive(Debug, Clone)]
struct UnitPart {
    loss_w: f64,
    poynting_w: Option<f64>,
    surface_m2: f64,
    largest_loss_w_per_m3: f64,
    least_skin_depth_m: f64,
    largest_field_a_per_m: f64,
}

impl Numbers {
    /// Reduces a field.
    pub fn new(
        field: &UnitField,
        operator: &Operator,
        properties: &PointProperties,
        regions: &[RegionName],
        model: &Model,
    ) -> Self {
        let copies = operator.copies();
        let by_region = field.loss_by_region(operator, regions.len());
        let parts = unit_parts(field, operator, properties, regions, model, &by_region);
        let turn_voltages: Vec<_> =
            (0..operator.turns().meshed.len()).map(|k| field.turn_voltage(operator, k)).collect();
        let turn_losses_w = turn_losses(operator, regions, &by_region);
        let impedance_ohm = total_voltage(operator, &turn_voltages);
        let stranded: f64 = operator.turns().meshed.iter().map(|t| 0.5 * t.stranded_resistance_ohm).sum();
        let losses = copies * (by_region.iter().sum::<f64>() + stranded);
        let source_w = copies * (field.source_power_w + stranded);
        let workpiece_power_w = model
            .parts
            .iter()
            .zip(&parts)
            .filter(|(part, _)| part.role == Role::Workpiece)
            .map(|(_, unit)| unit.loss_w)
            .sum();
        Self {
            per: PerAmpere { impedance_ohm, workpiece_power_w, terminal_power_w: 0.5 * impedance_ohm.re },
            turn_voltages,
            turn_losses_w,
            parts,
            energy_j: copies * field.energy_j,
            balance_relative: if losses == 0.0 { 0.0 } else { (source_w - losses).abs() / source_w.abs() },
            backward_error: field.backward_error,
        }
    }

    /// The numbers at a drive of `peak` amperes or A/m.
    pub fn electrical(&self, operator: &Operator, model: &Model, peak: f64) -> Electrical {
        let square = peak * peak;
        let coils: Vec<CoilNumbers> = (0..model.coils.len()).map(|c| self.coil(operator, model, c, peak)).collect();
        let terminals = (!coils.is_empty()).then(|| terminals(self.per.impedance_ohm, operator.omega(), peak));
        let workpiece_power_w = self.per.workpiece_power_w * square;
        Electrical {
            parts: model.parts.iter().zip(&self.parts).map(|(p, u)| part_numbers(&p.name, u, peak)).collect(),
            electrical_efficiency: terminals.filter(|t| t.power_w > 0.0).map(|t| workpiece_power_w / t.power_w),
            coils,
            terminals,
            workpiece_power_w,
            stored_energy_j: self.energy_j * square,
            power_balance_relative: self.balance_relative,
            solve_backward_error: self.backward_error,
        }
    }

    /// Loss in all coils at a drive of one unit, watts.
    pub fn coil_loss_w(&self, operator: &Operator) -> f64 {
        operator.turns().of_coil.iter().flatten().filter(|&&k| k != usize::MAX).map(|&k| self.turn_losses_w[k]).sum()
    }

    fn coil(&self, operator: &Operator, model: &Model, c: usize, peak: f64) -> CoilNumbers {
        let coil = &model.coils[c];
        let own: Vec<usize> = operator.turns().of_coil[c].iter().copied().filter(|&k| k != usize::MAX).collect();
        let impedance = own.iter().map(|&k| operator.turns().meshed[k].sign * self.turn_voltages[k]).sum();
        let losses: Vec<f64> = own.iter().map(|&k| self.turn_losses_w[k] * peak * peak).collect();
        CoilNumbers {
            name: coil.name.clone(),
            terminals: terminals(impedance, operator.omega(), peak),
            loss_w: losses.iter().sum(),
            water_outlet_k: coil.water.map(|w| w.inlet_k + hottest_rise(&w, &losses)),
        }
    }

    /// One row a turn at a drive of `peak` amperes.
    pub fn turns(&self, operator: &Operator, model: &Model, peak: f64) -> Vec<TurnRow> {
        let mut rows = Vec::new();
        for (c, coil) in model.coils.iter().enumerate() {
            for (t, &k) in operator.turns().of_coil[c].iter().enumerate().filter(|(_, k)| **k != usize::MAX) {
                rows.push(self.turn_row(operator, coil, t, k, peak));
            }
        }
        rows
    }

    fn turn_row(&self, operator: &Operator, coil: &Coil, t: usize, k: usize, peak: f64) -> TurnRow {
        let meshed = &operator.turns().meshed[k];
        let [r_m, z_m] = coil.turns[t].centre;
        let loss_w = self.turn_losses_w[k] * peak * peak;
        let fill = match coil.conductor {
            crate::model::ConductorKind::Solid => 1.0,
            crate::model::ConductorKind::Stranded { fill } => fill,
        };
        TurnRow {
            coil: coil.name.clone(),
            turn: t + 1,
            r_m,
            z_m,
            length_m: crate::fem::measure::ring(r_m),
            mass_kg: meshed.volume_m3 / meshed.share * fill * coil.material.density_kg_per_m3,
            current_a_rms: peak / std::f64::consts::SQRT_2,
            voltage_v_rms: self.turn_voltages[k].norm() * peak / std::f64::consts::SQRT_2,
            loss_w,
            water_rise_k: coil.water.map(|w| loss_w / (w.flow_per_path_m3_per_s * WATER_J_PER_M3_K)),
        }
    }
}

/// Largest temperature rise of the paths, each feeding an equal run of consecutive turns.
fn hottest_rise(water: &Water, losses: &[f64]) -> f64 {
    let per_path = losses.len().div_ceil(water.paths.max(1)).max(1);
    losses
        .chunks(per_path)
        .map(|run| run.iter().sum::<f64>() / (water.flow_per_path_m3_per_s * WATER_J_PER_M3_K))
        .fold(0.0, f64::max)
}

fn total_voltage(operator: &Operator, turn_voltages: &[Complex64]) -> Complex64 {
    operator
        .turns()
        .of_coil
        .iter()
        .flatten()
        .filter(|&&k| k != usize::MAX)
        .map(|&k| operator.turns().meshed[k].sign * turn_voltages[k])
        .sum()
}

/// Losses of the meshed turns as whole turns, watts per unit drive squared.
fn turn_losses(operator: &Operator, regions: &[RegionName], by_region: &[f64]) -> Vec<f64> {
    let region_of = |c: usize, t: usize| {
        regions.iter().position(|r| matches!(r, RegionName::Turn(rc, rt, _) if *rc == c && *rt == t))
    };
    operator
        .turns()
        .meshed
        .iter()
        .map(|m| {
            let eddy = region_of(m.coil, m.turn).map_or(0.0, |r| by_region[r]);
            (eddy + 0.5 * m.stranded_resistance_ohm) / m.share
        })
        .collect()
}

/// What is seen at an impedance carrying `peak` amperes (peak) at angular frequency `omega`.
pub fn terminals(impedance: Complex64, omega: f64, peak: f64) -> Terminals {
    let current = peak / std::f64::consts::SQRT_2;
    let (power, reactive) = (impedance.re * current * current, impedance.im * current * current);
    Terminals {
        current_a_rms: current,
        voltage_v_rms: impedance.norm() * current,
        power_w: power,
        reactive_power_var: reactive,
        apparent_power_va: impedance.norm() * current * current,
        power_factor: impedance.re / impedance.norm(),
        quality_factor: impedance.im / impedance.re,
        resistance_ohm: impedance.re,
        reactance_ohm: impedance.im,
        inductance_h: impedance.im / omega,
    }
}

fn part_numbers(name: &str, unit: &UnitPart, peak: f64) -> PartNumbers {
    let square = peak * peak;
    let loss = unit.loss_w * square;
    PartNumbers {
        name: name.to_owned(),
        joule_loss_w: loss,
        hysteresis_loss_w: 0.0,
        poynting_power_w: unit.poynting_w.map(|p| p * square),
        mean_surface_power_density_w_per_m2: if unit.surface_m2 > 0.0 { loss / unit.surface_m2 } else { 0.0 },
        largest_loss_w_per_m3: unit.largest_loss_w_per_m3 * square,
        least_skin_depth_m: unit.least_skin_depth_m,
        largest_field_a_per_m_rms: unit.largest_field_a_per_m * peak / std::f64::consts::SQRT_2,
    }
}

fn unit_parts(
    field: &UnitField,
    operator: &Operator,
    properties: &PointProperties,
    regions: &[RegionName],
    model: &Model,
    by_region: &[f64],
) -> Vec<UnitPart> {
    let surfaces = operator.surfaces_m2();
    let extremes = extremes_by_region(field, operator, properties, regions.len());
    (0..model.parts.len())
        .map(|part| {
            let region = regions.iter().position(|r| matches!(r, RegionName::Part(p, _) if *p == part)).unwrap_or(0);
            let copies = operator.copies();
            let conducts = extremes[region].skin.is_finite();
            let poynting = conducts.then(|| power_into(field, operator, properties, region as u32)).flatten();
            UnitPart {
                loss_w: copies * by_region[region],
                poynting_w: poynting.map(|p| copies * p),
                surface_m2: copies * surfaces[region],
                largest_loss_w_per_m3: extremes[region].loss,
                least_skin_depth_m: extremes[region].skin,
                largest_field_a_per_m: extremes[region].field,
            }
        })
        .collect()
}

#[derive(Debug, Clone, Copy)]
struct Extremes {
    loss: f64,
    skin: f64,
    field: f64,
}

fn extremes_by_region(
    field: &UnitField,
    operator: &Operator,
    properties: &PointProperties,
    regions: usize,
) -> Vec<Extremes> {
    let space = operator.space();
    let frequency = operator.omega() / std::f64::consts::TAU;
    let mut by_region = vec![Extremes { loss: 0.0, skin: f64::INFINITY, field: 0.0 }; regions];
    let least_skin_depths = properties.map_rows(|sigma, nu| {
        let conducting = sigma.iter().zip(nu).filter(|(s, _)| **s > 0.0);
        conducting.fold(f64::INFINITY, |least, (&sigma, &nu)| {
            least.min(skin_depth(frequency, sigma, 1.0 / (nu * crate::constants::MU_0)))
        })
    });
    for (e, sums) in field.by_element.iter().enumerate() {
        let slot = &mut by_region[space.region(e).0 as usize];
        slot.loss = slot.loss.max(sums.largest_loss_w_per_m3);
        slot.field = slot.field.max(sums.largest_field_a_per_m);
        slot.skin = slot.skin.min(least_skin_depths[properties.row(e)]);
    }
    by_region
}
