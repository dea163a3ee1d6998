// SPDX-License-Identifier: GPL-3.0-or-later
// What holds for every converter whatever its values: energy, charge and volt-seconds balance, figures stand in order,
// the duty rises with the output, scaled circuits give scaled stresses, and impossible circuits are refused in words.
#include <rapidcheck.h>

#include <catch2/catch.hpp>
#include <chrono>
#include <cmath>
#include <functional>
#include <future>
#include <limits>
#include <memory>
#include <sstream>
#include <thread>

#include "engine/network/steady_state.hpp"

using namespace binwright;

namespace {

struct Drawn {
    Circuit circuit;
    OperatingPoint point;
};

std::string say(const Drawn& d) {
    std::ostringstream s;
    s.precision(12);
    const Circuit& c = d.circuit;
    s << (c.topology ? c.topology->name : "no topology") << " Vin " << d.point.input_voltage << " Vout ";
    if (d.point.output_voltage)
        s << *d.point.output_voltage;
    else
        s << "at duty " << d.point.duty;
    s << " load kind " << static_cast<int>(d.point.load) << ' ' << d.point.load_value << " f " << d.point.frequency
      << " source " << static_cast<int>(c.source) << ' ' << c.source_resistance << '/' << c.source_inductance << " L1 "
      << c.primary.inductance << '/' << c.primary.resistance << " L2 " << c.secondary.inductance << '/'
      << c.secondary.resistance << " k " << c.coupling << " n " << c.turns_ratio << " switch " << c.switch_resistance
      << '+' << c.sense_resistance << " rectifier " << c.rectifier_drop << '/' << c.rectifier_resistance;
    const auto bank = [&s](const char* name, const std::vector<CapacitorValues>& branches) {
        s << ' ' << name;
        for (const auto& branch : branches) s << ' ' << branch.capacitance << '/' << branch.resistance;
    };
    bank("Cin", c.input);
    bank("Cs", c.coupling_capacitor);
    bank("Co", c.output);
    s << " maximum duty " << c.maximum_duty << " shortest on-time " << c.minimum_on_time;
    return s.str();
}

double share() {
    return *rc::gen::inRange(0, 100001) / 100000.0;
}
double between(double low, double high) {
    return low + (high - low) * share();
}
double decade(double low, double high) {
    return low * std::pow(high / low, share());
}
bool chance(int of) {
    return *rc::gen::inRange(0, of) == 0;
}

bool four(const Topology& t) {
    return has_secondary(t) && !t.transformer;
}

/// A converter of ordinary proportions: 5 W to some 100 W, both modes, ripples from nothing to gross.
Drawn draw() {
    Drawn d{};
    Circuit& c = d.circuit;
    const auto all = topologies();
    c.topology = &all[static_cast<size_t>(*rc::gen::inRange(0, static_cast<int>(all.size())))];
    const bool buck = c.topology->name == "buck", boost = c.topology->name == "boost";
    d.point.frequency = decade(10e3, 2e6);
    d.point.input_voltage = decade(3, 60);
    const double ratio = buck ? between(0.1, 0.9) : boost ? between(1.1, 4) : decade(0.3, 3);
    const double v_out = d.point.input_voltage * ratio, i_out = decade(0.02, 8), load = v_out / i_out;
    const double i_in = std::max(ratio, 1.0) * i_out, T = 1 / d.point.frequency;
    c.turns_ratio = c.topology->transformer ? decade(0.2, 4) : 1;
    c.primary.inductance = 0.25 * d.point.input_voltage / i_in * T * decade(0.2, 10);
    c.secondary.inductance = c.primary.inductance * decade(0.5, 2);
    if (c.topology->transformer) {
        c.coupling = chance(2) ? 1 : between(0.95, 0.998);
    } else if (four(*c.topology) && !chance(3)) {
        c.coupling = between(0.1, 0.99);
        if (c.coupling > 0.7) c.secondary.inductance = c.primary.inductance * between(0.95, 1.05);
    }
    const auto ohms = [load] { return 1e-3 * load * decade(0.3, 5); };
    c.primary.resistance = ohms();
    c.secondary.resistance = ohms();
    c.switch_resistance = ohms();
    c.sense_resistance = chance(2) ? 0 : ohms();
    c.rectifier_drop = between(0, 0.9);
    c.rectifier_resistance = ohms();
    const auto bank = [&](double ripple) {
        std::vector<CapacitorValues> branches(chance(4) ? 2 : 1);
        for (auto& branch : branches)
            branch = {i_in * T / (ripple * d.point.input_voltage) * decade(0.3, 3), 1e-3 * load * decade(0.3, 20)};
        return branches;
    };
    c.input = bank(0.02);
    if (four(*c.topology)) c.coupling_capacitor = bank(decade(0.005, 0.2));
    c.output = bank(0.01);
    switch (*rc::gen::inRange(0, 4)) {
        case 0:
            c.source = SourceKind::stiff;
            break;
        case 1:
            c.source = SourceKind::impedance;
            c.source_resistance = ohms();
            c.source_inductance = chance(2) ? 0 : c.primary.inductance * decade(0.01, 0.2);
            break;
        default:
            c.source = SourceKind::mean;
    }
    d.point.load = static_cast<LoadKind>(*rc::gen::inRange(0, 3));
    d.point.load_value = d.point.load == LoadKind::current      ? i_out
                         : d.point.load == LoadKind::resistance ? load
                                                                : v_out * i_out;
    d.point.output_voltage = v_out;
    return d;
}

bool sound(double value) {
    return std::isfinite(value);
}

/// The first figure that is not a number or out of order; empty when all is well.
std::string disorder(const SteadyState& s) {
    const auto wrong = [](bool good, const char* what) { return good ? std::string() : std::string(what); };
    std::string bad;
    const auto check = [&](bool good, const char* what) {
        if (bad.empty()) bad = wrong(good, what);
    };
    for (const double value : {s.duty,
                               s.rectifier_fraction,
                               s.input_current_average,
                               s.output_voltage_average,
                               s.output_current_average,
                               s.output_ripple,
                               s.input_power,
                               s.output_power,
                               s.switch_.voltage_peak,
                               s.switch_.current_peak,
                               s.switch_.current_rms,
                               s.switch_.current_average,
                               s.switch_.current_turn_on,
                               s.switch_.current_turn_off,
                               s.switch_.voltage_turn_on,
                               s.switch_.voltage_turn_off,
                               s.rectifier.reverse_voltage_peak,
                               s.rectifier.current_peak,
                               s.rectifier.current_rms,
                               s.rectifier.current_average,
                               s.rectifier.current_turn_off,
                               s.rectifier.voltage_turn_on,
                               s.core_current_peak,
                               s.highest_output,
                               s.least_load})
        check(sound(value), "a figure is not a number");
    if (!s.reached && s.output_voltage_average < 0) return bad;  // no load could be carried: see its own case below
    const double i = 1e-9 * std::max({s.switch_.current_peak, s.rectifier.current_peak, s.primary.current_peak, 1e-6});
    const double v = 1e-9 * std::max({std::abs(s.switch_.voltage_peak), std::abs(s.rectifier.reverse_voltage_peak),
                                      std::abs(s.output.voltage_max), std::abs(s.output.voltage_min), 1e-6});
    for (const auto* c : {&s.input, &s.coupling, &s.output}) {
        check(sound(c->voltage_average) && sound(c->voltage_max) && sound(c->voltage_min) && sound(c->current_rms),
              "a capacitor's figure");
        check(c->voltage_min <= c->voltage_average + v && c->voltage_average <= c->voltage_max + v,
              "capacitor voltages out of order");
        for (const double branch : c->branch_current_rms) check(sound(branch) && branch >= 0, "a branch current");
    }
    for (const auto* w : {&s.primary, &s.secondary, &s.magnetising}) {
        check(sound(w->current_average) && sound(w->current_rms) && sound(w->current_peak) && sound(w->current_min),
              "a winding's figure");
        check(w->current_min <= w->current_average + i && w->current_average <= w->current_peak + i,
              "winding currents out of order");
        check(w->current_rms + i >= std::abs(w->current_average), "an RMS value below its mean");
    }
    check(s.switch_.current_peak + i >= s.switch_.current_rms && s.switch_.current_rms + i >= s.switch_.current_average,
          "switch currents");
    check(s.rectifier.current_peak + i >= s.rectifier.current_rms &&
              s.rectifier.current_rms + i >= s.rectifier.current_average,
          "rectifier currents");
    check(s.switch_.current_turn_on <= s.switch_.current_peak + i &&
              s.switch_.current_turn_off <= s.switch_.current_peak + i,
          "a switching current above the peak");
    check(s.switch_.voltage_turn_on <= s.switch_.voltage_peak + v &&
              s.switch_.voltage_turn_off <= s.switch_.voltage_peak + v,
          "a switching voltage above the peak");
    check(s.rectifier.voltage_turn_on <= s.rectifier.reverse_voltage_peak + v, "a reverse voltage above the peak");
    check(std::abs(s.output_ripple - (s.output.voltage_max - s.output.voltage_min)) <= v,
          "output ripple is not max - min");
    check(s.duty >= 0 && s.duty <= 1 && s.rectifier_fraction >= 0 && s.rectifier_fraction <= 1 + 1e-12,
          "a share outside 0 … 1");
    return bad;
}

/// P_in − P_out − Σ losses, relative to P_in. What an interrupted leakage inductance gives up at each turn-off is
/// counted: ½·L1·(1 − k²)·I_off², since the flux linkage of the secondary is kept.
double imbalance(const Drawn& d, const SteadyState& s) {
    const Circuit& c = d.circuit;
    const auto square = [](double x) { return x * x; };
    double lost = (c.switch_resistance + c.sense_resistance) * square(s.switch_.current_rms) +
                  c.rectifier_drop * s.rectifier.current_average +
                  c.rectifier_resistance * square(s.rectifier.current_rms) +
                  c.primary.resistance * square(s.primary.current_rms);
    if (has_secondary(*c.topology)) lost += c.secondary.resistance * square(s.secondary.current_rms);
    const auto bank = [&](const std::vector<CapacitorValues>& branches, const CapacitorStress& stress) {
        for (size_t k = 0; k < branches.size() && k < stress.branch_current_rms.size(); ++k)
            lost += branches[k].resistance * square(stress.branch_current_rms[k]);
    };
    bank(c.input, s.input);
    bank(c.coupling_capacitor, s.coupling);
    bank(c.output, s.output);
    if (c.topology->transformer)
        lost += 0.5 * c.primary.inductance * (1 - square(c.coupling)) * square(s.switch_.current_turn_off) *
                d.point.frequency;
    return (s.input_power - s.output_power - lost) / s.input_power;
}

void property(const char* what, const std::function<void()>& body) {
    const bool held = rc::check(what, body);
    CHECK(held);
}

}  // namespace

