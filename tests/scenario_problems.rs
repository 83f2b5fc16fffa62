//! Bad scenarios: each fault is found, alone, at its place, with what was expected and a guess at what was meant.

#![allow(clippy::unwrap_used)] // a test that unwraps fails with its line

use wane::fault::Fault;
use wane::scenario::{Document, Location, Problem, Problems, schema};

const GOOD: &str = include_str!("data/reference.toml");

fn problems_of(text: &str) -> Problems {
    match Document::parse("bad.toml", text) {
        Ok(document) => document.resolve(None, &[]).map(|_| ()).expect_err("the scenario should be refused"),
        Err(problems) => problems,
    }
}

/// Replaces `from` by `to`, in which « and » enclose what must be underlined.
fn spoiled(from: &str, to: &str) -> (String, Option<(usize, usize, String)>) {
    assert!(GOOD.contains(from), "the good scenario has no {from:?}");
    let marked = GOOD.replacen(from, to, 1);
    let Some(start) = marked.find('«') else { return (marked, None) };
    let before = &marked[..start];
    let line = before.matches('\n').count() + 1;
    let column = before.rsplit('\n').next().unwrap().chars().count() + 1;
    let quoted = marked[start + '«'.len_utf8()..].split('»').next().unwrap().to_owned();
    (marked.replace(['«', '»'], ""), Some((line, column, quoted)))
}

fn said(problem: &Problem) -> String {
    [Some(problem.message.as_str()), problem.label.as_deref(), problem.help.as_deref()]
        .into_iter()
        .flatten()
        .collect::<Vec<_>>()
        .join(" / ")
}

/// One fault: what is replaced, by what (underlined part marked), and the words that must be said of it.
type Case = (&'static str, &'static str, &'static [&'static str]);

