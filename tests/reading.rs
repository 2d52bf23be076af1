//! What is read from files: the plain case, the lenient readings, and every fault with its place
//! and its mend.

use std::fs;

use isomargin::curves::{Curve, ReturnCurve};
use isomargin::input::{ExtraKind, NoteKind, Plan, PlanRequest, read_plan};
use isomargin::model::{Aim, Sense};
use tempfile::TempDir;

const TABLE: &str = "activities.csv";
const POINTS: &str = "points.csv";
const PLAN: &str = "plan.toml";

/// A folder of files, the last of which is the plan.
struct Folder(TempDir);

impl Folder {
    fn of<'f>(files: impl IntoIterator<Item = (&'f str, &'f [u8])>) -> Self {
        let folder = tempfile::tempdir().unwrap();
        for (name, bytes) in files {
            fs::write(folder.path().join(name), bytes).unwrap();
        }
        Self(folder)
    }

    fn request(&self, name: &str) -> PlanRequest {
        PlanRequest {
            path: self.0.path().join(name),
            ..PlanRequest::default()
        }
    }

    /// What was read or what is at fault, without the folder's own name.
    fn outcome(&self, request: &PlanRequest) -> String {
        match read_plan(request) {
            Ok(plan) => self.stripped(&understood(&plan)),
            Err(faults) => self.stripped(&faults.to_string()),
        }
    }

    fn stripped(&self, text: &str) -> String {
        let folder = self.0.path().display().to_string();
        text.replace(&format!("{folder}/"), "")
            .replace(&folder, "FOLDER")
    }
}

/// A plan in words: its activities, and what was said while it was read.
fn understood(plan: &Plan) -> String {
    let mut out = String::new();
    for activity in plan.problem.activities() {
        out.push_str(&format!("{activity:?}\n"));
    }
    for constraint in plan.problem.constraints() {
        let (name, sign) = (&constraint.name, constraint.sense.sign());
        out.push_str(&format!("{name} {sign} {}\n", constraint.limit));
    }
    for column in &plan.columns {
        let cells: Vec<&str> = column.cells().collect();
        out.push_str(&format!("{} {:?}: {cells:?}\n", column.name, column.kind()));
    }
    for note in &plan.notes {
        out.push_str(&format!("{:?}: {}\n", note.kind, note.text));
    }
    out
}

/// What is read from one activities table with a budget.
fn of_table(bytes: impl AsRef<[u8]>) -> String {
    let folder = Folder::of([(TABLE, bytes.as_ref())]);
    let mut request = folder.request(TABLE);
    request.budget = Some(100.0);
    folder.outcome(&request)
}

/// What is read from an activities table and a points table.
fn of_tables(table: &str, points: &str) -> String {
    let folder = Folder::of([(TABLE, table.as_bytes()), (POINTS, points.as_bytes())]);
    let mut request = folder.request(TABLE);
    request.points = Some(folder.0.path().join(POINTS));
    folder.outcome(&request)
}

/// What is read from a plan file beside a table of one activity.
fn of_plan(text: &str) -> String {
    let folder = Folder::of([(TABLE, ONE_ACTIVITY.as_bytes()), (PLAN, text.as_bytes())]);
    folder.outcome(&folder.request(PLAN))
}

const ONE_ACTIVITY: &str = "activity,curve,gain,scale,cap\nDune repair,log,5,10,80\n";

/// Every family of curves once, and a column of each other kind.
const ALL_FAMILIES: &str = "\
activity,curve,slope,curvature,gain,exponent,ceiling,scale,steepness,midpoint,base,floor,cap,current,weight,observed_from,observed_to,town,staff
Straight,linear,2,,,,,,,,,,50,10,1,0,40,North,0.5
Bent,quadratic,6,-2,,,,,,,,,,2,,,,North,0.25
Elastic,power,,,120,0.4,,,,,,,,,,,,South,1
Filling,log,,,5,,,10,,,,,,,,,,South,
Rising,exponential,,,,,40,25,,,1.5,,,,2,,,South,0
Half,hyperbolic,,,,,40,25,,,,,,,,,,,2
Steep,hill,,,,,40,25,0.8,,,,,,,,,,2
Late,logistic,,,,,40,25,,30,,30,,,,,,,2
Table,points,,,,,,,,,,,,,,,,,2
";

