"""Layered pads and fingers against an axisymmetric finite-element solution (scikit-fem), within its own error."""

import warnings
from typing import NamedTuple

import numpy as np
import pytest

from stackdb.fields.discs import solve
from stackdb.fields.kernel import FieldLayer

EPS0 = 8.8541878188e-12
FAR = 40.0  # the outer box [m]: a driven plane that ends at 0.4 m already changes the touch by 0.3 %


class Case(NamedTuple):
    cover: tuple  # touched side first
    below: tuple
    pad: float  # radius [m]
    finger: float
    around: str
    clearance: float
    ground_below: bool

    def ours(self):
        return solve(
            cover=self.cover,
            below=self.below,
            below_ending="ground" if self.ground_below else "open",
            pad_diameter_m=2 * self.pad,
            finger_diameter_m=2 * self.finger,
            around=self.around,
            clearance_m=self.clearance or None,
        )


def graded(edges, finest, growth, low, high):
    points = {low, high, *edges}
    for edge in edges:
        for sign in (-1.0, 1.0):
            step, at = finest, edge + sign * finest
            while low < at < high:
                if all(abs(at - edge) <= abs(at - other) for other in edges):
                    points.add(at)
                step *= growth
                at += sign * step
    kept = [low]
    for p in sorted(points)[1:]:
        if p in edges or p == high or p - kept[-1] > 0.5 * finest:
            kept.append(p)
    return np.array(kept)


class Mesh:
    """Quadratic elements on a tensor mesh that shrinks towards every edge; the box is at ground."""

    def __init__(self, case, finest, growth):
        from skfem import Basis, BilinearForm, ElementQuad2, MeshQuad

        rims = [case.pad, case.finger] + ([case.pad + case.clearance] if case.clearance else [])
        self.top = sum(x.thickness_m for x in case.cover)
        faces, at = [0.0], 0.0
        for x in reversed(case.cover):
            at += x.thickness_m
            faces.append(at)
        slabs = list(zip(faces, faces[1:], reversed(case.cover), strict=False))
        at = 0.0
        for x in case.below:
            slabs.append((at - x.thickness_m, at, x))
            at -= x.thickness_m
            faces.append(at)
        floor = at if case.ground_below else -FAR
        r = graded(sorted(set(rims)), finest, growth, 0.0, FAR)
        z = graded(sorted(set(faces) - {floor}), finest, growth, floor, FAR)
        self.basis = Basis(MeshQuad.init_tensor(r, z), ElementQuad2())

        def permittivity(height, direction):
            value = np.ones_like(height)
            for low, high, x in slabs:
                eps = x.in_plane if direction == "r" and x.in_plane is not None else x.permittivity
                value = np.where((height > low) & (height < high), eps, value)
            return value

        @BilinearForm
        def energy(u, v, w):
            along, through = permittivity(w.x[1], "r"), permittivity(w.x[1], "z")
            return w.x[0] * (along * u.grad[0] * v.grad[0] + through * u.grad[1] * v.grad[1])

        self.matrix = energy.assemble(self.basis)
        r, z = self.basis.doflocs
        near = 1e-9
        plane = np.abs(z) < near
        self.pad = np.nonzero(plane & (r <= case.pad + near))[0]
        self.finger = np.nonzero((np.abs(z - self.top) < near) & (r <= case.finger + near))[0]
        rim = case.pad + case.clearance - near
        self.neighbours = np.nonzero(plane & (r >= rim))[0] if case.around != "alone" else np.array([], dtype=int)
        self.box = np.nonzero((r > FAR - near) | (z > FAR - near) | (z < floor + near))[0]

    def charge_of_pad(self, pad, finger, neighbours):
        """Charge [F] of the pad for these potentials; a finger of None is absent."""
        from skfem import condense
        from skfem import solve as solve_linear

        potential = np.zeros(self.basis.N)
        held = [(self.box, 0.0), (self.neighbours, neighbours), (self.pad, pad)]
        held += [] if finger is None else [(self.finger, finger)]
        for dofs, value in held:
            potential[dofs] = value
        fixed = np.unique(np.concatenate([dofs for dofs, _ in held]))
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # the solver names its own defaults
            solved = solve_linear(*condense(self.matrix, x=potential, D=fixed))
        return 2 * np.pi * EPS0 * float((self.matrix @ solved)[self.pad].sum())


CASES = {
    "alone, two layers, board on ground": Case(
        (FieldLayer(1.8e-3, 7.0), FieldLayer(0.5e-3, 3.2)), (FieldLayer(1.6e-3, 4.4),), 4e-3, 5e-3, "alone", 0.0, True
    ),
    "grounded, clearance, two layers": Case(
        (FieldLayer(1.0e-3, 2.8), FieldLayer(1.0e-3, 7.0)),
        (FieldLayer(1.0e-3, 4.4),),
        4e-3,
        3e-3,
        "grounded",
        1e-3,
        False,
    ),
    "driven, clearance, oriented layer, ground": Case(
        (FieldLayer(2.0e-3, 3.0, 6.0), FieldLayer(0.5e-3, 3.2)),
        (FieldLayer(1.6e-3, 4.4),),
        4e-3,
        4e-3,
        "driven",
        1e-3,
        True,
    ),
}


@pytest.mark.parametrize("name", CASES)
def test_agrees_with_finite_elements_within_their_own_error(name):
    case = CASES[name]
    neighbours = 1.0 if case.around == "driven" else 0.0
    found = []
    for finest, growth in ((8e-5, 1.5), (2e-5, 1.35)):
        mesh = Mesh(case, finest, growth)
        bare, touched = (mesh.charge_of_pad(1.0, finger, neighbours) for finger in (None, 0.0))
        found.append((touched - bare, bare, -mesh.charge_of_pad(0.0, 1.0, 0.0)))
    ours = case.ours()
    mine = (ours.change_farad, ours.self_untouched_farad, ours.pad_finger_farad)
    for coarse, fine, value in zip(*found, mine, strict=True):
        own_error = abs(fine - coarse)
        assert own_error < 0.02 * abs(fine)  # else it would say nothing
        assert abs(value - fine) <= own_error
