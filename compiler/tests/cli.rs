//! The program from outside: words and files in, text and exit codes out.

use serde_json::Value;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

/// What a run of the program left.
struct Run {
    code: i32,
    out: String,
    err: String,
}

/// A folder of its own that goes with the test.
struct Folder(PathBuf);

impl Folder {
    fn new(name: &str) -> Folder {
        let path = std::env::temp_dir().join(format!("pintle-cli-{}-{name}", std::process::id()));
        let _ = std::fs::remove_dir_all(&path);
        std::fs::create_dir_all(&path).unwrap();
        Folder(path)
    }

    fn write(&self, name: &str, text: impl AsRef<[u8]>) -> String {
        let path = self.0.join(name);
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        std::fs::write(&path, text).unwrap();
        name.into()
    }

    fn read(&self, name: &str) -> String {
        std::fs::read_to_string(self.0.join(name)).unwrap()
    }

    fn command(&self, words: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_pintle"));
        command.args(words).current_dir(&self.0).env_remove("NO_COLOR").env("TERM", "xterm");
        command
    }

    fn run(&self, words: &[&str]) -> Run {
        finish(self.command(words))
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = std::fs::remove_dir_all(&self.0);
    }
}

fn finish(mut command: Command) -> Run {
    let output = command.output().unwrap();
    Run {
        code: output.status.code().unwrap(),
        out: String::from_utf8(output.stdout).unwrap(),
        err: String::from_utf8(output.stderr).unwrap(),
    }
}

const SOUND: &str = "given m = 3 kg cite \"scale\"\nE = m * g_n * 2 m as J\nlimit E <= 100 J\n";
const NOT_MET: &str = "given m = 3 kg\nlimit m <= 2 kg\n";
const BROKEN: &str = "given m = 3 kg\ndouble = 2 * m\nwrong = m + 2 s\n";
const NOMINAL: &str = "given m = 3 kg ± 50 %\nlimit m <= 4 kg\n";
const BOTH: &str = "given m = 3 kg\nlimit m <= 2 kg\nwrong = m + 2 s\n";
const MET_AND_NOT: &str = "given m = 3 kg ± 50 %\nlimit m <= 4 kg\nlimit m <= 2 kg\n";
const SLACK: &str = "assume \"No wind.\" open\ngiven m = 3 kg\nlimit m <= 4 kg\n";

#[track_caller]
fn check_code(sheet: &str, flags: &[&str], expected: i32) {
    let folder = Folder::new(&format!("code-{expected}-{}-{}", sheet.len(), flags.join("")));
    folder.write("a.pintle", sheet);
    for command in ["solve", "check"] {
        let mut words = vec![command, "a.pintle"];
        words.extend(flags);
        let run = folder.run(&words);
        assert_eq!(run.code, expected, "{command}: {}{}", run.out, run.err);
    }
}

#[test]
fn exit_codes_say_how_the_sheet_stands() {
    check_code(SOUND, &[], 0);
    check_code(NOT_MET, &[], 1);
    check_code(BROKEN, &[], 2);
    check_code(NOMINAL, &[], 3);
    check_code(NOMINAL, &["--accept", "nominal"], 0);
}

#[test]
fn errors_come_before_limits_and_these_before_what_is_open() {
    check_code(BOTH, &[], 2);
    check_code(MET_AND_NOT, &[], 1);
}

#[test]
fn strict_makes_open_assumptions_and_missing_sources_errors() {
    check_code(SLACK, &[], 0);
    check_code(SLACK, &["--strict"], 2);
    check_code(SOUND, &["--strict"], 0);
}

#[track_caller]
fn check_usage(words: &[&str], expected: &str) {
    let folder = Folder::new(&format!("usage-{}", words.join("-").replace(['/', '.'], "")));
    folder.write("a.pintle", SOUND);
    let run = folder.run(words);
    assert_eq!((run.code, run.out.as_str()), (64, ""), "{}", run.err);
    assert!(run.err.contains(expected), "{}", run.err);
}

