//! Charts over time: the heating curve, and power, voltage, current and impedance.
//! Convention: seconds, kelvin and watts come in; time is shown in s, min or h, temperature in °C, power in kW, voltages
//! and currents rms.

use solver::constants::ZERO_CELSIUS_K;
use solver::results::{HistoryRow, Results, State, Terminals};

use super::PictureError;
use super::canvas::Canvas;
use super::chart::{Band, MARK_ROW, MARK_ROWS, Mark, Panel, Place, Series, pale, style};
use super::heading::{HEADING, Heading};
use super::sheet::Sheet;

const SIZE: [f64; 2] = [1600.0, 1200.0];
const LEFT: f64 = 160.0;
/// Room for a legend beside the panels.
const LEGEND: f64 = 370.0;
/// Most parts with a line of their own.
const MOST_PARTS: usize = 5;
/// Most gauges with a line of their own.
const MOST_GAUGES: usize = 12;

/// Temperatures of gauges and parts over time.
pub(super) fn heating(
    results: &Results,
    sheet: &Sheet<'_>,
    gauges: &[String],
    job: &str,
) -> Result<Canvas, PictureError> {
    let clock = Clock::of(&results.history);
    let mut panel = Panel {
        x_label: format!("time in {}", clock.unit),
        y_label: "temperature in \u{b0}C".into(),
        marks: marks(results, &clock),
        ..Panel::default()
    };
    let rows = &results.history;
    let gauge_count = rows.iter().map(|r| r.gauges_k.len()).max().unwrap_or(0);
    for gauge in 0..gauge_count.min(MOST_GAUGES) {
        let name = gauges.get(gauge).cloned().unwrap_or_else(|| format!("gauge {}", gauge + 1));
        let value = |row: &HistoryRow| row.gauges_k.get(gauge).map_or(f64::NAN, |t| t - ZERO_CELSIUS_K);
        panel.series.push(Series { name: Some(name), points: clock.points(rows, value), style: style(gauge) });
    }
    add_parts(&mut panel, rows, sheet, &clock, gauge_count.min(MOST_GAUGES));
    let mut canvas = Canvas::new(SIZE[0] as usize, SIZE[1] as usize)?;
    let top = HEADING + 20.0 + MARK_ROWS as f64 * MARK_ROW;
    let place = Place { from: [LEFT, top], to: [SIZE[0] - LEGEND - 20.0, SIZE[1] - 100.0] };
    let numbered = panel.draw(&mut canvas, place)?;
    let legend = [place.to[0] + 30.0, top];
    panel.legend(&mut canvas, legend, [SIZE[0] - legend[0] - 20.0, place.to[1] - top], numbered)?;
    let note = heated_note(rows, sheet);
    Heading { title: "Heating curve".into(), job: job.to_owned(), note }.draw(&mut canvas)?;
    Ok(canvas)
}

/// Mean lines and bands from the lowest to the highest temperature of each heated part.
fn add_parts(panel: &mut Panel, rows: &[HistoryRow], sheet: &Sheet<'_>, clock: &Clock, styles_used: usize) {
    let heated: Vec<usize> = rows.first().map_or_else(Vec::new, |r| r.parts.iter().map(|p| p.part).collect());
    let names = sheet.parts();
    for (column, part) in heated.into_iter().take(MOST_PARTS).enumerate() {
        let name = names.iter().find(|n| n.0 == part).map_or_else(|| format!("part {}", part + 1), |n| n.1.to_owned());
        let look = style(styles_used + column);
        let value = |pick: fn(&solver::results::PartTemperatures) -> f64| {
            move |row: &HistoryRow| row.parts.get(column).map_or(f64::NAN, |p| pick(p) - ZERO_CELSIUS_K)
        };
        let mean = clock.points(rows, value(|p| p.mean_k));
        let low = clock.points(rows, value(|p| p.min_k));
        let high = clock.points(rows, value(|p| p.max_k));
        let band = low.iter().zip(&high).map(|(l, h)| [l[0], l[1], h[1]]).collect();
        panel.bands.push(Band { name: format!("{name}, least to greatest"), rows: band, colour: pale(look.colour) });
        panel.series.push(Series { name: Some(format!("{name}, mean")), points: mean, style: look });
    }
}

/// Differences at the end of the run.
fn heated_note(rows: &[HistoryRow], sheet: &Sheet<'_>) -> String {
    let Some(last) = rows.last() else {
        return "no steps".into();
    };
    let first = last.parts.first();
    let difference = first.map(|p| p.surface_minus_core_k).filter(|d| d.is_finite());
    let names = sheet.parts();
    let name = first.and_then(|p| names.iter().find(|n| n.0 == p.part)).map_or("the part", |n| n.1);
    difference.map_or_else(String::new, |d| {
        let (size, side) = (d.abs(), if d < 0.0 { "below" } else { "above" });
        format!("at the end the outside of {name} is {size:.0} K {side} its inside, at mid-length")
    })
}

