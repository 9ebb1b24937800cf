//! The bundled library: the modules of `stdlib/`, embedded in the program.

/// A bundled module.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Module {
    /// Its name, `atmosphere.momentum`.
    pub name: &'static str,
    /// Its text.
    pub text: &'static str,
}

macro_rules! modules {
    ($($name:literal: $file:literal;)+) => {
        &[$(Module { name: $name, text: include_str!(concat!("../../stdlib/", $file)) }),+]
    };
}

/// All bundled modules, sorted by name.
pub const MODULES: &[Module] = modules! {
    "atmosphere.air": "atmosphere/air.scl";
    "atmosphere.boundary_layer": "atmosphere/boundary_layer.scl";
    "atmosphere.continuity": "atmosphere/continuity.scl";
    "atmosphere.convection": "atmosphere/convection.scl";
    "atmosphere.density": "atmosphere/density.scl";
    "atmosphere.divergence": "atmosphere/divergence.scl";
    "atmosphere.dry_air": "atmosphere/dry_air.scl";
    "atmosphere.gravity_waves": "atmosphere/gravity_waves.scl";
    "atmosphere.moisture": "atmosphere/moisture.scl";
    "atmosphere.momentum": "atmosphere/momentum.scl";
    "atmosphere.mountain": "atmosphere/mountain.scl";
    "atmosphere.primitive_height": "atmosphere/primitive_height.scl";
    "atmosphere.primitive_pressure": "atmosphere/primitive_pressure.scl";
    "atmosphere.sea_breeze": "atmosphere/sea_breeze.scl";
    "atmosphere.sphere": "atmosphere/sphere.scl";
    "atmosphere.state": "atmosphere/state.scl";
    "atmosphere.surface_layer": "atmosphere/surface_layer.scl";
    "atmosphere.temperature": "atmosphere/temperature.scl";
    "atmosphere.thermal_wind": "atmosphere/thermal_wind.scl";
    "atmosphere.thermodynamic": "atmosphere/thermodynamic.scl";
    "atmosphere.tropics": "atmosphere/tropics.scl";
    "atmosphere.turbulence": "atmosphere/turbulence.scl";
    "atmosphere.vortex": "atmosphere/vortex.scl";
    "atmosphere.vorticity": "atmosphere/vorticity.scl";
    "atmosphere.warm_core": "atmosphere/warm_core.scl";
    "base.axes": "base/axes.scl";
    "base.flow_numbers": "base/flow_numbers.scl";
    "base.gravity": "base/gravity.scl";
    "base.latitude": "base/latitude.scl";
    "base.plane": "base/plane.scl";
    "base.planet": "base/planet.scl";
    "base.pressure": "base/pressure.scl";
    "base.rotation_numbers": "base/rotation_numbers.scl";
    "base.stratification_numbers": "base/stratification_numbers.scl";
    "constants": "constants.scl";
    "demo.boundary_current": "demo/boundary_current.scl";
    "demo.boussinesq": "demo/boussinesq.scl";
    "demo.coastal_current": "demo/coastal_current.scl";
    "demo.coastal_front": "demo/coastal_front.scl";
    "demo.dense_cascade": "demo/dense_cascade.scl";
    "demo.ekman": "demo/ekman.scl";
    "demo.harbour_surge": "demo/harbour_surge.scl";
    "demo.oil_drift": "demo/oil_drift.scl";
    "demo.qg_shelf": "demo/qg_shelf.scl";
    "demo.ridge_wind": "demo/ridge_wind.scl";
    "demo.salt_intrusion": "demo/salt_intrusion.scl";
    "demo.sea_breeze": "demo/sea_breeze.scl";
    "demo.sphere": "demo/sphere.scl";
    "demo.squall_vortex": "demo/squall_vortex.scl";
    "demo.tank_eddy": "demo/tank_eddy.scl";
    "demo.tidal_mixing": "demo/tidal_mixing.scl";
    "demo.winter_low": "demo/winter_low.scl";
    "fluid.creeping": "fluid/creeping.scl";
    "fluid.lubrication": "fluid/lubrication.scl";
    "fluid.natural_convection": "fluid/natural_convection.scl";
    "fluid.navier_stokes": "fluid/navier_stokes.scl";
    "fluid.obstacle": "fluid/obstacle.scl";
    "fluid.prandtl_layer": "fluid/prandtl_layer.scl";
    "fluid.rotating_tank": "fluid/rotating_tank.scl";
    "named_groups": "named_groups.scl";
    "ocean.bed": "ocean/bed.scl";
    "ocean.boussinesq": "ocean/boussinesq.scl";
    "ocean.continuity": "ocean/continuity.scl";
    "ocean.ekman": "ocean/ekman.scl";
    "ocean.ekman_bottom": "ocean/ekman_bottom.scl";
    "ocean.equatorial": "ocean/equatorial.scl";
    "ocean.estuary": "ocean/estuary.scl";
    "ocean.front": "ocean/front.scl";
    "ocean.gravity_current": "ocean/gravity_current.scl";
    "ocean.gyre": "ocean/gyre.scl";
    "ocean.heat_salt": "ocean/heat_salt.scl";
    "ocean.internal_waves": "ocean/internal_waves.scl";
    "ocean.mixed_layer": "ocean/mixed_layer.scl";
    "ocean.momentum": "ocean/momentum.scl";
    "ocean.plume": "ocean/plume.scl";
    "ocean.reduced_gravity": "ocean/reduced_gravity.scl";
    "ocean.shallow_water": "ocean/shallow_water.scl";
    "ocean.state": "ocean/state.scl";
    "ocean.surface": "ocean/surface.scl";
    "ocean.tides": "ocean/tides.scl";
    "ocean.tracer": "ocean/tracer.scl";
    "ocean.two_layers": "ocean/two_layers.scl";
    "ocean.water": "ocean/water.scl";
    "ocean.wind": "ocean/wind.scl";
    "seawater": "seawater.scl";
    "settings.boundary_layer": "settings/boundary_layer.scl";
    "settings.cloud_cluster": "settings/cloud_cluster.scl";
    "settings.coastal_current": "settings/coastal_current.scl";
    "settings.dust_devil": "settings/dust_devil.scl";
    "settings.equatorial_wave": "settings/equatorial_wave.scl";
    "settings.estuary": "settings/estuary.scl";
    "settings.internal_wave": "settings/internal_wave.scl";
    "settings.midlatitude_cyclone": "settings/midlatitude_cyclone.scl";
    "settings.mixed_layer": "settings/mixed_layer.scl";
    "settings.mountain_flow": "settings/mountain_flow.scl";
    "settings.ocean_eddy": "settings/ocean_eddy.scl";
    "settings.ocean_front": "settings/ocean_front.scl";
    "settings.ocean_gyre": "settings/ocean_gyre.scl";
    "settings.overflow": "settings/overflow.scl";
    "settings.planetary_wave": "settings/planetary_wave.scl";
    "settings.river_plume": "settings/river_plume.scl";
    "settings.sea_breeze": "settings/sea_breeze.scl";
    "settings.shallow_convection": "settings/shallow_convection.scl";
    "settings.storm_surge": "settings/storm_surge.scl";
    "settings.thunderstorm": "settings/thunderstorm.scl";
    "settings.tide": "settings/tide.scl";
    "settings.tornado": "settings/tornado.scl";
    "settings.tropical_cyclone": "settings/tropical_cyclone.scl";
    "settings.tsunami": "settings/tsunami.scl";
    "settings.wind_driven_layer": "settings/wind_driven_layer.scl";
};

