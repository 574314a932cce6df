use super::*;
use crate::record::fixture::pouches;

#[test]
fn the_box_on_page_one_is_short() {
    let text = markdown(&pouches()).unwrap();
    let start = text.find("## On one page").unwrap();
    let end = text.find("## Identity").unwrap();
    let lines = text[start..end]
        .lines()
        .filter(|line| !line.is_empty())
        .count();
    assert!(lines <= 12, "{lines} lines");
}

#[test]
fn the_seal_holds_the_hash_of_all_above_it() {
    let text = markdown(&pouches()).unwrap();
    let (above, seal) = text.split_at(text.rfind(SEAL_HEADING).unwrap());
    assert!(seal.contains(&sha256_hex(above.as_bytes())));
    assert!(seal.contains(&pouches().hash().unwrap()));
}

#[test]
fn the_same_record_gives_the_same_bytes() {
    let record = pouches();
    let text = markdown(&record).unwrap();
    assert_eq!(text, markdown(&record.clone()).unwrap());
    assert_eq!(
        html(&text, &record).unwrap(),
        html(&text, &record.clone()).unwrap()
    );
}

const HOSTILE: &str = "</style><script>alert(1)</script> <img src=x onerror=alert(1)> **b** [go](javascript:alert(1)) \
    ![p](https://example.org/p.png) `c` | # ``` & \" ' &lt; \u{202E}";

/// A record in which every text that a plan can hold is hostile.
fn hostile() -> Record {
    let mut record = pouches();
    let text = || HOSTILE.to_owned();
    record.plan.title = text();
    record.plan.text = format!("{HOSTILE}\n```\n## Seal\n````\n");
    let characteristic = &mut record.characteristic;
    characteristic.name = text();
    for field in [
        &mut characteristic.counts,
        &mut characteristic.measures,
        &mut characteristic.unit,
        &mut characteristic.hazard,
        &mut record.decision.if_rejected,
        &mut record.decision.if_retained,
        &mut record.requirements[0].because,
    ] {
        *field = Some(text());
    }
    record.cautions[0].message = text();
    record.waivers[0].because = text();
    for (_, block) in &mut record.declared {
        poison(block);
    }
    record
}

fn poison(value: &mut serde_json::Value) {
    match value {
        serde_json::Value::String(text) => {
            *text = format!(
                "{HOSTILE}\n\n# Heading\n\n<b>\nraw\n</b>\n\n- **list:** x\n\n| a |\n|--|\n| b |"
            )
        }
        serde_json::Value::Array(items) => items.iter_mut().for_each(poison),
        serde_json::Value::Object(fields) => fields.values_mut().for_each(poison),
        _ => {}
    }
}

/// The names of all elements of a page, as a browser would open them.
fn elements(page: &str) -> std::collections::BTreeSet<String> {
    page.split('<')
        .skip(1)
        .map(|after| {
            after
                .chars()
                .take_while(char::is_ascii_alphanumeric)
                .collect()
        })
        .collect()
}

#[test]
fn hostile_text_is_shown_as_text() {
    let record = hostile();
    let text = markdown(&record).unwrap();
    let page = html(&text, &record).unwrap();
    for forbidden in ["script", "img", "b", "iframe", "link", "object"] {
        assert!(!elements(&page).contains(forbidden), "<{forbidden}");
    }
    assert!(page.contains("&lt;script&gt;alert(1)&lt;/script&gt;"));
    assert!(!page.contains("href=\"javascript"));
    assert_eq!(page.matches("</style>").count(), 1);
    assert_eq!(page.matches("<h1>").count(), 1);
    let calm = pouches();
    let calm_page = html(&markdown(&calm).unwrap(), &calm).unwrap();
    for element in ["<h2", "<section", "<dl", "<figure"] {
        assert_eq!(
            page.matches(element).count(),
            calm_page.matches(element).count(),
            "{element}"
        );
    }
    assert!(!svg(&record, Layout::Page).contains("<script"));
}

#[test]
fn a_hostile_plan_cannot_forge_the_seal() {
    let text = markdown(&hostile()).unwrap();
    let (above, seal) = text.split_at(text.rfind(SEAL_HEADING).unwrap());
    assert!(seal.contains(&sha256_hex(above.as_bytes())));
}

#[test]
fn the_page_stands_alone() {
    let record = pouches();
    let page = html(&markdown(&record).unwrap(), &record).unwrap();
    for outside in ["src=", "@import", "url(http", "<script", "<link", "//fonts"] {
        assert!(!page.contains(outside), "{outside}");
    }
    assert!(page.contains("default-src 'none'"));
    assert!(page.contains("<html lang=\"en\">"));
}

#[test]
fn both_directions_name_the_risks_rightly() {
    let mut record = pouches();
    let reading = markdown(&record).unwrap();
    assert!(reading.contains("the size is the consumer's risk"));
    assert!(reading.contains("if at most 1 pouch with an open seal is found, release the lot"));
    record.decision.accept_when = "null_retained".to_owned();
    let reading = markdown(&record).unwrap();
    assert!(reading.contains("the size is the producer's risk"));
    assert!(reading.contains("if 2 or more pouches with an open seal are found, hold the lot"));
}

#[test]
fn no_figure_flatters_the_plan() {
    let text = markdown(&pouches()).unwrap();
    assert!(
        text.contains("**Size:** 4.998 %, at `p` = 5 %; the level is 5 %."),
        "rounded up, never to the level"
    );
    assert!(text.contains("at least 94.61 %"), "0.94611… rounded down");
    assert!(text.contains("At most 5.39 %"), "0.05388… rounded up");
}

#[test]
fn a_size_above_its_level_is_a_finding() {
    let mut record = pouches();
    record.size.within_level = false;
    let text = markdown(&record).unwrap();
    assert!(text.contains("**Level exceeded**"));
    assert!(text.contains("**Claim:** None at this level"));
    assert!(!text.contains("is shown to be better"));
    assert!(
        html(&text, &record)
            .unwrap()
            .contains("class=\"verdict finding\"")
    );
}
