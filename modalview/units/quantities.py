"""The physical quantities that a field of the model can ask for."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Quantity:
    """What a number means: its dimension and the SI unit the core keeps it in.

    Parameters
    ----------
    name : str
        As a person reads it: "torsional stiffness".
    si_unit : str
        Unit of the number inside the core: "N m/rad".
    example : str
        A correct entry, for messages: "1.2e6 N m/rad".
    """

    name: str
    si_unit: str
    example: str


MASS = Quantity("mass", "kg", "620 kg")
INERTIA = Quantity("moment of inertia", "kg m2", "46 kg m2")
PRODUCT_OF_INERTIA = Quantity("product of inertia", "kg m2", "-3 kg m2")
LENGTH = Quantity("length", "m", "0.85 m")
STIFFNESS = Quantity("stiffness", "N/m", "175 kN/mm")
TORSIONAL_STIFFNESS = Quantity("torsional stiffness", "N m/rad", "6.0e5 N m/rad")
DAMPING = Quantity("damping", "N s/m", "1200 N s/m")
TORSIONAL_DAMPING = Quantity("torsional damping", "N m s/rad", "35 N m s/rad")
# Excitations and speeds are angular inside the core, whatever they were typed in.
FREQUENCY = Quantity("frequency", "rad/s", "100 Hz")
SPEED = Quantity("speed", "rad/s", "2950 rpm")
SPEED_RATE = Quantity("rate of speed change", "rad/s2", "50 rpm/s")
FORCE = Quantity("force", "N", "400 N")
TORQUE = Quantity("torque", "N m", "150 N m")
UNBALANCE = Quantity("unbalance", "kg m", "850 g mm")
BALANCE_GRADE = Quantity("balance quality grade", "m/s", "G 6.3")
MODULUS = Quantity("elastic modulus", "Pa", "206 GPa")
PRESSURE = Quantity("pressure", "Pa", "5 bar")
AREA = Quantity("area", "m2", "4200 mm2")
SECOND_MOMENT = Quantity("second moment of area", "m4", "8.4e6 mm4")
VOLUME = Quantity("volume", "m3", "4 l")
DENSITY = Quantity("density", "kg/m3", "7850 kg/m3")
LINE_MASS = Quantity("mass per length", "kg/m", "30.7 kg/m")
RATIO = Quantity("ratio", "1", "15 %")
ANGLE = Quantity("angle", "rad", "30 deg")
DECAY_RATE = Quantity("rate", "1/s", "0.5 1/s")
TIME = Quantity("time", "s", "0.0025 s")
VELOCITY = Quantity("velocity", "m/s", "4.5 mm/s")
ACCELERATION = Quantity("acceleration", "m/s2", "2 m/s2")
