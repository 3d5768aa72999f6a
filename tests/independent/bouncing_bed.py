"""Event-driven simulation of a body that bounces on a sinusoidal base, in SI. Shares no code with the package.

Between events the body falls freely. An event is a meeting with the base, found by small steps and bisection on the two
positions. An inelastic body rides until the base falls faster than it can; a body with restitution rebounds.
"""

import math
from dataclasses import dataclass


@dataclass
class Landing:
    took_off: float
    landed: float
    closing_speed: float
    largest_gap: float


@dataclass
class Bounce:
    speed_after: float
    height_over_base: float


class Base:
    def __init__(self, amplitude, frequency):
        self.amplitude, self.omega = amplitude, 2.0 * math.pi * frequency

    def position(self, t):
        return self.amplitude * math.sin(self.omega * t)

    def velocity(self, t):
        return self.amplitude * self.omega * math.cos(self.omega * t)

    def acceleration(self, t):
        return -self.amplitude * self.omega**2 * math.sin(self.omega * t)


def _meeting(base, t0, x0, v0, gravity, step):
    """Return the time at which a body thrown at t0 meets the base again, and the largest gap until then."""
    largest, t = 0.0, t0

    def gap(at):
        s = at - t0
        return x0 + v0 * s - 0.5 * gravity * s * s - base.position(at)

    while True:
        t += step
        now = gap(t)
        if now < 0.0:
            low, high = t - step, t
            for _ in range(60):
                middle = 0.5 * (low + high)
                if gap(middle) < 0.0:
                    high = middle
                else:
                    low = middle
            return low, largest
        largest = max(largest, now)


def inelastic_landings(amplitude, frequency, *, gravity, periods, steps=4000):
    """Return the landings of a completely inelastic body over a number of periods."""
    base, step = Base(amplitude, frequency), 1.0 / (frequency * steps)
    t, end, found = 0.0, periods / frequency, []
    while t < end:
        while base.acceleration(t) > -gravity:  # it rides
            t += step
            if t >= end:
                return found
        low, high = t - step, t
        if base.acceleration(low) > -gravity:
            for _ in range(60):
                middle = 0.5 * (low + high)
                if base.acceleration(middle) > -gravity:
                    low = middle
                else:
                    high = middle
            t = high
        v = base.velocity(t)
        landed, gap = _meeting(base, t, base.position(t), v, gravity, step)
        closing = base.velocity(landed) - (v - gravity * (landed - t))
        found.append(Landing(t, landed, closing, gap))
        t = landed
    return found


def grain_bounces(amplitude, frequency, restitution, *, gravity, drop, bounces, steps=2000):
    """Return the bounces of a grain with restitution that is dropped on the base."""
    base, step = Base(amplitude, frequency), 1.0 / (frequency * steps)
    t, x, v, found = 0.0, base.position(0.0) + drop, 0.0, []
    for _ in range(bounces):
        landed, gap = _meeting(base, t, x, v, gravity, step)
        speed = v - gravity * (landed - t)
        t, x = landed, base.position(landed)
        v = base.velocity(t) + restitution * (base.velocity(t) - speed)
        found.append(Bounce(v, gap))
        if v - base.velocity(t) < 1e-3 * abs(base.omega * amplitude):
            break  # it has come to rest on the base
    return found


def grain_over_vessel(amplitude, frequency, restitution, *, gravity, drop, periods, steps=4000):
    """Return how high a grain that bounces on a flying inelastic bed comes over the bed's place at rest in its vessel.

    The surface is that of the bed, on its base or in flight; time steps of one `steps`-th of a period. The fall from `drop`
    itself does not count.
    """
    base, step = Base(amplitude, frequency), 1.0 / (frequency * steps)
    surface, speed, riding = base.position(0.0), base.velocity(0.0), True
    x, v, thrown, highest = surface + drop, 0.0, False, 0.0
    for i in range(1, int(periods * steps)):
        t = i * step
        if riding and base.acceleration(t) <= -gravity:
            riding = False  # thrown with the base's speed
        if riding:
            surface, speed = base.position(t), base.velocity(t)
        else:
            surface, speed = surface + speed * step - 0.5 * gravity * step * step, speed - gravity * step
            if surface <= base.position(t) and speed < base.velocity(t):
                surface, speed, riding = base.position(t), base.velocity(t), True
        x, v = x + v * step - 0.5 * gravity * step * step, v - gravity * step
        if x <= surface:
            thrown = True
            x = surface
            if v < speed:
                v = speed + restitution * (speed - v)
        if thrown:
            highest = max(highest, x - base.position(t))
    return highest
