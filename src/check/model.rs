//! The checked model: what is left of the text once every name, unit and kind is known. All numbers are in coherent SI
//! units; spans are kept beside them for findings.

use super::acceptance::Acceptances;
use super::names::ItemId;
use crate::covariance::coherence::Coherences;
use crate::covariance::form::LinearForm;
use crate::covariance::source::Source;
use crate::diagnostics::{Code, Diagnostic};
use crate::reliability::crossings::FailureRegion;
use crate::reliability::first_passage::Method;
use crate::reliability::probability::Probability;
use crate::reliability::verdict::Demand;
use crate::source::{FileId, Span};
use crate::units::{Dimension, Unit};
use std::rc::Rc;

/// A model without faults.
pub struct Model {
    /// The file it was read from.
    pub file: FileId,
    /// `title`, where there is one.
    pub title: Option<String>,
    /// The parameters of the file and of its parts.
    pub parameters: Vec<Parameter>,
    /// Everything random, each independent of the others.
    pub sources: Vec<Source>,
    /// Which of the sources are coherent; all others are independent of each other.
    pub coherences: Coherences,
    /// Processes and margins in the order of the text, parts after those who use them.
    pub varying: Vec<Named>,
    /// The limit states.
    pub limit_states: Vec<LimitState>,
    /// What the author expects.
    pub expectations: Vec<Expectation>,
    /// The warnings that the author accepts.
    pub acceptances: Acceptances,
    /// What holds numbers and does not say where they come from.
    pub without_basis: Vec<String>,
    /// Places of declarations that came to nothing, whatever the reason.
    pub(super) lost: Vec<Span>,
}

/// A parameter with the value it has in this run.
pub struct Parameter {
    /// Its full name.
    pub name: String,
    /// Its value.
    pub value: f64,
    /// The unit people see it in.
    pub unit: Rc<Unit>,
    /// Where the value comes from.
    pub basis: Option<String>,
    /// Its place in the text.
    pub(super) order: ItemId,
}

/// Whether something was declared as a process or as a margin.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum Kind {
    Process,
    Margin,
}

/// A process or a margin.
pub struct Named {
    /// Its full name.
    pub name: String,
    /// What it was declared as.
    pub kind: Kind,
    /// What it is made from.
    pub form: Rc<LinearForm>,
    /// Its dimension.
    pub dimension: Dimension,
    /// The unit people see it in.
    pub unit: Rc<Unit>,
    /// The comment above it.
    pub documentation: Option<String>,
    /// Where its numbers come from.
    pub basis: Option<String>,
    /// Where its name stands.
    pub place: Span,
}

/// A limit state.
pub struct LimitState {
    /// Its full name.
    pub name: String,
    /// The condition as written.
    pub failure_when: String,
    /// The margin the condition speaks of.
    pub margin: Rc<LinearForm>,
    /// The margin's dimension.
    pub dimension: Dimension,
    /// The unit people see the margin in.
    pub unit: Rc<Unit>,
    /// Where the margin is failed.
    pub region: FailureRegion,
    /// The time over which failure counts.
    pub reference_period: Time,
    /// How crossings become survival.
    pub method: Method,
    /// What a code demands.
    pub requirements: Vec<Requirement>,
    /// The times at which survival is reported.
    pub tabulate: Vec<Time>,
    /// The fractiles of the extreme that are reported beside its mean, where extremes are asked for.
    pub extremes: Option<Vec<f64>>,
    /// The comment above it.
    pub documentation: Option<String>,
    /// Where its name stands.
    pub place: Span,
}

/// A time with the unit it was written in.
#[derive(Clone)]
pub struct Time {
    /// In seconds.
    pub seconds: f64,
    /// The unit people see it in.
    pub unit: Rc<Unit>,
}

/// What a limit state has that can be demanded.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum LimitQuantity {
    Survival,
    FailureProbability,
    ReliabilityIndex,
    UpcrossingRate,
    MeanTimeToFailure,
    InitialFailureProbability,
}

