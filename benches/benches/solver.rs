//! Wall times of the steps of a sparse solve and of whole field solves, on committed systems of growing size. The largest system is left
//! to the comparison with other solvers (`benches/peers`), or this would take too long.
#![allow(missing_docs, clippy::unwrap_used, reason = "Criterion's macros and a bench that must stop on failure")]

use std::time::Duration;

use benches::devices::bar_heater;
use benches::systems::{Case, FieldCase, Kind, System, field_model, heat_system};
use benches::{solving, whole};
use criterion::measurement::WallTime;
use criterion::{BatchSize, BenchmarkGroup, Criterion, SamplingMode, criterion_group, criterion_main};
use solver::linalg::{Factor, Scalar, checked_solve};

const LARGEST: &str = "field-800k";

fn group<'a>(c: &'a mut Criterion, name: &str) -> BenchmarkGroup<'a, WallTime> {
    let mut group = c.benchmark_group(name);
    group.sampling_mode(SamplingMode::Flat).sample_size(10);
    group.warm_up_time(Duration::from_millis(100)).measurement_time(Duration::from_millis(500));
    group
}

/// The steps of one system, in a group of its own.
fn steps<T: Scalar>(group: &mut BenchmarkGroup<WallTime>, system: &System<T>) {
    let n = system.matrix.pattern.n();
    let plan = solving::plan(system).unwrap();
    let mut factor = Factor::new(&plan, &system.matrix.values).unwrap();
    group.bench_function("plan", |b| b.iter(|| solving::plan(system).unwrap()));
    group.bench_function("factor", |b| b.iter(|| Factor::new(&plan, &system.matrix.values).unwrap()));
    group.bench_function("refactor", |b| b.iter(|| factor.refactor(&system.matrix.values).unwrap()));
    for (name, rhs) in [("solve", &system.rhs[..n]), ("solve 8", &system.rhs[..])] {
        group.bench_function(name, |b| {
            b.iter_batched_ref(|| rhs.to_vec(), |x| factor.solve_in_place(x).unwrap(), BatchSize::LargeInput);
        });
    }
    group.bench_function("checked solve", |b| {
        b.iter(|| checked_solve(&system.matrix, &factor, &system.rhs[..n]).unwrap());
    });
}

fn field_steps(c: &mut Criterion, name: &str, case: &mut FieldCase) {
    let system = case.system();
    let mut group = group(c, name);
    group.bench_function("assembly", |b| b.iter(|| case.operator.matrix(&case.properties).values.len()));
    steps(&mut group, &system);
    group.bench_function("mesh to losses", |b| b.iter(|| whole::solve(&case.model, &case.meshed).unwrap()));
    group.finish();
}

fn sparse(c: &mut Criterion) {
    for case in Case::ALL.into_iter().filter(|case| case.name != LARGEST) {
        match case.kind {
            Kind::Field { order, fineness } => {
                let mut field = FieldCase::new(field_model(order, fineness).unwrap()).unwrap();
                field_steps(c, case.name, &mut field);
            }
            Kind::Heat { size } => {
                let system = heat_system(&bar_heater(1.0).unwrap(), size).unwrap();
                let mut group = group(c, case.name);
                steps(&mut group, &system);
                group.finish();
            }
        }
    }
}

criterion_group!(solver, sparse);
criterion_main!(solver);
