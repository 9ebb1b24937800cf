//! What dimensions are called: velocity, pressure, kinematic viscosity, ...
//!
//! The quantities, with dimension and name, are those of the crate `uom`, read at run
//! time; where several share a dimension, the first in the list gives the name that a
//! meteorologist or oceanographer expects. A few dimensions of the trade are our own.

use std::collections::BTreeMap;
use std::sync::LazyLock;

use super::dimension::Dimension;
use super::uom_units::dimension_of;

static NAMES: LazyLock<BTreeMap<Dimension, &'static str>> = LazyLock::new(|| {
    let mut names = BTreeMap::from([(Dimension::one(), "number")]);
    for (dimension, name) in own_quantities().into_iter().chain(uom_quantities()) {
        names.entry(dimension).or_insert(name);
    }
    names
});

impl Dimension {
    /// The usual name of a quantity of this dimension; `number` for none.
    pub fn name(&self) -> Option<&'static str> {
        NAMES.get(self).copied()
    }

    /// The dimension in words: `a velocity (m s⁻¹)`, `a number`, `kg m⁻³ s⁻³`.
    pub fn in_words(&self) -> String {
        let units = self.base_units();
        match self.name() {
            Some(name) if self.is_one() => format!("a {name}"),
            Some(name) => {
                let article = if name.starts_with(['a', 'e', 'i', 'o', 'u']) {
                    "an"
                } else {
                    "a"
                };
                format!("{article} {name} ({units})")
            }
            None => units,
        }
    }
}

/// Names of the trade for dimensions that `uom` lacks, or calls otherwise; by exponents
/// over kg, m, s, A, K, mol, cd.
#[rustfmt::skip]
fn own_quantities() -> Vec<(Dimension, &'static str)> {
    let rows = [
        ([0,  0,  0, 0, 1, 0, 0], "temperature"),
        ([0,  2, -2, 0, 0, 0, 0], "specific energy"),
        ([0,  3, -1, 0, 0, 0, 0], "volume flow rate"),
        ([1,  0, -1, 0, 0, 0, 0], "mass flow rate"),
        ([1, -2, -2, 0, 0, 0, 0], "pressure gradient"),
        ([1, -4,  0, 0, 0, 0, 0], "density gradient"),
        ([1, -3, -1, 0, 0, 0, 0], "mass density rate"),
        ([0, -1, -1, 0, 0, 0, 0], "vorticity gradient"),
        ([0,  0, -1, 0, 1, 0, 0], "temperature rate"),
        ([0,  1, -1, 0, 1, 0, 0], "temperature flux"),
        ([0,  1, -2, 0,-1, 0, 0], "buoyancy per temperature"),
        ([0, -1,  0, 1, 0, 0, 0], "magnetic field strength"),
    ];
    rows.map(|(exponents, name)| {
        let dimension = Dimension::from_whole(exponents);
        (dimension.expect("these exponents are small"), name)
    })
    .to_vec()
}

macro_rules! quantities {
    ($($quantity:ident)+) => {
        vec![$((
            dimension_of::<uom::si::$quantity::Dimension>(),
            uom::si::$quantity::description(),
        )),+]
    };
}

/// The quantities of `uom`, those that give a shared dimension its name first.
#[rustfmt::skip]
fn uom_quantities() -> Vec<(Dimension, &'static str)> {
    quantities! {
        // What the atmosphere and the ocean are described with.
        length area volume time frequency velocity acceleration jerk
        mass mass_density linear_mass_density areal_mass_density mass_flux specific_volume
        momentum force pressure energy power specific_power volumetric_power_density
        heat_flux_density kinematic_viscosity dynamic_viscosity surface_tension
        temperature_gradient temperature_coefficient specific_heat_capacity heat_capacity
        thermal_conductivity heat_transfer volumetric_heat_capacity areal_heat_capacity
        reciprocal_length inverse_velocity action moment_of_inertia frequency_drift
        compressibility_coefficient amount_of_substance molar_concentration molar_mass
        molar_volume molar_energy molar_heat_capacity molar_flux molality
        // What else there is.
        absement angular_jerk areal_number_density areal_number_rate
        volumetric_number_density volumetric_number_rate
        areal_density_of_states linear_density_of_states volumetric_density_of_states
        catalytic_activity catalytic_activity_concentration specific_area
        specific_radioactivity molar_radioactivity linear_power_density power_rate
        mass_per_energy thermal_conductance thermal_resistance
        electric_current electric_charge electric_potential electric_field electric_flux
        electric_current_density electric_charge_areal_density
        electric_charge_linear_density electric_charge_volumetric_density
        electric_dipole_moment electric_quadrupole_moment electric_permittivity
        electrical_resistance electrical_resistivity electrical_conductance
        electrical_conductivity electrical_mobility capacitance inductance
        magnetic_flux magnetic_flux_density magnetic_moment magnetic_permeability
        luminous_intensity luminance
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::parse_unit;

    fn dimension(unit: &str) -> Dimension {
        parse_unit(unit).unwrap().dimension
    }

    #[test]
    fn dimensions_have_the_names_of_the_trade() {
        for (unit, name) in [
            ("m/s", "velocity"),
            ("m/s^2", "acceleration"),
            ("m", "length"),
            ("s", "time"),
            ("kg", "mass"),
            ("1/s", "frequency"),
            ("Pa", "pressure"),
            ("kg/m^3", "mass density"),
            ("m^2/s", "kinematic viscosity"),
            ("Pa.s", "dynamic viscosity"),
            ("N", "force"),
            ("J", "energy"),
            ("W", "power"),
            ("K", "temperature"),
            ("m^2", "area"),
            ("m^3", "volume"),
            ("Sv", "volume flow rate"),
            ("W/m^2", "heat flux density"),
            ("J/(kg.K)", "specific heat capacity"),
            ("N/m", "surface tension"),
            ("J/kg", "specific energy"),
            ("Pa/m", "pressure gradient"),
            ("V", "electric potential"),
            ("A/m", "magnetic field strength"),
            ("cd/m^2", "luminance"),
        ] {
            assert_eq!(dimension(unit).name(), Some(name), "{unit}");
        }
    }

    #[test]
    fn a_dimension_without_a_name_is_shown_by_its_units() {
        let odd = dimension("kg^3/s^7");
        assert_eq!(odd.name(), None);
        assert_eq!(odd.in_words(), "kg³ s⁻⁷");
        assert_eq!(dimension("m/s^2").in_words(), "an acceleration (m s⁻²)");
        assert_eq!(dimension("hPa").in_words(), "a pressure (kg m⁻¹ s⁻²)");
        assert_eq!(dimension("%").in_words(), "a number");
    }

    #[test]
    fn no_name_stands_for_two_dimensions() {
        let mut names: Vec<&str> = NAMES.values().copied().collect();
        let count = names.len();
        names.sort_unstable();
        names.dedup();
        assert_eq!(names.len(), count);
        assert!(count > 80, "{count}");
    }
}
