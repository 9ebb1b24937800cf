//! How long a scientist waits for `find`: a rotating, stratified flow in six equations,
//! four of its scales open, from the text of the script to the answers. Once with all
//! known scales exact, once with five of them known to within a factor of 2.

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use scalewright::Session;

const SCRIPT: &str = "
scale U  = 0.1 m/s@   scale L = 50 km@   scale H = 500 m@   scale T = L/U
scale W  in m/s   scale dP in Pa   scale dB in m/s^2   scale dC in K
constant f = 1e-4 1/s@   constant N = 5e-3 1/s@
constant rho_0 = 1027 kg/m^3   constant alpha = 2e-4 1/K   constant g = 9.81 m/s^2
coordinate x, y ~ L   coordinate z ~ H   coordinate t ~ T
field u, v(x, y, z, t) ~ U   field w(x, y, z, t) ~ W
field p(x, y, z, t) ~ dP   field b(x, y, z, t) ~ dB   field c(x, y, z, t) ~ dC
velocity (u, v, w) along (x, y, z)
equation x_momentum: D_t(u) - f*v as coriolis = -d_x(p)/rho_0 as pressure_gradient
equation y_momentum: D_t(v) + f*u as coriolis = -d_y(p)/rho_0 as pressure_gradient
equation z_momentum: D_t(w) = -d_z(p)/rho_0 as pressure_gradient + b as buoyancy
equation continuity: d_x(u) + d_y(v) + d_z(w) = 0
equation stratification: D_t(b) + N^2*w as stratification = 0
equation state: b as buoyancy = g*alpha*c as expansion
balance geostrophic: x_momentum { coriolis, pressure_gradient } y_momentum { coriolis, pressure_gradient }
balance hydrostatic: z_momentum { pressure_gradient, buoyancy }
find W, dP, dB, dC
";

fn find(c: &mut Criterion) {
    for (name, range) in [("exact", ""), ("five ranges", " within 2")] {
        let script = SCRIPT.replace('@', range);
        c.bench_function(&format!("six equations, four unknowns, {name}"), |b| {
            b.iter(|| black_box(Session::new().run("case.scl", &script, None)));
        });
    }
}

criterion_group!(benches, find);
criterion_main!(benches);
