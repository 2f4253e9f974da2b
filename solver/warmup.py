"""The smallest plan that exercises everything a first answer needs loaded."""

from decimal import Decimal

from solver.plan import Category, Plan, Work

TINY = Plan(
    categories=(Category("A", Decimal(1), Decimal(1), output={"W": Decimal(1)}),),
    works=(Work("W", "", (Decimal("1.5"),)),),
)
