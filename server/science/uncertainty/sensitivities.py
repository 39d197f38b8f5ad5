"""Sensitivities of a model by its own differences, and the uncertainty budget they make."""

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, finite, not_negative
from server.science.errors import OutOfRange, UnknownName, WrongShape
from server.science.uncertainty.propagation import combined, effective_degrees_of_freedom

# Numbers of the inputs, by name or in their order.
Inputs = Mapping[str, float] | Sequence[float] | Numbers
# Correlation of inputs: of named pairs, or as a whole matrix in their order.
Correlation = Mapping[tuple[str, str], float] | ArrayLike | None


@dataclass(frozen=True)
class Propagated:
    """A result with its standard uncertainty, and what each input gave to it.

    `sensitivities` are changes of the result per unit of the input, NaN for an input known
    exactly, which is not tried. `contributions` are shares of the variance; they add up to 1, and
    one can be negative where correlated inputs cancel. They are NaN where the variance is zero.
    `bends` are how far the middle between the two tries of an input lies from the result, in its
    unit: where one is not small beside the standard uncertainty, the first order is not enough.
    """

    value: float
    standard_uncertainty: float
    sensitivities: Mapping[str, float]
    contributions: Mapping[str, float]
    bends: Mapping[str, float]
    degrees_of_freedom: float


@dataclass(frozen=True)
class Joint:
    """Several results of the same inputs: values, standard uncertainties and correlation.

    `correlation` has the shape (m, m); it is NaN where a result has no uncertainty.
    """

    values: Numbers
    standard_uncertainties: Numbers
    correlation: Numbers


def propagated(
    model: Callable[..., ArrayLike],
    estimates: Inputs,
    standard_uncertainties: Inputs,
    correlation: Correlation = None,
    degrees_of_freedom: Inputs | None = None,
    step: float = 1.0,
) -> Propagated:
    """Result of a model with its standard uncertainty and the budget of its inputs.

    Each input is moved up and down by its own standard uncertainty, and half the difference of
    the two results is its contribution: the numerical form of the law of propagation that the
    guide itself gives. It asks nothing of the model but to take numbers, and sees the model as
    far as the input may well be; a derivative in the narrow sense (`scipy.differentiate`) needs
    a model of arrays and sees only the point, which a small `step` comes to as well. Where the
    model refuses one side, because the input cannot be that low or high, the other alone counts.

    Parameters
    ----------
    model : callable
        Takes the inputs, by name if they are named, else in their order; gives one number.
    estimates : mapping of str to float, or sequence of float
        Best estimates of the N inputs, any units. Inputs of a sequence are called x1, x2, ...
    standard_uncertainties : mapping of str to float, or sequence of float
        Their standard uncertainties, same units; not negative. A name that is not in the mapping
        has none.
    correlation : mapping of pairs of names to float, or array_like of shape (N, N), optional
        Correlation coefficients; independent inputs where not given.
    degrees_of_freedom : mapping of str to float, or sequence of float, optional
        Degrees of freedom of the uncertainties; above zero. Infinite where not given.
    step : float
        How far an input is moved, as a share of its uncertainty; above 0.

    Returns
    -------
    Propagated
        All NaN where an estimate is NaN; where an uncertainty is NaN the value alone is known.
        The degrees of freedom are NaN for correlated inputs of which one is finite, since the
        formula of Welch and Satterthwaite holds for independent ones.

    Raises
    ------
    OutOfRange
        If a number is infinite, an uncertainty negative, the correlation impossible or the step
        not above zero; and what the model refuses at the estimates, or on both sides of one.
    UnknownName
        If an uncertainty, correlation or degrees of freedom are given for no input.
    WrongShape
        If sequences differ in length, or the model does not give one number.

    Source
    ------
    JCGM 100:2008, 5.1.3 note 2 and 5.2.2 eq. (13); degrees of freedom G.4.1.

    Example
    -------
    The heat of a contact: 500 A (2.5) through 10 microohm (1).

    >>> heat = propagated(
    ...     lambda amps, ohm: amps**2 * ohm,
    ...     {"amps": 500.0, "ohm": 10e-6},
    ...     {"amps": 2.5, "ohm": 1e-6},
    ... )
    >>> f"{heat.value:.2f} W, u {heat.standard_uncertainty:.2f} W"
    '2.50 W, u 0.25 W'
    >>> {name: round(share, 3) for name, share in heat.contributions.items()}
    {'amps': 0.01, 'ohm': 0.99}
    """
    if not step > 0.0:
        raise OutOfRange("step", found=step, allowed="above zero")
    names, centres, by_name = _named(estimates)
    errors = not_negative("standard_uncertainties", _matched(standard_uncertainties, names, 0.0))
    matrix = _matrix(correlation, names)
    degrees = _matched({} if degrees_of_freedom is None else degrees_of_freedom, names, math.inf)
    value, parts, bends = _tried(
        _one_number(model), centres, errors * step, names if by_name else None
    )
    parts, bends = parts / step, bends / step**2
    total = float(combined(parts, np.ones(len(names)), matrix))
    weights = parts if matrix is None else np.einsum("ij,j->i", matrix, parts)
    known = errors > 0.0
    shares = parts * weights / (total**2 if total > 0.0 else math.nan)
    return Propagated(
        value=float(value),
        standard_uncertainty=total,
        sensitivities=_table(names, np.divide(parts, np.where(known, errors, math.nan))),
        contributions=_table(names, shares),
        bends=_table(names, bends),
        degrees_of_freedom=_degrees(parts, degrees, matrix),
    )


