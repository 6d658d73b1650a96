#![allow(missing_docs, clippy::all, clippy::pedantic, clippy::unwrap_used, clippy::print_stdout)]
mod common;
#[test]
fn zz() {
    for (seed, at) in
        [(6991u64, [0.4306752026469564, 0.13598297941588625]), (2063, [1.3226641619036532, 0.44984321579913533])]
    {
        let drawing = common::generator::section(seed);
        let mesh = common::mesh(&drawing);
        for (t, tri) in mesh.triangles().iter().enumerate() {
            let c = mesh.corners(t);
            if c.iter().any(|p| (p[0] - at[0]).hypot(p[1] - at[1]) < 1e-9) {
                println!(
                    "{seed} t{t} region {} strip {} {:?} {:.6?} curves {:?}",
                    mesh.regions()[t].0,
                    mesh.strip_triangles()[t],
                    tri,
                    c,
                    mesh.triangle_edges()[t]
                        .map(|e| mesh.edges()[e as usize].curve.map(|c| (c.0, mesh.curve(c).on_regions.clone())))
                );
            }
        }
        println!("{:?}", mesh.notes());
    }
}
