"""Make the pictures of this folder again from `cases/`: python figures/rebuild.py."""

from __future__ import annotations

import sys
from pathlib import Path

HERE = Path(__file__).resolve().parent
PICTURES = {
    "deck-beam": ("section", "moment-curvature", "moment-rotation", "stress-stages"),
    "hybrid-girder": ("moment-curvature", "stress-stages"),
    "plated-girder": ("moment-curvature", "stress-stages"),
    "deck-three-supports": ("beam", "ladder", "hinges"),
    "deck-fins-left-out": ("beam",),
}


def main(target: Path = HERE) -> None:
    """Write the pictures as PNG into a folder, this one by default."""
    from fibremr import justify, read_case, trace
    from fibremr.figures import save

    for case, names in PICTURES.items():
        read = read_case(HERE.parent / "cases" / f"{case}.toml")
        result = trace(read) if read.beam is None else justify(read)
        folder = target / case
        folder.mkdir(parents=True, exist_ok=True)
        for name in names:
            save(result.figure(name), folder / f"{name}.png")


if __name__ == "__main__":
    main(*(Path(a) for a in sys.argv[1:2]))
