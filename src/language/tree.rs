//! The syntax tree of one file: what was written, in the order it was written, with every place kept.
//!
//! The tree says nothing about meaning: names are not resolved, units not known, dimensions not checked. Chains of
//! operators are flat (`a + b - c` is one [`ExpressionKind::Sum`] of three terms), so that the depth of a tree is the
//! depth of its brackets, which the parser bounds.

use crate::source::{FileId, Span};

/// A file: its declarations, and its comments beside them.
#[derive(Debug)]
pub struct Tree {
    /// The file it was read from.
    pub file: FileId,
    /// The declarations in the order of the text. A stretch that could not be read is left out (it was reported).
    pub declarations: Vec<Declaration>,
    /// The names in stretches at fault: what they were meant to declare is not known, and their uses are no fault.
    pub lost: Vec<Word>,
    /// Every comment, in the order of the text; the span starts at `#` and ends before the end of the line.
    pub comments: Vec<Span>,
}

/// A word with its place.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Word {
    /// The text.
    pub text: Box<str>,
    /// Where it stands.
    pub span: Span,
}

/// The content of a string, without its quotes and with its escapes read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Text {
    /// The content.
    pub value: Box<str>,
    /// Where it stands, quotes included.
    pub span: Span,
}

/// A declaration with what every declaration may carry.
#[derive(Debug)]
pub struct Declaration {
    /// From the first keyword to the last token.
    pub span: Span,
    /// The keyword (`process`, `limit state`, ...).
    pub keyword: Span,
    /// What it declares.
    pub kind: DeclarationKind,
    /// `basis "..."`: where the numbers come from.
    pub basis: Option<Text>,
    /// The comment lines directly above: a range of [`Tree::comments`]; empty where there are none.
    pub documentation: std::ops::Range<usize>,
}

/// What a declaration declares.
#[derive(Debug)]
pub enum DeclarationKind {
    /// `language 1`
    Language(Number),
    /// `title "..."`
    Title(Text),
    /// `use "file" as NAME (name: value, ...)`
    Use {
        /// The path as written.
        path: Text,
        /// The name of the part.
        name: Word,
        /// The parameters set.
        arguments: Vec<Argument>,
    },
    /// `parameter NAME [: UNIT] [= value]`
    Parameter {
        /// Its name.
        name: Word,
        /// The unit it is shown in.
        unit: Option<UnitExpression>,
        /// Its default.
        value: Option<Expression>,
    },
    /// `constant`, `quantity`, `process`, `margin`, `variable`: `NAME [: UNIT] = expression`
    Definition {
        /// Which of them.
        keyword: DefinitionKeyword,
        /// Its name.
        name: Word,
        /// The unit it is shown in.
        unit: Option<UnitExpression>,
        /// What it is.
        value: Expression,
    },
    /// `profile`, `kernel`, `spectrum`: `NAME(argument, p: UNIT, ...) [: UNIT] = expression`
    Function {
        /// Which of them.
        keyword: FunctionKeyword,
        /// Its name.
        name: Word,
        /// Its arguments, the running one (`t`, `tau`, `omega`, `f`) included, as written.
        parameters: Vec<FunctionParameter>,
        /// The unit of its value.
        unit: Option<UnitExpression>,
        /// Its body.
        value: Expression,
    },
    /// `climate NAME [: UNIT] = expression`; states and tables are calls in the expression.
    Climate {
        /// Its name.
        name: Word,
        /// The unit it is shown in.
        unit: Option<UnitExpression>,
        /// What it is.
        value: Expression,
    },
    /// `limit state NAME { ... }`
    LimitState {
        /// Its name.
        name: Word,
        /// The lines between the braces, in the order of the text.
        lines: Vec<LimitLine>,
        /// The closing brace.
        close: Span,
    },
    /// `expect QUANTITY(NAME[, over: T]) = value within tolerance`
    Expect {
        /// The quantity, a call.
        quantity: Expression,
        /// What it should be.
        value: Expression,
        /// How near.
        tolerance: Expression,
    },
    /// `correlate a, b with value`
    Correlate {
        /// The names.
        names: Vec<Path>,
        /// The correlation.
        value: Expression,
    },
    /// `accept CODE [at NAME] because "..."`
    Accept {
        /// The code of a warning, slashes included.
        code: Word,
        /// The declaration whose warning is accepted; all of the file without one.
        at: Option<Path>,
        /// The reason.
        reason: Text,
    },
}

/// The keyword of a plain definition.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum DefinitionKeyword {
    Constant,
    Quantity,
    Variable,
    Process,
    Margin,
}

/// The keyword of a definition with arguments.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum FunctionKeyword {
    Profile,
    Kernel,
    Spectrum,
}

/// One argument in the head of a profile, kernel or spectrum.
#[derive(Debug)]
pub struct FunctionParameter {
    /// Its name.
    pub name: Word,
    /// Its unit; a plain number without one.
    pub unit: Option<UnitExpression>,
}

