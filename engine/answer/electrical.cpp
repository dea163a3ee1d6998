// SPDX-License-Identifier: GPL-3.0-or-later
// Electrical stresses alone, of parts at their typical figures and of bare elements exactly as given.
#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>

#include "engine/answer/exposure.hpp"
#include "engine/answer/models.hpp"

namespace binwright {
namespace {

struct Named {
    std::string name;
    double value;
    bool lowest = false;
};

/// Every figure of a point under the name it carries in answers.
std::vector<Named> named(const SteadyState& state, const Topology& topology) {
    std::vector<Named> all = {
        {"switch.voltage_peak", state.switch_.voltage_peak},
        {"switch.current_peak", state.switch_.current_peak},
        {"switch.current_rms", state.switch_.current_rms},
        {"switch.current_average", state.switch_.current_average},
        {"switch.current_turn_on", state.switch_.current_turn_on},
        {"switch.current_turn_off", state.switch_.current_turn_off},
        {"rectifier.reverse_voltage_peak", state.rectifier.reverse_voltage_peak},
        {"rectifier.current_peak", state.rectifier.current_peak},
        {"rectifier.current_rms", state.rectifier.current_rms},
        {"rectifier.current_average", state.rectifier.current_average},
        {"output_ripple", state.output_ripple},
        {"input_current_average", state.input_current_average},
        {"duty", state.duty},
    };
    const auto capacitor = [&](const std::string& name, const CapacitorStress& stress) {
        all.push_back({name + ".voltage_average", stress.voltage_average});
        all.push_back({name + ".voltage_max", stress.voltage_max});
        all.push_back({name + ".voltage_min", stress.voltage_min, true});
        all.push_back({name + ".current_rms", stress.current_rms});
    };
    capacitor("input_capacitor", state.input);
    if (has_seat(topology, Seat::coupling_capacitor)) capacitor("coupling_capacitor", state.coupling);
    capacitor("output_capacitor", state.output);
    const auto winding = [&](const std::string& name, const WindingStress& stress) {
        all.push_back({name + ".current_average", stress.current_average});
        all.push_back({name + ".current_rms", stress.current_rms});
        all.push_back({name + ".current_peak", stress.current_peak});
        all.push_back({name + ".current_min", stress.current_min, true});
    };
    winding("primary", state.primary);
    if (has_secondary(topology)) winding("secondary", state.secondary);
    if (topology.transformer) winding("magnetising", state.magnetising);
    return all;
}

struct Asked {
    std::array<std::optional<double>, 5> value;
    std::optional<double> duty;
    [[nodiscard]] bool any() const {
        return duty || std::any_of(value.begin(), value.end(), [](const auto& v) { return v.has_value(); });
    }
};

Asked read_fixed(const std::vector<std::string>& fixed) {
    Asked asked;
    std::vector<Fault> faults;
    std::vector<std::string> keys = {"duty"};
    for (const OperatingInfo& entry : kOperating) keys.emplace_back(entry.key);
    for (const std::string& pair : fixed) {
        const std::size_t equals = pair.find('=');
        const auto fault = [&](std::size_t column, std::string message, std::string expected) {
            faults.push_back({{"--at", 0, static_cast<int>(column)}, pair.substr(0, equals), std::move(message), std::move(expected)});
        };
        if (equals == std::string::npos) {
            fault(1, fmt::format("\"{}\" has no =; write KEY=VALUE", pair), "KEY=VALUE, such as input_voltage=12V");
            continue;
        }
        std::string key = pair.substr(0, equals);
        if (key.starts_with("operating.")) key = key.substr(10);
        const std::string text = pair.substr(equals + 1);
        try {
            if (key == "duty") {
                asked.duty = parse_quantity(text, Unit::fraction, true);
                if (!(*asked.duty > 0 && *asked.duty < 1)) fault(equals + 2, fmt::format("a duty of {} cannot be run; it lies between 0 and 1", text), "a share such as 40 %");
                continue;
            }
            bool found = false;
            for (int k = 0; k < 5; ++k)
                if (kOperating[k].key == key) {
                    asked.value[k] = parse_quantity(text, kOperating[k].unit);
                    found = true;
                }
            if (!found) {
                const std::string near = nearest_word(key, keys);
                fault(1, fmt::format("unknown key `{}`{}", key, near.empty() ? "" : fmt::format("; did you mean `{}`?", near)),
                      "input_voltage, output_voltage, output_current, frequency, ambient or duty");
            }
        } catch (const InputError& error) {
            for (const Fault& inner : error.faults)
                fault(equals + 1 + static_cast<std::size_t>(inner.place.column), fmt::format("`{}`: {}", key, inner.message), inner.expected);
        }
    }
    if (asked.duty && asked.value[1])
        faults.push_back({{"--at", 0, 0}, "duty", "a duty and an output voltage cannot both be set: one follows from the other", "one of the two"});
    if (!faults.empty()) throw InputError(std::move(faults));
    return asked;
}

}  // namespace

ElectricalReport electrical(const Setup& setup, const std::vector<std::string>& fixed, const Progress& progress) {
    const Asked asked = read_fixed(fixed);
    const Converter& converter = setup.converter;
    const OperatingRange& range = converter.operating;
    const Allowances allowances;
    ElectricalReport report;
    Solver solver;
    for (const Seat seat : kSeats) {
        if (!has_seat(*converter.topology, seat) || setup.fitted.count(seat) > 0 || converter.seat(seat).element) continue;
        report.assumptions.push_back(fmt::format("{}: nothing is fitted or given; {}", to_string(seat),
                                                 seat == Seat::input_capacitor ? "the input terminals are taken as an ideal source" : "taken as ideal"));
    }
    if (!converter.source && !report.assumptions.empty() && converter.seat(Seat::input_capacitor).element)
        report.assumptions.push_back("no [source]: it delivers its mean current only, and the input capacitor carries all ripple");

    const auto run = [&](const At& at, std::optional<double> duty) {
        OperatingPoint point = point_of(setup, at);
        if (range.load == LoadKind::resistance && !asked.value[2])
            point.load_value = range.output_voltage.highest / range.output_current.highest;
        if (range.load == LoadKind::power && !asked.value[2]) point.load_value = range.output_voltage.highest * range.output_current.highest;
        if (duty) {
            point.output_voltage.reset();
            point.duty = *duty;
        }
        ElectricalPoint result{at, solver.solve(circuit_of(setup, End::typical, allowances, at), point)};
        if (duty) result.at.output_voltage = result.state.output_voltage_average;
        if (range.load != LoadKind::current) result.at.output_current = result.state.output_current_average;
        return result;
    };
    const auto note = [&](const ElectricalPoint& point) {
        for (const Named& one : named(point.state, *converter.topology)) {
            const auto found = std::find_if(report.worst.begin(), report.worst.end(), [&](const auto& w) { return w.name == one.name; });
            if (found == report.worst.end()) report.worst.push_back({one.name, one.value, point.at});
            else if (one.lowest ? one.value < found->value : one.value > found->value) *found = {one.name, one.value, point.at};
        }
    };

    if (asked.any()) {
        At at = typical_point(converter);
        for (int k = 0; k < 5; ++k)
            if (asked.value[k]) at.set(kOperating[k].quantity, *asked.value[k]);
        if (asked.duty && !asked.value[1]) at.output_voltage = range.output_voltage.highest;
        report.points.push_back(run(at, asked.duty));
        note(report.points.front());
        return report;
    }

    // A grid over the range, then a compass search around the worst point of each figure.
    const auto place = [&](const std::array<double, 4>& share) {
        At at;
        for (int k = 0; k < 4; ++k) {
            const Range r = range.get(kOperating[k].quantity);
            double value = share[k] == 1 ? r.highest : r.lowest + share[k] * (r.highest - r.lowest);
            if (k == 2 && r.lowest > 0 && share[k] > 0 && share[k] < 1) value = r.lowest * std::pow(r.highest / r.lowest, share[k]);
            at.set(kOperating[k].quantity, value);
        }
        at.ambient = range.ambient.highest;
        return at;
    };
    const auto marks = [&](int k) {
        return range.get(kOperating[k].quantity).single() ? std::vector<double>{1}
               : k == 3                                   ? std::vector<double>{0, 1}
                                                          : std::vector<double>{0, 0.25, 0.5, 0.75, 1};
    };
    std::vector<std::array<double, 4>> spots;
    const std::vector<double> currents = range.load == LoadKind::current ? marks(2) : std::vector<double>{1};
    for (const double a : marks(0))
        for (const double b : marks(1))
            for (const double c : currents)
                for (const double d : marks(3)) spots.push_back({a, b, c, d});
    std::map<std::array<double, 4>, ElectricalPoint> seen;
    std::map<std::string, std::array<double, 4>> worst_spot;
    const auto visit = [&](const std::array<double, 4>& spot) {
        if (seen.count(spot) > 0) return;
        const ElectricalPoint point = run(place(spot), {});
        for (const Named& one : named(point.state, *converter.topology)) {
            const auto found = std::find_if(report.worst.begin(), report.worst.end(), [&](const auto& w) { return w.name == one.name; });
            if (found == report.worst.end() || (one.lowest ? one.value < found->value : one.value > found->value)) worst_spot[one.name] = spot;
        }
        note(point);
        seen.emplace(spot, point);
    };
    std::size_t done = 0;
    for (const auto& spot : spots) {
        visit(spot);
        if (progress && !progress(0.5 * static_cast<double>(++done) / static_cast<double>(spots.size()))) throw Stopped();
    }
    for (const auto& spot : spots) report.points.push_back(seen.at(spot));
    std::vector<std::string> names;
    for (const auto& one : report.worst) names.push_back(one.name);
    for (const std::string& name : names) {
        for (double step = 0.125; step > 0.001;) {
            const auto from = worst_spot[name];
            for (int k = 0; k < 4; ++k) {
                if (range.get(kOperating[k].quantity).single() || (k == 2 && range.load != LoadKind::current)) continue;
                for (const double sign : {-1.0, 1.0}) {
                    auto to = from;
                    to[k] = std::clamp(from[k] + sign * step, 0.0, 1.0);
                    if (to != from) visit(to);
                }
            }
            if (worst_spot[name] == from) step *= 0.5;
        }
        if (progress && !progress(0.75)) throw Stopped();
    }
    return report;
}

}  // namespace binwright
