"""Task: hold particles on the electrodes against the flow."""

from typing import Literal

from model.holding import Holding


class Hold(Holding):
    """Hold particles against all of the flow, see :class:`model.holding.Holding`."""

    label = "hold against the flow"
    why = (
        "At the working height the strongest pull against the flow, anywhere over one period of "
        "the electrodes, must be at least the drag of the flow there."
    )
    remedy = "Slow the flow, or lower the working height or the bar pitch."

    kind: Literal["hold"] = "hold"