const CASES: &[Case] = &[
    // Keys.
    ("bubble_point =", "«buble_point» =", &["`fluid.buble_point` is not a known key", "did you mean `bubble_point`?"]),
    ("oil_gravity  =", "«oilgravity» =", &["not a known key", "did you mean `oil_gravity`?"]),
    ("[period]", "[«perid»]", &["`perid` is not a known key", "did you mean `period`?"]),
    ("line_pressure = \"220", "«linepressure» = \"220", &["did you mean `line_pressure`?"]),
    ("salinity     =", "«datum»     =", &["`fluid.datum` is not a known key", "`datum` belongs in [tank]"]),
    (
        "salinity     =",
        "«xyzzy»     =",
        &["`fluid.xyzzy` is not a known key", "keys of [fluid]: oil_gravity, gas_gravity"],
    ),
    ("salinity     =", "lab = «\"a.csv\"»\nsalinity =", &["`fluid.lab` is a text, not a table", "[fluid.lab]"]),
    ("title =", "«odds» = {}\ntitle =", &["`odds`: the uncertainty study comes with a later version"]),
    // Lines and chokes.
    (
        "line_pressure = \"220 psia\"",
        "line = «\"heder\"»",
        &["there is no line named `heder`", "the scenario has no line at all"],
    ),
    (
        "line_pressure = \"220 psia\"",
        "line_pressure = \"220 psia\"\nline = «\"header\"»",
        &["`line_pressure` and `line` exclude each other"],
    ),
    (
        "[[well]]\n",
        "[[line]]\nname = \"header\"\npressure = [[\"0 STB/d\", \"150 psia\"], [«\"2 MMscf/d\"», \"240 psia\"]]\n[[well]]\n",
        &["`MMscf/d` is the unit of a gas rate, a liquid rate is expected"],
    ),
    (
        "[[well]]\n",
        "[[line]]\nname = \"header\"\npressure = [[\"0 STB/d\", \"150 psia\"], «[\"900 STB/d\", \"140 psia\"]»]\n[[well]]\n",
        &["the pressure of the line falls to 140.0 psia at a higher rate"],
    ),
    (
        "[[well]]\n",
        "[[line]]\nname = \"header\"\npressure = «\"150 psia\"»\n[[well]]\n",
        &["`line.pressure` is no list of pairs"],
    ),
    (
        "[well.tubing]\n",
        "[well.choke]\nsize = \"24/64 in\"\nmethod = «\"gilber\"»\n[well.tubing]\n",
        &["did you mean", "gilbert"],
    ),
    (
        "[well.tubing]\n",
        "[well.choke]\nsize = \"24/64 in\"\ntest = [{ wellhead = \"300 psia\", line = «\"310 psia\"», rate = \"900 STB/d\", gor = \"620 scf/STB\" }]\n[well.tubing]\n",
        &["the pressure downstream of the choke is not below that upstream of it"],
    ),
    // Missing.
    ("gas_gravity  = 0.78", "", &["`fluid.gas_gravity` is missing", "`gas_gravity` is expected here"]),
    ("name = \"OP-1\"\n", "", &["`well.name` is missing"]),
    (
        "wellhead_temperature = \"110 degF\"",
        "",
        &["the flowing temperature is not given", "one of wellhead_temperature, temperature, heat"],
    ),
    (
        "wellhead_temperature = \"110 degF\"",
        "wellhead_temperature = \"110 degF\"\nheat = «{ surface_temperature = \"60 degF\" }»",
        &["`wellhead_temperature` and `heat` exclude each other"],
    ),
    (
        "wellhead_temperature = \"110 degF\"",
        "heat = { surface_temperature = «\"300 degF\"» }",
        &["the wellhead is hotter than the tank"],
    ),
    (
        "wellhead_temperature = \"110 degF\"",
        "heat = { surface_temperature = \"60 degF\", transfer = «\"4 Btu/h/ft/degF\"» }",
        &["`Btu/h/ft/degF`"],
    ),
    (
        "wellhead_temperature = \"110 degF\"",
        "wellhead_temperature = \"110 degF\"\nrestrictions = [{ at = \"4000 ft\", diameter = «\"2.5 in\"» }]",
        &["2.5 in does not restrict the tubing there", "below the 2.441 in"],
    ),
    (
        "wellhead_temperature = \"110 degF\"",
        "temperature = [[\"0 ft\", «\"110 ft\"»]]",
        &["`temperature`", "a temperature is expected"],
    ),
    (
        "wellhead_temperature = \"110 degF\"",
        "temperature = [[\"0 ft\", \"110 degF\"], «[\"0 ft\", \"120 degF\"]»]",
        &["the temperatures do not go down from point to point"],
    ),
    (
        "wellhead_temperature = \"110 degF\"",
        "temperature = «\"110 degF\"»",
        &["`well.tubing.temperature` is a text", "[[\"0 ft\""],
    ),
    ("survey    = [", "«serveys» = [", &["did you mean `survey`?"]),
    // Types.
    ("gas_gravity  = 0.78", "gas_gravity = «\"0.78\"»", &["is a text, not a number", "leave out the quotes"]),
    ("gas_gravity  = 0.78", "gas_gravity = «true»", &["is true or false, not a number", "a bare number is expected"]),
    ("gas_gravity  = 0.78", "gas_gravity = «nan»", &["not a finite number"]),
    ("gas_gravity  = 0.78", "gas_gravity = «inf»", &["not a finite number"]),
    ("gas_gravity  = 0.78", "gas_gravity = «1e400»", &["not a finite number"]),
    ("gas_gravity  = 0.78", "gas_gravity = «78_000_000_000_000_000_000»", &["too large", "at most 2"]),
    ("gas_gravity  = 0.78", "gas_gravity = «-0.78»", &["negative", "at least 0.5"]),
    ("\"3600 psia\"\ntemperature", "«3600»\ntemperature", &["has no unit", "\"3600 psia\""]),
    ("\"3600 psia\"\ntemperature", "«\"3600\"»\ntemperature", &["has no unit", "\"3600 psia\""]),
    (
        "\"3600 psia\"\ntemperature",
        "«\"3600 psi\"»\ntemperature",
        &["absolute or gauge", "\"3600 psia\" or \"3600 psig\""],
    ),
    (
        "\"3600 psia\"\ntemperature",
        "«\"3600 degF\"»\ntemperature",
        &["`degF` is the unit of a temperature, a pressure is expected", "psia, psig"],
    ),
    (
        "\"3600 psia\"\ntemperature",
        "«\"3600 stone\"»\ntemperature",
        &["`stone` is not a known unit", "psia, psig, bar, barg"],
    ),
    ("\"3600 psia\"\ntemperature", "«\"nan psia\"»\ntemperature", &["not a finite number"]),
    ("\"3600 psia\"\ntemperature", "«\"3e300 psia\"»\ntemperature", &["too large", "at most 30000 psia"]),
    ("\"42 MMSTB\"", "«\"42 MMscf\"»", &["`MMscf` is the unit of a gas volume, a liquid volume is expected"]),
    ("\"42 MMSTB\"", "«\"-42 MMSTB\"»", &["`tank.oil_in_place` is negative"]),
    ("\"42 MMSTB\"", "«\"42 MMMMSTB\"»", &["`MMMMSTB` is not a known unit", "MMSTB"]),
    ("connate_water = 0.22", "connate_water = «22»", &["too large", "for 22 per cent write 0.22 or \"22 %\""]),
    ("uptime        = 0.94", "uptime = «0»", &["`well.uptime` is too small", "above 0 and at most 1"]),
    ("uptime        = 0.94", "uptime = «\"94 percent\"»", &["is a text, not a number", "\"22 %\""]),
    (
        "start = 2027-01-01",
        "start = «\"2027-01-01\"»",
        &["is a text, not a date", "leave out the quotes: start = 2027-01-01"],
    ),
    ("start = 2027-01-01", "start = «2027-01-01T06:00:00»", &["has a time of day", "2027-01-01"]),
    ("start = 2027-01-01", "start = «20270101»", &["is a number, not a date"]),
    ("end   = 2042-01-01", "end = «9999-01-01»", &["not a likely date"]),
    (
        "every = \"month\"",
        "every = «\"monthly\"»",
        &["cannot be \"monthly\"", "month, quarter, year", "did you mean \"month\"?"],
    ),
    ("units = \"field\"", "units = «\"feild\"»", &["did you mean \"field\"?"]),
    ("method = \"fetkovich\"", "method = «\"fetkovic\"»", &["did you mean \"fetkovich\"?"]),
    ("future = \"pressure\"", "future = «\"cubics\"»", &["did you mean \"cubic\"?", "pressure, mobility, cubic"]),
    (
        "\"hasan-kabir\"",
        "«\"orkiszewski\"»",
        &[
            "`orkiszewski` is not there yet",
            "hasan-kabir, drift-flux, ansari, hagedorn-brown, beggs-brill, mukherjee-brill, gray, no-slip",
        ],
    ),
    ("model = \"average\"", "model = «\"displacment\"»", &["did you mean \"displacement\"?"]),
    ("model = \"average\"", "model = «\"trend\"»", &["has no table", "`trend` is expected beside it"]),
    (
        "model = \"average\"",
        "model = \"trend\"\ntrend = «[[0.4, 0.0], [0.4, 0.6]]»",
        &["the first members of `tank.water.trend` do not rise"],
    ),
    (
        "model = \"average\"",
        "model = \"trend\"\ntrend = [[0.0, 0.0], [0.4, «60.0»]]",
        &["`water cut` is too large", "at most 0.9999"],
    ),
    (
        "model = \"average\"",
        "model = \"displacement\"\ncontacted_fraction = «1.0»",
        &["`tank.water.contacted_fraction` is too large", "at most 0.95"],
    ),
    ("[[well]]", "«[well]»", &["`well` is a table, not a list of tables", "two brackets"]),
    // Impossible together.
    (
        "bubble_point = \"2650 psia\"",
        "bubble_point = «\"4650 psia\"»",
        &["bubble point (4650.0 psia) lies above the initial pressure (3600.0 psia)"],
    ),
    ("bubble_point = \"2650 psia\"", "bubble_point = «\"9 psia\"»", &["below atmospheric"]),
    (
        "gas_cap_ratio = 0.0",
        "gas_cap_ratio = 0.5",
        &["there is a gas cap, but the bubble point (2650.0 psia) is not the initial pressure"],
    ),
    ("residual_oil_to_gas = 0.25", "residual_oil_to_gas = «0.75»", &["leave no mobile oil", "must be below 1"]),
    ("residual_oil_to_water = 0.28", "residual_oil_to_water = «0.78»", &["leave no mobile oil"]),
    ("end   = 2042-01-01", "end = «2026-01-01»", &["the period ends on 2026-01-01 but starts on 2027-01-01"]),
    ("end   = 2042-01-01", "end = «2242-01-01»", &["longer than a hundred years"]),
    (
        "flowing = \"2890 psia\"",
        "flowing = «\"3890 psia\"»",
        &["the flowing pressure (3890.0 psia) is not below the reservoir pressure (3600.0 psia)"],
    ),
    (
        "flowing = \"2890 psia\"",
        "flowing = \"2890 psia\", wellhead = «\"400 psia\"»",
        &["a separator test needs its gas-oil ratio", "`gor` is expected beside it"],
    ),
    (
        "flowing = \"2890 psia\"",
        "wellhead = «\"400 psia\"»",
        &["a separator test needs its gas-oil ratio", "`gor` is expected beside it"],
    ),
    (
        "[\"8600 ft\", \"8150 ft\"]",
        "«[\"3600 ft\", \"8150 ft\"]»",
        &["the survey goes backwards: measured depth", "from point 2 to point 3"],
    ),
    ("[\"8600 ft\", \"8150 ft\"]", "«[\"8600 ft\", \"3150 ft\"]»", &["the survey goes backwards: vertical depth"]),
    (
        "[\"8600 ft\", \"8150 ft\"]",
        "«[\"8600 ft\", \"9150 ft\"]»",
        &["vertical depth grows faster than measured depth"],
    ),
    ("[\"8600 ft\", \"8150 ft\"]", "«[\"8600 ft\"]»", &["a point of a survey is a pair"]),
    ("[\"0 ft\", \"0 ft\"]", "«[\"10 ft\", \"10 ft\"]»", &["does not begin at the wellhead"]),
    ("perforations  = \"8600 ft\"", "perforations = «\"9600 ft\"»", &["lie below the end of the survey"]),
    (
        "diameter  = \"2.441 in\"",
        "sections = [{ to = «\"6000 ft\"», diameter = \"2.441 in\" }]",
        &["the last section ends at 6000.0 ft, above the perforations"],
    ),
    (
        "diameter  = \"2.441 in\"",
        "sections = [«{ diameter = \"2.9 in\" }», { diameter = \"2.441 in\" }]",
        &["does not say where it ends"],
    ),
    (
        "diameter  = \"2.441 in\"",
        "sections = [{ to = \"6000 ft\", diameter = \"2.9 in\" }, { to = «\"5000 ft\"», diameter = \"2.4 in\" }, { diameter = \"2 in\" }]",
        &["the sections do not go down"],
    ),
    ("diameter  = \"2.441 in\"", "", &["the tubing's inside diameter is not given", "diameter, sections"]),
    ("\"110 degF\"", "«\"210 degF\"»", &["the wellhead is hotter than the tank"]),
    ("line_pressure = \"220 psia\"", "line_pressure = «\"10 psia\"»", &["below atmospheric pressure", "psig"]),
    ("line_pressure = \"220 psia\"", "line_pressure = «\"4220 psia\"»", &["the well can never flow"]),
    ("uptime        = 0.94", "skin = «-6.0»", &["infinite or negative", "above -6.00"]),
    (
        "uptime        = 0.94",
        "drainage_radius = «\"1000 ft\"»",
        &["`drainage_radius` stands alone", "`wellbore_radius` is expected"],
    ),
    ("uptime        = 0.94", "end = «2026-06-01»", &["it ends before the forecast starts"]),
    (
        "uptime        = 0.94",
        "start = 2030-01-01\nend = «2029-01-01»",
        &["it ends on 2029-01-01 but starts on 2030-01-01"],
    ),
    ("uptime        = 0.94", "minimum_flowing_pressure = «\"3700 psia\"»", &["lowest flowing pressure"]),
    ("uptime        = 0.94", "minimum_rate = «\"2700 STB/d\"»", &["the minimum rate is above the target rate"]),
    ("voidage_replacement = 0.8 ", "voidage_replacement = «8» ", &["too large", "at most 5"]),
    (
        "voidage_replacement = 0.8 ",
        "rate = \"100 STB/d\"\nvoidage_replacement = «0.8» ",
        &["`rate` and `voidage_replacement` exclude each other"],
    ),
    (
        "voidage_replacement = 0.8 ",
        "rate = «\"2 MMscf/d\"» ",
        &["`MMscf/d` is the unit of a gas rate, a liquid rate is expected"],
    ),
    (
        "method = \"fetkovich\"\n",
        "permeability = \"60 mD\"\nthickness = \"40 ft\"\n",
        &["`test` and `permeability` exclude each other"],
    ),
    ("water_factor  = 1.0\n", "drainage_shape = \"square\"\nshape_factor = «30.0»\n", &["exclude each other"]),
    ("method = \"fetkovich\"\n", "open_flow = \"3000 STB/d\"\n", &["`test` and `open_flow` exclude each other"]),
    // Names.
    ("well = \"OP-1\"", "well = «\"OP-2\"»", &["there is no well named `OP-2`", "did you mean `OP-1`?"]),
    ("well = \"OP-1\"", "injector = «\"QQQQ\"»", &["there is no injector named `QQQQ`", "names of injectors: OI-1"]),
    (
        "\"injector.OI-1.voidage_replacement\"",
        "«\"injector.QQQ-9.voidage_replacement\"»",
        &["there is no injector named `QQQ-9`", "case `no injection`"],
    ),
    (
        "\"injector.OI-1.voidage_replacement\"",
        "«\"injektor.OI-1.voidage_replacement\"»",
        &["not a known key", "did you mean `injector`"],
    ),
    (
        "\"injector.OI-1.voidage_replacement\"",
        "«\"injector.OI-1.voidage\"»",
        &["not a known key", "did you mean `voidage_replacement`?"],
    ),
    ("\"injector.OI-1.voidage_replacement\"", "«\"injector.OI-1\"»", &["which key of injector OI-1?"]),
    ("\"injector.OI-1.voidage_replacement\"", "«\"injector.OI-1.name\"»", &["a name cannot be overridden"]),
    ("\"injector.OI-1.voidage_replacement\"", "«\"event.on\"»", &["an override cannot change cases or events"]),
    ("\"injector.OI-1.voidage_replacement\"", "«\"tank.pressure.high\"»", &["`tank.pressure` is a value"]),
    // Events.
    ("on = 2031-06-01", "on = «2051-06-01»", &["the event lies outside the period"]),
    ("set = { skin = -2.0 }", "set = { «skinn» = -2.0 }", &["`well.skinn` is not a known key", "did you mean `skin`?"]),
    ("set = { skin = -2.0 }", "set = { skin = «-8.0» }", &["infinite or negative"]),
    ("set = { skin = -2.0 }", "set = { tubing.diameter = «\"2 ft/s\"» }", &["`ft/s` is the unit of a velocity"]),
    ("set = { skin = -2.0 }", "set = { «start» = 2032-01-01 }", &["an event cannot set `start` of a well"]),
    ("set = { skin = -2.0 }", "set = «{}»", &["`set` holds no key"]),
    (
        "well = \"OP-1\"\nset = { skin = -2.0 }",
        "tank = true\nset = { «pressure» = \"3000 psia\" }",
        &["an event cannot set `pressure` of a tank", "relative_permeability"],
    ),
    ("well = \"OP-1\"\n", "", &["the event does not say what it changes"]),
    (
        "set = { skin = -2.0 }",
        "set = { skin = -2.0 }\n[[event]]\non = 2031-06-01\nwell = \"OP-1\"\nset = { «skin» = -1.0 }",
        &["`skin` of OP-1 is set twice on 2031-06-01"],
    ),
    // Text that is no TOML.
    ("\"3600 psia\"\ntemperature", "«3600 psia»\ntemperature", &["string values must be quoted", "\"3600 psia\""]),
    ("gas_gravity  = 0.78", "gas_gravity = 0.78\n«gas_gravity» = 0.79", &["duplicate key"]),
];

