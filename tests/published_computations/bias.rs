//! Gain against bias, and laws of excess noise.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::physics::bias::{Biased, Currents, GainTable, Junction};
use leastlight::physics::closed_form::{IdealLink, best_gain_by_power};
use leastlight::physics::excess_noise::{ExcessNoise, FactorTable};
use leastlight::physics::miller::Miller;

pub const ALL: &[(&str, Computation)] = &[
    ("miller", miller),
    ("miller_inverse", miller_inverse),
    ("biased_gain", biased_gain),
    ("gain_table", gain_table),
    ("gain_table_inverse", gain_table_inverse),
    ("factor_table", factor_table),
    ("factor_power", factor_power),
    ("closed_form_by_power", closed_form_by_power),
];

fn junction(given: &mut Inputs) -> Result<Miller, String> {
    Ok(Miller { breakdown_v: given.number("breakdown_v")?, exponent: given.number("exponent")? })
}

fn miller(given: &mut Inputs) -> Result<Outputs, String> {
    let (miller, junction_v) = (junction(given)?, given.number("junction_v")?);
    let gain = miller.gain(junction_v).ok_or("breakdown")?;
    Ok([("gain", gain.into()), ("gain_per_v", miller.gain_per_v(gain, junction_v).into())].into())
}

fn miller_inverse(given: &mut Inputs) -> Result<Outputs, String> {
    let miller = junction(given)?;
    Ok([("junction_v", miller.junction_v(given.number("gain")?).into())].into())
}

fn biased_gain(given: &mut Inputs) -> Result<Outputs, String> {
    let junction = Junction::Miller(junction(given)?);
    let biased = Biased { junction, series_resistance_ohm: given.number("series_resistance_ohm")? };
    let currents =
        Currents { multiplied_a: given.number("multiplied_a")?, beside_a: given.number("beside_a")? };
    let bias_v = given.number("bias_v")?;
    let at = biased.operation(bias_v, &currents).map_err(|why| format!("{why:?}"))?;
    let per_k = given.number("breakdown_v_per_k")?;
    let mut outputs = Outputs::from([
        ("gain", at.gain.into()),
        ("gain_per_v", biased.gain_per_v(&at, &currents).into()),
        ("gain_per_k", biased.gain_per_k(&at, &currents, per_k).into()),
        ("bias_v", biased.bias_v(at.gain, &currents).unwrap_or(f64::NAN).into()),
    ]);
    if let Some(multiplied_a) = biased.multiplied_a(bias_v, at.gain, currents.beside_a) {
        outputs.insert("multiplied_a", multiplied_a.into());
    }
    Ok(outputs)
}

fn table(given: &mut Inputs) -> Result<Junction, String> {
    let pairs: Vec<(f64, f64)> =
        given.numbers("voltages_v")?.into_iter().zip(given.numbers("gains")?).collect();
    let table = GainTable::new(&pairs).map_err(|why| format!("{why:?}"))?;
    Junction::Table(table).moved(given.number("shift_v")?).ok_or_else(|| "no junction".to_owned())
}

fn gain_table(given: &mut Inputs) -> Result<Outputs, String> {
    let biased = Biased { junction: table(given)?, series_resistance_ohm: 0.0 };
    let none = Currents { multiplied_a: 0.0, beside_a: 0.0 };
    let at = biased.operation(given.number("junction_v")?, &none).map_err(|why| format!("{why:?}"))?;
    Ok([("gain", at.gain.into()), ("gain_per_v", biased.gain_per_v(&at, &none).into())].into())
}

fn gain_table_inverse(given: &mut Inputs) -> Result<Outputs, String> {
    let junction_v = table(given)?.junction_v(given.number("gain")?).ok_or("outside")?;
    Ok([("junction_v", junction_v.into())].into())
}

fn factor_table(given: &mut Inputs) -> Result<Outputs, String> {
    let pairs: Vec<(f64, f64)> = given.numbers("gains")?.into_iter().zip(given.numbers("factors")?).collect();
    let table = FactorTable::new(&pairs).map_err(|why| format!("{why:?}"))?;
    Ok([("factor", ExcessNoise::Table(table).factor(given.number("gain")?).into())].into())
}

fn factor_power(given: &mut Inputs) -> Result<Outputs, String> {
    let law = ExcessNoise::Power { exponent: given.number("exponent")? };
    Ok([("factor", law.factor(given.number("gain")?).into())].into())
}

fn closed_form_by_power(given: &mut Inputs) -> Result<Outputs, String> {
    let link = IdealLink {
        q_factor: given.number("q_factor")?,
        responsivity_a_per_w: given.number("responsivity_a_per_w")?,
        noise_bandwidth_hz: given.number("noise_bandwidth_hz")?,
        circuit_noise_a: given.number("circuit_noise_a")?,
    };
    let best = best_gain_by_power(&link, given.number("exponent")?).ok_or("no upper end")?;
    Ok([("best_gain", best.into())].into())
}