const KNOTS: &str = "\
activity,spend,return
Table,0,0
Table,10,8
Table,40,20
";

macro_rules! snapshot {
    ($name:literal, $outcome:expr) => {
        insta::with_settings!({prepend_module_to_snapshot => false, omit_expression => true}, {
            insta::assert_snapshot!(concat!("reading__", $name), $outcome);
        })
    };
}

#[test]
fn a_plan_file_and_its_tables_become_a_problem() {
    let plan_file = "\
title = \"Coast\"
aim = \"maximise\"
budget = 100
money = \"EUR\"
return_unit = \"homes protected\"
period = 2027
activities = \"activities.csv\"
points = \"points.csv\"
";
    let folder = Folder::of([
        (TABLE, ALL_FAMILIES.as_bytes()),
        (POINTS, KNOTS.as_bytes()),
        (PLAN, plan_file.as_bytes()),
    ]);
    let plan = read_plan(&folder.request(PLAN)).unwrap();
    assert_eq!(plan.problem.aim(), Aim::Maximise);
    assert_eq!(plan.problem.activities().len(), 9);
    let budget = &plan.problem.constraints()[0];
    assert_eq!((budget.name.as_str(), budget.limit), ("budget", 100.0));
    assert_eq!(plan.labels.title.as_deref(), Some("Coast"));
    assert_eq!(plan.labels.period.as_deref(), Some("2027"));
    let straight = &plan.problem.activities()[0];
    assert_eq!(straight.name, "Straight");
    assert_eq!((straight.cap, straight.current), (50.0, Some(10.0)));
    assert!(straight.observed.unwrap().excludes(41.0));
    let rising = &plan.problem.activities()[4];
    assert_eq!((rising.base, rising.weight, rising.floor), (1.5, 2.0, 0.0));
    let tabulated = &plan.problem.activities()[8];
    assert!(matches!(tabulated.curve, Curve::Points(_)));
    assert_eq!(tabulated.curve.value(25.0), 14.0);
    assert_eq!(tabulated.cap, 40.0);
    let kinds: Vec<ExtraKind> = plan.columns.iter().map(|column| column.kind()).collect();
    assert_eq!(kinds, [ExtraKind::Tag, ExtraKind::Resource]);
    let staff: Vec<&str> = plan.columns[1].cells().collect();
    assert_eq!(staff, ["0.5", "0.25", "1", "", "0", "2", "2", "2", "2"]);
    let said: Vec<&str> = plan.notes.iter().map(|note| note.text.as_str()).collect();
    assert_eq!(said.len(), 1, "{said:?}");
    let names: Vec<&str> = plan
        .sources
        .iter()
        .filter_map(|source| source.path.file_name()?.to_str())
        .collect();
    assert_eq!(names, [PLAN, TABLE, POINTS]);
    // By the sha256sum of GNU coreutils.
    assert_eq!(
        plan.sources[2].sha256,
        "fd0bf351c1c9b45580aeeb54947fa8185f2cdff9d2dcb5f8e2549477ad5297b3"
    );
}

#[test]
fn what_the_command_line_says_comes_before_the_plan_file() {
    let folder = Folder::of([
        (TABLE, ONE_ACTIVITY.as_bytes()),
        (PLAN, b"budget = 100\nactivities = \"activities.csv\"\n"),
    ]);
    let mut request = folder.request(PLAN);
    request.budget = Some(60.0);
    assert_eq!(
        read_plan(&request).unwrap().problem.constraints()[0].limit,
        60.0
    );
}

#[test]
fn a_requirement_is_a_least_spend_under_minimise() {
    let table = "activity,curve,slope,curvature,cap\nUnit 1,quadratic,7.92,0.003124,600\n";
    let folder = Folder::of([(TABLE, table.as_bytes())]);
    let mut request = folder.request(TABLE);
    request.require = Some(450.0);
    request.aim = Some(Aim::Minimise);
    let plan = read_plan(&request).unwrap();
    let requirement = &plan.problem.constraints()[0];
    assert_eq!(requirement.name, "requirement");
    assert_eq!(
        (requirement.sense, requirement.limit),
        (Sense::AtLeast, 450.0)
    );
}

