//! Times a whole script with 30, 100 and 300 equations of ten terms each: read, checked,
//! ranked and reduced. The time should grow about as the script does.

use std::fmt::Write as _;
use std::hint::black_box;

use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};
use scalewright::{Session, Status};

criterion_group!(benches, check_rank_reduce);
criterion_main!(benches);

fn check_rank_reduce(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("check_rank_reduce");
    group.sample_size(10);
    for n_equations in [30, 100, 300] {
        let text = script(n_equations);
        let outcome = Session::new().run("bench.scl", &text, None);
        assert_eq!(
            outcome.status(),
            Status::Ok,
            "{}",
            outcome.drawn(false, |_| true)
        );
        group.throughput(Throughput::Elements(n_equations as u64));
        group.bench_with_input(
            BenchmarkId::from_parameter(n_equations),
            &text,
            |bencher, text| {
                bencher.iter(|| black_box(Session::new().run("bench.scl", black_box(text), None)));
            },
        );
    }
    group.finish();
}

/// Equations that hang together, each with a field, a scale and two constants of its own.
fn script(n_equations: usize) -> String {
    let mut text = String::from(
        "scale L = 100 km .. 500 km   scale H = 1 km within 2   scale T = 1 day within 2\n\
         scale U = 5 m/s within 2   scale W = 1 cm/s within 3\n\
         constant f = 1e-4 1/s   constant rho = 1.2 kg/m^3   constant nu = 5 m^2/s\n\
         scale dP = 5 hPa within 2\n\
         coordinate x, y ~ L   coordinate z ~ H   coordinate t ~ T\n\
         field u, v(x, y, z, t) ~ U   field w(x, y, z, t) ~ W\n\
         velocity (u, v, w) along (x, y, z)\n\
         group Ro = U/(f*L)   group Ek = nu/(f*H^2)   group Re = U*L/nu   group St = L/(U*T)\n\
         group aspect = H/L   group ascent = W*L/(U*H)   group Eu = dP/(rho*U^2)\n",
    );
    for idx in 0..n_equations {
        let size = 1 + idx % 7;
        let _ = writeln!(
            text,
            "scale Q_{idx} = {size} m/s within 2   field q_{idx}(x, y, z, t) ~ Q_{idx}\n\
             field p_{idx}(x, y, z, t) ~ dP\n\
             constant k_{idx} = {size}e-5 1/s   constant a_{idx} = {size}e-6 1/s"
        );
    }
    for idx in 0..n_equations {
        let (next, later) = ((idx + 1) % n_equations, (idx + 2) % n_equations);
        let _ = writeln!(
            text,
            "equation e_{idx}: D_t(q_{idx}) - f*q_{next} as coriolis + k_{idx}*q_{idx} as damping\n\
             = -∂p_{idx}/∂x/rho as pressure_gradient + a_{idx}*q_{later} as coupling\n\
             + nu*∂²q_{idx}/∂z² as friction + nu*∂²q_{idx}/∂x² as lateral_friction"
        );
    }
    text + "rank\nreduce\n"
}
