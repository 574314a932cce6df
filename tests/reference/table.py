"""Writes a table with its header: what it is, where it comes from, how near a reader may expect to come."""

import csv
import pathlib

HERE = pathlib.Path(__file__).parent
DATE = "2026-12-01"


def write(name, title, remarks, rows, made_by=None):
    script = made_by or name.replace(".csv", ".py")
    with open(HERE / name, "w", newline="\n", encoding="utf-8") as out:
        print(f"# {title}", file=out)
        print(f"# Made by {script} on {DATE}; never edited by hand.", file=out)
        for remark in remarks:
            print(f"# {remark}", file=out)
        table = csv.DictWriter(out, fieldnames=list(rows[0]), lineterminator="\n")
        table.writeheader()
        table.writerows(rows)
    print(f"{name}: {len(rows)} rows")
