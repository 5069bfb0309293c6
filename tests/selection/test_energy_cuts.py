"""Energy cuts hold for every feasible design and cut off the designs they are taken at."""

import numpy as np
from enumerable_trusses import every_design, random_truss
from lattice_girders import girder

from sizing.selection.certificate import ladders
from sizing.selection.energy_cuts import EnergyCuts
from sizing.selection.range_branching_dual import Choices, Inequalities


def cuts_at(problem, stiffness, flexibility, mask, count=6):
    """Energy cuts of one box, as inequalities, at one mean design."""
    energy = EnergyCuts(problem, ladders(problem))
    made, _ = energy.separate(stiffness[None], flexibility[None], mask[None], count)
    own, table = energy.tables(made.requirement, made.size)
    omega = made.omega if made.omega.shape[2] else made.omega[:, :, :0]
    return Inequalities(
        alpha=made.alpha, beta=made.beta, omega=omega, right=made.right, own=own, table=table
    )


def test_no_feasible_design_breaks_an_energy_cut():
    """Cuts taken anywhere, with self-weight or without, hold for all feasible designs."""
    for seed in range(0, 60, 2):
        problem = random_truss(seed, most_designs=600)
        designs, found = every_design(problem)
        if problem.length.size == problem.loads.shape[0] or not found.feasible.any():
            continue
        ladder = ladders(problem)
        chance = np.random.default_rng(seed)
        low, high = ladder.stiffness[:, 0], ladder.stiffness[:, -1]
        at = low * (high / low) ** chance.uniform(size=low.size)
        part = cuts_at(problem, at, 1.0 / at * chance.uniform(1.0, 2.0), ladder.valid)
        place = np.array(
            [
                [np.flatnonzero(ladder.section[g] == s)[0] for g, s in enumerate(design)]
                for design in designs[found.feasible]
            ]
        )
        b = place.shape[0]
        every = part.of(np.zeros(b, dtype=np.intp))
        mask = np.broadcast_to(ladder.valid, (b, *ladder.valid.shape))
        slack = every.slack(Choices.all_of(ladder, mask), place)
        assert slack.max() <= 1e-9, seed


def test_a_cut_removes_the_failing_design_it_is_taken_at():
    """In a box of one design without self-weight the worst failing check is cut off."""
    for seed in range(1, 60, 3):
        problem = random_truss(seed, most_designs=300)
        if problem.length.size == problem.loads.shape[0] or problem.self_weight_factor.any():
            continue
        designs, found = every_design(problem)
        ladder = ladders(problem)
        bad = np.isfinite(found.worst) & (found.worst > 1.001)
        for design in designs[bad][:5]:
            place = np.array(
                [np.flatnonzero(ladder.section[g] == s)[0] for g, s in enumerate(design)]
            )
            mask = np.arange(ladder.valid.shape[1]) == place[:, None]
            stiffness = problem.stiffness[design]
            part = cuts_at(problem, stiffness, 1.0 / stiffness, mask)
            slack = part.slack(Choices.all_of(ladder, mask[None]), place[None])
            assert slack.max() > 0.0, (seed, design)


def test_symmetric_requirements_become_one():
    """The two ends of a symmetric girder under symmetric load share their requirements."""
    problem = girder((4,), crossed=True)
    energy = EnergyCuts(problem, ladders(problem))
    sizes = [numbers.size for numbers in energy.requirements.members_of]
    assert min(size for size in sizes if size > 1) == 2
    combinations = problem.strength_factors.shape[0]
    total = 2 * (problem.length.size * combinations + problem.deflection_limit.size)
    assert sum(sizes) == total
    assert len(sizes) <= 0.7 * total
