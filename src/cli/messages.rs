//! Everything that goes to standard error: errors, warnings, notices.

use std::io::Write;

use anstream::ColorChoice;
use anstyle::{AnsiColor, Style};
use cofactor::analysis::Notice;
use cofactor::language::{Diagnostic, Severity, render};

use super::args::{Colour, Format, Output};
use super::failure::Failure;

/// The way messages are shown.
pub(crate) struct Messages {
    json: bool,
    quiet: bool,
}

impl Messages {
    pub(crate) fn new(output: &Output) -> Self {
        match output.color {
            Colour::Auto => {}
            Colour::Always => ColorChoice::Always.write_global(),
            Colour::Never => ColorChoice::Never.write_global(),
        }
        Self { json: output.format == Format::Json, quiet: output.quiet }
    }

    /// For commands that have no choices about messages.
    pub(crate) fn plain() -> Self {
        Self { json: false, quiet: false }
    }

    /// What a command that goes on has done.
    pub(crate) fn progress(&self, text: &str) {
        if !self.quiet {
            Self::line(text);
        }
    }

    fn line(text: &str) {
        // Nothing can be done about a standard error that cannot be written.
        let _ = writeln!(anstream::stderr(), "{text}");
    }

    /// Warnings and notices about a text; under JSON they stand in the results.
    pub(crate) fn remarks(&self, name: &str, text: &str, diagnostics: &[Diagnostic]) {
        if self.json || self.quiet {
            return;
        }
        for diagnostic in diagnostics {
            if diagnostic.severity != Severity::Error {
                Self::line(&render(diagnostic, text, name, true));
            }
        }
    }

    /// A notice about an answer.
    pub(crate) fn notice(&self, question: &str, notice: &Notice) {
        if !self.json && !self.quiet {
            let style = Style::new().bold();
            Self::line(&format!(
                "{style}notice[{}]{style:#}: {question}: {}",
                notice.code, notice.message
            ));
        }
    }

    /// What ended the run.
    pub(crate) fn failure(&self, failure: &Failure) {
        if self.json {
            Self::line(&failure.json());
            return;
        }
        match failure {
            Failure::Text { name, text, diagnostics } => {
                for diagnostic in diagnostics {
                    Self::line(&render(diagnostic, text, name, true));
                }
            }
            Failure::Plain { code, message, help, .. } => {
                let red = AnsiColor::Red.on_default().bold();
                Self::line(&format!("{red}error[{code}]{red:#}: {message}"));
                if let Some(help) = help {
                    Self::line(&format!("  help: {help}"));
                }
            }
        }
    }
}
