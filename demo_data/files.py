"""Where the CSV files of the invented fleet lie, and how they are written."""

from __future__ import annotations

import csv
from pathlib import Path

from demo_data.simulate import simulate

PACKAGED_SEED = 1


def csv_folder() -> Path:
    """The folder of the packaged CSV files, beside this module in an installed copy, too."""
    return Path(__file__).parent / "csv"


def write_csv(folder: Path, seed: int = PACKAGED_SEED) -> list[Path]:
    """Simulate the fleet and write one CSV file per kind of record.

    Parameters
    ----------
    folder : Path
        Made if it is not there; files of the same names are replaced.
    seed : int
        Seed of the simulation.

    Returns
    -------
    list of Path
        The files written.
    """
    folder.mkdir(parents=True, exist_ok=True)
    written = []
    for name, rows in simulate(seed).items():
        path = folder / name
        with path.open("w", encoding="utf-8", newline="") as stream:
            writer = csv.DictWriter(stream, fieldnames=list(rows[0]), lineterminator="\n")
            writer.writeheader()
            writer.writerows(rows)
        written.append(path)
    return written