#[test]
fn a_wrong_command_line_is_code_64_and_offers_the_nearest() {
    check_usage(&[], "a command is needed");
    check_usage(&["slove", "a.pintle"], "did you mean `solve`?");
    check_usage(&["solve", "a.pintle", "--jsno"], "did you mean `--json`");
    check_usage(&["solve"], "usage: pintle solve FILE");
    check_usage(&["list", "unit"], "did you mean `units`?");
    check_usage(&["explain", "a.pintle", "F"], "no value is named `F`");
}

#[test]
fn planned_commands_say_so() {
    for name in ["budget", "report", "draw", "compare", "seal", "verify"] {
        check_usage(&[name, "a.pintle", "-o", "b.html"], &format!("`pintle {name}` is not supported yet"));
    }
}

#[test]
fn a_file_that_cannot_be_read_is_code_66() {
    let folder = Folder::new("unreadable");
    folder.write("latin.pintle", b"# \xe9\n");
    folder.write("empty/notes.txt", "");
    for words in [
        ["solve", "none.pintle"].as_slice(),
        &["solve", "latin.pintle"],
        &["check", "none.pintle"],
        &["check", "empty"],
        &["explain", "none.pintle", "m"],
        &["format", "latin.pintle"],
    ] {
        let run = folder.run(words);
        assert_eq!((run.code, run.out.as_str()), (66, ""), "{words:?} {}", run.err);
        assert!(run.err.starts_with("error: "), "{}", run.err);
    }
    assert_eq!(std::fs::read(folder.0.join("latin.pintle")).unwrap(), b"# \xe9\n");
}

#[test]
fn help_and_version_go_to_standard_output() {
    let folder = Folder::new("help");
    for words in [["--help"].as_slice(), &["help"], &["solve", "--help"], &["budget", "--help"]] {
        let run = folder.run(words);
        assert_eq!((run.code, run.err.as_str()), (0, ""));
        assert!(run.out.contains("pintle"), "{}", run.out);
    }
    assert_eq!(folder.run(&["--version"]).out, format!("pintle {}\n", env!("CARGO_PKG_VERSION")));
}

#[test]
fn results_go_to_standard_output_and_diagnostics_to_standard_error() {
    let folder = Folder::new("streams");
    folder.write("a.pintle", BROKEN);
    let run = folder.run(&["solve", "a.pintle"]);
    assert!(run.out.contains("double") && run.out.contains("6  kg"), "{}", run.out);
    assert!(run.out.contains("1 error"), "{}", run.out);
    assert!(!run.out.contains("a.pintle:3"), "{}", run.out);
    assert!(run.err.contains("error[unit-mismatch]") && run.err.contains("a.pintle:3:"), "{}", run.err);
    let quiet = folder.run(&["solve", "a.pintle", "--quiet"]);
    assert_eq!(quiet.err.lines().count(), 1, "{}", quiet.err);
    assert!(quiet.err.starts_with("a.pintle:3:"), "{}", quiet.err);
    assert!(!quiet.out.contains("double"), "{}", quiet.out);
}

#[test]
fn half_typed_sheets_still_give_results() {
    let folder = Folder::new("half");
    folder.write(
        "a.pintle",
        "given m = 3 kg\ndouble = 2 * m\nhalf = m /\nbody b = tube { outer_diameter = \nlast = 4 * m\n",
    );
    let run = folder.run(&["solve", "a.pintle", "--json"]);
    assert_eq!(run.code, 2);
    let json: Value = serde_json::from_str(&run.out).unwrap();
    let named = |name: &str| json["results"].as_array().unwrap().iter().find(|it| it["name"] == name).cloned();
    assert_eq!(named("double").unwrap()["si"], 6.0);
    assert_eq!(named("last").unwrap()["si"], 12.0);
}

