// SPDX-License-Identifier: GPL-3.0-or-later
// `stress`: what each seat sees electrically, worst over the operating range or at one point, and waveforms.
#include <fmt/format.h>

#include <algorithm>

#include "app/command/json.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

Unit unit_of(std::string_view name) {
    if (name.find("voltage") != std::string_view::npos || name.find("ripple") != std::string_view::npos) return Unit::volt;
    if (name.find("current") != std::string_view::npos) return Unit::ampere;
    if (name.find("power") != std::string_view::npos) return Unit::watt;
    if (name.find("duty") != std::string_view::npos || name.find("fraction") != std::string_view::npos || name.find("efficiency") != std::string_view::npos)
        return Unit::fraction;
    return Unit::none;
}

Json nested_worst(const ElectricalReport& report) {
    Json out = {{"seats", Json::object()}, {"windings", Json::object()}};
    for (const ElectricalReport::Worst& worst : report.worst) {
        const Json entry = {{"value", number(worst.value)}, {"at", json_of(worst.at)}};
        const std::size_t dot = worst.name.find('.');
        if (dot == std::string::npos) {
            out[worst.name] = entry;
            continue;
        }
        const std::string owner = worst.name.substr(0, dot);
        out[find_seat(owner) ? "seats" : "windings"][owner][worst.name.substr(dot + 1)] = entry;
    }
    return out;
}

void print_point(Session& session, const ElectricalPoint& point, const Topology& topology, bool unregulated) {
    const SteadyState& s = point.state;
    At at = point.at;
    if (unregulated) at.output_voltage = s.output_voltage_average;
    session.out << "at " << at_text(at) << '\n';
    if (!s.reached) {
        session.out << "not reached";
        if (s.least_load > 0)
            session.out << ": the shortest on-time delivers too much below " << format_quantity(s.least_load, Unit::ampere);
        else if (s.highest_output > 0)
            session.out << ": no permitted duty gives more than " << format_quantity(s.highest_output, Unit::volt);
        session.out << '\n';
    }
    session.out << fmt::format("duty {}, {}, rectifier conducts {} of the period\n", format_quantity(s.duty, Unit::fraction), to_string(s.mode),
                               format_quantity(s.rectifier_fraction, Unit::fraction));
    session.out << "input " << format_quantity(s.input_current_average, Unit::ampere) << " mean; output "
                << format_quantity(s.output_voltage_average, Unit::volt, 4) << " mean, ripple " << format_quantity(s.output_ripple, Unit::volt);
    if (s.input_power > 0) session.out << "; efficiency of the network " << format_quantity(s.output_power / s.input_power, Unit::fraction);
    session.out << "\n\n";
    Rows rows;
    const Json all = json_of(point, topology, unregulated);
    for (const char* group : {"seats", "windings"})
        for (const auto& [owner, values] : all[group].items()) {
            std::string first = spaced(owner) + (std::string_view(group) == "windings" ? " winding" : "");
            for (const auto& [name, value] : values.items()) {
                if (!value.is_number()) continue;
                rows.rows.push_back({std::exchange(first, ""), spaced(name), format_quantity(value.get<double>(), unit_of(name), 4)});
            }
        }
    session.out << rows.text();
    for (const std::string& warning : s.warnings) session.out << "warning: " << folded(warning, 9, 9) << '\n';
}

std::string waveform_text(const Setup& setup, const ElectricalPoint& point) {
    OperatingPoint run = point_of(setup, point.at);
    run.output_voltage.reset();  // at the duty and the load that were found: the same steady state, reached or not
    run.duty = point.state.duty;
    const double current = point.state.output_current_average;
    const bool resistive = run.load == LoadKind::resistance && current > 0;
    run.load = resistive ? LoadKind::resistance : LoadKind::current;
    run.load_value = resistive ? point.state.output_voltage_average / current : current;
    const Waveforms waves = waveforms(circuit_of(setup, End::typical, Allowances{}, point.at), run);
    std::string text;
    for (std::size_t k = 0; k < waves.names.size(); ++k) {
        const std::string& name = waves.names[k];
        const Unit unit = name == "time" ? Unit::second : unit_of(name);
        text += (k ? "," : "") + name + " [" + std::string(unit_symbol(unit)) + "]";
    }
    text += "\n";
    const std::size_t rows = waves.columns.empty() ? 0 : waves.columns.front().size();
    for (std::size_t row = 0; row < rows; ++row)
        for (std::size_t k = 0; k < waves.columns.size(); ++k)
            text += fmt::format("{:.9g}{}", waves.columns[k][row], k + 1 == waves.columns.size() ? "\n" : ",");
    return text;
}

