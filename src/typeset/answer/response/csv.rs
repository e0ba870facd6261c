//! Tables as CSV (RFC 4180): comma, quotes doubled inside quotes, lines that end in CR LF, a line of
//! headings. Numbers are the shortest that read back to the same double, in SI units; what is not a
//! finite number (the logarithm of 0) is an empty field.

use super::{Kind, Report};
use crate::typeset::number::float;

/// All results in one table, with the name of the result first.
pub fn csv(reports: &[Report<'_>]) -> String {
    let mut out = String::new();
    let over_time = reports.iter().all(|report| matches!(report.kind, Kind::Time { .. }));
    let with_envelope = reports
        .iter()
        .any(|report| matches!(&report.kind, Kind::Frequency(curves) if curves.envelope.is_some()));
    if over_time {
        record(&mut out, &["result", "time_s", "value"].map(str::to_owned));
    } else {
        let mut headings = vec![
            "result",
            "frequency_hz",
            "real",
            "imaginary",
            "magnitude",
            "magnitude_db",
            "phase_deg",
            "group_delay_s",
        ];
        if with_envelope {
            headings.extend([
                "least_magnitude_db",
                "largest_magnitude_db",
                "least_phase_deg",
                "largest_phase_deg",
            ]);
        }
        record(&mut out, &headings.into_iter().map(str::to_owned).collect::<Vec<_>>());
    }
    for report in reports {
        let label = report.label();
        match &report.kind {
            Kind::Frequency(curves) => {
                for (index, point) in curves.points.iter().enumerate() {
                    let values = [
                        point.hz,
                        point.value.re,
                        point.value.im,
                        point.value.norm(),
                        point.decibels(),
                        point.degrees(),
                        point.delay,
                    ];
                    let mut fields = vec![label.clone()];
                    fields.extend(values.map(field));
                    if with_envelope {
                        let range = curves.envelope.as_ref().and_then(|all| all.ranges.get(index));
                        fields.extend(match range {
                            Some(range) => [
                                20.0 * range.decades[0],
                                20.0 * range.decades[1],
                                range.phase[0].to_degrees(),
                                range.phase[1].to_degrees(),
                            ]
                            .map(field),
                            None => Default::default(),
                        });
                    }
                    record(&mut out, &fields);
                }
            }
            Kind::Time { curve, .. } => {
                for &[t, value] in &curve.points {
                    record(&mut out, &[label.clone(), field(t), field(value)]);
                }
            }
        }
    }
    out
}

fn field(value: f64) -> String {
    if value.is_finite() { float(value) } else { String::new() }
}

fn record(out: &mut String, fields: &[String]) {
    for (index, field) in fields.iter().enumerate() {
        if index > 0 {
            out.push(',');
        }
        if field.contains([',', '"', '\r', '\n']) {
            out.push_str(&format!("\"{}\"", field.replace('"', "\"\"")));
        } else {
            out.push_str(field);
        }
    }
    out.push_str("\r\n");
}
