//! How fast the prompt answers: a key while an expression is typed, an expression, a
//! `rank` of six equations, a changed scale with the request again. A key and an
//! expression are to take less than 5 ms, the `rank` less than 20 ms.

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use scalewright::Session;
use scalewright::prompt::complete::complete;
use scalewright::prompt::dialogue::Dialogue;
use scalewright::prompt::highlight::highlight;
use scalewright::prompt::hint::hint;
use scalewright::prompt::layout::Sheet;

criterion_group!(benches, prompt);
criterion_main!(benches);

/// Momentum and mass of the air: six equations, every scale known to a range.
const PAGE: &str = "\
use atmosphere.momentum
use atmosphere.continuity
scale U = 10 m/s within 2
scale W = 1 cm/s within 3
scale L = 700 km .. 1500 km
scale H = 10 km within 20 %
scale T = L/U
scale dP = 10 hPa within 1.5
scale dRho = 0.01 kg/m^3 within 2
constant phi = 45 deg
";

const EXPRESSION: &str = "U/(f*L)";

fn dialogue() -> Dialogue<'static> {
    let mut dialogue = Dialogue::new(Session::new(), Sheet::plain(80));
    dialogue.enter(PAGE);
    let said = dialogue.enter("rank").text();
    assert_eq!(said.matches("tolerance").count(), 6, "{said}");
    dialogue
}

fn prompt(criterion: &mut Criterion) {
    let mut talk = dialogue();
    criterion.bench_function("prompt_key", |bencher| {
        bencher.iter(|| {
            let (page, text) = (talk.page(), black_box(EXPRESSION));
            let found = complete(page, text, text.len());
            black_box((hint(page, text), highlight(page, text, text.len()), found))
        });
    });
    criterion.bench_function("prompt_expression", |bencher| {
        bencher.iter_with_setup(dialogue, |mut talk| {
            black_box(talk.enter(black_box(EXPRESSION)));
            talk
        });
    });
    criterion.bench_function("prompt_rank_six_equations", |bencher| {
        bencher.iter_with_setup(dialogue, |mut talk| {
            black_box(talk.enter(black_box("rank")));
            talk
        });
    });
    let mut is_wide = false;
    talk.enter("rank");
    criterion.bench_function("prompt_changed_scale_and_again", |bencher| {
        bencher.iter(|| {
            is_wide = !is_wide;
            let change = if is_wide {
                "scale U = 20 m/s"
            } else {
                "scale U = 10 m/s"
            };
            black_box((talk.enter(change), talk.enter("again")))
        });
    });
}
