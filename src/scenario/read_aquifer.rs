//! The aquifer and the compaction table: from the tree to plain data.

use super::problem::Problem;
use super::reader::Reader;
use super::schema::{self, Limits};
use super::section::Section;
use super::tree::{Node, Value};
use crate::forecast::days_between;
use crate::tank::AquiferSpec;
use crate::tank::aquifer::{AquiferRock, LinearAquifer, RadialAquifer};
use crate::units::Dimension;
use jiff::civil::Date;

const PRESSURE_PSIA: Limits = Limits { low: 0.0, low_allowed: false, high: 30_000.0 };
/// Pore volumes over one of them.
const MULTIPLIER: Limits = Limits { low: 0.0, low_allowed: false, high: 10.0 };
/// Below this ratio of radii `ln reD - 3/4` is no pseudo-steady resistance.
const LEAST_RADIUS_RATIO: f64 = 2.2;

const RING: &[&str] = &["inner_radius", "radius_ratio", "thickness", "porosity", "angle"];
const SLAB: &[&str] = &["width", "length", "thickness", "porosity"];
const FLOW: &[&str] = &["permeability", "viscosity"];

/// What the table states, NaN where it does not.
struct Stated {
    strength_rb_d_psi: f64,
    water_rb: f64,
    productivity_rb_d_psi: f64,
    radius_ratio: f64,
    ring: RadialAquifer,
    slab: LinearAquifer,
    since: Option<Date>,
}

fn stated(reader: &mut Reader, section: &Section<'_>) -> Stated {
    let mut get = |key: &str| reader.optional_quantity(section, key).unwrap_or(f64::NAN);
    let (strength_rb_d_psi, water_rb, productivity_rb_d_psi) = (get("strength"), get("water"), get("productivity"));
    let (inner_radius_ft, width_ft, length_ft) = (get("inner_radius"), get("width"), get("length"));
    let (thickness_ft, permeability_md, viscosity_cp) = (get("thickness"), get("permeability"), get("viscosity"));
    let (compressibility_1_psi, angle_deg) = (get("compressibility"), reader.quantity(section, "angle"));
    let porosity = reader.optional_number(section, "porosity").unwrap_or(f64::NAN);
    let rock = AquiferRock { porosity, permeability_md, thickness_ft, viscosity_cp, compressibility_1_psi };
    Stated {
        strength_rb_d_psi,
        water_rb,
        productivity_rb_d_psi,
        radius_ratio: reader.optional_number(section, "radius_ratio").unwrap_or(f64::NAN),
        ring: RadialAquifer { rock, inner_radius_ft, angle_deg },
        slab: LinearAquifer { rock, width_ft, length_ft },
        since: reader.day(section, "since"),
    }
}

/// The aquifer, or `None` where there is none or it is wrong; `start` is the first day of the forecast.
pub(super) fn aquifer(reader: &mut Reader, tank: &Section<'_>, start: Option<Date>) -> Option<AquiferSpec> {
    if !tank.has("aquifer") {
        return None;
    }
    let section = reader.section(tank, "aquifer");
    let method = reader.choice(&section, "method", &[]);
    let linear = reader.choice(&section, "shape", &[]) == Some("linear");
    let stated = stated(reader, &section);
    reader.finish(&section);
    let method = method?;
    let complete = keys_fit(reader, &section, method, linear);
    let by_size = section.has("water");
    if method == "fetkovich" && !by_size && !linear && stated.radius_ratio < LEAST_RADIUS_RATIO {
        reader.note(
            Problem::new(section.at("radius_ratio"), "this ring is too thin for a pseudo-steady state")
                .label(format!("at least {LEAST_RADIUS_RATIO} is expected"))
                .help("so small an aquifer follows the tank's pressure: use the method \"pot\""),
        );
    }
    if let (Some(since), Some(start)) = (stated.since, start)
        && since > start
    {
        reader.note(
            Problem::new(section.at("since"), "the first production lies after the start of the forecast")
                .label("a date not after period.start is expected"),
        );
    }
    complete.then(|| spec(method, &stated, by_size, linear, start))
}

fn spec(method: &str, stated: &Stated, by_size: bool, linear: bool, start: Option<Date>) -> AquiferSpec {
    let Stated { ring, slab, radius_ratio, .. } = *stated;
    let (water_rb, productivity_rb_d_psi) = match (by_size, linear) {
        (true, _) => (stated.water_rb, stated.productivity_rb_d_psi),
        (false, true) => (slab.water_rb(), slab.productivity_rb_d_psi()),
        (false, false) => (ring.water_rb(radius_ratio), ring.productivity_rb_d_psi(radius_ratio)),
    };
    let compressibility_1_psi = ring.rock.compressibility_1_psi;
    match method {
        "pot" => AquiferSpec::Pot { water_rb, compressibility_1_psi },
        "schilthuis" => AquiferSpec::Schilthuis { strength_rb_d_psi: stated.strength_rb_d_psi },
        "fetkovich" => AquiferSpec::Fetkovich { water_rb, compressibility_1_psi, productivity_rb_d_psi },
        _ => AquiferSpec::CarterTracy {
            constant_rb_psi: ring.constant_rb_psi(),
            time_per_day: ring.time_per_day(),
            age_days: stated.since.zip(start).map_or(0.0, |(since, start)| days_between(since, start)),
        },
    }
}

