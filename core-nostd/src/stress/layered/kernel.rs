//! The stress and displacement that a unit surface pressure `J0(m r)` causes at a depth of a
//! stack of layers.
//!
//! In a layer with `x = m (z - top)`, `y = m (z - bottom)`:
//!
//! ```text
//! sigma_z        S     = (a + b x) e^-x              + (c + d y) e^y
//! tau_rz         T     = (a + b (x-1)) e^-x          - (c + d (1+y)) e^y
//! settlement     2GmW  = (a + b (1-2nu+x)) e^-x      + (-c + d (1-2nu-y)) e^y
//! outwards       2GmU  = (a + b (x-2+2nu)) e^-x      + (c + d (2-2nu+y)) e^y
//! ```
//!
//! `(a, b)` decays downwards from the layer's top, `(c, d)` upwards from its bottom. Going up
//! from the base, each layer reflects what arrives (`R`) and offers a compliance (`C`) to the one
//! above; only decaying exponentials occur and every matrix that is inverted stays regular for
//! all `m`, on a rigid base and at `nu = 1/2` too.
//!
//! Sources: Burmister 1945, J. Appl. Phys. 16, 89-94; the reflection form after Kennett 1983,
//! Seismic Wave Propagation in Stratified Media.

use super::stack::{Base, Stack, Sublayer, Target};
use crate::math::lanes::{BATCH, Lanes};

type Wave = Lanes<BATCH>;

#[derive(Clone, Copy)]
struct Pair(Wave, Wave);

#[derive(Clone, Copy)]
struct Matrix {
    a: Wave,
    b: Wave,
    c: Wave,
    d: Wave,
}

impl Matrix {
    fn new(a: Wave, b: Wave, c: Wave, d: Wave) -> Self {
        Self { a, b, c, d }
    }

    fn times(&self, o: &Self) -> Self {
        Self {
            a: self.a * o.a + self.b * o.c,
            b: self.a * o.b + self.b * o.d,
            c: self.c * o.a + self.d * o.c,
            d: self.c * o.b + self.d * o.d,
        }
    }

    fn plus(&self, o: &Self) -> Self {
        Self { a: self.a + o.a, b: self.b + o.b, c: self.c + o.c, d: self.d + o.d }
    }

    fn minus(&self, o: &Self) -> Self {
        Self { a: self.a - o.a, b: self.b - o.b, c: self.c - o.c, d: self.d - o.d }
    }

    fn scaled(&self, f: Wave) -> Self {
        Self { a: self.a * f, b: self.b * f, c: self.c * f, d: self.d * f }
    }

    fn inverse(&self) -> Self {
        let f = (self.a * self.d - self.b * self.c).recip();
        Self { a: self.d * f, b: -self.b * f, c: -self.c * f, d: self.a * f }
    }

    fn on(&self, v: Pair) -> Pair {
        Pair(self.a * v.0 + self.b * v.1, self.c * v.0 + self.d * v.1)
    }
}

/// Rows (S, T) and (mW, mU) of the parts that decay down and up, without their exponentials.
#[derive(Clone, Copy)]
struct Rows {
    /// `1/(2G)`.
    flexibility: f64,
    poisson: f64,
}

impl Rows {
    fn of(sublayer: &Sublayer) -> Self {
        Self { flexibility: 1.0 / sublayer.twice_shear, poisson: sublayer.poisson }
    }

    fn down_stress(x: Wave) -> Matrix {
        let one = Lanes::splat(1.0);
        Matrix::new(one, x, one, x - 1.0)
    }

    fn up_stress(y: Wave) -> Matrix {
        let one = Lanes::splat(1.0);
        Matrix::new(one, y, -one, -(1.0 + y))
    }

    fn down_movement(&self, x: Wave) -> Matrix {
        let (one, nu) = (Lanes::splat(1.0), self.poisson);
        Matrix::new(one, x + (1.0 - 2.0 * nu), one, x - (2.0 - 2.0 * nu)).scaled(self.lanes())
    }

    fn up_movement(&self, y: Wave) -> Matrix {
        let (one, nu) = (Lanes::splat(1.0), self.poisson);
        Matrix::new(-one, (1.0 - 2.0 * nu) - y, one, y + (2.0 - 2.0 * nu)).scaled(self.lanes())
    }

    fn lanes(&self) -> Wave {
        Lanes::splat(self.flexibility)
    }

    /// Movement over stress at the top of a half-space of this material.
    fn half_space_compliance(&self) -> Matrix {
        let zero = Lanes::splat(0.0);
        self.down_movement(zero).times(&Self::down_stress(zero).inverse())
    }
}

/// What lies below the layer being passed.
enum Below {
    Compliance(Matrix),
    Rough,
    Smooth,
}

