"""What is a number here, and what does a matrix of them do?"""

from trivector.fields.names import field_from_spec
from trivector.fields.prime import PrimeField, prime_field
from trivector.fields.protocol import Field, Matrix, Reduction, Scalar
from trivector.fields.rationals import QQ, Rationals

__all__ = [
    "QQ",
    "Field",
    "Matrix",
    "PrimeField",
    "Rationals",
    "Reduction",
    "Scalar",
    "field_from_spec",
    "prime_field",
]
