"""The invented wells of handbook 10 (yearly, m above datum; rain in mm) and the flow of the Nile."""

import numpy as np
import statsmodels.api as sm

BEFORE_AFFECTED = np.array([92.10, 91.62, 92.35, 91.88, 92.02, 91.55])
BEFORE_CONTROL = np.array([93.05, 92.50, 93.31, 92.79, 92.98, 92.44])
BEFORE_RAIN = np.array([812.0, 640.0, 905.0, 731.0, 790.0, 602.0])
AFTER_AFFECTED = np.array([92.91, 92.40, 93.02, 92.63, 92.78])
AFTER_CONTROL = np.array([93.12, 92.63, 93.30, 92.80, 93.05])
AFTER_RAIN = np.array([845.0, 668.0, 880.0, 742.0, 798.0])

BEFORE = BEFORE_AFFECTED - BEFORE_CONTROL
AFTER = AFTER_AFFECTED - AFTER_CONTROL
AFTERWARDS = np.repeat([0.0, 1.0], [6, 5])
RAIN = np.r_[BEFORE_RAIN, AFTER_RAIN]


def nile():
    """Annual flow at Aswan 1871-1970 as statsmodels gives it out (Biometrika 65(2), 1978)."""
    return sm.datasets.nile.load_pandas().data["volume"].to_numpy()
