//! Wall times of the main steps, for comparison between revisions on one machine.
#![allow(missing_docs, clippy::unwrap_used, reason = "Criterion's macros and a bench that must stop on failure")]

use criterion::{BenchmarkId, Criterion, criterion_group, criterion_main};
use mesher::Limits;
use solver::observe::Silent;

const FINENESS: [f64; 3] = [0.7, 1.0, 2.0];

fn mesh(c: &mut Criterion) {
    let mut group = c.benchmark_group("mesh");
    for fineness in FINENESS {
        let layout = solver::layout::layout(&benches::bar_heater(fineness).unwrap()).unwrap();
        group.bench_with_input(BenchmarkId::from_parameter(fineness), &layout, |b, layout| {
            b.iter(|| mesher::triangulate(&layout.drawing, &Limits::default(), &|| false).unwrap());
        });
    }
    group.finish();
}

fn field(c: &mut Criterion) {
    let mut group = c.benchmark_group("mesh and field");
    group.sample_size(10);
    for fineness in FINENESS {
        let model = benches::bar_heater(fineness).unwrap();
        group.bench_with_input(BenchmarkId::from_parameter(fineness), &model, |b, model| {
            b.iter(|| solver::run(model, &Silent).unwrap());
        });
    }
    group.finish();
}

fn heating(c: &mut Criterion) {
    let mut group = c.benchmark_group("heating");
    group.sample_size(10);
    let model = benches::heated_bar().unwrap();
    group.bench_function("ten seconds", |b| b.iter(|| solver::run(&model, &Silent).unwrap()));
    group.finish();
}

criterion_group!(speed, mesh, field, heating);
criterion_main!(speed);