#[test]
fn json_keys_stand_in_the_promised_order() {
    let folder = Folder::new("json");
    folder.write(
        "a.pintle",
        format!("sheet \"T\" {{ number = \"N\", revision = \"R\" }}\n{SOUND}case heavy {{ m = 20 kg }}\n"),
    );
    let run = folder.run(&["solve", "a.pintle", "--json"]);
    let json: Value = serde_json::from_str(&run.out).unwrap();
    let keys = |value: &Value| value.as_object().unwrap().keys().cloned().collect::<Vec<_>>().join(" ");
    assert_eq!(
        keys(&json),
        "schema pintle sheet givens results ledgers limits diagnostics confirms assumptions cautions cases"
    );
    assert_eq!(keys(&json["sheet"]), "title number revision");
    assert_eq!(keys(&json["givens"][0]), "name kind value unit si low high source");
    assert_eq!(keys(&json["results"][0]), "name kind value unit si low high std status line");
    assert_eq!(keys(&json["limits"][0]), "text verdict value bound unit margin low high worst case line");
    assert_eq!(json["schema"], 1);
    assert_eq!(json["givens"][0]["source"], "scale");
    assert_eq!((&json["limits"][0]["case"], &json["limits"][1]["case"]), (&Value::Null, &Value::from("heavy")));
    assert_eq!((&json["limits"][0]["verdict"], &json["limits"][1]["verdict"]), (&"met".into(), &"not met".into()));
    assert_eq!(run.code, 1, "a case that breaks a limit counts");
}

#[test]
fn diagnostics_in_json_name_file_line_and_column() {
    let folder = Folder::new("json-diagnostics");
    folder.write("a.pintle", BROKEN);
    let json: Value = serde_json::from_str(&folder.run(&["solve", "a.pintle", "--json"]).out).unwrap();
    let errors: Vec<&Value> =
        json["diagnostics"].as_array().unwrap().iter().filter(|it| it["severity"] == "error").collect();
    let [error] = errors.as_slice() else { panic!("{errors:?}") };
    assert_eq!(
        error.as_object().unwrap().keys().cloned().collect::<Vec<_>>().join(" "),
        "code severity file line column message help"
    );
    assert_eq!(
        (&error["code"], &error["file"], &error["line"]),
        (&"unit-mismatch".into(), &"a.pintle".into(), &3.into())
    );
    assert!(error["column"].as_u64().unwrap() >= 9, "{error}");
}

#[test]
fn colour_follows_the_flag_then_the_environment() {
    let folder = Folder::new("colour");
    folder.write("a.pintle", BOTH);
    let coloured = |run: &Run| (run.out.contains('\u{1b}'), run.err.contains('\u{1b}'));
    let never = folder.run(&["solve", "a.pintle"]);
    assert_eq!(coloured(&never), (false, false), "no terminal, no colour");
    assert_eq!(coloured(&folder.run(&["solve", "a.pintle", "--color=always"])), (true, true));
    assert_eq!(coloured(&folder.run(&["solve", "a.pintle", "--color", "never"])), (false, false));
    let mut command = folder.command(&["solve", "a.pintle", "--color", "auto"]);
    command.env("NO_COLOR", "1");
    assert_eq!(coloured(&finish(command)), (false, false));
    let mut command = folder.command(&["solve", "a.pintle", "--color", "always"]);
    command.env("NO_COLOR", "1");
    assert_eq!(coloured(&finish(command)), (true, true), "the flag says so now");
}