TEST_CASE("energy in is energy out plus every loss, in any converter", "[engine][network][property]") {
    property("energy balances to 1e-7 of the input", [] {
        const Drawn d = draw();
        RC_LOG() << say(d) << '\n';
        const auto s = solve(d.circuit, d.point);
        RC_ASSERT(disorder(s) == "");
        RC_ASSERT(std::abs(imbalance(d, s)) < 1e-7);
        if (s.reached) RC_ASSERT(std::abs(s.output_voltage_average / *d.point.output_voltage - 1) < 1e-9);
    });
}

TEST_CASE("no capacitor gains charge and no winding gains flux over a period", "[engine][network][property]") {
    property("mean currents and voltages close", [] {
        const Drawn d = draw();
        RC_LOG() << say(d) << '\n';
        const auto s = solve(d.circuit, d.point);
        const std::string name(d.circuit.topology->name);
        const double i_in = s.input_current_average, i_out = s.output_current_average;
        const double i1 = s.primary.current_average, i2 = s.secondary.current_average;
        const auto same = [&](double a, double b, double of) { return std::abs(a - b) <= 1e-8 * of; };
        const double amps = s.switch_.current_peak + s.rectifier.current_peak,
                     volts = s.switch_.voltage_peak + s.output.voltage_max;
        if (name != "buck" && name != "zeta" && name != "cuk")
            RC_ASSERT(same(s.rectifier.current_average, i_out, amps));
        if (name == "buck") RC_ASSERT(same(i1, i_out, amps));
        if (name == "buck" || name == "inverting" || name == "zeta" || name == "flyback")
            RC_ASSERT(same(s.switch_.current_average, i_in, amps));
        if (name == "boost" || name == "sepic" || name == "cuk") RC_ASSERT(same(i1, i_in, amps));
        if (name == "flyback") RC_ASSERT(same(i1, i_in, amps) && same(i2, i_out, amps));
        if (four(*d.circuit.topology)) {
            RC_ASSERT(same(i2, i_out, amps));
            RC_ASSERT(same(s.rectifier.current_average, i_out, amps));  // the coupling capacitor passes no mean current
            RC_ASSERT(same(s.switch_.current_average, i_in, amps));
            const double r1 = d.circuit.primary.resistance * i1, r2 = d.circuit.secondary.resistance * i2;
            const double across = name == "sepic" ? s.input.voltage_average - r1 + r2
                                  : name == "cuk" ? s.input.voltage_average - r1 + s.output_voltage_average + r2
                                                  : s.output_voltage_average + r2 - r1;
            RC_ASSERT(same(s.coupling.voltage_average, across, volts));
        }
        double whole = 0, weights = 0;
        for (const auto& interval : s.intervals) {
            RC_ASSERT(interval.duration >= 0);
            whole += interval.duration;
        }
        for (const auto& piece : s.reverse_profile) {
            RC_ASSERT(piece.weight >= 0);
            weights += piece.weight;
        }
        RC_ASSERT(same(whole * d.point.frequency, 1, 1));
        RC_ASSERT(same(weights, 1, 1));
    });
}

