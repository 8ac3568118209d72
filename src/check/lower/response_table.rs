//! Frequency responses from a data file.

use super::Lowering;
use super::arguments::Arguments;
use super::table::{Column, Columns, Demanded};
use crate::covariance::kernel::Beyond;
use crate::covariance::response::{FrequencyResponse, InvalidResponse};
use crate::language::tree::{Call, Expression};
use crate::source::{FileId, Span};
use crate::units::Dimension;
use std::rc::Rc;
use std::sync::Arc;

/// The rows of a frequency response, whatever holds beyond them.
pub(super) struct ResponseTable {
    /// The file as the model names it.
    name: String,
    /// Angular frequency in rad/s, modulus in SI units, phase in rad.
    rows: Vec<[f64; 3]>,
    /// The dimension of the modulus: output over input.
    dimension: Dimension,
}

const COLUMNS: [Column; 3] = [
    Column {
        name: "frequency",
        dimension: Demanded::Exactly(Dimension::ANGULAR_FREQUENCY),
    },
    Column {
        name: "modulus",
        dimension: Demanded::Any,
    },
    Column {
        name: "phase",
        dimension: Demanded::Exactly(Dimension::ANGLE),
    },
];

impl Lowering<'_, '_, '_> {
    /// `tabulated("frf.csv", beyond: POLICY)` as a system, with the dimension of output over input.
    pub(super) fn tabulated_response(&mut self, call: &Call) -> Option<(Arc<FrequencyResponse>, Dimension)> {
        let arguments: Arguments<'_> = self.arguments(call, &["the name of a file"], &["beyond"])?;
        let beyond = self.beyond(call, &arguments);
        let file = arguments.subjects.first().copied()?;
        let table = self.response_table(file);
        let (beyond, table): (Beyond, _) = (beyond?, table?);
        let response = FrequencyResponse::new(table.name.clone(), &table.rows, beyond).ok()?;
        Some((Arc::new(response), table.dimension))
    }

    /// The table of a file. Read once; its faults are reported once.
    fn response_table(&mut self, file: &Expression) -> Option<Rc<ResponseTable>> {
        let (text, path) = self.file_named(file)?;
        let identity = self.library.reader().identity(&path);
        if let Some(known) = self.responses.get(&identity) {
            return known.clone();
        }
        let file = self.data(&path, text.span);
        let table = file.and_then(|file| self.read_response_table(file, &text.value, text.span));
        let table = table.map(Rc::new);
        self.responses.insert(identity, table.clone());
        table
    }

    fn read_response_table(&mut self, file: FileId, name: &str, named: Span) -> Option<ResponseTable> {
        let Columns {
            values: [frequencies, moduli, phases],
            units,
            head,
        } = self.columns(file, named, &COLUMNS)?;
        let dimension = units.get(1)?.dimension();
        let rows: Vec<[f64; 3]> = frequencies
            .iter()
            .zip(&moduli)
            .zip(&phases)
            .map(|(((frequency, _), (modulus, _)), (phase, _))| [*frequency, *modulus, *phase])
            .collect();
        match FrequencyResponse::new(name, &rows, Beyond::Refuse) {
            Ok(_) => Some(ResponseTable {
                name: name.to_string(),
                rows,
                dimension,
            }),
            Err(why) => {
                self.response_fault(&why, &frequencies, head, named);
                None
            }
        }
    }

    fn response_fault(&mut self, why: &InvalidResponse, rows: &[(f64, Span)], start: Span, named: Span) {
        let row = why.row().and_then(|row| rows.get(row));
        let place = row.map_or(start, |(_, place)| *place);
        self.table_fault(place, named, &why.to_string());
    }
}
