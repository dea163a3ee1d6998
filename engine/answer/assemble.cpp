// SPDX-License-Identifier: GPL-3.0-or-later
// Parts into seats: lots found by name, typed figures laid over them, and the circuit that they make.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "engine/answer/exposure.hpp"
#include "engine/answer/models.hpp"

namespace binwright {
namespace {

Family family_of(Seat seat) {
    if (seat == Seat::switch_) return Family::switch_;
    return seat == Seat::rectifier ? Family::rectifier : Family::capacitor;
}

std::string article(Family family) { return std::string("a ") + std::string(to_string(family)); }

/// Figures typed in the file stand instead of those of the part with the same symbol.
void lay_over(Part& part, const SeatConfig& config) {
    for (const Figure& typed : config.figures)
        std::erase_if(part.figures, [&](const Figure& figure) { return figure.symbol == typed.symbol; });
    part.figures.insert(part.figures.end(), config.figures.begin(), config.figures.end());
    for (const auto& [name, value] : config.attributes) part.attributes[name] = value;
}

}  // namespace

const PartExposure* find_exposure(const Exposure& exposure, Seat seat, std::size_t entry) {
    const auto found = exposure.seats.find(seat);
    return found == exposure.seats.end() || entry >= found->second.size() ? nullptr : &found->second[entry];
}

const StressValue* PartExposure::find(Stress stress) const {
    for (const StressValue& value : stresses)
        if (value.stress == stress) return &value;
    return nullptr;
}

Setup assemble(Converter converter, const std::function<std::optional<Lot>(const std::string&)>& find) {
    Setup setup;
    std::vector<Fault> faults;
    for (const Seat seat : kSeats) {
        if (converter.topology == nullptr || !has_seat(*converter.topology, seat)) continue;
        const SeatConfig& config = converter.seat(seat);
        std::vector<Fitted>& fitted = setup.fitted[seat];
        for (const FittedConfig& wanted : config.fitted) {
            const auto fault = [&](std::string message, std::string expected) {
                Place place = wanted.place;
                if (place.file.empty()) place.file = converter.file;
                faults.push_back({place, fmt::format("seat.{}.fitted", to_string(seat)), std::move(message), std::move(expected)});
            };
            std::optional<Lot> lot = find(wanted.lot);
            if (!lot)  // a saved file carries the figures it used
                for (const Lot& carried : config.as_fitted)
                    if (carried.label == wanted.lot || carried.part.name == wanted.lot) lot = carried;
            if (!lot) {
                fault(fmt::format("the bin has no lot or part \"{}\"", wanted.lot), "a lot label such as 417-H, or a part name, of the bin");
                continue;
            }
            if (lot->part.family != family_of(seat)) {
                fault(fmt::format("\"{}\" is {}, and the seat takes {}", wanted.lot, article(lot->part.family), article(family_of(seat))),
                      std::string(to_string(family_of(seat))));
                continue;
            }
            if (fitted.size() == 1 && family_of(seat) != Family::capacitor) {
                fault(fmt::format("{} takes one kind of part; mixed banks are for capacitors", to_string(seat)), "one entry");
                continue;
            }
            lay_over(lot->part, config);
            fitted.push_back({*lot, wanted.count});
        }
        if (config.fitted.empty() && !config.figures.empty()) {
            Lot typed;
            typed.part.family = family_of(seat);
            typed.part.name = "figures typed in the file";
            lay_over(typed.part, config);
            fitted.push_back({typed, config.count});
        }
        if (fitted.empty()) setup.fitted.erase(seat);
    }
    if (!faults.empty()) throw InputError(std::move(faults));
    setup.converter = std::move(converter);
    return setup;
}

Setup with_fitted(const Setup& setup, Seat seat, std::vector<Fitted> fitted) {
    Setup other = setup;
    if (fitted.empty()) other.fitted.erase(seat);
    else other.fitted[seat] = std::move(fitted);
    return other;
}

bool ages_unmeasured(const Lot& lot) {
    if (lot.origin != Origin::pulled || lot.part.family != Family::capacitor) return false;
    const CapacitorKind kind = capacitor_kind(lot.part);  // one whose kind stands nowhere may be wet
    if (kind != CapacitorKind::aluminium && kind != CapacitorKind::hybrid && kind != CapacitorKind::unknown) return false;
    bool capacitance = false, resistance = false;
    for (const Figure& figure : lot.part.figures) {
        if (figure.known != Known::measured) continue;
        capacitance |= figure.symbol == Symbol::C;
        resistance |= figure.symbol == Symbol::ESR;
    }
    return !(capacitance && resistance);
}

Models models_of(const Setup& setup, End end, const Allowances& allowances, double frequency) {
    Models models;
    for (const auto& [seat, fitted] : setup.fitted)
        for (const Fitted& entry : fitted) {
            if (seat == Seat::switch_) {
                std::optional<double> gate;
                if (const auto& drive = setup.converter.drive.voltage) gate = end == End::best ? drive->highest : drive->lowest;
                models.switch_ = switch_model(entry.lot.part, end, gate);
                models.switch_count = entry.count;
            } else if (seat == Seat::rectifier) {
                models.rectifier = rectifier_model(entry.lot.part, entry.count, end);
                models.rectifier_count = entry.count;
            } else {
                Ageing ageing;
                if (end == End::worst && ages_unmeasured(entry.lot)) ageing = {allowances.aged_capacitance, allowances.aged_esr};
                models.banks[seat].push_back({capacitor_model(entry.lot.part, frequency, end, ageing), entry.count});
            }
        }
    return models;
}

namespace {

[[noreturn]] void lacks(const Converter& converter, const std::string& field, const std::string& message, const std::string& expected) {
    throw InputError(Fault{{converter.file, 0, 0}, field, message, expected});
}

/// Mean voltage across the coupling capacitor [V]: windings carry none, so each of its nodes stands where a winding ties it.
double coupling_bias(const Topology& topology, const At& at) {
    std::vector<std::optional<double>> potential(topology.nodes.size());
    potential[0] = 0;
    for (const Branch& branch : topology.branches) {
        if (branch.kind == BranchKind::source) potential[branch.from] = at.input_voltage;
        if (branch.kind == BranchKind::load) {
            if (branch.from == 0) potential[branch.to] = -at.output_voltage;
            else potential[branch.from] = at.output_voltage;
        }
    }
    for (std::size_t round = 0; round < topology.nodes.size(); ++round)
        for (const Branch& branch : topology.branches) {
            if (branch.kind != BranchKind::primary && branch.kind != BranchKind::secondary) continue;
            if (potential[branch.from] && !potential[branch.to]) potential[branch.to] = potential[branch.from];
            if (potential[branch.to] && !potential[branch.from]) potential[branch.from] = potential[branch.to];
        }
    for (const Branch& branch : topology.branches)
        if (branch.seat == Seat::coupling_capacitor) return std::abs(potential[branch.from].value_or(0) - potential[branch.to].value_or(0));
    return 0;
}

std::vector<CapacitorValues> bank_of(const Setup& setup, const Models& models, Seat seat, double voltage, const At& at, End end) {
    std::vector<CapacitorValues> bank;
    const auto fitted = models.banks.find(seat);
    if (fitted != models.banks.end()) {
        for (const BankModel& kind : fitted->second) {
            if (!kind.model.capacitance) continue;
            const double c = *kind.model.capacitance * bias_factor(kind.model, voltage, end);
            bank.push_back({c * kind.count, kind.model.resistance.value_or(0) * cold_factor(kind.model, at.ambient, end) / kind.count});
        }
        return bank;
    }
    const auto& element = setup.converter.seat(seat).element;
    if (element && element->capacitance) bank.push_back({*element->capacitance, element->resistance.value_or(0)});
    return bank;
}

}  // namespace

Circuit circuit_of(const Setup& setup, const Models& models, End end, const At& at) {
    const Converter& converter = setup.converter;
    Circuit circuit;
    circuit.topology = converter.topology;
    if (converter.source) {
        circuit.source_resistance = converter.source->resistance;
        circuit.source_inductance = converter.source->inductance;
        circuit.source = circuit.source_resistance == 0 && circuit.source_inductance == 0 ? SourceKind::stiff : SourceKind::impedance;
    }
    if (!converter.winding.primary)
        lacks(converter, "winding.primary.inductance", "the file gives no [winding.primary]; nothing can be computed without its inductance",
              "an inductance such as 33 µH");
    circuit.primary = {converter.winding.primary->inductance, converter.winding.primary->resistance};
    if (has_secondary(*converter.topology)) {
        circuit.secondary = converter.winding.secondary
                                ? WindingValues{converter.winding.secondary->inductance, converter.winding.secondary->resistance}
                                : circuit.primary;
        if (converter.topology->transformer && !converter.winding.secondary) circuit.secondary.resistance = 0;
        circuit.turns_ratio = converter.winding.turns_ratio;
        if (converter.winding.coupling) circuit.coupling = converter.winding.coupling->middle();
        else if (converter.winding.leakage)
            circuit.coupling = std::sqrt(std::max(0.0, 1 - converter.winding.leakage->middle() / circuit.primary.inductance));
        else if (converter.topology->transformer) circuit.coupling = 1;
    }
    circuit.sense_resistance = converter.drive.sense_resistance.value_or(0);
    circuit.maximum_duty = converter.drive.maximum_duty.value_or(1);
    circuit.minimum_on_time = converter.drive.minimum_on_time.value_or(0);
    constexpr double room = kCelsiusZero + 25;
    if (models.switch_) {
        if (models.switch_->resistance) circuit.switch_resistance = on_resistance(*models.switch_, models.switch_count, room);
    } else if (const auto& element = converter.seat(Seat::switch_).element) {
        circuit.switch_resistance = element->resistance.value_or(0);
    }
    if (models.rectifier) {
        if (models.rectifier->threshold) {
            circuit.rectifier_drop = forward_threshold(*models.rectifier, room);
            circuit.rectifier_resistance = forward_resistance(*models.rectifier, room);
        }
    } else if (const auto& element = converter.seat(Seat::rectifier).element) {
        circuit.rectifier_drop = element->drop.value_or(0);
        circuit.rectifier_resistance = element->resistance.value_or(0);
    }
    circuit.input = bank_of(setup, models, Seat::input_capacitor, at.input_voltage, at, end);
    circuit.output = bank_of(setup, models, Seat::output_capacitor, at.output_voltage, at, end);
    if (circuit.output.empty())
        lacks(converter, "seat.output_capacitor", "nothing is known of the output capacitor; nothing can be computed without its capacitance",
              "a fitted lot, figures, or an element");
    if (has_seat(*converter.topology, Seat::coupling_capacitor)) {
        circuit.coupling_capacitor = bank_of(setup, models, Seat::coupling_capacitor, coupling_bias(*converter.topology, at), at, end);
        if (circuit.coupling_capacitor.empty())
            lacks(converter, "seat.coupling_capacitor",
                  "nothing is known of the coupling capacitor; nothing can be computed without its capacitance",
                  "a fitted lot, figures, or an element");
    }
    if (circuit.source == SourceKind::impedance && circuit.source_inductance > 0 && circuit.input.empty())
        lacks(converter, "seat.input_capacitor",
              "nothing is known of the input capacitor, and the source's inductance needs one", "a fitted lot, figures, or an element");
    return circuit;
}

Circuit circuit_of(const Setup& setup, End end, const Allowances& allowances, const At& at) {
    return circuit_of(setup, models_of(setup, end, allowances, at.frequency), end, at);
}

OperatingPoint point_of(const Setup& setup, const At& at) {
    OperatingPoint point{};
    const OperatingRange& range = setup.converter.operating;
    point.input_voltage = at.input_voltage;
    point.output_voltage = at.output_voltage;
    point.frequency = at.frequency;
    point.load = range.load;
    switch (range.load) {
        case LoadKind::current: point.load_value = at.output_current; break;
        case LoadKind::resistance:
            // Fixed at the top of both ranges; a point that names its own current fixes it there.
            point.load_value = at.output_current > 0 ? at.output_voltage / at.output_current : 1e9;
            break;
        case LoadKind::power: point.load_value = at.output_voltage * at.output_current; break;
    }
    return point;
}

}  // namespace binwright
