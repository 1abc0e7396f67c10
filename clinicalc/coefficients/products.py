"""The products that a term adds up, whichever of its two forms it has."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.coefficients.pointers import point
from clinicalc.coefficients.schema import Product, Term


def place_products(term: Term, base: str) -> Iterator[tuple[str, Product]]:
    """Each product of the term at the pointer `base` with its own pointer: its one `product`, or those of its `sum`."""
    if not isinstance(term.product, UnsetType):
        yield point(base, "product"), term.product
    if not isinstance(term.sum, UnsetType):
        for index, product in enumerate(term.sum):
            yield point(base, "sum", index), product


def products_of(term: Term) -> tuple[Product, ...]:
    """The products of the term, in file order."""
    return tuple(product for _, product in place_products(term, ""))
