"""Published resistance methods, and the way from the ground to stages.

    Ground -> method -> UnitResistance -> stages.resistance_stages -> GroundStage, Stage

One file for each method, named by author and year or by what it starts from; `methods` is their
registry. Every method brings the ground into one form, `unit.UnitResistance`, and `stages` knows
nothing of where that comes from.
"""