#[test]
fn the_examples_fit_80_columns_and_do_not_depend_on_the_run() {
    let examples = Path::new(env!("CARGO_MANIFEST_DIR")).join("../stdlib/examples");
    let mut n = 0;
    let folder = Folder::new("columns");
    for entry in std::fs::read_dir(examples).unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_none_or(|it| it != "pintle") {
            continue;
        }
        n += 1;
        let words = ["solve", path.to_str().unwrap()];
        let run = folder.run(&words);
        assert!(run.code < 2, "{path:?}: {}", run.err);
        for line in run.out.lines() {
            assert!(line.chars().count() <= 80, "{path:?}: {line}");
        }
        assert_eq!(folder.run(&words).out, run.out);
    }
    assert!(n >= 3, "only {n} examples");
}

#[test]
fn check_takes_folders_and_the_gravest_code_counts() {
    let folder = Folder::new("folders");
    folder.write("sheets/a.pintle", SOUND);
    folder.write("sheets/deep/er/b.pintle", NOT_MET);
    folder.write("sheets/.hidden/c.pintle", BROKEN);
    folder.write("sheets/notes.md", "no sheet");
    let run = folder.run(&["check", "sheets"]);
    assert_eq!(run.code, 1, "{}{}", run.out, run.err);
    let lines: Vec<String> = run.out.lines().map(|line| line.replace('\\', "/")).collect();
    assert_eq!(
        lines,
        [
            "sheets/a.pintle: the limit is met",
            "sheets/deep/er/b.pintle: 0 limits met, 1 not met",
            "2 paths: 1 sound, 1 with limits not met"
        ]
    );
    folder.write("sheets/z.pintle", BROKEN);
    let run = folder.run(&["check", "sheets"]);
    assert_eq!(run.code, 2);
    assert!(
        run.err.lines().any(|line| line.contains("z.pintle:3:") && line.contains(": error[unit-mismatch]: ")),
        "{}",
        run.err
    );
    let quiet = folder.run(&["check", "--quiet", "sheets"]);
    assert_eq!(quiet.out.lines().count(), 2, "{}", quiet.out);
    let json: Value = serde_json::from_str(&folder.run(&["check", "--json", "sheets", "none.pintle"]).out).unwrap();
    let exits: Vec<u64> = json["files"].as_array().unwrap().iter().filter_map(|it| it["exit"].as_u64()).collect();
    assert_eq!(exits, [0, 1, 2]);
    assert_eq!(json["unreadable"][0]["file"], "none.pintle");
}

#[test]
fn a_new_sheet_compiles_and_is_never_overwritten() {
    let folder = Folder::new("start");
    let run = folder.run(&["start", "hoist"]);
    assert_eq!((run.code, run.err.as_str()), (0, ""));
    let sheet = "hoist/hoist.pintle";
    let solved = folder.run(&["solve", sheet]);
    assert_eq!(solved.code, 0, "{}{}", solved.out, solved.err);
    assert_eq!(solved.err, "", "no diagnostics at all");
    assert!(solved.out.contains("all 2 limits met") && solved.out.contains("1 assumption is open"), "{}", solved.out);
    assert_eq!(folder.run(&["format", "--check", sheet]).code, 0, "the layout is canonical");
    let strict = folder.run(&["solve", sheet, "--strict", "--quiet"]);
    assert_eq!(strict.code, 2);
    assert!(strict.err.contains("error[open-assumption]"), "{}", strict.err);
    folder.write(sheet, "mine");
    let again = folder.run(&["start", "hoist"]);
    assert_eq!(again.code, 64);
    assert!(again.err.contains("exists already"), "{}", again.err);
    assert_eq!(folder.read(sheet), "mine");
}

#[test]
fn format_checks_and_writes() {
    let folder = Folder::new("format");
    folder.write("a.pintle", "given m=3 kg   # the mass\nd=2*m\n");
    let before = folder.read("a.pintle");
    let check = folder.run(&["format", "--check", "."]);
    assert_eq!(check.code, 1, "{}", check.err);
    assert!(check.out.contains("a.pintle: layout differs"), "{}", check.out);
    assert_eq!(folder.read("a.pintle"), before, "nothing was written");
    let json: Value = serde_json::from_str(&folder.run(&["format", "--check", "--json", "."]).out).unwrap();
    assert_eq!(json["differs"].as_array().unwrap().len(), 1, "{json}");
    assert_eq!(folder.run(&["format", "a.pintle"]).code, 0);
    let after = folder.read("a.pintle");
    assert!(after.contains("given m = 3 kg") && after.contains("# the mass") && after.contains("d = 2 * m"), "{after}");
    assert_eq!(folder.run(&["format", "--check", "a.pintle"]).code, 0);
}