#[test]
fn a_plan_without_a_limit_has_no_constraint() {
    let folder = Folder::of([(TABLE, ONE_ACTIVITY.as_bytes())]);
    let plan = read_plan(&folder.request(TABLE)).unwrap();
    assert!(plan.problem.constraints().is_empty());
}

// Lenient readings: what leaves no doubt is read and said.

#[test]
fn a_byte_order_mark_is_passed_over_and_said() {
    let marked = of_table(format!("\u{feff}{ONE_ACTIVITY}"));
    let (plan, said) = marked.split_once("Reading: ").unwrap();
    assert_eq!(plan, of_table(ONE_ACTIVITY));
    assert_eq!(
        said.trim_end(),
        "activities.csv: the byte order mark before the text was passed over"
    );
}

#[test]
fn windows_line_ends_and_old_ones_read_the_same() {
    let plain = of_table(ONE_ACTIVITY);
    assert_eq!(of_table(ONE_ACTIVITY.replace('\n', "\r\n")), plain);
    assert_eq!(of_table(ONE_ACTIVITY.replace('\n', "\r")), plain);
    assert_eq!(of_table(ONE_ACTIVITY.trim_end()), plain);
}

#[test]
fn semicolons_with_decimal_commas_are_read_and_said() {
    snapshot!(
        "semicolons",
        of_table("activity;curve;gain;scale;cap\nDüne;log;5,25;1.234,5;80\nWand;log;0,5;12 000;\n")
    );
}

#[test]
fn a_line_that_names_the_separator_is_passed_over_and_said() {
    snapshot!(
        "separator_line",
        of_table("sep=;\r\nactivity;curve;slope\r\nA;linear;1,5\r\nB;linear;x\r\n")
    );
}

#[test]
fn tabs_are_read_and_said() {
    snapshot!("tabs", of_table(ONE_ACTIVITY.replace(',', "\t")));
}

#[test]
fn utf_16_is_read_and_said() {
    let table = ONE_ACTIVITY.replace("Dune", "Düne");
    let little: Vec<u8> = std::iter::once(0xfeff)
        .chain(table.encode_utf16())
        .flat_map(u16::to_le_bytes)
        .collect();
    let big: Vec<u8> = std::iter::once(0xfeff)
        .chain(table.encode_utf16())
        .flat_map(u16::to_be_bytes)
        .collect();
    snapshot!("utf_16_little", of_table(little));
    snapshot!("utf_16_big", of_table(&big));
    snapshot!("utf_16_without_mark", of_table(&big[2..]));
}

#[test]
fn windows_1252_is_read_and_said() {
    snapshot!(
        "windows_1252",
        of_table(b"activity,curve,gain,scale\nD\xfcne \x96 S\xfcd,log,5,\x8010\n")
    );
}

#[test]
fn amounts_without_doubt_are_read_and_said() {
    snapshot!(
        "amounts",
        of_table(
            "activity,curve,slope,base,cap,current\n\
             A,linear,1,(12.50),\"24,000,000\",\"1,234.56\"\n\
             B,linear,1,−3,€ 5,5 EUR\n\
             C,linear,1,-€3.5,24 000 000,24'000\n\
             D,linear,1, 7 ,24\u{a0}000.5,24\u{202f}000\n\
             E,linear,1,+7,1e6,\"£1,234,567\"\n"
        )
    );
}

#[test]
fn blank_takes_the_default_and_zero_is_zero() {
    snapshot!(
        "blank_against_zero",
        of_table(
            "activity,curve,slope,cap,weight,current\nBlank,linear,1,,,\nZero,linear,1,0,0,0\n"
        )
    );
}

#[test]
fn headers_in_other_letters_are_read_and_said() {
    snapshot!(
        "headers",
        of_table("Activity , CURVE,Gain,scale,Observed From\nA,Log,5,10,2\n")
    );
}

