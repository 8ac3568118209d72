//! Conversion factors of NIST Special Publication 811, Guide for the Use of the International System of Units (SI), 2008
//! edition, Appendix B.8, from memory. The publication prints seven significant digits, of which exact factors need
//! fewer or which they exceed; each is compared to those seven.

use outcross::language::tree::{UnitExpression, UnitFactor, Word};
use outcross::source::{FileId, Span};
use outcross::units::resolve;

/// The name in the publication, the unit here, the factor to the coherent SI unit, that unit here.
type Row = (&'static str, &'static [(&'static str, i32)], &'static str, &'static str);

const TABLE: &[Row] = &[
    ("bar", &[("bar", 1)], "1.000000e5", "Pa"),
    ("day", &[("day", 1)], "8.640000e4", "s"),
    ("degree (angle)", &[("deg", 1)], "1.745329e-2", "rad"),
    ("foot", &[("ft", 1)], "3.048000e-1", "m"),
    ("foot per second", &[("ft", 1), ("s", -1)], "3.048000e-1", "m/s"),
    ("foot pound-force", &[("ft", 1), ("lbf", 1)], "1.355818e0", "N*m"),
    ("foot to the fourth power", &[("ft", 4)], "8.630975e-3", "m^4"),
    ("hour", &[("h", 1)], "3.600000e3", "s"),
    ("inch", &[("in", 1)], "2.540000e-2", "m"),
    ("inch to the fourth power", &[("in", 4)], "4.162314e-7", "m^4"),
    ("cubic inch", &[("in", 3)], "1.638706e-5", "m^3"),
    ("cubic foot", &[("ft", 3)], "2.831685e-2", "m^3"),
    ("square foot", &[("ft", 2)], "9.290304e-2", "m^2"),
    ("kilogram-force", &[("kg", 1), ("g_n", 1)], "9.806650e0", "N"),
    ("kilometer per hour", &[("km", 1), ("h", -1)], "2.777778e-1", "m/s"),
    ("kilowatt hour", &[("kW", 1), ("h", 1)], "3.600000e6", "N*m"),
    ("kip", &[("kip", 1)], "4.448222e3", "N"),
    ("kip per square inch", &[("ksi", 1)], "6.894757e6", "Pa"),
    ("knot", &[("kn", 1)], "5.144444e-1", "m/s"),
    ("liter", &[("L", 1)], "1.000000e-3", "m^3"),
    ("mile", &[("mi", 1)], "1.609344e3", "m"),
    ("mile per hour", &[("mph", 1)], "4.470400e-1", "m/s"),
    ("minute", &[("min", 1)], "6.000000e1", "s"),
    ("pound", &[("lb", 1)], "4.535924e-1", "kg"),
    ("pound foot squared", &[("lb", 1), ("ft", 2)], "4.214011e-2", "kg*m^2"),
    ("pound per cubic foot", &[("lb", 1), ("ft", -3)], "1.601846e1", "kg/m^3"),
    ("pound per cubic inch", &[("lb", 1), ("in", -3)], "2.767990e4", "kg/m^3"),
    ("pound per foot", &[("lb", 1), ("ft", -1)], "1.488164e0", "kg/m"),
    ("pound-force", &[("lbf", 1)], "4.448222e0", "N"),
    ("pound-force inch", &[("lbf", 1), ("in", 1)], "1.129848e-1", "N*m"),
    ("pound-force per foot", &[("lbf", 1), ("ft", -1)], "1.459390e1", "N/m"),
    ("pound-force per inch", &[("lbf", 1), ("in", -1)], "1.751268e2", "N/m"),
    (
        "pound-force per square foot",
        &[("lbf", 1), ("ft", -2)],
        "4.788026e1",
        "Pa",
    ),
    ("pound-force per square inch", &[("psi", 1)], "6.894757e3", "Pa"),
    ("the same, spelt out", &[("lbf", 1), ("in", -2)], "6.894757e3", "Pa"),
    ("revolution", &[("turn", 1)], "6.283185e0", "rad"),
    ("revolution per minute", &[("rpm", 1)], "1.047198e-1", "rad/s"),
    (
        "acceleration of free fall, standard",
        &[("g_n", 1)],
        "9.806650e0",
        "m/s^2",
    ),
    ("tonne", &[("t", 1)], "1.000000e3", "kg"),
    ("yard", &[("yd", 1)], "9.144000e-1", "m"),
];

#[test]
fn conversion_factors() {
    for (name, factors, published, si_name) in TABLE {
        let span = Span::new(FileId(0), 0, 0);
        let factor = |&(symbol, power): &(&str, i32)| UnitFactor {
            symbol: Word {
                text: symbol.into(),
                span,
            },
            power,
        };
        let expression = UnitExpression {
            span,
            factors: factors.iter().map(factor).collect(),
        };
        let unit = resolve(&expression).expect(name);
        assert_eq!(format!("{:.6e}", unit.to_si(1.0)), *published, "{name}");
        assert_eq!(unit.dimension().si_name(), *si_name, "{name}");
    }
}
