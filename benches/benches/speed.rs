//! Wall times of whole runs, mesh included, for comparison between revisions on one machine.
#![allow(missing_docs, clippy::unwrap_used, reason = "Criterion's macros and a bench that must stop on failure")]

use criterion::{BenchmarkId, Criterion, criterion_group, criterion_main};
use solver::observe::Silent;

const FINENESS: [f64; 3] = [0.7, 1.0, 2.0];

fn field(c: &mut Criterion) {
    let mut group = c.benchmark_group("mesh and field");
    group.sample_size(10);
    for fineness in FINENESS {
        let model = benches::devices::bar_heater(fineness).unwrap();
        group.bench_with_input(BenchmarkId::from_parameter(fineness), &model, |b, model| {
            b.iter(|| solver::run(model, &Silent).unwrap());
        });
    }
    group.finish();
}

fn heating(c: &mut Criterion) {
    let mut group = c.benchmark_group("heating");
    group.sample_size(10);
    let model = benches::devices::heated_bar().unwrap();
    group.bench_function("ten seconds", |b| b.iter(|| solver::run(&model, &Silent).unwrap()));
    group.finish();
}

criterion_group!(speed, field, heating);
criterion_main!(speed);
