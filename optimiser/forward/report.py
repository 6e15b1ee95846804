"""Every quantity that a pass reports, by result path, SI."""

from __future__ import annotations

from dataclasses import dataclass

from optimiser.chemistry.equilibrium import approach_fraction, approach_temperature
from optimiser.chemistry.reactions import Chemistry
from optimiser.forward.bed import BedSize
from optimiser.forward.exchange import Exchanged, exchange
from optimiser.forward.machines import Compressed, CompressedStage
from optimiser.forward.money import Accounts, Bill
from optimiser.forward.properties import Properties, State
from optimiser.forward.reactor import ReactorPass
from optimiser.forward.stream import BedProfile, Floats
from optimiser.forward.train import ColdSide, Parted, TrainPass, separator_size
from optimiser.inputs.case import Case


@dataclass
class Pieces:
    """What one pass computed, piece by piece.

    Attributes:
        makeup: flow of each feed stream, mol/s.
        entry: the feed streams, mixed.
        side: the recycle before and after it is warmed.
        mixed: the converter's feed at loop pressure.
    """

    makeup: dict[str, float]
    entry: State
    stages: list[CompressedStage]
    side: ColdSide
    circulator: Compressed
    mixed: State
    reactor: ReactorPass
    train: TrainPass
    parted: Parted


