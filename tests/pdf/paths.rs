//! Reads the content of a page back: every path that is stroked, in mm from the top left corner.

use lopdf::content::Content;
use lopdf::{Dictionary, Document, Object};

const MM: f64 = 25.4 / 72.0;

/// A stroked path.
pub struct Path {
    /// Vertices in mm, from the top left corner, y down.
    pub points: Vec<(f64, f64)>,
    /// Width in mm.
    pub width: f64,
    /// Line cap and join, as PDF numbers them (1 and 1 are round).
    pub cap_and_join: (i64, i64),
    /// Red, green, blue from 0 to 1.
    pub colour: [f64; 3],
    /// Whether it is drawn in dashes.
    pub dashed: bool,
}

type Matrix = [f64; 6];

/// `first`, then `second` (ISO 32000-1, 8.3.4).
fn then(first: Matrix, second: Matrix) -> Matrix {
    let ([a, b, c, d, e, f], [p, q, r, s, t, u]) = (first, second);
    [a * p + b * r, a * q + b * s, c * p + d * r, c * q + d * s, e * p + f * r + t, e * q + f * s + u]
}

#[derive(Clone)]
struct State {
    matrix: Matrix,
    width: f64,
    cap: i64,
    join: i64,
    colour: [f64; 3],
    dashed: bool,
}

/// Every path stroked on the first page.
pub fn stroked(bytes: &[u8]) -> Vec<Path> {
    stroked_on(bytes, 0)
}

/// Every path stroked on page `index`, counting from 0.
pub fn stroked_on(bytes: &[u8], index: usize) -> Vec<Path> {
    let document = Document::load_mem(bytes).expect("the file can be read back");
    let id = document.page_iter().nth(index).expect("the page");
    let page = document.get_dictionary(id).expect("the page's dictionary");
    let media: Vec<f64> =
        page.get(b"MediaBox").and_then(Object::as_array).expect("a media box").iter().map(number).collect();
    let resources = page.get_deref(b"Resources", &document).and_then(Object::as_dict).expect("resources");
    let mut found = Vec::new();
    let matrix = [1.0, 0.0, 0.0, 1.0, 0.0, 0.0];
    let state = State { matrix, width: 1.0, cap: 0, join: 0, colour: [0.0; 3], dashed: false };
    walk(&document, &document.get_page_content(id), resources, state, &mut found);
    let height = media[3] * MM;
    for path in &mut found {
        path.points.iter_mut().for_each(|(x, y)| (*x, *y) = (*x * MM, height - *y * MM));
    }
    found
}

fn number(object: &Object) -> f64 {
    match object {
        Object::Integer(value) => *value as f64,
        // The shortest decimal that gives this f32 is what stands in the file.
        Object::Real(value) => value.to_string().parse().expect("a number"),
        other => panic!("not a number: {other:?}"),
    }
}

fn walk(
    document: &Document,
    content: &[u8],
    resources: &Dictionary,
    mut state: State,
    found: &mut Vec<Path>,
) {
    let mut saved = Vec::new();
    let mut open: Vec<Vec<(f64, f64)>> = Vec::new();
    for operation in Content::decode(content).expect("the content can be parsed").operations {
        let operands = operation.operands.as_slice();
        let place = |state: &State| {
            let [a, b, c, d, e, f] = state.matrix;
            let (x, y) = (number(&operands[0]), number(&operands[1]));
            (a * x + c * y + e, b * x + d * y + f)
        };
        match operation.operator.as_str() {
            "q" => saved.push(state.clone()),
            "Q" => state = saved.pop().expect("a saved state"),
            "cm" => {
                let values: Vec<f64> = operands.iter().map(number).collect();
                state.matrix = then(values.try_into().expect("six numbers"), state.matrix);
            }
            "w" => state.width = number(&operands[0]),
            "J" => state.cap = number(&operands[0]) as i64,
            "j" => state.join = number(&operands[0]) as i64,
            "RG" => {
                let values: Vec<f64> = operands.iter().map(number).collect();
                state.colour = values.try_into().expect("three numbers");
            }
            "d" => state.dashed = !operands[0].as_array().expect("dashes").is_empty(),
            "m" => open.push(vec![place(&state)]),
            "l" => open.last_mut().expect("a started path").push(place(&state)),
            "S" | "B" => {
                let [a, b, c, d, ..] = state.matrix;
                let width = state.width * (a * d - b * c).abs().sqrt() * MM;
                let cap_and_join = (state.cap, state.join);
                let State { colour, dashed, .. } = state;
                found.extend(open.drain(..).map(|points| Path {
                    points,
                    width,
                    cap_and_join,
                    colour,
                    dashed,
                }));
            }
            "Do" => {
                let name = operands[0].as_name().expect("a name");
                let forms =
                    resources.get_deref(b"XObject", document).and_then(Object::as_dict).expect("forms");
                let form = forms.get_deref(name, document).and_then(Object::as_stream).expect("a form");
                let inner = form.decompressed_content().expect("its content");
                walk(document, &inner, resources, state.clone(), found);
            }
            "BDC" | "BMC" | "EMC" | "BT" | "ET" | "Tf" | "Tm" | "Tj" | "rg" | "re" | "f" => {}
            other => panic!("operator {other} is none that a page needs"),
        }
    }
    assert!(saved.is_empty() && open.is_empty());
}