/// Notes keys that the law lacks and keys that it does not go by; whether nothing is lacking.
fn keys_fit(reader: &mut Reader, section: &Section<'_>, method: &str, linear: bool) -> bool {
    let by_size = section.has("water");
    let used: Vec<&str> = match method {
        "schilthuis" => vec!["strength"],
        "pot" if by_size => vec!["water", "compressibility"],
        "fetkovich" if by_size => vec!["water", "compressibility", "productivity"],
        "carter-tracy" => {
            [&["inner_radius", "thickness", "porosity", "compressibility", "angle", "shape", "since"], FLOW].concat()
        }
        _ => {
            let flow = if method == "fetkovich" { FLOW } else { &[] };
            let body = if linear { SLAB } else { RING };
            [body, flow, &["compressibility", "shape"]].concat()
        }
    };
    let mut complete = true;
    for &key in used.iter().filter(|&&key| !matches!(key, "angle" | "shape" | "since")) {
        let missing = !section.has(key);
        complete &= !missing;
        // A slip of the pen is reported as unknown, with its guess: once is enough.
        if missing && section.misspelt().all(|word| word != key) {
            let or = match method {
                "pot" if !by_size => " (or state `water`)",
                "fetkovich" if !by_size => " (or state `water` and `productivity`)",
                _ => "",
            };
            reader.note(
                Problem::new(section.at(""), format!("`tank.aquifer.{key}` is missing"))
                    .label(format!("a {method} aquifer needs it{or}")),
            );
        }
    }
    for entry in section.table.map_or(&[][..], |table| &table.entries) {
        let known = schema::children(&section.path).any(|(name, _)| name == entry.key);
        if known && entry.key != "method" && !used.contains(&entry.key.as_str()) {
            reader.note(
                Problem::new(entry.key_at.clone(), format!("`tank.aquifer.{}` is not used here", entry.key))
                    .label(format!("a {method} aquifer stated this way goes by {}", used.join(", "))),
            );
        }
    }
    if method == "carter-tracy" && linear {
        reader.note(
            Problem::new(section.at("shape"), "a carter-tracy aquifer is radial").label("\"radial\" is expected"),
        );
    }
    complete
}

/// The water that had come before the forecast cannot be known from the pressure alone unless the aquifer is a pot.
pub(super) fn check_produced(reader: &mut Reader, tank: &Section<'_>, aquifer: Option<&AquiferSpec>) {
    let Some(produced) = tank.get("produced") else { return };
    let table = produced.node.table();
    let has = |key: &str| table.is_some_and(|table| table.get(key).is_some());
    let at = |key: &str| {
        table.and_then(|table| table.get(key)).map_or_else(|| produced.node.at.clone(), |entry| entry.node.at.clone())
    };
    match aquifer {
        Some(AquiferSpec::Pot { .. }) if has("aquifer_influx") => reader.note(
            Problem::new(at("aquifer_influx"), "the influx of a pot aquifer follows from the pressure")
                .label("not used by this aquifer"),
        ),
        None if has("aquifer_influx") && !tank.has("aquifer") => reader.note(
            Problem::new(at("aquifer_influx"), "there is no aquifer from which water came")
                .label("[tank.aquifer] is expected"),
        ),
        Some(AquiferSpec::Pot { .. }) | None => {}
        Some(spec) => {
            if !has("aquifer_influx") {
                reader.note(
                    Problem::new(
                        produced.node.at.clone(),
                        "the tank has produced, but not the water that came in is given",
                    )
                    .label("aquifer_influx is expected")
                    .help(
                        "take it from a material balance at the measured pressure; \"0 STB\" where none had come yet",
                    ),
                );
            }
            if matches!(spec, AquiferSpec::CarterTracy { .. }) {
                let stated = tank.get("aquifer").and_then(|a| a.node.table()).is_some_and(|a| a.get("since").is_some());
                if !stated {
                    reader.note(
                        Problem::new(
                            tank.at("aquifer"),
                            "the tank has produced, but the aquifer does not say since when",
                        )
                        .label("since is expected: the day of the first production"),
                    );
                }
            }
        }
    }
}

/// Pairs of pressure, psia, and pore-volume multiplier.
pub(super) fn compaction(reader: &mut Reader, tank: &Section<'_>) -> Vec<(f64, f64)> {
    let example = "[[\"1000 psia\", 0.97], [\"4000 psia\", 1.0]]";
    let Some(entry) = reader.look(tank, "compaction", example).0 else { return Vec::new() };
    match entry.node.list() {
        Some(rows) if !rows.is_empty() => rows.iter().map(|row| point(reader, row)).collect(),
        _ => {
            reader.note(
                Problem::new(entry.node.at.clone(), "`tank.compaction` is no list of pairs")
                    .label(format!("expected: {example}")),
            );
            Vec::new()
        }
    }
}

fn point(reader: &mut Reader, row: &Node) -> (f64, f64) {
    let Some([pressure, multiplier]) = row.list() else {
        reader.note(
            Problem::new(row.at.clone(), "a point of the compaction table is a pair")
                .label("[pressure, pore-volume multiplier] is expected, like [\"4000 psia\", 1.0]"),
        );
        return (f64::NAN, f64::NAN);
    };
    let pressure_psia = reader.quantity_node(pressure, "pressure", Dimension::Pressure, PRESSURE_PSIA);
    let value = match multiplier.value {
        Value::Number(number) if MULTIPLIER.allow(number) => number,
        _ => {
            reader.note(
                Problem::new(multiplier.at.clone(), "this is no pore-volume multiplier")
                    .label(format!("a bare number {} is expected", MULTIPLIER.text(""))),
            );
            f64::NAN
        }
    };
    (pressure_psia, value)
}
