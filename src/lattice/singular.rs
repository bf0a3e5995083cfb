//! Corner functions ψ = χ(r) (r/ρ)^s {sin, cos}(aθ) for corners whose π/ω is not an integer
//! (Fix, Gulati & Wakoff 1973; Strang & Fix 1973, ch. 8).
//!
//! θ runs from the outgoing edge through the material; χ = (1 − (r/ρ)²)⁸. With straight edges
//! a = kπ/ω and s = a + 2j; curved edges excite a = |α + m − 2l|, s = α + m, sine and cosine.

use crate::geometry::{Corner, Point};
use std::f64::consts::{PI, TAU};

/// One function of a corner: a = kν + shift and s = kν + rise, with ν = π/ω.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Singular {
    /// Multiple of ν.
    pub k: u8,
    /// What is added to kν in the angular number.
    pub shift: i8,
    /// What is added to kν in the exponent of r.
    pub rise: u8,
    /// Cosine instead of sine.
    pub cosine: bool,
}

impl Singular {
    /// Angular number a; negative where kν + shift is.
    pub fn angular(&self, nu: f64) -> f64 {
        f64::from(self.k) * nu + f64::from(self.shift)
    }
    /// Exponent s of r.
    pub fn exponent(&self, nu: f64) -> f64 {
        f64::from(self.k) * nu + f64::from(self.rise)
    }
}

/// A corner with its functions, alive in the disc of radius ρ.
#[derive(Clone, Debug)]
pub struct CornerSpace {
    /// Where.
    pub at: Point,
    /// Direction of the outgoing edge.
    pub direction: f64,
    /// Interior angle ω.
    pub angle: f64,
    /// Radius ρ of the support.
    pub radius: f64,
    /// The functions.
    pub functions: Vec<Singular>,
    /// Pieces that start and end here, numbered through the loops.
    pub edges: [u32; 2],
    /// Whether an edge is curved: then the functions do not vanish on the edges.
    pub curved: bool,
    /// Largest multiple or shift among the functions.
    most: usize,
}

/// Values at one point.
#[derive(Clone, Copy, Debug, Default)]
pub struct Value {
    /// ψ.
    pub value: f64,
    /// Δψ.
    pub laplacian: f64,
    /// ∇ψ.
    pub gradient: [f64; 2],
}

/// What is taken off the highest exponent where an edge is curved: the functions that come with
/// a curved edge are many, and small in proportion to powers of its curvature. On a fan and on a
/// traced notch the error bars stay the same to two digits with half the functions.
const CURVED: f64 = 0.8;

/// Power of the cut-off.
const CUT_OFF: i32 = 8;

/// Whether a corner of this interior angle makes smooth functions converge slowly.
pub fn is_singular(angle: f64) -> bool {
    let a = PI / angle;
    (a - a.round()).abs() > 1e-9
}

impl CornerSpace {
    /// The functions of a corner with exponents up to `most`.
    pub fn new(corner: &Corner, radius: f64, most: f64, edges: [u32; 2]) -> Self {
        let curved = corner.curvatures.iter().any(|c| (c * radius).abs() > 1e-9);
        let most = if curved { most - CURVED } else { most };
        let functions = functions(PI / corner.angle, most, curved);
        let most = functions.iter().map(|f| f.k.max(f.rise)).max().unwrap_or(0) as usize;
        Self {
            at: corner.at,
            direction: corner.direction,
            angle: corner.angle,
            radius,
            functions,
            edges,
            curved,
            most,
        }
    }

    /// Distance from the corner.
    pub fn distance(&self, p: Point) -> f64 {
        (p - self.at).norm()
    }

