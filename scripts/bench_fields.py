"""The field solution against a general finite-element solution (scikit-fem) of the same axisymmetric problem.

A pad alone under a layered cover with a grounded finger disc on it, open space around: touched and untouched.
"""

import os
import statistics
import time
import warnings

# one thread for both sides: on small matrices more threads only wait for each other
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np

EPS0 = 8.8541878188e-12
PAD_M, FINGER_M = 4e-3, 4e-3
# cover from the electrode up: film, adhesive, glass (thickness in m, permittivity)
COVER = ((125e-6, 3.2), (150e-6, 3.5), (1.8e-3, 7.0))
FAR_M = 8.0


def ours(cover=COVER, pad_m=PAD_M, finger_m=FINGER_M, tolerance=1e-5):
    """Change of the pad's capacitance by the finger, by the project's solver [F]."""
    from stackdb.fields.discs import solve
    from stackdb.fields.kernel import FieldLayer

    return solve(
        cover=[FieldLayer(t, e) for t, e in reversed(cover)],
        pad_diameter_m=2 * pad_m,
        finger_diameter_m=2 * finger_m,
        around="alone",
        tolerance=tolerance,
    )


def _graded(edges, low, high, finest, growth):
    """Coordinates from low to high that hold every edge, finest beside each and growing away from it."""
    stops = sorted({low, high, *edges})
    points = [low]
    for a, b in zip(stops, stops[1:]):
        size = b - a
        left, right = a in edges, b in edges
        steps, at, step = [], 0.0, min(finest, size / 4)
        limit = size / 2 if left and right else size
        while at + step < limit:
            at += step
            steps.append(at)
            step *= growth
        inside = set()
        if left:
            inside |= {a + s for s in steps}
        if right:
            inside |= {b - s for s in steps}
        points += [p for p in sorted(inside) if p - points[-1] > 0.3 * finest and b - p > 0.3 * finest] + [b]
    return np.array(points)


def finite_elements(finest, *, cover=COVER, pad_m=PAD_M, finger_m=FINGER_M, growth=1.3, far=FAR_M):
    """The same change by quadratic finite elements on triangles [F]; the far boundary stands at ground."""
    from skfem import Basis, BilinearForm, ElementTriP2, MeshTri, condense, solve

    heights = np.cumsum([0.0] + [t for t, _ in cover])
    r = _graded({pad_m, finger_m}, 0.0, far, finest, growth)
    z = _graded(set(heights), -far, far, finest, growth)
    basis = Basis(MeshTri.init_tensor(r, z), ElementTriP2())

    @BilinearForm
    def energy(u, v, w):
        eps = np.ones_like(w.x[1])
        for bottom, (t, e) in zip(heights, cover):
            eps = np.where((w.x[1] > bottom) & (w.x[1] < bottom + t), e, eps)
        return eps * w.x[0] * (u.grad[0] * v.grad[0] + u.grad[1] * v.grad[1])

    matrix = energy.assemble(basis)
    x = basis.doflocs
    pad = np.nonzero((np.abs(x[1]) < 1e-12) & (x[0] <= pad_m * (1 + 1e-9)))[0]
    finger = np.nonzero((np.abs(x[1] - heights[-1]) < 1e-12) & (x[0] <= finger_m * (1 + 1e-9)))[0]
    ground = np.nonzero((x[0] > 0.999 * far) | (np.abs(x[1]) > 0.999 * far))[0]
    selves = []
    for held in (ground, np.union1d(ground, finger)):
        potential = np.zeros(basis.N)
        potential[pad] = 1.0
        solved = solve(*condense(matrix, x=potential, D=np.union1d(pad, held)))
        selves.append(2.0 * np.pi * EPS0 * float(solved @ (matrix @ solved)))
    return selves[1] - selves[0]


def at_tolerance(tolerance=1e-3):
    """Seconds that finite elements take at the coarsest mesh within the tolerance of a fine one, and its result [F]."""
    finest = 2e-4
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        reference = finite_elements(1e-5)
        while True:
            start = time.perf_counter()
            found = finite_elements(finest)
            seconds = time.perf_counter() - start
            if abs(found / reference - 1.0) <= tolerance:
                return seconds, found
            finest /= 2.0


def field_vs_fem():
    """Time of a warm solve to 1e-5 over that of finite elements at 1e-3."""
    seconds, reference = at_tolerance()
    change = ours().change_farad
    if abs(reference / change - 1.0) > 3e-3:
        raise AssertionError("the two solutions differ by %.2g" % (reference / change - 1.0))
    times = []
    for _ in range(20):
        start = time.perf_counter()
        ours()
        times.append(time.perf_counter() - start)
    return statistics.median(times) / seconds


if __name__ == "__main__":
    for size in (1e-4, 5e-5, 2e-5, 1e-5):
        began = time.perf_counter()
        print(
            "finest %g m: off by %.2e, %.2f s"
            % (size, finite_elements(size) / ours().change_farad - 1.0, time.perf_counter() - began)
        )
    began = time.perf_counter()
    ours()
    print("one warm solve %.2f ms" % (1e3 * (time.perf_counter() - began)))
    print("field_vs_fem %.5f" % field_vs_fem())
