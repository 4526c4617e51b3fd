"""Refuse a dependency under a licence that nobody has agreed to: reads the JSON of pip-licenses on standard input."""  # noqa: INP001 - a script

import json
import re
import sys
from typing import Final

# Permissive, or with a copyleft that ends at the file (MPL): they may be handed on beside a work under Apache-2.0.
ALLOWED: Final = {
    "0BSD",
    "Apache Software License",
    "Apache-2.0",
    "Apache-2.0 WITH LLVM-exception",
    "BSD License",
    "BSD-2-Clause",
    "BSD-3-Clause",
    "CC0-1.0",
    "ISC",
    "MIT",
    "MIT License",
    "MPL-2.0",
    "Mozilla Public License 2.0 (MPL 2.0)",
    "PSF-2.0",
    "Python Software Foundation License",
    "Zlib",
}
# Some packages tell the text in place of a name.
_MIT: Final = re.compile(
    r"Permission is hereby granted, free of charge, to any person obtaining a copy\s+of this software"
)


def is_allowed(licence: str) -> bool:
    """Tell whether a licence may be used: one side of each choice, and every part that holds beside others.

    Parameters
    ----------
    licence
        Name, SPDX expression without brackets, names with semicolons between them, or the licence's text.

    Returns
    -------
    bool
        Whether it may.
    """
    if _MIT.search(licence):
        return True
    together = re.split(r" AND |;", licence)
    return all(any(choice.strip() in ALLOWED for choice in part.split(" OR ")) for part in together)


def main() -> int:
    """Name each package whose licence is not allowed; give the exit code."""
    packages = json.load(sys.stdin)
    refused = {package["Name"]: package["License"] for package in packages if not is_allowed(package["License"])}
    for name, licence in refused.items():
        sys.stderr.write(f"{name}: {licence}\n")
    if not packages:
        sys.stderr.write("no package at all\n")
    return 1 if refused or not packages else 0


if __name__ == "__main__":
    sys.exit(main())
