"""Constants of the balances, the same as in native/plan.h."""

R = 8.31446261815324  # J/mol/K, exact in the SI of 2019
AVOGADRO = 6.02214076e23  # 1/mol, exact
