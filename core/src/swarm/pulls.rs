//! The bodies' pulls on tracers side by side.
//!
//! A body so far away that its pull is slight beside that of the body which tracers circle is worked out in single precision: as fine a
//! part of a slight pull as double precision is of the whole is not needed, and four numbers fit where two would. Which bodies those are is
//! found for a block at a time (`watch`); in a softened field there are none.

use super::block::{LANES, Row};
use super::field::{Field, Node};
use wide::{f32x4, f64x2};

/// What pulls on the tracers of a block, at one node: places and GMs.
#[derive(Debug, Clone, Default)]
pub(super) struct Pulls {
    /// Room for all in double precision, and how many are in it.
    whole: (Vec<[f64x2; 4]>, usize),
    /// The same in single precision.
    slight: (Vec<[f32x4; 4]>, usize),
}

impl Pulls {
    /// With room for all bodies of a field.
    pub(super) fn of(field: &Field) -> Self {
        let bodies = field.massive;
        Self { whole: (vec![[f64x2::ZERO; 4]; bodies], 0), slight: (vec![[f32x4::ZERO; 4]; bodies], 0) }
    }

    /// Takes the bodies from a node; `slight` says which of them are.
    pub(super) fn take(&mut self, field: &Field, node: &Node, slight: impl Fn(usize) -> bool) {
        let Self { whole, slight: slights } = self;
        (whole.1, slights.1) = (0, 0);
        for (n, (source, at)) in field.sources[..field.massive].iter().zip(&node.at).enumerate() {
            let body = [at[0], at[1], at[2], source.gm];
            if slight(n) {
                slights.0[slights.1] = body.map(|number| f32x4::splat(single(number)));
                slights.1 += 1;
            } else {
                whole.0[whole.1] = body.map(f64x2::splat);
                whole.1 += 1;
            }
        }
    }

    /// Sets the accelerations of the first `width` tracers at their places; what lies beyond is left as it is.
    pub(super) fn set(&self, field: &Field, node: &Node, pos: &[Row; 3], acc: &mut [Row; 3], width: usize) {
        let ([xs, ys, zs], [axs, ays, azs]) = (pos, acc);
        let [xs, ys, zs] = [xs, ys, zs].map(|row| row.as_chunks::<LANES>().0);
        let [axs, ays, azs] = [axs, ays, azs].map(|row| row.as_chunks_mut::<LANES>().0);
        let places = xs.iter().zip(ys).zip(zs);
        let sums = axs.iter_mut().zip(ays).zip(azs);
        let softened2_m2 = field.softened2_m2;
        for (((x, y), z), ((ax, ay), az)) in places.zip(sums).take(width / LANES) {
            let mut sum = node.shift.map(|a| [-a; LANES]);
            if softened2_m2 > 0.0 {
                self.add_whole::<true>([x, y, z], softened2_m2, &mut sum);
            } else {
                self.add_whole::<false>([x, y, z], softened2_m2, &mut sum);
            }
            if self.slight.1 > 0 {
                let slight = self.sum_slight([x, y, z]);
                for (sum, slight) in sum.iter_mut().zip(slight) {
                    for l in 0..LANES {
                        sum[l] += f64::from(slight[l]);
                    }
                }
            }
            if field.bulging() {
                for l in 0..LANES {
                    let a = field.bulge_pull(node, [x[l], y[l], z[l]]);
                    for axis in 0..3 {
                        sum[axis][l] += a[axis];
                    }
                }
            }
            [*ax, *ay, *az] = sum;
        }
    }

    /// With softening or without: points are pulled by what costs nothing more than that.
    #[inline]
    fn add_whole<const SOFT: bool>(
        &self,
        place: [&[f64; LANES]; 3],
        softened2_m2: f64,
        sum: &mut [[f64; LANES]; 3],
    ) {
        let [x, y, z] = place.map(twos);
        let [mut ax, mut ay, mut az] = sum.each_ref().map(twos);
        for &[at_x, at_y, at_z, gm] in &self.whole.0[..self.whole.1] {
            for l in 0..2 {
                let (dx, dy, dz) = (at_x - x[l], at_y - y[l], at_z - z[l]);
                let mut r2 = dx * dx + dy * dy + dz * dz;
                if SOFT {
                    r2 += softened2_m2;
                }
                let w = gm / (r2 * r2.sqrt());
                ax[l] += w * dx;
                ay[l] += w * dy;
                az[l] += w * dz;
            }
        }
        *sum = [ax, ay, az].map(fours);
    }

    /// By vectors, which compilers don't find here by themselves.
    #[inline]
    fn sum_slight(&self, place: [&[f64; LANES]; 3]) -> [[f32; LANES]; 3] {
        let [x, y, z] = place.map(|row| f32x4::new(row.map(single)));
        let [mut ax, mut ay, mut az] = [f32x4::ZERO; 3];
        for &[at_x, at_y, at_z, gm] in &self.slight.0[..self.slight.1] {
            let (dx, dy, dz) = (at_x - x, at_y - y, at_z - z);
            // The cube of a distance would be beyond single precision.
            let near = f32x4::ONE / (dx * dx + dy * dy + dz * dz).sqrt();
            let w = (near * gm) * (near * near);
            ax += w * dx;
            ay += w * dy;
            az += w * dz;
        }
        [ax, ay, az].map(f32x4::to_array)
    }
}

#[inline]
fn twos([a, b, c, d]: &[f64; LANES]) -> [f64x2; 2] {
    [f64x2::new([*a, *b]), f64x2::new([*c, *d])]
}

#[inline]
fn fours([one, two]: [f64x2; 2]) -> [f64; LANES] {
    let [[a, b], [c, d]] = [one.to_array(), two.to_array()];
    [a, b, c, d]
}

#[expect(clippy::cast_possible_truncation, reason = "the nearest number of single precision is meant")]
fn single(number: f64) -> f32 {
    number as f32
}
