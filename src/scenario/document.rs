//! A parsed scenario file, and the cases that come out of it.

use super::load::{LoadError, read_text};
use super::overrides::{self, Override, unknown_name};
use super::problem::{Location, Problem, Problems};
use super::read_tank;
use super::reader::{FileUsed, Reader, shorten};
use super::resolve::{self, problem_of, resolve};
use super::section::Section;
use super::tree::{self, Node, Table};
use super::{checks, hex};
use crate::fault::Fault;
use crate::fluid::FluidSpec;
use crate::forecast::FieldSpec;
use crate::units::UnitSystem;
use sha2::{Digest, Sha256};
use std::path::{Path, PathBuf};
use toml::de::DeTable;

/// A parsed scenario file.
#[derive(Debug, Clone)]
pub struct Document {
    name: String,
    text: String,
    folder: PathBuf,
    root: Table,
}

/// One case of a scenario, read and checked.
#[derive(Debug, Clone)]
pub struct Scenario {
    /// Title.
    pub title: String,
    /// The case; `None`: the scenario as it stands.
    pub case: Option<String>,
    /// In what results are written.
    pub units: UnitSystem,
    /// Turns absolute pressures into gauge ones, psia.
    pub atmospheric_pressure_psia: f64,
    /// What the forecast needs.
    pub field: FieldSpec,
    /// SHA-256 of the file's bytes.
    pub sha256: String,
    /// The settings that were applied over file and case.
    pub settings: Vec<String>,
    /// The files that the scenario names, with their SHA-256.
    pub files: Vec<FileUsed>,
    places: Places,
}

/// Only what a property table needs.
#[derive(Debug, Clone)]
pub struct FluidScenario {
    /// Title.
    pub title: String,
    /// In what results are written.
    pub units: UnitSystem,
    /// Turns absolute pressures into gauge ones, psia.
    pub atmospheric_pressure_psia: f64,
    /// The fluid.
    pub fluid: FluidSpec,
    /// Temperature of the tank, degF.
    pub temperature_degf: f64,
    /// Initial pressure of the tank, psia, where one is stated.
    pub pressure_psia: Option<f64>,
    /// SHA-256 of the file's bytes.
    pub sha256: String,
    /// The settings that were applied over the file.
    pub settings: Vec<String>,
}

/// Where everything stands, to point at it later.
#[derive(Debug, Clone)]
struct Places {
    name: String,
    text: String,
    settings: Vec<String>,
    root: Table,
    /// The tree after each dated change, and the path of what it changed.
    changed: Vec<(Table, String)>,
}

impl Document {
    /// Reads and parses a file.
    ///
    /// # Errors
    /// When there is no readable UTF-8 text at the path, or it is no TOML.
    pub fn load(path: &Path) -> Result<Self, LoadError> {
        let text = read_text(path)?;
        Ok(Self::parse(&path.display().to_string(), &text)?)
    }

    /// Parses a text; `name` is its path, from which the paths in it are counted.
    ///
    /// # Errors
    /// With every place where the text is no TOML.
    pub fn parse(name: &str, text: &str) -> Result<Self, Problems> {
        let (table, errors) = DeTable::parse_recoverable(text);
        if !errors.is_empty() {
            return Err(Problems::new(name, text, &[], syntax_problems(text, &errors)));
        }
        let root = tree::from_document(table.get_ref(), &Location::File);
        let folder = Path::new(name).parent().map(Path::to_owned).unwrap_or_default();
        Ok(Self { name: name.to_owned(), text: text.to_owned(), folder, root })
    }

    /// Names of the cases, in the order of the file.
    pub fn case_names(&self) -> Vec<String> {
        self.root.tables("case").iter().filter_map(|case| case.name().map(str::to_owned)).collect()
    }

    /// The title, or the file's name without its ending.
    pub fn title(&self) -> String {
        title(&self.root, &self.name)
    }

    /// The file's text.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The path as it was given.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// SHA-256 of the text's bytes.
    pub fn sha256(&self) -> String {
        hex(&Sha256::digest(self.text.as_bytes()))
    }

