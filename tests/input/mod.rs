//! Reading recordings, against values decoded by others.

mod leads;
mod wfdb;
