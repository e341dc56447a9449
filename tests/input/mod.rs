//! Reading recordings, against values decoded by others.

mod csv;
mod edf;
mod export;
mod hostile;
mod leads;
mod marks;
mod refused;
mod segments;
mod wfdb;
