//! What moves the figure.

mod compare;
