from outcouple.optics.interim import *
from outcouple.optics.interim import (
    gauss_legendre,
    interface,
    mixed_response,
    reflectance,
    spectrum_nodes,
    stack_response,
    thickness_average,
)
