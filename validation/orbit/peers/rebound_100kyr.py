"""Compares a table of Orbicline, integrated with Newton's law alone, with rebound's WHFast.

Both start from the same constants. The Earth's k = e cos(varpi) and h = e sin(varpi) are taken
every 192 d, averaged over 100 years and smoothed with the same kernel, then compared every kyr.
Arguments: constants (TOML), table. Rebound: Rein & Tamayo 2015, MNRAS 452:376.
"""

import sys
import tomllib

import numpy
import rebound

STEP_D = 8.0
CENTURY_D = 36525.0
SAMPLES = 190
EARTH = 3
MARGIN = 20
OLDEST_KYR = 97
TOLERANCE = 5e-6


def own_rows(path):
    """Ages in kyr before 1950 and k, h of a table."""
    content = open(path, "rb").read()
    end = content.index(b"\nrows\n")
    notes = dict(
        line.split(" = ", 1) for line in content[:end].decode().splitlines() if " = " in line
    )
    rows = numpy.frombuffer(content[end + 6 :], dtype="<f8").reshape(-1, 4)
    first = int(notes["youngest_age_kyr_before_1950"])
    return first + numpy.arange(len(rows)), rows[:, :2]


def simulation(constants):
    """Sun and planets at J2000.0, backwards in time."""
    sim = rebound.Simulation()
    sim.G = 1.0
    sim.add(m=constants["sun"]["gm_au3_d2"])
    for planet in constants["planet"]:
        x, y, z = planet["position_au"]
        vx, vy, vz = planet["velocity_au_d"]
        sim.add(m=planet["gm_au3_d2"], x=x, y=y, z=z, vx=vx, vy=vy, vz=vz)
    sim.move_to_com()
    sim.integrator = "whfast"
    sim.dt = -STEP_D
    sim.ri_whfast.corrector = 17
    sim.ri_whfast.safe_mode = 0
    sim.ri_whfast.keep_unsynchronized = 1
    return sim


def block_means(sim, blocks):
    """Means of k and h over 100 years, from J2000.0 into the past, all from exact times."""
    means = []
    for block in range(blocks):
        total = numpy.zeros(2)
        for sample in range(SAMPLES):
            days = -(block + (sample + 0.5) / SAMPLES) * CENTURY_D
            # To the nearest whole step: a step of another length would spoil the map.
            sim.integrate(round(days / STEP_D) * STEP_D, exact_finish_time=0)
            orbit = sim.particles[EARTH].orbit(primary=sim.particles[0])
            total += orbit.e * numpy.array([numpy.cos(orbit.pomega), numpy.sin(orbit.pomega)])
        means.append(total / SAMPLES)
    return numpy.array(means)


def smooth(means):
    """The kernel 2H - H*H with a Hann window of 21 blocks."""
    j = numpy.arange(-10, 11)
    hann = (1 + numpy.cos(2 * numpy.pi * j / 21)) / 21
    kernel = -numpy.convolve(hann, hann)
    kernel[10:31] += 2 * hann
    columns = [numpy.convolve(column, kernel, mode="valid") for column in means.T]
    return numpy.array(columns).T


def main():
    constants = tomllib.load(open(sys.argv[1], "rb"))
    ages, own = own_rows(sys.argv[2])
    # Block c covers years 100 c to 100 (c+1) before J2000.0; an age stands at its centre.
    peer = smooth(block_means(simulation(constants), 10 * OLDEST_KYR + MARGIN + 1))
    differences = []
    for age in range(3, OLDEST_KYR + 1):
        own_row = own[numpy.searchsorted(ages, age)]
        peer_row = peer[10 * age - MARGIN]
        differences.append((numpy.hypot(*(own_row - peer_row)),
                            abs(numpy.hypot(*own_row) - numpy.hypot(*peer_row))))
    differences = numpy.array(differences)
    vector, size = differences.max(axis=0), numpy.sqrt((differences**2).mean(axis=0))
    print(f"e: largest difference {vector[1]:.2e}, rms {size[1]:.2e}")
    print(f"e exp(i varpi): largest difference {vector[0]:.2e}, rms {size[0]:.2e}")
    if vector.max() > TOLERANCE:
        sys.exit(f"differences above {TOLERANCE}")


if __name__ == "__main__":
    main()
