"""What is a number here, and what does a matrix of them do?"""

from trivector.fields.finite import ExtensionField, finite_field, finite_field_modulo
from trivector.fields.names import field_from_spec
from trivector.fields.number import NumberField, number_field
from trivector.fields.prime import PrimeField, prime_field
from trivector.fields.protocol import Field, Matrix, Reduction, Scalar
from trivector.fields.rationals import QQ, Rationals

__all__ = [
    "QQ",
    "ExtensionField",
    "Field",
    "Matrix",
    "NumberField",
    "PrimeField",
    "Rationals",
    "Reduction",
    "Scalar",
    "field_from_spec",
    "finite_field",
    "finite_field_modulo",
    "number_field",
    "prime_field",
]