/// The module of this name.
pub fn find(name: &str) -> Option<&'static Module> {
    MODULES.iter().find(|module| module.name == name)
}

/// The first sentence of a module's head comment.
pub fn headline(module: &Module) -> String {
    let head = head(module.text).into_iter().next().unwrap_or_default();
    let end = head.find([':', '.', '?']).unwrap_or(head.len());
    head[..end].to_owned()
}

/// The paragraphs of the comment that a text begins with.
pub fn head(text: &str) -> Vec<String> {
    let lines: Vec<&str> = text
        .lines()
        .map_while(|line| line.strip_prefix('#'))
        .map(str::trim)
        .collect();
    lines
        .split(|line| line.is_empty())
        .filter(|paragraph| !paragraph.is_empty())
        .map(|paragraph| paragraph.join(" "))
        .collect()
}

#[cfg(test)]
mod tests {
    use std::fs;
    use std::path::Path;

    use super::*;

    fn files(folder: &Path, prefix: &str, found: &mut Vec<String>) {
        for entry in fs::read_dir(folder).unwrap() {
            let path = entry.unwrap().path();
            let name = path.file_stem().unwrap().to_str().unwrap().to_owned();
            if path.is_dir() {
                files(&path, &format!("{prefix}{name}."), found);
            } else {
                found.push(format!("{prefix}{name}"));
            }
        }
    }

    #[test]
    fn every_file_of_the_library_is_embedded() {
        let mut found = Vec::new();
        files(
            Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/stdlib")),
            "",
            &mut found,
        );
        found.sort();
        let embedded: Vec<&str> = MODULES.iter().map(|module| module.name).collect();
        assert_eq!(embedded, found);
        assert!(MODULES.iter().all(|module| !headline(module).is_empty()));
    }
}
