//! A short list of plain values that can be copied, kept in a state and sent on a wire.

use core::fmt;
use core::marker::PhantomData;
use serde::de::{Error as _, SeqAccess, Visitor};
use serde::{Deserialize, Deserializer, Serialize, Serializer};

/// Up to `N` plain values in order, oldest first. Unlike a vector it is `Copy`, so a state that
/// holds one stays plain data.
#[derive(Clone, Copy)]
pub struct FixedList<T, const N: usize> {
    items: [T; N],
    len: usize,
}

/// The list holds as many values as it can.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Full {
    /// How many that is.
    pub capacity: usize,
}

impl fmt::Display for Full {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "the list is full: it holds at most {} values", self.capacity)
    }
}

impl core::error::Error for Full {}

impl<T: Copy + Default, const N: usize> Default for FixedList<T, N> {
    fn default() -> Self {
        Self { items: [T::default(); N], len: 0 }
    }
}

impl<T: Copy + Default, const N: usize> FixedList<T, N> {
    /// The values of a slice.
    ///
    /// # Errors
    /// [`Full`] when there are more than `N`.
    pub fn from_slice(values: &[T]) -> Result<Self, Full> {
        let mut list = Self::default();
        for value in values {
            list.push(*value)?;
        }
        Ok(list)
    }

    /// The values, oldest first.
    #[must_use]
    pub fn as_slice(&self) -> &[T] {
        self.items.get(..self.len).unwrap_or(&[])
    }

    /// The newest value, to change it.
    pub fn last_mut(&mut self) -> Option<&mut T> {
        self.items.get_mut(..self.len)?.last_mut()
    }

    /// Adds a value at the end.
    ///
    /// # Errors
    /// [`Full`] when the list already holds `N`.
    pub fn push(&mut self, value: T) -> Result<(), Full> {
        let slot = self.items.get_mut(self.len).ok_or(Full { capacity: N })?;
        *slot = value;
        self.len = self.len.saturating_add(1);
        Ok(())
    }

    /// Adds a value at the end; a full list drops its oldest.
    pub fn push_dropping_oldest(&mut self, value: T) {
        if self.push(value).is_err() {
            self.drop_oldest();
            // There is room now unless N is 0, where nothing can be kept.
            let _ = self.push(value);
        }
    }

    /// Drops the oldest value.
    pub fn drop_oldest(&mut self) {
        if let Some(held) = self.items.get_mut(..self.len)
            && !held.is_empty()
        {
            held.rotate_left(1);
            self.len = self.len.saturating_sub(1);
        }
    }
}

impl<T: Copy + Default + fmt::Debug, const N: usize> fmt::Debug for FixedList<T, N> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_list().entries(self.as_slice()).finish()
    }
}

impl<T: Copy + Default + PartialEq, const N: usize> PartialEq for FixedList<T, N> {
    fn eq(&self, other: &Self) -> bool {
        self.as_slice() == other.as_slice()
    }
}

impl<T: Copy + Default + Serialize, const N: usize> Serialize for FixedList<T, N> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.as_slice())
    }
}

struct ListVisitor<T, const N: usize>(PhantomData<T>);

impl<'de, T: Copy + Default + Deserialize<'de>, const N: usize> Visitor<'de> for ListVisitor<T, N> {
    type Value = FixedList<T, N>;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "at most {N} values")
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut seq: A) -> Result<Self::Value, A::Error> {
        let mut list = FixedList::default();
        while let Some(value) = seq.next_element()? {
            list.push(value).map_err(|full| A::Error::invalid_length(full.capacity, &self))?;
        }
        Ok(list)
    }
}

impl<'de, T: Copy + Default + Deserialize<'de>, const N: usize> Deserialize<'de>
    for FixedList<T, N>
{
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_seq(ListVisitor(PhantomData))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_full_list_refuses_or_drops_its_oldest_as_asked() {
        let mut list = FixedList::<u8, 3>::from_slice(&[1, 2, 3]).unwrap();
        assert_eq!(list.push(4), Err(Full { capacity: 3 }));
        list.push_dropping_oldest(4);
        assert_eq!(list.as_slice(), [2, 3, 4]);
        list.drop_oldest();
        assert_eq!(list.as_slice(), [3, 4]);
        assert!(FixedList::<u8, 2>::from_slice(&[1, 2, 3]).is_err());
    }

    #[test]
    fn equality_looks_at_the_held_values_only() {
        let mut list = FixedList::<u8, 3>::from_slice(&[9, 1]).unwrap();
        list.drop_oldest();
        assert_eq!(list, FixedList::from_slice(&[1]).unwrap());
    }

    #[test]
    fn a_list_without_room_keeps_nothing_and_does_not_fail() {
        let mut list = FixedList::<u8, 0>::default();
        list.push_dropping_oldest(1);
        assert!(list.as_slice().is_empty());
    }

    #[test]
    fn json_that_is_too_long_is_refused() {
        let list: FixedList<f64, 2> = serde_json_core::from_str("[1.5,2.5]").unwrap().0;
        assert_eq!(list.as_slice(), [1.5, 2.5]);
        assert!(serde_json_core::from_str::<FixedList<f64, 2>>("[1.5,2.5,3.5]").is_err());
        let mut bytes = [0; 16];
        let len = serde_json_core::to_slice(&list, &mut bytes).unwrap();
        assert_eq!(&bytes[..len], b"[1.5,2.5]");
    }
}
