"""
Judge a finished composition, profile or stream; run no model.

explosive      the class of a composition: INSIDE, MARGIN, OUTSIDE (estimate), UNKNOWN
corners        the worst class in the box of meter errors
substitution   adiabatic temperature when chlorine replaces hydrogen and the carbon skeletons stay
windows        explosion ranges in chlorine and the rule for mixed fuels
exotherm       adiabatic rise, MTSR, severity, the dark chain
dewpoint       first liquid or solid out of the gas
materials      temperature limits in chlorine, ignition temperatures, exposure figures
cautions       the words that stand on every report
"""
