//! How long all dominant balances of a system take: 4, 6 and 8 equations in four
//! unknowns, with small constants and with the logarithms of rounded numbers.

mod draw;

use std::hint::black_box;
use std::ops::ControlFlow;

use criterion::{Criterion, criterion_group, criterion_main};
use num_rational::BigRational;
use num_traits::FromPrimitive;
use scalewright::number::Exponent;
use scalewright::polyhedra::prevariety::{Equation, System, Term, balances};

use draw::Draw;

const N_UNKNOWNS: usize = 4;

/// Equations of `n_terms` terms with two unknowns each. Terms 0 and 1 are equal and the
/// largest at the origin, so that there is a balance; `steps` is the grid of the
/// constants.
fn system(n_equations: usize, n_terms: usize, steps: f64) -> System {
    let mut draw = Draw(7);
    let mut term = |index: usize| {
        let mut exponents = vec![Exponent::ZERO; N_UNKNOWNS];
        for _ in 0..2 {
            let unknown = draw.below(N_UNKNOWNS as u64) as usize;
            exponents[unknown] =
                Exponent::whole(draw.below(7) as i64 - 3).unwrap_or(Exponent::ZERO);
        }
        let drop = if index < 2 {
            0.0
        } else {
            (2.0 + draw.below(1_000_000) as f64).ln()
        };
        let steps_down = BigRational::from_f64((drop * steps).round()).unwrap_or_default();
        Term {
            process: index,
            exponents,
            constant: -steps_down / BigRational::from_f64(steps).unwrap_or_default(),
        }
    };
    let equations = (0..n_equations).map(|_| Equation {
        terms: (0..n_terms).map(&mut term).collect(),
        required: Vec::new(),
    });
    System {
        n_unknowns: N_UNKNOWNS,
        equations: equations.collect(),
        within: Vec::new(),
    }
}

fn prevariety(c: &mut Criterion) {
    for (constants, steps) in [("small", 1.0), ("rounded", (1_u64 << 44) as f64)] {
        for (n_equations, n_terms) in [(4, 7), (6, 7), (8, 7)] {
            let system = system(n_equations, n_terms, steps);
            let found = balances(&system, &mut |_| ControlFlow::Continue(()));
            let n_found = found.candidates.len();
            let name =
                format!("{n_equations} equations, {constants} constants, {n_found} balances");
            c.bench_function(&name, |b| {
                b.iter(|| black_box(balances(&system, &mut |_| ControlFlow::Continue(()))));
            });
        }
    }
}

criterion_group!(benches, prevariety);
criterion_main!(benches);
