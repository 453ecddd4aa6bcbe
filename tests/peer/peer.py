"""Reads one case, prints zones, releases and the time of one mix as JSON.

    peer.py CASE.json

    { "bed": m, "surface": m, "samples": [[elevation m, degC, mg/L], ...],
      (a sample may carry dissolved solids, mg/L, as its fourth number)
      "levels": [{ "centre": m, "angle_deg": 180, "flow": m3/s }, ...], "repeat": mixes }

The time is the best of several loops of `repeat` mixes. The column is made ready once,
outside the loops: what is timed is the zones, the releases and their blend.
"""

import json
import sys
from math import radians
from timeit import repeat

from column import Column
from withdrawal import Sink, mix

LOOPS = 7


def answer(case):
    """The result of one case as a dictionary ready for JSON."""
    column = Column(case["bed"], case["surface"], case["samples"])
    sinks = [
        Sink(level["centre"], level["flow"], radians(level.get("angle_deg", 180.0)))
        for level in case["levels"]
    ]
    drawn, temperature, oxygen = mix(column, sinks)
    number = int(case.get("repeat", 1))
    best = min(repeat(lambda: mix(column, sinks), number=number, repeat=LOOPS))
    return {
        "levels": [
            {
                "lower": one.zone.lower.limit,
                "upper": one.zone.upper.limit,
                "peak": one.zone.peak,
                "temperature": one.temperature,
                "oxygen": one.oxygen,
                "qb_up": one.zone.upper.boundary_flow,
                "qb_down": one.zone.lower.boundary_flow,
            }
            for one in drawn
        ],
        "temperature": temperature,
        "oxygen": oxygen,
        "seconds_per_mix": best / number,
    }


def main():
    if len(sys.argv) != 2:
        sys.exit("usage: peer.py CASE.json")
    with open(sys.argv[1], encoding="utf-8") as file:
        case = json.load(file)
    json.dump(answer(case), sys.stdout, indent=1)
    print()


if __name__ == "__main__":
    main()