#[test]
fn each_fault_is_found_alone_at_its_place_and_explained() {
    for (from, to, words) in CASES {
        let (text, place) = spoiled(from, to);
        let problems = problems_of(&text);
        assert_eq!(problems.list.len(), 1, "{to}\n{problems}");
        let problem = &problems.list[0];
        for word in *words {
            assert!(said(problem).contains(word), "{to}: {word:?} is not said in\n{problems}");
        }
        let found = problems.line_column(problem).unwrap_or_else(|| panic!("{to}: points nowhere\n{problems}"));
        if let Some((line, column, quoted)) = place {
            assert_eq!((found, problems.quoted(problem)), ((line, column), Some(quoted.as_str())), "{to}\n{problems}");
            assert!(problems.to_string().contains(&format!("bad.toml:{line}:{column}")), "{problems}");
        }
    }
}

#[test]
fn ten_faults_are_reported_in_one_go_in_the_order_of_the_file() {
    let mut text = GOOD.to_owned();
    let faults = [
        ("every = \"month\"", "every = \"week\""),
        ("\"34 API\"", "34"),
        ("bubble_point =", "buble_point ="),
        ("\"190 degF\"", "\"190 psia\""),
        ("connate_water = 0.22", "connate_water = 22"),
        ("name  = \"OI-1\"", "name = \"OI.1\""),
        ("flowing = \"2440 psia\"", "flowing = \"4440 psia\""),
        ("[\"8600 ft\", \"8150 ft\"]", "[\"600 ft\", \"150 ft\"]"),
        ("well = \"OP-1\"", "well = \"PO-1\""),
        ("\"injector.OI-1.voidage_replacement\"", "\"injector.OI-1.voidage\""),
    ];
    for (from, to) in faults {
        assert!(text.contains(from), "{from}");
        text = text.replacen(from, to, 1);
    }
    let problems = problems_of(&text);
    assert_eq!(problems.list.len(), 10, "{problems}");
    let lines: Vec<usize> = problems.list.iter().map(|problem| problems.line_column(problem).unwrap().0).collect();
    assert!(lines.is_sorted(), "{lines:?}");
    assert!(problems.to_string().ends_with("10 problems in bad.toml"));
}

