"""Make the sample's plans anew: `python sample_builds/two_seater/make_plans.py [FOLDER]`.

Each layout becomes the plan folder of its iteration in FOLDER, or in plans/ beside this file, whose
r0, r1 and r2 are to be removed first: nothing is ever written over.
"""

from __future__ import annotations

import sys
from pathlib import Path

from ledger.operations.loft_wing import loft_wing

HERE = Path(__file__).parent
LAYOUT_OF = {"r0": "single_spar.toml", "r1": "grid.toml", "r2": "grid_web_aft.toml"}


def make_plans(folder: Path) -> None:
    """Loft r0, r1 and r2 into `folder`."""
    folder.mkdir(parents=True, exist_ok=True)
    for name, layout in LAYOUT_OF.items():
        loft_wing(HERE / "layouts" / layout, folder / name)


if __name__ == "__main__":
    make_plans(Path(sys.argv[1]) if len(sys.argv) > 1 else HERE / "plans")
