//! Compares cases (and, later, odds, levers and edge maps).
