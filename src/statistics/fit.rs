//! What a fit says of its parameters: standard uncertainties, correlations, and how they go over into other numbers.

use crate::numeric::fit::{Bounds, Fit, Linear, NoFit, fit, robust_fit};

/// Where the size of the residuals comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Scatter {
    /// Each residual was divided by a standard uncertainty that is known.
    Known,
    /// It is estimated from the residuals themselves.
    Estimated,
}

/// How points far off count.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Method {
    /// As their squares.
    LeastSquares,
    /// By Huber's rule, see [`robust_fit`].
    Huber,
}

/// Fitted parameters with their covariance.
#[derive(Debug, Clone, PartialEq)]
pub struct Estimates {
    /// The parameters.
    pub values: Vec<f64>,
    /// Their covariance; zero for those that are held or untold. Absent where nothing tells the scatter: as many points as parameters.
    pub covariance: Option<Vec<Vec<f64>>>,
    /// Which lie at a bound that holds them.
    pub held: Vec<bool>,
    /// Which the measurements do not tell at all.
    pub untold: Vec<bool>,
    /// Degrees of freedom of the standard uncertainties: of the residuals, or infinite where their scatter is known.
    pub degrees_of_freedom: f64,
    /// The residuals, formula less measurement, each divided by what weighs it.
    pub residuals: Vec<f64>,
    /// The weight of each point; all 1 but by Huber's rule.
    pub weights: Vec<f64>,
    /// Standard deviation of a residual of weight 1; absent without a degree of freedom.
    pub deviation: Option<f64>,
    /// Whether the weights came to rest.
    pub settled: bool,
}

/// Fits, and says how well.
///
/// ```text
/// V = (JᵀJ)⁻¹ s²,   s² = Σ r²/(n − p) where the scatter is estimated, 1 where it is known
/// ```
///
/// J holds the derivatives of the residuals at the end, for the parameters that no bound holds; p counts these. By Huber's
/// rule s² is that of [`Robust::variance`](crate::numeric::fit::Robust), also where the uncertainties are known: the rule is
/// there for points that belie them.
///
/// Source: G. A. F. Seber, C. J. Wild, Nonlinear Regression (Wiley, 1989), section 2.1.2.
pub fn estimates(
    evaluate: &dyn Fn(&[f64]) -> Option<Linear>,
    start: &[f64],
    bounds: &[Bounds],
    scatter: Scatter,
    method: Method,
) -> Result<Estimates, NoFit> {
    let (found, weights, robust, settled) = match method {
        Method::LeastSquares => {
            let found = fit(evaluate, start, bounds)?;
            let weights = vec![1.0; found.residuals.len()];
            (found, weights, None, true)
        }
        Method::Huber => {
            let found = robust_fit(evaluate, start, bounds)?;
            (found.fit, found.weights, Some((found.scale, found.variance)), found.settled)
        }
    };
    let free = found.held.iter().filter(|held| !**held).count();
    let freedom = found.residuals.len() - free;
    let estimated = (freedom > 0).then(|| found.sum_of_squares / freedom as f64);
    let (variance, degrees_of_freedom) = match (robust, scatter) {
        (Some((_, variance)), _) => (estimated.map(|_| variance), freedom as f64),
        (None, Scatter::Estimated) => (estimated, freedom as f64),
        (None, Scatter::Known) => (Some(1.0), f64::INFINITY),
    };
    let Fit { parameters, residuals, held, inverse, undetermined, .. } = found;
    let scaled = |variance: f64| {
        let row = |row: &Vec<f64>| row.iter().map(|cell| cell * variance).collect();
        inverse.iter().map(row).collect::<Vec<Vec<f64>>>()
    };
    Ok(Estimates {
        values: parameters,
        covariance: variance.map(scaled),
        held,
        untold: undetermined,
        degrees_of_freedom,

        residuals,
        weights,
        deviation: estimated.map(|estimated| robust.map_or(estimated.sqrt(), |(scale, _)| scale)),
        settled,
    })
}

impl Estimates {
    /// The standard uncertainty of a parameter; nothing where the measurements leave it open.
    pub fn standard(&self, index: usize) -> Option<f64> {
        let variance = *self.covariance.as_ref()?.get(index)?.get(index)?;
        (!self.held[index] && !self.untold[index]).then(|| variance.sqrt())
    }

    /// The correlation of two parameters; nothing where one has no standard uncertainty.
    pub fn correlation(&self, one: usize, other: usize) -> Option<f64> {
        let scale = self.standard(one)? * self.standard(other)?;
        let covariance = self.covariance.as_ref()?[one][other];
        (scale > 0.0).then(|| if one == other { 1.0 } else { (covariance / scale).clamp(-1.0, 1.0) })
    }

    /// The same fit told by other numbers, of which each moves with each parameter by `slopes[number][parameter]`.
    ///
    /// ```text
    /// V′ = S V Sᵀ
    /// ```
    ///
    /// Each new number stands for the parameter of its index: it is held or untold where that is.
    ///
    /// Source: JCGM 102:2011, 6.2.
    pub fn told_by(self, values: Vec<f64>, slopes: &[Vec<f64>]) -> Estimates {
        let turned = |covariance: Vec<Vec<f64>>| {
            let cell = |one: &Vec<f64>, other: &Vec<f64>| {
                let row = |(a, row): (&f64, &Vec<f64>)| {
                    a * row.iter().zip(other).map(|(cell, b)| cell * b).sum::<f64>()
                };
                one.iter().zip(&covariance).map(row).sum::<f64>()
            };
            slopes.iter().map(|one| slopes.iter().map(|other| cell(one, other)).collect()).collect()
        };
        Estimates { values, covariance: self.covariance.map(turned), ..self }
    }
}
