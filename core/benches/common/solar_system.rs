//! The solar system at J2000 (JD 2451545.0 TDB), for benches, examples and tests of the integrator.
//!
//! Source: JPL DE440 (R. S. Park, W. M. Folkner, J. G. Williams & D. H. Boggs, AJ 161 (2021), 105), kernel de440.bsp; courtesy of JPL/NAIF.
//! GM in km³/s², positions in km, velocities in km/s, along the axes of the ICRF, from the solar system's barycentre. The
//! planets from Mars on are the barycentres of their systems.

use fallaround_core::Vector3;
use fallaround_core::initial::{InitialBody, InitialState};
use fallaround_core::math::frame::ecliptic_from_equatorial;
use fallaround_core::scenario::Surface;

/// Name, GM, position and velocity of each.
type Row = (&'static str, f64, [f64; 3], [f64; 3]);

const ROWS: [Row; 11] = [
    (
        "Sun",
        132712440041.279419,
        [-1067706.8053809535, -396036.18479594623, -138065.18428688092],
        [0.009312571926520472, -0.01170150612817771, -0.005251266205200356],
    ),
    (
        "Mercury",
        22031.868551,
        [-20529433.161234677, -60324003.95827633, -30130837.864118297],
        [37.00430442920571, -8.541376789510446, -8.398372409672424],
    ),
    (
        "Venus",
        324858.592000,
        [-108524200.85757153, -7318564.9596786, 3548121.861333776],
        [1.3912186011899672, -32.02951993781091, -14.497086739473202],
    ),
    (
        "Earth",
        398600.435507,
        [-27566740.482806046, 132361381.15354352, 57418653.286251314],
        [-29.78494749849545, -5.029753814914289, -2.1806450690318697],
    ),
    (
        "Moon",
        4902.800118,
        [-27858348.86743948, 132094664.32014929, 57342550.79915141],
        [-29.141416110776415, -5.69584149900592, -2.481970774014143],
    ),
    (
        "Mars",
        42828.375816,
        [206980433.8364514, -186417.01143717952, -5667227.497526179],
        [1.1719850085317771, 23.90670819417074, 10.933920633307647],
    ),
    (
        "Jupiter",
        126712764.100000,
        [597499876.792548, 408990313.93175864, 160756281.9387201],
        [-7.900525116640771, 10.171796309237909, 4.552467787262923],
    ),
    (
        "Saturn",
        37940584.841800,
        [957317417.4143425, 923319621.8969914, 340162800.3886153],
        [-7.422709426014511, 6.097474815228996, 2.8376822882555754],
    ),
    (
        "Uranus",
        5794556.400000,
        [2157907312.9538445, -1871306838.9395585, -850106800.0312823],
        [4.646336807878125, 4.251152675974153, 1.7961727858111198],
    ),
    (
        "Neptune",
        6836527.100580,
        [2513978721.723721, -3438170140.3168564, -1469851523.0109591],
        [4.4752146217513085, 2.877104855637858, 1.0662005481458412],
    ),
    (
        "Pluto",
        975.500000,
        [-1478399372.8144453, -4185975131.4077697, -860878050.544811],
        [5.253463931238531, -1.9640805980784504, -2.195768154117838],
    ),
];

/// The bodies with these names ("Sun", "Mercury", … "Pluto", "Moon"), or all of them when there are none, along the ecliptic axes, about
/// their common centre of mass, with Newton's forces alone.
pub(crate) fn solar_system(names: &[&str]) -> InitialState {
    let mut bodies = Vec::new();
    for (name, gm, pos, vel) in ROWS {
        if names.is_empty() || names.contains(&name) {
            bodies.push(InitialBody {
                name: name.to_owned(),
                gm_m3_s2: gm * 1e9,
                radius_m: 0.0,
                surface: Surface::Stop,
                primary: None,
                pos: ecliptic_from_equatorial(Vector3::from(pos) * 1e3),
                vel: ecliptic_from_equatorial(Vector3::from(vel) * 1e3),
            });
        }
    }
    let total: f64 = bodies.iter().map(|body| body.gm_m3_s2).sum();
    let pos = bodies.iter().map(|body| body.pos * body.gm_m3_s2).sum::<Vector3<f64>>() / total;
    let vel = bodies.iter().map(|body| body.vel * body.gm_m3_s2).sum::<Vector3<f64>>() / total;
    for body in &mut bodies {
        body.pos -= pos;
        body.vel -= vel;
    }
    InitialState::of(bodies)
}

/// The Sun and the eight planets, without the Moon.
pub(crate) const PLANETS: [&str; 9] =
    ["Sun", "Mercury", "Venus", "Earth", "Mars", "Jupiter", "Saturn", "Uranus", "Neptune"];
