//! Faults for real: a program killed while it writes, disks that refuse, files that are not what they should be.

mod kill;
mod start;