#[test]
fn rows_with_nothing_in_them_are_passed_over_and_said() {
    snapshot!(
        "blank_rows",
        of_table("\nactivity,curve,slope\n\nA,linear,1\n,,\n  \n,,\n\n")
    );
}

#[test]
fn quoted_cells_keep_separators_and_quotes() {
    snapshot!(
        "quoted",
        of_table(
            "activity,curve,slope,note\n\"A, the \"\"first\"\"\",linear,\"1\",\"two\nlines\"\n"
        )
    );
}

// Faults of a file as a whole.

#[test]
fn a_file_that_is_not_there_is_named() {
    let folder = Folder::of([]);
    snapshot!("no_file", folder.outcome(&folder.request(TABLE)));
}

#[test]
fn a_folder_is_no_table() {
    let folder = Folder::of([]);
    fs::create_dir(folder.0.path().join("plans")).unwrap();
    snapshot!("a_folder", folder.outcome(&folder.request("plans")));
}

#[test]
fn an_empty_file_is_refused() {
    snapshot!("empty", of_table(""));
    snapshot!("only_spaces", of_table("\u{feff} \n\n"));
}

#[test]
fn a_header_alone_is_refused() {
    snapshot!("header_only", of_table("activity,curve,slope\n"));
}

#[test]
fn a_line_without_end_is_refused_briefly() {
    let mut one_line = b"activity,curve,slope\nA,linear,".to_vec();
    one_line.resize(3 << 20, b'7');
    snapshot!("long_line", of_table(&one_line));
    let bytes = vec![b'x'; 3 << 20];
    snapshot!("long_first_line", of_table(&bytes));
    let title = "x".repeat(3 << 20);
    snapshot!("plan_long_line", of_plan(&format!("title = \"{title}\"\n")));
}

#[test]
fn zero_bytes_are_refused() {
    snapshot!(
        "zero_bytes",
        of_table(b"activity,curve,slope\nA,linear,1\nB,lin\0ear,1\n")
    );
}

#[test]
fn broken_utf_8_is_refused() {
    snapshot!(
        "broken_utf_8",
        of_table(b"activity,curve,slope\nD\xc3\xbcne,linear,1\nW\xc3nd,linear,1\n")
    );
    snapshot!(
        "neither_encoding",
        of_table(b"activity,curve,slope\nD\x81ne,linear,1\n")
    );
}

#[test]
fn an_open_quote_is_refused() {
    snapshot!(
        "open_quote",
        of_table("activity,curve,slope\n\"A,linear,1\nB,linear,1\n")
    );
    snapshot!(
        "text_behind_a_quote",
        of_table("activity,curve,slope\n\"A\" big,linear,1\n")
    );
    snapshot!(
        "space_before_a_quote",
        of_table("activity,curve,slope\nA,linear,1\n \"B\",linear,1\n")
    );
}

#[test]
fn a_quote_inside_a_cell_is_a_sign_like_others() {
    let folder = Folder::of([(
        TABLE,
        "activity,curve,slope\nPipe of 5\" width,linear,1\n".as_bytes(),
    )]);
    let plan = read_plan(&folder.request(TABLE)).unwrap();
    assert_eq!(plan.problem.activities()[0].name, "Pipe of 5\" width");
}

// Faults of the header.

#[test]
fn a_column_twice_is_refused() {
    snapshot!(
        "column_twice",
        of_table("activity,curve,Slope,slope\nA,linear,1,1\n")
    );
}

#[test]
fn a_column_without_a_name_is_refused() {
    snapshot!(
        "column_without_name",
        of_table("activity,curve,,slope\nA,linear,x,1\n")
    );
}

#[test]
fn nothing_of_a_file_reaches_the_terminal_as_a_control() {
    let turns = "\u{1b}[31m\u{202e}";
    let header = of_table(format!("activity,curve,slope,{turns}town\nA,linear,1,x\n"));
    snapshot!("column_unseen", &header);
    let cells = of_table(format!(
        "activity,curve,slope,cap\n{turns}A,linear,1,2\nB,{turns},1,2\nC,linear,{turns},2\n"
    ));
    let keys = of_plan("\"k\\u001b[31m\" = 1\ntitle = \"\\u202e\"\nperiod = \"a\\nb\"\n");
    for faults in [header, cells, keys] {
        assert!(faults.contains("error: "));
        assert!(!faults.contains(['\u{1b}', '\u{202e}']), "{faults:?}");
    }
}

