"""A certificate that was checked again, for people at a terminal."""

from typing import Any

from rich.console import Group, RenderableType

from trivector.reports.blocks import block

__all__ = ["recheck_report"]


def recheck_report(found: dict[str, Any]) -> RenderableType:
    """The answer of ``recheck --json``, claim by claim.

    Returns
    -------
    RenderableType
        For ``rich.console.Console.print``.
    """
    verdicts = [
        (claim["claim"], f"{'holds' if claim['holds'] else 'FAILS'}: {claim['words']}")
        for claim in found["claims"]
    ]
    blocks = [*block("claims", f"over {_field_name(found['field'])}", verdicts)]
    if found["uncertified"]:
        blocks += block(
            "not claimed",
            "answered, but not part of the certificate",
            (("", reason) for reason in found["uncertified"]),
        )
    summary = "every claim holds" if found["holds"] else "not every claim holds"
    blocks += block("certificate", summary, [("SHA-256", found["sha256"])])
    return Group(*blocks)


def _field_name(definition: dict[str, Any]) -> str:
    characteristic = definition.get("characteristic", 0)
    modulus = definition.get("modulus")
    base = f"F_{characteristic}" if characteristic else "Q"
    if modulus is None:
        return base
    return f"{base}(a), a a root of the polynomial with coefficients {modulus}"