class Reporter:
    """Turns the pieces of a pass of one case into reported quantities."""

    def __init__(self, case: Case, chemistry: Chemistry, properties: Properties, accounts: Accounts) -> None:
        self.case, self.chemistry, self.properties, self.accounts = case, chemistry, properties, accounts
        names = chemistry.mixture.names
        self._products = [names.index(name) for name in chemistry.products]
        self._inerts = [names.index(name) for name in chemistry.inerts]
        self._key = names.index(chemistry.key_reactant)

    def product_rate(self, liquid: Floats) -> float:
        """Contained product in a liquid, kg/s."""
        return float(sum(liquid[k] * self.properties.molar_mass[k] for k in self._products))

    def quantities(self, pieces: Pieces, setpoints: dict[str, float], *, approaches: bool = True) -> dict[str, float]:
        """All quantities; setpoints that nothing else gives are reported as they were set.

        Args:
            pieces: of one pass.
            setpoints: SI by path.
            approaches: whether the approaches of beds to equilibrium are wanted, which take as long as all
                the rest.
        """
        intercoolers = [self._intercooler(stage) for stage in pieces.stages]
        shown = dict(setpoints)
        shown |= self._feed(pieces) | self._compression(pieces, intercoolers) | self._loop(pieces)
        for name, profile in pieces.reactor.beds.items():
            shown |= self._bed(name, profile, pieces.reactor.sizes[name])
            if approaches:
                shown |= self._approaches(name, profile)
        shown |= self._reactor(pieces) | self._train(pieces) | self._product(pieces)
        for exchanger in [*pieces.reactor.exchangers, *pieces.train.exchangers]:
            shown |= _exchanger(exchanger)
        return shown | self.accounts.quantities(self._bill(pieces, intercoolers))

    def _feed(self, pieces: Pieces) -> dict[str, float]:
        total = sum(pieces.makeup.values())
        shown = {"feed.flow": total}
        for name, flow in pieces.makeup.items():
            shown[f"feed.streams.{name}.flow"] = flow
            if self.case.feed.streams[name].share is not None:
                shown[f"feed.streams.{name}.share"] = flow / total
        return shown

    def _intercooler(self, stage: CompressedStage) -> Exchanged:
        water, machine = self.case.utilities, stage.machine
        hot = machine.outlet.temperature, stage.cooled.temperature
        cold = water.cooling_water_supply.si, water.cooling_water_return.si
        coefficient, path = self.case.compression.coefficient.si, f"compression.{stage.name}"
        return exchange(path, "water_cooled", stage.duty, hot, cold, machine.outlet.pressure, coefficient)

    def _compression(self, pieces: Pieces, intercoolers: list[Exchanged]) -> dict[str, float]:
        shown = {"compression.power": sum(stage.power for stage in pieces.stages)}
        for stage, cooler in zip(pieces.stages, intercoolers, strict=True):
            path, machine = f"compression.{stage.name}", stage.machine
            shown |= {
                f"{path}.discharge_temperature": machine.outlet.temperature,
                f"{path}.power": stage.power,
                f"{path}.ratio": machine.outlet.pressure / machine.inlet.pressure,
                f"{path}.intercooler_duty": stage.duty,
                f"{path}.intercooler_area": cooler.area,
            }
        return shown

    def _loop(self, pieces: Pieces) -> dict[str, float]:
        recycle, circulator = pieces.parted.recycle, pieces.circulator
        shown = {
            "loop.pressure": circulator.outlet.pressure,
            "loop.recycle_ratio": float(recycle.sum()) / sum(pieces.makeup.values()),
            "loop.purge_fraction": pieces.parted.fraction,
            "loop.pressure_drop": circulator.outlet.pressure - circulator.inlet.pressure,
            "loop.circulator_power": circulator.work / self.case.compression.driver_efficiency.si,
        }
        if self._inerts:
            feed = pieces.mixed.flows
            shown["loop.inerts"] = float(sum(feed[k] for k in self._inerts) / feed.sum())
        return shown

    def _bed(self, name: str, profile: BedProfile, size: BedSize) -> dict[str, float]:
        path, inlet, outlet = f"reactor.{name}", profile.inlet, profile.outlet
        return {
            f"{path}.inlet_temperature": inlet.temperature,
            f"{path}.outlet_temperature": outlet.temperature,
            f"{path}.hottest": profile.hottest,
            f"{path}.pressure_drop": inlet.pressure - outlet.pressure,
            f"{path}.length": size.length,
            f"{path}.diameter": size.diameter,
            f"{path}.volume": size.volume,
            f"{path}.product_fraction": float(sum(outlet.vapour[k] for k in self._products)) / outlet.total,
        }

    def _approaches(self, name: str, profile: BedProfile) -> dict[str, float]:
        """Approach to equilibrium of a bed's outlet: of the first reaction, as a fraction and in kelvin."""
        outlet, path = profile.outlet, f"reactor.{name}"
        state = outlet.temperature, outlet.pressure
        inlet, extents = profile.inlet.vapour.tolist(), profile.extents[-1].tolist()
        gas = self.chemistry.mixture.gas(*state, outlet.vapour.tolist())
        return {
            f"{path}.approach_fraction": approach_fraction(self.chemistry, inlet, extents, *state)[0],
            f"{path}.approach_temperature": approach_temperature(self.chemistry, gas, *state)[0],
        }

    def _reactor(self, pieces: Pieces) -> dict[str, float]:
        reactor, beds = pieces.reactor, list(pieces.reactor.beds.values())
        left, fed = beds[-1].outlet.vapour[self._key], pieces.mixed.flows[self._key]
        return {
            "reactor.catalyst_volume": sum(size.volume for size in reactor.sizes.values()),
            "reactor.conversion": 1.0 - float(left / fed),
            "reactor.pressure_drop": beds[0].inlet.pressure - reactor.outlet.pressure,
        }

    def _train(self, pieces: Pieces) -> dict[str, float]:
        separator, cold = pieces.train.separator, pieces.train.refrigeration
        diameter, volume = separator_size(self.case, self.properties, separator)
        shown = {
            "condensation.separator.pressure": separator.pressure,
            "condensation.separator.vapour_fraction": separator.vapour_fraction,
            "condensation.separator.diameter": diameter,
            "condensation.separator.volume": volume,
        }
        return shown | ({} if cold is None else {"condensation.chiller.power": cold.power})

    def _product(self, pieces: Pieces) -> dict[str, float]:
        liquid, purge = pieces.train.separator.liquid, pieces.parted.purge
        rate, total = self.product_rate(liquid), float(liquid.sum())
        wanted = float(sum(liquid[k] for k in self._products))
        return {
            "feed.product_rate": rate,
            "product.rate": rate,
            "product.flow": total,
            "product.purity": wanted / total if total > 0.0 else float("nan"),
            "product.yield": rate / self.properties.mass(pieces.entry.flows),
            "purge.flow": float(purge.sum()),
            "purge.heating_value": self.accounts.heating_value(purge),
        }

    def _bill(self, pieces: Pieces, intercoolers: list[Exchanged]) -> Bill:
        reactor, train = pieces.reactor, pieces.train
        water = sum(stage.duty for stage in pieces.stages) + sum(train.water_duties)
        water += reactor.duties.get("cooling_water", 0.0)
        return Bill(
            makeup=pieces.makeup,
            stage_powers=[stage.power for stage in pieces.stages],
            circulator=pieces.circulator.work / self.case.compression.driver_efficiency.si,
            exchangers=[*reactor.exchangers, *train.exchangers, *intercoolers],
            beds=list(reactor.sizes.values()),
            pressure=pieces.circulator.outlet.pressure,
            separator_pressure=train.separator.pressure,
            separator=separator_size(self.case, self.properties, train.separator),
            refrigeration=train.refrigeration,
            water=water,
            steam=reactor.duties.get("steam"),
            boiler_water=reactor.duties.get("boiler_feed_water"),
            purge=pieces.parted.purge,
            product=self.product_rate(train.separator.liquid),
        )


def _exchanger(exchanger: Exchanged) -> dict[str, float]:
    return {
        f"{exchanger.path}.duty": exchanger.duty,
        f"{exchanger.path}.area": exchanger.area,
        f"{exchanger.path}.approach": exchanger.approach,
        f"{exchanger.path}.outlet_temperature": exchanger.outlet_temperature,
    }
