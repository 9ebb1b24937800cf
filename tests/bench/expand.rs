//! How long a scientist waits for `expand`: the five equations of a rotating, stratified
//! sea, from the text of the script to the orders and the solvability condition.

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use scalewright::{Session, model::library};

fn expand(c: &mut Criterion) {
    let demo = library::find("demo.qg_shelf").expect("it is in the library");
    let (given, _) = demo
        .text
        .split_once("\nlimit ")
        .expect("its requests begin with the limit");
    for order in [1, 3, 8] {
        let script = format!(
            "{given}\nlimit Ro -> 0 with Bu ~ 1, others ~ 1\n\
             expand x_momentum, y_momentum, z_momentum, volume, buoyancy to order {order}\n"
        );
        let outcome = Session::new().run("case.scl", &script, None);
        assert_eq!(outcome.answers.len(), 2, "it ranks and expands");
        c.bench_function(&format!("five equations to order {order}"), |b| {
            b.iter(|| black_box(Session::new().run("case.scl", &script, None)));
        });
    }
}

criterion_group!(benches, expand);
criterion_main!(benches);
