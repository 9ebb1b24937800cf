//! How long the shares of all terms over a box take: 20 scales, 30 terms.

mod draw;

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use scalewright::number::Exponent;
use scalewright::polyhedra::{Affine, highest, lowest_of_process};

use draw::Draw;

fn exponent(draw: &mut Draw) -> Exponent {
    let numer = draw.below(7) as i64 - 3;
    match draw.below(8) {
        0 => Exponent::ratio(2 * numer + 1, 2),
        1..3 => Exponent::whole(numer).unwrap_or(Exponent::ZERO),
        _ => Exponent::ZERO,
    }
}

fn float(draw: &mut Draw, low: f64, high: f64) -> f64 {
    low + (high - low) * draw.below(1 << 30) as f64 / (1 << 30) as f64
}

/// Thirty terms of about the same size in the middle of the box, so that most highest
/// shares lie inside it and a linear program must find them.
fn terms(draw: &mut Draw, bounds: &[(f64, f64)]) -> Vec<Affine> {
    let middle: Vec<f64> = bounds
        .iter()
        .map(|(low, high)| (low + high) / 2.0)
        .collect();
    let term = |_| {
        let slopes = bounds.iter().map(|_| exponent(draw)).collect();
        let mut term = Affine {
            slopes,
            constant: 0.0,
        };
        term.constant = float(draw, -9.0, 9.0) - term.at(&middle);
        term
    };
    (0..30).map(term).collect()
}

fn shares(c: &mut Criterion) {
    let mut draw = Draw(1);
    let bound = |_| {
        let low = float(&mut draw, -10.0, 10.0);
        (low, low + float(&mut draw, 0.1, 4.0))
    };
    let bounds: Vec<(f64, f64)> = (0..20).map(bound).collect();
    let terms = terms(&mut draw, &bounds);
    c.bench_function("highest shares of 30 terms over 20 scales", |b| {
        b.iter(|| {
            let all = (0..terms.len()).map(|of| highest(of, &terms, &bounds));
            black_box(all.sum::<f64>())
        });
    });
    let process: Vec<usize> = (0..4).collect();
    c.bench_function(
        "lowest share of a process of 4 terms, 20 scales, 30 terms",
        |b| {
            b.iter(|| black_box(lowest_of_process(&process, &terms, &bounds)));
        },
    );
}

criterion_group!(benches, shares);
criterion_main!(benches);