TEST_CASE("more output takes more duty", "[engine][network][property]") {
    property("the regulated duty rises with the output voltage", [] {
        Drawn d = draw();
        d.point.load = LoadKind::current;
        if (d.circuit.topology->name == "buck") *d.point.output_voltage *= 0.98;
        d.point.load_value = decade(0.02, 8);
        Drawn more = d;
        *more.point.output_voltage *= between(1.001, 1.05);
        RC_LOG() << say(d) << "\nand " << *more.point.output_voltage << " V\n";
        const auto low = solve(d.circuit, d.point), high = solve(more.circuit, more.point);
        RC_PRE(low.reached && high.reached);
        RC_ASSERT(high.duty > low.duty);
    });
}

TEST_CASE("a regulated converter run at its own duty does the same", "[engine][network][property]") {
    property("duty and output voltage determine each other", [] {
        Drawn d = draw();
        d.point.load = LoadKind::resistance;
        d.point.load_value = *d.point.output_voltage / decade(0.02, 8);
        RC_LOG() << say(d) << '\n';
        const auto s = solve(d.circuit, d.point);
        RC_PRE(s.reached);
        Drawn fixed = d;
        fixed.point.output_voltage.reset();
        fixed.point.duty = s.duty;
        const auto t = solve(fixed.circuit, fixed.point);
        RC_ASSERT(std::abs(t.output_voltage_average / *d.point.output_voltage - 1) < 1e-8);
        RC_ASSERT(std::abs(t.switch_.current_rms / s.switch_.current_rms - 1) < 1e-7);
    });
}