int run(Session& session, const Call& call) {
    Job job = job_for(session, *call.text("FILE"));
    const Topology& topology = *job.setup.converter.topology;
    const std::vector<std::string> fixed = call.list("--at");
    const bool unregulated = std::ranges::any_of(fixed, [](const std::string& pair) { return pair.starts_with("duty"); });
    const ElectricalReport report = electrical(job.setup, fixed);
    const bool reached = std::ranges::all_of(report.points, [](const ElectricalPoint& point) { return point.state.reached; });

    const std::optional<std::string> waves = call.text("--waveforms");
    if (waves && (*waves == "-" || !session.dry_run)) {
        ElectricalPoint point;
        if (!fixed.empty() && !report.points.empty()) {
            point = report.points.front();
        } else {
            point.at = typical_point(job.setup.converter);
            point.state = solve(circuit_of(job.setup, End::typical, Allowances{}, point.at), point_of(job.setup, point.at));
        }
        write_text(session, *waves, waveform_text(job.setup, point), true);
        if (*waves == "-") return point.state.reached ? 0 : 1;
        note(session, "waveforms at " + at_text(point.at) + " written to " + *waves);
    }
    if (session.json) {
        Json body = {{"file", job.setup.converter.file}, {"title", job.setup.converter.title}, {"topology", std::string(topology.name)}};
        body["points"] = Json::array();
        for (const ElectricalPoint& point : report.points) body["points"].push_back(json_of(point, topology, unregulated));
        body["worst"] = nested_worst(report);
        body["assumptions"] = report.assumptions;
        print_json(session, "stress", body);
        return reached ? 0 : 1;
    }
    session.out << heading(job.setup.converter.title, session.colour) << " (" << topology.name << ")\n";
    if (!fixed.empty() && report.points.size() == 1) {
        print_point(session, report.points.front(), topology, unregulated);
    } else {
        std::size_t missed = 0;
        for (const ElectricalPoint& point : report.points) missed += point.state.reached ? 0 : 1;
        session.out << "worst over the operating range, " << counted(report.points.size(), "point") << " looked at";
        if (missed) session.out << "; " << counted(missed, "point") << " not reached";
        session.out << "\n\n";
        Rows rows;
        std::string last = "none yet";
        for (const ElectricalReport::Worst& worst : report.worst) {
            const std::size_t dot = worst.name.find('.');
            const std::string owner = dot == std::string::npos ? "" : worst.name.substr(0, dot);
            const std::string name = dot == std::string::npos ? worst.name : worst.name.substr(dot + 1);
            const std::string first = owner == last ? "" : owner.empty() ? "converter" : spaced(owner) + (find_seat(owner) ? "" : " winding");
            last = owner;
            rows.rows.push_back({first, spaced(name), format_quantity(worst.value, unit_of(name), 4), at_text(worst.at)});
        }
        session.out << rows.text();
        for (const ElectricalPoint& point : report.points)
            if (!point.state.reached)
                session.out << "not reached: " << at_text(point.at)
                            << (point.state.least_load > 0
                                    ? "; the least load that regulates is " + format_quantity(point.state.least_load, Unit::ampere)
                                : point.state.highest_output > 0 ? "; at most " + format_quantity(point.state.highest_output, Unit::volt)
                                                                 : std::string())
                            << '\n';
    }
    if (!session.quiet && !report.assumptions.empty()) {
        session.out << "\nassumed\n";
        for (const std::string& assumption : report.assumptions) session.out << "  " << folded(assumption, 2, 4) << '\n';
    }
    return reached ? 0 : 1;
}

}  // namespace

Command stress_command() {
    return {.name = "stress",
            .summary = "electrical stresses of every seat, worst over the operating range or at one point",
            .about = "The waveforms' own extremes, without overshoot. Exit status 1 where a point is not reached. With --at, what is "
                     "not named stands at its typical value; duty=0.4 instead of an output voltage runs it unregulated.",
            .options = {{"FILE", "", "a converter file, or - for standard input", false, true},
                        {"--at", "KEY=VALUE", "one point: input_voltage, output_voltage, output_current, frequency, ambient or duty; one pair each", true},
                        {"--waveforms", "OUT.csv", "one period of every current and voltage, at that point or the typical one"}},
            .example = "binwright --bin demo stress app/demo/tide-gauge.toml --at input_voltage=12V --at output_voltage=15V --at output_current=2A",
            .example_says = "every current and voltage of the demo's converter at that point",
            .run = run};
}

}  // namespace binwright
