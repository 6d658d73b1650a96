#![allow(clippy::unwrap_used, clippy::expect_used, clippy::print_stdout, reason = "tests")]
mod common;
use common::generator::section;
use mesher::{Limits, triangulate};
use std::sync::atomic::{AtomicU64, Ordering};
use std::time::Instant;

#[test]
fn explore() {
    let count: u64 = std::env::var("SECTIONS").ok().and_then(|s| s.parse().ok()).unwrap_or(300);
    let from: u64 = std::env::var("FROM").ok().and_then(|s| s.parse().ok()).unwrap_or(0);
    let next = AtomicU64::new(from);
    std::thread::scope(|scope| {
        for _ in 0..2 {
            scope.spawn(|| {
                loop {
                    let seed = next.fetch_add(1, Ordering::Relaxed);
                    if seed >= from + count {
                        break;
                    }
                    let d = section(seed);
                    let t = Instant::now();
                    let r = std::panic::catch_unwind(|| {
                        triangulate(&d, &Limits { max_triangles: 200_000 }, &|| t.elapsed().as_secs() > 30)
                    });
                    let time = t.elapsed().as_secs_f64();
                    match r {
                        Err(_) => println!("RES {seed} PANIC"),
                        Ok(Err(e)) => println!("RES {seed} REFUSED {time:.3} {e}"),
                        Ok(Ok(m)) => {
                            let q = m.quality();
                            if let Err(b) = common::laws::obeys(&d, &m) {
                                println!("LAW {seed} {b}");
                            }
                            println!(
                                "RES {seed} OK {time:.3} {} min {:.2} away {:.2} notes {:?}",
                                m.triangles().len(),
                                q.min_angle_deg,
                                common::laws::least_angle_away(&m).0,
                                m.notes()
                                    .iter()
                                    .filter(|n| !matches!(n.reason, mesher::NoteReason::LayersCut { .. }))
                                    .map(|n| n.reason)
                                    .collect::<Vec<_>>()
                            );
                        }
                    }
                }
            });
        }
    });
}

#[test]
fn one() {
    let seed: u64 = std::env::var("SEED").ok().and_then(|s| s.parse().ok()).unwrap_or(0);
    let d = section(seed);
    let fails = |d: &mesher::Drawing| match triangulate(d, &Limits { max_triangles: 200_000 }, &|| false) {
        Err(_) => true,
        Ok(m) => common::laws::obeys(d, &m).is_err_and(|e| std::env::var("WHY").map_or(true, |w| e.contains(&w))),
    };
    let (least, kept) = common::shrink::shrunk(&d, &fails);
    let r = triangulate(&least, &Limits { max_triangles: 200_000 }, &|| false);
    println!(
        "ONE {seed} kept {kept:?} {:?}",
        r.as_ref().map(|m| (m.triangles().len(), common::laws::obeys(&least, m), m.notes().len()))
    );
    if std::env::var("SHOW").is_ok() {
        println!("{}", common::shrink::described(&least));
    }
    if let Ok(path) = std::env::var("OUT") {
        let m = r.unwrap();
        let mut text = String::new();
        for (t, tri) in m.triangles().iter().enumerate() {
            text += &format!(
                "T {} {} {} {} {}\n",
                tri[0],
                tri[1],
                tri[2],
                m.regions()[t].0,
                u8::from(m.strip_triangles()[t])
            );
        }
        for v in m.vertices() {
            text += &format!("V {:e} {:e}\n", v[0], v[1]);
        }
        for e in m.edges() {
            if let Some(c) = e.curve {
                text += &format!("E {} {} {}\n", e.vertices[0], e.vertices[1], c.0);
            }
        }
        std::fs::write(path, text).unwrap();
    }
}
