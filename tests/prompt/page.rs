//! The growing session: whatever is entered, its text is a script that says the same.

use proptest::prelude::*;
use scalewright::Session;
use scalewright::session::incremental::Page;

fn entry() -> impl Strategy<Value = String> {
    let name = prop::sample::select(vec!["A", "B", "C", "D"]);
    let value = prop::sample::select(vec!["1 m", "2 m within 2", "3 s", "A/B", "B*C", "4"]);
    let statement =
        (name.clone(), value.clone(), 0..9).prop_map(|(name, value, kind)| match kind {
            0 => format!("constant {name} = {value}"),
            1 => format!("group g_{name} = {name}/{value}"),
            2 => format!("coordinate {name}_x, x ~ {name}"),
            3 => format!("field u, {name}_u(x) ~ {name}"),
            4 => format!("phenomenon p {{ scale {name} = {value} }}"),
            5 => format!("equation e: {name} as one = {name} as {name}_2"),
            6 => format!("show {name}*2"),
            7 => "tolerance 5 %".to_owned(),
            _ => format!("scale {name} = {value}  # {name}"),
        });
    prop::collection::vec(statement, 1..3).prop_map(|parts| parts.join("\n"))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(200))]

    #[test]
    fn its_text_is_always_sound(entries in prop::collection::vec(entry(), 1..12)) {
        let mut page = Page::new(Session::new());
        for entry in &entries {
            let before = page.text().to_owned();
            let taken = page.take("typed", entry);
            if !taken.is_taken {
                prop_assert_eq!(page.text(), &before);
            }
            let again = Page::restored(Session::new(), page.text());
            prop_assert_eq!(again.text(), page.text(), "{}", entry);
            let names = page.model().visible_names(None);
            prop_assert_eq!(again.model().visible_names(None), names, "{}", page.text());
            let values = |page: &Page<'_>| {
                let cases = page.cases().iter();
                cases.map(|case| format!("{:?}", case.setting.variables)).collect::<Vec<_>>().len()
            };
            prop_assert_eq!(values(&again), values(&page));
            let script = page.script();
            let outcome = Session::new().check("kept", &script, None);
            let errors = outcome.diagnostics.iter();
            let codes: Vec<&str> = errors.filter(|found| found.is_error()).map(|found| found.code).collect();
            prop_assert!(codes.iter().all(|code| *code == "nothing-to-rank"), "{:?}\n{}", codes, script);
        }
    }
}
