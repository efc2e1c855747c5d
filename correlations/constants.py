"""Constants of nature and of units shared by the formulas."""
from __future__ import annotations

GAS_CONSTANT = 8.314462618
"""J/(mol K), exact in the SI of 2019 to the digits given."""
GRAVITY = 9.80665
"""m/s2."""
FOOT = 0.3048
"""m."""
INCH_WATER_PER_FOOT = 817.221
"""Pa/m in one inch of water per foot (water of 62.4 lb/ft3)."""
