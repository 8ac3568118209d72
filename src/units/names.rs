//! What a dimension is called: in the words of the field, and by its coherent SI unit.

use super::dimension::{Base, Dimension, Exponent, quotient};
use super::spelling::spell;

/// A dimension with a name of its own.
struct Named {
    dimension: Dimension,
    words: &'static str,
    /// The leading unit of its SI name, where the shortest spelling is not the customary one.
    leading: Option<&'static str>,
}

const fn named(dimension: Dimension, words: &'static str) -> Named {
    Named {
        dimension,
        words,
        leading: None,
    }
}

static NAMED: [Named; 45] = [
    named(Dimension::PLAIN, "a plain number"),
    named(Dimension::LENGTH, "a length"),
    named(Dimension::MASS, "a mass"),
    named(Dimension::TIME, "a time"),
    named(Dimension::ANGLE, "an angle"),
    named(Dimension::AREA, "an area"),
    named(Dimension::VOLUME, "a volume"),
    named(Dimension::of(4, 0, 0, 0, 0), "a second moment of area (length^4)"),
    named(Dimension::of(-1, 0, 0, 0, 0), "a curvature or wave number (1/length)"),
    named(Dimension::of(-1, 0, 0, 0, 1), "a rotation per length (angle/length)"),
    named(Dimension::SPEED, "a speed"),
    named(Dimension::ACCELERATION, "an acceleration"),
    named(Dimension::RATE, "a rate (1/time)"),
    named(Dimension::ANGULAR_FREQUENCY, "an angular frequency (angle/time)"),
    named(Dimension::of(0, 0, -2, 0, 1), "an angular acceleration (angle/time^2)"),
    named(
        Dimension::of(0, 0, 1, 0, -1),
        "a time per angle (spectral density of a plain number)",
    ),
    named(
        Dimension::of(2, 0, 1, 0, -1),
        "a spectral density of length (length^2*time/angle)",
    ),
    named(
        Dimension::of(2, 0, -1, 0, -1),
        "a spectral density of speed (speed^2*time/angle)",
    ),
    named(
        Dimension::of(2, 0, -3, 0, -1),
        "a spectral density of acceleration (acceleration^2*time/angle)",
    ),
    named(
        Dimension::of(2, 2, -3, 0, -1),
        "a spectral density of force (force^2*time/angle)",
    ),
    named(
        Dimension::of(-2, 2, -3, 0, -1),
        "a spectral density of stress (stress^2*time/angle)",
    ),
    named(Dimension::FORCE, "a force"),
    named(Dimension::STRESS, "a stress"),
    named(Dimension::STIFFNESS, "a stiffness (force/length)"),
    named(Dimension::MOMENT, "a moment (force*length)"),
    named(Dimension::of(2, 1, -2, 0, -1), "a rotational stiffness (moment/angle)"),
    named(Dimension::of(3, 1, -2, 0, 0), "a bending stiffness (force*length^2)"),
    Named {
        dimension: Dimension::of(-2, 1, -2, 0, 0),
        words: "a specific weight (force/volume)",
        leading: Some("N"),
    },
    named(Dimension::of(1, 1, -1, 0, 0), "an impulse (force*time)"),
    named(Dimension::of(1, 1, -3, 0, 0), "a force rate (force/time)"),
    named(Dimension::of(-1, 1, -3, 0, 0), "a stress rate (stress/time)"),
    named(Dimension::of(-1, 1, -1, 0, 0), "a viscosity (stress*time)"),
    Named {
        dimension: Dimension::of(0, 1, -1, 0, 0),
        words: "a damping coefficient (force*time/length)",
        leading: Some("N"),
    },
    named(Dimension::of(-3, 1, 0, 0, 0), "a density (mass/volume)"),
    named(Dimension::of(-2, 1, 0, 0, 0), "a mass per area"),
    named(Dimension::of(-1, 1, 0, 0, 0), "a mass per length"),
    named(Dimension::of(2, 1, 0, 0, 0), "a mass moment of inertia (mass*length^2)"),
    named(Dimension::POWER, "a power"),
    named(Dimension::CURRENT, "an electric current"),
    named(Dimension::of(0, 0, 1, 1, 0), "an electric charge"),
    named(Dimension::of(2, 1, -3, -1, 0), "a voltage"),
    named(Dimension::of(2, 1, -3, -2, 0), "an electric resistance"),
    named(Dimension::of(-2, -1, 4, 2, 0), "a capacitance"),
    named(Dimension::of(2, 1, -2, -2, 0), "an inductance"),
    named(Dimension::of(0, 1, -2, -1, 0), "a magnetic flux density"),
];

/// A unit, with its quantity, that may lead the spelling of a dimension, taken to the power that uses up the mass
/// (without mass, the current).
struct Leading {
    symbol: &'static str,
    word: &'static str,
    dimension: Dimension,
}

const fn leading(symbol: &'static str, word: &'static str, dimension: Dimension) -> Leading {
    Leading {
        symbol,
        word,
        dimension,
    }
}

