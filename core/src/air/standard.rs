//! The U.S. Standard Atmosphere 1976: the Earth's air at middle latitudes, as a year's mean at moderate solar activity.
//!
//! Up to 86 km it is layers in which temperature changes evenly with geopotential height, in hydrostatic balance, and is computed
//! as the standard defines it. Above, where gases part, the standard's own table of densities is used, exponential between its rows.
//!
//! # Source
//! NOAA, NASA & USAF, U.S. Standard Atmosphere, 1976 (NOAA-S/T 76-1562): constants of table 2, layers of table 4, equations 18, 23, 33a,
//! 33b and 42; densities of table I.

use super::Table;
use crate::math::float::{exp, pow};

/// Radius that turns heights into geopotential ones, m.
const RADIUS_M: f64 = 6_356_766.0;
/// Gravity at the surface, m/s².
const GRAVITY_M_S2: f64 = 9.806_65;
/// Mean molecular weight of air at the surface, kg/kmol.
const WEIGHT_KG_KMOL: f64 = 28.9644;
/// Gas constant of the standard, J/(kmol K).
const GAS_J_KMOL_K: f64 = 8314.32;
/// Pressure at the surface, Pa.
const SURFACE_PA: f64 = 101_325.0;

/// Where the table takes over, m.
const TABLE_FROM_M: f64 = 86_000.0;

/// Geopotential height at which each layer starts, m; temperature there, K; its change upwards, K/m.
const LAYERS: [(f64, f64, f64); 7] = [
    (0.0, 288.15, -0.0065),
    (11_000.0, 216.65, 0.0),
    (20_000.0, 216.65, 0.001),
    (32_000.0, 228.65, 0.0028),
    (47_000.0, 270.65, 0.0),
    (51_000.0, 270.65, -0.0028),
    (71_000.0, 214.65, -0.002),
];

/// Heights, km, and densities, kg/m³.
const ABOVE: [(f64, f64); 41] = [
    (86.0, 6.958e-6),
    (90.0, 3.416e-6),
    (95.0, 1.393e-6),
    (100.0, 5.604e-7),
    (105.0, 2.325e-7),
    (110.0, 9.708e-8),
    (115.0, 4.289e-8),
    (120.0, 2.222e-8),
    (125.0, 1.291e-8),
    (130.0, 8.152e-9),
    (140.0, 3.831e-9),
    (150.0, 2.076e-9),
    (160.0, 1.233e-9),
    (170.0, 7.815e-10),
    (180.0, 5.194e-10),
    (190.0, 3.581e-10),
    (200.0, 2.541e-10),
    (210.0, 1.846e-10),
    (220.0, 1.367e-10),
    (230.0, 1.029e-10),
    (240.0, 7.858e-11),
    (250.0, 6.073e-11),
    (260.0, 4.742e-11),
    (270.0, 3.738e-11),
    (280.0, 2.971e-11),
    (290.0, 2.378e-11),
    (300.0, 1.916e-11),
    (350.0, 7.014e-12),
    (400.0, 2.803e-12),
    (450.0, 1.184e-12),
    (500.0, 5.215e-13),
    (550.0, 2.384e-13),
    (600.0, 1.137e-13),
    (650.0, 5.712e-14),
    (700.0, 3.070e-14),
    (750.0, 1.788e-14),
    (800.0, 1.136e-14),
    (850.0, 7.824e-15),
    (900.0, 5.759e-15),
    (950.0, 4.453e-15),
    (1000.0, 3.561e-15),
];

/// The standard, with what its formulas need again and again.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Standard {
    /// Pressure at which each layer starts, Pa.
    pressures_pa: [f64; 7],
    above: Table,
}

impl Standard {
    pub(super) fn new() -> Self {
        let mut pressures_pa = [SURFACE_PA; 7];
        for layer in 1..LAYERS.len() {
            let below = layer - 1;
            pressures_pa[layer] = pressure_pa(pressures_pa[below], LAYERS[below], LAYERS[layer].0).0;
        }
        let above = Table {
            heights_m: ABOVE.iter().map(|(height_km, _)| 1e3 * height_km).collect(),
            logs: ABOVE.iter().map(|(_, density)| crate::math::float::ln(*density)).collect(),
        };
        Self { pressures_pa, above }
    }