TEST_CASE("a solver gives the same answer whatever it solved before", "[engine][network][property]") {
    Solver kept;
    property("warm and cold agree", [&kept] {
        const Drawn d = draw();
        RC_LOG() << say(d) << '\n';
        const auto cold = solve(d.circuit, d.point);
        const auto& warm = kept.solve(d.circuit, d.point);
        RC_ASSERT(cold.reached == warm.reached);
        RC_ASSERT(std::abs(cold.duty - warm.duty) < 1e-9);
        RC_ASSERT(std::abs(cold.switch_.voltage_peak / warm.switch_.voltage_peak - 1) < 1e-7);
        RC_ASSERT(std::abs(cold.output.current_rms - warm.output.current_rms) < 1e-7 * cold.rectifier.current_peak);
    });
}

TEST_CASE("a circuit scaled in impedance, voltage or time gives scaled stresses", "[engine][network][property]") {
    // Exact symmetries of the equations: v → a·v, Z → z·Z (so i → a/z·i), t → t/b.
    property("scaling holds", [] {
        const Drawn d = draw();
        const double a = decade(0.5, 2), z = decade(0.3, 3), b = decade(0.5, 2);
        Drawn e = d;
        e.point.input_voltage *= a;
        *e.point.output_voltage *= a;
        e.point.load_value *= e.point.load == LoadKind::current      ? a / z
                              : e.point.load == LoadKind::resistance ? z
                                                                     : a * a / z;
        e.point.frequency *= b;
        RC_PRE(e.point.frequency < 5e6);
        Circuit& c = e.circuit;
        for (double* r : {&c.source_resistance, &c.primary.resistance, &c.secondary.resistance, &c.switch_resistance,
                          &c.sense_resistance, &c.rectifier_resistance})
            *r *= z;
        for (double* l : {&c.source_inductance, &c.primary.inductance, &c.secondary.inductance}) *l *= z / b;
        c.rectifier_drop *= a;
        for (auto* bank : {&c.input, &c.coupling_capacitor, &c.output})
            for (auto& branch : *bank) branch = {branch.capacitance / z / b, branch.resistance * z};
        RC_LOG() << say(d) << "\nscaled by " << a << ", " << z << ", " << b << ": " << say(e) << '\n';
        const auto s = solve(d.circuit, d.point), t = solve(e.circuit, e.point);
        RC_ASSERT(s.reached == t.reached);
        const double amps = s.switch_.current_peak, volts = s.switch_.voltage_peak + s.output.voltage_max;
        const auto current = [&](double before, double after) {
            return std::abs(after * z / a - before) < 1e-7 * amps;
        };
        const auto voltage = [&](double before, double after) { return std::abs(after / a - before) < 1e-7 * volts; };
        RC_ASSERT(std::abs(s.duty - t.duty) < 1e-8);
        RC_ASSERT(current(s.switch_.current_rms, t.switch_.current_rms) &&
                  current(s.switch_.current_peak, t.switch_.current_peak));
        RC_ASSERT(current(s.output.current_rms, t.output.current_rms) &&
                  current(s.input.current_rms, t.input.current_rms));
        RC_ASSERT(voltage(s.switch_.voltage_peak, t.switch_.voltage_peak) && voltage(s.output_ripple, t.output_ripple));
        RC_ASSERT(voltage(s.rectifier.reverse_voltage_peak, t.rectifier.reverse_voltage_peak));
    });
}

