//! Tails of the normal distribution, and the curve through a table.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::numeric::pchip::Pchip;
use leastlight::statistics::normal::{ln_upper_tail, upper_tail, upper_tail_quantile};

pub const ALL: &[(&str, Computation)] =
    &[("normal_tail", normal_tail), ("normal_quantile", normal_quantile), ("pchip", pchip)];

fn normal_tail(given: &mut Inputs) -> Result<Outputs, String> {
    let x = given.number("x")?;
    Ok([("upper_tail", upper_tail(x).into()), ("ln_upper_tail", ln_upper_tail(x).into())].into())
}

fn normal_quantile(given: &mut Inputs) -> Result<Outputs, String> {
    let q = upper_tail_quantile(given.number("upper_tail")?);
    Ok([("x", q.into()), ("q_db", (20.0 * libm::log10(q)).into())].into())
}

/// Values and slopes at the places `at`, and the weights of all y there, place by place.
fn pchip(given: &mut Inputs) -> Result<Outputs, String> {
    let (x, y) = (given.numbers("x")?, given.numbers("y")?);
    let curve = Pchip::new(&x, &y).map_err(|fault| format!("{fault:?}"))?;
    let (mut values, mut slopes, mut weights) = (Vec::new(), Vec::new(), Vec::new());
    for at in given.numbers("at")? {
        let outside = || format!("{at} is outside of the table");
        values.push(curve.value(at).ok_or_else(outside)?);
        slopes.push(curve.slope(at).ok_or_else(outside)?);
        let mut row = vec![0.0; y.len()];
        for (index, weight) in curve.weights(at).ok_or_else(outside)? {
            row[index] += weight;
        }
        weights.extend(row);
    }
    Ok([("value", values.into()), ("slope", slopes.into()), ("weights", weights.into())].into())
}
