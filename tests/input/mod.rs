//! Reading recordings, against values decoded by others.

mod csv;
mod edf;
mod export;
mod hostile;
mod ishne;
mod leads;
mod marks;
mod refused;
mod segments;
mod wfdb;