#[test]
fn a_missing_column_is_refused() {
    snapshot!("column_missing", of_table("name,slope\nA,1\n"));
    snapshot!(
        "column_missing_and_near",
        of_table("activty,curve,slope\nA,linear,1\n")
    );
}

#[test]
fn a_misspelt_column_is_refused_with_the_one_meant() {
    snapshot!(
        "column_misspelt",
        of_table("activity,curve,slope,currnet,cap (EUR),town\nA,linear,1,5,9,North\n")
    );
}

// Faults of rows and cells.

#[test]
fn ragged_rows_are_refused() {
    snapshot!(
        "ragged",
        of_table("activity,curve,slope\nA,linear\nB,linear,1\nC,linear,1,000\n")
    );
}

#[test]
fn what_is_no_number_is_refused() {
    snapshot!(
        "no_numbers",
        of_table(
            "activity,curve,slope,base,cap\n\
             A,linear,five,12%,NaN\n\
             B,linear,\"1,234\",inf,#N/A\n\
             C,linear,1e999,5k,--5\n\
             D,linear,-,\"1,5\",\"12,34,56\"\n\
             E,linear,1,1.234.567,n/a\n"
        )
    );
}

#[test]
fn lone_groups_of_semicolon_tables_are_refused() {
    snapshot!(
        "lone_groups",
        of_table("activity;curve;slope;cap\nA;linear;1.234;5,678\nB;linear;0,5;1\n")
    );
    snapshot!(
        "lone_groups_without_evidence",
        of_table("activity;curve;slope;cap\nA;linear;1.234;5,678\n")
    );
}

#[test]
fn names_twice_are_refused_with_both_lines() {
    snapshot!(
        "names_twice",
        of_table(
            "activity,curve,slope\nDune repair,linear,1\nWall,linear,1\nDune repair,linear,1\n\
             DUNE repair,linear,1\nWall\u{a0},linear,1\nDune\u{a0}repair,linear,1\n"
        )
    );
}

#[test]
fn rows_without_a_name_and_rows_of_sums_are_refused() {
    snapshot!(
        "names_at_fault",
        of_table(
            "activity,curve,slope\n,linear,1\n\u{a0},linear,1\nTotal,linear,1\nSum:,,2\n\
             \"two\nlines\",linear,1\nDu\u{200b}ne,linear,1\n"
        )
    );
}

#[test]
fn unknown_families_are_refused_with_the_one_meant() {
    snapshot!(
        "families",
        of_table("activity,curve,slope\nA,liner,1\nB,michaelis,1\nC,,1\nD,Linear,1\n")
    );
}

#[test]
fn parameters_missing_or_not_used_are_refused() {
    snapshot!(
        "parameters",
        of_table(
            "activity,curve,gain,exponent,ceiling,scale\n\
             Ä,log,5,,,\nB,log,5,0.5,,10\nC,exponential,,,40,-1\nD,hill,,,40,25\nE,power,1,,,\n"
        )
    );
}

#[test]
fn numbers_out_of_range_are_refused() {
    snapshot!(
        "out_of_range",
        of_table(
            "activity,curve,slope,floor,cap,weight,current,observed_from,observed_to\n\
             A,linear,1,-1,,,,,\nB,linear,1,,-1,,,,\nC,linear,1,,,-2,,,\nD,linear,1,,,,-3,,\n\
             E,linear,1,,,,,9,4\nF,linear,1,20,10,,,,\n"
        )
    );
}

#[test]
fn curves_that_bend_the_wrong_way_are_refused() {
    snapshot!(
        "shapes",
        of_table(
            "activity,curve,slope,curvature,gain,exponent,ceiling,scale,steepness,midpoint,cap\n\
             A,quadratic,1,0.5,,,,,,,\nB,power,,,1,1.2,,,,,\nC,hill,,,,,40,25,2,,100\n\
             D,logistic,,,,,40,25,,30,100\nE,log,,,-1,,,10,,,\n"
        )
    );
}

