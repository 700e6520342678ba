"""Ranks a generated fleet with ironhum, compares with expected/, and times it beside the other engines.

Usage: check.py N [--time RUNS]      (run `cargo build --release` first; see README.md)
"""
import csv, json, os, pathlib, statistics, subprocess, sys, tempfile, time

HERE = pathlib.Path(__file__).resolve().parent
IRONHUM = HERE.parent.parent / "target" / "release" / "ironhum"
BASIS = """name = "peers"
currency = "EUR"
first_year = 2026
horizon_years = 30
discount_rate_pct = 5
cash_flow = "mid-year"
price_series = "hourly"
energy_escalation_pct = 2
load_growth_years = 20
capital_recovery = "full"
latest_replacement_years = 15
offer_sizes_down = 1
offer_sizes_up = 1
"""


def run(*args, **more):
    return subprocess.run([str(a) for a in args], check=True, **more)


def make_book(folder, n):
    data = HERE / "data"
    if not (data / f"fleet_{n}.csv").exists():
        run(sys.executable, HERE / "gen_fleet.py", n)
    book = folder / "peers.sqlite"
    rows = list(csv.DictReader(open(data / "hourly.csv")))
    classes = [c for c in rows[0] if c not in ("hour", "price_eur_mwh")]
    with open(folder / "profiles.csv", "w", newline="") as f:
        w = csv.writer(f)
        w.writerow(["interval", *classes])
        w.writerows([int(r["hour"]) + 1, *(r[c] for c in classes)] for r in rows)
    with open(folder / "prices.csv", "w", newline="") as f:
        w = csv.writer(f)
        w.writerow(["interval", "price_per_kwh"])
        w.writerows([int(r["hour"]) + 1, repr(float(r["price_eur_mwh"]) / 1000)] for r in rows)
    (folder / "basis.toml").write_text(BASIS)
    cli = lambda *a: run(IRONHUM, "--book", book, "import", *a)
    cli("profiles", folder / "profiles.csv")
    cli("prices", folder / "prices.csv", "--name", "hourly")
    cli("offers", data / "catalogue.csv", "--map", "item=offer", "--map", "price_eur=price", "--ignore-unknown")
    cli("basis", folder / "basis.toml")
    start = time.perf_counter()
    cli("units", data / f"fleet_{n}.csv", "--map", "growth_pct=load_growth_pct")
    print(f"import of {n} units: {time.perf_counter() - start:.2f} s")
    return book


def compare(book, n):
    out = run(IRONHUM, "--book", book, "rank", "--top", 100, "--format", "json", capture_output=True).stdout
    got = json.loads(out)
    passed = failed = 0

    def check(ok, what):
        nonlocal passed, failed
        passed, failed = passed + bool(ok), failed + (not ok)
        if not ok:
            print("differs:", what)

    near = lambda a, b: abs(a - b) <= 1e-9 * max(abs(a), abs(b))
    want = list(csv.DictReader(open(HERE / "expected" / f"top100_{n}.csv")))
    check(len(got["units"]) == len(want), "number of rows")
    for g, w in zip(got["units"], want):
        never = w["best_year"] == "-1"
        check(g["unit"] == w["unit"], f"order at {w['unit']}")
        check(g["now_offer"] == w["now_item"], f"{w['unit']} now")
        check(g["best_offer"] == (None if never else w["best_item"]), f"{w['unit']} offer")
        check(g["best_year_offset"] == (None if never else int(w["best_year"])), f"{w['unit']} year")
        for ours, theirs in (("keep_pv", "keep_pv"), ("now_pv", "now_pv"), ("best_pv", "best_pv"), ("saving_pv", "saving")):
            check(near(g[ours], float(w[theirs])), f"{w['unit']} {ours} {g[ours]} {w[theirs]}")
    totals = json.load(open(HERE / "expected" / f"totals_{n}.json"))
    ours = got["totals"]
    check(ours["units"] == totals["units"], "units")
    check(ours["units_saving"] == totals["units_saving"], "units_saving")
    for a, b in (("keep_pv", "keep_pv"), ("best_pv", "best_pv"), ("saving_pv", "positive_saving")):
        check(near(ours[a], totals[b]), f"total {a} {ours[a]} {totals[b]}")
    print(f"{passed} passed, {failed} failed")
    return failed == 0


def seconds(command, cwd=None):
    start = time.perf_counter()
    run(*command, cwd=cwd, stdout=subprocess.DEVNULL)
    return time.perf_counter() - start


def main():
    n = int(sys.argv[1])
    with tempfile.TemporaryDirectory() as folder:
        book = make_book(pathlib.Path(folder), n)
        good = compare(book, n)
        if "--time" in sys.argv:
            runs = int(sys.argv[sys.argv.index("--time") + 1])
            commands = {"ironhum": [IRONHUM, "--book", book, "rank", "--top", "100", "--format", "json"]}
            commands |= {e: [sys.executable, HERE / f"fleet_{e}.py", n] for e in ("numba", "numpy", "polars", "duckdb")}
            times = {name: [] for name in commands}
            for name, command in commands.items():  # warm: page cache, compiled code
                seconds(command, HERE)
            for _ in range(runs):
                for name, command in commands.items():
                    times[name].append(seconds(command, HERE))
            own = statistics.median(times["ironhum"])
            for name, t in times.items():
                m = statistics.median(t)
                print(f"{name:8} {m:6.3f} s  {m / own:5.2f} x ironhum   (least {min(t):.3f})")
    sys.exit(0 if good else 1)


main()
