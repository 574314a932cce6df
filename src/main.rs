//! The command line of assize.

fn main() {}