TEST_CASE("switch and rectifier of a sepic see input plus output when ripple is small", "[engine][network][property]") {
    // Erickson & Maksimovic, Fundamentals of Power Electronics, ch. 6; Hart, Power Electronics, ch. 6.
    property("V_DS and V_R are V_in + V_out", [] {
        Drawn d = draw();
        d.circuit.topology = find_topology("sepic");
        d.circuit.coupling = 0;
        d.circuit.turns_ratio = 1;
        d.circuit.source = SourceKind::mean;
        d.circuit.rectifier_drop = 0;
        for (double* r : {&d.circuit.primary.resistance, &d.circuit.secondary.resistance, &d.circuit.switch_resistance,
                          &d.circuit.sense_resistance, &d.circuit.rectifier_resistance})
            *r = 0;
        *d.point.output_voltage = d.point.input_voltage * decade(0.3, 3);
        const double i = decade(0.05, 5), T = 1 / d.point.frequency;
        d.point.load = LoadKind::current;
        d.point.load_value = i;
        const double enough = 1e4 * std::max(i, i * *d.point.output_voltage / d.point.input_voltage) * T /
                              std::min(d.point.input_voltage, *d.point.output_voltage);
        d.circuit.input = d.circuit.coupling_capacitor = d.circuit.output = {{enough, 0}};
        RC_LOG() << say(d) << '\n';
        const auto s = solve(d.circuit, d.point);
        RC_ASSERT(s.reached);
        const double sum = d.point.input_voltage + *d.point.output_voltage;
        RC_ASSERT(s.switch_.voltage_peak >= sum * (1 - 1e-7));  // ripple may be nothing, and figures are exact to 1e-7
        RC_ASSERT(s.switch_.voltage_peak < sum * 1.02);
        RC_ASSERT(std::abs(s.rectifier.reverse_voltage_peak / sum - 1) < 0.02);
    });
}

