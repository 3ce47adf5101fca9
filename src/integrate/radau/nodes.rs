//! The nodes and the constants derived from them.
//!
//! The eight nodes of Radau's quadrature on [0, 1] with 0 among them: 0 and the roots of (P₇ + P₈)(2s − 1)/s, P the
//! Legendre polynomials. The rule is exact up to degree 14, so a step whose force is interpolated there has order 15.
//! Source: Everhart (1985) for the use; the digits were computed from the polynomial with 60 digits, and the tests
//! take them back to it.
// The digits stand as computed, more than a double holds.
#![allow(clippy::excessive_precision)]

/// Nodes beside 0.
pub(super) const STAGES: usize = 7;

/// The nodes, 0 first.
pub(super) const NODES: [f64; STAGES + 1] = [
    0.0,
    0.056_262_560_536_922_146_465_652_191_032_3,
    0.180_240_691_736_892_364_987_579_942_809,
    0.352_624_717_113_169_637_373_907_770_171,
    0.547_153_626_330_555_383_001_448_557_652,
    0.734_210_177_215_410_531_523_210_608_307,
    0.885_320_946_839_095_768_090_359_762_932,
    0.977_520_613_561_287_501_891_174_500_429,
];

/// ∫₀¹ s ∏ (s − hᵢ)² ds: what the quadrature misses of s¹⁵.
pub(super) const MISSED: f64 = 1.509_325_518_649_527_973_537_297_546_62e-9;

/// The quadrature's weights: wᵢ = (1 − hᵢ)/(64 P₇(2hᵢ − 1)²), and 1/64 at 0.
pub(super) const WEIGHTS: [f64; STAGES + 1] = weights();

const fn weights() -> [f64; STAGES + 1] {
    let mut all = [1.0 / 64.0; STAGES + 1];
    let mut i = 1;
    while i <= STAGES {
        let x = 2.0 * NODES[i] - 1.0;
        let (mut lower, mut legendre) = (1.0, x);
        let mut n = 1.0;
        while n < 6.5 {
            (lower, legendre) = (legendre, ((2.0 * n + 1.0) * x * legendre - n * lower) / (n + 1.0));
            n += 1.0;
        }
        all[i] = (1.0 - NODES[i]) / (64.0 * legendre * legendre);
        i += 1;
    }
    all
}

/// Turns divided differences into powers of s and back.
pub(super) struct Table {
    /// 1/(hᵢ − hⱼ) for j < i.
    pub inverse_gap: [[f64; STAGES]; STAGES + 1],
    /// ∏ (hᵢ − hⱼ) over j < i.
    pub product: [f64; STAGES + 1],
    /// ∏_{i ≤ k} (s − hᵢ) = Σⱼ `power[k][j]` s^{j+1}: Newton's basis polynomial k in powers.
    pub power: [[f64; STAGES]; STAGES],
    /// s^{j+1} = Σₖ `newton[j][k]` ∏_{i ≤ k} (s − hᵢ): the inverse.
    pub newton: [[f64; STAGES]; STAGES],
}

/// Each entry is a sum of terms of one sign, so nothing cancels and all are good to a few roundings.
pub(super) const TABLE: Table = Table::derived();

