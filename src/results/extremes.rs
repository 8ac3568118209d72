//! The extremes of a margin over a time.

use super::number::Real;
use super::{ExtremeLevel, Extremes};
use crate::check::{ExtremeQuantity, LimitState};
use crate::reliability::crossings::GaussianMargin;
use crate::reliability::extremes::Extreme;
use crate::reliability::probability::Probability;

/// What is asked of an extreme, in the margin's SI unit; `None` where it does not exist.
pub(super) fn quantity(
    margin: &GaussianMargin,
    limit_state: &LimitState,
    quantity: ExtremeQuantity,
    time: f64,
) -> Option<f64> {
    let extreme = Extreme::new(margin, limit_state.region, limit_state.method, time)?;
    match quantity {
        ExtremeQuantity::Mean => Some(extreme.mean()?.0),
        ExtremeQuantity::Beyond(probability) => extreme.level_beyond(probability),
    }
}

/// The extremes over the reference period, where the limit state asks for them.
pub(super) fn over_the_reference_period(margin: &GaussianMargin, limit_state: &LimitState) -> Option<Extremes> {
    let fractiles = limit_state.extremes.as_ref()?;
    let found = |asked| quantity(margin, limit_state, asked, limit_state.reference_period.seconds).and_then(Real::new);
    let level = |fractile: &f64| {
        let probability = Probability::from_logarithms((-fractile).ln_1p(), fractile.ln());
        ExtremeLevel {
            fractile: *fractile,
            level: found(ExtremeQuantity::Beyond(probability)),
        }
    };
    Some(Extremes {
        mean: found(ExtremeQuantity::Mean),
        levels: fractiles.iter().map(level).collect(),
    })
}