#[test]
fn points_at_fault_are_refused() {
    let table = "activity,curve,slope,floor,cap\n\
        Straight,linear,1,,\nNone,points,,,\nLate,points,,,\nOne,points,,,\nTwice,points,,,\n\
        Wide,points,,,90\nBent,points,,,\nNegative,points,,,\n";
    let points = "activity,spend,return\n\
        Straight,0,0\nStraight,1,1\nLate,5,0\nLate,10,3\nOne,0,0\nTwice,0,0\nTwice,4,1\nTwice,4,2\n\
        Wide,0,0\nWide,50,9\nBent,0,0\nBent,10,1\nBent,20,5\nNegative,-1,0\nNegative,1,1\n\
        Nobody,0,0\nbent,1,1\n";
    snapshot!("points", of_tables(table, points));
}

#[test]
fn cells_of_the_points_table_at_fault_are_refused_beside_the_others() {
    snapshot!(
        "points_cells",
        of_tables(
            "activity,curve,slope\nA,points,\nB,linear,x\n",
            "activity,spend,return,source\nA,0,0,\nA,ten,\nA,10,,\n,1,1,\n"
        )
    );
}

#[test]
fn points_of_an_unknown_activity_are_refused() {
    snapshot!(
        "points_unknown",
        of_tables(
            "activity,curve\nTable,points\n",
            "activity,spend,return\nTable,0,0\nTable,1,1\nTabel,0,0\nTABLE,0,0\n"
        )
    );
    // A row at fault hides no other fault: its own points are not unknown, and the others are.
    snapshot!(
        "points_unknown_beside",
        of_tables(
            "activity,curve,cap\nTable,points,\nDune,points,x\n",
            "activity,spend,return\nTable,0,0\nTable,1,1\nDune,0,0\nDune,1,1\nTabel,0,0\n"
        )
    );
}

#[test]
fn columns_of_the_points_table_that_are_not_used_are_said() {
    snapshot!(
        "points_columns",
        of_tables(
            "activity,curve\nTable,points\n",
            "activity,spend,return,source\nTable,0,0,survey\nTable,1,1,survey\n"
        )
    );
}

#[test]
fn a_points_curve_without_a_points_table_is_refused() {
    snapshot!(
        "points_no_table",
        of_table("activity,curve\nTable,points\n")
    );
}

#[test]
fn a_fault_that_repeats_is_shown_twenty_times_and_counted() {
    let mut table = String::from("activity,curve,slope\n");
    for row in 0..2000 {
        table.push_str(&format!("A{row},linear,x\n"));
    }
    let told = of_table(&table);
    assert_eq!(told.matches("is not a number").count(), 20);
    assert!(told.contains("1,980 more of the same kind"), "{told}");
    assert!(told.contains("2,000 faults"), "{told}");
}

// The plan file.

#[test]
fn keys_and_values_at_fault_are_refused() {
    snapshot!(
        "plan_keys",
        of_plan(
            "titel = \"x\"\naim = \"maximize\"\nbudget = \"1,234\"\nmoney = 5\nperiod = true\n\
             activities = [\"activities.csv\"]\nconstraints = \"constraints.csv\"\nzzz = 1\n"
        )
    );
}

#[test]
fn two_limits_are_refused() {
    snapshot!(
        "plan_two_limits",
        of_plan("aim = \"minimise\"\nbudget = 5\nrequire = 5\nactivities = \"activities.csv\"\n")
    );
}

#[test]
fn a_requirement_under_maximise_is_refused() {
    snapshot!(
        "plan_require_maximise",
        of_plan("require = 850\nactivities = \"activities.csv\"\n")
    );
}

#[test]
fn limits_out_of_range_are_refused() {
    snapshot!(
        "plan_negative",
        of_plan("budget = -5\nactivities = \"activities.csv\"\n")
    );
    snapshot!(
        "plan_infinite",
        of_plan("budget = inf\nactivities = \"activities.csv\"\n")
    );
}

