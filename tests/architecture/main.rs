//! The rules of the house that a compiler does not know: which room may use which, what may stand
//! where, what the texts may say, and under which licences the dependencies come.

mod front_door;
mod licences;
mod rooms;
mod texts;
