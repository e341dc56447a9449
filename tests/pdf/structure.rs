//! Tags (ISO 32000-1, 14.7): every piece of content belongs to one element, and every element to the tree.

use super::sample::{NAMES, info, page};
use leadsheet::sheet::Paper;
use lopdf::content::Content;
use lopdf::{Dictionary, Document, Object, ObjectId};
use std::collections::BTreeMap;

/// Every element under `object`: its kind, its alternative text, the marked content of each page.
fn elements(document: &Document, object: &Object, found: &mut Vec<(String, Dictionary)>) {
    match object {
        Object::Array(kids) => kids.iter().for_each(|kid| elements(document, kid, found)),
        Object::Reference(id) => {
            let element = document.get_dictionary(*id).expect("an element");
            let kind =
                String::from_utf8_lossy(element.get(b"S").and_then(Object::as_name).expect("S")).into_owned();
            found.push((kind, element.clone()));
            elements(document, element.get(b"K").expect("kids"), found);
        }
        Object::Integer(_) => {}
        other => panic!("{other:?} among the kids"),
    }
}

#[test]
fn every_marked_content_belongs_to_the_element_that_the_parent_tree_says() {
    let pages = [page(Paper::A4), page(Paper::A4)];
    let bytes = leadsheet::pdf::write(&pages, &info()).expect("the pages can be written");
    let document = Document::load_mem(&bytes).expect("the file can be read back");
    let ids: Vec<ObjectId> = document.page_iter().collect();
    let catalogue = document.catalog().expect("a catalogue");
    let root = catalogue.get(b"StructTreeRoot").and_then(Object::as_reference).expect("a structure");
    let root = document.get_dictionary(root).expect("its root");
    let mut found = Vec::new();
    elements(&document, root.get(b"K").expect("kids"), &mut found);
    let mut count: BTreeMap<&str, usize> = BTreeMap::new();
    found.iter().for_each(|(kind, _)| *count.entry(kind).or_default() += 1);
    let names = NAMES.len();
    let expected = [
        ("Document", 1),
        ("Figure", 2),
        ("H1", 2),
        ("P", 2),
        ("TD", 4 * names),
        ("TR", 2 * names),
        ("Table", 2),
    ];
    assert_eq!(count, BTreeMap::from(expected));
    for (kind, element) in &found {
        assert_eq!(element.has(b"Alt"), kind == "Figure");
    }

    let numbers = root.get(b"ParentTree").and_then(Object::as_dict).and_then(|tree| tree.get(b"Nums"));
    let numbers = numbers.and_then(Object::as_array).expect("a number tree");
    for index in 0..pages.len() {
        assert_eq!(numbers[2 * index].as_i64().expect("a key"), index as i64);
        let parents = numbers[2 * index + 1].as_reference().and_then(|id| document.get_object(id));
        let parents = parents.and_then(Object::as_array).expect("parents of one page");
        let content = Content::decode(&document.get_page_content(ids[index])).expect("content");
        let mut next = 0;
        let mut depth = 0;
        for operation in &content.operations {
            match operation.operator.as_str() {
                "BDC" => {
                    let tag = operation.operands[0].as_name().expect("a tag");
                    let mark =
                        operation.operands[1].as_dict().and_then(|d| d.get(b"MCID")).and_then(Object::as_i64);
                    assert_eq!(mark.expect("a mark"), next, "marks count up");
                    let parent =
                        parents[next as usize].as_reference().and_then(|id| document.get_dictionary(id));
                    let parent = parent.expect("a parent");
                    assert_eq!(parent.get(b"S").and_then(Object::as_name).expect("S"), tag);
                    assert_eq!(parent.get(b"K").and_then(Object::as_i64).expect("its mark"), next);
                    let page = parent.get(b"Pg").and_then(Object::as_reference).expect("its page");
                    assert_eq!(page, ids[index]);
                    next += 1;
                    depth += 1;
                }
                "BMC" => depth += 1,
                "EMC" => depth -= 1,
                "S" | "Do" | "Tj" => assert_eq!(depth, 1, "all that is drawn is tagged, once"),
                _ => {}
            }
        }
        assert_eq!((next as usize, depth), (parents.len(), 0));
    }
}