/// A line of a limit state, with its `basis`.
#[derive(Debug)]
pub struct LimitLine {
    /// From its first word to its last token, `basis` included.
    pub span: Span,
    /// The words that name the line (`failure when`, `require`, ...).
    pub keyword: Span,
    /// What it says.
    pub kind: LimitLineKind,
    /// `basis "..."`
    pub basis: Option<Text>,
}

/// What a line of a limit state says.
#[derive(Debug)]
pub enum LimitLineKind {
    /// `failure when CONDITION`
    FailureWhen(Condition),
    /// `reference period T`
    ReferencePeriod(Expression),
    /// `first passage METHOD`
    FirstPassage(Word),
    /// `require QUANTITY >= value [over T]`
    Require {
        /// The quantity.
        quantity: Word,
        /// `>=` or `<=`.
        comparison: RequireComparison,
        /// The demand.
        value: Expression,
        /// Its own reference period.
        over: Option<Expression>,
    },
    /// `tabulate at T1, T2, ...`
    TabulateAt(Vec<Expression>),
    /// `extremes at F1, F2, ...`
    ExtremesAt(Vec<Expression>),
}

/// The comparison of a requirement.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RequireComparison {
    /// `>=`
    AtLeast,
    /// `<=`
    AtMost,
}

/// The condition of failure, as written.
#[derive(Debug)]
pub struct Condition {
    /// Where it stands.
    pub span: Span,
    /// What it says.
    pub kind: ConditionKind,
}

/// What a condition says.
#[derive(Debug)]
pub enum ConditionKind {
    /// `m < a`; `abs(m) > a` is this with a call of `abs` on the left.
    Below(Expression, Expression),
    /// `m > a`
    Above(Expression, Expression),
    /// `m outside a to b`
    Outside(Expression, Expression, Expression),
    /// `any(c1, c2, ...)`
    Any(Vec<Condition>),
    /// `all(c1, c2, ...)`
    All(Vec<Condition>),
    /// The name of another limit state.
    Named(Path),
}

/// An expression.
#[derive(Debug)]
pub struct Expression {
    /// Where it stands, its own brackets included.
    pub span: Span,
    /// What it is.
    pub kind: ExpressionKind,
}

/// What an expression is.
#[derive(Debug)]
pub enum ExpressionKind {
    /// `12.5 kN`
    Number(Number),
    /// `"..."`, the name of a file in `tabulated(...)` and `table(...)`.
    String(Text),
    /// `a`, `site.pull`
    Name(Path),
    /// `a + b - c`: at least two terms; the first is `Plus` unless written with a sign.
    Sum(Vec<Term>),
    /// `a * b / c`: at least two factors; the first is `Times`.
    Product(Vec<Factor>),
    /// `-a` (a doubled sign is folded)
    Negative(Box<Expression>),
    /// `a ^ b`
    Power(Box<Expression>, Box<Expression>),
    /// `f(a, by: b)`
    Call(Box<Call>),
    /// `(a: 1, b: 2)`, a state of a climate.
    Group(Vec<Argument>),
    /// `(a)`: brackets are kept, for a formatter.
    Bracket(Box<Expression>),
}

/// A term of a sum.
#[derive(Debug)]
pub struct Term {
    /// Its sign.
    pub sign: Sign,
    /// The term.
    pub value: Expression,
}

/// The sign before a term.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum Sign {
    Plus,
    Minus,
}

/// A factor of a product.
#[derive(Debug)]
pub struct Factor {
    /// Whether it multiplies or divides.
    pub operator: FactorOperator,
    /// The factor.
    pub value: Expression,
}

/// The operator before a factor.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum FactorOperator {
    Times,
    Over,
}

/// A call.
#[derive(Debug)]
pub struct Call {
    /// What is called: `exp`, `gaussian`, `site.gust_kernel`.
    pub function: Path,
    /// The arguments.
    pub arguments: Vec<Argument>,
    /// From the opening to the closing bracket.
    pub brackets: Span,
}

/// An argument of a call, a part or a state.
#[derive(Debug)]
pub struct Argument {
    /// Its name, where it has one.
    pub name: Option<Word>,
    /// Its value.
    pub value: Expression,
}

/// A name with its parts: `pull`, `site.pull`.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Path {
    /// At least one word.
    pub words: Vec<Word>,
    /// From the first word to the last.
    pub span: Span,
}

/// A number with its unit.
#[derive(Debug)]
pub struct Number {
    /// The value as written, read to the nearest double; may be infinite where the text is beyond it (`1e999`).
    pub value: f64,
    /// The digits, without the unit.
    pub digits: Span,
    /// The unit that follows.
    pub unit: Option<UnitExpression>,
}

/// A unit as written: a product of powers of symbols.
#[derive(Clone, Debug, PartialEq)]
pub struct UnitExpression {
    /// Where it stands.
    pub span: Span,
    /// `kN*m/s^2` is `kN^1 m^1 s^-2`. Empty for the unit `1`.
    pub factors: Vec<UnitFactor>,
}

/// One symbol of a unit with its power.
#[derive(Clone, Debug, PartialEq)]
pub struct UnitFactor {
    /// The symbol, prefix included.
    pub symbol: Word,
    /// Its power, negative below the line; brackets are multiplied out.
    pub power: i32,
}