#[test]
fn names_that_would_confuse_paths_or_files_are_refused() {
    for name in ["OP.1", "tank", "Tank", " OP-1", "a/b", "a[0]", "", "a\tb"] {
        let text = GOOD.replacen("name = \"OP-1\"", &format!("name = \"{}\"", name.replace('\t', "\\t")), 1);
        let problems = problems_of(&text);
        // What speaks of the well by its old name may be reported besides.
        assert_eq!(problems.line_column(&problems.list[0]), Some((52, 8)), "{name}\n{problems}");
        assert!(said(&problems.list[0]).contains("name"), "{name}\n{problems}");
    }
}

#[test]
fn duplicate_names_are_refused_across_wells_and_injectors() {
    let text = GOOD.replacen("name  = \"OI-1\"", "name = \"op-1\"", 1);
    let problems = problems_of(&text);
    assert!(problems.list.iter().any(|problem| problem.message.contains("stands twice")), "{problems}");
    let text = format!("{GOOD}\n[[case]]\nname = \"no injection\"\n");
    let problems = problems_of(&text);
    assert_eq!(problems.list.len(), 1, "{problems}");
    assert_eq!(problems.quoted(&problems.list[0]), Some("\"no injection\""));
}

#[test]
fn the_rendering_quotes_the_line_and_underlines_the_text() {
    let (text, _) = spoiled("bubble_point = \"2650 psia\"", "bubble_point = \"2650 psi\"");
    let expected = "\
error: `fluid.bubble_point`: `psi` leaves open whether the pressure is absolute or gauge
  --> bad.toml:13:16
   |
13 | bubble_point = \"2650 psi\"                        # measured; the chosen correlation is tuned through it
   |                ^^^^^^^^^^ a pressure is expected
   |
   = help: write \"2650 psia\" or \"2650 psig\"

1 problem in bad.toml";
    assert_eq!(problems_of(&text).to_string(), expected);
    assert!(problems_of(&text).render(true).contains("\u{1b}["), "colours when asked for");
}

