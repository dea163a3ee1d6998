// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/loss/switch_loss.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "engine/loss/figures.hpp"

namespace binwright {

namespace {

double gate_of(const Figure& figure) { return figure.at.voltage.value_or(*info(Symbol::R_DSon).usual.voltage); }

/// Those of the on-state resistances that stand for this drive.
std::vector<const Figure*> driven(std::vector<const Figure*> figures, std::optional<double> drive, std::vector<std::string>& rests_on) {
    if (figures.empty()) return figures;
    double reached = 0, lowest = gate_of(*figures.front());
    for (const Figure* figure : figures) {
        const double gate = gate_of(*figure);
        lowest = std::min(lowest, gate);
        if (!drive || gate <= *drive * (1 + 1e-9)) reached = std::max(reached, gate);
    }
    if (reached == 0) {
        reached = lowest;
        rests_on.push_back(fmt::format("R_DS(on) stated at a gate voltage of {}, and the drive may give {}", format_quantity(lowest, Unit::volt),
                                       format_quantity(drive.value_or(0), Unit::volt)));
    }
    std::erase_if(figures, [&](const Figure* figure) { return gate_of(*figure) != reached; });
    return figures;
}

}  // namespace

SwitchModel switch_model(const Part& part, End end, std::optional<double> drive) {
    SwitchModel model;
    const std::vector<const Figure*> resistances = driven(figures_of(part, Symbol::R_DSon), drive, model.rests_on);
    if (resistances.empty()) {
        model.missing.push_back("R_DS(on)");
    } else {
        const Figure* cold = resistances.front();
        const Figure* hot = nullptr;
        const auto from_room = [](const Figure& figure) { return std::abs(temperature_of(figure, kCelsiusZero + 25) - kCelsiusZero - 25); };
        for (const Figure* figure : resistances) {  // the figure nearest 25 °C, of several the one that this end means
            const double nearer = from_room(*cold) - from_room(*figure);
            const double value = at_end(figure->value, end), other = at_end(cold->value, end);
            const bool meant = end == End::worst ? value > other : end == End::best && value < other;
            if (nearer > 1 || (std::abs(nearer) <= 1 && meant)) cold = figure;
        }
        for (const Figure* figure : resistances)
            if (temperature_of(*figure, kCelsiusZero + 25) > temperature_of(*cold, kCelsiusZero + 25) + 20) hot = figure;
        model.resistance = at_end(cold->value, end);
        model.reference = temperature_of(*cold, kCelsiusZero + 25);
        if (hot != nullptr) {
            const double span = temperature_of(*hot, kCelsiusZero + 25) - model.reference;
            model.growth = std::pow(at_end(hot->value, end) / *model.resistance, 1 / span) - 1;
        } else {
            model.growth = end == End::best ? 0.0045 : end == End::worst ? 0.0065 : 0.0054;
            model.rests_on.push_back(fmt::format("R_DS(on) taken to grow {:.2f} % per kelvin, as of its kind", 100 * model.growth));
        }
    }
    const auto threshold = end_value(part, Symbol::V_GSth, End::typical);
    const auto gate_charge = end_value(part, Symbol::Q_g, end);
    auto drain_charge = end_value(part, Symbol::Q_gd, end);
    const auto source_charge = end_value(part, Symbol::Q_gs, end);
    model.gate_charge = gate_charge;
    if (!drain_charge && gate_charge) {
        drain_charge = (end == End::best ? 0.25 : end == End::worst ? 0.45 : 0.35) * *gate_charge;
        model.rests_on.push_back(fmt::format("Q_gd taken as {:.0f} % of Q_g, as of its kind", 100 * *drain_charge / *gate_charge));
    }
    if (threshold) {
        model.plateau = 1.6 * *threshold;
        model.rests_on.push_back(fmt::format("gate plateau taken at {:.1f} V, 1.6 times V_GS(th)", *model.plateau));
    } else if (drain_charge) {
        model.plateau = 4.5;
        model.rests_on.push_back("gate plateau taken at 4.5 V, V_GS(th) not on record");
    }
    if (drain_charge) {
        const double above = source_charge ? *source_charge * (1 - 1 / 1.6) : 0.0;
        model.switching_charge = *drain_charge + above;
    } else {
        model.missing.push_back("Q_g");
    }
    const std::vector<const Figure*> capacitances = figures_of(part, Symbol::C_oss);
    if (!capacitances.empty()) {
        model.output_capacitance = at_end(capacitances.front()->value, end);
        model.output_capacitance_at = capacitances.front()->at.voltage.value_or(*info(Symbol::C_oss).usual.voltage);
    } else {
        model.missing.push_back("C_oss");
    }
    if (const auto inside = end_value(part, Symbol::R_g, end)) {
        model.gate_resistance = *inside;
    } else {
        model.gate_resistance = end == End::best ? 0.5 : end == End::worst ? 4 : 1.5;
        model.rests_on.push_back(fmt::format("R_g taken as {:.1f} Ω, as of its kind", model.gate_resistance));
    }
    return model;
}

double on_resistance(const SwitchModel& model, int count, double junction) {
    if (!model.resistance) throw OutsideModel("R_DS(on) is not on record");
    return *model.resistance / count * std::pow(1 + model.growth, junction - model.reference);
}

SwitchLoss switch_loss(const SwitchModel& model, int count, const GateDrive& drive, const SwitchStress& stress, double frequency,
                       double junction) {
    if (!(count >= 1)) throw OutsideModel(fmt::format("{} switches in parallel; at least 1 is meant", count));
    if (!(junction > 0)) throw OutsideModel(fmt::format("the junction temperature is {:.4g} K; it must be above 0 K", junction));
    SwitchLoss loss;
    if (model.resistance) {
        loss.conduction = stress.current_rms * stress.current_rms * on_resistance(model, count, junction);
        loss.conduction_slope = loss.conduction * std::log1p(model.growth);
    }
    if (model.switching_charge && model.plateau) {
        if (!(drive.voltage > *model.plateau))
            throw OutsideModel(fmt::format("the gate drive of {:.3g} V does not exceed the plateau of {:.3g} V", drive.voltage, *model.plateau));
        const double charge = *model.switching_charge * count;
        const double resistance = drive.resistance + model.gate_resistance / count;
        const double on_time = charge * resistance / (drive.voltage - *model.plateau);
        const double off_time = charge * resistance / *model.plateau;
        loss.overlap = 0.5 * frequency *
                       (std::max(0.0, stress.voltage_turn_on * stress.current_turn_on) * on_time +
                        std::max(0.0, stress.voltage_turn_off * stress.current_turn_off) * off_time);
    }
    if (model.output_capacitance && stress.voltage_turn_on > 0)
        loss.output = count * frequency * capacitance_energy(*model.output_capacitance, *model.output_capacitance_at, stress.voltage_turn_on);
    if (model.gate_charge) loss.gate = count * *model.gate_charge * drive.voltage * frequency;
    return loss;
}

}  // namespace binwright
