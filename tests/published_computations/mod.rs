//! What the cases in `tests/published/` may ask for, by name.

mod bias;
mod counting;
mod device;
mod door;
mod light;
mod log;
mod mathematics;
mod receiver;
mod transfer;

use crate::support::cases::Computation;

/// Everything that a case may ask for.
pub fn all() -> Vec<(&'static str, Computation)> {
    [
        bias::ALL,
        counting::ALL,
        device::ALL,
        door::ALL,
        light::ALL,
        log::ALL,
        mathematics::ALL,
        receiver::ALL,
        transfer::ALL,
    ]
    .concat()
}
