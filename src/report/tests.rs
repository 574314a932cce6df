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