#[test]
fn what_is_no_plan_file_is_refused() {
    snapshot!(
        "plan_not_toml",
        of_plan("budget = \nactivities = \"activities.csv\"\n")
    );
    snapshot!("plan_empty", of_plan(""));
}

#[test]
fn tables_that_are_not_there_are_shown_in_the_plan_file() {
    snapshot!(
        "plan_no_tables",
        of_plan("budget = 5\nactivities = \"activites.csv\"\npoints = \"knots.csv\"\n")
    );
}

#[test]
fn amounts_of_the_plan_file_are_read_and_said() {
    snapshot!(
        "plan_amounts",
        of_plan("budget = \"€ 1,234.50\"\nmoney = \"EUR\"\nactivities = \"activities.csv\"\n")
    );
}

#[test]
fn faults_of_all_files_come_at_once() {
    let folder = Folder::of([
        (
            TABLE,
            b"activity,curve,slope\nA,liner,1\nB,points,\n".as_slice(),
        ),
        (POINTS, b"activity,spend,return\nB,0,zero\n"),
        (
            PLAN,
            b"require = 5\nactivities = \"activities.csv\"\npoints = \"points.csv\"\n",
        ),
    ]);
    snapshot!("all_files", folder.outcome(&folder.request(PLAN)));
}

// A budget off the scale.

fn warnings(table: &str, budget: f64) -> Vec<String> {
    let folder = Folder::of([(TABLE, table.as_bytes())]);
    let mut request = folder.request(TABLE);
    request.budget = Some(budget);
    let plan = read_plan(&request).unwrap();
    let warnings = plan.notes.into_iter();
    warnings
        .filter(|note| note.kind == NoteKind::Warning)
        .map(|note| note.text)
        .collect()
}

#[test]
fn a_budget_in_another_unit_than_the_curves_is_warned_of() {
    let table = "activity,curve,ceiling,scale,current\n\
        A,exponential,40,2500000,1000000\nB,hyperbolic,30,4000000,2000000\nC,hyperbolic,9,900000,\n";
    assert_eq!(warnings(table, 4_000.0).len(), 1);
    assert_eq!(warnings(table, 4e9).len(), 1);
    for budget in [0.0, 50_000.0, 4e6, 40e6, 400e6] {
        assert_eq!(warnings(table, budget), [""; 0], "{budget}");
    }
    snapshot!("scale", warnings(table, 4_000.0).join("\n"));
}

#[test]
fn amounts_in_several_currencies_are_warned_of() {
    let table = |one: &str, other: &str| {
        format!("activity,curve,slope,cap\nA,linear,1,{one}\nB,linear,1,{other}\n")
    };
    for (one, other) in [("€5", "5 EUR"), ("$5", "5 USD"), ("5", "£5")] {
        assert_eq!(warnings(&table(one, other), 5.0), [""; 0], "{one} {other}");
    }
    for (one, other) in [("€5", "5 USD"), ("USD 5", "5 CAD"), ("£5", "$5")] {
        assert_eq!(warnings(&table(one, other), 5.0).len(), 1, "{one} {other}");
    }
    snapshot!(
        "currencies",
        warnings(&table("€5", "5 USD"), 5.0).join("\n")
    );
}

#[test]
fn curves_without_a_scale_raise_no_alarm() {
    let table = "activity,curve,gain,exponent,ceiling,scale\n\
        A,power,1,0.5,,\nB,power,2,0.5,,\nC,power,2,0.5,,\nD,exponential,,,1,10\n";
    assert_eq!(warnings(table, 1e9), [""; 0]);
    assert_eq!(warnings(table, 1e-9), [""; 0]);
}

// Hostile input.

/// SplitMix64, Steele, Lea and Flood 2014: enough to choose bytes.
struct Seeded(u64);