    /// Reads and checks one case (`None`: the scenario as it stands) with settings "KEY=VALUE" applied over it.
    ///
    /// Without settings, the cases that were not asked for are checked too, so that all problems of the file
    /// appear at once.
    ///
    /// # Errors
    /// With all problems.
    pub fn resolve(&self, case: Option<&str>, sets: &[String]) -> Result<Scenario, Problems> {
        let mut problems = self.check_cases();
        let node = match case {
            Some(name) => match self.case(name) {
                Some(node) => Some(node),
                None => {
                    problems.push(unknown_name("case", name, &self.case_names(), Location::Nowhere));
                    return Err(Problems::new(&self.name, &self.text, sets, problems));
                }
            },
            None => None,
        };
        let mut root = self.root.clone();
        apply_case(&mut root, node, &mut problems);
        apply_settings(&mut root, sets, &mut problems);
        let resolved = resolve(&root, node, &self.folder, &self.text);
        problems.extend(resolved.problems);
        if sets.is_empty() {
            self.check_others(case, &mut problems);
        }
        let places = Places {
            name: self.name.clone(),
            text: self.text.clone(),
            settings: sets.to_vec(),
            root,
            changed: resolved.changed,
        };
        if !problems.is_empty() {
            return Err(Problems::new(&self.name, &self.text, sets, problems));
        }
        let field = resolved.field;
        let faults = resolve::physics_faults(&field, resolved.units);
        if !faults.is_empty() {
            return Err(places.problems_at(&faults));
        }
        Ok(Scenario {
            title: title(&places.root, &self.name),
            case: case.map(str::to_owned),
            units: resolved.units,
            atmospheric_pressure_psia: resolved.atmospheric_pressure_psia,
            field,
            sha256: self.sha256(),
            settings: sets.to_vec(),
            files: resolved.files,
            places,
        })
    }

    /// Reads and checks only the fluid, the tank's temperature and the standard conditions.
    ///
    /// # Errors
    /// With all problems of these.
    pub fn resolve_fluid(&self, sets: &[String]) -> Result<FluidScenario, Problems> {
        let mut problems = Vec::new();
        let mut root = self.root.clone();
        apply_settings(&mut root, sets, &mut problems);
        let mut reader = Reader::new(&self.folder, f64::NAN);
        let top = Section::root(&root);
        reader.atmospheric_pressure_psia = read_tank::atmospheric_pressure_psia(&mut reader, &top);
        let units = read_tank::units(&mut reader, &top);
        let (fluid, _) = read_tank::fluid(&mut reader, &top);
        let tank = reader.section(&top, "tank");
        let temperature_degf = reader.quantity(&tank, "temperature");
        // A missing or wrong pressure is no concern of the fluid.
        let noted = reader.problems.len();
        let pressure_psia = reader.optional_quantity(&tank, "pressure").filter(|pressure| pressure.is_finite());
        reader.problems.truncate(noted);
        let faults = checks::fluid(&fluid, reader.atmospheric_pressure_psia);
        problems.extend(reader.problems);
        problems.extend(faults.iter().map(|fault| problem_of(fault, &root)));
        if !problems.is_empty() {
            return Err(Problems::new(&self.name, &self.text, sets, problems));
        }
        Ok(FluidScenario {
            title: title(&root, &self.name),
            units,
            atmospheric_pressure_psia: reader.atmospheric_pressure_psia,
            fluid,
            temperature_degf,
            pressure_psia,
            sha256: self.sha256(),
            settings: sets.to_vec(),
        })
    }

    /// Turns a fault that a layer of the physics found into a problem with its place in the file as it stands.
    pub fn problem_at(&self, fault: &Fault) -> Problems {
        Problems::new(&self.name, &self.text, &[], vec![problem_of(fault, &self.root)])
    }

    fn case(&self, name: &str) -> Option<&Node> {
        self.root.tables("case").iter().find(|node| node.name() == Some(name))
    }

    /// What is wrong with the cases themselves, whatever they set.
    fn check_cases(&self) -> Vec<Problem> {
        let mut reader = Reader::new(&self.folder, f64::NAN);
        let top = Section::root(&self.root);
        let mut names: Vec<String> = Vec::new();
        if !top.has("case") {
            return Vec::new();
        }
        for section in reader.sections(&top, "case") {
            if let Some(name) = reader.text(&section, "name") {
                if names.contains(&name) {
                    reader.note(
                        Problem::new(section.at("name"), format!("the case `{name}` stands twice"))
                            .label("cases need names that differ"),
                    );
                }
                names.push(name);
            }
            if let Some(entry) = section.get("set")
                && entry.node.table().is_none()
            {
                let found = entry.node.value.kind();
                reader.note(
                    Problem::new(entry.node.at.clone(), format!("`case.set` is {found}, not a table"))
                        .label("{ \"well.OP-1.skin\" = -2 } is expected"),
                );
            }
            reader.finish(&section);
        }
        reader.problems
    }

