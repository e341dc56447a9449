//! Tags: what the parts of a page mean to someone who can't see them (ISO 32000-1, 14.7 and 14.8).

use super::objects;
use crate::sheet::Role;
use lopdf::{Document, Object, ObjectId, dictionary};

/// The structure of a document, collected page by page.
#[derive(Default)]
pub(super) struct Structure(Vec<PageTags>);

/// The tagged content of one page, in order.
pub(super) struct PageTags {
    page: ObjectId,
    tagged: Vec<Tagged>,
    rows: usize,
}

/// One piece of tagged content; its place in the list is its marked-content number.
enum Tagged {
    Block { tag: &'static str, alt: Option<String> },
    Cell { row: usize },
}

impl Structure {
    /// Starts the next page.
    pub(super) fn page(&mut self, page: ObjectId) -> &mut PageTags {
        self.0.push(PageTags { page, tagged: Vec::new(), rows: 0 });
        let last = self.0.len() - 1;
        &mut self.0[last]
    }

    /// Writes the structure tree and gives its root.
    pub(super) fn finish(self, document: &mut Document) -> ObjectId {
        let root = document.new_object_id();
        let top = document.new_object_id();
        let mut children: Vec<Object> = Vec::new();
        let mut parents: Vec<Object> = Vec::new();
        for (index, page) in self.0.into_iter().enumerate() {
            let mut of_content: Vec<Object> = Vec::new();
            page.write(document, top, &mut children, &mut of_content);
            parents.push((index as i64).into());
            parents.push(document.add_object(Object::Array(of_content)).into());
        }
        document.objects.insert(
            top,
            dictionary! { "Type" => "StructElem", "S" => "Document", "P" => root, "K" => children }.into(),
        );
        let next = parents.len() as i64 / 2;
        let tree = dictionary! {
            "Type" => "StructTreeRoot",
            "K" => top,
            "ParentTree" => dictionary! { "Nums" => parents },
            "ParentTreeNextKey" => next,
        };
        document.objects.insert(root, tree.into());
        root
    }
}

impl PageTags {
    /// Registers the next piece of content; `None` for decoration.
    pub(super) fn next(&mut self, role: &Role) -> Option<(&'static str, usize)> {
        let (tag, tagged) = match role {
            Role::Artifact => return None,
            Role::Heading => ("H1", Tagged::Block { tag: "H1", alt: None }),
            Role::Paragraph => ("P", Tagged::Block { tag: "P", alt: None }),
            Role::Figure { alt } => ("Figure", Tagged::Block { tag: "Figure", alt: Some(alt.clone()) }),
            Role::TableRow => ("TD", Tagged::Cell { row: self.rows }),
        };
        self.tagged.push(tagged);
        Some((tag, self.tagged.len() - 1))
    }

    /// Ends a row of a table.
    pub(super) fn end_row(&mut self) {
        self.rows += 1;
    }

    /// Writes the elements of this page: `children` of the document, and for each marked-content
    /// number the element that it belongs to. Cells that follow each other make one table.
    fn write(
        self,
        document: &mut Document,
        top: ObjectId,
        children: &mut Vec<Object>,
        of_content: &mut Vec<Object>,
    ) {
        let mut table: Option<ObjectId> = None;
        let mut rows: Vec<Object> = Vec::new();
        let mut open_row: OpenRow = None;
        for (number, tagged) in self.tagged.iter().enumerate() {
            let content = number as i64;
            match tagged {
                Tagged::Block { tag, alt } => {
                    close_table(document, top, &mut table, &mut rows, &mut open_row);
                    let mut element = dictionary! {
                        "Type" => "StructElem", "S" => *tag, "P" => top, "Pg" => self.page, "K" => content,
                    };
                    if let Some(alt) = alt {
                        element.set("Alt", objects::text(alt));
                    }
                    let id = document.add_object(element);
                    children.push(id.into());
                    of_content.push(id.into());
                }
                Tagged::Cell { row } => {
                    let table = *table.get_or_insert_with(|| {
                        let id = document.new_object_id();
                        children.push(id.into());
                        id
                    });
                    if open_row.as_ref().is_some_and(|(open, _, _)| open != row) {
                        close_row(document, table, &mut rows, &mut open_row);
                    }
                    let (_, row_id, cells) =
                        open_row.get_or_insert_with(|| (*row, document.new_object_id(), Vec::new()));
                    let cell = document.add_object(dictionary! {
                        "Type" => "StructElem", "S" => "TD", "P" => *row_id, "Pg" => self.page, "K" => content,
                    });
                    cells.push(cell.into());
                    of_content.push(cell.into());
                }
            }
        }
        close_table(document, top, &mut table, &mut rows, &mut open_row);
    }
}

type OpenRow = Option<(usize, ObjectId, Vec<Object>)>;

fn close_row(document: &mut Document, table: ObjectId, rows: &mut Vec<Object>, open: &mut OpenRow) {
    if let Some((_, id, cells)) = open.take() {
        let row = dictionary! { "Type" => "StructElem", "S" => "TR", "P" => table, "K" => cells };
        document.objects.insert(id, row.into());
        rows.push(id.into());
    }
}

fn close_table(
    document: &mut Document,
    top: ObjectId,
    table: &mut Option<ObjectId>,
    rows: &mut Vec<Object>,
    open: &mut OpenRow,
) {
    if let Some(id) = table.take() {
        close_row(document, id, rows, open);
        let rows = std::mem::take(rows);
        let element = dictionary! { "Type" => "StructElem", "S" => "Table", "P" => top, "K" => rows };
        document.objects.insert(id, element.into());
    }
}