impl Seeded {
    fn below(&mut self, end: usize) -> usize {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut mixed = self.0;
        mixed = (mixed ^ (mixed >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        mixed = (mixed ^ (mixed >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((mixed ^ (mixed >> 31)) % end as u64) as usize
    }
}

/// Bytes that mean something to a reader of tables, and some that never should stand there.
const TELLING: &[u8] = b"\",;\t\n\r\0.-+%()'e0 1\xff\xfe\xc3\xbc\x81\x80=[]";

fn mutated(bytes: &[u8], seeded: &mut Seeded) -> Vec<u8> {
    let mut bytes = bytes.to_vec();
    for _ in 0..=seeded.below(3) {
        if bytes.is_empty() {
            break;
        }
        let at = seeded.below(bytes.len());
        let telling = TELLING[seeded.below(TELLING.len())];
        match seeded.below(6) {
            5 if bytes[at].is_ascii_digit() => bytes[at] = b'0' + seeded.below(10) as u8,
            5 => {}
            0 => bytes[at] = telling,
            1 => bytes.insert(at, telling),
            2 => bytes.truncate(at),
            3 => drop(bytes.drain(at..(at + 1 + seeded.below(20)).min(bytes.len()))),
            _ => {
                let piece = bytes[at..(at + seeded.below(60)).min(bytes.len())].to_vec();
                let to = seeded.below(bytes.len());
                bytes.splice(to..to, piece);
            }
        }
    }
    bytes
}

#[test]
fn no_mutation_of_a_file_panics_and_every_fault_is_rendered() {
    const PLAN_FILE: &str = "title = \"Coast\"\nbudget = 100\nactivities = \"activities.csv\"\npoints = \"points.csv\"\n";
    let semicolons = ALL_FAMILIES.replace(',', ";").replace('.', ",");
    let quoted = ALL_FAMILIES.replace("Straight", "\"Düne, \"\"Süd\"\"\"");
    let wide: Vec<u8> = ALL_FAMILIES
        .encode_utf16()
        .flat_map(u16::to_le_bytes)
        .collect();
    let tables = [
        ALL_FAMILIES.as_bytes(),
        semicolons.as_bytes(),
        quoted.as_bytes(),
        &wide,
    ];
    let folder = Folder::of([]);
    let write = |name: &str, bytes: &[u8]| fs::write(folder.0.path().join(name), bytes).unwrap();
    for table in tables {
        write(PLAN, PLAN_FILE.as_bytes());
        write(POINTS, KNOTS.as_bytes());
        write(TABLE, table);
        let outcome = folder.outcome(&folder.request(PLAN));
        assert!(outcome.starts_with("Activity"), "{outcome}");
    }
    let mut seeded = Seeded(20_270_101);
    let (mut read, mut refused) = (0, 0);
    for round in 0..4000 {
        let table = tables[round % tables.len()];
        let (mut plan, mut points) = (PLAN_FILE.as_bytes().to_vec(), KNOTS.as_bytes().to_vec());
        let mut table = table.to_vec();
        match seeded.below(6) {
            0 => plan = mutated(&plan, &mut seeded),
            1 => points = mutated(&points, &mut seeded),
            _ => table = mutated(&table, &mut seeded),
        }
        write(PLAN, &plan);
        write(POINTS, &points);
        write(TABLE, &table);
        match read_plan(&folder.request(PLAN)) {
            Ok(_) => read += 1,
            Err(faults) => {
                refused += 1;
                assert!(faults.count() > 0);
                assert!(faults.render(true).len() < 200_000);
                for fault in faults.faults() {
                    assert!(!fault.mend.is_empty() && !fault.what.is_empty());
                }
            }
        }
    }
    // Both happen, or the mutations are too tame or too wild to show anything.
    assert!(
        read > 100 && refused > 100,
        "{read} read, {refused} refused"
    );
}

#[test]
fn hundreds_of_thousands_of_faults_are_told_within_bounds() {
    let mut table = String::from("activity,curve,slope,cap\n");
    for row in 0..150_000 {
        table.push_str(&format!("A{},linear,x,-1\n", row / 2));
        table.push_str(&format!("B{row},linear,1,-1\n"));
    }
    let folder = Folder::of([(TABLE, table.as_bytes())]);
    let faults = read_plan(&folder.request(TABLE)).unwrap_err();
    assert!(faults.count() > 300_000);
    assert!(faults.faults().len() <= 60);
}
