//! `find` and `layers` as a person at a terminal reads them.

use scalewright::{Session, report};

use crate::harness::read;

/// The lines from the first answer on, without blank ones.
fn lines_of(script: &str) -> Vec<String> {
    let outcome = Session::new().run("case.scl", script, None);
    let text = report::text::report(&outcome, false);
    let lines = text.lines().skip_while(|line| !line.starts_with("── "));
    let lines = lines.filter(|line| !line.trim().is_empty());
    lines.map(str::to_owned).collect()
}

#[test]
fn a_balance_with_what_it_is_called() {
    let found = lines_of(&read("inputs/stratified_open.scl"));
    let expected = [
        "1 consistent balance; the requests that follow use it",
        "geostrophic, hydrostatic",
        "  W   = U^2*f/(H*N^2) = 8e-5 m/s",
        "  dP  = U*L*f*rho_0 = 514 Pa",
        "  dB  = U*L*f/H = 0.001 m/s²",
        "  balance    x_momentum  coriolis ~ pressure_gradient",
        "             y_momentum  coriolis ~ pressure_gradient",
        "             z_momentum  pressure_gradient ~ buoyancy",
        "             continuity  ∂u/∂x ~ ∂v/∂y",
        "             buoyancy    tendency + advection ~ stratification",
        "  neglects   8 %, ∂w/∂z in continuity",
    ];
    assert_eq!(found[1..=expected.len()], expected);
}

#[test]
fn layers_of_one_thickness_stand_together() {
    let found = lines_of(
        "scale U = 0.1 m/s  scale L = 50 km  scale H = 400 m
        constant f = 1e-4 1/s  constant rho = 1027 kg/m^3  constant nu = 1e-2 m^2/s within 4
        scale dP = rho*f*U*L
        coordinate x, y ~ L  coordinate z ~ H
        field u, v(x, y, z) ~ U  field p(x, y) ~ dP
        equation x_momentum: -f*v as coriolis = -d_x(p)/rho as pressure + nu*d_z^2(u) as friction
        equation y_momentum: f*u as coriolis = -d_y(p)/rho as pressure + nu*d_z^2(v) as friction
        layers",
    );
    let expected = [
        "1  thin layer along z",
        "  thickness  sqrt(nu/f) = 5 .. 10 .. 20 m, 0.0125 .. 0.025 .. 0.05 of H",
        "  in         x_momentum",
        "    inside   coriolis ~ pressure ~ friction",
        "    outside  coriolis ~ pressure",
        "  in         y_momentum",
        "    inside   coriolis ~ pressure ~ friction",
        "    outside  coriolis ~ pressure",
    ];
    assert_eq!(found[1..=expected.len()], expected);
}

#[test]
fn ends_of_a_family_and_parts_of_ranges() {
    let found = lines_of(
        "scale V = 40 m/s within 3  scale R = 100 km within 10  scale dP in hPa
        constant f = 1e-4 1/s  constant rho = 1.1 kg/m^3
        group Ro = V/(f*R)
        scale W in cm/s  scale H = 10 km
        coordinate r, y ~ R  coordinate z ~ H
        field v(r, y) ~ V  field w(z) ~ W  field p(r) ~ dP
        equation radial: -v^2/r as centrifugal - f*v as coriolis = -d_r(p)/rho as pressure
        equation continuity: d_r(v) + d_y(v) + d_z(w) = 0
        find dP
        find W",
    );
    let holds = |line: &str| found.iter().any(|found| found == line);
    assert!(holds("2 consistent balances"));
    assert!(holds(
        "  stands     where 1/Ro <= 1 (now 0.00833 .. 0.25 .. 7.5)"
    ));
    assert!(holds("  stands     where Ro <= 1 (now 0.133 .. 4 .. 120)"));
    assert!(holds("  W  free below"));
    assert!(holds(
        "       <= V*H/R = 13.3 .. 400 .. 12000 cm/s, where d_z(w) joins in continuity"
    ));
}
