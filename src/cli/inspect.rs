//! `cofactor inspect`: the circuit as understood, as text, JSON or a picture.

use cofactor::typeset::screen::{Characters, Screen};
use cofactor::typeset::{drawing, inspect};

use super::args::{Format, Inspect, ListingFormat};
use super::failure::Failure;
use super::messages::Messages;
use super::{input, width, write_results};

/// Runs the command; the exit code is 0.
pub(crate) fn run(arguments: &Inspect, messages: &Messages) -> Result<u8, Failure> {
    let loaded = input::load_file(&arguments.file, messages)?;
    let circuit = &loaded.circuit;
    let text = match arguments.format {
        ListingFormat::Text => {
            let characters = if arguments.ascii { Characters::Ascii } else { Characters::Unicode };
            inspect::text(circuit, Screen { width: width(Format::Text), characters })
        }
        ListingFormat::Svg => drawing::draw(circuit).svg(),
        ListingFormat::Json => {
            let listing = inspect::listing(circuit, input::warnings(&loaded));
            let mut text = serde_json::to_string_pretty(&listing)
                .map_err(|error| Failure::output(&error.into()))?;
            text.push('\n');
            text
        }
    };
    write_results(&text)?;
    Ok(0)
}