impl Below {
    /// Upward over downward amplitudes, without `e^-x`.
    fn reflection(&self, rows: &Rows, x: Wave) -> Matrix {
        let zero = Lanes::splat(0.0);
        let (up, down) = match self {
            Self::Compliance(c) => (
                rows.up_movement(zero).minus(&c.times(&Rows::up_stress(zero))),
                rows.down_movement(x).minus(&c.times(&Rows::down_stress(x))),
            ),
            Self::Rough => (rows.up_movement(zero), rows.down_movement(x)),
            Self::Smooth => {
                let settlement_and_shear = |movement: Matrix, stress: Matrix| {
                    Matrix::new(movement.a, movement.b, stress.c, stress.d)
                };
                (
                    settlement_and_shear(rows.up_movement(zero), Rows::up_stress(zero)),
                    settlement_and_shear(rows.down_movement(x), Rows::down_stress(x)),
                )
            }
        };
        up.inverse().times(&down).scaled(Lanes::splat(-1.0))
    }
}

/// Amplitudes in the layer of the point; in the first sublayer those of the homogeneous
/// half-space (`a = b = 1`) are left out.
struct Amplitudes {
    down: Pair,
    up: Pair,
}

/// Reflections from deeper than this (in units of `1/m`, there and back) are below rounding.
const DEEPEST: f64 = 45.0;

fn amplitudes(stack: &Stack, target: &Target, m: Wave) -> Amplitudes {
    let zero = Lanes::splat(0.0);
    let one = Pair(Lanes::splat(1.0), Lanes::splat(1.0));
    let smallest = m.0.iter().fold(f64::INFINITY, |low, m| low.min(*m));
    let reaches = |s: &Sublayer| smallest * (2.0 * s.top - target.depth) <= DEEPEST;
    // The first layer out of reach stands for all below it.
    let beyond = stack
        .sublayers
        .iter()
        .enumerate()
        .find(|(index, sublayer)| *index > target.index && !reaches(sublayer));
    let (count, mut below) = match (beyond, stack.base) {
        (Some((index, sublayer)), _) => {
            (index, Below::Compliance(Rows::of(sublayer).half_space_compliance()))
        }
        (None, Base::HalfSpace(base)) => {
            (stack.sublayers.len(), Below::Compliance(Rows::of(&base).half_space_compliance()))
        }
        (None, Base::Rough) => (stack.sublayers.len(), Below::Rough),
        (None, Base::Smooth) => (stack.sublayers.len(), Below::Smooth),
    };
    // From the stress at the top of the sublayer being passed to the downward amplitudes of the
    // target.
    let mut to_target = Rows::down_stress(zero).inverse();
    let mut up_of_target = Matrix::new(zero, zero, zero, zero);
    let mut surface_reflection = up_of_target;
    for (index, sublayer) in stack.sublayers.iter().enumerate().take(count).rev() {
        let rows = Rows::of(sublayer);
        let x = m * (sublayer.bottom - sublayer.top);
        let decay = (-x).map(libm::exp);
        let reflection = below.reflection(&rows, x);
        let there_and_back = decay.squared();
        let stress_back = Rows::up_stress(-x).times(&reflection).scaled(there_and_back);
        let stress = Rows::down_stress(zero).plus(&stress_back).inverse();
        if index == target.index {
            to_target = stress;
            up_of_target = reflection.scaled(decay);
        } else if index < target.index {
            let at_bottom =
                Rows::down_stress(x).plus(&Rows::up_stress(zero).times(&reflection)).scaled(decay);
            to_target = to_target.times(&at_bottom).times(&stress);
        }
        if index == 0 {
            surface_reflection = stress_back;
            break;
        }
        let movement = rows
            .down_movement(zero)
            .plus(&rows.up_movement(-x).times(&reflection).scaled(there_and_back));
        below = Below::Compliance(movement.times(&stress));
    }
    if target.index == 0 && !stack.sublayers.is_empty() {
        let change = to_target.times(&surface_reflection).on(one);
        let down = Pair(-change.0, -change.1);
        let up = up_of_target.on(Pair(1.0 + down.0, 1.0 + down.1));
        Amplitudes { down, up }
    } else {
        let down = to_target.on(Pair(one.0, zero));
        Amplitudes { down, up: up_of_target.on(down) }
    }
}

/// A batch of wave numbers with their quadrature weights times the load's transform.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WaveBlock {
    pub(super) m: Lanes<BATCH>,
    pub(super) weight: Lanes<BATCH>,
}

impl Default for WaveBlock {
    fn default() -> Self {
        Self { m: Lanes::splat(1.0), weight: Lanes::splat(0.0) }
    }
}

