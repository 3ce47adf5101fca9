//! Coefficients of splittings A(a₁h) B(b₁h) A(a₂h) … B(bₛh) A(aₛ₊₁h), symmetric, so the first half is listed.
//!
//! Generalised order (n₁, n₂, …): the Hamiltonian conserved is H + O(ε hⁿ¹) + O(ε² hⁿ²) + …
//! Sources: leapfrog and (2n,2) Wisdom & Holman (1991), Laskar & Robutel (2001); the others Blanes et al. (2013),
//! Farrés et al. (2013). Digits solved anew from the order conditions at 80 digits, which the tests prove again.

use std::sync::LazyLock;

/// A splitting with its full lists of substeps.
#[derive(Clone, Debug, PartialEq)]
pub struct Scheme {
    /// The generalised order, as files and output name it.
    pub name: &'static str,
    /// Drift substeps, one more than `b`.
    pub a: Vec<f64>,
    /// Kick substeps.
    pub b: Vec<f64>,
    /// Whether starts and outputs go through the symplectic corrector (leapfrog only).
    pub corrected: bool,
}

static SCHEMES: LazyLock<Vec<Scheme>> = LazyLock::new(|| {
    vec![
        Scheme { corrected: true, ..scheme("(2,2)", 1, &[0.5], &[1.0]) },
        scheme(
            "(4,2)",
            2,
            &[0.211_324_865_405_187_117_745_425_609_749, 0.577_350_269_189_625_764_509_148_780_502],
            &[0.5],
        ),
        scheme(
            "(8,2)",
            4,
            &[
                0.069_431_844_202_973_712_388_026_755_553_6,
                0.260_577_634_004_598_155_210_640_364_895,
                0.339_981_043_584_856_264_802_665_759_103,
            ],
            &[0.173_927_422_568_726_928_686_531_974_611, 0.326_072_577_431_273_071_313_468_025_389],
        ),
        scheme(
            "(8,4)",
            5,
            &[
                0.075_346_960_269_892_888_416_527_803_683_5,
                0.517_916_854_688_256_782_300_773_978_496,
                -0.093_263_814_958_149_670_717_301_782_179_8,
            ],
            &[
                0.190_225_939_373_676_619_245_230_762_738,
                0.846_524_070_443_526_257_055_080_544_647,
                -1.073_500_019_634_405_752_600_622_614_77,
            ],
        ),
        scheme(
            "(10,4)",
            7,
            &[
                0.047_067_100_645_972_506_129_478_876_372_4,
                0.184_756_935_417_088_106_924_737_619_370,
                0.282_706_005_679_836_205_324_361_656_554,
                -0.014_530_041_742_896_818_378_578_152_296_8,
            ],
            &[
                0.118_881_917_368_197_019_945_350_395_085,
                0.241_050_460_551_501_565_744_166_786_590,
                -0.273_286_666_705_323_806_054_311_398_166,
                0.826_708_577_571_250_440_729_588_432_982,
            ],
        ),
        scheme(
            "(8,6,4)",
            7,
            &[
                0.071_133_426_498_223_117_777_938_730_006_2,
                0.241_153_427_956_640_098_736_487_795_326,
                0.521_411_761_772_814_789_212_136_078_068,
                -0.333_698_616_227_678_005_726_562_603_400,
            ],
            &[
                0.183_083_687_472_197_221_961_703_757_166,
                0.310_782_859_898_574_869_507_522_291_054,
                -0.026_564_618_511_958_800_697_212_137_916_5,
                0.065_396_142_282_373_418_455_972_179_391_6,
            ],
        ),
        scheme(
            "(10,6,4)",
            8,
            &[
                0.038_094_497_422_412_195_456_975_322_308_6,
                0.145_298_716_116_913_749_294_020_072_661,
                0.207_627_695_725_541_250_716_205_611_325,
                0.435_909_703_651_526_159_223_154_862_401,
                -0.653_861_225_832_786_709_380_711_737_391,
            ],
            &[
                0.095_858_880_837_075_210_610_771_503_771_5,
                0.204_446_153_142_998_780_680_507_783_916,
                0.217_070_347_978_991_101_714_338_592_431,
                -0.017_375_381_959_065_093_005_617_880_118_5,
            ],
        ),
    ]
});

