//! Many recordings: one outcome per input, in input order.
