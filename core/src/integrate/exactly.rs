//! What other methods are tested against: the same way by Gauss-Radau, to rounding.

use super::Radau;
use crate::constants::DAY_S;
use crate::gravity::Field;

/// Positions and velocities `t_s` after these.
pub(super) fn exactly(mut field: Field, pos: &[f64], vel: &[f64], t_s: f64) -> (Vec<f64>, Vec<f64>) {
    let mut radau = Radau::new(0.0, pos, vel, t_s.signum() * DAY_S);
    while radau.t_s().to_bits() != t_s.to_bits() {
        radau.limit_step((t_s - radau.t_s()).abs());
        radau.solve(&mut field).unwrap();
        radau.finish();
    }
    let (mut pos, mut vel) = (pos.to_vec(), vel.to_vec());
    radau.state(&mut pos, &mut vel);
    (pos, vel)
}
