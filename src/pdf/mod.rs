//! Finished pages in, PDF bytes out: the only place that knows points. It decides nothing.