#[test]
fn explain_goes_down_to_the_sources() {
    let folder = Folder::new("explain");
    folder.write("a.pintle", SOUND);
    let run = folder.run(&["explain", "a.pintle", "E"]);
    assert_eq!((run.code, run.err.as_str()), (0, ""));
    for part in ["E = 58.8399 J", "= m * g_n * 2 m", "= 3 kg * 9.80665 m/s^2 * 2 m", "scale", "ISO 80000-3"] {
        assert!(run.out.contains(part), "{part}: {}", run.out);
    }
    let json: Value = serde_json::from_str(&folder.run(&["explain", "a.pintle", "E", "--json"]).out).unwrap();
    assert_eq!(json["chain"][0]["formula"], "m * g_n * 2 m");
    let constant = folder.run(&["explain", "a.pintle", "g_n"]);
    assert!(constant.out.contains("std/gravity.pintle, line"), "{}{}", constant.out, constant.err);
    let wrong = folder.run(&["explain", "a.pintle", "mm"]);
    assert_eq!(wrong.code, 64);
    assert!(wrong.err.contains("did you mean `m`?"), "{}", wrong.err);
}

#[test]
fn list_filters_and_cites() {
    let folder = Folder::new("list");
    let run = folder.run(&["list", "shapes", "tube"]);
    assert_eq!(run.code, 0);
    assert!(run.out.contains("tube(outer_diameter : diameter") && run.out.contains("use std.shapes"), "{}", run.out);
    let none = folder.run(&["list", "units", "furlongish"]);
    assert_eq!((none.code, none.out.as_str()), (0, ""));
    assert!(none.err.contains("none of the units"), "{}", none.err);
    let json: Value = serde_json::from_str(&folder.run(&["list", "materials", "--json"]).out).unwrap();
    assert!(json.as_array().unwrap().iter().any(|it| it["name"] == "structural_steel"));
}

#[test]
fn flags_without_effect_say_so() {
    let folder = Folder::new("effect");
    folder.write("a.pintle", SOUND);
    let run = folder.run(&["solve", "a.pintle", "--seed", "7", "--samples=1000", "--threads", "2"]);
    assert_eq!(run.code, 0);
    assert_eq!(
        run.err,
        "note: `--seed` has no effect yet\nnote: `--samples` has no effect yet\nnote: `--threads` has no effect yet\n"
    );
}

#[test]
fn csv_has_one_row_a_quantity() {
    let folder = Folder::new("csv");
    folder.write("a.pintle", SOUND);
    let run = folder.run(&["solve", "a.pintle", "--csv"]);
    let rows: Vec<&str> = run.out.lines().collect();
    assert_eq!(rows[0], "case,role,name,kind,value,unit,si,low,high,std,status,line,source");
    assert!(rows.contains(&",given,m,mass,3.0,kg,3.0,,,,evaluated,1,scale"), "{}", run.out);
    let n_fields = |row: &&str| row.split(',').count();
    assert!(rows.iter().filter(|row| !row.contains('"')).all(|row| n_fields(row) == 13), "{}", run.out);
}

#[test]
fn a_reader_that_stops_early_is_no_fault() {
    let folder = Folder::new("pipe");
    folder.write("a.pintle", SOUND);
    let mut command = folder.command(&["solve", "a.pintle"]);
    let mut child = command.stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0));
    assert_eq!(String::from_utf8_lossy(&output.stderr), "");
}
