from outcouple.optics.interim import *
from outcouple.optics.interim import stack_response, reflectance, interface, mixed_response, thickness_average, gauss_legendre, spectrum_nodes
