// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/loss/capacitor_loss.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <locale>
#include <numbers>
#include <sstream>
#include <utility>

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
    // Downwards in frequency it is the steep curve that leaves least of a rating.
    const bool steep = working >= rated_at ? end == End::best : end == End::worst;
    const double full = end == End::typical ? 1.4 : steep ? 1.7 : 1.2;
    const auto factor = [&](double hertz) {  // 1 at 120 Hz, `full` from 100 kHz on, straight in log f
        const double share = std::clamp(std::log(hertz / 120) / std::log(100e3 / 120), 0.0, 1.0);
        return 1 + (full - 1) * share;
    };
    return factor(working) / factor(rated_at);
}

/// Of several figures of one symbol the one nearest in frequency; at equal distance the first.
const Figure* nearest(const std::vector<const Figure*>& figures, double frequency) {
    const Figure* found = nullptr;
    double least = 0;
    for (const Figure* figure : figures) {
        const double away = std::abs(std::log(figure->at.frequency.value_or(*info(figure->symbol).usual.frequency) / frequency));
        if (found == nullptr || away < least) found = figure, least = away;
    }
    return found;
}

/// Rise of the core over that of the case by diameter [mm], as printed in a maker's life calculation sheet.
constexpr std::pair<double, double> kCoreOverCase[] = {{8, 1.0}, {12.5, 1.1}, {18, 1.2}, {22, 1.3}, {25, 1.4}, {30, 1.5}, {1e9, 1.6}};

/// "10x20 mm": diameter and length of a round can.
void read_can(CapacitorModel& model, const Part& part) {
    if (model.kind != CapacitorKind::aluminium && model.kind != CapacitorKind::hybrid && model.kind != CapacitorKind::polymer) return;
    double diameter = 0, length = 0;
    char x = 0;
    std::istringstream text{std::string(attribute(part, "can"))};
    text.imbue(std::locale::classic());
    if (!(text >> diameter >> x >> length) || x != 'x' || !(diameter > 0) || !(length > 0)) return;
    model.surface = std::numbers::pi / 4 * diameter * (diameter + 4 * length) * 1e-6;
    for (const auto& [most, ratio] : kCoreOverCase)
        if (diameter <= most) {
            model.core_over_case = ratio;
            break;
        }
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
    read_can(model, part);
    if (const Figure* esr = nearest(figures_of(part, Symbol::ESR), frequency)) {
        model.resistance = at_end(esr->value, end) * ageing.resistance;
    } else if (const auto figures = figures_of(part, Symbol::tan_delta); !figures.empty() && model.capacitance) {
        const double at = figures.front()->at.frequency.value_or(*info(Symbol::tan_delta).usual.frequency);
        model.resistance = at_end(figures.front()->value, end) / (2 * std::numbers::pi * at * *model.capacitance / ageing.capacitance) * ageing.resistance;
        model.rests_on.push_back(fmt::format("ESR from tan δ at {}: an upper bound at the working frequency", format_quantity(at, Unit::hertz)));
    } else {
        model.missing.push_back("ESR");
    }
    model.highest_temperature = end_value(part, Symbol::T_max, end);
    if (const Figure* nearby = nearest(figures_of(part, Symbol::I_ripple), frequency)) {
        const Figure& figure = *nearby;
        const double at = figure.at.frequency.value_or(*info(Symbol::I_ripple).usual.frequency);
        if (!figure.at.frequency) model.rests_on.push_back("ripple rating without a frequency counted as at 120 Hz");
        const double factor = frequency_factor(model.kind, at, frequency, end);
        if (std::abs(factor - 1) > 1e-9)
            model.rests_on.push_back(fmt::format("ripple rating taken ×{:.2f} from {} to {}", factor, format_quantity(at, Unit::hertz),
                                                 format_quantity(frequency, Unit::hertz)));
        model.ripple = at_end(figure.value, end) * factor;
        if (figure.at.temperature && model.highest_temperature && *figure.at.temperature < *model.highest_temperature - 1) {
            const double below = *model.highest_temperature - *figure.at.temperature;
            model.rated_rise += below;
            model.rests_on.push_back(fmt::format("ripple rating stated {:.0f} K below T_max: counted as heating up to it and beyond", below));
        }
    } else {
        model.missing.push_back("I_R~");
    }
    if (!model.highest_temperature) model.missing.push_back("T_max");
    model.life = end_value(part, Symbol::life, end);
    model.rated_voltage = end_value(part, Symbol::U_R, end);
    return model;
}

double cold_factor(const CapacitorModel& model, double temperature, End end) {
    constexpr double room = kCelsiusZero + 20;
    if (!(temperature < room) || !(temperature > 0)) return 1;
    double doubling = 0;
    switch (model.kind) {
        case CapacitorKind::aluminium:
        case CapacitorKind::unknown: doubling = end == End::best ? 35 : end == End::typical ? 23 : 18; break;
        case CapacitorKind::hybrid: doubling = end == End::best ? 60 : end == End::typical ? 40 : 30; break;
        case CapacitorKind::tantalum: doubling = end == End::best ? 60 : end == End::typical ? 50 : 40; break;
        default: return 1;
    }
    return std::exp2((room - temperature) / doubling);
}

double bias_factor(const CapacitorModel& model, double voltage, End end) {
    if (model.kind != CapacitorKind::ceramic2 || !model.rated_voltage || !(*model.rated_voltage > 0)) return 1;
    const double share = std::clamp(voltage / *model.rated_voltage, 0.0, 1.0);
    const double half = end == End::best ? 0.9 : end == End::worst ? 0.5 : 0.7;
    const double full = end == End::best ? 0.6 : end == End::worst ? 0.25 : 0.4;
    return share <= 0.5 ? 1 + (half - 1) * share / 0.5 : half + (full - half) * (share - 0.5) / 0.5;
}

double surface_rise(const SurfaceHeating& heating) {
    if (!(heating.surface > 0)) throw OutsideModel(fmt::format("the surface is {:.4g} m²; it must be above 0", heating.surface));
    if (!(heating.transfer > 0)) throw OutsideModel(fmt::format("the heat transfer is {:.4g} W/(m²·K); it must be above 0", heating.transfer));
    if (!(heating.resistance >= 0)) throw OutsideModel(fmt::format("the ESR is {:.4g} Ω; it must be 0 or more", heating.resistance));
    return heating.current * heating.current * heating.resistance / (heating.transfer * heating.surface);
}

double surface_transfer(double surface) { return 23 * std::pow(surface * 1e4, -0.2); }

std::optional<double> ripple_rise(const CapacitorModel& model, double current) {
    if (!model.ripple || !(*model.ripple > 0)) {
        if (!model.surface || !model.core_over_case || !model.resistance) return std::nullopt;
        return *model.core_over_case * surface_rise({current, *model.resistance, *model.surface, surface_transfer(*model.surface)});
    }
    const double ratio = current / *model.ripple;
    return model.rated_rise * ratio * ratio;
}

std::optional<double> capacitor_life(const CapacitorModel& model, double hot_spot) {
    if (!model.life || !model.highest_temperature) return std::nullopt;
    const double warm = std::max(hot_spot, kCelsiusZero + 40);
    const double room = *model.highest_temperature - warm + model.life_rise;
    switch (model.kind) {
        case CapacitorKind::aluminium:
        case CapacitorKind::hybrid: return std::min(kLongestLife, *model.life * std::exp2(room / 10));
        case CapacitorKind::polymer: return std::min(kLongestLife, *model.life * std::pow(10, room / 20));
        default: return std::nullopt;
    }
}

}  // namespace binwright
