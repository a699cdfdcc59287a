"""Harvest rules: what a rule sees (the estimate, its own last quota) and the quota it gives, over lanes.

Settings are absolute numbers in the record's unit (shares per year), the same for all lanes:

=============  ===========================================  =====================================
rule           settings (in order)                          quota for an estimate x
=============  ===========================================  =====================================
fixed quota    quota                                        quota
fixed share    share                                        share · x
escapement     escapement                                   max(0, x − escapement)
ramp           lower, upper, share                          share · x · f, f from 0 at lower to 1 at upper
=============  ===========================================  =====================================
"""

from __future__ import annotations

from harvest.kernels.compiling import kernel

FIXED_QUOTA, FIXED_SHARE, ESCAPEMENT, RAMP = 0, 1, 2, 3


@kernel()
def fill_quota(rule, settings, estimate, out):
    """The quota of each lane in a year with a count."""
    if rule == FIXED_QUOTA:
        for j in range(out.shape[0]):
            out[j] = settings[0]
    elif rule == FIXED_SHARE:
        for j in range(out.shape[0]):
            out[j] = settings[0] * estimate[j]
    elif rule == ESCAPEMENT:
        for j in range(out.shape[0]):
            out[j] = max(0.0, estimate[j] - settings[0])
    else:
        slope = 1.0 / (settings[1] - settings[0])
        for j in range(out.shape[0]):
            fraction = min(1.0, max(0.0, (estimate[j] - settings[0]) * slope))
            out[j] = settings[2] * estimate[j] * fraction
