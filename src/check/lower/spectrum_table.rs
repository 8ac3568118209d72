//! `tabulated("file.csv", ...)` as a spectrum.

use super::table::{Column, Columns, Demanded, MOST_FINDINGS};
use super::{Lowering, spectrum};
use crate::check::value::{Area, Density, Value};
use crate::covariance::kernel::Beyond;
use crate::covariance::spectrum::{Interpolation, InvalidTable, Spectrum, Tabulated};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, Expression};
use crate::source::{FileId, Span};
use crate::units::{Dimension, show_number};
use spectrum::Frequency;
use std::rc::Rc;

/// The content of a spectrum's table, in SI units.
pub(super) struct Table {
    /// The file as the model names it.
    name: String,
    /// Frequency in rad/s, density per rad/s, and where the row stands.
    rows: Vec<(f64, f64, Span)>,
    /// The dimension of the density.
    dimension: Dimension,
}

const COLUMNS: [Column; 2] = [
    Column {
        name: "frequency",
        dimension: Demanded::Exactly(Dimension::ANGULAR_FREQUENCY),
    },
    Column {
        name: "density",
        dimension: Demanded::PerFrequency,
    },
];

impl Lowering<'_, '_, '_> {
    /// `tabulated("file.csv", beyond: POLICY, interpolation: log)`
    pub(super) fn tabulated_spectrum(&mut self, call: &Call) -> Option<Value> {
        let arguments = self.arguments(call, &["the name of a file"], &["beyond", "interpolation"])?;
        let beyond = self.beyond(call, &arguments);
        let interpolation = self.interpolation(&arguments);
        let file = arguments.subjects.first().copied()?;
        let table = self.spectrum_table(file);
        let (beyond, interpolation, table) = (beyond?, interpolation?, table?);
        let rows = table
            .rows
            .iter()
            .map(|(frequency, density, _)| (*frequency, *density))
            .collect();
        match Tabulated::new(table.name.clone(), rows, beyond, interpolation) {
            Ok(spectrum) => Some(Value::Spectrum(Density {
                spectrum: spectrum.into(),
                dimension: table.dimension,
                area: Area::Open,
            })),
            Err(why) => {
                self.unusable_table(&table, &why, file.span);
                None
            }
        }
    }

    /// What depends on how the table is read: the row, or the call where no row is at fault.
    fn unusable_table(&mut self, table: &Table, why: &InvalidTable, named: Span) {
        let row = match why {
            InvalidTable::NotRising { row }
            | InvalidTable::Negative { row }
            | InvalidTable::NoLogarithm { row }
            | InvalidTable::Open { row } => table.rows.get(*row),
            InvalidTable::Short | InvalidTable::Empty => None,
        };
        let mut finding = match row {
            Some((_, _, place)) => {
                Diagnostic::new(Code::TableContent, *place, why.to_string()).label(named, "the file is named here")
            }
            None => Diagnostic::new(Code::TableContent, named, why.to_string()),
        };
        finding.help = match why {
            InvalidTable::Open { .. } => Some(
                "say what holds beyond: `beyond: zero` or `beyond: hold`, or measure until nothing is left".to_string(),
            ),
            InvalidTable::NoLogarithm { .. } => {
                Some("leave the row out, or `interpolation: log`: straight lines may reach 0".to_string())
            }
            _ => None,
        };
        self.report(finding);
    }

    /// The table of a spectrum. Read once; its faults are reported once.
    fn spectrum_table(&mut self, file: &Expression) -> Option<Rc<Table>> {
        let (text, path) = self.file_named(file)?;
        let identity = self.library.reader().identity(&path);
        if let Some(known) = self.spectrum_tables.get(&identity) {
            return known.clone();
        }
        let file = self.data(&path, text.span);
        let table = file.and_then(|file| self.read_spectrum_table(file, &text.value, text.span));
        let table = table.map(Rc::new);
        self.spectrum_tables.insert(identity, table.clone());
        table
    }

    fn read_spectrum_table(&mut self, file: FileId, name: &str, named: Span) -> Option<Table> {
        let Columns {
            values: [frequencies, densities],
            units,
            head,
        } = self.columns(file, named, &COLUMNS)?;
        let rows: Vec<(f64, f64, Span)> = frequencies
            .into_iter()
            .zip(densities)
            .map(|((frequency, place), (density, _))| (frequency, density, place))
            .collect();
        let before = self.diagnostics.len();
        let mut last = None;
        for (frequency, density, place) in &rows {
            if self.diagnostics.len() >= before + MOST_FINDINGS {
                break;
            }
            if last.is_some_and(|last| *frequency <= last) {
                self.table_fault(
                    *place,
                    named,
                    "the frequencies must grow from row to row: this one does not",
                );
            } else if *frequency < 0.0 {
                self.table_fault(*place, named, "a one-sided spectrum has no negative frequency");
            }
            if *density < 0.0 {
                self.table_fault(*place, named, "a spectral density is never negative: this one is");
            }
            last = Some(*frequency);
        }
        if rows.len() < 2 {
            self.table_fault(head, named, &InvalidTable::Short.to_string());
        }
        if self.diagnostics.len() > before {
            return None;
        }
        if let [frequency, density] = units.as_slice() {
            self.mixed_units(frequency.text(), density.text(), head, named);
        }
        Some(Table {
            name: name.to_string(),
            rows,
            dimension: units.get(1)?.dimension(),
        })
    }

    /// A table over rad/s whose density is per Hz, or the reverse: right if its header is, and seldom meant.
    fn mixed_units(&mut self, frequency: &str, density: &str, head: Span, named: Span) {
        let cycles = ["Hz", "rpm", "turn"];
        let in_cycles = |text: &str| cycles.iter().any(|unit| text.contains(unit));
        let (over, per) = (in_cycles(frequency), in_cycles(density));
        if over == per || !(density.contains("rad") || per) {
            return;
        }
        let message = format!("this table is over {frequency}, but its density is {density}");
        self.report(
            Diagnostic::new(Code::SpectrumMixed, head, message)
                .label(named, "the file is named here")
                .help("if one column alone was converted, the variance is wrong by 2 pi: write both in Hz or both in rad/s"),
        );
    }
}

