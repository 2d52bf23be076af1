//! The command as scripts see it: exit status, stdout and stderr, files.

use std::fs;
use std::path::{Path, PathBuf};

use assert_cmd::Command;
use tempfile::TempDir;

/// Three users of Loucks and van Beek, Water Resource Systems Planning and Management, ch. 4 (from
/// memory): six units go (1, 1, 4) at a price of 4 and give 34.5.
const WATER_USERS: &str = "\
activity,curve,slope,curvature,current
User 1,quadratic,6,-2,2
User 2,quadratic,7,-3,2
User 3,quadratic,8,-1,2
";

/// Three generating units of Wood and Wollenberg, Power Generation, Operation and Control, 2nd
/// ed. 1996, Example 3A: 850 MW cost 8194.356 R/h at least.
const UNITS: &str = "\
activity,curve,slope,curvature,base,floor,cap
Unit 1,quadratic,7.92,0.003124,561,150,600
Unit 2,quadratic,7.85,0.00388,310,100,400
Unit 3,quadratic,7.97,0.00964,78,50,200
";

/// A folder with one table in it.
struct Plan {
    folder: TempDir,
}

impl Plan {
    fn of(table: &str) -> Self {
        let folder = tempfile::tempdir().unwrap();
        fs::write(folder.path().join("activities.csv"), table).unwrap();
        Self { folder }
    }

    fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    /// The program in the plan's folder.
    fn run(&self, arguments: &[&str]) -> Ended {
        let mut command = Command::cargo_bin("isomargin").unwrap();
        command.current_dir(self.folder.path());
        command.env_remove("NO_COLOR").args(arguments);
        let output = command.output().unwrap();
        Ended {
            status: output.status.code(),
            stdout: String::from_utf8(output.stdout).unwrap(),
            stderr: String::from_utf8(output.stderr).unwrap(),
        }
    }

    fn names(&self, folder: &str) -> Vec<String> {
        let mut names: Vec<String> = fs::read_dir(self.path(folder))
            .unwrap()
            .map(|entry| entry.unwrap().file_name().into_string().unwrap())
            .collect();
        names.sort();
        names
    }
}

struct Ended {
    status: Option<i32>,
    stdout: String,
    stderr: String,
}

#[test]
fn a_proven_plan_ends_with_status_0_and_its_report_on_stdout() {
    let ended = Plan::of(WATER_USERS).run(&["allocate", "activities.csv", "--budget", "6"]);
    assert_eq!(ended.status, Some(0), "{}", ended.stderr);
    let headline = ended.stdout.lines().next().unwrap();
    assert!(
        headline.starts_with("3 activities, 6: a total of 34.5"),
        "{headline}"
    );
    assert!(ended.stdout.contains("Proven"));
    assert!(!ended.stdout.contains('\x1b'));
    assert!(!ended.stderr.contains("error"), "{}", ended.stderr);
}

#[test]
fn json_is_the_only_thing_on_stdout() {
    let plan = Plan::of(UNITS);
    let ended = plan.run(&[
        "allocate",
        "activities.csv",
        "--aim",
        "minimise",
        "--require",
        "850",
        "--json",
    ]);
    assert_eq!(ended.status, Some(0), "{}", ended.stderr);
    let document: serde_json::Value = serde_json::from_str(&ended.stdout).unwrap();
    assert_eq!(document["aim"], "minimise");
    let total = document["total"].as_f64().unwrap();
    assert!((total - 8194.356).abs() < 5e-4, "{total}");
    // The incremental cost is 9.148 (the same example, from memory).
    let price = document["constraints"][0]["shadow_price"].as_f64().unwrap();
    assert!((price - 9.148).abs() < 5e-4, "{price}");
}

#[test]
fn amounts_may_be_written_with_thousands_separators() {
    let plan = Plan::of(WATER_USERS);
    let plain = plan.run(&[
        "allocate",
        "activities.csv",
        "--budget",
        "24000000",
        "--json",
    ]);
    let separated = plan.run(&[
        "allocate",
        "activities.csv",
        "--budget",
        "24,000,000",
        "--json",
    ]);
    assert_eq!(separated.status, Some(0), "{}", separated.stderr);
    let limit = |ended: &Ended| {
        let document: serde_json::Value = serde_json::from_str(&ended.stdout).unwrap();
        document["constraints"][0]["limit"].clone()
    };
    assert_eq!(limit(&plain), limit(&separated));
}

