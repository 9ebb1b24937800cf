"""Sea water at a few states by TEOS-10, with the 75-term expression of Roquet et al. 2015.

A state is an Absolute Salinity (g/kg), a Conservative Temperature (degC) and a sea pressure
(dbar, the absolute one less 10.1325 dbar). The values are those of the module `seawater`:
density (kg/m^3), thermal expansion with Conservative Temperature (1/K), haline contraction
(kg/g), speed of sound (m/s) and in-situ temperature (degC).
"""

import gsw

from stored import write_or_check

STATES = [
    ("surface_0", "standard ocean, 0 degC, surface", 35.16504, 0.0, 0.0),
    ("surface_10", "standard ocean, 10 degC, surface", 35.16504, 10.0, 0.0),
    ("surface_20", "standard ocean, 20 degC, surface", 35.16504, 20.0, 0.0),
    ("surface_25", "warm surface water", 35.0, 25.0, 0.0),
    ("polar", "polar surface water", 34.0, -1.5, 0.0),
    ("brackish", "brackish water, 10 degC, surface", 7.0, 10.0, 0.0),
    ("fresh", "fresh water, 4 degC, surface", 0.0, 4.0, 0.0),
    ("thermocline", "thermocline water", 35.0, 10.0, 100.0),
    ("mode", "subtropical mode water", 36.5, 18.0, 300.0),
    ("intermediate", "intermediate water", 35.0, 5.0, 800.0),
    ("mediterranean", "Mediterranean deep water", 38.5, 13.5, 1000.0),
    ("deep", "deep water", 35.0, 2.0, 2000.0),
    ("bottom", "bottom water", 34.7, 1.0, 3000.0),
    ("cold_1000", "standard ocean, 0 degC, 1000 dbar", 35.16504, 0.0, 1000.0),
    ("cold_4000", "standard ocean, 0 degC, 4000 dbar", 35.16504, 0.0, 4000.0),
]


def case(name, title, salinity, temperature, pressure):
    state = (salinity, temperature, pressure)
    return {
        "case": name,
        "title": title,
        "S": salinity,
        "CT": temperature,
        "p": pressure,
        "rho": float(gsw.rho(*state)),
        "alpha": float(gsw.alpha(*state)),
        "beta": float(gsw.beta(*state)),
        "sound": float(gsw.sound_speed(*state)),
        "T": float(gsw.t_from_CT(*state)),
    }


if __name__ == "__main__":
    write_or_check("../published/seawater.json", [case(*state) for state in STATES])
