//! A tree in a form that fits a snapshot: structure spelt out, places left to `places`.

use outcross::language::tree::{
    Argument, Condition, ConditionKind, Declaration, DeclarationKind, Expression, ExpressionKind, FactorOperator,
    LimitLine, LimitLineKind, Number, Path, RequireComparison, Sign, Tree, UnitExpression,
};
use outcross::source::Files;

/// Every declaration on a line or a few.
pub fn tree(files: &Files, tree: &Tree) -> String {
    let printer = Printer { files };
    let mut out = String::new();
    for declaration in &tree.declarations {
        let documentation = tree.comments.get(declaration.documentation.clone()).unwrap_or(&[]);
        for comment in documentation {
            out += &format!("documented {}\n", files.text(*comment));
        }
        out += &printer.declaration(declaration);
        if let Some(basis) = &declaration.basis {
            out += &format!("  basis {:?}\n", basis.value);
        }
    }
    out
}

/// The beginnings of the declarations that were read.
pub fn kept(files: &Files, tree: &Tree) -> String {
    let first_line = |one: &Declaration| files.text(one.span).lines().next().unwrap_or("").to_owned() + "\n";
    tree.declarations.iter().map(first_line).collect()
}

/// An expression on one line.
pub fn expression(files: &Files, expression: &Expression) -> String {
    Printer { files }.expression(expression)
}

struct Printer<'a> {
    files: &'a Files,
}

