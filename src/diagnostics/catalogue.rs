//! Every kind of finding the program can raise, with its code, its severity and one line on what it is.

/// How grave a finding is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Severity {
    /// The model is wrong: nothing is computed from it.
    Error,
    /// The model is computed, but a reader should look here.
    Warning,
}

impl Severity {
    /// The word shown to people and machines.
    pub fn word(self) -> &'static str {
        match self {
            Severity::Error => "error",
            Severity::Warning => "warning",
        }
    }
}

macro_rules! catalogue {
    ($($variant:ident $severity:ident $code:literal $summary:literal)*) => {
        /// A kind of finding. Its written form is a short path in words, e.g. `unit/mismatch`, and is for ever.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub enum Code {
            $(#[doc = $summary] $variant,)*
        }

        impl Code {
            /// Every code, in the order of the catalogue.
            pub const ALL: &[Code] = &[$(Code::$variant,)*];

            /// The written form.
            pub fn name(self) -> &'static str {
                match self { $(Code::$variant => $code,)* }
            }

            /// What it is, in one line.
            pub fn summary(self) -> &'static str {
                match self { $(Code::$variant => $summary,)* }
            }

            /// What it is, why, an example with its mend, and where it matters: a page of Markdown.
            pub fn page(self) -> &'static str {
                match self { $(Code::$variant => include_str!(concat!("pages/", $code, ".md")),)* }
            }

            /// Error or warning.
            pub fn severity(self) -> Severity {
                match self { $(Code::$variant => Severity::$severity,)* }
            }
        }
    };
}

