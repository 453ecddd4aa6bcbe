"""Days and figures over days of a record, by pandas: a second way to the same numbers.

    series.py record              prints a made-up season as a station's file
    series.py figures RECORD.csv  prints the figures of its days as CSV

The record is seeded: half-hourly, with readings missing at random, whole days missing, hours of
five-minute bursts, oxygen missing for two days, and the clock set back on 1 November. Its file
tells the clock change in a comment; here its clock is brought back by the time zone data that
pandas uses, not by that comment.

It is run by hand, in this folder and an environment that holds pandas; what it prints is kept:

    python series.py record > ../data/series_record.csv
    python series.py figures ../data/series_record.csv > ../data/series_pandas.csv
"""

import math
import random
import sys

import pandas as pd

ZONE = "America/Los_Angeles"  # standard time is UTC-8, as of the site of the test
STANDARD = "Etc/GMT+8"
HIGH, LOW_OXYGEN, BASE = 14.0, 8.4, 4.0


def record():
    """A season from 12 August to 20 November 2026, by the clock of the place."""
    draw = random.Random(20260812)
    times = pd.date_range("2026-08-12", "2026-11-21", freq="30min", tz=STANDARD, inclusive="left")
    print("# invented: a season of a river that never was")
    print("# data: provisional")
    print("# daylight: 2026-03-08 2026-11-01")
    print("time,temperature_C,oxygen_mg_l")
    drift = 0.0
    for time in times:
        day = time.day_of_year - 224
        drift = 0.98 * drift + draw.gauss(0.0, 0.12)
        hour = time.hour + time.minute / 60
        season = 14.5 - 0.09 * max(0, day - 25)
        value = season + 1.3 * math.sin(math.tau * (hour - 10) / 24) + drift
        oxygen = 13.6 - 0.36 * value + 0.3 * math.sin(math.tau * (hour - 9) / 24)
        if day in (17, 18, 40, 41, 42, 63) or draw.random() < 0.02:
            continue
        if day in (30, 52) and hour >= 21.5 or day == 75 and hour < 4:
            continue
        offsets = range(0, 30, 5) if day in (10, 60) and 13 <= hour < 15 else (0,)
        for minutes in offsets:
            local = (time + pd.Timedelta(minutes=minutes)).tz_convert(ZONE)
            cells = f"{value + 0.02 * minutes:.2f}", "" if day in (33, 34) else f"{oxygen:.2f}"
            print(local.strftime("%Y-%m-%d %H:%M"), *cells, sep=",")


def days(series, hours=22):
    """Means, maxima, minima and greatest hourly change of the valid days, others absent."""
    means = series.resample("h").mean()
    change = means.diff().abs().resample("D").max()
    count = means.notna().resample("D").sum()
    out = pd.DataFrame(
        {
            "mean": means.resample("D").mean(),
            "max": series.resample("D").max(),
            "min": series.resample("D").min(),
            "change": change,
        }
    )
    return out.where(count >= hours)


def figures(path):
    read = pd.read_csv(path, comment="#")
    clock = pd.to_datetime(read["time"]).dt.tz_localize(ZONE, ambiguous="infer")
    read.index = pd.DatetimeIndex(clock).tz_convert(STANDARD)
    water = days(read["temperature_C"])
    oxygen = days(read["oxygen_mg_l"].dropna()).reindex(water.index)
    above = (water["max"] > HIGH).where(water["max"].notna())
    # a row ends at a day that is cool and at one that is not valid
    hot = above.eq(True)
    row = hot.astype(int).groupby((~hot).cumsum()).cumsum()
    degree = (water["mean"] - BASE).clip(lower=0).expanding()
    so_far = pd.Series(range(1, len(water) + 1), water.index)
    enough = water["mean"].notna().expanding().sum() * 7 >= so_far * 6
    out = pd.DataFrame(
        {
            "mean": water["mean"],
            "max": water["max"],
            "min": water["min"],
            "change": water["change"],
            "daily_change": water["mean"].diff().abs(),
            "7dadm": water["max"].rolling(7, min_periods=6).mean(),
            "mean_3": water["mean"].rolling(3, min_periods=3).mean(),
            "mean_14": water["mean"].rolling(14, min_periods=12).mean(),
            "row_above": row.where(above.notna()),
            "days_above": above.expanding().sum(),
            "degree_days": (degree.mean() * so_far).where(enough),
            "oxygen_mean": oxygen["mean"],
            "oxygen_min": oxygen["min"],
            "oxygen_7dmin": oxygen["min"].rolling(7, min_periods=6).mean(),
        }
    )
    outside = (water["max"] - HIGH).clip(lower=0)
    runs = hot.astype(int).groupby((~hot).cumsum()).sum()
    short = (LOW_OXYGEN - oxygen["mean"]).clip(lower=0)
    print(f"# pandas {pd.__version__}, python {sys.version.split()[0]}: tests/peer/series.py on series_record.csv")
    print("# tolerance 1e-9 in every column: both add the same figures in other orders")
    print("# a cell is blank where the day, or too many of its days, are not valid; row_above and days_above")
    print(f"# count daily maxima above {HIGH:g} C; degree_days are above {BASE:g} C from the first day")
    print(f"# season: days over {int(hot.sum())}, longest run {int(runs.max())}, worst {outside.max():.10f} C,", end=" ")
    print(f"sum {outside.sum():.10f} C d, oxygen below {LOW_OXYGEN:g}: days {int((short > 0).sum())},", end=" ")
    print(f"worst {short.max():.10f} mg/L")
    months = hot.groupby(hot.index.strftime("%Y-%m")).sum()
    print("# months:", " ".join(f"{month} {int(count)}" for month, count in months.items()))
    out.index = out.index.strftime("%Y-%m-%d")
    out.to_csv(sys.stdout, index_label="date", float_format="%.12f", lineterminator="\n")


if __name__ == "__main__":
    if sys.argv[1:] == ["record"]:
        record()
    elif len(sys.argv) == 3 and sys.argv[1] == "figures":
        figures(sys.argv[2])
    else:
        sys.exit(__doc__)
