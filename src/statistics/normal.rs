//! The tail of the normal distribution, as far out as error ratios go.

use core::f64::consts::FRAC_1_SQRT_2;

/// What 1/√2 has beyond the digits of `FRAC_1_SQRT_2`.
const FRAC_1_SQRT_2_REST: f64 = -4.833_646_656_726_457e-17;
/// 2/√π.
const TWO_BY_ROOT_PI: f64 = core::f64::consts::FRAC_2_SQRT_PI;
/// √(2π).
const ROOT_TWO_PI: f64 = 2.506_628_274_631_000_7;
/// ln √(2π).
const LN_ROOT_TWO_PI: f64 = 0.918_938_533_204_672_8;

/// Chance that a standard normal value exceeds `x`.
///
/// ```text
/// Q(x) = ½ erfc(x/√2)
/// ```
///
/// * `x` – any number; beyond 38 the chance is below the smallest `f64` and 0 is given
///
/// Rounding x/√2 would alone cost x²/2 units of the last place (1e-14 at x = 11), so what that rounding loses is put back:
/// relative error below 1e-15 down to 1e-300.
///
/// Source: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions (1964), 26.2.3 and 7.1.2.
///
/// # Example
///
/// ```
/// use leastlight::statistics::normal::upper_tail;
///
/// assert!((upper_tail(6.0) / 9.865876450377e-10 - 1.0).abs() < 1e-12);
/// ```
pub fn upper_tail(x: f64) -> f64 {
    let z = x * FRAC_1_SQRT_2;
    let tail = libm::erfc(z);
    // First order of erfc(z + lost): past 1 the tail is as steep as 2z, and before that nothing is lost.
    let lost = x.mul_add(FRAC_1_SQRT_2, -z) + x * FRAC_1_SQRT_2_REST;
    if z > 0.5 && tail > 0.0 { 0.5 * (tail - TWO_BY_ROOT_PI * libm::exp(-z * z) * lost) } else { 0.5 * tail }
}

/// Natural logarithm of [`upper_tail`], also where the tail itself is below the smallest `f64`.
///
/// ```text
/// ln Q(x) = −x²/2 − ln √(2π) + ln(1/(x + 1/(x + 2/(x + 3/(x + …)))))      far out
/// ```
///
/// * `x` – any number
///
/// Source: P. S. Laplace, Traité de mécanique céleste 4 (1805), as Abramowitz and Stegun 26.2.14.
///
/// # Example
///
/// ```
/// use leastlight::statistics::normal::ln_upper_tail;
///
/// assert!((ln_upper_tail(40.0) + 804.608442013754).abs() < 1e-11);
/// ```
pub fn ln_upper_tail(x: f64) -> f64 {
    if x < 0.0 {
        libm::log1p(-upper_tail(-x))
    } else if x < 30.0 {
        libm::log(upper_tail(x))
    } else {
        // Past 30 twelve terms are more than the last digit needs.
        let fraction = (1..=12).rev().fold(x, |below, term| x + f64::from(term) / below);
        -0.5 * x * x - LN_ROOT_TWO_PI - libm::log(fraction)
    }
}

/// The value that a standard normal one exceeds with chance `p`.
///
/// * `p` – above 0 and below 1; below ½ the answer is positive, and at the ends it is infinite
///
/// Newton's method: on ln Q where p is small, on the chance between 0 and x near ½, where Q itself has no digits left.
///
/// Source of the first guess, good to 4.5e-4: Abramowitz and Stegun 26.2.23.
///
/// # Example
///
/// ```
/// use leastlight::statistics::normal::upper_tail_quantile;
///
/// assert!((upper_tail_quantile(1e-30) - 11.464024688444).abs() < 1e-12);
/// ```
pub fn upper_tail_quantile(p: f64) -> f64 {
    debug_assert!((0.0..=1.0).contains(&p));
    if p > 0.5 {
        return -upper_tail_quantile(1.0 - p);
    }
    if p <= 0.0 {
        return f64::INFINITY;
    }
    let ln_p = libm::log(p);
    let t = (-2.0 * ln_p).sqrt();
    let guess = t
        - (2.515517 + t * (0.802853 + t * 0.010328)) / (1.0 + t * (1.432788 + t * (0.189269 + t * 0.001308)));
    // The error is squared, and halved, on each turn: 4e-4, 1e-7, 1e-14, and one turn more for the rounding.
    (0..4).fold(guess, |x, _| {
        if p > 0.25 {
            let short_of_half = 0.5 * libm::erf(x * FRAC_1_SQRT_2) - (0.5 - p);
            x - short_of_half * ROOT_TWO_PI * libm::exp(0.5 * x * x)
        } else {
            let ln_tail = ln_upper_tail(x);
            // d ln Q/dx = −φ/Q
            x + (ln_tail - ln_p) * libm::exp(ln_tail + 0.5 * x * x) * ROOT_TWO_PI
        }
    })
}

