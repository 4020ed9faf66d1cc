"""Peak, rms and peak-to-peak of a sine, in one place."""

import math

#: Peak-to-peak over rms voltage of a sine, 2√2.
PEAK_TO_PEAK = 2.0 * math.sqrt(2.0)
#: Peak over rms voltage of a sine, √2.
PEAK = math.sqrt(2.0)
