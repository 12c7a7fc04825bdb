"""The cautions that go with every result: working with powders and hot gas can hurt."""

from psdflow.duty import Duty

CAUTIONS = (
    "Screening only: local codes, the plant's hazard study and licensed practice decide.",
    "Dust explosion: treat any organic, metal or carbon powder as combustible until tested; fines raise the hazard.",
    "Respirable dust: enclose, extract, wear protection; ask for the crystalline silica content of mineral powders.",
    "Static: bond and earth vessels, ducts and people; dry gas and insulating grains charge strongly.",
)


def cautions(duty: Duty) -> list[str]:
    """The general cautions and those that this duty's fluid calls for."""
    fluid = duty.fluid.resolved
    found = list(CAUTIONS)
    if fluid.temperature is not None and fluid.temperature > 333.15:
        found.append(
            f"Hot equipment ({fluid.temperature - 273.15:.0f} °C): burns, and layers of powder may ignite or self-heat."
        )
    if fluid.pressure is not None and fluid.pressure > 1.5e5:
        found.append(
            f"Pressure ({fluid.pressure / 1e5:.3g} bar absolute): a channelled bed may let go all at once; "
            "relief and filters must stand it."
        )
    if fluid.phase == "gas" and not _breathable(duty):
        found.append("Gas other than air: it can displace oxygen, or be toxic or flammable; test before entry.")
    return found


def _breathable(duty: Duty) -> bool:
    gas = (duty.fluid.gas or "").strip().lower()
    return gas == "air"