    /// All functions at a point; zero beyond the radius. `out.len()` is the number of functions.
    #[inline(always)]
    pub fn eval(&self, p: Point, out: &mut [Value]) {
        let d = p - self.at;
        let r = d.norm();
        if r >= self.radius || r == 0.0 {
            out.fill(Value::default());
            return;
        }
        let half = 0.5 * self.angle;
        // the branch cut lies on the exterior bisector
        let theta = (d.y.atan2(d.x) - self.direction - half + PI).rem_euclid(TAU) - PI + half;
        let x = r / self.radius;
        let g = 1.0 - x * x;
        let g6 = g.powi(CUT_OFF - 2);
        let m = f64::from(CUT_OFF);
        let c0 = g6 * g * g;
        let c1 = -2.0 * m * x * g6 * g / self.radius;
        let c2 = (-2.0 * m * g6 * g + 4.0 * m * (m - 1.0) * x * x * g6) / self.radius.powi(2);
        let (ct, st) = (d.x / r, d.y / r);
        let nu = PI / self.angle;
        // x^kν and e^(ikνθ) by recurrence over k, x^m and e^(imθ) over m
        let base = x.powf(nu);
        let circles = turns(nu * theta, base, self.most);
        let whole = turns(theta, x, self.most);
        for (f, o) in self.functions.iter().zip(out) {
            let (a, q) = (f.angular(nu), f.exponent(nu));
            let (k, m) = (
                circles[f.k as usize],
                whole[f.shift.unsigned_abs() as usize],
            );
            let im = if f.shift < 0 { -m.sin } else { m.sin };
            let (s, c) = (k.sin * m.cos + k.cos * im, k.cos * m.cos - k.sin * im);
            let (t, dt) = if f.cosine { (c, -a * s) } else { (s, a * c) };
            let power = k.power * whole[f.rise as usize].power;
            let radial = (c1 + q * c0 / r) * power * t;
            let sideways = c0 * power * dt / r;
            o.value = c0 * power * t;
            o.laplacian =
                (c2 + (2.0 * q + 1.0) * c1 / r + (q * q - a * a) * c0 / (r * r)) * power * t;
            o.gradient = [radial * ct - sideways * st, radial * st + sideways * ct];
        }
    }
}

/// Largest k or m of a function.
const MOST: usize = 16;

/// x^k and e^(ikφ).
#[derive(Clone, Copy, Default)]
struct Turn {
    power: f64,
    sin: f64,
    cos: f64,
}

#[inline(always)]
fn turns(phi: f64, x: f64, most: usize) -> [Turn; MOST] {
    let (s, c) = phi.sin_cos();
    let mut out = [Turn {
        power: 1.0,
        sin: 0.0,
        cos: 1.0,
    }; MOST];
    for k in 1..=most {
        let b = out[k - 1];
        out[k] = Turn {
            power: b.power * x,
            sin: b.sin * c + b.cos * s,
            cos: b.cos * c - b.sin * s,
        };
    }
    out
}

fn functions(nu: f64, most: f64, curved: bool) -> Vec<Singular> {
    let mut out: Vec<Singular> = Vec::new();
    let mut put = |f: Singular| {
        let same = |g: &Singular| {
            (g.angular(nu).abs() - f.angular(nu).abs()).abs() < 1e-9
                && (g.exponent(nu) - f.exponent(nu)).abs() < 1e-9
                && g.cosine == f.cosine
        };
        if !out.iter().any(same) {
            out.push(f);
        }
    };
    for k in 1..MOST as u8 {
        let alpha = f64::from(k) * nu;
        if alpha > most {
            break;
        }
        if (alpha - alpha.round()).abs() < 1e-9 {
            continue;
        }
        for rise in 0..MOST as u8 {
            if alpha + f64::from(rise) > most {
                break;
            }
            if curved {
                for l in 0..=rise / 2 {
                    let shift = rise as i8 - 2 * l as i8;
                    for cosine in [false, true] {
                        if !cosine || rise > 0 {
                            put(Singular {
                                k,
                                shift,
                                rise,
                                cosine,
                            });
                        }
                    }
                }
            } else if rise % 2 == 0 {
                put(Singular {
                    k,
                    shift: 0,
                    rise,
                    cosine: false,
                });
            }
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::geometry::pt;

    #[test]
    fn laplacian_and_gradient_agree_with_differences() {
        let corner = Corner {
            at: pt(0.1, 0.2),
            angle: 1.5 * PI,
            direction: 0.4,
            curvatures: [0.5, 0.0],
            place: (0, 0),
        };
        let c = CornerSpace::new(&corner, 0.7, 4.0, [0, 1]);
        let n = c.functions.len();
        let at = |p| {
            let mut v = vec![Value::default(); n];
            c.eval(p, &mut v);
            v
        };
        let (p, e) = (pt(0.35, 0.4), 1e-4);
        let v = at(p);
        let [e0, w, no, s] = [pt(e, 0.), pt(-e, 0.), pt(0., e), pt(0., -e)].map(|d| at(p + d));
        for k in 0..n {
            let dx = (e0[k].value - w[k].value) / (2.0 * e);
            let lap =
                (e0[k].value + w[k].value + no[k].value + s[k].value - 4.0 * v[k].value) / (e * e);
            assert!((dx - v[k].gradient[0]).abs() < 1e-5, "{k}");
            assert!(
                (lap - v[k].laplacian).abs() < 1e-4,
                "{k} {lap} {}",
                v[k].laplacian
            );
        }
    }
}