#[test]
fn faults_in_settings_point_into_the_setting() {
    let document = Document::parse("good.toml", GOOD).unwrap();
    let cases = [
        ("well.OP-1.skin=two", "two", "not a number"),
        ("well.OP-1.skn=2", "well.OP-1.skn", "did you mean `skin`?"),
        ("well.OP-7.skin=2", "well.OP-7.skin", "there is no well named `OP-7`"),
        (" tank.pressure = 2000 psia ", "2000 psia", "bubble point"),
        ("tank.pressure=\"2000 psi\"", "\"2000 psi\"", "absolute or gauge"),
        ("period.end=2020-01-01", "2020-01-01", "the period ends on"),
        ("well.OP-1.tubing.survey=[[\"0 ft\", \"0 ft\"], [\"9 m\", 3]]", "3", "has no unit"),
        ("well.OP-1.inflow.test.rate=3", "well.OP-1.inflow.test.rate", "only the whole list can be replaced"),
        ("nonsense", "nonsense", "without an equals sign"),
        ("=3", "=3", "without a key"),
        ("well.OP-1=3", "well.OP-1", "which key of well OP-1?"),
        ("well=3", "well", "which well, and which of its keys?"),
    ];
    for (setting, quoted, words) in cases {
        let problems = document.resolve(None, &[setting.to_owned()]).map(|_| ()).expect_err(setting);
        assert_eq!(problems.list.len(), 1, "{setting}\n{problems}");
        let problem = &problems.list[0];
        assert!(matches!(problem.at, Location::Setting { index: 0, .. }), "{problems}");
        assert_eq!(problems.quoted(problem), Some(quoted), "{problems}");
        assert!(said(problem).contains(words), "{setting}\n{problems}");
    }
}

