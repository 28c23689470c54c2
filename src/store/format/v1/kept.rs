//! Puts fields that this version does not know back where they were read.

use crate::study::kept::{KeptField, Step};
use serde_json::{Map, Value};

/// Whether positions in lists still mean what they meant when the fields were read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Positions {
    /// They do.
    AsRead,
    /// They may not: fields inside lists are left out.
    Changed,
}

/// Puts each field back into the thing that held it, if that is still there.
pub fn put_back(root: &mut Value, fields: &[KeptField], positions: Positions) {
    for field in fields {
        let in_list = |step: &Step| matches!(step, Step::Entry(_));
        if positions == Positions::Changed && field.path.iter().any(in_list) {
            continue;
        }
        let value = serde_json::from_str::<Value>(&field.value);
        if let (Ok(value), Some(map)) = (value, group_at(root, &field.path))
            && !map.contains_key(&field.name)
        {
            let _ = map.insert(field.name.clone(), value);
        }
    }
}

fn group_at<'a>(root: &'a mut Value, path: &[Step]) -> Option<&'a mut Map<String, Value>> {
    let place = path.iter().try_fold(root, |place, step| match step {
        Step::Field(name) => place.get_mut(name),
        Step::Entry(at) => place.get_mut(*at),
    })?;
    // A preparation step without numbers is written as its name alone; to hold a field it must
    // be spelt out.
    let step = |step: &Step| *step == Step::Field("steps".to_owned());
    if let Value::String(name) = place
        && path.iter().any(step)
    {
        let name = std::mem::take(name);
        let mut map = Map::new();
        let _ = map.insert("step".to_owned(), Value::String(name));
        *place = Value::Object(map);
    }
    place.as_object_mut()
}