/// What a batch of wave numbers contributes at one depth, before the Bessel functions of the
/// distance.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct KernelBlock {
    pub(super) sigma_z: Lanes<BATCH>,
    /// `X - 2GmU` and `X`, where `X = nu/(1-nu) (S - 2GmU)`.
    pub(super) sigma_r: Lanes<BATCH>,
    pub(super) sigma_theta: Lanes<BATCH>,
    /// `2GmU`.
    pub(super) sideways: Lanes<BATCH>,
    pub(super) shear: Lanes<BATCH>,
    pub(super) settlement: Lanes<BATCH>,
}

impl Default for KernelBlock {
    fn default() -> Self {
        let zero = Lanes::splat(0.0);
        Self {
            sigma_z: zero,
            sigma_r: zero,
            sigma_theta: zero,
            sideways: zero,
            shear: zero,
            settlement: zero,
        }
    }
}

impl KernelBlock {
    pub(super) fn at(stack: &Stack, target: &Target, wave: &WaveBlock) -> Self {
        let WaveBlock { m, weight } = *wave;
        let Amplitudes { down: Pair(a, b), up: Pair(c, d) } = amplitudes(stack, target, m);
        let nu = target.sublayer.poisson;
        let x = m * (target.depth - target.sublayer.top);
        let decay_down = weight * (-x).map(libm::exp);
        let (y, decay_up) = if target.sublayer.bottom.is_finite() {
            let y = m * (target.depth - target.sublayer.bottom);
            (y, weight * y.map(libm::exp))
        } else {
            (Lanes::splat(0.0), Lanes::splat(0.0))
        };
        let sigma_z = (a + b * x) * decay_down + (c + d * y) * decay_up;
        let shear = (a + b * (x - 1.0)) * decay_down - (c + d * (1.0 + y)) * decay_up;
        let settlement = (a + b * (x + (1.0 - 2.0 * nu))) * decay_down
            + (d * ((1.0 - 2.0 * nu) - y) - c) * decay_up;
        let sideways = (a + b * (x - (2.0 - 2.0 * nu))) * decay_down
            + (c + d * (y + (2.0 - 2.0 * nu))) * decay_up;
        let sigma_theta = (sigma_z - sideways) * (nu / (1.0 - nu));
        Self {
            sigma_z,
            sigma_r: sigma_theta - sideways,
            sigma_theta,
            sideways,
            shear: shear * m,
            settlement: settlement / m,
        }
    }
}

/// Bessel functions of a batch of wave numbers at one distance.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BesselBlock {
    j0: Lanes<BATCH>,
    /// `J1(x)/x`.
    j1_x: Lanes<BATCH>,
}

impl Default for BesselBlock {
    fn default() -> Self {
        Self { j0: Lanes::splat(1.0), j1_x: Lanes::splat(0.5) }
    }
}

impl BesselBlock {
    pub(super) fn at(wave: &WaveBlock, rho: f64) -> Self {
        let x = wave.m * rho;
        Self {
            j0: x.map(libm::j0),
            // Below 1e-8 the next term, x^2/16, is lost in rounding.
            j1_x: x.map(|x| if x < 1e-8 { 0.5 } else { libm::j1(x) / x }),
        }
    }
}

/// Sums over the wave numbers at one point.
#[derive(Debug, Clone, Copy)]
pub(super) struct Sums {
    sigma_z: Wave,
    sigma_r: Wave,
    sigma_theta: Wave,
    sideways: Wave,
    shear: Wave,
    settlement: Wave,
}

impl Sums {
    pub(super) fn zero() -> Self {
        let zero = Lanes::splat(0.0);
        Self {
            sigma_z: zero,
            sigma_r: zero,
            sigma_theta: zero,
            sideways: zero,
            shear: zero,
            settlement: zero,
        }
    }

    #[inline(always)]
    pub(super) fn add(&mut self, kernel: &KernelBlock, bessel: &BesselBlock) {
        self.sigma_z = self.sigma_z + kernel.sigma_z * bessel.j0;
        self.sigma_r = self.sigma_r + kernel.sigma_r * bessel.j0;
        self.sigma_theta = self.sigma_theta + kernel.sigma_theta * bessel.j0;
        self.sideways = self.sideways + kernel.sideways * bessel.j1_x;
        self.shear = self.shear + kernel.shear * bessel.j1_x;
        self.settlement = self.settlement + kernel.settlement * bessel.j0;
    }

    /// `sigma_z, sigma_r, sigma_theta, tau_rz` and `2G` times settlement and outward movement, in
    /// units of the load and the radius.
    pub(super) fn finish(&self, rho: f64) -> [f64; 6] {
        let sideways = self.sideways.sum();
        [
            self.sigma_z.sum(),
            self.sigma_r.sum() + sideways,
            self.sigma_theta.sum() - sideways,
            self.shear.sum() * rho,
            self.settlement.sum(),
            sideways * rho,
        ]
    }
}
