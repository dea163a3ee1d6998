// SPDX-License-Identifier: GPL-3.0-or-later
// A commented converter file to start from: a choke, a transformer and capacitors that make the wanted converter run,
// from the small-ripple formulas of continuous operation. Starting values, never a judgement.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "engine/converter/converter.hpp"
#include "engine/converter/item.hpp"

namespace binwright {
namespace {

constexpr double kRippleShare = 0.35;        // of the highest mean winding current, peak to peak
constexpr double kOutputRippleShare = 0.01;  // of the lowest output voltage, half by charge and half by ESR
constexpr double kCouplingRippleShare = 0.05;
constexpr double kFlybackDuty = 0.45;  // at the lowest input and highest output

// IEC 60063: the E12 series.
// values).
constexpr double kE12[] = {1.0, 1.2, 1.5, 1.8, 2.2, 2.7, 3.3, 3.9, 4.7, 5.6, 6.8, 8.2, 10.0};

double e12(double value, bool up) {
    const double decade = std::pow(10.0, std::floor(std::log10(value)));
    for (std::size_t k = 0; k < std::size(kE12); ++k) {
        if (value / decade > kE12[k] * (1 + 1e-9)) continue;
        return decade * (up || k == 0 ? kE12[k] : kE12[k - 1]);
    }
    return 10 * decade;
}

enum class Step { down, up, both, transformer };

Step step_of(const Topology& topology) {
    if (topology.transformer) return Step::transformer;
    if (topology.name == "buck") return Step::down;
    return topology.name == "boost" ? Step::up : Step::both;
}

// What the choke and the capacitors start from.
struct Start {
    double turns_ratio = 1;
    double primary = 0, secondary = 0;                  // [H]
    double primary_current = 0, secondary_current = 0;  // highest mean [A]
    double duty = 0;                                    // highest
    double input_ripple_current = 0;                    // that the input capacitor sees, peak to peak [A]
    double output_charge = 0;                           // that the output capacitor gives in a period [C]
    double output_ripple_current = 0;                   // peak to peak [A]
    double coupling_charge = 0, coupling_voltage = 0;
};

bool smooth_output(const Topology& topology) {
    return std::none_of(topology.branches.begin(), topology.branches.end(), [&](const Branch& branch) {
        if (branch.kind != BranchKind::rectifier) return false;
        return std::any_of(topology.branches.begin(), topology.branches.end(), [&](const Branch& other) {
            return other.seat == Seat::output_capacitor && branch.from + branch.to > 0 &&
                   ((branch.from == other.from && branch.from != 0) || (branch.from == other.to && branch.from != 0) ||
                    (branch.to == other.from && branch.to != 0) || (branch.to == other.to && branch.to != 0));
        });
    });
}

bool smooth_input(const Topology& topology) {
    // The choke stands in the input: source and primary share a node that no switch touches.
    int in = 0;
    for (const Branch& branch : topology.branches)
        if (branch.kind == BranchKind::source) in = std::max(branch.from, branch.to);
    return std::none_of(topology.branches.begin(), topology.branches.end(),
                        [in](const Branch& branch) {
                            return branch.kind == BranchKind::switch_ && (branch.from == in || branch.to == in);
                        }) &&
           !topology.transformer;
}

Start start_for(const Topology& topology, const NewConverter& a) {
    Start s;
    const double low = a.input_voltage.lowest, high = a.input_voltage.highest;
    const double least = a.output_voltage.lowest, most = a.output_voltage.highest;
    const double current = a.output_current.highest, period = 1 / a.frequency;
    double volt_seconds = 0;  // highest of the primary winding within the range
    switch (step_of(topology)) {
        case Step::down:
            s.duty = most / low;
            for (const double out : {least, most, std::clamp(high / 2, least, most)})
                volt_seconds = std::max(volt_seconds, out * (1 - out / high) * period);
            s.primary_current = current;
            break;
        case Step::up:
            s.duty = 1 - low / most;
            for (const double in : {low, high, std::clamp(most / 2, low, high)})
                volt_seconds = std::max(volt_seconds, in * (1 - in / most) * period);
            s.primary_current = current / (1 - s.duty);
            break;
        case Step::transformer:
            s.turns_ratio = most * (1 - kFlybackDuty) / (kFlybackDuty * low);
            s.turns_ratio = std::stod(fmt::format("{:.2g}", s.turns_ratio));
            [[fallthrough]];
        case Step::both: {
            const double in_low = low * s.turns_ratio, in_high = high * s.turns_ratio;
            s.duty = most / (in_low + most);
            volt_seconds = high * most / (in_high + most) * period;
            s.primary_current = s.turns_ratio * current / (1 - s.duty);
            break;
        }
    }
    if (has_secondary(topology) && !topology.transformer) {  // the mean of each winding is its own
        s.secondary_current = current;
        s.primary_current = current * s.duty / (1 - s.duty);
        s.secondary = e12(volt_seconds / (kRippleShare * s.secondary_current), true);
        s.coupling_charge = current * s.duty * period;
        // The mean of the capacitor's voltage: input (sepic), output (zeta) or both (cuk); the lowest of them is the
        // safe one.
        s.coupling_voltage = std::min(low, least);
    }
    s.primary = e12(volt_seconds / (kRippleShare * s.primary_current), true);
    const double ripple = volt_seconds / s.primary;
    const double second_ripple = s.secondary > 0 ? volt_seconds / s.secondary : ripple;
    if (smooth_output(topology)) {
        s.output_ripple_current = second_ripple;
        s.output_charge = second_ripple * period / 8;
    } else {
        s.output_ripple_current = s.primary_current / s.turns_ratio + ripple / 2 + s.secondary_current;
        s.output_charge = current * s.duty * period;
    }
    s.input_ripple_current = smooth_input(topology) ? ripple : s.primary_current + s.secondary_current + ripple / 2;
    return s;
}

void refuse(const Topology& topology, const NewConverter& a) {
    std::vector<Fault> faults;
    const auto check = [&](Range range, double bottom, double top, std::string_view key, Unit unit) {
        if (range.lowest >= bottom && range.highest > 0 && range.lowest <= range.highest && range.highest <= top)
            return;
        faults.push_back({{},
                          "operating." + std::string(key),
                          "`" + std::string(key) + "` from " + format_quantity(range.lowest, unit) + " to " +
                              format_quantity(range.highest, unit) + " makes no converter",
                          "a range within " + format_quantity(bottom, unit) + " and " + format_quantity(top, unit)});
    };
    check(a.input_voltage, 0.1, 2000, "input_voltage", Unit::volt);
    check(a.output_voltage, 0.1, 5000, "output_voltage", Unit::volt);
    check(a.output_current, 0, 1000, "output_current", Unit::ampere);
    check({a.frequency, a.frequency}, 1e3, 5e6, "frequency", Unit::hertz);
    if (faults.empty() && step_of(topology) == Step::down &&
        !(a.output_voltage.highest < 0.98 * a.input_voltage.lowest))
        faults.push_back({{},
                          "operating.output_voltage",
                          "a " + std::string(topology.name) +
                              " only steps down: " + format_quantity(a.output_voltage.highest, Unit::volt) +
                              " cannot be had from " + format_quantity(a.input_voltage.lowest, Unit::volt),
                          "a sepic, zeta, inverting, cuk or flyback, which step down and up"});
    if (faults.empty() && step_of(topology) == Step::up && !(a.output_voltage.lowest > 1.02 * a.input_voltage.highest))
        faults.push_back({{},
                          "operating.output_voltage",
                          "a " + std::string(topology.name) +
                              " only steps up: " + format_quantity(a.output_voltage.lowest, Unit::volt) +
                              " cannot be had from " + format_quantity(a.input_voltage.highest, Unit::volt),
                          "a sepic, zeta, inverting, cuk or flyback, which step down and up"});
    if (!faults.empty()) throw InputError(faults);
}

std::string range_text(Range range, Unit unit) {
    if (range.single()) return quoted(format_exact(range.lowest, unit));
    return "[" + quoted(format_exact(range.lowest, unit)) + ", " + quoted(format_exact(range.highest, unit)) + "]";
}

std::string start_text(double value, Unit unit) {
    return quoted(format_quantity(value, unit, 2));
}

std::string winding_text(std::string_view name, double inductance, double current, double power) {
    const double peak = current * (1 + kRippleShare / 2);
    return fmt::format(
        "\n[winding.{}]\n"
        "inductance = {}       # for a ripple of about {:.0f} % of its highest mean current, {}\n"
        "tolerance  = \"20 %\"\n"
        "resistance = {}       # a starting value: measure yours\n"
        "# saturation_current = {}   # what is needed: the peak and a third. Write what yours is rated for\n"
        "# core = \"ferrite\"           # ferrite, powder or other; with core_loss = \"… W\" where it is known\n",
        name, start_text(inductance, Unit::henry), 100 * kRippleShare, format_quantity(current, Unit::ampere, 2),
        start_text(0.01 * power / (current * current), Unit::ohm), start_text(peak * 1.33, Unit::ampere));
}

std::string capacitor_text(std::string_view seat, std::string_view reference, double capacitance, double resistance,
                           std::string_view why) {
    return fmt::format(
        "\n[seat.{}]\nreference = \"{}\"\n# fitted = \"…\"            # a lot label or part name from your bin\n"
        "[seat.{}.element]      # {}\ncapacitance = {}\nresistance  = {}\n",
        seat, reference, seat, why, start_text(capacitance, Unit::farad), start_text(resistance, Unit::ohm));
}

}  // namespace

std::string new_converter_text(const Topology& topology, const NewConverter& a) {
    refuse(topology, a);
    const Start s = start_for(topology, a);
    const double power = a.output_voltage.highest * a.output_current.highest;
    const double period = 1 / a.frequency;
    std::string out = fmt::format(
        "# A {0}: {1}. Written as a start; every value is yours to change, and lines that begin with # say nothing "
        "yet.\n"
        "#\n"
        "# Before power goes on:\n"
        "# - The first time, feed it from a supply with its current limit set low, and raise the voltage slowly.\n"
        "# - Capacitors hold their charge after switching off: measure, and discharge them through a resistor.\n"
        "# - A battery can deliver a short-circuit current that melts tools and starts fires: put a fuse at its "
        "terminal.\n"
        "# - An electrolytic that is reversed or overvolted can burst: wear eye protection.\n"
        "# - Anything connected to the mains is for the qualified only.\n"
        "# - Local codes and rules of practice come first.\n"
        "\n"
        "kind     = \"converter\"\n"
        "format   = 1\n"
        "title    = {2}\n"
        "topology = \"{0}\"\n"
        "\n"
        "[operating]              # one value, or [lowest, highest]\n"
        "input_voltage  = {3}\n"
        "output_voltage = {4}{5}\n"
        "output_current = {6}\n"
        "frequency      = {7}\n"
        "ambient        = [\"0 °C\", \"40 °C\"]   # taken for a start: say where yours stands\n"
        "load           = \"current\"           # current, resistance or power\n"
        "# output_tolerance = \"3 %\"           # of the set-point: reference and divider\n"
        "# output_ripple    = {8}            # a requirement, peak to peak\n"
        "# life             = \"20000 h\"       # a requirement\n"
        "\n"
        "# [source]               # the battery or supply with its lead; without it the input capacitor carries all "
        "ripple\n"
        "# resistance = \"30 mΩ\"\n"
        "# inductance = \"1 µH\"\n",
        topology.name, topology.meaning, quoted(a.title.empty() ? "A new " + std::string(topology.name) : a.title),
        range_text(a.input_voltage, Unit::volt), range_text(a.output_voltage, Unit::volt),
        topology.negative_output ? "   # magnitude: the rail is negative" : "",
        range_text(a.output_current, Unit::ampere), quoted(format_exact(a.frequency, Unit::hertz)),
        start_text(2 * kOutputRippleShare * a.output_voltage.lowest, Unit::volt));

    if (topology.transformer)
        out += fmt::format(
            "\n[winding]\nturns_ratio = {}        # N_secondary / N_primary, for a duty of about {:.0f} % at the "
            "lowest input\n"
            "# leakage = \"… µH\"       # primary side, secondary shorted: measure it, and say what clamps it under "
            "[clamp]\n",
            fmt::format("{}", s.turns_ratio), 100 * kFlybackDuty);
    else if (has_secondary(topology))
        out += "\n[winding]\ncoupling = 0             # 0 = two separate chokes; both on one core: up to 0.999\n";
    out += winding_text("primary", s.primary, s.primary_current, power);
    if (s.secondary > 0) out += winding_text("secondary", s.secondary, s.secondary_current, power);
    if (topology.transformer) {
        const double current = s.primary_current / s.turns_ratio;
        out += fmt::format("\n[winding.secondary]\nresistance = {}       # a starting value: measure yours\n",
                           start_text(0.01 * power / (current * current), Unit::ohm));
    }
    out +=
        "\n# [drive]                # each of these decides something: without it the answer stays unproven\n"
        "# voltage    = \"12 V\"    # gate drive\n"
        "# resistance = \"10 Ω\"\n"
        "# maximum_duty = \"90 %\"\n"
        "\n# [heatsink.small]       # shared by the seats that name it\n"
        "# resistance = \"12 K/W\"  # to the air inside\n";

    const double switch_current =
        topology.transformer || s.secondary_current == 0 ? s.primary_current : s.primary_current + s.secondary_current;
    out += fmt::format(
        "\n# The seats. Each has a bare element to compute with until a part is chosen from the bin.\n"
        "[seat.switch]\nreference = \"Q1\"\n# fitted = \"…\"            # a lot label or part name from your bin\n"
        "# heatsink  = \"small\"\n# interface = \"1.2 K/W\"   # case to sink\n"
        "[seat.switch.element]    # about 1 % of the output power lost in conduction\nresistance = {}\n"
        "\n[seat.rectifier]\nreference = \"D1\"\n# fitted = \"…\"\n# heatsink = \"small\"\n"
        "[seat.rectifier.element]\ndrop       = {}\nresistance = {}\n",
        start_text(0.01 * power / (switch_current * switch_current * std::max(s.duty, 0.05)), Unit::ohm),
        a.output_voltage.highest < 60 ? "\"0.4 V\"" : "\"0.8 V\"", start_text(0.1 / switch_current, Unit::ohm));

    const double input_charge = s.input_ripple_current * period / (smooth_input(topology) ? 8 : 4);
    const double input_voltage = kOutputRippleShare * a.input_voltage.lowest;
    out += capacitor_text("input_capacitor", "C1", e12(input_charge / (input_voltage / 2), true),
                          0.5 * input_voltage / s.input_ripple_current, "ripple about 1 % of the lowest input");
    if (s.coupling_charge > 0)
        out += capacitor_text("coupling_capacitor", "C2",
                              e12(s.coupling_charge / (kCouplingRippleShare * s.coupling_voltage), true),
                              0.02 * s.coupling_voltage / (s.primary_current + s.secondary_current),
                              "ripple about 5 % of its own voltage");
    const double output_voltage = kOutputRippleShare * a.output_voltage.lowest;
    out += capacitor_text("output_capacitor", s.coupling_charge > 0 ? "C3" : "C2",
                          e12(s.output_charge / (output_voltage / 2), true),
                          0.5 * output_voltage / s.output_ripple_current, "ripple about 1 % of the lowest output");
    out +=
        "\n# [[across]]             # anything else that merely sits on a voltage\n"
        "# name = \"load board filter\"\n# between = \"output\"      # input, output, switch, rectifier or coupling\n"
        "# \"U_R\" = \"25 V\"\n";
    (void)read_converter(out,
                         "the new converter");  // a start that could not be read back would be a fault of this program
    return out;
}

}  // namespace binwright
