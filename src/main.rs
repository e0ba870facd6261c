//! The program: arguments in, results out.

fn main() {}
