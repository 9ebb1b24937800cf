//! Sessions without a terminal, entry by entry.

use scalewright::Status;

use super::{SQUALL_LINE, dialogue, transcript};

#[test]
fn from_nothing_to_the_terms_of_a_squall_line() {
    let mut talk = dialogue(80);
    let said = transcript(&mut talk, &SQUALL_LINE);
    assert!(SQUALL_LINE.len() < 12);
    insta::assert_snapshot!(said);
}

#[test]
fn a_changed_number_says_what_it_does() {
    let mut talk = dialogue(80);
    transcript(&mut talk, &SQUALL_LINE);
    let said = transcript(
        &mut talk,
        &[
            "scale L = 900 m within 2  # wider",
            "again",
            "again",
            "U/(f*L)",
            "again",
        ],
    );
    insta::assert_snapshot!(said);
}

#[test]
fn expressions_are_answered_at_once() {
    let mut talk = dialogue(80);
    let said = transcript(
        &mut talk,
        &[
            "scale U = 10 m/s within 2",
            "scale L = 1000 km",
            "constant f = 1e-4 1/s",
            "group Ro = U/(f*L) \"Rossby number\"",
            "U/(f*L)",
            "U in kt",
            "show 2*Ro",
            "sqrt(U^2 + (1 m/s)^2)",
            "scale W in m/s",
            "W",
            "U +\nL",
            "q",
            "rnak",
            "quit",
            "exit",
            "split p = U + L",
            "U = 3 m/s",
            "scale D = 3 mm/ss",
        ],
    );
    insta::assert_snapshot!(said);
}

#[test]
fn phenomena_are_changed_value_by_value() {
    let mut talk = dialogue(80);
    let said = transcript(
        &mut talk,
        &[
            "scale U in m/s  scale L in km  constant f = 1e-4 1/s",
            "group Ro = U/(f*L)",
            "phenomenon low { scale U = 10 m/s scale L = 1000 km }",
            "phenomenon squall {\n  scale U = 40 m/s  # gusts\n  scale L = 10 km\n}",
            "Ro",
            "phenomenon squall { scale L = 20 km tolerance 5 % }",
            "again",
            "scale L = 500 km",
            "claim Ro < 1 for low",
            "page",
        ],
    );
    insta::assert_snapshot!(said);
}

#[test]
fn after_an_error_the_session_is_as_it_was() {
    let mut talk = dialogue(80);
    transcript(&mut talk, &SQUALL_LINE);
    let before = talk.page().text().to_owned();
    for entry in [
        "scale U = 3 kg",
        "scale U = 20 m/s scale V = nothing",
        "rank nothing",
        "U + L",
        "scale",
        "equation x_momentum: a = b",
        "phenomenon low { scale L = 3 kg }",
        "scale U = 1 m/s scale U = 2 m/s",
        "use nothing.known",
        "keep",
    ] {
        let reply = talk.enter(entry);
        assert_eq!(reply.status, Some(Status::Invalid), "{entry}");
        assert!(!reply.text().is_empty(), "{entry}");
        assert_eq!(talk.page().text(), before, "{entry}");
    }
    let reply = talk.enter("U");
    assert!(reply.text().contains("= 40 m/s"), "{}", reply.text());
}

#[test]
fn a_paste_is_taken_as_a_script() {
    let script = "# A page with names used above their declaration\n\
        equation balance_x: f*v as coriolis =\n    dP/(rho*L) as pressure\n\n\
        scale L = 1000 km\n  \"radius\"\nscale dP = 10 hPa\nconstant f = 1e-4 1/s\n\
        constant rho = 1.2 kg/m^3\ncoordinate x ~ L\nfield v(x) ~ V\nscale V = 8 m/s\n\
        rank\nshow V in kt\nV/L\nscale V = 9 m/s\nagain\n";
    let mut talk = dialogue(80);
    insta::assert_snapshot!(transcript(&mut talk, &[script, "page"]));
}

