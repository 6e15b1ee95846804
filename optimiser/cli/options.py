"""Arguments and options that several commands share."""

from __future__ import annotations

from typing import Annotated

import typer

CaseName = Annotated[str, typer.Argument(metavar="CASE", help="A case file, or the name of a shipped case.")]
AsJson = Annotated[bool, typer.Option("--json", help="Print JSON to standard output and nothing else.")]
Sets = Annotated[
    list[str] | None,
    typer.Option("--set", metavar="PATH=VALUE", help="Change one value of the case; may be repeated."),
]