#[test]
fn clashes_of_several_values_are_found() {
    let document = Document::parse("good.toml", GOOD).unwrap();
    let test =
        |what: &str| format!("well.OP-1.inflow.test=[{{ reservoir = \"3600 psia\", rate = \"796 STB/d\", {what} }}]");
    let (swapped, vacuum) =
        (test("wellhead = \"3700 psia\", gor = \"620 scf/STB\""), test("wellhead = \"4 psia\", gor = \"620 scf/STB\""));
    let low = test("flowing = \"4 psia\"");
    let cases: Vec<(Vec<&str>, &str)> = vec![
        (vec!["fluid.h2s=0.6", "fluid.co2=0.5"], "leave no hydrocarbon gas"),
        (vec!["fluid.separator_pressure=100 psia"], "`fluid.separator_pressure` stands alone"),
        (vec!["fluid.separator_temperature=100 degF"], "`fluid.separator_temperature` stands alone"),
        (vec!["tank.produced.oil=43 MMSTB"], "more oil was produced than there was in place"),
        (vec!["tank.produced.gas=27 Bscf"], "more gas was produced than there was in solution"),
        (vec!["tank.relative_permeability.critical_gas=0.6"], "critical gas leave no mobile oil"),
        (vec!["well.OP-1.drainage_radius=2 ft", "well.OP-1.wellbore_radius=1 ft"], "hardly larger than the wellbore's"),
        // r = ln(0.472 * 1000 / 0.354) = 7.195 by hand, so -6.3 is too low and -6.1 is not.
        (
            vec!["well.OP-1.drainage_radius=1000 ft", "well.OP-1.wellbore_radius=0.354 ft", "well.OP-1.skin=-6.3"],
            "above -6.20",
        ),
        (vec!["well.OP-1.skin_at_test=-6"], "a skin of -6 makes the inflow infinite or negative"),
        (vec![&swapped], "the wellhead pressure is not below the reservoir pressure"),
        (vec![&vacuum], "the wellhead pressure lies below atmospheric pressure"),
        (vec![&low], "the flowing pressure lies below atmospheric pressure"),
        (vec!["well.OP-1.inflow.reservoir=3000 psia"], "each test states its own reservoir pressure"),
        (
            vec!["well.OP-1.inflow.method=vogel", "well.OP-1.inflow.exponent=0.9"],
            "belongs to the method fetkovich alone",
        ),
        (vec!["well.OP-1.inflow.flow_efficiency=0.8"], "`flow_efficiency` belongs to the method vogel alone"),
        (vec!["well.OP-1.inflow.turbulence=1e-4 psi/(STB/d)^2"], "`turbulence` belongs to the method jones alone"),
        (
            vec!["well.OP-1.inflow.method=composite", "well.OP-1.inflow.basis=oil"],
            "the composite of oil and water belongs to the rate of liquid",
        ),
        (
            vec!["well.OP-1.inflow.permeability=60 mD", "well.OP-1.inflow.thickness=40 ft"],
            "Darcy's productivity index needs the radii",
        ),
        (
            vec![
                "well.OP-1.inflow.permeability=60 mD",
                "well.OP-1.drainage_radius=900 ft",
                "well.OP-1.wellbore_radius=0.354 ft",
            ],
            "`permeability` stands alone",
        ),
        (vec!["well.OP-1.inflow.coefficient=0.001 STB/d/psi^2n"], "depends on the exponent n, which is not given"),
        (vec!["well.OP-1.inflow.exponent=0.9", "well.OP-1.inflow.coefficient=-0.001 STB/d/psi^2n"], "must be above 0"),
        (vec!["well.OP-1.tubing.survey=[[\"0 ft\",\"0 ft\"],[\"8700 ft\",\"0 ft\"]]"], "the survey never goes down"),
        (
            vec!["injector.OI-1.rate=5000 STB/d", "injector.OI-1.rate_limit=4000 STB/d"],
            "above the injector's own rate_limit",
        ),
        (vec!["injector.OI-1.bottomhole_limit=9 psia"], "the limit lies below atmospheric pressure"),
        (vec!["injector.OI-1.end=2028-01-01"], "it ends on 2028-01-01 but starts on 2029-01-01"),
        (vec!["injector.OI-1.start=2050-01-01"], "it starts after the forecast has ended"),
    ];
    for (sets, words) in cases {
        let sets: Vec<String> = sets.into_iter().map(str::to_owned).collect();
        let problems = document.resolve(None, &sets).map(|_| ()).expect_err(words);
        assert_eq!(problems.list.len(), 1, "{problems}");
        assert!(said(&problems.list[0]).contains(words), "{words}\n{problems}");
        assert!(matches!(problems.list[0].at, Location::Setting { .. }), "{problems}");
    }
    let sets = ["well.OP-1.drainage_radius=1000 ft", "well.OP-1.wellbore_radius=0.354 ft", "well.OP-1.skin=-6.1"];
    assert!(document.resolve(None, &sets.map(str::to_owned)).is_ok());
}

