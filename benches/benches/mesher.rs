//! Wall times of meshing: every committed section with its strips, and at one size everywhere for the rate in triangles a second.
//! The mesher runs on one thread.
#![allow(missing_docs, clippy::unwrap_used, reason = "Criterion's macros and a bench that must stop on failure")]

use std::time::Duration;

use benches::sections::{Detail, Section};
use criterion::{BenchmarkId, Criterion, SamplingMode, Throughput, criterion_group, criterion_main};
use mesher::{Drawing, Limits, Mesh};

fn mesh(drawing: &Drawing) -> Mesh {
    mesher::triangulate(drawing, &Limits::default(), &|| false).unwrap()
}

fn mesher(c: &mut Criterion) {
    let mut group = c.benchmark_group("mesher");
    group.sampling_mode(SamplingMode::Flat).sample_size(10);
    group.warm_up_time(Duration::from_millis(100)).measurement_time(Duration::from_secs(1));
    for section in Section::ALL {
        for detail in Detail::ALL {
            let drawing = section.drawing(detail).unwrap();
            group.throughput(Throughput::Elements(mesh(&drawing).triangles().len() as u64));
            let name = BenchmarkId::new(section.name, detail.name());
            group.bench_with_input(name, &drawing, |b, drawing| b.iter(|| mesh(drawing)));
        }
    }
    group.finish();
}

criterion_group!(benches, mesher);
criterion_main!(benches);
