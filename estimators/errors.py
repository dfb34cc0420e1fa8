"""What can go wrong in a call.

ValueError
└── InputError            a wrong call: names the argument, its value, the rule, and what to do

Poor data is not an error: it travels as a :class:`estimators.results.Caution` inside the result.
"""

from __future__ import annotations


class InputError(ValueError):
    """A call that cannot be answered; the message is one sentence a person can act on.

    Parameters
    ----------
    argument : str
        Name of the argument as written in the call.
    value : object
        What was given, shortened to something printable.
    rule : str
        What the argument must be, completing "``argument`` must ...".
    what_to_do : str
        The next step for the person who made the call.
    """

    def __init__(self, argument: str, value: object, rule: str, what_to_do: str) -> None:
        self.argument = argument
        self.value = value
        self.rule = rule
        self.what_to_do = what_to_do
        super().__init__(f"{argument} {rule}, but got {value}: {what_to_do}.")
