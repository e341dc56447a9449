//! What the comment lines of a header say about the subject.

use crate::recording::{Age, AgeOrigin, Occasion, Sex, Subject};

/// Age and sex where a comment states them; every comment stays a remark.
pub(super) fn interpret(comments: &[String]) -> (Subject, Occasion) {
    let mut subject = Subject::default();
    for comment in comments {
        let Some((key, value)) = comment.split_once(':') else { continue };
        match key.trim_matches(['<', '>', ' ']).to_lowercase().as_str() {
            "age" => {
                subject.age = value
                    .trim()
                    .parse()
                    .ok()
                    .filter(|years| (0.0..=130.0).contains(years))
                    .map(|years| Age { years, origin: AgeOrigin::Stated });
            }
            "sex" => {
                subject.sex = match value.trim().to_lowercase().as_str() {
                    "m" | "male" => Some(Sex::Male),
                    "f" | "female" => Some(Sex::Female),
                    _ => None,
                };
            }
            _ => {}
        }
    }
    (subject, Occasion { remarks: comments.to_vec(), ..Occasion::default() })
}
