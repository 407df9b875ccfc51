//! Nothing of its own: the checks stand in `tests/`.