catalogue! {
    FileUnreadable Error "file/unreadable" "a file that cannot be read as text"
    FileOutside Error "file/outside" "a file that a model may not read, since it lies outside of the project"
    FileTooLarge Error "file/too-large" "a file larger than the program reads"
    SyntaxUnexpected Error "syntax/unexpected" "text that the language has no place for here"
    SyntaxNesting Error "syntax/nesting" "brackets nested deeper than the program follows"
    LanguageVersion Error "language/version" "a language version this program does not know"
    LanguageNotYet Error "language/not-yet" "a part of the language that this version does not compute yet"
    NameUnknown Error "name/unknown" "a name that nothing declares"
    NameRepeated Error "name/repeated" "a name declared twice"
    NameReserved Error "name/reserved" "a word of the language used as a name"
    NameCycle Error "name/cycle" "declarations that are defined by each other"
    PartCycle Error "part/cycle" "files that use each other"
    PartArgument Error "part/argument" "a part given a parameter it does not have, or not given one it needs"
    ParameterRequired Error "parameter/required" "a parameter without a value"
    CallUnknown Error "call/unknown" "a function that does not exist"
    CallArgument Error "call/argument" "an argument that is missing, unknown, repeated or unnamed"
    UnitUnknown Error "unit/unknown" "a unit that does not exist"
    UnitMismatch Error "unit/mismatch" "a quantity of another dimension than the place asks for"
    UnitAngle Error "unit/angle" "an angle, or a frequency in cycles or radians, taken for a plain number or the reverse"
    ValueNotFinite Error "value/not-finite" "a value that is not a finite number"
    ValueRange Error "value/range" "a value outside the range that makes sense at this place"
    TypeMismatch Error "type/mismatch" "one kind of thing where another kind is needed"
    TypeNonlinear Error "type/nonlinear" "an operation that would make a process non-Gaussian"
    KernelNotOne Error "kernel/not-one" "a correlation function that is not 1 at lag 0"
    KernelInvalid Error "kernel/invalid" "a kernel built in a way that does not keep it one"
    KernelBound Error "kernel/bound" "a kernel that is larger at some lag than at lag 0"
    KernelJump Error "kernel/jump" "a kernel that jumps"
    KernelNegativeSpectrum Error "kernel/negative-spectrum" "a kernel whose spectral density is negative somewhere"
    KernelUnclear Error "kernel/unclear" "a kernel whose behaviour at lag 0 cannot be told"
    KernelFluctuation Error "kernel/fluctuation" "a scale of fluctuation that no length gives"
    KernelTwoLengths Warning "kernel/two-lengths" "a scale of fluctuation that two lengths give"
    SpectrumInvalid Error "spectrum/invalid" "a spectral density that no process can have"
    SpectrumUnclear Error "spectrum/unclear" "a spectral density whose behaviour at low or high frequency cannot be told"
    SpectrumShape Error "spectrum/shape" "a spectral shape of unit area without the standard deviation that scales it"
    SpectrumEnergy Error "spectrum/energy" "a spectral density whose area is not the variance given beside it"
    SpectrumMixed Warning "spectrum/mixed-units" "a table of densities per Hz over rad/s, or the reverse"
    ProcessDescription Error "process/description" "a process described by nothing, or by two things at once"
    ProcessMeanSquare Error "process/mean-square" "a raw autocorrelation that does not agree with the mean"
    ProcessZeroMean Error "process/zero-mean" "a coefficient of variation of a process whose mean is zero"
    ProcessNotDifferentiable Error "process/not-differentiable" "a process without a derivative where crossings are counted"
    ProcessInfiniteVariance Error "process/infinite-variance" "a process of infinite variance where a finite one is needed"
    CoherenceSubject Error "coherence/subject" "a coherence of something that cannot have it, or has it already"
    CoherenceImpossible Error "coherence/impossible" "coherences that no processes have together"
    MarginNoProcess Error "margin/no-process" "a margin in which nothing varies"
    LimitLine Error "limit/line" "a line that a limit state lacks or has twice"
    LimitCondition Error "limit/condition" "a condition of failure that cannot be judged"
    LimitMethod Error "limit/method" "a method of first passage that does not hold for a limit state"
    LimitExtreme Error "limit/extreme" "an extreme that a limit state does not have"
    QuantityUnknown Error "quantity/unknown" "a quantity that does not exist or does not belong to the thing it is asked of"
    ModelTooLarge Error "model/too-large" "a model larger than the program computes"
    ModelUnexplained Error "model/unexplained" "a declaration from which nothing came, for no reason the program knows"
    TableContent Error "table/content" "a data file whose content cannot be used"
    NameUnused Warning "name/unused" "a declaration on which no result rests"
    CallConvention Warning "call/convention" "a value whose own name says that it follows another convention than its place"
    ProcessPercent Warning "process/percent" "a coefficient of variation that looks like a percentage taken for a ratio, or the reverse"
    ProcessDeviationRatio Warning "process/deviation-ratio" "a standard deviation that looks like a coefficient of variation"
    ProcessRawMoment Warning "process/raw-moment" "an autocovariance that seems to hold the square of the mean"
    ProcessSameDescription Warning "process/same-description" "independent processes that are described in the same way"
    MarginCountedTwice Warning "margin/counted-twice" "a process that enters a sum as itself and inside another process"
    LimitFailedMean Warning "limit/failed-mean" "a condition under which failure is the normal state"
    LimitShortPeriod Warning "limit/short-period" "a reference period in which the margin does not forget its start"
    RequirementIdle Warning "requirement/idle" "a requirement that nothing can miss"
    RequirementDirection Warning "requirement/direction" "a requirement that asks for failure"
    RequirementPeriod Warning "requirement/period" "a reliability index demanded over another period than its source means"
    ExpectationIdle Warning "expectation/idle" "an expectation that compares nothing"
    ExpectationNever Warning "expectation/never" "an expectation of a quantity that does not exist or is infinite"
    ResultTooGood Warning "result/too-good" "a reliability index beyond anything that can be shown"
    ResultKnownRatio Warning "result/known-ratio" "a failed expectation that is off by a factor of the trade"
    AcceptUnknown Error "accept/unknown" "an acceptance of a code that does not exist"
    AcceptError Error "accept/error" "an acceptance of an error"
    AcceptReason Error "accept/reason" "an acceptance without a reason"
    AcceptUnused Warning "accept/unused" "an acceptance that accepts nothing"
}

impl Code {
    /// Whether it is found by `evaluate` alone, since it needs results.
    pub fn needs_results(self) -> bool {
        matches!(self, Code::ResultTooGood | Code::ResultKnownRatio)
    }

    /// The code of a written form.
    pub fn find(name: &str) -> Option<Code> {
        Self::ALL.iter().copied().find(|code| code.name() == name)
    }
}