impl Table {
    const fn derived() -> Table {
        let mut table = Table {
            inverse_gap: [[0.0; STAGES]; STAGES + 1],
            product: [1.0; STAGES + 1],
            power: [[0.0; STAGES]; STAGES],
            newton: [[0.0; STAGES]; STAGES],
        };
        let mut i = 1;
        while i <= STAGES {
            let mut j = 0;
            while j < i {
                let gap = NODES[i] - NODES[j];
                table.inverse_gap[i][j] = 1.0 / gap;
                table.product[i] *= gap;
                j += 1;
            }
            i += 1;
        }
        table.power[0][0] = 1.0;
        table.newton[0][0] = 1.0;
        let mut k = 1;
        while k < STAGES {
            let mut j = 0;
            while j <= k {
                let (raised, lowered) =
                    if j > 0 { (table.power[k - 1][j - 1], table.newton[k - 1][j - 1]) } else { (0.0, 0.0) };
                table.power[k][j] = raised - NODES[k] * table.power[k - 1][j];
                table.newton[k][j] = lowered + NODES[j + 1] * table.newton[k - 1][j];
                j += 1;
            }
            k += 1;
        }
        table
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A number as an unevaluated sum high + low: 32 digits (Dekker 1971).
    type Pair = (f64, f64);

    fn add(a: Pair, b: Pair) -> Pair {
        let sum = a.0 + b.0;
        let part = sum - a.0;
        let low = (a.0 - (sum - part)) + (b.0 - part) + a.1 + b.1;
        (sum + low, low - ((sum + low) - sum))
    }

    fn times(a: Pair, b: Pair) -> Pair {
        let high = a.0 * b.0;
        let low = a.0.mul_add(b.0, -high) + (a.0 * b.1 + a.1 * b.0);
        (high + low, low - ((high + low) - high))
    }

    fn choose(n: u64, k: u64) -> u64 {
        (0..k).fold(1, |c, i| c * (n - i) / (i + 1))
    }

    /// (P₇ + P₈)(2s − 1)/s has whole coefficients: P̃ₙ(s) = Σ (−1)^{n+k} C(n,k) C(n+k,k) s^k.
    fn polynomial() -> Vec<f64> {
        let legendre = |n: u64, k: u64| {
            let size = (choose(n, k) * choose(n + k, k)) as f64;
            if k > n {
                0.0
            } else if (n + k).is_multiple_of(2) {
                size
            } else {
                -size
            }
        };
        (1..=8).map(|k| legendre(7, k) + legendre(8, k)).collect()
    }

    fn value(coefficients: &[f64], s: f64) -> Pair {
        coefficients.iter().rev().fold((0.0, 0.0), |sum, &c| add(times(sum, (s, 0.0)), (c, 0.0)))
    }

    #[test]
    fn every_node_is_the_double_nearest_to_a_root_of_the_defining_polynomial() {
        let coefficients = polynomial();
        let slope: Vec<f64> = coefficients.iter().enumerate().skip(1).map(|(k, c)| k as f64 * c).collect();
        for &node in &NODES[1..] {
            let away = value(&coefficients, node).0 / value(&slope, node).0;
            let rounding = node.next_up() - node;
            assert!(away.abs() <= 0.5 * rounding * (1.0 + 1e-9), "{node}: the root is {away:e} away");
        }
        assert!(NODES.is_sorted());
    }

    /// ∫₀¹ of the interpolation of s^d at the nodes, through the table: 1/(d + 1) exactly up to degree 14.
    fn quadrature(degree: i32) -> f64 {
        let f = NODES.map(|s| s.powi(degree));
        let mut b = [0.0; STAGES];
        for i in 1..=STAGES {
            let g = difference(&f, i);
            for j in 0..i {
                b[j] += g * TABLE.power[i - 1][j];
            }
        }
        f[0] + b.iter().enumerate().map(|(j, b)| b / (j + 2) as f64).sum::<f64>()
    }

    /// Divided difference over the first i + 1 nodes, by its definition.
    fn difference(f: &[f64; STAGES + 1], i: usize) -> f64 {
        (0..=i)
            .map(|p| {
                let others = (0..=i).filter(|&q| q != p);
                f[p] / others.map(|q| NODES[p] - NODES[q]).product::<f64>()
            })
            .sum()
    }

    #[test]
    fn the_quadrature_is_exact_to_degree_fourteen_and_misses_fifteen_by_the_stated_amount() {
        for degree in 0..=14 {
            let exact = 1.0 / f64::from(degree + 1);
            let found = quadrature(degree);
            assert!((found - exact).abs() < 2e-13, "degree {degree}: {:e}", found - exact);
        }
        let missed = 1.0 / 16.0 - quadrature(15);
        assert!((missed / MISSED - 1.0).abs() < 1e-3, "{missed:e}");
    }

    #[test]
    fn the_weights_integrate_powers() {
        for degree in 0..=14 {
            let sum: f64 = NODES.iter().zip(&WEIGHTS).map(|(s, w)| w * s.powi(degree)).sum();
            assert!((sum - 1.0 / f64::from(degree + 1)).abs() < 1e-15, "degree {degree}: {sum}");
        }
    }

    #[test]
    fn the_two_tables_are_inverse_to_one_another() {
        for i in 0..STAGES {
            for j in 0..STAGES {
                let sum: f64 = (0..STAGES).map(|k| TABLE.newton[i][k] * TABLE.power[k][j]).sum();
                let expected = if i == j { 1.0 } else { 0.0 };
                assert!((sum - expected).abs() < 4e-15, "{i} {j}: {sum}");
            }
        }
    }
}
