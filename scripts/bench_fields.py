"""The field solution against a general finite-element solution (scikit-fem) of the same axisymmetric problem.

Pad alone under a grounded finger disc on one layer, air elsewhere; the charge of the pad follows from the field's energy.
"""

import statistics
import time
import warnings

import numpy as np

EPS0 = 8.8541878188e-12
RADIUS, THICKNESS, PERMITTIVITY = 4e-3, 2e-3, 7.0


def ours(tolerance=1e-5):
    """Pair capacitance of pad and finger by the project's solver [F]."""
    from stackdb.fields.discs import solve
    from stackdb.fields.kernel import FieldLayer

    found = solve(
        cover=[FieldLayer(THICKNESS, PERMITTIVITY)],
        pad_diameter_m=2 * RADIUS,
        finger_diameter_m=2 * RADIUS,
        around="alone",
        tolerance=tolerance,
    )
    return found.pair_farad


def _graded(edges, finest, growth, far):
    """Coordinates refined toward each edge, growing outwards."""
    points = {0.0, far}
    for edge in edges:
        step, at = finest, edge
        while at < far:
            points.add(at)
            at += step
            step *= growth
        step, at = finest, edge
        while at > 0:
            points.add(at)
            at -= step
            step *= growth
    ordered = sorted(points)
    kept = [ordered[0]]
    for p in ordered[1:]:
        if p - kept[-1] > 0.6 * finest:
            kept.append(p)
    return np.array(kept)


def finite_elements(finest=2.5e-5, growth=1.25, far=0.16):
    """The same capacitance by quadratic finite elements on a graded mesh [F]: antisymmetric about the middle of the layer."""
    from skfem import Basis, BilinearForm, ElementQuad2, MeshQuad, condense, solve

    r = _graded([RADIUS], finest, growth, far)
    # by symmetry only z above the middle plane, where the potential is 0; the disc stands at half the thickness
    z = _graded([0.5 * THICKNESS], finest, growth, far)
    mesh = MeshQuad.init_tensor(r, z)
    basis = Basis(mesh, ElementQuad2())

    @BilinearForm
    def energy(u, v, w):
        eps = np.where(w.x[1] < 0.5 * THICKNESS, PERMITTIVITY, 1.0)
        return eps * w.x[0] * (u.grad[0] * v.grad[0] + u.grad[1] * v.grad[1])

    matrix = energy.assemble(basis)
    x = basis.doflocs
    disc = np.nonzero((np.abs(x[1] - 0.5 * THICKNESS) < 1e-9) & (x[0] <= RADIUS + 1e-9))[0]
    ground = np.nonzero((np.abs(x[1]) < 1e-12) | (x[0] > far - 1e-9) | (x[1] > far - 1e-9))[0]
    potential = np.zeros(basis.N)
    potential[disc] = 1.0
    solved = solve(*condense(matrix, x=potential, D=np.union1d(disc, ground)))
    # energy 1/2 C V^2 per half; two halves in series between the discs
    half = 2.0 * np.pi * EPS0 * float(solved @ (matrix @ solved))
    return 0.5 * half


def field_vs_fem(rounds=3):
    """Time of a warm solve to 1e-5 over that of finite elements at 1e-3."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        fem = []
        for _ in range(rounds):
            start = time.perf_counter()
            reference = finite_elements()
            fem.append(time.perf_counter() - start)
    ours()
    times = []
    for _ in range(20):
        start = time.perf_counter()
        found = ours()
        times.append(time.perf_counter() - start)
    if abs(reference / found - 1.0) > 2e-3:
        raise AssertionError("the two solutions differ by %.2g" % (reference / found - 1.0))
    return statistics.median(times) / min(fem)


if __name__ == "__main__":
    print("field_vs_fem %.5f" % field_vs_fem())
    for finest in (1e-4, 5e-5, 2.5e-5):
        print(finest, finite_elements(finest) / ours() - 1.0)
