//! The Rust side of the paired comparison in `eigsh.sh`: writes a pair of matrices as NPY files,
//! then solves it once for every line on its input and prints what it took, as JSON.
//!
//! Arguments: degree, cells, levels, tolerance, directory for the matrices ("-" for none).

#[path = "../common/pencils.rs"]
mod pencils;

use dotwright::eigen::{Plan, Settings, Window, solve_with};
use dotwright::progress::Watch;
use std::io::{BufRead, Write};

fn npy(path: &str, descr: &str, len: usize, bytes: impl Iterator<Item = [u8; 8]>) {
    let mut head = format!("{{'descr': '{descr}', 'fortran_order': False, 'shape': ({len},), }}");
    while (head.len() + 11) % 64 != 0 {
        head.push(' ');
    }
    head.push('\n');
    let mut out = b"\x93NUMPY\x01\x00".to_vec();
    out.extend((head.len() as u16).to_le_bytes());
    out.extend(head.bytes());
    out.extend(bytes.flatten());
    std::fs::write(path, out).expect("the directory can be written to");
}

fn main() {
    let args: Vec<String> = std::env::args()
        .skip(1)
        .filter(|a| !a.starts_with("--"))
        .collect();
    if args.len() < 5 {
        eprintln!("usage: eigen_pairs DEGREE CELLS LEVELS TOLERANCE DIRECTORY");
        return;
    }
    let number = |i: usize| -> usize { args[i].parse().expect("a number") };
    let pencil = if number(0) == 0 {
        pencils::five_point(number(1), number(1) + 1)
    } else {
        pencils::square(number(0), number(1))
    };
    if args[4] != "-" {
        let dir = &args[4];
        for (name, a) in [("k", &pencil.stiffness), ("m", &pencil.mass)] {
            let ints = |v: &[usize]| {
                v.iter()
                    .map(|&x| (x as i64).to_le_bytes())
                    .collect::<Vec<_>>()
            };
            let (indptr, indices) = (ints(&a.indptr().to_proper()), ints(a.indices()));
            npy(
                &format!("{dir}/{name}_indptr.npy"),
                "<i8",
                indptr.len(),
                indptr.into_iter(),
            );
            npy(
                &format!("{dir}/{name}_indices.npy"),
                "<i8",
                indices.len(),
                indices.into_iter(),
            );
            let data = a.data().iter().map(|x| x.to_le_bytes());
            npy(&format!("{dir}/{name}_data.npy"), "<f8", a.nnz(), data);
        }
    }
    println!(
        "{{\"n\": {}, \"nnz\": {}}}",
        pencil.stiffness.rows(),
        pencil.stiffness.nnz()
    );
    let mut settings = Settings::new(Window::Lowest(number(2)));
    settings.tolerance = args[3].parse().expect("a tolerance");
    let mut before: Option<(Vec<Vec<f64>>, f64)> = None;
    let mut plan = Plan::new();
    for line in std::io::stdin().lock().lines() {
        let line = line.unwrap_or_default();
        let mut settings = settings;
        if line.contains("fresh") {
            plan = Plan::new();
        }
        if line.contains("guess") {
            settings.guess = before.as_ref().map(|b| b.1);
        }
        if line.contains("warm") {
            settings.start = before.as_ref().map(|b| b.0.as_slice());
        }
        let clock = std::time::Instant::now();
        match solve_with(&mut plan, &pencil.problem(), &settings, &Watch::quiet()) {
            Ok(found) => {
                let ms = clock.elapsed().as_secs_f64() * 1e3;
                let worst = found.residuals.iter().copied().fold(0.0, f64::max);
                let e = found.effort;
                println!(
                    "{{\"ms\": {ms:.3}, \"plan_ms\": {:.3}, \"factor_ms\": {:.3}, \"solve_ms\": {:.3}, \
                     \"solves\": {}, \"factorisations\": {}, \"length\": {}, \"complete\": {}, \
                     \"residual\": {worst:.1e}, \"last\": {:.15e}, \"memory\": {}}}",
                    e.plan_ms,
                    e.factor_ms,
                    e.solve_ms,
                    e.solves,
                    e.factorisations,
                    e.factor_length,
                    found.count.complete,
                    found.values.last().copied().unwrap_or(0.0),
                    e.memory
                );
                before = Some((found.vectors, found.values.last().copied().unwrap_or(0.0)));
            }
            Err(error) => println!("{{\"error\": \"{error}\"}}"),
        }
        std::io::stdout().flush().expect("the pipe is open");
    }
}
