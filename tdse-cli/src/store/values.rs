//! The arrays a file can hold.

use ndarray::{Array, ArrayD, Dimension, Ix0, IxDyn};

use super::table::Kind;

/// An array of one of the three element types of the layout, in row-major order; a scalar has no dimension.
#[derive(Clone, Debug, PartialEq)]
pub enum Values {
    /// Double precision numbers.
    Real(ArrayD<f64>),
    /// Whole numbers.
    Integer(ArrayD<i64>),
    /// Texts in UTF-8.
    Text(ArrayD<String>),
}

impl Values {
    /// The element type.
    pub fn kind(&self) -> Kind {
        match self {
            Self::Real(_) => Kind::Real,
            Self::Integer(_) => Kind::Integer,
            Self::Text(_) => Kind::Text,
        }
    }

    /// The lengths of the dimensions.
    pub fn shape(&self) -> &[usize] {
        match self {
            Self::Real(array) => array.shape(),
            Self::Integer(array) => array.shape(),
            Self::Text(array) => array.shape(),
        }
    }

    /// The number of elements.
    pub(super) fn len(&self) -> usize {
        self.shape().iter().product()
    }

    /// Whether both are the same to the last bit, so that NaN equals itself.
    pub fn is_identical(&self, other: &Self) -> bool {
        match (self, other) {
            (Self::Real(a), Self::Real(b)) => {
                a.shape() == b.shape() && a.iter().zip(b).all(|(a, b)| a.to_bits() == b.to_bits())
            }
            _ => self == other,
        }
    }

    /// An array that says "nothing here": NaN, -1 or the empty text.
    pub(super) fn absent(kind: Kind, shape: &[usize]) -> Self {
        match kind {
            Kind::Real => Self::Real(ArrayD::from_elem(IxDyn(shape), f64::NAN)),
            Kind::Integer => Self::Integer(ArrayD::from_elem(IxDyn(shape), -1)),
            Kind::Text => Self::Text(ArrayD::from_elem(IxDyn(shape), String::new())),
        }
    }
}

macro_rules! values_from {
    ($($element:ty => $variant:ident),*) => {$(
        impl<D: Dimension> From<Array<$element, D>> for Values {
            fn from(array: Array<$element, D>) -> Self {
                Self::$variant(array.into_dyn().as_standard_layout().into_owned())
            }
        }
        impl From<Vec<$element>> for Values {
            fn from(list: Vec<$element>) -> Self {
                Array::from_vec(list).into()
            }
        }
        impl From<$element> for Values {
            fn from(scalar: $element) -> Self {
                Array::from_elem(Ix0(), scalar).into()
            }
        }
    )*};
}
values_from!(f64 => Real, i64 => Integer, String => Text);

impl From<&str> for Values {
    fn from(text: &str) -> Self {
        text.to_owned().into()
    }
}
