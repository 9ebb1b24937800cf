//! What the screen shows, key by key.

use std::process::Command;

use super::pty::Desk;
use super::{SQUALL_LINE, keys};

const UP: &str = "\x1b[A";
const LEFT: &str = "\x1b[D";

fn plain(_: &mut Command) {}

#[test]
fn a_squall_line_at_80_and_at_40_columns() {
    for columns in [80, 40] {
        let state = tempfile::tempdir().unwrap();
        let mut desk = Desk::open(columns, state.path(), plain);
        desk.until_ready();
        for entry in SQUALL_LINE {
            desk.enter(entry);
        }
        desk.enter("scale L = 900 m");
        insta::assert_snapshot!(format!("squall_line_{columns}"), desk.screen());
        desk.keys("\x04");
        assert!(desk.ends_well());
    }
}

#[test]
fn keys_complete_recall_and_drop() {
    let state = tempfile::tempdir().unwrap();
    let mut desk = Desk::open(80, state.path(), plain);
    desk.until_ready();
    // Tab completes a keyword and a unit; what is typed is hinted at.
    desk.keys("sca\t Depth = 100 hP\t");
    desk.until_shown("~: scale Depth = 100 hPa  pressure");
    desk.keys("\x7f\x7f\x7fkm");
    desk.until_shown("length");
    desk.keys("\r");
    desk.until_ready();
    desk.keys("Dep\t/(2 m)");
    desk.until_shown("Depth/(2 m)  = 50000");
    desk.keys("\r");
    desk.until_ready();
    // Ctrl-C drops the line.
    desk.keys("scale W = ");
    desk.until_shown("scale W =");
    desk.keys("\x03");
    desk.until_ready();
    // Up brings the last line back, changed in its middle.
    desk.keys(UP);
    desk.until("the earlier line", |desk| {
        desk.row().starts_with("~: Depth/(2 m)")
    });
    desk.keys(&LEFT.repeat(3));
    desk.keys("\x7f0.5");
    desk.keys("\r");
    desk.until_shown("= 200000");
    insta::assert_snapshot!("keys", desk.screen());
}

#[test]
fn unfinished_statements_go_on_below() {
    let state = tempfile::tempdir().unwrap();
    let mut desk = Desk::open(80, state.path(), plain);
    desk.until_ready();
    desk.keys("phenomenon low {\r");
    desk.keys("scale U = 10 m/s\r");
    desk.until("the second line", |desk| desk.row().is_empty());
    desk.enter("}");
    // A paste comes in as it is.
    desk.keys("\x1b[200~scale L = 1000 km\nU/L\nU +\n  2 m/s\n\x1b[201~");
    desk.until_shown("2 m/s");
    desk.keys("\r");
    desk.until_ready();
    insta::assert_snapshot!("several_lines", desk.screen());
}

#[test]
fn errors_stand_under_greek_and_wide_letters() {
    let state = tempfile::tempdir().unwrap();
    let mut desk = Desk::open(80, state.path(), plain);
    desk.until_ready();
    desk.enter("scale ρ_0 = 1.2 kg/m^3");
    desk.keys("ρ_0*深さ");
    desk.until_shown("深さ");
    assert_eq!(desk.column(), 3 + 4 + 4);
    desk.keys(LEFT);
    desk.until("the cursor", |desk| desk.column() == 3 + 4 + 2);
    desk.keys("\r");
    desk.until_ready();
    insta::assert_snapshot!("wide_letters", desk.screen());
}

#[test]
fn lines_are_remembered_in_the_state_folder() {
    let state = tempfile::tempdir().unwrap();
    let mut desk = Desk::open(80, state.path(), plain);
    desk.until_ready();
    desk.enter("scale U = 12 m/s");
    desk.keys("leave\r");
    assert!(desk.ends_well());
    let file = state.path().join("scalewright/history");
    assert!(
        std::fs::read_to_string(&file)
            .unwrap()
            .contains("scale U = 12 m/s")
    );
    let mut desk = Desk::open(80, state.path(), plain);
    desk.until_ready();
    desk.keys(&UP.repeat(2));
    desk.until("the line of the session before", |desk| {
        desk.row().starts_with("~: scale U = 12 m/s")
    });
}

#[test]
fn no_colour_and_dumb_terminals_get_plain_lines() {
    let state = tempfile::tempdir().unwrap();
    for (name, value) in [("NO_COLOR", "1"), ("TERM", "dumb")] {
        let mut desk = Desk::open(80, state.path(), |command| {
            command.env(name, value);
        });
        desk.until_ready();
        desk.keys("scale U = 10 m/s\r");
        desk.keys("U + 1 m\r");
        desk.until_shown("unlike-dimensions");
        let raw = String::from_utf8_lossy(&desk.raw).into_owned();
        let coloured = raw.split("\x1b[").skip(1).any(|rest| {
            rest.trim_start_matches(|c: char| c.is_ascii_digit() || c == ';')
                .starts_with('m')
        });
        assert!(!coloured, "{name}: {raw:?}");
        assert!(!raw.contains("velocity, order"), "{raw:?}");
    }
}

#[test]
fn a_long_answer_can_be_left() {
    let state = tempfile::tempdir().unwrap();
    let script = state.path().join("long.scl");
    std::fs::write(&script, many_terms()).unwrap();
    let mut desk = Desk::open(80, state.path(), |command| {
        command.arg("prompt").arg("./long.scl");
    });
    desk.until_ready();
    desk.keys("reduce\r");
    desk.until("the answer to begin", |desk| desk.row().is_empty());
    desk.keys("\x03");
    desk.until_shown("[interrupted]");
    desk.until_ready();
    assert!(
        !desk.screen().contains("leading order"),
        "{}",
        desk.screen()
    );
    desk.enter("a1");
    desk.until_shown("= 0.0667 .. 2 .. 60");
}

/// Equations of many terms known to wide ranges: their shares take seconds.
fn many_terms() -> String {
    let mut text = String::from("scale X = 1 m\ncoordinate x ~ X\n");
    let mut sum = Vec::new();
    for idx in 0..12 {
        text.push_str(&format!("scale a{idx} = {} within 30\n", idx + 1));
        text.push_str(&format!("field f{idx}(x) ~ a{idx}\n"));
        sum.push(format!("f{idx}"));
    }
    for idx in 0..20 {
        text.push_str(&format!("equation e{idx}: ({})^3 = 1\n", sum.join(" + ")));
    }
    text
}

#[test]
fn random_keys_leave_the_terminal_as_it_was() {
    let state = tempfile::tempdir().unwrap();
    let mut command = Command::new("sh");
    command.args([
        "-c",
        "trap : INT; stty -a; \"$0\"; echo over; stty -a; read wait",
        env!("CARGO_BIN_EXE_scalewright"),
    ]);
    let mut desk = Desk::with(command, 80, state.path());
    desk.until_ready();
    for keys in keys::for_terminal(200) {
        desk.keys(&keys);
        desk.drop_line();
    }
    desk.leave("over");
    desk.until("the settings", |desk| desk.settings().len() % 2 == 0);
    let raw = String::from_utf8_lossy(&desk.raw).into_owned();
    assert!(!raw.contains("panicked"), "{raw}");
    let settings = desk.settings();
    let half = settings.len() / 2;
    assert!(half > 0, "{raw}");
    assert_eq!(settings[..half], settings[half..]);
}
