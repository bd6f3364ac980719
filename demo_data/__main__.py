"""`python -m demo_data`: write the packaged CSV files of the invented fleet anew."""

from __future__ import annotations

from demo_data.files import csv_folder, write_csv

if __name__ == "__main__":
    for path in write_csv(csv_folder()):
        print(path.name)