namespace {

std::string outcome_in_here(const Drawn& d) {
    std::string result;
    try {
        const auto s = solve(d.circuit, d.point);
        result = disorder(s);
        if (result.empty()) result = "answered";
    } catch (const OutsideModel& refusal) {
        result = std::string(refusal.what()).size() > 10 ? "refused" : "refused without a sentence";
    } catch (const std::exception& other) {
        result = std::string("another exception: ") + other.what();
    }
    return result;
}

/// What became of it: "refused", "answered", or what is wrong. A solve that hangs is left behind in its thread, so that
/// it fails its own case and not the whole run; after three of them no more are started.
std::string outcome(const Drawn& d) {
    static int left_behind = 0;
    if (left_behind >= 3) return "not tried: three solves still run";
    auto task = std::make_shared<std::packaged_task<std::string()>>([d] { return outcome_in_here(d); });
    auto result = task->get_future();
    std::thread([task] { (*task)(); }).detach();
    if (result.wait_for(std::chrono::seconds(5)) == std::future_status::ready) return result.get();
    ++left_behind;
    return "no answer within 5 s";
}

Drawn ordinary(const Topology& topology) {
    Drawn d{};
    Circuit& c = d.circuit;
    c.topology = &topology;
    c.primary = {47e-6, 0.02};
    c.secondary = {47e-6, 0.02};
    c.coupling = topology.transformer ? 1 : 0;
    c.switch_resistance = 0.03;
    c.rectifier_drop = 0.4;
    c.rectifier_resistance = 0.02;
    c.input = {{100e-6, 0.03}};
    if (four(topology)) c.coupling_capacitor = {{47e-6, 0.02}};
    c.output = {{220e-6, 0.03}};
    d.point.input_voltage = 12;
    d.point.output_voltage = topology.name == "buck" ? 5 : 24;
    d.point.load_value = 1;
    d.point.frequency = 100e3;
    return d;
}

/// Every value of a converter under a name, with whether zero is a legal value of it.
struct Handle {
    const char* name;
    double* value;
    bool zero_is_fine;
    bool used = true;
};
std::vector<Handle> handles(Drawn& d) {
    Circuit& c = d.circuit;
    const bool second = four(*c.topology);
    std::vector<Handle> list{{"input voltage", &d.point.input_voltage, false},
                             {"output voltage", &*d.point.output_voltage, false},
                             {"load", &d.point.load_value, true},
                             {"frequency", &d.point.frequency, false},
                             {"primary inductance", &c.primary.inductance, false},
                             {"primary resistance", &c.primary.resistance, true},
                             {"switch resistance", &c.switch_resistance, true},
                             {"sense resistance", &c.sense_resistance, true},
                             {"rectifier drop", &c.rectifier_drop, true},
                             {"rectifier resistance", &c.rectifier_resistance, true},
                             {"input capacitance", &c.input[0].capacitance, false},
                             {"input ESR", &c.input[0].resistance, true},
                             {"output capacitance", &c.output[0].capacitance, false},
                             {"output ESR", &c.output[0].resistance, true},
                             {"maximum duty", &c.maximum_duty, false},
                             {"shortest on-time", &c.minimum_on_time, true}};
    if (second) {
        list.push_back({"secondary inductance", &c.secondary.inductance, false});
        list.push_back({"coupling capacitance", &c.coupling_capacitor[0].capacitance, false});
        list.push_back({"coupling ESR", &c.coupling_capacitor[0].resistance, true});
    }
    if (second || c.topology->transformer) {
        list.push_back({"secondary resistance", &c.secondary.resistance, true});
        list.push_back({"coupling", &c.coupling, second});
    }
    if (c.topology->transformer) list.push_back({"turns ratio", &c.turns_ratio, false});
    return list;
}

}  // namespace

TEST_CASE("every ordinary converter is answered", "[engine][network]") {
    for (const auto& topology : topologies()) {
        const Drawn d = ordinary(topology);
        INFO(say(d));
        CHECK(outcome(d) == "answered");
    }
}

TEST_CASE("a value that no part can have is refused in a sentence", "[engine][network][bad]") {
    for (const auto& topology : topologies()) {
        Drawn model = ordinary(topology);
        const size_t count = handles(model).size();
        for (size_t k = 0; k < count; ++k) {
            std::vector<double> impossible{-1, -1e-9, std::numeric_limits<double>::quiet_NaN(),
                                           std::numeric_limits<double>::infinity(),
                                           -std::numeric_limits<double>::infinity()};
            if (!handles(model)[k].zero_is_fine) impossible.push_back(0);
            for (const double value : impossible) {
                Drawn d = ordinary(topology);
                const Handle handle = handles(d)[k];
                *handle.value = value;
                INFO(topology.name << ": " << handle.name << " = " << value);
                INFO(say(d));
                CHECK(outcome(d) == "refused");
            }
        }
    }
}

