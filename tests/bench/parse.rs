//! How fast scripts are read and printed: a megabyte of each kind.

use std::hint::black_box;

use criterion::{Criterion, Throughput, criterion_group, criterion_main};
use scalewright::limits::SCRIPT_BYTES;
use scalewright::source::FileId;
use scalewright::syntax::parser::parse;
use scalewright::syntax::print::print;
use scalewright::syntax::token;

const VALID: &str = "\
# a low off the coast
scale U = 10 m/s within 2 \"wind\" from \"mast V3, Dec-Feb\"
scale L = 700 km .. 1500 km
scale T = L/U
constant f = 1e-4 1/s
coordinate x, y ~ L
field u, v(x, y, z, t) ~ U
equation x_momentum: D_t(u) - f*v as coriolis = -d_x(p)/rho as pressure_gradient + nu*d_z^2(u) as friction
balance geostrophic: x_momentum { coriolis, pressure_gradient }
phenomenon low { scale H = 10 km  constant phi = 45 deg }
claim x_momentum.coriolis ~ x_momentum.pressure_gradient for low
";

const INVALID: &str = "\
scal U = 10 m/s
scale L 700 km
equation x_momentum: D_t(u) - f v as coriolis = -d_x(p)/
show U $ L
scale H = 10 km
";

/// A text over and over, as far as a script may be long.
fn megabyte(text: &str) -> String {
    text.repeat(SCRIPT_BYTES / text.len())
}

fn bench(criterion: &mut Criterion) {
    let (valid, invalid) = (megabyte(VALID), megabyte(INVALID));
    let file = FileId::default();
    let mut group = criterion.benchmark_group("a megabyte");
    group.throughput(Throughput::Bytes(valid.len() as u64));
    group.sample_size(20);
    group.bench_function("tokens", |bencher| {
        bencher.iter(|| token::read(black_box(&valid), file));
    });
    group.bench_function("parse", |bencher| {
        bencher.iter(|| parse(black_box(&valid), file));
    });
    group.bench_function("parse with mistakes", |bencher| {
        bencher.iter(|| parse(black_box(&invalid), file));
    });
    let (script, errors) = parse(&valid, file);
    assert!(errors.is_empty());
    group.bench_function("print", |bencher| {
        bencher.iter(|| print(black_box(&script), &valid));
    });
    group.finish();
}

criterion_group!(benches, bench);
criterion_main!(benches);