/// The value below which a share `p` of all standard normal values lies, without a search: for a million draws.
///
/// * `p` – above 0 and below 1
///
/// Relative error about 1e-16 wherever a uniform number of 53 bits can fall. Far tails are [`upper_tail_quantile`]'s.
///
/// Source: M. J. Wichura, Appl. Stat. 37, 477–484 (1988), algorithm AS 241, PPND16.
///
/// # Example
///
/// ```
/// use leastlight::statistics::normal::standard_normal;
///
/// // The values that Wichura gives for the check of an implementation.
/// assert!((standard_normal(0.25) + 0.674_489_750_196_081_7).abs() < 1e-15);
/// assert!((standard_normal(0.001) + 3.090_232_306_167_814).abs() < 1e-14);
/// assert!((standard_normal(1e-20) + 9.262_340_089_798_408).abs() < 1e-13);
/// ```
#[inline]
pub fn standard_normal(p: f64) -> f64 {
    let q = p - 0.5;
    if q.abs() <= 0.425 {
        let r = 0.180_625 - q * q;
        return q * ratio(r, &CENTRE);
    }
    let tail = if q < 0.0 { p } else { 1.0 - p };
    let r = (-libm::log(tail)).sqrt();
    let x = if r <= 5.0 { ratio(r - 1.6, &NEAR) } else { ratio(r - 5.0, &FAR) };
    if q < 0.0 { -x } else { x }
}

/// Numerator and denominator of a rational function, highest power first.
type Rational = ([f64; 8], [f64; 8]);

#[inline]
fn ratio(r: f64, (above, below): &Rational) -> f64 {
    let polynomial = |terms: &[f64; 8]| terms.iter().fold(0.0, |sum, term| sum * r + term);
    polynomial(above) / polynomial(below)
}

/// |p − ½| ≤ 0.425.
const CENTRE: Rational = (
    [
        2_509.080_928_730_122_7,
        33_430.575_583_588_13,
        67_265.770_927_008_7,
        45_921.953_931_549_87,
        13_731.693_765_509_46,
        1_971.590_950_306_551_3,
        133.141_667_891_784_38,
        3.387_132_872_796_366_5,
    ],
    [
        5_226.495_278_852_854,
        28_729.085_735_721_943,
        39_307.895_800_092_71,
        21_213.794_301_586_597,
        5_394.196_021_424_751,
        687.187_007_492_057_9,
        42.313_330_701_600_91,
        1.0,
    ],
);

/// Tails above e^−25.
const NEAR: Rational = (
    [
        7.745_450_142_783_414e-4,
        0.022_723_844_989_269_184,
        0.241_780_725_177_450_6,
        1.270_458_252_452_368_4,
        3.647_848_324_763_204_5,
        5.769_497_221_460_691,
        4.630_337_846_156_546,
        1.423_437_110_749_683_5,
    ],
    [
        1.050_750_071_644_416_9e-9,
        5.475_938_084_995_345e-4,
        0.015_198_666_563_616_457,
        0.148_103_976_427_480_08,
        0.689_767_334_985_1,
        1.676_384_830_183_803_8,
        2.053_191_626_637_759,
        1.0,
    ],
);

/// Tails below that.
const FAR: Rational = (
    [
        2.010_334_399_292_288_1e-7,
        2.711_555_568_743_487_6e-5,
        0.001_242_660_947_388_078_4,
        0.026_532_189_526_576_124,
        0.296_560_571_828_504_87,
        1.784_826_539_917_291_3,
        5.463_784_911_164_114,
        6.657_904_643_501_103,
    ],
    [
        2.044_263_103_389_939_8e-15,
        1.421_511_758_316_446e-7,
        1.846_318_317_510_054_8e-5,
        7.868_691_311_456_133e-4,
        0.014_875_361_290_850_615,
        0.136_929_880_922_735_8,
        0.599_832_206_555_887_9,
        1.0,
    ],
);
