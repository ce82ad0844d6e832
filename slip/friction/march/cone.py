"""Second-order-cone programme of limit analysis in the plane, many small cases or one large one at a time.

Arrays hold the components first, then the points, then the cases: (2, n, cases), (n, cases), (cases,). Division by zero is left to
the caller's error state: it comes with the last digits, ends the case where it stands, and the caller judges by the gap.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Index = NDArray[np.int64]

# Tuning, held by tests on the gap, the number of iterations and the time.
GAP_SOUGHT = 1e-12  # relative; rounding sets in two or three digits further down
MOST_ITERATIONS = 60  # 9 to 20 are usual
TOWARDS_WALL = 0.99  # share of the way to the nearest bound that a step takes
START = 0.7, 1.5  # tractions and widths of the cones at the start, in parts of the largest elastic share
EPS = float(np.finfo(float).eps)


def largest_factor(b: Array, r: Array, force: Array, moment: Array) -> tuple[Array, Array, Array, Array, Index]:
    """Largest f with sum A't = f c and |t| <= 1: predictor and corrector along the central path, Nesterov-Todd scaling.

    b (n, cases) bounds, r (2, n, cases) positions, largest 1 each; the force acts along x, the moment about r = 0. A maps a motion to
    the slips s = b (v + w x r); c is the load. Each point holds two cone elements, (1, t) and (z, -s) with z > |s|. Both sides start
    feasible and stay so; f and sum |s| close in on the answer as the products z - t.s vanish. Returns t, s, w, f, iterations.
    """
    t, s, z, w = _start(b, r, force, moment)
    # Two motions without work on the load span all changes: a shift across the force (slips b along y), and a turn with the shift that
    # makes up for it.
    size = np.sqrt(force**2 + moment**2)
    turn = force / size
    mixed = b * np.array([-moment / size - turn * r[1], turn * r[0]])

    system: tuple[Array, ...] = b, mixed
    state: tuple[Array, ...] = t, s, z, np.zeros_like(force)
    ends = tuple(np.empty_like(a) for a in state)
    iterations, running = np.zeros(force.size, dtype=np.int64), np.arange(force.size)
    stuck = np.zeros(force.size, dtype=bool)
    for iteration in range(MOST_ITERATIONS + 1):
        t, s, z, _ = state
        speed = length(s)
        left = (speed - dot(t, s)).sum(0) > GAP_SOUGHT * speed.sum(0)
        done = ~left | stuck | (iteration == MOST_ITERATIONS)
        if done.any():
            for end, value in zip(ends, state, strict=True):
                end[..., running[done]] = value[..., done]
            iterations[running[done]] = iteration
            keep = np.flatnonzero(~done)
            if not keep.size:
                break
            running = running[keep]
            system, state = (tuple(np.take(a, keep, -1) for a in group) for group in (system, state))
        change, stride = _Newton(*system, *state[:3]).change()
        stuck = ~(stride > 0.0)
        if stuck.any():
            stride[stuck] = 0.0
            for a in change:
                a[..., stuck] = 0.0
        state = tuple(a + stride * da for a, da in zip(state, change, strict=True))
    t, s, z, turned_by = ends
    # The balance has gathered rounding: put it right where the scaling finds it cheapest, and stay within the bounds.
    t = _Newton(b, mixed, t, s, z).balanced(t)[0]
    t /= np.maximum(length(t).max(0), 1.0)
    push = b * t
    f = (force * push[0].sum(0) + moment * cross(r, push).sum(0)) / size**2
    return t, s, w + turn * turned_by, f, iterations


def _start(b: Array, r: Array, force: Array, moment: Array) -> tuple[Array, Array, Array, Array]:
    """The elastic answer, points as springs in proportion to their bounds: balanced tractions, and the motion at unit work."""
    total = b.sum(0)
    middle = (b * r).sum(1) / total
    arm = r - middle[:, None]
    moment = moment + middle[1] * force
    polar = (b * dot(arm, arm)).sum(0)
    work = force**2 / total + moment**2 / polar
    w = moment / polar / work
    v = np.array([force / total / work - w * arm[1], w * arm[0]])
    s = b * v
    return START[0] * v / length(v).max(0), s, np.broadcast_to(START[1] * length(s).max(0), b.shape).copy(), w


class _Newton:
    """Newton's equations of the central path at one iterate.

    With x = (1, t), y = (z, -s) and the scaling W that makes W^-1 x = W y, they ask W^-1 dx + W dy for the wanted change of the
    products, with dx = (0, dt), dy = (dz, -ds), ds the slips of a motion without work on the load, and sum A't kept along the load.
    All but the two parts p, q of the motion is eliminated.
    """

    def __init__(self, b: Array, mixed: Array, t: Array, s: Array, z: Array) -> None:
        self.b, self.mixed, self.t, self.s, self.z = b, mixed, t, s, z
        speed = length(s)
        self.product = z - dot(t, s)
        self.det_x = np.maximum(1.0 - dot(t, t), EPS)
        self.det_y = np.maximum(z - speed, EPS * z) * (z + speed)
        x_size, y_size = np.sqrt(self.det_x), np.sqrt(self.det_y)
        cosine = np.maximum(self.product / (x_size * y_size), 1.0)
        # W stretches by w = (w0, w): across w a point is stiffer than along it, by the factor `spread`.
        self.w = (t / x_size + s / y_size) / np.sqrt(2.0 + 2.0 * cosine)
        square = dot(self.w, self.w)
        self.w0, spread, scale = np.sqrt(1.0 + square), 1.0 + 2.0 * square, x_size / y_size
        self.soft, self.give = scale / spread, 1.0 / (scale * spread)
        self.pull = 2.0 * self.w0 / spread * self.w

        side, mixed_side = b * self.w[0], cross(self.w, mixed)
        self.h11 = (self.soft * (b * b + 2.0 * side * side)).sum(0)
        self.h12 = (self.soft * (b * mixed[1] + 2.0 * side * mixed_side)).sum(0)
        self.h22 = (self.soft * (dot(mixed, mixed) + 2.0 * mixed_side * mixed_side)).sum(0)
        self.det_h = self.h11 * self.h22 - self.h12 * self.h12

    def change(self) -> tuple[tuple[Array, Array, Array, Array], Array]:
        """Corrected step (dt, ds, dz, q), and the share of it that may be taken."""
        ahead = self.step(self.pull, -1.0)
        centring = (1.0 - np.minimum(self.room(*ahead[:3]), 1.0)) ** 2
        change = self.step(*self.target(centring, ahead[0]))
        return change, np.minimum(TOWARDS_WALL * self.room(*change[:3]), 1.0)

    def balanced(self, goal: Array) -> tuple[Array, Array, Array]:
        """Tractions in balance with the load, nearest to `goal` in the scaling; the slips that lead to them, and their part q."""
        across, mixed = (self.b * goal[1]).sum(0), dot(self.mixed, goal).sum(0)
        p = (self.h12 * mixed - self.h22 * across) / self.det_h
        q = (self.h12 * across - self.h11 * mixed) / self.det_h
        ds = q * self.mixed
        ds[1] += p * self.b
        side = 2.0 * cross(self.w, ds)
        return goal + self.soft * (ds + side * np.array([-self.w[1], self.w[0]])), ds, q

    def step(self, goal: Array, first: Array | float) -> tuple[Array, Array, Array, Array]:
        """dt, ds, dz, q for tractions `goal` before slip, and `first` wanted of the cones' first part."""
        t, ds, q = self.balanced(goal)
        return t - self.t, ds, first * self.give + dot(self.pull, ds), q

    def target(self, centring: Array, dt: Array) -> tuple[Array, Array]:
        """Goal and first part that aim at `centring` times the mean product, less the second order (Mehrotra) of a predicted dt.

        The predictor holds u + v = -m for u = W^-1 dx, v = W dy, m = W^-1 x; its second order in the units of x is W (m \\ (u . v)).
        """
        m0, m = self._stretched(-self.w, 1.0, self.t)
        u0, u = self._stretched(-self.w, 0.0, dt)
        v0, v = -m0 - u0, -m - u
        p0, p = u0 * v0 + dot(u, v), u0 * v + v0 * u
        q0 = (m0 * p0 - dot(m, p)) / (m0 * m0 - dot(m, m))
        k0, k = self._stretched(self.w, q0, (p - q0 * m) / m0)
        wanted = centring * self.product.mean(0) / self.det_y
        first = wanted * self.z - 1.0 - k0
        return wanted * self.s - k - first * self.pull, first

    def _stretched(self, w: Array, first: Array | float, rest: Array) -> tuple[Array, Array]:
        """W, or its inverse with -w, on (first, rest), but for a size that cancels in `target`."""
        along = dot(w, rest)
        return self.w0 * first + along, rest + (first + along / (1.0 + self.w0)) * w

    def room(self, dt: Array, ds: Array, dz: Array) -> Array:
        """Length in steps that keeps all cone elements from their walls; never too long."""
        product = dot(self.t, dt)
        x_rate = product + np.sqrt(product * product + dot(dt, dt) * self.det_x)
        product = dot(self.s, ds) - self.z * dz
        y_rate = product + np.sqrt(np.maximum(product * product + (dot(ds, ds) - dz * dz) * self.det_y, 0.0))
        return 1.0 / np.maximum((x_rate / self.det_x).max(0), (y_rate / self.det_y).max(0))


def dot(a: Array, b: Array) -> Array:
    """Scalar product over the two components."""
    return a[0] * b[0] + a[1] * b[1]


def cross(a: Array, b: Array) -> Array:
    """Component of the vector product along the normal."""
    return a[0] * b[1] - a[1] * b[0]


def length(a: Array) -> Array:
    """Length over the two components."""
    return np.sqrt(dot(a, a))


def turned(axis: Array, a: Array) -> Array:
    """a, given along and across the unit vector `axis`, in the axes in which that vector is given."""
    return np.array([axis[0] * a[0] - axis[1] * a[1], axis[1] * a[0] + axis[0] * a[1]])
