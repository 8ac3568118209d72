//! Diagnostics for tools that gather findings: a log in SARIF 2.1.0 (OASIS Standard, 27 March 2020: Static Analysis
//! Results Interchange Format Version 2.1.0).

use super::{Code, Diagnostic};
use crate::source::{Disk, Files, Span};
use serde_json::{Map, Value, json};
use std::collections::{BTreeSet, HashSet};
use std::path::{Component, Path, Prefix};

/// Where the schema of the log is published.
const SCHEMA: &str = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json";

/// What was found in one model.
pub struct Findings<'a> {
    /// The texts.
    pub files: &'a Files,
    /// Where they were read: places are shown as seen from its root folder.
    pub disk: &'a Disk,
    /// The findings.
    pub diagnostics: &'a [Diagnostic],
}

/// The log of one run over some models, which ends with this exit status. A file used by several models has its faults
/// listed once, unless they show different uses.
pub fn log<'a>(models: impl Iterator<Item = Findings<'a>>, exit_status: u8) -> Value {
    let models: Vec<Findings<'_>> = models.collect();
    let of_models = models.iter().flat_map(|model| model.diagnostics);
    let codes: BTreeSet<Code> = of_models.map(|one| one.code).collect();
    let codes: Vec<Code> = codes.into_iter().collect();
    let mut roots = Roots::default();
    let mut results = Vec::new();
    let mut seen = HashSet::new();
    for model in &models {
        for diagnostic in model.diagnostics {
            let result = result(model, diagnostic, &codes, &mut roots);
            if seen.insert(result.to_string()) {
                results.push(result);
            }
        }
    }
    json!({
        "$schema": SCHEMA,
        "version": "2.1.0",
        "runs": [{
            "tool": { "driver": {
                "name": "outcross",
                "version": env!("CARGO_PKG_VERSION"),
                "semanticVersion": env!("CARGO_PKG_VERSION"),
                "rules": codes.iter().map(|code| rule(*code)).collect::<Vec<_>>(),
            } },
            // The run itself did what it was asked to, whatever it found.
            "invocations": [{ "executionSuccessful": true, "exitCode": exit_status }],
            "originalUriBaseIds": roots.table(),
            "columnKind": "unicodeCodePoints",
            "results": results,
        }],
    })
}

fn rule(code: Code) -> Value {
    json!({
        "id": code.name(),
        "shortDescription": { "text": code.summary() },
        "help": { "text": code.page(), "markdown": code.page() },
        "defaultConfiguration": { "level": code.severity().word() },
    })
}

fn result(model: &Findings<'_>, diagnostic: &Diagnostic, codes: &[Code], roots: &mut Roots) -> Value {
    let mut place = location(model, diagnostic.place, roots);
    if !diagnostic.here.is_empty() {
        place.insert("message".to_owned(), json!({ "text": diagnostic.here }));
    }
    let text = match &diagnostic.help {
        Some(help) => format!("{}. Help: {help}", diagnostic.message),
        None => diagnostic.message.clone(),
    };
    let accepted = diagnostic.accepted.iter();
    let suppressions: Vec<Value> = accepted
        .map(|reason| json!({ "kind": "inSource", "justification": reason }))
        .collect();
    let mut result = json!({
        "ruleId": diagnostic.code.name(),
        "ruleIndex": codes.binary_search(&diagnostic.code).unwrap_or_default(),
        "level": diagnostic.severity().word(),
        "message": { "text": text },
        "locations": [place],
        // Either all results of a run have them or none.
        "suppressions": suppressions,
    });
    if !diagnostic.labels.is_empty() {
        let labels = diagnostic.labels.iter().enumerate().map(|(id, label)| {
            let mut place = location(model, label.place, roots);
            place.insert("id".to_owned(), json!(id));
            place.insert("message".to_owned(), json!({ "text": label.text }));
            Value::Object(place)
        });
        result["relatedLocations"] = labels.collect();
    }
    result
}

/// A place in a file below the root folder, or in a text that is no file and has a name alone.
fn location(model: &Findings<'_>, span: Span, roots: &mut Roots) -> Map<String, Value> {
    let file = model.files.get(span.file);
    let artifact = match model.disk.from_root(&file.path) {
        Some(path) => json!({ "uri": relative_uri(&path), "uriBaseId": roots.id(model.disk.root()) }),
        None if file.path == Path::new("-") => json!({ "description": { "text": "standard input" } }),
        None => json!({ "description": { "text": file.name() } }),
    };
    let (start, end) = (model.files.place(span), model.files.place(span.after()));
    let physical = json!({
        "artifactLocation": artifact,
        "region": {
            "startLine": start.line,
            "startColumn": start.column,
            "endLine": end.line,
            "endColumn": end.column,
        },
    });
    Map::from_iter([("physicalLocation".to_owned(), physical)])
}

/// The root folders of the models; mostly there is one.
#[derive(Default)]
struct Roots(Vec<String>);

impl Roots {
    fn id(&mut self, root: &Path) -> String {
        let uri = folder_uri(root);
        let known = self.0.iter().position(|known| *known == uri);
        Self::name(known.unwrap_or_else(|| {
            self.0.push(uri);
            self.0.len() - 1
        }))
    }

    fn name(index: usize) -> String {
        match index {
            0 => "ROOT".to_owned(),
            other => format!("ROOT_{}", other + 1),
        }
    }

    fn table(&self) -> Map<String, Value> {
        let roots = self.0.iter().enumerate();
        roots
            .map(|(index, uri)| (Self::name(index), json!({ "uri": uri })))
            .collect()
    }
}

fn relative_uri(path: &Path) -> String {
    let parts = path.components().filter_map(|component| match component {
        Component::Normal(part) => Some(escaped(&part.to_string_lossy())),
        _ => None,
    });
    parts.collect::<Vec<_>>().join("/")
}

/// The URI of an absolute folder, which ends in `/` (RFC 8089, The "file" URI Scheme).
fn folder_uri(folder: &Path) -> String {
    let drive = match folder.components().next() {
        Some(Component::Prefix(prefix)) => match prefix.kind() {
            Prefix::Disk(letter) | Prefix::VerbatimDisk(letter) => format!("/{}:", char::from(letter)),
            _ => String::new(),
        },
        _ => String::new(),
    };
    match relative_uri(folder).as_str() {
        "" => format!("file://{drive}/"),
        path => format!("file://{drive}/{path}/"),
    }
}

/// A part of a path with all but the unreserved characters escaped (RFC 3986, section 2).
fn escaped(part: &str) -> String {
    let mut uri = String::with_capacity(part.len());
    for byte in part.bytes() {
        match byte {
            b'a'..=b'z' | b'A'..=b'Z' | b'0'..=b'9' | b'-' | b'.' | b'_' | b'~' => uri.push(char::from(byte)),
            other => uri += &format!("%{other:02X}"),
        }
    }
    uri
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn paths_become_uris() {
        assert_eq!(
            relative_uri(Path::new("models/a b/ß#.limit")),
            "models/a%20b/%C3%9F%23.limit"
        );
        assert_eq!(folder_uri(Path::new("/")), "file:///");
        assert_eq!(folder_uri(Path::new("/home/a%b")), "file:///home/a%25b/");
    }
}
