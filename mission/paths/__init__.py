"""The climb that gains energy fastest, or on least fuel, or height fastest: altitude and Mach.

In the energy-state approximation energy height alone takes time to change: altitude is traded for
speed at one energy height in no time, and lift is weight. E. S. Rutowski, "Energy Approach to the
General Aircraft Performance Problem", J. Aeronaut. Sci. 21(3), 1954; A. E. Bryson, M. N. Desai and
W. C. Hoffman, "Energy-State Approximation in Performance Optimization of Supersonic Aircraft",
J. Aircraft 6(6), 1969; both from memory.
"""