def propagated_together(
    model: Callable[..., ArrayLike],
    estimates: Inputs,
    standard_uncertainties: Inputs,
    correlation: Correlation = None,
    step: float = 1.0,
) -> Joint:
    """Several results of one set of inputs, with their uncertainties and their correlation.

    Results that share inputs are correlated even where the inputs are not: a current that reads
    too high moves current efficiency and energy per tonne alike, and a sum of accounts that
    forgets it is too sure of itself. The way of `propagated`, for a model of many results.

    Parameters
    ----------
    model : callable
        Takes the inputs, by name if they are named, else in their order; gives m numbers.
    estimates : mapping of str to float, or sequence of float
        Best estimates of the N inputs, any units.
    standard_uncertainties : mapping of str to float, or sequence of float
        Their standard uncertainties, same units; not negative, none where not in the mapping.
    correlation : mapping of pairs of names to float, or array_like of shape (N, N), optional
        Correlation coefficients of the inputs; independent inputs where not given.
    step : float
        How far an input is moved, as a share of its uncertainty; above 0.

    Returns
    -------
    Joint
        Arrays of shapes (m,), (m,) and (m, m). All NaN where an estimate is NaN.

    Raises
    ------
    OutOfRange
        If a number is infinite, an uncertainty negative, the correlation impossible or the step
        not above zero; and what the model refuses at the estimates, or on both sides of one.
    UnknownName
        If an uncertainty or correlation is given for no input.
    WrongShape
        If sequences differ in length, or the model does not give a row of numbers.

    Source
    ------
    JCGM 100:2008, H.2.3, eq. (H.9); JCGM 102:2011, 6.2.1.3, C_x U_x C_x^T.

    Example
    -------
    Sum and difference of two equally good readings are not correlated, each with the first is.

    >>> both = propagated_together(lambda a, b: [a + b, a - b, a], [3.0, 2.0], [0.1, 0.1])
    >>> both.correlation.round(3).tolist()
    [[1.0, 0.0, 0.707], [0.0, 1.0, 0.707], [0.707, 0.707, 1.0]]
    """
    if not step > 0.0:
        raise OutOfRange("step", found=step, allowed="above zero")
    names, centres, by_name = _named(estimates)
    errors = not_negative("standard_uncertainties", _matched(standard_uncertainties, names, 0.0))
    matrix = _matrix(correlation, names)
    values, parts, _ = _tried(
        _row_of_numbers(model), centres, errors * step, names if by_name else None
    )
    parts = parts / step
    uncertainties = combined(parts, np.ones_like(parts), matrix)
    linked = parts if matrix is None else matrix @ parts
    scale = np.where(uncertainties > 0.0, uncertainties, math.nan)
    related = parts.T @ linked / (scale[:, None] * scale)
    return Joint(np.atleast_1d(values), np.atleast_1d(uncertainties), np.clip(related, -1.0, 1.0))


def _named(estimates: Inputs) -> tuple[list[str], Numbers, bool]:
    """Names of the inputs, their estimates, and whether the model takes them by name."""
    if isinstance(estimates, Mapping):
        return list(estimates), finite("estimates", list(estimates.values())), True
    centres = finite("estimates", estimates)
    if centres.ndim != 1:
        raise WrongShape("estimates", found=centres.shape, allowed="one row of numbers")
    return [f"x{place}" for place in range(1, centres.size + 1)], centres, False


