//! Why a run ended early: one type for files, questions and the work itself.

use cofactor::analysis::AnalysisError;
use cofactor::analysis::check::CheckError;
use cofactor::analysis::response::ResponseError;
use cofactor::analysis::roots::RootsError;
use cofactor::language::{Diagnostic, line_and_column};
use cofactor::typeset::json;

/// What ended a run.
#[derive(Debug)]
pub(crate) enum Failure {
    /// Faults of a text: the circuit file, or a query of the command line.
    Text {
        /// What the text is called in messages.
        name: String,
        text: String,
        diagnostics: Vec<Diagnostic>,
    },
    /// Everything that has no place in a text.
    Plain { code: &'static str, message: String, help: Option<String>, exit: u8 },
}

impl Failure {
    fn plain(code: &'static str, message: impl Into<String>, help: Option<&str>) -> Self {
        Self::Plain { code, message: message.into(), help: help.map(str::to_owned), exit: 2 }
    }

    /// A wrong command line.
    pub(crate) fn usage(message: &str) -> Self {
        Self::plain("usage", message, Some("see `cofactor --help`"))
    }

    /// An option's value that does not fit the circuit.
    pub(crate) fn option(message: String, help: &str) -> Self {
        Self::plain("option", message, Some(help))
    }

    /// A file that cannot be read.
    pub(crate) fn input(name: &str, error: &std::io::Error) -> Self {
        let message = match error.kind() {
            std::io::ErrorKind::InvalidData => format!("`{name}` is not text in UTF-8"),
            std::io::ErrorKind::NotFound => format!("there is no file `{name}`"),
            std::io::ErrorKind::IsADirectory => format!("`{name}` is a folder, not a file"),
            _ => format!("`{name}` cannot be read: {error}"),
        };
        Self::plain("cannot-read", message, Some("give the path of a circuit file, or `-`"))
    }

    /// Results that cannot be written.
    pub(crate) fn output(error: &std::io::Error) -> Self {
        Self::plain("cannot-write", format!("the results cannot be written: {error}"), None)
    }

    /// A file that cannot be written.
    pub(crate) fn file(name: &str, error: &std::io::Error) -> Self {
        let message = format!("`{name}` cannot be written: {error}");
        Self::plain("cannot-write", message, Some("give a place where files may be made"))
    }

    /// A work bound that was reached.
    pub(crate) fn bound(code: &'static str, message: String, help: &str) -> Self {
        Self::Plain { code, message, help: Some(help.to_owned()), exit: 4 }
    }

    /// A question without an answer.
    pub(crate) fn analysis(question: &str, error: &AnalysisError) -> Self {
        Self::Plain {
            code: error.code(),
            message: format!("{question}: {error}"),
            help: error.help(),
            exit: error.exit_code(),
        }
    }

    /// A function without a list of roots.
    pub(crate) fn roots(question: &str, error: &RootsError) -> Self {
        Self::Plain {
            code: error.code(),
            message: format!("{question}: {error}"),
            help: error.help().map(str::to_owned),
            exit: error.exit_code(),
        }
    }

    /// A claim that cannot be judged.
    pub(crate) fn check(claim: &str, error: &CheckError) -> Self {
        Self::Plain {
            code: error.code(),
            message: format!("{claim}: {error}"),
            help: error.help(),
            exit: error.exit_code(),
        }
    }

    /// A function without curves.
    pub(crate) fn response(question: &str, error: &ResponseError) -> Self {
        Self::Plain {
            code: error.code(),
            message: format!("{question}: {error}"),
            help: error.help(),
            exit: error.exit_code(),
        }
    }

    pub(crate) fn exit_code(&self) -> u8 {
        match self {
            Self::Text { .. } => 2,
            Self::Plain { exit, .. } => *exit,
        }
    }

    /// The JSON form: the first fault.
    pub(crate) fn json(&self) -> String {
        let error = match self {
            Self::Text { text, diagnostics, .. } => match diagnostics.first() {
                Some(first) => {
                    let (line, column) = line_and_column(text, first.span.start);
                    json::ErrorObject {
                        code: first.code.to_owned(),
                        message: first.message.clone(),
                        line: Some(line),
                        column: Some(column),
                        help: (!first.help.is_empty()).then(|| first.help.join("; ")),
                    }
                }
                None => return String::new(),
            },
            Self::Plain { code, message, help, .. } => json::ErrorObject {
                code: (*code).to_owned(),
                message: message.clone(),
                line: None,
                column: None,
                help: help.clone(),
            },
        };
        serde_json::to_string(&json::Failure { error }).unwrap_or_default()
    }
}
