//! The points of a `table` return curve.

use serde_json::json;

use super::super::fault::{FaultKind, PointsProblem};
use super::super::notes::Notes;
use super::super::tree::{Content, Node};
use super::domain::{Domain, wrong_type};

/// Points `[x, y]`: x from 0 strictly rising, y >= 0 and never falling, all finite.
#[derive(Debug)]
pub(crate) struct Points {
    /// Most points.
    pub(crate) most: usize,
}

impl Points {
    fn check_order(key: &str, points: &[[f64; 2]], items: &[Node], notes: &mut Notes) -> bool {
        let mut sound = true;
        let mut note = |node: &Node, problem, notes: &mut Notes| {
            notes.at(&node.place, FaultKind::Points { key: key.into(), problem });
            sound = false;
        };
        if points[0][0] != 0.0 {
            let problem = PointsProblem::Start { x: points[0][0].to_string() };
            note(&items[0], problem, notes);
        }
        for (before, (pair, item)) in points.windows(2).zip(&items[1..]).enumerate() {
            let number = before + 2;
            if pair[1][0] <= pair[0][0] {
                note(item, PointsProblem::XNotRising { number }, notes);
            }
            if pair[1][1] < pair[0][1] {
                note(item, PointsProblem::YFalling { number }, notes);
            }
        }
        sound
    }
}

fn coordinate(node: &Node) -> Option<f64> {
    #[expect(clippy::cast_precision_loss, reason = "1 is meant as 1.0")]
    match node.content {
        Content::Real(number) => Some(number),
        Content::Integer(number) => Some(number as f64),
        _ => None,
    }
}

fn read_point(node: &Node, number: usize, notes: &Notes) -> Result<[f64; 2], PointsProblem> {
    let not_a_pair = || PointsProblem::NotAPair { number, value: notes.excerpt(node) };
    let Content::Array(pair) = &node.content else { return Err(not_a_pair()) };
    let [x, y] = pair.as_slice() else { return Err(not_a_pair()) };
    let (Some(x), Some(y)) = (coordinate(x), coordinate(y)) else { return Err(not_a_pair()) };
    if [x, y].iter().all(|c| c.is_finite() && *c >= 0.0) {
        Ok([x + 0.0, y + 0.0])
    } else {
        Err(PointsProblem::Coordinate { number, value: notes.excerpt(node) })
    }
}

impl Domain for Points {
    type Value = Vec<[f64; 2]>;
    type Plain = &'static [[f64; 2]];

    fn value(&self, plain: Self::Plain) -> Self::Value {
        plain.to_vec()
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<Self::Value> {
        let Content::Array(items) = &node.content else {
            notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
            return None;
        };
        if !(2..=self.most).contains(&items.len()) {
            let problem = PointsProblem::Count { count: items.len(), most: self.most };
            notes.at(&node.place, FaultKind::Points { key: key.into(), problem });
            return None;
        }
        let mut points = Vec::with_capacity(items.len());
        for (index, item) in items.iter().enumerate() {
            match read_point(item, index + 1, notes) {
                Ok(point) => points.push(point),
                Err(problem) => {
                    notes.at(&item.place, FaultKind::Points { key: key.into(), problem });
                }
            }
        }
        let sound = points.len() == items.len() && Self::check_order(key, &points, items, notes);
        sound.then_some(points)
    }

    fn write(&self, value: &Self::Value) -> toml::Value {
        let pair = |point: &[f64; 2]| toml::Value::from(point.to_vec());
        value.iter().map(pair).collect::<Vec<_>>().into()
    }

    fn allowed(&self) -> String {
        format!(
            "a list of 2 to {} pairs [x, y], x rising from 0, y at least 0 and never falling",
            self.most
        )
    }

    fn schema(&self) -> serde_json::Value {
        let pair = json!({
            "type": "array", "items": { "type": "number", "minimum": 0.0 },
            "minItems": 2, "maxItems": 2,
        });
        json!({ "type": "array", "items": pair, "minItems": 2, "maxItems": self.most })
    }
}
