//! Powers that the equations need, built from roots that round the same everywhere wherever a root will do.

/// x^1.5.
pub(super) fn three_halves(x: f64) -> f64 {
    x * x.sqrt()
}

/// x^2.5.
pub(super) fn five_halves(x: f64) -> f64 {
    x * x * x.sqrt()
}

/// x^1.25.
pub(super) fn five_quarters(x: f64) -> f64 {
    x * x.sqrt().sqrt()
}

/// x^(2/3).
pub(super) fn two_thirds(x: f64) -> f64 {
    let root = x.cbrt();
    root * root
}

/// x^(4/3).
pub(super) fn four_thirds(x: f64) -> f64 {
    x * x.cbrt()
}

/// x^(5/3).
pub(super) fn five_thirds(x: f64) -> f64 {
    x * two_thirds(x)
}

/// x^(8/3).
pub(super) fn eight_thirds(x: f64) -> f64 {
    x * x * two_thirds(x)
}

/// x to a power that a source prints as a decimal, fitted to its tests or rounded.
#[expect(clippy::disallowed_methods, reason = "the published exponent is a fitted decimal; no chain of roots gives it")]
pub(super) fn fitted(x: f64, exponent: f64) -> f64 {
    x.powf(exponent)
}
