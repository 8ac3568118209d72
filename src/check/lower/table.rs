//! Data files: CSV with a header of `name [unit]`, `#` comments, numbers below.

use super::Lowering;
use crate::check::names::{choice, near};
use crate::check::parts::unreadable;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::parse_expression;
use crate::language::tree::{Expression, ExpressionKind, Text};
use crate::source::{FileId, Span, beside};
use crate::units::{self, Base, Dimension, Unit};
use std::path::{Path, PathBuf};
use std::rc::Rc;

/// Rows of one file; more are refused.
const MOST_ROWS: usize = 1_000_000;

/// Findings in one file; further rows are not looked at.
pub(super) const MOST_FINDINGS: usize = 20;

/// The content of a kernel's table, in SI units.
pub(super) struct Table {
    /// The file as the model names it.
    pub name: String,
    /// Lag in s and correlation, the lags ascending from 0.
    pub rows: Vec<(f64, f64)>,
}

/// A column that a table must have.
pub(super) struct Column {
    pub name: &'static str,
    pub dimension: Demanded,
}

/// The dimension that a column must have.
pub(super) enum Demanded {
    Exactly(Dimension),
    /// Something per Hz or per rad/s.
    PerFrequency,
    /// Any: it says what the table is of.
    Any,
}

/// The columns of a file in SI units, each number with its place, and the units they were written in.
pub(super) struct Columns<const N: usize> {
    pub values: [Vec<(f64, Span)>; N],
    pub units: Vec<Rc<Unit>>,
    /// The row of names.
    pub head: Span,
}

const KERNEL_COLUMNS: [Column; 2] = [
    Column {
        name: "lag",
        dimension: Demanded::Exactly(Dimension::TIME),
    },
    Column {
        name: "correlation",
        dimension: Demanded::Exactly(Dimension::PLAIN),
    },
];

