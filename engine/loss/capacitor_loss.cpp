// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/loss/capacitor_loss.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numbers>

#include "engine/loss/figures.hpp"

namespace binwright {
namespace {

constexpr double kLongestLife = 15 * 365.25 * 86400;  // cap of published life estimates

struct KindRow {
    std::string_view technology;
    CapacitorKind kind;
    double rated_rise;  ///< [K]
};
constexpr KindRow kKinds[] = {
    {"aluminium", CapacitorKind::aluminium, 5},       {"polymer", CapacitorKind::polymer, 20},
    {"hybrid", CapacitorKind::hybrid, 5},             {"tantalum", CapacitorKind::tantalum, 20},
    {"tantalum polymer", CapacitorKind::tantalum_polymer, 20}, {"ceramic 1", CapacitorKind::ceramic1, 20},
    {"ceramic 2", CapacitorKind::ceramic2, 20},       {"film", CapacitorKind::film, 10},
};

double frequency_factor(CapacitorKind kind, double rated_at, double working, End end) {
    if (kind != CapacitorKind::aluminium && kind != CapacitorKind::hybrid) return 1;
    const double full = end == End::best ? 1.7 : end == End::worst ? 1.2 : 1.4;
    const auto factor = [&](double hertz) {  // 1 at 120 Hz, `full` from 100 kHz on, straight in log f
        const double share = std::clamp(std::log(hertz / 120) / std::log(100e3 / 120), 0.0, 1.0);
        return 1 + (full - 1) * share;
    };
    return factor(working) / factor(rated_at);
}

}  // namespace

CapacitorKind capacitor_kind(const Part& part) {
    const std::string_view technology = attribute(part, "technology");
    for (const KindRow& row : kKinds)
        if (row.technology == technology) return row.kind;
    return CapacitorKind::unknown;
}

CapacitorModel capacitor_model(const Part& part, double frequency, End end, const Ageing& ageing) {
    CapacitorModel model;
    model.kind = capacitor_kind(part);
    for (const KindRow& row : kKinds)
        if (row.kind == model.kind) model.rated_rise = row.rated_rise;
    model.aged = ageing.capacitance != 1 || ageing.resistance != 1;
    model.capacitance = end_value(part, Symbol::C, end);
    if (model.capacitance) *model.capacitance *= ageing.capacitance;
    else model.missing.push_back("C");
    if (const auto esr = end_value(part, Symbol::ESR, end)) {
        model.resistance = *esr * ageing.resistance;
    } else if (const auto figures = figures_of(part, Symbol::tan_delta); !figures.empty() && model.capacitance) {
        const double at = figures.front()->at.frequency.value_or(*info(Symbol::tan_delta).usual.frequency);
        model.resistance = at_end(figures.front()->value, end) / (2 * std::numbers::pi * at * *model.capacitance / ageing.capacitance) * ageing.resistance;
        model.rests_on.push_back(fmt::format("ESR from tan δ at {}: an upper bound at the working frequency", format_quantity(at, Unit::hertz)));
    } else {
        model.missing.push_back("ESR");
    }
    if (const auto figures = figures_of(part, Symbol::I_ripple); !figures.empty()) {
        const Figure& figure = *figures.front();
        const double at = figure.at.frequency.value_or(*info(Symbol::I_ripple).usual.frequency);
        if (!figure.at.frequency) model.rests_on.push_back("ripple rating without a frequency counted as at 120 Hz");
        const double factor = frequency_factor(model.kind, at, frequency, end);
        if (std::abs(factor - 1) > 1e-9)
            model.rests_on.push_back(fmt::format("ripple rating taken ×{:.2f} from {} to {}", factor, format_quantity(at, Unit::hertz),
                                                 format_quantity(frequency, Unit::hertz)));
        model.ripple = at_end(figure.value, end) * factor;
    } else {
        model.missing.push_back("I_R~");
    }
    model.highest_temperature = end_value(part, Symbol::T_max, end);
    if (!model.highest_temperature) model.missing.push_back("T_max");
    model.life = end_value(part, Symbol::life, end);
    model.rated_voltage = end_value(part, Symbol::U_R, end);
    return model;
}

double bias_factor(const CapacitorModel& model, double voltage, End end) {
    if (model.kind != CapacitorKind::ceramic2 || !model.rated_voltage || !(*model.rated_voltage > 0)) return 1;
    const double share = std::clamp(voltage / *model.rated_voltage, 0.0, 1.0);
    const double half = end == End::best ? 0.9 : end == End::worst ? 0.5 : 0.7;
    const double full = end == End::best ? 0.6 : end == End::worst ? 0.25 : 0.4;
    return share <= 0.5 ? 1 + (half - 1) * share / 0.5 : half + (full - half) * (share - 0.5) / 0.5;
}

std::optional<double> ripple_rise(const CapacitorModel& model, double current) {
    if (!model.ripple || !(*model.ripple > 0)) return std::nullopt;
    const double ratio = current / *model.ripple;
    return model.rated_rise * ratio * ratio;
}

std::optional<double> capacitor_life(const CapacitorModel& model, double hot_spot) {
    if (!model.life || !model.highest_temperature) return std::nullopt;
    const double warm = std::max(hot_spot, kCelsiusZero + 40);
    const double room = *model.highest_temperature - warm;
    switch (model.kind) {
        case CapacitorKind::aluminium:
        case CapacitorKind::hybrid: return std::min(kLongestLife, *model.life * std::exp2(room / 10));
        case CapacitorKind::polymer: return std::min(kLongestLife, *model.life * std::pow(10, room / 20));
        default: return std::nullopt;
    }
}

}  // namespace binwright