TEST_CASE("impossible couplings, duties, frequencies and missing parts are refused", "[engine][network][bad]") {
    for (const auto& topology : topologies()) {
        INFO(topology.name);
        if (four(topology))
            for (const double k : {1.0, 1.0000001, 2.0, -0.5}) {
                Drawn d = ordinary(topology);
                d.circuit.coupling = k;
                INFO("coupling " << k);
                CHECK(outcome(d) == "refused");
            }
        if (topology.transformer)
            for (const double k : {1.0000001, 2.0, 0.0}) {
                Drawn d = ordinary(topology);
                d.circuit.coupling = k;
                INFO("coupling " << k);
                CHECK(outcome(d) == "refused");
            }
        for (const double duty : {0.0, 1.0, 1.5, -0.1}) {
            Drawn d = ordinary(topology);
            d.point.output_voltage.reset();
            d.point.duty = duty;
            INFO("duty " << duty);
            CHECK(outcome(d) == "refused");
        }
        for (const double f : {1.0, 999.0, 5.1e6, 1e12}) {
            Drawn d = ordinary(topology);
            d.point.frequency = f;
            INFO("frequency " << f);
            CHECK(outcome(d) == "refused");
        }
        for (int missing = 0; missing < 3; ++missing) {
            Drawn d = ordinary(topology);
            if (missing == 0) d.circuit.output.clear();
            if (missing == 1) d.circuit.topology = nullptr;
            if (missing == 2 && !four(topology)) continue;
            if (missing == 2) d.circuit.coupling_capacitor.clear();
            INFO("missing part " << missing);
            CHECK(outcome(d) == "refused");
        }
    }
}

TEST_CASE("absurd values end in a sound answer or a sentence, never in a hang", "[engine][network][bad]") {
    for (const auto& topology : topologies()) {
        Drawn model = ordinary(topology);
        const size_t count = handles(model).size();
        for (size_t k = 0; k < count; ++k)
            for (const double factor : {1e-12, 1e-6, 1e-3, 1e3, 1e6, 1e12}) {
                Drawn d = ordinary(topology);
                const Handle handle = handles(d)[k];
                *handle.value = (*handle.value == 0 ? 1 : *handle.value) * factor;
                INFO(topology.name << ": " << handle.name << " = " << *handle.value);
                INFO(say(d));
                const auto result = outcome(d);
                CHECK((result == "answered" || result == "refused" ? std::string() : result) == "");
            }
        Drawn d = ordinary(topology);  // 1 F beside 1 nH
        d.circuit.primary.inductance = d.circuit.secondary.inductance = 1e-9;
        d.circuit.output[0] = {1, 0};
        INFO(say(d));
        const auto result = outcome(d);
        CHECK((result == "answered" || result == "refused" ? std::string() : result) == "");
    }
}

TEST_CASE("ever lighter loads are answered, down to none at all", "[engine][network][bad]") {
    // In discontinuous operation the power rises with the square of the duty (Erickson & Maksimovic, Fundamentals of
    // Power Electronics, ch. 5): duty over the root of the load is one number.
    for (const auto& topology : topologies()) {
        double last_duty = 1, number = 0;
        for (const double load : {1e-2, 1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8, 1e-9, 0.0}) {
            Drawn d = ordinary(topology);
            d.point.load_value = load;
            INFO(say(d));
            const auto result = outcome(d);
            CHECK((result == "answered" || (load == 0 && result == "refused") ? std::string() : result) == "");
            if (result != "answered") continue;
            const auto s = solve(d.circuit, d.point);
            if (!s.reached) continue;
            CHECK(s.duty < last_duty);
            last_duty = s.duty;
            if (load == 0) continue;
            if (number > 0) CHECK(std::abs(s.duty / std::sqrt(load) / number - 1) < 0.02);
            number = s.duty / std::sqrt(load);
        }
    }
}

TEST_CASE("a load that no duty can carry leaves no output voltage, never a negative one", "[engine][network][bad]") {
    // A load draws nothing at zero volts: a constant current that pulls the output below zero exists in the model only.
    for (const auto& topology : topologies()) {
        Drawn d = ordinary(topology);
        d.point.load_value = 1000;
        INFO(say(d));
        const auto s = solve(d.circuit, d.point);
        CHECK_FALSE(s.reached);
        CHECK(s.highest_output >= 0);
    }
}

TEST_CASE("random mixtures of absurd values end in a sound answer or a sentence", "[engine][network][bad][property]") {
    property("nothing hangs and nothing is not a number", [] {
        Drawn d = draw();
        auto list = handles(d);
        const int changes = *rc::gen::inRange(1, 5);
        for (int k = 0; k < changes; ++k)
            *list[static_cast<size_t>(*rc::gen::inRange(0, static_cast<int>(list.size())))].value *= decade(1e-6, 1e6);
        RC_LOG() << say(d) << '\n';
        const auto result = outcome(d);
        RC_LOG() << result << '\n';
        RC_ASSERT(result == "answered" || result == "refused");
    });
}
