//! Coefficients of splittings A(a₁h) B(b₁h) A(a₂h) … B(bₛh) A(aₛ₊₁h), and B(b₁h) A(a₁h) … A(aₛh) B(bₛ₊₁h) where a
//! kick comes first; all symmetric, so the first half is listed.
//!
//! Generalised order (n₁, n₂, …): the Hamiltonian conserved is H + O(ε hⁿ¹) + O(ε² hⁿ²) + …
//! Sources: leapfrog and (2n,2) Wisdom & Holman (1991), McLachlan (1995), Laskar & Robutel (2001); the others Blanes et
//! al. (2013), Farrés et al. (2013). Digits solved anew from the order conditions at 80 digits, which the tests prove
//! again. The kicks of (2n,2) are the weights of Gauss and Legendre, or of Lobatto where a kick comes first.

use std::sync::LazyLock;

/// A splitting with its full lists of substeps.
#[derive(Clone, Debug, PartialEq)]
pub struct Scheme {
    /// The generalised order, as files and output name it.
    pub name: &'static str,
    /// Drift substeps: one more than `b`, or one fewer where a kick comes first.
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
            "(6,2)",
            3,
            &[0.112_701_665_379_258_311_482_073_460_021, 0.387_298_334_620_741_688_517_926_539_978],
            &[0.277_777_777_777_777_777_777_777_777_777, 0.444_444_444_444_444_444_444_444_444_444],
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
            "(10,2)",
            5,
            &[
                0.046_910_077_030_668_003_601_186_560_850_3,
                0.183_855_267_916_490_450_880_656_228_799,
                0.269_234_655_052_841_545_518_157_210_350,
            ],
            &[
                0.118_463_442_528_094_543_757_132_020_359,
                0.239_314_335_249_683_234_020_645_757_417,
                0.284_444_444_444_444_444_444_444_444_444,
            ],
        ),
        scheme(
            "(12,2)",
            6,
            &[
                0.033_765_242_898_423_986_093_849_222_753_0,
                0.135_630_063_868_443_757_075_450_979_737,
                0.211_295_100_191_533_802_515_448_936_669,
                0.238_619_186_083_196_908_630_501_721_680,
            ],
            &[
                0.085_662_246_189_585_172_520_148_071_086_3,
                0.180_380_786_524_069_303_784_916_756_918,
                0.233_956_967_286_345_523_694_935_171_994,
            ],
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
        kick_first("(2,2) kick-first", 1, &[1.0], &[0.5]),
        kick_first(
            "(4,2) kick-first",
            2,
            &[0.5],
            &[0.166_666_666_666_666_666_666_666_666_666, 0.666_666_666_666_666_666_666_666_666_666],
        ),
        kick_first(
            "(6,2) kick-first",
            3,
            &[0.276_393_202_250_021_030_359_082_633_126, 0.447_213_595_499_957_939_281_834_733_746],
            &[0.083_333_333_333_333_333_333_333_333_333_3, 0.416_666_666_666_666_666_666_666_666_666],
        ),
        kick_first(
            "(8,2) kick-first",
            4,
            &[0.172_673_164_646_011_428_100_853_771_876, 0.327_326_835_353_988_571_899_146_228_123],
            &[
                0.050_000_000_000_000_000_000_000_000_000_0,
                0.272_222_222_222_222_222_222_222_222_222,
                0.355_555_555_555_555_555_555_555_555_555,
            ],
        ),
        kick_first(
            "(10,2) kick-first",
            5,
            &[
                0.117_472_338_035_267_653_574_498_513_020,
                0.239_911_903_724_409_798_268_425_989_959,
                0.285_231_516_480_645_096_314_150_994_040,
            ],
            &[
                0.033_333_333_333_333_333_333_333_333_333_3,
                0.189_237_478_148_923_490_158_306_404_106,
                0.277_429_188_517_743_176_508_360_262_560,
            ],
        ),
        kick_first(
            "(12,2) kick-first",
            6,
            &[
                0.084_888_051_860_716_535_063_983_893_016_2,
                0.180_687_551_403_926_358_034_130_166_029,
                0.234_424_396_735_357_106_901_885_940_954,
            ],
            &[
                0.023_809_523_809_523_809_523_809_523_809_5,
                0.138_413_023_680_782_974_005_350_203_145,
                0.215_872_690_604_931_311_708_935_511_140,
                0.243_809_523_809_523_809_523_809_523_809,
            ],
        ),
    ]
});

/// Mirrors the first halves into the full lists of `stages` kicks and `stages + 1` drifts.
fn scheme(name: &'static str, stages: usize, half_a: &[f64], half_b: &[f64]) -> Scheme {
    Scheme { name, a: mirrored(half_a, stages + 1), b: mirrored(half_b, stages), corrected: false }
}

/// The same of `stages + 1` kicks and `stages` drifts.
fn kick_first(name: &'static str, stages: usize, half_a: &[f64], half_b: &[f64]) -> Scheme {
    Scheme { name, a: mirrored(half_a, stages), b: mirrored(half_b, stages + 1), corrected: false }
}

fn mirrored(half: &[f64], count: usize) -> Vec<f64> {
    (0..count).map(|i| half[i.min(count - 1 - i)]).collect()
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
        let inside = self.name.split(['(', ')']).nth(1).unwrap_or_default();
        inside.split(',').map(|n| n.parse().expect("the names are ours: numbers in brackets")).collect()
    }

    /// The least power of the step in the energy error, whatever the perturbation's size: the smallest of the orders.
    pub fn least_order(&self) -> i32 {
        self.orders().into_iter().fold(i32::MAX, i32::min)
    }

    /// Whether a step begins and ends with a kick, which two neighbouring steps share, instead of a drift.
    pub fn is_kick_first(&self) -> bool {
        self.b.len() > self.a.len()
    }

    /// The longest drift between two kicks, in steps.
    pub fn longest_drift(&self) -> f64 {
        let longest = |drifts: &[f64]| drifts.iter().fold(0.0f64, |most, a| most.max(a.abs()));
        if self.is_kick_first() {
            return longest(&self.a);
        }
        longest(&self.a[1..self.b.len()]).max(2.0 * self.a[0].abs())
    }

    /// Kicks per step, those that two steps share counted once.
    pub fn stages(&self) -> usize {
        self.a.len().min(self.b.len())
    }

    /// Drift and kick of one round of many steps without a pause, in steps, what two steps share merged into one.
    ///
    /// Rounds are as many as kicks, and one more: the first has no drift where a kick comes first, the last no kick
    /// where a drift does. `stage` counts the other rounds of a step from 0.
    #[inline]
    pub(super) fn round(&self, stage: usize, first: bool, last: bool) -> (Option<f64>, Option<f64>) {
        if self.is_kick_first() {
            let shared = stage + 1 == self.stages() && !last;
            return match first {
                true => (None, Some(self.b[0])),
                false => {
                    (Some(self.a[stage]), Some(if shared { 2.0 * self.b[0] } else { self.b[stage + 1] }))
                }
            };
        }
        match (first, last) {
            (true, _) => (Some(self.a[0]), Some(self.b[0])),
            (_, true) => (Some(self.a[0]), None),
            _ if stage == 0 => (Some(2.0 * self.a[0]), Some(self.b[0])),
            _ => (Some(self.a[stage]), Some(self.b[stage])),
        }
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
            let n = s.b.len();
            let before = usize::from(!s.is_kick_first());
            let c: Vec<f64> = (0..n).map(|i| s.a[..i + before].iter().sum()).collect();
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
