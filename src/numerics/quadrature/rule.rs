//! The Gauss-Kronrod rule of 21 points and the error that QUADPACK derives from it.

/// Number of integrand values one application takes.
pub(super) const POINTS: usize = 21;

/// Abscissae on (0, 1) with their Kronrod and Gauss weights; the Gauss weight is zero at the points Kronrod added.
/// Roots of the Legendre polynomial P10 and of its Stieltjes polynomial, and the weights exact for powers to 31;
/// computed with sixty digits.
const NODES: [(f64, f64, f64); 10] = [
    (
        0.148_874_338_981_631_22,
        0.147_739_104_901_338_5,
        0.295_524_224_714_752_87,
    ),
    (0.294_392_862_701_460_2, 0.142_775_938_577_060_09, 0.0),
    (
        0.433_395_394_129_247_2,
        0.134_709_217_311_473_34,
        0.269_266_719_309_996_35,
    ),
    (0.562_757_134_668_604_7, 0.123_491_976_262_065_84, 0.0),
    (
        0.679_409_568_299_024_4,
        0.109_387_158_802_297_64,
        0.219_086_362_515_982_04,
    ),
    (0.780_817_726_586_416_9, 0.093_125_454_583_697_6, 0.0),
    (
        0.865_063_366_688_984_5,
        0.075_039_674_810_919_96,
        0.149_451_349_150_580_6,
    ),
    (0.930_157_491_355_708_2, 0.054_755_896_574_352, 0.0),
    (
        0.973_906_528_517_171_7,
        0.032_558_162_307_964_725,
        0.066_671_344_308_688_14,
    ),
    (0.995_657_163_025_808_1, 0.011_694_638_867_371_874, 0.0),
];
/// Kronrod weight of the midpoint, which is no Gauss point.
const MIDDLE: f64 = 0.149_445_554_002_916_9;

/// One interval with what the rule says of the integral over it.
#[derive(Clone, Copy, Debug)]
pub(super) struct Panel {
    pub from: f64,
    pub to: f64,
    pub value: f64,
    pub error: f64,
    /// The part of the error that rounding is answerable for, which no bisection removes.
    pub rounding: f64,
    /// The integral of the integrand's modulus.
    pub magnitude: f64,
    /// How many of the bisections that led here have not reduced the error.
    pub stalled: u8,
}

impl Panel {
    /// Nothing looked at.
    pub(super) const EMPTY: Self = Self {
        from: 0.0,
        to: 0.0,
        value: 0.0,
        error: 0.0,
        rounding: 0.0,
        magnitude: 0.0,
        stalled: 0,
    };

    /// Applies the rule; `None` when the integrand is not finite at one of its points.
    ///
    /// The error is |Kronrod - Gauss| brought to scale by the integral of |f - mean|, at least fifty rounding units
    /// of the magnitude (Piessens, de Doncker-Kapenga, Überhuber and Kahaner 1983, "QUADPACK", section 2.2.4.1). To
    /// this we add what the rounding of the abscissae does to the values, one unit times the integrand's variation:
    /// it rules narrow peaks far from zero.
    pub(super) fn new(f: &mut impl FnMut(f64) -> f64, from: f64, to: f64) -> Option<Self> {
        Self::from_values(&abscissae(from, to).map(f), from, to)
    }

    /// The same from the values at [`abscissae`].
    pub(super) fn from_values(values: &[f64; POINTS], from: f64, to: f64) -> Option<Self> {
        let half = 0.5 * to - 0.5 * from;
        let [at_centre, pairs @ ..] = values;
        let (pairs, _) = pairs.as_chunks::<2>();
        let (mut kronrod, mut gauss, mut magnitude) = (MIDDLE * at_centre, 0.0, MIDDLE * at_centre.abs());
        let (mut variation, mut inner) = (0.0, (*at_centre, *at_centre));
        for ((_, weight, gauss_weight), &[below, above]) in NODES.iter().zip(pairs) {
            kronrod += weight * (below + above);
            gauss += gauss_weight * (below + above);
            magnitude += weight * (below.abs() + above.abs());
            variation += (below - inner.0).abs() + (above - inner.1).abs();
            inner = (below, above);
        }
        let mean = 0.5 * kronrod;
        let spread = NODES.iter().zip(pairs).fold(
            MIDDLE * (at_centre - mean).abs(),
            |sum, ((_, weight, _), [below, above])| sum + weight * ((below - mean).abs() + (above - mean).abs()),
        );
        let difference = (kronrod - gauss).abs();
        let truncation = if spread > 0.0 {
            let ratio = 200.0 * difference / spread;
            spread * (ratio * ratio.sqrt()).min(1.0)
        } else {
            difference
        };
        let rounding = f64::EPSILON * (50.0 * (half * magnitude) + from.abs().max(to.abs()) * variation);
        let panel = Self {
            from,
            to,
            value: half * kronrod,
            error: (half * truncation).max(rounding),
            rounding,
            magnitude: half * magnitude,
            stalled: 0,
        };
        (panel.value.is_finite() && panel.error.is_finite() && panel.magnitude.is_finite()).then_some(panel)
    }

    /// Notes in the halves of a bisection whether it has served: QUADPACK's sign of noise is that the halves agree with
    /// the whole, and yet the error has not fallen.
    pub(super) fn halved(&self, left: &mut Self, right: &mut Self) {
        let (value, error) = (left.value + right.value, left.error + right.error);
        let noise = (self.value - value).abs() <= 1e-5 * value.abs() && error >= 0.99 * self.error;
        left.stalled = self.stalled + u8::from(noise);
        right.stalled = left.stalled;
    }

    /// The midpoint, if bisection can still help: not once the error is all rounding, or has failed to fall too
    /// often, or when no room is left between the ends.
    pub(super) fn midpoint(&self) -> Option<f64> {
        /// Bisections without effect after which the integrand's own noise is what remains.
        const PATIENCE: u8 = 4;
        let middle = 0.5 * self.from + 0.5 * self.to;
        let room = (self.to - self.from) > 8.0 * f64::EPSILON * self.from.abs().max(self.to.abs());
        (room && self.error > self.rounding && self.stalled < PATIENCE && middle > self.from && middle < self.to)
            .then_some(middle)
    }
}

/// The points at which the rule wants the integrand between two ends: the middle, then pairs from the inside out.
pub(super) fn abscissae(from: f64, to: f64) -> [f64; POINTS] {
    let centre = 0.5 * from + 0.5 * to;
    let half = 0.5 * to - 0.5 * from;
    let mut points = [centre; POINTS];
    let (pairs, _) = points[1..].as_chunks_mut::<2>();
    for ((node, _, _), pair) in NODES.iter().zip(pairs) {
        *pair = [centre - half * node, centre + half * node];
    }
    points
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_rule_is_exact_for_powers_to_31_and_its_gauss_part_to_19() {
        for power in 0..=31 {
            let exact = if power % 2 == 0 {
                2.0 / f64::from(power + 1)
            } else {
                0.0
            };
            let panel = Panel::new(&mut |x: f64| x.powi(power), -1.0, 1.0).expect("powers are finite");
            assert!((panel.value - exact).abs() < 3e-16, "power {power}: {}", panel.value);
            if power % 2 == 0 && power < 20 {
                let gauss: f64 = NODES
                    .iter()
                    .map(|(node, _, weight)| 2.0 * weight * node.powi(power))
                    .sum();
                assert!((gauss - exact).abs() < 3e-16, "power {power}: {gauss}");
            }
        }
    }
}
