//! The program `coilwright`.

fn main() {}
