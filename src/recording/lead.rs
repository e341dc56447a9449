//! The twelve leads and a table over them.

use std::fmt;
use std::ops::{Index, IndexMut};

/// One of the twelve standard leads.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
#[allow(missing_docs)]
pub enum Lead {
    I,
    II,
    III,
    AVR,
    AVL,
    AVF,
    V1,
    V2,
    V3,
    V4,
    V5,
    V6,
}

impl Lead {
    /// All twelve, in standard order.
    pub const ALL: [Lead; 12] = [
        Lead::I,
        Lead::II,
        Lead::III,
        Lead::AVR,
        Lead::AVL,
        Lead::AVF,
        Lead::V1,
        Lead::V2,
        Lead::V3,
        Lead::V4,
        Lead::V5,
        Lead::V6,
    ];

    /// The eight leads that carry independent information.
    pub const INDEPENDENT: [Lead; 8] =
        [Lead::I, Lead::II, Lead::V1, Lead::V2, Lead::V3, Lead::V4, Lead::V5, Lead::V6];

    /// As printed: I II III aVR aVL aVF V1 … V6.
    pub const fn name(self) -> &'static str {
        match self {
            Lead::I => "I",
            Lead::II => "II",
            Lead::III => "III",
            Lead::AVR => "aVR",
            Lead::AVL => "aVL",
            Lead::AVF => "aVF",
            Lead::V1 => "V1",
            Lead::V2 => "V2",
            Lead::V3 => "V3",
            Lead::V4 => "V4",
            Lead::V5 => "V5",
            Lead::V6 => "V6",
        }
    }

    /// Whether it is one of the six frontal leads.
    pub const fn is_limb(self) -> bool {
        (self as usize) < 6
    }
}

impl fmt::Display for Lead {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.pad(self.name())
    }
}

/// One value for each of the twelve leads.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct PerLead<T>([T; 12]);

impl<T> PerLead<T> {
    /// Asks `value` for each lead, in standard order.
    pub fn from_fn(value: impl FnMut(Lead) -> T) -> Self {
        Self(Lead::ALL.map(value))
    }

    /// In standard order.
    pub fn iter(&self) -> impl Iterator<Item = (Lead, &T)> {
        Lead::ALL.into_iter().zip(&self.0)
    }

    /// The values to change, in standard order.
    pub fn iter_mut(&mut self) -> impl Iterator<Item = &mut T> {
        self.0.iter_mut()
    }

    /// The same leads with other values.
    pub fn map<U>(&self, mut value: impl FnMut(Lead, &T) -> U) -> PerLead<U> {
        PerLead::from_fn(|lead| value(lead, &self[lead]))
    }
}

impl<T> Index<Lead> for PerLead<T> {
    type Output = T;
    fn index(&self, lead: Lead) -> &T {
        &self.0[lead as usize]
    }
}

impl<T> IndexMut<Lead> for PerLead<T> {
    fn index_mut(&mut self, lead: Lead) -> &mut T {
        &mut self.0[lead as usize]
    }
}
