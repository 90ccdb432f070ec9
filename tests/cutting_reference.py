"""A solver of others as a reference: CP-SAT of OR-Tools, with one worker and a seed."""

import time
from collections import Counter, defaultdict
from dataclasses import dataclass

from ortools.sat.python import cp_model

from planner.cutting import Problem, PutUp
from tests.cutting_greedy import ReferenceCut, ReferencePlan, cost_of, greedy_plan

PRICE_UNITS = 10_000
"""Prices have at most four decimal places; CP-SAT takes whole numbers."""


@dataclass(frozen=True)
class Slot:
    """A stock piece that may be opened; `put_up` is None on the shelf, else which one is bought."""

    length_mm: int
    put_up: int | None


def cp_sat_plan(problem: Problem, time_limit_s: float, seed: int = 0) -> ReferencePlan | None:
    """Count the pieces of each length in each stock piece, for the least money.

    It is told the plan of first-fit decreasing as a hint, without which it finds none of many
    pieces. None where it has no plan in time; building the model counts as time too.
    """
    started = time.monotonic()
    model = cp_model.CpModel()
    wanted = {d.length_mm: 0 for d in problem.demand if d.count}
    for piece in problem.demand:
        if piece.count:
            wanted[piece.length_mm] += piece.count
    slots = list(_slots(problem))
    opened = [model.new_bool_var(f"open{number}") for number in range(len(slots))]
    taken = [
        {
            length: model.new_int_var(0, min(count, slot.length_mm // length), f"{number}x{length}")
            for length, count in wanted.items()
            if length <= slot.length_mm
        }
        for number, slot in enumerate(slots)
    ]
    _cut_what_is_wanted(model, wanted, taken)
    _stay_within(model, slots, opened, taken)
    model.minimize(
        sum(_price(model, problem, index, slots, opened) for index in range(len(problem.buy)))
    )
    _hint(model, problem, slots, opened, taken)
    solver = cp_model.CpSolver()
    solver.parameters.num_workers = 1
    solver.parameters.interleave_search = True  # found best here: all strategies in turn
    solver.parameters.random_seed = seed
    solver.parameters.max_time_in_seconds = max(0.0, started + time_limit_s - time.monotonic())
    status = solver.solve(model)
    if status not in (cp_model.OPTIMAL, cp_model.FEASIBLE):
        return None
    cuts = tuple(_cuts(solver, slots, taken))
    bought = Counter(cut.put_up for cut in cuts if cut.put_up is not None)
    return ReferencePlan(cost_of(problem, bought), status == cp_model.OPTIMAL, cuts)


def _slots(problem: Problem) -> list[Slot]:
    shelf = [Slot(stock.length_mm, None) for stock in problem.stock for _ in range(stock.count)]
    for index, put_up in enumerate(problem.buy):
        shelf += [Slot(put_up.reckoned_mm, index)] * _most_useful(problem, put_up)
    return shelf


def _most_useful(problem: Problem, put_up: PutUp) -> int:
    """More put-ups than first-fit decreasing opens of them alone are never needed."""
    plan = greedy_plan(Problem(problem.demand, (), (put_up,)), best_fit=False)
    return sum(d.count for d in problem.demand) if plan is None else plan.bought


Taken = list[dict[int, cp_model.IntVar]]


def _cut_what_is_wanted(model: cp_model.CpModel, wanted: dict[int, int], taken: Taken) -> None:
    by_length: dict[int, list[cp_model.IntVar]] = defaultdict(list)
    for one in taken:
        for length, count in one.items():
            by_length[length].append(count)
    for length, count in wanted.items():
        model.add(sum(by_length[length]) == count)


def _stay_within(
    model: cp_model.CpModel, slots: list[Slot], opened: list[cp_model.IntVar], taken: Taken
) -> None:
    """Equal put-ups are opened in their order, which spares the search their permutations."""
    for number, slot in enumerate(slots):
        used = sum(length * count for length, count in taken[number].items())
        model.add(used <= slot.length_mm * opened[number])
        if number and slot.put_up is not None and slots[number - 1] == slot:
            model.add_implication(opened[number], opened[number - 1])


def _price(
    model: cp_model.CpModel,
    problem: Problem,
    index: int,
    slots: list[Slot],
    opened: list[cp_model.IntVar],
) -> cp_model.LinearExprT:
    """What the packs cost that hold all put-ups opened: none, or a multiple from the minimum on."""
    put_up = problem.buy[index]
    new = [opened[number] for number, slot in enumerate(slots) if slot.put_up == index]
    steps = model.new_int_var(0, len(new) + put_up.minimum_packs, f"steps{index}")
    packs = steps * put_up.pack_step
    any_bought = model.new_bool_var(f"any{index}")
    model.add(packs >= put_up.minimum_packs).only_enforce_if(any_bought)
    model.add(steps == 0).only_enforce_if(any_bought.negated())
    model.add(sum(new) <= packs * put_up.pack_size)
    return packs * int(put_up.price * PRICE_UNITS)


def _hint(
    model: cp_model.CpModel,
    problem: Problem,
    slots: list[Slot],
    opened: list[cp_model.IntVar],
    taken: Taken,
) -> None:
    greedy = greedy_plan(problem, best_fit=False)
    planned: dict[Slot, list[ReferenceCut]] = defaultdict(list)
    for cut in greedy.cuts if greedy else ():
        planned[Slot(cut.length_mm, cut.put_up)].append(cut)
    for number, slot in enumerate(slots):
        cut = planned[slot].pop(0) if planned[slot] else None
        pieces = Counter(cut.pieces_mm if cut else ())
        model.add_hint(opened[number], cut is not None)
        for length, count in taken[number].items():
            model.add_hint(count, pieces[length])


def _cuts(solver: cp_model.CpSolver, slots: list[Slot], taken: Taken) -> list[ReferenceCut]:
    cuts = []
    for slot, counts in zip(slots, taken, strict=True):
        pieces = [length for length, count in counts.items() for _ in range(solver.value(count))]
        if pieces:
            cuts.append(
                ReferenceCut(slot.length_mm, slot.put_up, tuple(sorted(pieces, reverse=True)))
            )
    return cuts