/// Mirrors the first halves into the full lists of `stages` kicks and `stages + 1` drifts.
fn scheme(name: &'static str, stages: usize, half_a: &[f64], half_b: &[f64]) -> Scheme {
    let mirror = |half: &[f64], n: usize| -> Vec<f64> { (0..n).map(|i| half[i.min(n - 1 - i)]).collect() };
    Scheme { name, a: mirror(half_a, stages + 1), b: mirror(half_b, stages), corrected: false }
}

impl Scheme {
    /// Every scheme there is.
    pub fn all() -> &'static [Scheme] {
        &SCHEMES
    }

    /// The scheme of that generalised order.
    pub fn named(name: &str) -> Option<&'static Scheme> {
        SCHEMES.iter().find(|s| s.name == name)
    }

    /// Leapfrog, with the corrector at start and outputs.
    pub fn leapfrog() -> &'static Scheme {
        &SCHEMES[0]
    }

    /// The generalised orders (n₁, n₂, …) that the name states.
    pub fn orders(&self) -> Vec<i32> {
        let words = self.name.trim_matches(['(', ')']).split(',');
        words.map(|n| n.parse().expect("the names are ours: numbers in brackets")).collect()
    }

    /// The least power of the step in the energy error, whatever the perturbation's size: the smallest of the orders.
    pub fn least_order(&self) -> i32 {
        self.orders().into_iter().fold(i32::MAX, i32::min)
    }

    /// The longest drift between two kicks, in steps.
    pub fn longest_drift(&self) -> f64 {
        let within = self.a[1..self.b.len()].iter().fold(0.0f64, |most, a| most.max(a.abs()));
        within.max(2.0 * self.a[0].abs())
    }

    /// Kicks per step.
    pub fn stages(&self) -> usize {
        self.b.len()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Order conditions as plain sums over the B substeps; see the module docs. Names like (8,6,4) say which hold.
    #[test]
    fn every_scheme_has_the_order_it_is_named_for() {
        for s in Scheme::all() {
            let orders = s.orders();
            assert_eq!(s.least_order(), *orders.last().unwrap(), "{}: the last is the least", s.name);
            let n = s.stages();
            let c: Vec<f64> = (0..n).map(|i| s.a[..=i].iter().sum()).collect();
            let t: Vec<f64> = (0..n).map(|i| 0.5 * s.b[i] + s.b[i + 1..].iter().sum::<f64>()).collect();
            let close = |got: f64, want: f64, what: &str| {
                let size: f64 = s.b.iter().map(|b| b.abs()).sum();
                assert!((got - want).abs() < 8.0 * f64::EPSILON * size, "{} {what}: {got} {want}", s.name);
            };
            close(s.a.iter().sum(), 1.0, "sum of a");
            close(s.b.iter().sum(), 1.0, "sum of b");
            for k in 1..orders[0] / 2 {
                let moment = (0..n).map(|i| s.b[i] * (2.0 * c[i] - 1.0).powi(2 * k)).sum();
                close(moment, 1.0 / f64::from(2 * k + 1), "moment");
            }
            let abb: f64 = (0..n).map(|i| s.b[i] * c[i] * t[i]).sum();
            if orders[1] >= 4 {
                close(abb, 1.0 / 6.0, "second order in the perturbation, h⁴");
            } else {
                assert!((abb - 1.0 / 6.0).abs() > 1e-3, "{} is better than its name", s.name);
            }
            if orders[1] >= 6 {
                close((0..n).map(|i| s.b[i] * c[i].powi(3) * t[i]).sum(), 1.0 / 20.0, "h⁶, first");
                let mut pairs = 0.0;
                for i in 0..n {
                    for j in i + 1..n {
                        pairs += s.b[i] * s.b[j] * c[i] * c[i] * (c[j] - c[i]);
                    }
                }
                close(pairs, 1.0 / 60.0, "h⁶, second");
            }
        }
    }
}