def _matched(given: Inputs, names: list[str], otherwise: float) -> Numbers:
    """Numbers in the order of the inputs; what is not given is `otherwise`."""
    if isinstance(given, Mapping):
        for name in given:
            _known(name, names)
        return np.array([given.get(name, otherwise) for name in names], dtype=np.float64)
    numbers = np.asarray(given, dtype=np.float64)
    if numbers.shape != (len(names),):
        raise WrongShape("estimates", found=numbers.shape, allowed=f"({len(names)},), one each")
    return numbers


def _known(name: str, names: list[str]) -> int:
    """The place of a named input."""
    if name not in names:
        raise UnknownName("input", found=name, known=names)
    return names.index(name)


def _matrix(correlation: Correlation, names: list[str]) -> Numbers | None:
    """The correlation as a matrix, in the order of the inputs."""
    if correlation is None:
        return None
    if not isinstance(correlation, Mapping):
        return finite("correlation", correlation)
    matrix = np.eye(len(names))
    for (one, other), coefficient in correlation.items():
        here, there = _known(one, names), _known(other, names)
        matrix[here, there] = matrix[there, here] = coefficient
    return matrix


def _tried(
    model: Callable[..., Numbers],
    centres: Numbers,
    errors: Numbers,
    names: list[str] | None,
) -> tuple[Numbers, Numbers, Numbers]:
    """The result, and for each input half the difference of its two tries and their bend."""

    def result(inputs: Numbers) -> Numbers:
        numbers = [float(number) for number in inputs]
        return model(**dict(zip(names, numbers, strict=True))) if names else model(*numbers)

    def moved(place: int, by: float) -> tuple[Numbers, OutOfRange | None]:
        inputs = centres.copy()
        inputs[place] += by
        try:
            return result(inputs), None
        except OutOfRange as refusal:
            return np.full_like(value, math.nan), refusal

    value = result(centres)
    lost = np.isnan(centres).any()
    parts = np.zeros((centres.size, *value.shape))
    bends = np.zeros_like(parts)
    for place, error in enumerate(errors):
        if lost or math.isnan(error):
            parts[place] = bends[place] = math.nan
        elif error > 0.0:
            (above, too_high), (below, too_low) = moved(place, error), moved(place, -error)
            if too_high is not None and too_low is not None:
                raise too_low
            parts[place] = (above - below) / 2.0
            bends[place] = (above + below) / 2.0 - value
            parts[place] = np.where(np.isnan(above), value - below, parts[place])
            parts[place] = np.where(np.isnan(below), above - value, parts[place])
    return (np.full_like(value, math.nan) if lost else value), parts, bends


def _one_number(model: Callable[..., ArrayLike]) -> Callable[..., Numbers]:
    """The model, held to giving a single number."""

    def held(*inputs: float, **named: float) -> Numbers:
        # Whatever the model would make of a missing number, the result is missing.
        if any(math.isnan(number) for number in (*inputs, *named.values())):
            return np.asarray(math.nan)
        result = np.asarray(model(*inputs, **named), dtype=np.float64)
        if result.size != 1:
            raise WrongShape("model", found=result.shape, allowed="a single number")
        return result.reshape(())

    return held


def _row_of_numbers(model: Callable[..., ArrayLike]) -> Callable[..., Numbers]:
    """The model, held to giving a row of numbers."""

    def held(*inputs: float, **named: float) -> Numbers:
        result = np.asarray(model(*inputs, **named), dtype=np.float64)
        if result.ndim != 1:
            raise WrongShape("model", found=result.shape, allowed="one row of numbers")
        return result

    return held


def _degrees(parts: Numbers, degrees: Numbers, matrix: Numbers | None) -> float:
    """Effective degrees of freedom, where the formula holds."""
    if (np.nan_to_num(degrees, nan=1.0) <= 0.0).any():
        raise OutOfRange("degrees_of_freedom", float(np.nanmin(degrees)), allowed="above zero")
    counted = parts != 0.0
    if np.isinf(degrees[counted]).all():
        return math.nan if np.isnan(parts).any() else math.inf
    if matrix is not None and not np.array_equal(matrix, np.eye(len(parts))):
        return math.nan
    return effective_degrees_of_freedom(parts[counted], degrees[counted])


def _table(names: list[str], numbers: Numbers) -> dict[str, float]:
    """Numbers under the names of their inputs."""
    return {name: float(number) for name, number in zip(names, numbers, strict=True)}
