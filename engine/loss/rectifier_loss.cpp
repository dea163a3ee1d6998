// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/loss/rectifier_loss.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>

#include "engine/loss/figures.hpp"

namespace binwright {
namespace {

constexpr double kRoom = kCelsiusZero + 25;

struct Line {
    double threshold, resistance;  ///< of one leg
};

constexpr double kFarApart = 8;  ///< ratio of two currents from which the curve between them stands clear above the straight line

/// How far a curve that is all logarithm stands above its chord, at most: the most that two figures far apart leave open.
double sag(double low, double high, double rise) {
    const double ratio = std::log(high / low), at = (high - low) / ratio;
    return rise * (std::log(at / low) / ratio - (at - low) / (high - low));
}

void read_forward(RectifierModel& model, const Part& part, End end, double legs) {
    const std::vector<const Figure*> figures = figures_of(part, Symbol::V_F);
    if (figures.empty()) {
        model.missing.push_back("V_F");
        return;
    }
    std::map<double, std::vector<std::pair<double, double>>> by_temperature;  // T → (I of one leg, V_F)
    const auto rated = end_value(part, Symbol::I_FAV, End::typical);
    for (const Figure* figure : figures) {
        double current = figure->at.current.value_or(rated.value_or(1.0));
        if (!figure->at.current) model.rests_on.push_back("V_F taken at the rated average current, no current stated");
        if (figure->both_legs) current /= 2;
        by_temperature[temperature_of(*figure, kRoom)].emplace_back(current, at_end(figure->value, end));
    }
    const double share = model.pn ? 0.8 : 0.7;
    std::map<double, Line> lines;
    bool guessed = false;
    for (auto& [temperature, points] : by_temperature) {
        std::sort(points.begin(), points.end());
        Line line{};
        if (points.size() > 1 && points.back().first > points.front().first) {
            line.resistance = std::max(0.0, (points.back().second - points.front().second) / (points.back().first - points.front().first));
            for (const auto& [current, volts] : points)  // no figure lies above the line
                line.threshold = std::max(line.threshold, volts - line.resistance * current);
            const double low = points.front().first, high = points.back().first, rise = points.back().second - points.front().second;
            if (low > 0 && high > kFarApart * low && points.size() == 2 && rise > 0 && end != End::best) {
                const double above = (end == End::worst ? 1.0 : 0.5) * sag(low, high, rise);
                line.threshold += above;
                model.rests_on.push_back(fmt::format("V_F between {} and {} counted {} above the straight line", format_quantity(low, Unit::ampere), format_quantity(high, Unit::ampere),
                                                     format_quantity(above, Unit::volt, 2)));
            }
        } else {
            line.threshold = share * points.front().second;
            // At the best end nothing more than the threshold: what one current tells of others is a guess, and no ground to reject on.
            line.resistance = end == End::best ? 0 : (1 - share) * points.front().second / points.front().first;
            guessed = true;
        }
        lines[temperature] = line;
    }
    if (guessed)
        model.rests_on.push_back(fmt::format("V_T0 taken as {:.0f} % of V_F where one current is on record", 100 * share));
    const auto first = lines.begin(), last = std::prev(lines.end());
    model.reference = first->first;
    model.threshold = first->second.threshold;
    model.resistance = first->second.resistance / legs;
    if (last != first) {
        const double span = last->first - first->first;
        model.threshold_slope = (last->second.threshold - first->second.threshold) / span;
        model.resistance_slope = (last->second.resistance - first->second.resistance) / span / legs;
    } else {
        model.threshold_slope = model.pn ? -2e-3 : -1.2e-3;
        model.rests_on.push_back(fmt::format("V_F taken to fall {:.1f} mV/K, as of its kind", -1e3 * model.threshold_slope));
    }
}

void read_leakage(RectifierModel& model, const Part& part, End end, double legs) {
    const std::vector<const Figure*> figures = figures_of(part, Symbol::I_R);
    if (figures.empty()) {
        model.missing.push_back("I_R");
        return;
    }
    const auto amperes = [&](const Figure& figure) { return at_end(figure.value, end) * (figure.both_legs ? legs / 2 : legs); };
    const auto rated = end_value(part, Symbol::V_RRM, End::typical);
    const auto volts = [&](const Figure& figure) { return figure.at.voltage ? figure.at.voltage : rated; };
    const auto kelvin = [](const Figure& figure) { return temperature_of(figure, kRoom); };
    const auto read = [](const Figure& figure) { return figure.known == Known::measured; };
    // Slopes come from two figures of one origin: a print's limit against a part's own reading tells nothing of either.
    double widest = 15;
    bool growth_known = false;
    for (const Figure* hot : figures)
        for (const Figure* cold : figures) {
            if (read(*hot) != read(*cold) || !(amperes(*cold) > 0) || !(amperes(*hot) > amperes(*cold))) continue;
            const double span = kelvin(*hot) - kelvin(*cold);
            if (span > widest && volts(*hot) == volts(*cold)) {
                widest = span;
                model.leakage_growth = std::log(amperes(*hot) / amperes(*cold)) / span;
                growth_known = true;
            } else if (std::abs(span) < 1 && volts(*hot) && volts(*cold) && *volts(*hot) > *volts(*cold) && *volts(*cold) > 0) {
                model.leakage_exponent = std::log(amperes(*hot) / amperes(*cold)) / std::log(*volts(*hot) / *volts(*cold));
            }
        }
    double hottest = 0;
    for (const Figure* figure : figures) hottest = std::max(hottest, kelvin(*figure));
    const auto foretells = [&](const Figure& figure) {
        const double bias = rated && volts(figure) && *volts(figure) > 0 ? std::pow(*rated / *volts(figure), model.leakage_exponent) : 1.0;
        return amperes(figure) * std::exp(model.leakage_growth * (hottest - kelvin(figure))) * bias;
    };
    const Figure* main = nullptr;
    for (const Figure* figure : figures) {
        const bool better = main == nullptr                       ? true
                            : end == End::worst                   ? foretells(*figure) > foretells(*main)
                            : read(*figure) != read(*main)        ? read(*figure)
                                                                  : kelvin(*figure) > kelvin(*main);
        if (better) main = figure;
    }
    model.leakage = amperes(*main);
    model.leakage_temperature = kelvin(*main);
    model.leakage_voltage = volts(*main);
    if (!growth_known) model.rests_on.push_back("leakage taken to grow with c = 0.055/K (one temperature on record)");
    if (figures.size() > 1 && kelvin(*main) < hottest - 15)
        model.rests_on.push_back(fmt::format("leakage carried up from the figure at {}", format_quantity(kelvin(*main), Unit::celsius)));
}

}  // namespace

RectifierModel rectifier_model(const Part& part, int count, End end) {
    RectifierModel model;
    const std::string_view arrangement = attribute(part, "arrangement");
    const bool dual = arrangement == "common cathode" || arrangement == "common anode";
    const std::string_view used = attribute(part, "legs_used");
    const int legs_each = dual && used != "1" ? 2 : 1;
    model.legs = legs_each * count;
    const std::string_view technology = attribute(part, "technology");
    model.pn = !technology.empty() && technology != "schottky";
    const double legs = model.legs;
    read_forward(model, part, end, legs);
    read_leakage(model, part, end, legs);
    const std::vector<const Figure*> capacitances = figures_of(part, Symbol::C_j);
    if (!capacitances.empty()) {
        model.capacitance = at_end(capacitances.front()->value, end) * (capacitances.front()->both_legs ? legs / 2 : legs);
        model.capacitance_at = capacitances.front()->at.voltage.value_or(*info(Symbol::C_j).usual.voltage);
    } else {
        model.missing.push_back("C_j");
    }
    model.recovers = model.pn || technology.empty();
    if (model.recovers) {
        if (const auto charge = end_value(part, Symbol::Q_rr, end))
            model.recovery_charge = *charge * legs;
        else if (const auto time = end_value(part, Symbol::t_rr, end)) {
            // Charge of a triangle of t_rr with half the rated current as its peak.
            model.recovery_charge = 0.25 * *time * end_value(part, Symbol::I_FAV, End::typical).value_or(1.0) * legs;
            model.rests_on.push_back("Q_rr estimated from t_rr and half of the rated current");
        } else {
            model.missing.push_back("Q_rr");
        }
    }
    return model;
}

double forward_threshold(const RectifierModel& model, double junction) {
    return std::max(0.05, model.threshold.value_or(0) + model.threshold_slope * (junction - model.reference));
}

double forward_resistance(const RectifierModel& model, double junction) {
    return std::max(0.0, model.resistance + model.resistance_slope * (junction - model.reference));
}

double leakage(const RectifierModel& model, double voltage, double junction) {
    if (!model.leakage || !(voltage > 0)) return 0;
    const double hot = std::exp(std::min(60.0, model.leakage_growth * (junction - model.leakage_temperature)));
    const double bias = model.leakage_voltage && model.leakage_exponent != 0 ? std::pow(voltage / *model.leakage_voltage, model.leakage_exponent) : 1.0;
    return *model.leakage * hot * bias;
}

RectifierLoss rectifier_loss(const RectifierModel& model, const RectifierStress& stress, const std::vector<WeightedVoltage>& reverse_profile,
                             double frequency, double junction) {
    if (!(junction > 0)) throw OutsideModel(fmt::format("the junction temperature is {:.4g} K; it must be above 0 K", junction));
    RectifierLoss loss;
    if (model.threshold) {
        loss.forward = forward_threshold(model, junction) * stress.current_average +
                       forward_resistance(model, junction) * stress.current_rms * stress.current_rms;
        loss.slope = model.threshold_slope * stress.current_average + model.resistance_slope * stress.current_rms * stress.current_rms;
    }
    for (const WeightedVoltage& stretch : reverse_profile) loss.reverse += stretch.weight * stretch.voltage * leakage(model, stretch.voltage, junction);
    loss.reverse_slope = model.leakage_growth * loss.reverse;
    loss.slope += loss.reverse_slope;
    if (model.capacitance) {
        const double v = stress.voltage_turn_on;
        loss.junction = frequency * std::max(0.0, v * capacitance_charge(*model.capacitance, *model.capacitance_at, v) -
                                                      capacitance_energy(*model.capacitance, *model.capacitance_at, v));
    }
    if (model.recovery_charge && stress.current_turn_off > 0) loss.recovery = *model.recovery_charge * stress.voltage_turn_on * frequency;
    return loss;
}

}  // namespace binwright