#[test]
fn a_case_that_does_not_exist_is_answered_with_those_that_do() {
    let document = Document::parse("good.toml", GOOD).unwrap();
    let problems = document.resolve(Some("no injektion"), &[]).map(|_| ()).expect_err("no such case");
    assert!(problems.to_string().contains("did you mean `no injection`?"), "{problems}");
}

/// A list instead of what is expected is refused by every key that is really read.
#[test]
fn every_key_of_the_list_is_really_read() {
    let text = format!("{GOOD}\n[[line]]\nname = \"LN\"\npressure = [[\"0 STB/d\", \"150 psia\"]]\n");
    let document = Document::parse("good.toml", &text).unwrap();
    for key in schema::KEYS {
        let path = match key.path.split_once('.') {
            _ if key.path.starts_with("event") || key.path.starts_with("case") => continue,
            Some(("well", rest)) => format!("well.OP-1.{rest}"),
            Some(("line", rest)) => format!("line.LN.{rest}"),
            Some(("injector", rest)) => format!("injector.OI-1.{rest}"),
            _ => key.path.to_owned(),
        };
        let lists = ["inflow.test", "tubing.sections", "tubing.restrictions", "choke.test", "flowing_survey"]
            .map(|list| format!("well.OP-1.{list}"));
        let member =
            |list: &String| Some((list.clone(), path.strip_prefix(list.as_str())?.strip_prefix('.')?.to_owned()));
        let (path, value) = match lists.iter().find_map(member) {
            Some((list, rest)) => (list, format!("[{{ {rest} = [[7]] }}]")),
            None => (path, "[[7]]".to_owned()),
        };
        let problems = document.resolve(None, &[format!("{path}={value}")]).map(|_| ()).expect_err(key.path);
        let name = key.path.rsplit('.').next().unwrap();
        let told = problems.list.iter().any(|problem| match name {
            "pressure" if path.starts_with("line") => problem.message == "a point of a line's table is a pair",
            "asphaltene_onset" | "asphaltene_lower_onset" => {
                problem.message == format!("a point of `{}` is a pair", key.path)
            }
            "compaction" => problem.message == "a point of the compaction table is a pair",
            "trend" | "water_trend" | "gor_trend" => problem.message == format!("a point of `{}` is a pair", key.path),
            "survey" => problem.message == "a point of a survey is a pair",
            "points" => problem.message == "a point of a flowing survey is a depth and a pressure",
            "temperature" if path.contains("tubing") => problem.message.contains("a point of a table of temperatures"),
            "name" => problem.message == "a name cannot be overridden",
            _ => problem.message.contains("a list") && problem.message.contains(name),
        });
        assert!(told, "{}\n{problems}", key.path);
    }
}