impl LimitQuantity {
    /// The least and the most it can be, in SI units.
    pub fn range(self) -> (f64, f64) {
        match self {
            Self::Survival | Self::FailureProbability | Self::InitialFailureProbability => (0.0, 1.0),
            Self::UpcrossingRate | Self::MeanTimeToFailure => (0.0, f64::INFINITY),
            Self::ReliabilityIndex => (f64::NEG_INFINITY, f64::INFINITY),
        }
    }
}

/// What a process or a margin has that can be expected.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum ProcessQuantity {
    Mean,
    StandardDeviation,
    DerivativeStandardDeviation,
    ZeroUpcrossingRate,
    Bandwidth,
    Irregularity,
}

/// A demand on a limit state.
pub struct Requirement {
    /// Without its `over` and `basis`, as written.
    pub text: String,
    /// Of what.
    pub quantity: LimitQuantity,
    /// How much.
    pub demand: Demand,
    /// The unit people see it in.
    pub unit: Rc<Unit>,
    /// Over which time.
    pub over: Time,
    /// Where the demand comes from.
    pub basis: Option<String>,
}

/// A check by the author of the model.
pub struct Expectation {
    /// As written, without its basis.
    pub text: String,
    /// What is expected to be something.
    pub subject: Subject,
    /// What it should be.
    pub expected: f64,
    /// How near.
    pub tolerance: Tolerance,
    /// The unit people see it in.
    pub unit: Rc<Unit>,
    /// Where the expected value comes from.
    pub basis: Option<String>,
    /// Where it stands, from the quantity to the tolerance.
    pub place: Span,
    /// Its place in the text.
    pub(super) order: ItemId,
}

/// What an expectation is about.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Subject {
    /// A quantity of a process or margin, as an index into [`Model::varying`].
    Varying(usize, ProcessQuantity),
    /// A quantity of a limit state, as an index into [`Model::limit_states`], over a time in seconds.
    LimitState(usize, LimitQuantity, f64),
    /// The extreme of a limit state's margin, as an index into [`Model::limit_states`], over a time in seconds.
    Extreme(usize, ExtremeQuantity, f64),
}

/// What can be expected of the extreme of a margin over a time.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ExtremeQuantity {
    /// Its mean.
    Mean,
    /// The level it lies beyond with a probability.
    Beyond(Probability),
}

impl Subject {
    /// The same subject after processes, margins and limit states have been put into another order.
    pub(super) fn renumber(&mut self, varying: &[usize], limit_states: &[usize]) {
        let (index, order) = match self {
            Self::Varying(index, _) => (index, varying),
            Self::LimitState(index, _, _) | Self::Extreme(index, _, _) => (index, limit_states),
        };
        if let Some(new) = order.get(*index) {
            *index = *new;
        }
    }
}

impl Model {
    /// A model of a file in which nothing has been looked at.
    pub(super) fn empty(file: FileId) -> Self {
        Self {
            file,
            title: None,
            parameters: Vec::new(),
            sources: Vec::new(),
            coherences: Coherences::default(),
            varying: Vec::new(),
            limit_states: Vec::new(),
            expectations: Vec::new(),
            acceptances: Acceptances::default(),
            without_basis: Vec::new(),
            lost: Vec::new(),
        }
    }

    /// Declarations that came to nothing although nothing was found wrong: a model must not shrink in silence.
    pub(super) fn unexplained(&self) -> Option<Diagnostic> {
        let first = self.lost.first()?;
        let message = "nothing came of this declaration, and the program does not know why";
        Some(
            Diagnostic::new(Code::ModelUnexplained, *first, message)
                .help("this is a fault of the program: please report it"),
        )
    }
}

/// How near a value must be.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Tolerance {
    /// A share of the expected value.
    Relative(f64),
    /// A distance in coherent SI units.
    Absolute(f64),
}
