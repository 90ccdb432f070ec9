"""Solvers written apart from the project's own, as references: CP-SAT and two greedy rules."""

from bisect import bisect_left, insort
from dataclasses import dataclass
from decimal import Decimal

from ortools.sat.python import cp_model

from planner.cutting import Problem, PutUp

CENTS = 100


@dataclass(frozen=True)
class ReferencePlan:
    """What a reference found: the cost, whether it is proven, and what is left of each opened."""

    cost: Decimal
    proven: bool
    bought: int
    left_mm: tuple[int, ...]


def cp_sat_plan(problem: Problem, time_limit_s: float, seed: int = 0) -> ReferencePlan | None:
    """Count pieces of each length in each stock piece (CP-SAT of OR-Tools, one worker)."""
    model = cp_model.CpModel()
    counts = {d.length_mm: d.count for d in problem.demand if d.count}
    stock = [(s.length_mm, None) for s in problem.stock for _ in range(s.count)]
    for index, put_up in enumerate(problem.buy):
        stock += [(put_up.reckoned_mm, index)] * _most_useful(problem, put_up)
    opened = [model.new_bool_var(f"open{i}") for i in range(len(stock))]
    taken = {
        (i, length): model.new_int_var(0, min(count, size // length), f"{i}x{length}")
        for i, (size, _) in enumerate(stock)
        for length, count in counts.items()
        if length <= size
    }
    for length, count in counts.items():
        model.add(sum(t for (_, cut), t in taken.items() if cut == length) == count)
    for i, (size, index) in enumerate(stock):
        used = sum(length * t for (j, length), t in taken.items() if j == i)
        model.add(used <= size * opened[i])
        if i and stock[i - 1] == (size, index) and index is not None:
            model.add(opened[i] <= opened[i - 1])
    costs = [_packs(model, problem, index, stock, opened) for index in range(len(problem.buy))]
    model.minimize(sum(costs))
    solver = cp_model.CpSolver()
    solver.parameters.num_workers = 1
    solver.parameters.random_seed = seed
    solver.parameters.max_time_in_seconds = time_limit_s
    status = solver.solve(model)
    if status not in (cp_model.OPTIMAL, cp_model.FEASIBLE):
        return None
    left = []
    for i, (size, _) in enumerate(stock):
        used = sum(length * solver.value(t) for (j, length), t in taken.items() if j == i)
        if used:
            left.append(size - used)
    new = [i for i, (_, index) in enumerate(stock) if index is not None]
    bought = sum(solver.value(opened[i]) for i in new)
    cost = Decimal(round(solver.objective_value)) / CENTS
    return ReferencePlan(cost, status == cp_model.OPTIMAL, bought, tuple(left))


def _packs(
    model: cp_model.CpModel,
    problem: Problem,
    index: int,
    stock: list[tuple[int, int | None]],
    opened: list[cp_model.IntVar],
) -> cp_model.LinearExprT:
    """What the packs cost that hold all put-ups opened: none, or a multiple from the minimum on."""
    put_up = problem.buy[index]
    most = len(stock) + put_up.minimum_packs + put_up.pack_step
    steps = model.new_int_var(0, most, f"steps{index}")
    any_bought = model.new_bool_var(f"any{index}")
    packs = steps * put_up.pack_step
    model.add(packs >= put_up.minimum_packs).only_enforce_if(any_bought)
    model.add(steps == 0).only_enforce_if(any_bought.negated())
    new = [opened[i] for i, (_, sold) in enumerate(stock) if sold == index]
    model.add(sum(new) <= packs * put_up.pack_size)
    return packs * int(put_up.price * CENTS)


def _most_useful(problem: Problem, put_up: PutUp) -> int:
    """More put-ups than first-fit decreasing opens of them alone are never needed."""
    plan = greedy_plan(Problem(problem.demand, (), (put_up,)), best_fit=False)
    return sum(d.count for d in problem.demand) if plan is None else plan.bought


def greedy_plan(problem: Problem, *, best_fit: bool) -> ReferencePlan | None:
    """First-fit or best-fit decreasing: remnants shortest first, then the one put-up, singly.

    None where a piece fits nowhere.
    """
    put_up = min(problem.buy, key=lambda one: one.price / one.reckoned_mm)
    room = sorted(s.length_mm for s in problem.stock for _ in range(s.count))
    untouched = list(room)
    pieces = sorted((d.length_mm for d in problem.demand for _ in range(d.count)), reverse=True)
    bought = 0
    order = sorted(room)
    for length in pieces:
        if best_fit:
            place = bisect_left(order, length)
            free = order.pop(place) if place < len(order) else None
        else:
            place = next((i for i, free in enumerate(room) if free >= length), -1)
            free = room[place] if place >= 0 else None
        if free is None:
            if length > put_up.reckoned_mm:
                return None
            bought += 1
            free = put_up.reckoned_mm
            if not best_fit:
                room.append(0)
                place = len(room) - 1
        if best_fit:
            insort(order, free - length)
        else:
            room[place] = free - length
    left = order if best_fit else room
    opened = list(left)
    for length in untouched:
        if length in opened:
            opened.remove(length)
    return ReferencePlan(bought * put_up.price, False, bought, tuple(opened))