/// Earlier ones win where two spellings are as easy to read. The plain number stands for none: the base
/// units alone.
static LEADING: [Leading; 12] = [
    leading("N", "force", Dimension::FORCE),
    leading("Pa", "stress", Dimension::STRESS),
    leading("", "", Dimension::PLAIN),
    leading("W", "power", Dimension::POWER),
    leading("C", "charge", Dimension::of(0, 0, 1, 1, 0)),
    leading("V", "voltage", Dimension::of(2, 1, -3, -1, 0)),
    leading("ohm", "resistance", Dimension::of(2, 1, -3, -2, 0)),
    leading("S", "conductance", Dimension::of(-2, -1, 3, 2, 0)),
    leading("F", "capacitance", Dimension::of(-2, -1, 4, 2, 0)),
    leading("H", "inductance", Dimension::of(2, 1, -2, -2, 0)),
    leading("Wb", "flux", Dimension::of(2, 1, -2, -1, 0)),
    leading("T", "flux density", Dimension::of(0, 1, -2, -1, 0)),
];

/// A factor of a spelling: unit symbol, word, power.
type Spelt = (&'static str, &'static str, Exponent);

impl Dimension {
    /// What it is called: "a force", "a rate (1/time)"; without a name of its own "something of dimension force^2/length".
    pub fn describe(self) -> String {
        match NAMED.iter().find(|named| named.dimension == self) {
            Some(named) => named.words.to_owned(),
            None => {
                let factors = self.spelling();
                let words = factors.iter().map(|&(_, word, power)| (word, power));
                format!("something of dimension {}", spell(words, "1"))
            }
        }
    }

    /// Its coherent SI unit in the unit syntax of the language: `N`, `N*m`, `m/s^2`, `rad/s`, `1/s`, `1`. With whole
    /// exponents it reads back as a unit of this dimension and of size 1; the language has no spelling for others, which
    /// show as `Pa*m^(1/2)`.
    pub fn si_name(self) -> String {
        spell(self.si_factors().into_iter(), "1")
    }

    /// The factors of [`Self::si_name`].
    pub(super) fn si_factors(self) -> Vec<(&'static str, Exponent)> {
        self.spelling()
            .into_iter()
            .map(|(symbol, _, power)| (symbol, power))
            .collect()
    }

    /// The spelling with the fewest factors, and of these the one with the smallest powers.
    fn spelling(self) -> Vec<Spelt> {
        let customary = NAMED
            .iter()
            .find(|named| named.dimension == self)
            .and_then(|named| named.leading);
        let eligible = LEADING
            .iter()
            .filter(|leading| customary.is_none_or(|symbol| symbol == leading.symbol));
        let spellings = eligible.filter_map(|leading| self.led_by(leading));
        spellings
            .min_by(|a, b| effort(a).total_cmp(&effort(b)))
            .unwrap_or_else(|| self.in_base_units())
    }

    /// The spelling with this leading unit, unless it would not occur in it.
    fn led_by(self, leading: &Leading) -> Option<Vec<Spelt>> {
        if leading.dimension.is_plain() {
            return Some(self.in_base_units());
        }
        let pivot = if leading.dimension.exponent(Base::Mass) == Exponent::from_integer(0) {
            Base::Current
        } else {
            Base::Mass
        };
        let power = quotient(self.exponent(pivot), leading.dimension.exponent(pivot))?;
        if *power.numer() == 0 {
            return None;
        }
        let rest = self.over(leading.dimension.power(power)?)?;
        let mut factors = vec![(leading.symbol, leading.word, power)];
        factors.extend(rest.in_base_units());
        Some(factors)
    }

    fn in_base_units(self) -> Vec<Spelt> {
        let factor = |base| {
            let (symbol, word) = match base {
                Base::Length => ("m", "length"),
                Base::Mass => ("kg", "mass"),
                Base::Time => ("s", "time"),
                Base::Current => ("A", "current"),
                Base::Angle => ("rad", "angle"),
            };
            (symbol, word, self.exponent(base))
        };
        let order = [Base::Mass, Base::Length, Base::Time, Base::Current, Base::Angle];
        order
            .map(factor)
            .into_iter()
            .filter(|(_, _, power)| *power.numer() != 0)
            .collect()
    }
}

/// How hard a spelling is to read: a factor more outweighs any powers, and a reciprocal alone (`1/ohm`) comes after a
/// unit of its own (`S`).
fn effort(factors: &[Spelt]) -> f64 {
    const FACTOR: f64 = 1e6;
    let size = |power: &Exponent| f64::from(power.numer().unsigned_abs()) / f64::from(*power.denom());
    let powers: f64 = factors.iter().map(|(_, _, power)| size(power)).sum();
    let reciprocal = matches!(factors, [(_, _, power)] if *power.numer() < 0);
    FACTOR * factors.len() as f64 + powers + f64::from(u8::from(reciprocal))
}