#[test]
fn wrong_usage_ends_with_status_2_and_nothing_on_stdout() {
    let plan = Plan::of(WATER_USERS);
    for arguments in [
        &["allocate"][..],
        &["allocate", "activities.csv", "--budget", "twelve"],
        &[
            "allocate",
            "activities.csv",
            "--budget",
            "6",
            "--require",
            "6",
        ],
        &[
            "allocate",
            "activities.csv",
            "--budget",
            "6",
            "--round",
            "-1",
        ],
        &[
            "allocate",
            "activities.csv",
            "--budget",
            "6",
            "--aim",
            "worst",
        ],
        &["divide", "activities.csv"],
    ] {
        let ended = plan.run(arguments);
        assert_eq!(ended.status, Some(2), "{arguments:?}: {}", ended.stderr);
        assert_eq!(ended.stdout, "", "{arguments:?}");
        assert!(!ended.stderr.is_empty(), "{arguments:?}");
    }
}

#[test]
fn bad_data_ends_with_status_3_and_nothing_on_stdout() {
    let missing = Plan::of(WATER_USERS).run(&["allocate", "absent.csv", "--budget", "6"]);
    let faulty = Plan::of("activity,curve,slope\nUser 1,linear,fast\n");
    for ended in [
        missing,
        faulty.run(&["allocate", "activities.csv", "--budget", "6"]),
        faulty.run(&["check", "activities.csv", "--budget", "6"]),
    ] {
        assert_eq!(ended.status, Some(3), "{}", ended.stderr);
        assert_eq!(ended.stdout, "");
        assert!(!ended.stderr.is_empty());
        assert!(!ended.stderr.contains("panicked"), "{}", ended.stderr);
    }
}

#[test]
fn a_requirement_above_the_caps_ends_with_status_4_and_the_greatest_that_works() {
    let plan = Plan::of(UNITS);
    let arguments = [
        "allocate",
        "activities.csv",
        "--aim",
        "minimise",
        "--require",
        "1300",
    ];
    let ended = plan.run(&arguments);
    assert_eq!(ended.status, Some(4));
    assert_eq!(ended.stdout, "");
    // The caps of the example add up to 600 + 400 + 200.
    assert!(ended.stderr.contains("1,200"), "{}", ended.stderr);
    assert!(ended.stderr.contains("100 less"), "{}", ended.stderr);
    let json = plan.run(&[&arguments[..], &["--json"]].concat());
    assert_eq!(json.status, Some(4));
    let document: serde_json::Value = serde_json::from_str(&json.stdout).unwrap();
    assert_eq!(document["status"], "infeasible");
    assert_eq!(document["nearest_limit"], 1200.0);
}

#[test]
fn check_says_what_was_read_without_solving() {
    let plan = Plan::of(UNITS);
    let arguments = [
        "check",
        "activities.csv",
        "--aim",
        "minimise",
        "--require",
        "850",
    ];
    let ended = plan.run(&arguments);
    assert_eq!(ended.status, Some(0), "{}", ended.stderr);
    assert!(ended.stdout.contains("quadratic"));
    assert!(!ended.stdout.contains("Proven"));
}

#[test]
fn out_writes_the_whole_pack_and_nothing_else() {
    let plan = Plan::of(WATER_USERS);
    let arguments = [
        "allocate",
        "activities.csv",
        "--budget",
        "6",
        "--out",
        "pack",
    ];
    let ended = plan.run(&arguments);
    assert_eq!(ended.status, Some(0), "{}", ended.stderr);
    let names = plan.names("pack");
    for name in [
        "activities-planned.csv",
        "allocation.csv",
        "certificate.csv",
        "comparison.csv",
        "constraints-priced.csv",
        "report.txt",
        "result.json",
    ] {
        assert!(
            names.iter().any(|found| found == name),
            "{name} of {names:?}"
        );
    }
    let pictures = |ending: &str| names.iter().filter(|name| name.ends_with(ending)).count();
    assert_eq!((pictures(".png"), pictures(".svg")), (2, 2), "{names:?}");
    assert_eq!(names.len(), 11, "{names:?}");
    // Once more into the same folder.
    assert_eq!(plan.run(&arguments).status, Some(0));
    assert_eq!(plan.names("pack"), names);
}