/// What the tables in a spectrum take for granted beyond their rows, and what share of the variance that is.
pub(super) fn table_notes(spectrum: &Spectrum, process: &str) -> Vec<String> {
    match spectrum {
        Spectrum::Tabulated(table) => vec![table_note(table, process)],
        Spectrum::Scaled(_, inner) => table_notes(inner, process),
        Spectrum::Sum(parts) => parts.iter().flat_map(|part| table_notes(part, process)).collect(),
        Spectrum::Family(_) | Spectrum::User(_) => Vec::new(),
    }
}

fn table_note(table: &Tabulated, process: &str) -> String {
    let ((first, low), (last, high)) = (table.first(), table.last());
    let (from, to) = (Frequency::Hertz.show(first), Frequency::Hertz.show(last));
    let between = match table.interpolation() {
        Interpolation::Linear => "with straight lines between its rows",
        Interpolation::Logarithmic => "with straight lines between its rows in log-log",
    };
    let share = |area: f64| format!("{} %", show_number(100.0 * area / table.area(), 2));
    // A constant down to 0, and a fall as omega^-2 from the last row on: what the measurement may have missed.
    let (below, above) = (first * low, last * high);
    let what = match table.beyond() {
        Beyond::Zero => format!(
            "is taken as 0 below {from} and above {to}; held constant below it would have {} more variance, and falling \
             as the inverse square of the frequency above {} more",
            share(below),
            share(above)
        ),
        Beyond::Hold if high > 0.0 => {
            format!("is held constant below {from} and above {to}, so that its variance is infinite")
        }
        Beyond::Hold => format!(
            "is held constant below {from}, which makes {} % of its variance, and is 0 above {to}",
            show_number(100.0 * below / (table.area() + below), 2)
        ),
        Beyond::Refuse => format!("ends at 0, at {from} and at {to}, so that nothing depends on what lies beyond"),
    };
    format!("The tabulated spectrum of {process}, {between}, {what}.")
}