#[test]
fn entries_can_be_taken_back() {
    let mut talk = dialogue(80);
    let entries = [
        "scale U = 1 m/s",
        "U",
        "scale U = 2 m/s",
        "back",
        "U",
        "back",
        "back",
        "back",
    ];
    insta::assert_snapshot!(transcript(&mut talk, &entries));
}

#[test]
fn a_narrow_terminal_gets_narrow_answers() {
    let mut talk = dialogue(40);
    transcript(&mut talk, &SQUALL_LINE[..8]);
    let said = transcript(&mut talk, &["rank z_momentum", "reduce z_momentum", "help"]);
    let widest = said.lines().map(|line| line.chars().count()).max();
    assert!(widest <= Some(40), "{said}");
    insta::assert_snapshot!(said);
}

#[test]
fn what_is_kept_gives_the_same_answers() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("squall.scl");
    let name = file.to_str().unwrap();
    let mut talk = dialogue(80);
    transcript(&mut talk, &SQUALL_LINE);
    transcript(
        &mut talk,
        &["# calmer than before", "scale U = 30 m/s  \"gusts\"", "Ro"],
    );
    let reply = talk.enter(&format!("keep \"{name}\""));
    assert_eq!(reply.status, None, "{}", reply.text());
    let text = std::fs::read_to_string(&file).unwrap();
    insta::assert_snapshot!(text);

    let outcome = scalewright::Session::new().run("kept", &text, None);
    assert_eq!(outcome.status(), Status::Ok);
    let kept = scalewright::report::text::answers(&outcome.answers[..1], &[], false);
    let again = talk.enter("rank x_momentum").text();
    assert_eq!(kept, again);

    // Not over a file of somebody else's.
    let other = folder.path().join("other.scl");
    std::fs::write(&other, "mine").unwrap();
    let reply = talk.enter(&format!("keep \"{}\"", other.display()));
    assert_eq!(reply.status, Some(Status::Invalid));
    assert_eq!(std::fs::read_to_string(&other).unwrap(), "mine");
    let reply = talk.enter(&format!("keep \"{name}\""));
    assert_eq!(reply.status, None);
}

#[test]
fn a_request_that_no_longer_holds_is_kept_as_a_comment() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("page.scl");
    let mut talk = dialogue(80);
    transcript(
        &mut talk,
        &[
            "scale a = 1 m  scale b = 2 m  coordinate x ~ a",
            "equation e: a as one = b as two",
            "show e.two  show a",
            "equation e: a as one = b as other",
        ],
    );
    let reply = talk.enter(&format!("keep {}", file.display()));
    assert_eq!(reply.status, None, "{}", reply.text());
    insta::assert_snapshot!(std::fs::read_to_string(&file).unwrap());
}

#[test]
fn a_session_starts_from_a_script() {
    let text = "use atmosphere.momentum\n# so\nphenomenon whirl {\n  scale U = 40 m/s scale W = 10 m/s\n  \
                scale L = 150 m scale H = 1 km\n  scale T = L/U scale dP = 15 hPa\n  constant phi = 45 deg\n}\n\
                reduce z_momentum\nclaim Ro > 1000\n";
    let mut talk = dialogue(80);
    let mut said = talk.start("whirl.scl", None, text).text();
    assert_eq!(talk.page().text(), text);
    said.push_str(&transcript(
        &mut talk,
        &[
            "again",
            "phenomenon whirl { scale W = 1 m/s }",
            "again",
            "Ro",
        ],
    ));
    insta::assert_snapshot!(said);
    let reply = dialogue(80).start("faulty.scl", None, "scale U = 3 m/q");
    assert_eq!(reply.status, Some(Status::Invalid));
}

#[test]
fn help_has_its_topics() {
    let mut talk = dialogue(80);
    let entries = [
        "help",
        "help rank",
        "help within",
        "help again",
        "help open-scale",
        "help base.planet",
        "help nothng",
    ];
    insta::assert_snapshot!(transcript(&mut talk, &entries));
}
