//! Reading recordings, against values decoded by others.

mod export;
mod leads;
mod wfdb;
