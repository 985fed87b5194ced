"""A fit and the ends of its intervals once more, by a general optimiser."""

from __future__ import annotations

import numpy as np
import scipy.optimize

from fluxnet.solving.statistics import chi_squared_quantile


def nearest_by_optimiser(fit, start=None):
    """The least h over fluxes and numbers, bounds kept, by a general optimiser."""
    parts = optimiser_parts(fit)
    found = scipy.optimize.minimize(
        parts["h"], parts["start"] if start is None else start, jac=parts["slope"],
        bounds=parts["bounds"], constraints=parts["constraints"], method="SLSQP",
        options={"ftol": 1e-14, "maxiter": 2000},
    )
    return found.fun


def optimiser_parts(fit):
    """The fit written out once more, from the task's rows only."""
    task = fit.task
    rows, count = task.rows, task.rows.count

    def residuals(x):
        v, p = x[:count], x[count:]
        measured = task.whitening @ (task.measured - rows.at(p)[task.soft] @ v)
        return np.concatenate([measured, (rows.start - p) / task.sd])

    def slope(x):
        v, p = x[:count], x[count:]
        whole = np.hstack([rows.at(p)[task.soft], rows.slopes_at(p, v)[task.soft]])
        design = np.vstack([
            -task.whitening @ whole,
            np.hstack([np.zeros((len(p), count)), -np.diag(1 / task.sd)]),
        ])
        return 2 * residuals(x) @ design

    def values(x):
        return rows.at(x[count:]) @ x[:count]

    def slopes(x):
        return np.hstack([rows.at(x[count:]), rows.slopes_at(x[count:], x[:count])])

    left = fit.region.point.chart.left
    below, above = np.isfinite(task.low), np.isfinite(task.high)

    def inside(x):
        reach = values(x)[task.bounded]
        return np.concatenate([(reach - task.low)[below], (task.high - reach)[above]])

    def inside_slopes(x):
        reach = slopes(x)[task.bounded]
        return np.vstack([reach[below], -reach[above]])

    return {
        "h": lambda x: residuals(x) @ residuals(x),
        "slope": slope,
        "start": np.concatenate([fit.fluxes, fit.region.point.numbers]),
        "bounds": [(None, None)] * count
        + list(zip(task.range_low, task.range_high, strict=True)),
        "constraints": [
            {"type": "eq", "fun": lambda x: left @ (values(x)[task.equal] - task.equal_values),
             "jac": lambda x: left @ slopes(x)[task.equal]},
            {"type": "ineq", "fun": inside, "jac": inside_slopes},
        ],
    }


def end_by_optimiser(fit, j, sign):
    """The end of a flux's 95 % interval by a general optimiser, from two starts."""
    parts = optimiser_parts(fit)
    level = fit.region.point.h + chi_squared_quantile(0.95, 1)
    target = np.zeros(len(parts["start"]))
    target[j] = -sign
    room = {"type": "ineq", "fun": lambda x: level - parts["h"](x),
            "jac": lambda x: -parts["slope"](x)}
    ends = []
    for shake in (0.0, 0.02):
        rng = np.random.default_rng(j)
        start = parts["start"] * (1 + shake * rng.normal(size=len(target)))
        found = scipy.optimize.minimize(
            lambda x: target @ x, start, jac=lambda x: target, bounds=parts["bounds"],
            constraints=[*parts["constraints"], room], method="SLSQP",
            options={"ftol": 1e-12, "maxiter": 1000},
        )
        if found.success:
            ends.append(sign * -found.fun)
    return sign * max(sign * end for end in ends)


# --- hand-worked ------------------------------------------------------------------------