#[test]
fn faults_of_the_physics_find_their_line() {
    let document = Document::parse("good.toml", GOOD).unwrap();
    let scenario = document.resolve(None, &["well.OP-1.skin=1.5".to_owned()]).unwrap();
    let cases = [
        ("well[0].tubing.diameter", "\"2.441 in\""),
        ("well.OP-1.tubing.diameter", "\"2.441 in\""),
        ("well.OP-1.inflow.test[1].flowing", "\"2890 psia\""),
        ("well[0].tubing.survey[2][1]", "\"8150 ft\""),
        ("well[0].tubing.sections[3].to", "[well.tubing]"),
        ("fluid.bubble_point", "\"2650 psia\""),
        ("injector.OI-1", "[[injector]]"),
        ("well[0].skin", "1.5"),
        ("change[0].skin", "-2.0"),
        ("change[0].tubing.diameter", "\"2.441 in\""),
    ];
    for (key, quoted) in cases {
        let problems = scenario.problem_at(&Fault::new(key, "found by the physics").help("a hint"));
        assert_eq!(problems.quoted(&problems.list[0]), Some(quoted), "{key}");
        assert!(problems.to_string().contains("= help: a hint"));
    }
    let problems = document.problem_at(&Fault::new("nowhere.at.all", "message"));
    assert_eq!(problems.line_column(&problems.list[0]), Some((1, 1)));
}