    /// At a height of 0 or more.
    pub(super) fn density_kg_m3(&self, height_m: f64) -> f64 {
        if height_m >= TABLE_FROM_M {
            return self.above.density_kg_m3(height_m);
        }
        let geopotential_m = RADIUS_M * height_m / (RADIUS_M + height_m);
        let layer = LAYERS.partition_point(|(from_m, ..)| *from_m <= geopotential_m).max(1) - 1;
        let (pressure_pa, kelvin) = pressure_pa(self.pressures_pa[layer], LAYERS[layer], geopotential_m);
        pressure_pa * WEIGHT_KG_KMOL / (GAS_J_KMOL_K * kelvin)
    }

    pub(super) fn top_m(&self) -> f64 {
        self.above.top_m()
    }

    /// Height in which density changes by e: 6 to 8 km in all layers.
    pub(super) fn scale_m(&self, height_m: f64) -> f64 {
        const LAYERS_M: f64 = 6000.0;
        if height_m < TABLE_FROM_M { LAYERS_M } else { self.above.scale_m(height_m) }
    }
}

/// Pressure, Pa, and molecular-scale temperature, K, at a geopotential height in a layer that starts with this pressure.
fn pressure_pa(from_pa: f64, (from_m, kelvin, rise_k_m): (f64, f64, f64), geopotential_m: f64) -> (f64, f64) {
    const PER_KELVIN: f64 = GRAVITY_M_S2 * WEIGHT_KG_KMOL / GAS_J_KMOL_K;
    let up_m = geopotential_m - from_m;
    if rise_k_m == 0.0 {
        return (from_pa * exp(-PER_KELVIN * up_m / kelvin), kelvin);
    }
    let now = kelvin + rise_k_m * up_m;
    (from_pa * pow(kelvin / now, PER_KELVIN / rise_k_m), now)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// # Source
    /// U.S. Standard Atmosphere, 1976, table I, by geometric height; five digits are printed, four from 86 km on.
    #[test]
    fn densities_are_those_of_the_published_table() {
        let standard = Standard::new();
        for (height_km, density, part) in [
            (0.0, 1.2250, 5e-5),
            (5.0, 7.3643e-1, 5e-5),
            (10.0, 4.1351e-1, 5e-5),
            (20.0, 8.8910e-2, 5e-5),
            (25.0, 4.0084e-2, 5e-5),
            (30.0, 1.8410e-2, 5e-5),
            (42.0, 2.9948e-3, 5e-5),
            (46.0, 1.7142e-3, 5e-5),
            (50.0, 1.0269e-3, 5e-5),
            (60.0, 3.0968e-4, 5e-5),
            (70.0, 8.2829e-5, 5e-5),
            (80.0, 1.8458e-5, 5e-5),
            (85.999_999, 6.958e-6, 1e-4),
            (100.0, 5.604e-7, 1e-12),
            (200.0, 2.541e-10, 1e-12),
            (400.0, 2.803e-12, 1e-12),
            (1000.0, 3.561e-15, 1e-12),
        ] {
            let got = standard.density_kg_m3(1e3 * height_km);
            assert!((got / density - 1.0).abs() < part, "{height_km} km: got {got:e}, want {density:e}");
        }
    }

    #[test]
    fn density_falls_all_the_way_up_and_without_steps() {
        let standard = Standard::new();
        let mut below = standard.density_kg_m3(0.0);
        for metres in (10..1_000_000).step_by(10) {
            let here = standard.density_kg_m3(f64::from(metres));
            // Ten metres are at most a 500th of a scale height.
            assert!(here < below && here > 0.997 * below, "{metres} m: {here:e} after {below:e}");
            below = here;
        }
    }
}