/// Power in its own panel; voltage, current, resistance and inductance in four below it where there is a supply.
pub(super) fn power(results: &Results, job: &str) -> Result<Canvas, PictureError> {
    let rows = &results.history;
    let clock = Clock::of(rows);
    let mut canvas = Canvas::new(SIZE[0] as usize, SIZE[1] as usize)?;
    let supplied = rows.iter().any(|r| r.terminals.is_some());
    let mut panel = power_panel(rows, &clock, supplied);
    panel.marks = marks(results, &clock);
    let top = HEADING + 20.0 + MARK_ROWS as f64 * MARK_ROW;
    let bottom = if supplied { 550.0 } else { SIZE[1] - 100.0 };
    let place = Place { from: [LEFT, top], to: [SIZE[0] - LEGEND - 20.0, bottom] };
    let numbered = panel.draw(&mut canvas, place)?;
    let legend = [place.to[0] + 30.0, top];
    panel.legend(&mut canvas, legend, [SIZE[0] - legend[0] - 20.0, bottom - top], numbered)?;
    if supplied {
        let columns = [[LEFT, 770.0], [LEFT + 800.0, SIZE[0] - 30.0]];
        let heights = [[650.0, 835.0], [925.0, 1110.0]];
        for (index, quantity) in QUANTITIES.iter().enumerate() {
            let (x, y) = (columns[index % 2], heights[index / 2]);
            let place = Place { from: [x[0], y[0]], to: [x[1], y[1]] };
            terminal_panel(rows, &clock, quantity, index).draw(&mut canvas, place)?;
        }
    }
    let note = if supplied { "at the coil terminals; voltage and current rms" } else { "" };
    let title = if supplied { "Power and impedance over time" } else { "Power over time" };
    Heading { title: title.into(), job: job.to_owned(), note: note.into() }.draw(&mut canvas)?;
    Ok(canvas)
}

fn power_panel(rows: &[HistoryRow], clock: &Clock, supplied: bool) -> Panel {
    let mut lines: Vec<(&str, Vec<[f64; 2]>)> =
        vec![("in the workpieces", clock.points(rows, |r| r.workpiece_power_w * 1e-3))];
    if supplied {
        let terminal = |r: &HistoryRow| r.terminals.map_or(f64::NAN, |t| t.power_w * 1e-3);
        lines.insert(0, ("at the coil terminals", clock.points(rows, terminal)));
        lines.push(("lost in the coil", clock.points(rows, |r| r.coil_loss_w * 1e-3)));
    }
    let series = lines.into_iter().enumerate().map(|(i, (name, points))| Series {
        name: Some(name.to_owned()),
        points,
        style: style(i),
    });
    Panel {
        x_label: format!("time in {}", clock.unit),
        y_label: "power in kW".into(),
        series: series.collect(),
        from_zero: true,
        ..Panel::default()
    }
}

/// A number of the terminals with its label and whether its scale starts at zero.
type Quantity = (&'static str, fn(&Terminals) -> f64, bool);

const QUANTITIES: [Quantity; 4] = [
    ("voltage in V", |t| t.voltage_v_rms, true),
    ("current in A", |t| t.current_a_rms, true),
    ("resistance in m\u{3a9}", |t| t.resistance_ohm * 1e3, false),
    ("inductance in \u{b5}H", |t| t.inductance_h * 1e6, false),
];

fn terminal_panel(rows: &[HistoryRow], clock: &Clock, quantity: &Quantity, number: usize) -> Panel {
    let (label, pick, from_zero) = *quantity;
    let points = clock.points(rows, |r| r.terminals.as_ref().map_or(f64::NAN, pick));
    let x_label = if number >= 2 { format!("time in {}", clock.unit) } else { String::new() };
    let look = super::chart::Style { dashes: &[], ..style(0) };
    let series = vec![Series { name: None, points, style: look }];
    Panel { x_label, y_label: label.into(), series, from_zero, ..Panel::default() }
}

/// The unit time is shown in.
struct Clock {
    unit: &'static str,
    seconds: f64,
}

impl Clock {
    fn of(rows: &[HistoryRow]) -> Self {
        let end = rows.iter().map(|r| r.time_s).filter(|t| t.is_finite()).fold(0.0, f64::max);
        let (unit, seconds) = match end {
            t if t <= 600.0 => ("s", 1.0),
            t if t <= 3.0 * 3600.0 => ("min", 60.0),
            _ => ("h", 3600.0),
        };
        Self { unit, seconds }
    }

    fn points(&self, rows: &[HistoryRow], value: impl Fn(&HistoryRow) -> f64) -> Vec<[f64; 2]> {
        rows.iter().map(|r| [r.time_s / self.seconds, value(r)]).collect()
    }
}

/// States that are marked: Curie crossings and ends of stages, those of one moment on one mark.
fn marks(results: &Results, clock: &Clock) -> Vec<Mark> {
    let end = results.history.last().map_or(0.0, |r| r.time_s);
    let mut marks: Vec<Mark> = Vec::new();
    let mut states: Vec<&State> = results.states.iter().collect();
    states.sort_by(|a, b| a.time_s.total_cmp(&b.time_s));
    for state in states {
        let wanted = state.label.contains("Curie") || state.label.starts_with("end of");
        if !wanted || !state.time_s.is_finite() || state.time_s > end {
            continue;
        }
        let x = state.time_s / clock.seconds;
        match marks.last_mut() {
            Some(last) if (last.x - x).abs() <= 1e-9 * x.abs() => last.name = format!("{}, {}", last.name, state.label),
            _ => marks.push(Mark { x, name: state.label.clone() }),
        }
    }
    marks
}