impl Lowering<'_, '_, '_> {
    /// The table of a `tabulated("file.csv", ...)` kernel. Read once; its faults are reported once.
    pub(super) fn kernel_table(&mut self, file: &Expression) -> Option<Rc<Table>> {
        let (text, path) = self.file_named(file)?;
        let identity = self.library.reader().identity(&path);
        if let Some(known) = self.tables.get(&identity) {
            return known.clone();
        }
        let file = self.data(&path, text.span);
        let table = file.and_then(|file| self.read_kernel_table(file, &text.value, text.span));
        let table = table.map(Rc::new);
        self.tables.insert(identity, table.clone());
        table
    }

    /// The text that names a file, and the path that it means.
    pub(super) fn file_named<'t>(&mut self, file: &'t Expression) -> Option<(&'t Text, PathBuf)> {
        let ExpressionKind::String(text) = &file.kind else {
            let help = "write the name in quotes: `tabulated(\"file.csv\", beyond: zero)`";
            self.wrong_kind(file.span, "no text", "the name of a file", help);
            return None;
        };
        match beside(&self.library.files().get(file.span.file).path, &text.value) {
            Ok(path) => Some((text, path)),
            Err(why) => {
                self.report(unreadable(text.span, Path::new(&*text.value), &why));
                None
            }
        }
    }

    /// A data file; that it cannot be read is reported.
    pub(super) fn data(&mut self, path: &Path, named: Span) -> Option<FileId> {
        match self.library.data(path) {
            Ok(id) => Some(id),
            Err(why) => {
                self.report(unreadable(named, path, &why));
                None
            }
        }
    }

    fn read_kernel_table(&mut self, file: FileId, name: &str, named: Span) -> Option<Table> {
        let [lags, correlations] = self.columns(file, named, &KERNEL_COLUMNS)?.values;
        let rows: Vec<(f64, f64, Span)> = lags
            .into_iter()
            .zip(correlations)
            .map(|((lag, place), (correlation, _))| (lag, correlation, place))
            .collect();
        let before = self.diagnostics.len();
        match rows.first() {
            Some((lag, correlation, place)) if *lag != 0.0 || (correlation - 1.0).abs() > 1e-9 => {
                self.table_fault(
                    *place,
                    named,
                    "the first row of a kernel's table must be lag 0 with correlation 1",
                );
            }
            _ => {}
        }
        if rows.len() < 3 {
            let end = Span::new(file, 0, 0);
            self.table_fault(end, named, "a kernel's table needs at least three rows");
        }
        for pair in rows.windows(2) {
            if let [(earlier, _, _), (later, _, place)] = pair
                && later <= earlier
                && self.diagnostics.len() < before + MOST_FINDINGS
            {
                self.table_fault(*place, named, "the lags must grow from row to row: this one does not");
            }
        }
        for (_, correlation, place) in &rows {
            if correlation.abs() > 1.0 + 1e-9 && self.diagnostics.len() < before + MOST_FINDINGS {
                self.table_fault(*place, named, "a correlation lies between -1 and 1: this one does not");
            }
        }
        (self.diagnostics.len() == before).then(|| Table {
            name: name.to_string(),
            rows: rows.iter().map(|(lag, correlation, _)| (*lag, *correlation)).collect(),
        })
    }

    pub(super) fn table_fault(&mut self, place: Span, named: Span, message: &str) {
        self.report(Diagnostic::new(Code::TableContent, place, message).label(named, "the file is named here"));
    }

    /// The columns of a file. Its faults are reported.
    pub(super) fn columns<const N: usize>(
        &mut self,
        file: FileId,
        named: Span,
        wanted: &[Column; N],
    ) -> Option<Columns<N>> {
        let before = self.diagnostics.len();
        let text = self.library.files().get(file).text.clone();
        let mut reader = csv::ReaderBuilder::new()
            .comment(Some(b'#'))
            .trim(csv::Trim::All)
            .from_reader(text.trim_start_matches('\u{feff}').as_bytes());
        let offset = text.len() - text.trim_start_matches('\u{feff}').len();
        let headers = match reader.headers() {
            Ok(headers) => headers.clone(),
            Err(error) => {
                self.table_fault(
                    Span::new(file, 0, 0),
                    named,
                    &format!("this is not a CSV file: {error}"),
                );
                return None;
            }
        };
        if headers.is_empty() {
            self.table_fault(Span::new(file, 0, 0), named, "this file is empty");
            return None;
        }
        let head = headers.position().map_or(0, |position| position.byte() as usize) + offset;
        let head = line_from(&text, head).map_or(Span::new(file, 0, 0), |range| Span::new(file, range.0, range.1));
        let found: Vec<Option<(usize, Rc<Unit>)>> = wanted
            .iter()
            .map(|column| self.column(&headers, head, named, column))
            .collect();
        if self.diagnostics.len() > before {
            return None;
        }
        let mut columns = [const { Vec::new() }; N];
        for record in reader.records() {
            if self.diagnostics.len() >= before + MOST_FINDINGS {
                break;
            }
            let record = match record {
                Ok(record) => record,
                Err(error) => {
                    let at = error.position().map_or(0, |position| position.byte() as usize) + offset;
                    let place = line_from(&text, at).map_or(head, |range| Span::new(file, range.0, range.1));
                    let message = format!("this row does not have the {} fields of the header", headers.len());
                    self.table_fault(place, named, &message);
                    continue;
                }
            };
            let at = record.position().map_or(0, |position| position.byte() as usize) + offset;
            let place = line_from(&text, at).map_or(head, |range| Span::new(file, range.0, range.1));
            for (slot, (column, found)) in columns.iter_mut().zip(wanted.iter().zip(&found)) {
                let Some((index, unit)) = found else { continue };
                let field = record.get(*index).unwrap_or("");
                match field.parse::<f64>().map(|value| unit.to_si(value)) {
                    Ok(value) if value.is_finite() => slot.push((value, place)),
                    _ => {
                        let message = format!("`{field}` in the column `{}` is not a finite number", column.name);
                        self.table_fault(place, named, &message);
                    }
                }
            }
            if columns.first().is_some_and(|column| column.len() > MOST_ROWS) {
                self.table_fault(place, named, &format!("the file has more than {MOST_ROWS} rows"));
                break;
            }
        }
        let units = found.into_iter().flatten().map(|(_, unit)| unit).collect();
        (self.diagnostics.len() == before).then_some(Columns {
            values: columns,
            units,
            head,
        })
    }

    /// Where a column stands, and its unit; its absence and a wrong unit are reported.
    fn column(
        &mut self,
        headers: &csv::StringRecord,
        head: Span,
        named: Span,
        wanted: &Column,
    ) -> Option<(usize, Rc<Unit>)> {
        let split = |header: &str| {
            let (name, unit) = header.split_once('[').unwrap_or((header, ""));
            (
                name.trim().to_string(),
                unit.trim().trim_end_matches(']').trim().to_string(),
            )
        };
        let names: Vec<(String, String)> = headers.iter().map(split).collect();
        if names.iter().filter(|(name, _)| name == wanted.name).count() > 1 {
            self.table_fault(head, named, &format!("the file has the column `{}` twice", wanted.name));
            return None;
        }
        let Some(index) = names.iter().position(|(name, _)| name == wanted.name) else {
            let message = format!("the file has no column `{}`", wanted.name);
            let mut finding = Diagnostic::new(Code::TableContent, head, message).label(named, "the file is named here");
            finding.help = match choice(&near(wanted.name, names.iter().map(|(name, _)| name.as_str()))) {
                Some(near) => Some(format!("rename the column {near}")),
                None => Some("the header is a row of `name [unit]`, such as `lag [s],correlation`".to_string()),
            };
            self.report(finding);
            return None;
        };
        let text = &names.get(index)?.1;
        let unit = if text.is_empty() {
            Unit::one()
        } else {
            match header_unit(head.file, text) {
                Ok(unit) => unit,
                Err(suggestions) => {
                    let message = format!("the unit `{text}` of the column `{}` cannot be read", wanted.name);
                    let mut finding =
                        Diagnostic::new(Code::TableContent, head, message).label(named, "the file is named here");
                    finding.help = choice(&suggestions).map(|near| format!("did you mean {near}?"));
                    self.report(finding);
                    return None;
                }
            }
        };
        if let Some(finding) = misfit(wanted, &unit, head) {
            self.report(finding.label(named, "the file is named here"));
            return None;
        }
        Some((index, Rc::new(unit)))
    }
}