impl Printer<'_> {
    fn declaration(&self, declaration: &Declaration) -> String {
        let keyword = self.files.text(declaration.keyword);
        match &declaration.kind {
            DeclarationKind::Language(number) => format!("{keyword} {}\n", self.number(number)),
            DeclarationKind::Title(text) => format!("{keyword} {:?}\n", text.value),
            DeclarationKind::Use { path, name, arguments } => {
                format!(
                    "{keyword} {:?} as {} {}\n",
                    path.value,
                    name.text,
                    self.arguments(arguments)
                )
            }
            DeclarationKind::Parameter { name, unit, value } => {
                let value = value
                    .as_ref()
                    .map_or("required".to_owned(), |value| self.expression(value));
                format!("{keyword} {}{} = {value}\n", name.text, note(unit.as_ref()))
            }
            DeclarationKind::Definition {
                keyword: kind,
                name,
                unit,
                value,
            } => format!(
                "{keyword} ({kind:?}) {}{} = {}\n",
                name.text,
                note(unit.as_ref()),
                self.expression(value)
            ),
            DeclarationKind::Function {
                keyword: kind,
                name,
                parameters,
                unit,
                value,
            } => {
                let head: Vec<String> = parameters
                    .iter()
                    .map(|one| format!("{}{}", one.name.text, note(one.unit.as_ref())))
                    .collect();
                let (head, unit, value) = (head.join(", "), note(unit.as_ref()), self.expression(value));
                format!("{keyword} ({kind:?}) {}({head}){unit} = {value}\n", name.text)
            }
            DeclarationKind::Climate { name, unit, value } => {
                format!(
                    "{keyword} {}{} = {}\n",
                    name.text,
                    note(unit.as_ref()),
                    self.expression(value)
                )
            }
            DeclarationKind::LimitState { name, lines, close } => {
                let lines: String = lines.iter().map(|line| self.line(line)).collect();
                format!("{keyword} {} {{\n{lines}{}\n", name.text, self.files.text(*close))
            }
            DeclarationKind::Expect {
                quantity,
                value,
                tolerance,
            } => {
                let [quantity, value, tolerance] = [quantity, value, tolerance].map(|one| self.expression(one));
                format!("{keyword} {quantity} = {value} within {tolerance}\n")
            }
            DeclarationKind::Correlate { names, value } => {
                let names: Vec<String> = names.iter().map(path).collect();
                format!("{keyword} {} with {}\n", names.join(" and "), self.expression(value))
            }
            DeclarationKind::Accept { code, at, reason } => {
                let at = at.as_ref().map_or(String::new(), |at| format!(" at {}", path(at)));
                format!("{keyword} {}{at} because {:?}\n", code.text, reason.value)
            }
        }
    }

    fn line(&self, line: &LimitLine) -> String {
        let keyword = self.files.text(line.keyword);
        let says = match &line.kind {
            LimitLineKind::FailureWhen(condition) => self.condition(condition),
            LimitLineKind::ReferencePeriod(time) => self.expression(time),
            LimitLineKind::FirstPassage(method) => method.text.to_string(),
            LimitLineKind::Require {
                quantity,
                comparison,
                value,
                over,
            } => {
                let comparison = match comparison {
                    RequireComparison::AtLeast => "at least",
                    RequireComparison::AtMost => "at most",
                };
                let over = over
                    .as_ref()
                    .map_or(String::new(), |time| format!(" over {}", self.expression(time)));
                format!("{} {comparison} {}{over}", quantity.text, self.expression(value))
            }
            LimitLineKind::TabulateAt(times) | LimitLineKind::ExtremesAt(times) => {
                let times: Vec<String> = times.iter().map(|time| self.expression(time)).collect();
                times.join(" and ")
            }
        };
        let basis = line
            .basis
            .as_ref()
            .map_or(String::new(), |basis| format!(" basis {:?}", basis.value));
        format!("  {keyword} | {says}{basis}\n")
    }

    fn condition(&self, condition: &Condition) -> String {
        let system = |parts: &[Condition]| {
            let parts: Vec<String> = parts.iter().map(|part| self.condition(part)).collect();
            parts.join("; ")
        };
        match &condition.kind {
            ConditionKind::Below(left, right) => format!("{} below {}", self.expression(left), self.expression(right)),
            ConditionKind::Above(left, right) => format!("{} above {}", self.expression(left), self.expression(right)),
            ConditionKind::Outside(value, lower, upper) => {
                let [value, lower, upper] = [value, lower, upper].map(|one| self.expression(one));
                format!("{value} outside {lower} to {upper}")
            }
            ConditionKind::Any(parts) => format!("any[{}]", system(parts)),
            ConditionKind::All(parts) => format!("all[{}]", system(parts)),
            ConditionKind::Named(name) => format!("that of {}", path(name)),
        }
    }

    fn expression(&self, expression: &Expression) -> String {
        match &expression.kind {
            ExpressionKind::Number(number) => self.number(number),
            ExpressionKind::String(text) => format!("{:?}", text.value),
            ExpressionKind::Name(name) => path(name),
            ExpressionKind::Sum(terms) => {
                let terms: Vec<String> = terms
                    .iter()
                    .map(|term| {
                        let sign = if term.sign == Sign::Plus { '+' } else { '-' };
                        format!("{sign}{}", self.expression(&term.value))
                    })
                    .collect();
                format!("sum[{}]", terms.join(" "))
            }
            ExpressionKind::Product(factors) => {
                let factors: Vec<String> = factors
                    .iter()
                    .map(|factor| {
                        let operator = if factor.operator == FactorOperator::Times {
                            '*'
                        } else {
                            '/'
                        };
                        format!("{operator}{}", self.expression(&factor.value))
                    })
                    .collect();
                format!("product[{}]", factors.join(" "))
            }
            ExpressionKind::Negative(value) => format!("negative[{}]", self.expression(value)),
            ExpressionKind::Power(base, exponent) => {
                format!("power[{} {}]", self.expression(base), self.expression(exponent))
            }
            ExpressionKind::Call(call) => format!("{}{}", path(&call.function), self.arguments(&call.arguments)),
            ExpressionKind::Group(arguments) => format!("group{}", self.arguments(arguments)),
            ExpressionKind::Bracket(value) => format!("bracket[{}]", self.expression(value)),
        }
    }

    fn arguments(&self, arguments: &[Argument]) -> String {
        let arguments: Vec<String> = arguments
            .iter()
            .map(|argument| {
                let name = argument
                    .name
                    .as_ref()
                    .map_or(String::new(), |name| format!("{}: ", name.text));
                format!("{name}{}", self.expression(&argument.value))
            })
            .collect();
        format!("({})", arguments.join(", "))
    }

    fn number(&self, number: &Number) -> String {
        let unit = number
            .unit
            .as_ref()
            .map_or(String::new(), |one| format!(" <{}>", unit(one)));
        format!("{:?}{unit}", number.value)
    }
}

fn path(path: &Path) -> String {
    let words: Vec<&str> = path.words.iter().map(|word| &*word.text).collect();
    words.join(".")
}

fn note(noted: Option<&UnitExpression>) -> String {
    noted.map_or(String::new(), |one| format!(" : <{}>", unit(one)))
}

fn unit(unit: &UnitExpression) -> String {
    let factors: Vec<String> = unit
        .factors
        .iter()
        .map(|factor| match factor.power {
            1 => factor.symbol.text.to_string(),
            power => format!("{}^{power}", factor.symbol.text),
        })
        .collect();
    factors.join(" ")
}