#[test]
fn allocation_writes_the_table_of_spends_and_prints_the_headline() {
    let plan = Plan::of(WATER_USERS);
    let arguments = [
        "allocate",
        "activities.csv",
        "--budget",
        "6",
        "--allocation",
        "spends.csv",
    ];
    let ended = plan.run(&arguments);
    assert_eq!(ended.status, Some(0), "{}", ended.stderr);
    assert!(ended.stdout.starts_with("3 activities, 6: a total of 34.5"));
    assert!(ended.stdout.lines().count() < 8, "{}", ended.stdout);
    let table = fs::read_to_string(plan.path("spends.csv")).unwrap();
    let mut lines = table.lines();
    assert_eq!(
        lines.next(),
        Some("activity,spend,return,marginal_return,position")
    );
    assert_eq!(lines.count(), 3);
}

#[test]
fn a_plans_own_table_is_never_overwritten() {
    let plan = Plan::of(WATER_USERS);
    let arguments = [
        "allocate",
        "activities.csv",
        "--budget",
        "6",
        "--allocation",
        "activities.csv",
    ];
    assert_eq!(plan.run(&arguments).status, Some(2));
    assert_eq!(
        fs::read_to_string(plan.path("activities.csv")).unwrap(),
        WATER_USERS
    );
    let here = ["allocate", "activities.csv", "--budget", "6", "--out", "."];
    assert_eq!(plan.run(&here).status, Some(0));
    assert_eq!(
        fs::read_to_string(plan.path("activities.csv")).unwrap(),
        WATER_USERS
    );
}

#[test]
fn a_place_that_cannot_be_written_ends_with_status_1() {
    let plan = Plan::of(WATER_USERS);
    let arguments = [
        "allocate",
        "activities.csv",
        "--budget",
        "6",
        "--allocation",
        "absent/spends.csv",
    ];
    let ended = plan.run(&arguments);
    assert_eq!(ended.status, Some(1));
    assert!(
        ended.stderr.contains("spends.csv cannot be written"),
        "{}",
        ended.stderr
    );
}

#[test]
fn rounded_spends_are_whole_steps_and_add_up_to_the_budget() {
    let plan = Plan::of(WATER_USERS);
    let ended = plan.run(&[
        "allocate",
        "activities.csv",
        "--budget",
        "7",
        "--round",
        "0.5",
        "--json",
    ]);
    assert_eq!(ended.status, Some(0), "{}", ended.stderr);
    let document: serde_json::Value = serde_json::from_str(&ended.stdout).unwrap();
    let activities = document["activities"].as_array().unwrap();
    let spends: Vec<f64> = activities
        .iter()
        .map(|activity| activity["spend"].as_f64().unwrap())
        .collect();
    assert!(
        spends.iter().all(|spend| (spend / 0.5).fract() == 0.0),
        "{spends:?}"
    );
    assert_eq!(spends.iter().sum::<f64>(), 7.0);
    let cost = document["rounding"]["cost"].as_f64().unwrap();
    assert!(0.0 < cost && cost < 0.2, "{cost}");
}

#[test]
fn help_and_version_go_to_stdout_with_an_example_first() {
    let plan = Plan::of(WATER_USERS);
    for arguments in [
        &["--help"][..],
        &["allocate", "--help"],
        &["check", "--help"],
    ] {
        let ended = plan.run(arguments);
        assert_eq!(ended.status, Some(0));
        assert!(ended.stdout.starts_with("Example"), "{}", ended.stdout);
        assert_eq!(ended.stderr, "");
    }
    let version = plan.run(&["--version"]);
    assert_eq!(
        version.stdout.trim(),
        format!("isomargin {}", env!("CARGO_PKG_VERSION"))
    );
}

#[test]
#[cfg(unix)]
fn a_reader_that_goes_away_is_no_failure() {
    use std::process::{Command, Stdio};
    let plan = Plan::of(WATER_USERS);
    let mut child = Command::new(assert_cmd::cargo::cargo_bin("isomargin"))
        .args(["allocate", "activities.csv", "--budget", "6", "--json"])
        .current_dir(plan.folder.path())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0));
    let stderr = String::from_utf8(output.stderr).unwrap();
    assert!(
        !stderr.contains("panicked") && !stderr.contains("error"),
        "{stderr}"
    );
}

#[test]
#[cfg(unix)]
fn new_files_have_the_rights_of_new_files() {
    use std::os::unix::fs::PermissionsExt;
    let plan = Plan::of(WATER_USERS);
    let arguments = [
        "allocate",
        "activities.csv",
        "--budget",
        "6",
        "--allocation",
        "spends.csv",
    ];
    assert_eq!(plan.run(&arguments).status, Some(0));
    let mode = |path: &Path| fs::metadata(path).unwrap().permissions().mode();
    assert_eq!(
        mode(&plan.path("spends.csv")),
        mode(&plan.path("activities.csv"))
    );
}