/// What is wrong with the unit of a column.
fn misfit(wanted: &Column, unit: &Unit, head: Span) -> Option<Diagnostic> {
    let (name, found) = (wanted.name, unit.dimension());
    match wanted.dimension {
        Demanded::Exactly(dimension) if found == dimension => None,
        Demanded::Exactly(dimension) => {
            let (there, here) = (dimension.describe(), found.describe());
            let angle = found.without_angle() == dimension.without_angle();
            let code = if angle { Code::UnitAngle } else { Code::UnitMismatch };
            let finding = Diagnostic::new(code, head, format!("the column `{name}` must be {there}, not {here}"));
            let units = if dimension == Dimension::TIME {
                format!("`{name} [s]`")
            } else if dimension == Dimension::ANGULAR_FREQUENCY {
                format!("`{name} [Hz]` or `{name} [rad/s]`")
            } else if dimension == Dimension::ANGLE {
                format!("`{name} [deg]` or `{name} [rad]`")
            } else {
                return Some(finding);
            };
            Some(finding.help(format!("write its unit in the header: {units}")))
        }
        Demanded::Any => None,
        Demanded::PerFrequency if *found.exponent(Base::Angle).numer() == -1 => None,
        Demanded::PerFrequency => {
            let message = format!(
                "the column `{name}` must be per Hz or per rad/s: it is {}",
                found.describe()
            );
            let help = format!("write its unit in the header, such as `{name} [m^2/Hz]` or `{name} [m^2/(rad/s)]`");
            Some(Diagnostic::new(Code::UnitAngle, head, message).help(help))
        }
    }
}

/// The unit of a header, or the units that may have been meant.
fn header_unit(file: FileId, text: &str) -> Result<Unit, Vec<String>> {
    let expression = parse_expression(file, &format!("1 {text}")).map_err(|_| Vec::new())?;
    match &expression.kind {
        ExpressionKind::Number(number) => match &number.unit {
            Some(unit) => {
                units::resolve(unit).map_err(|unknown| unknown.into_iter().flat_map(|one| one.suggestions).collect())
            }
            None => Err(Vec::new()),
        },
        _ => Err(Vec::new()),
    }
}

/// The line a byte offset lies in, as offsets, comments and empty lines before it passed over.
fn line_from(text: &str, offset: usize) -> Option<(usize, usize)> {
    let mut start = crate::source::floor_boundary(text, offset);
    loop {
        let rest = text.get(start..)?;
        let line = rest.split('\n').next()?;
        let content = line.trim_end_matches('\r');
        let skip = content.trim().is_empty() || content.trim_start().starts_with('#');
        if !skip || line.len() == rest.len() {
            return Some((start, start + content.len()));
        }
        start += line.len() + 1;
    }
}