    /// Adds what is wrong with the cases that were not asked for, and with the scenario without its cases.
    fn check_others(&self, asked_for: Option<&str>, problems: &mut Vec<Problem>) {
        let others = std::iter::once(None).chain(self.root.tables("case").iter().map(Some));
        for node in others {
            let name = node.and_then(Node::name);
            if name == asked_for {
                continue;
            }
            let mut root = self.root.clone();
            let mut found = Vec::new();
            apply_case(&mut root, node, &mut found);
            found.extend(resolve(&root, node, &self.folder, &self.text).problems);
            let said: Vec<(Location, String)> =
                problems.iter().map(|old| (old.at.clone(), old.message.clone())).collect();
            let new = found.into_iter().filter(|new| !said.contains(&(new.at.clone(), new.message.clone()))).map(
                |mut new| {
                    if let Some(name) = name {
                        new.message.push_str(&format!(" (case `{}`)", shorten(name)));
                    }
                    new
                },
            );
            problems.extend(new);
        }
    }
}

impl Scenario {
    /// Turns a fault that a layer of the physics found into a problem with its place in the file or setting.
    ///
    /// The longest part of the fault's path that exists decides; `change[2].tubing.diameter` speaks of the new
    /// settings of a dated event.
    pub fn problem_at(&self, fault: &Fault) -> Problems {
        self.places.problems_at(std::slice::from_ref(fault))
    }

    /// Whether the file, case or settings say anything at this path.
    pub(super) fn states(&self, path: &str) -> bool {
        tree::locate_exactly(&self.places.root, path)
    }
}

impl Places {
    fn problems_at(&self, faults: &[Fault]) -> Problems {
        let list = faults.iter().map(|fault| self.problem_of(fault)).collect();
        Problems::new(&self.name, &self.text, &self.settings, list)
    }

    fn problem_of(&self, fault: &Fault) -> Problem {
        let change = fault.key.strip_prefix("change[").and_then(|rest| {
            let (index, rest) = rest.split_once(']')?;
            let (root, path) = self.changed.get(index.parse::<usize>().ok()?)?;
            Some((root, format!("{path}{rest}")))
        });
        match change {
            Some((root, key)) => problem_of(&Fault { key, ..fault.clone() }, root),
            None => problem_of(fault, &self.root),
        }
    }
}

fn title(root: &Table, name: &str) -> String {
    let written = root.get("title").and_then(|entry| entry.node.text()).filter(|text| !text.trim().is_empty());
    let stem = || Path::new(name).file_stem().and_then(|stem| stem.to_str()).unwrap_or(name).to_owned();
    written.map_or_else(stem, str::to_owned)
}

fn apply_case(root: &mut Table, case: Option<&Node>, problems: &mut Vec<Problem>) {
    let set = case.and_then(Node::table).and_then(|table| table.get("set")).and_then(|entry| entry.node.table());
    if let Some(set) = set {
        overrides::apply(root, "", &overrides::of_table(set), problems);
    }
}

fn apply_settings(root: &mut Table, sets: &[String], problems: &mut Vec<Problem>) {
    for (index, setting) in sets.iter().enumerate() {
        let read: Result<Vec<Override>, Problem> = overrides::of_setting(setting, index);
        match read {
            Ok(read) => overrides::apply(root, "", &read, problems),
            Err(problem) => problems.push(problem),
        }
    }
}

/// The parser's errors, one for each line, with a hint where a quantity stands without quotes.
fn syntax_problems(text: &str, errors: &[toml::de::Error]) -> Vec<Problem> {
    let mut out: Vec<Problem> = Vec::new();
    let mut lines = Vec::new();
    for error in errors {
        // An error about the end of the text belongs to its last line.
        let span = error.span().unwrap_or(0..0);
        let start = span.start.min(text.len());
        let begin = text.as_bytes()[..start].iter().rposition(|byte| *byte == b'\n').map_or(0, |i| i + 1);
        if lines.contains(&begin) {
            continue;
        }
        lines.push(begin);
        let problem = Problem::new(Location::File(span.clone()), error.message().to_owned()).label("not valid TOML");
        let found = text.get(span).unwrap_or("").trim();
        let quantity = found.starts_with(|c: char| c.is_ascii_digit() || matches!(c, '-' | '+' | '.'));
        out.push(if quantity && found.contains(|c: char| c.is_alphabetic()) {
            problem.help(format!("a value with a unit stands in quotes: \"{found}\""))
        } else if error.message().contains("duplicate key") {
            problem.help(
                "a key or table may stand only once; wells, injectors, events and cases have two brackets: [[well]]",
            )
        } else {
            problem
        });
    }
    // What follows a broken line is often its consequence: the first few are worth reading.
    out.truncate(5);
    out
}
