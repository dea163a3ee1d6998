// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/network/steady_state.hpp"

#include <fmt/format.h>

#include <boost/math/tools/minima.hpp>
#include <cmath>
#include <limits>
#include <variant>

#include "engine/network/equations.hpp"
#include "engine/network/measure.hpp"
#include "engine/network/period.hpp"

namespace binwright {
namespace {

void require(bool good, std::string_view what, double value, std::string_view bound) {
    if (!good) throw OutsideModel(fmt::format("{} is {:.6g}; the network needs {}", what, value, bound));
}

void check_bank(std::string_view name, const std::vector<CapacitorValues>& bank) {
    for (const CapacitorValues& part : bank) {
        require(part.capacitance > 0 && part.capacitance <= 100, fmt::format("{} capacitance", name), part.capacitance,
                "more than 0 F, at most 100 F");
        require(part.resistance >= 0 && part.resistance < 1e9, fmt::format("{} ESR", name), part.resistance, "0 Ω or more");
    }
}

void check_circuit(const Circuit& circuit) {
    if (circuit.topology == nullptr) throw OutsideModel("no topology is given");
    const Topology& topology = *circuit.topology;
    const auto resistance = [](std::string_view what, double value) {
        require(value >= 0 && value < 1e9, what, value, "0 Ω or more");
    };
    require(circuit.primary.inductance > 0 && circuit.primary.inductance < 1e6, "the winding's inductance",
            circuit.primary.inductance, "more than 0 H");
    resistance("the winding's resistance", circuit.primary.resistance);
    if (has_secondary(topology)) {
        resistance("the second winding's resistance", circuit.secondary.resistance);
        if (topology.transformer) {
            require(circuit.turns_ratio > 0 && circuit.turns_ratio < 1e6, "the turns ratio", circuit.turns_ratio, "more than 0");
            require(circuit.coupling > 0 && circuit.coupling <= 1, "the coupling", circuit.coupling, "0 < k ≤ 1 in a transformer");
        } else {
            require(circuit.secondary.inductance > 0 && circuit.secondary.inductance < 1e6, "the second winding's inductance",
                    circuit.secondary.inductance, "more than 0 H");
            require(circuit.coupling >= 0 && circuit.coupling <= 0.999, "the coupling", circuit.coupling, "0 ≤ k ≤ 0.999");
        }
    }
    resistance("the switch resistance", circuit.switch_resistance);
    resistance("the sense resistance", circuit.sense_resistance);
    resistance("the rectifier resistance", circuit.rectifier_resistance);
    require(circuit.rectifier_drop >= 0 && circuit.rectifier_drop < 1e4, "the rectifier drop", circuit.rectifier_drop, "0 V or more");
    resistance("the source resistance", circuit.source_resistance);
    require(circuit.source_inductance >= 0 && circuit.source_inductance < 1e6, "the source inductance",
            circuit.source_inductance, "0 H or more");
    require(circuit.minimum_on_time >= 0, "the shortest on-time", circuit.minimum_on_time, "0 s or more");
    check_bank("input capacitor", circuit.input);
    check_bank("coupling capacitor", circuit.coupling_capacitor);
    check_bank("output capacitor", circuit.output);
    if (circuit.output.empty()) throw OutsideModel("there is no output capacitor; the network needs one");
    if (has_seat(topology, Seat::coupling_capacitor) && circuit.coupling_capacitor.empty())
        throw OutsideModel("there is no coupling capacitor; the network needs one");
    if (circuit.source == SourceKind::impedance && circuit.source_inductance > 0 && circuit.input.empty())
        throw OutsideModel("there is no input capacitor behind the source's inductance; the network needs one");
    require(circuit.maximum_duty > 0 && circuit.maximum_duty <= 1, "the duty limit", circuit.maximum_duty, "0 < D ≤ 1");
}

void check_point(const OperatingPoint& point) {
    require(point.input_voltage > 0 && point.input_voltage < 1e6, "the input voltage", point.input_voltage, "more than 0 V");
    require(point.frequency >= 1e3 && point.frequency <= 5e6, "the switching frequency", point.frequency, "1 kHz to 5 MHz");
    if (point.output_voltage)
        require(*point.output_voltage > 0 && *point.output_voltage < 1e6, "the output voltage", *point.output_voltage,
                "more than 0 V");
    else
        require(point.duty > 0 && point.duty < 1, "the duty", point.duty, "0 < D < 1");
    if (point.load == LoadKind::resistance)
        require(point.load_value > 0, "the load resistance", point.load_value, "more than 0 Ω");
    else
        require(point.load_value >= 0 && std::isfinite(point.load_value), "the load", point.load_value, "0 or more");
}

/// Solves points with systems padded to N.
template <int N>
class Core {
  public:
    void solve(const Circuit& circuit, const OperatingPoint& point, const StateEquations& equations, SteadyState& result) {
        circuit_ = &circuit;
        point_ = &point;
        equations_ = &equations;
        mean_feed_ = circuit.source == SourceKind::mean && !circuit.input.empty();
        load_ = 0;
        const bool idle = point.load != LoadKind::resistance && point.load_value == 0;
        if (point.load == LoadKind::current) load_ = point.load_value;
        if (point.load == LoadKind::power && point.output_voltage) load_ = point.load_value / *point.output_voltage;
        if (idle) load_ = vanishing_load();
        build();
        result.reached = true;
        result.highest_output = result.least_load = 0;
        result.warnings.clear();
        if (point.output_voltage) {
            regulate(*point.output_voltage, result);
        } else if (point.load == LoadKind::power && !idle) {
            balance_power();
        } else if (!period_.settle(point.duty)) {
            fail(point.duty);
        }
        fill(result);
        if (idle) {
            result.mode = Mode::idle;
            result.duty = 0;
            result.warnings.push_back("no load: computed as the limit of a vanishing load");
        }
        warm_ = true;
    }

    void forget() { warm_ = false; }

  private:
    const Circuit* circuit_ = nullptr;
    const OperatingPoint* point_ = nullptr;
    const StateEquations* equations_ = nullptr;
    Period<N> period_;
    double load_ = 0;
    bool mean_feed_ = false;
    bool warm_ = false;

    void build() {
        period_.build(*equations_, 1 / point_->frequency, point_->input_voltage, circuit_->rectifier_drop, load_, mean_feed_);
    }

    [[nodiscard]] double vanishing_load() const {
        const double volts = point_->output_voltage.value_or(point_->input_voltage);
        return 1e-7 * volts / (circuit_->primary.inductance * point_->frequency);
    }

    [[noreturn]] void fail(double duty) const {
        throw OutsideModel(fmt::format(
            "no periodic steady state was found at a duty of {:.4g} % (input {:.4g} V, {:.4g} Hz): the rectifier switches "
            "irregularly, or the circuit resonates at the switching frequency",
            100 * duty, point_->input_voltage, point_->frequency));
    }

    /// Mean output at a duty; NaN where there is no steady state.
    double output_at(double duty) {
        if (!period_.settle(duty)) return std::numeric_limits<double>::quiet_NaN();
        return period_.mean_output();
    }

    void regulate(double wanted, SteadyState& result) {
        const double least = std::min(circuit_->minimum_on_time * point_->frequency, circuit_->maximum_duty);
        const double most = std::min(circuit_->maximum_duty, 1 - 1e-6);
        if (warm_ && period_.duty > least && period_.duty < most) {
            const Column<N> start = period_.start;
            const double duty = period_.duty;
            if (period_.shoot(wanted, 10) && period_.duty >= least && period_.duty <= most && period_.slope_of_output > 0) return;
            if (period_.settle(duty) && period_.shoot(wanted, 12) && period_.duty >= least && period_.duty <= most &&
                period_.slope_of_output > 0)
                return;
            period_.start = start;
            period_.duty = duty;
        }
        const double light = 1e-4 * wanted / (circuit_->primary.inductance * point_->frequency);
        if (point_->load == LoadKind::resistance || load_ >= light || !approach(wanted, light, least, most, result))
            search(wanted, least, most, result);
    }

    /// A light load from a heavier one: in discontinuous operation the duty follows the root of the load and all currents
    /// at turn-on the load itself. @returns false when that leads nowhere
    bool approach(double wanted, double light, double least, double most, SteadyState& result) {
        const double target = load_;
        load_ = light;
        build();
        search(wanted, least, most, result);
        bool found = result.reached;
        while (found && load_ > target) {
            const double ratio = std::max(0.1, target / load_);
            load_ = ratio > 0.1 ? target : load_ * ratio;
            build();
            for (int k = 0; k < equations_->windings; ++k) period_.start[k] *= ratio;
            if (period_.feed >= 0) period_.start[period_.feed] *= ratio;
            period_.duty *= std::sqrt(ratio);
            found = period_.shoot(wanted, 30) && period_.duty >= least;
        }
        load_ = target;
        if (!found) {
            build();
            result.reached = true;
            result.highest_output = 0;
            result.warnings.clear();
        }
        return found;
    }

    /// The lowest duty at which the mean output is the wanted one, from nothing.
    void search(double wanted, double least, double most, SteadyState& result) {
        double previous_duty = least, previous = output_at(least);
        if (previous >= wanted) {
            if (previous <= wanted * (1 + 1e-12)) return;
            too_much(wanted, least, result);
            return;
        }
        constexpr double grid[] = {0.01, 0.03, 0.07, 0.12, 0.18, 0.25, 0.32, 0.40, 0.48, 0.56, 0.63, 0.70, 0.76, 0.81,
                                   0.85, 0.88, 0.91, 0.93, 0.95, 0.965, 0.978, 0.988, 0.995, 1.0};
        double best_duty = least, best = previous, before_best = least, after_best = most;
        bool after_known = true;
        for (const double share : grid) {
            const double duty = least + share * (most - least);
            const double output = output_at(duty);
            if (output >= wanted) {
                refine(wanted, previous_duty, previous, duty, output);
                return;
            }
            if (!after_known) after_best = duty, after_known = true;
            if (output > best || !(best > -HUGE_VAL)) {
                best = output;
                best_duty = duty;
                before_best = previous_duty;
                after_best = most;
                after_known = false;
            }
            if (std::isfinite(output)) previous_duty = duty, previous = output;
        }
        // The gain curve folds back between two looks at it: find its top.
        std::uintmax_t steps = 60;
        const auto top = boost::math::tools::brent_find_minima(
            [&](double duty) {
                const double output = output_at(duty);
                return std::isfinite(output) ? -output : HUGE_VAL;
            },
            before_best, std::max(after_best, best_duty), 30, steps);
        if (-top.second > best) best = -top.second, best_duty = top.first;
        if (best >= wanted) {
            const double low = before_best;
            refine(wanted, low, output_at(low), best_duty, best);
            return;
        }
        if (!period_.settle(best_duty)) fail(best_duty);
        result.reached = false;
        result.highest_output = std::max(0.0, period_.mean_output());
        if (period_.mean_output() < 0)
            result.warnings.push_back("no duty carries this load: a constant current pulls the model's output below zero");
    }

    void refine(double wanted, double low, double at_low, double high, double at_high) {
        if (!std::isfinite(at_low)) at_low = -wanted;
        double duty = high;
        if (at_high > wanted && at_low < wanted) {
            std::uintmax_t steps = 80;
            bool sound = true;
            const auto bracket = boost::math::tools::toms748_solve(
                [&](double trial) {
                    const double output = output_at(trial);
                    if (!std::isfinite(output)) sound = false;
                    return sound ? output - wanted : 0.0;
                },
                low, high, at_low - wanted, at_high - wanted,
                [](double a, double b) { return std::abs(a - b) <= 1e-3 * std::max(std::abs(a), std::abs(b)); }, steps);
            if (!sound) fail(bracket.first);
            duty = 0.5 * (bracket.first + bracket.second);
            low = bracket.first;
            high = bracket.second;
        }
        if (!period_.settle(duty)) fail(duty);
        if (period_.shoot(wanted, 20) && period_.duty >= low - 1e-9 && period_.duty <= high + 1e-9) return;
        // Newton left the bracket (the border of two modes, or the top of the gain curve): bisect to rounding.
        double below = output_at(low) - wanted, above = output_at(high) - wanted;
        if (!(below * above <= 0)) fail(duty);
        std::uintmax_t steps = 120;
        const auto bracket = boost::math::tools::toms748_solve([&](double trial) { return output_at(trial) - wanted; }, low,
                                                               high, below, above,
                                                               boost::math::tools::eps_tolerance<double>(51), steps);
        if (!period_.settle(0.5 * (bracket.first + bracket.second))) fail(bracket.first);
    }

    /// The shortest on-time (or no switching at all) already gives more than is wanted.
    void too_much(double wanted, double least, SteadyState& result) {
        result.reached = false;
        result.highest_output = period_.mean_output();
        const double output = result.highest_output;
        if (!(circuit_->minimum_on_time > 0) || point_->load == LoadKind::resistance) {
            result.warnings.push_back(fmt::format("the output cannot fall below {:.4g} V here", output));
            return;
        }
        const double load = load_;
        double low = load_, high = std::max(load_, vanishing_load());
        const auto excess = [&](double amperes) {
            load_ = amperes;
            build();
            return output_at(least) - wanted;
        };
        bool found = false;
        for (int k = 0; k < 60 && !found; ++k) {
            high *= 2;
            found = excess(high) < 0;
        }
        if (found) {
            std::uintmax_t steps = 60;
            const auto bracket = boost::math::tools::toms748_solve(
                excess, low, high, output - wanted, excess(high),
                [](double a, double b) { return std::abs(a - b) <= 1e-9 * std::max(a, b); }, steps);
            result.least_load = 0.5 * (bracket.first + bracket.second);
        }
        load_ = load;
        build();
        if (!period_.settle(least)) fail(least);
    }

    /// Constant power at a set duty: the least current at which the mean output takes that power.
    void balance_power() {
        const double watts = point_->load_value;
        const auto excess = [&](double amperes) {
            load_ = amperes;
            build();
            return amperes * output_at(point_->duty) - watts;
        };
        double low = watts / point_->input_voltage * 1e-3, at_low = excess(low);
        if (at_low >= 0)
            throw OutsideModel(fmt::format(
                "at a duty of {:.4g} % the converter delivers more than {:.4g} W into any light load: with a load of constant "
                "power the output would rise without end",
                100 * point_->duty, watts));
        double high = low, at_high = at_low, best = at_low;
        for (int k = 0; k < 80 && !(at_high >= 0); ++k) {
            if (std::isfinite(at_high)) low = high, at_low = at_high;
            high *= 1.25;
            at_high = excess(high);
            if (at_high > best || !std::isfinite(best)) best = at_high;
        }
        if (!(at_high >= 0) || !(at_low < 0))
            throw OutsideModel(fmt::format("at a duty of {:.4g} % the converter delivers at most {:.4g} W; the load wants {:.4g} W",
                                           100 * point_->duty, best + watts, watts));
        std::uintmax_t steps = 100;
        bool sound = true;
        const auto bracket = boost::math::tools::toms748_solve(
            [&](double amperes) {
                const double value = excess(amperes);
                sound = sound && std::isfinite(value);
                return sound ? value : 0.0;
            },
            low, high, at_low, at_high, boost::math::tools::eps_tolerance<double>(48), steps);
        if (!sound || !std::isfinite(excess(0.5 * (bracket.first + bracket.second)))) fail(point_->duty);
    }

    void fill(SteadyState& result) {
        const StateEquations& equations = *equations_;
        Measure<N> measure(period_, equations, point_->input_voltage, circuit_->rectifier_drop, load_);
        result.reverse_profile.clear();
        result.intervals.clear();
        const double period = 1 / point_->frequency;
        double conduction = 0, idle = 0;
        for (int k = 0; k < period_.count; ++k) measure.look_at(period_.pieces[k]);
        for (int k = 0; k < period_.count; ++k) {
            const auto& piece = period_.pieces[k];
            measure.add(piece, result.reverse_profile);
            if (piece.duration > 0)
                result.intervals.push_back({piece.duration * period, bool(piece.configuration & 1), bool(piece.configuration & 2)});
            if (piece.configuration & 2) conduction += piece.duration;
            if (piece.configuration == 0) idle += piece.duration;
        }
        const OutputSums& sums = measure.sums;
        const auto rms = [&](int output) { return std::sqrt(std::max(0.0, sums.square[output])); };
        const auto& first = period_.pieces[0];
        const auto& last = period_.pieces[period_.count - 1];
        const auto value = [&](int configuration, int output, const Column<N>& z) {
            return dot<N>(measure.row(configuration, output).a, z);
        };
        result.duty = period_.duty;
        result.mode = idle > 1e-12 ? Mode::discontinuous : Mode::continuous;
        result.rectifier_fraction = conduction;
        result.input_current_average = sums.mean[source_current];
        result.output_voltage_average = sums.mean[output_voltage];
        result.output_current_average = sums.mean[load_current];
        result.output_ripple = sums.highest[output_voltage] - sums.lowest[output_voltage];
        result.input_power = sums.input_power;
        result.output_power = sums.output_power;

        SwitchStress& sw = result.switch_;
        sw.voltage_peak = sums.highest[switch_voltage];
        sw.current_peak = sums.highest[switch_current];
        sw.current_rms = rms(switch_current);
        sw.current_average = sums.mean[switch_current];
        sw.current_turn_on = sw.current_turn_off = 0;
        sw.voltage_turn_on = value(last.configuration, switch_voltage, period_.end);
        sw.voltage_turn_off = 0;
        if (first.configuration & 1) sw.current_turn_on = value(first.configuration, switch_current, first.start);
        for (int k = 0; k + 1 < period_.count; ++k) {
            const auto& on = period_.pieces[k];
            const auto& off = period_.pieces[k + 1];
            if (!(on.configuration & 1) || (off.configuration & 1)) continue;
            sw.current_turn_off = value(on.configuration, switch_current, on.flow * on.start);
            sw.voltage_turn_off = value(off.configuration, switch_voltage, off.start);
        }
        RectifierStress& rect = result.rectifier;
        rect.reverse_voltage_peak = sums.highest_reverse;
        rect.current_peak = sums.highest[rectifier_current];
        rect.current_rms = rms(rectifier_current);
        rect.current_average = sums.mean[rectifier_current];
        rect.current_turn_off = (last.configuration & 2) ? value(last.configuration, rectifier_current, period_.end) : 0;
        rect.voltage_turn_on = 0;
        for (int k = 0; k < period_.count; ++k)
            if (period_.pieces[k].configuration == 1) {
                rect.voltage_turn_on = -value(1, rectifier_voltage, period_.pieces[k].start);
                break;
            }
        const auto bank = [&](CapacitorStress& stress, int voltage, int current, int which, std::size_t kinds) {
            stress.voltage_average = sums.mean[voltage];
            stress.voltage_max = sums.highest[voltage];
            stress.voltage_min = sums.lowest[voltage];
            stress.current_rms = rms(current);
            stress.branch_current_rms.assign(kinds, kinds == 1 ? stress.current_rms : 0.0);
            for (const auto& branch : equations.bank_branches)
                if (branch.bank == which) stress.branch_current_rms[branch.original] = rms(branch.output);
        };
        bank(result.input, Output::input_voltage, input_bank_current, 0, circuit_->input.size());
        bank(result.output, output_voltage, output_bank_current, 2, circuit_->output.size());
        if (!circuit_->coupling_capacitor.empty())
            bank(result.coupling, coupling_voltage, coupling_bank_current, 1, circuit_->coupling_capacitor.size());
        else
            result.coupling = {};
        const auto winding = [&](WindingStress& stress, int output) {
            stress = {sums.mean[output], rms(output), sums.highest[output], sums.lowest[output]};
        };
        winding(result.primary, primary_current);
        if (has_secondary(*circuit_->topology)) {
            winding(result.secondary, secondary_current);
            winding(result.magnetising, magnetising_current);
        } else {
            result.secondary = result.magnetising = {};
        }
        result.core_current_peak = has_secondary(*circuit_->topology) ? result.magnetising.current_peak : result.primary.current_peak;

        if (sums.highest_forward_on > 1e-6)
            result.warnings.push_back(fmt::format(
                "while the switch is on the rectifier would be forward biased by up to {:.3g} V: the true circuit conducts there",
                sums.highest_forward_on));
        if (sums.lowest_off_voltage < -1e-6)
            result.warnings.push_back(fmt::format(
                "while the switch is off its voltage falls to {:.3g} V: its body diode would conduct", sums.lowest_off_voltage));
        if (period_.forced_off)
            result.warnings.push_back("at turn-off the windings' current flows backwards through the switch: its body diode would carry it");
    }


  public:
    void collect(int samples, Waveforms& waves) {
        const StateEquations& equations = *equations_;
        Measure<N> measure(period_, equations, point_->input_voltage, circuit_->rectifier_drop, load_);
        struct Named { int output; const char* name; };
        std::vector<Named> named = {{switch_voltage, "switch.voltage"}, {switch_current, "switch.current"},
                                    {rectifier_voltage, "rectifier.voltage"}, {rectifier_current, "rectifier.current"},
                                    {Output::input_voltage, "input_capacitor.voltage"},
                                    {input_bank_current, "input_capacitor.current"},
                                    {output_voltage, "output_capacitor.voltage"},
                                    {output_bank_current, "output_capacitor.current"},
                                    {primary_current, "primary.current"}, {source_current, "source.current"},
                                    {load_current, "load.current"}};
        if (!circuit_->coupling_capacitor.empty()) {
            named.push_back({coupling_voltage, "coupling_capacitor.voltage"});
            named.push_back({coupling_bank_current, "coupling_capacitor.current"});
        }
        if (has_secondary(*circuit_->topology)) {
            named.push_back({secondary_current, "secondary.current"});
            named.push_back({magnetising_current, "magnetising.current"});
        }
        waves.names = {"time"};
        for (const Named& entry : named) waves.names.push_back(entry.name);
        waves.columns.assign(waves.names.size(), {});
        const double period = 1 / point_->frequency;
        double start = 0;
        for (int k = 0; k < period_.count; ++k) {
            const auto& piece = period_.pieces[k];
            const int steps = std::max(2, static_cast<int>(std::ceil(samples * piece.duration)));
            Square<N> E;
            exponential(period_.generator[piece.configuration], piece.duration / steps, E);
            Column<N> z = piece.start;
            for (int s = 0; s <= steps; ++s) {
                waves.columns[0].push_back((start + piece.duration * s / steps) * period);
                for (std::size_t c = 0; c < named.size(); ++c)
                    waves.columns[c + 1].push_back(dot<N>(measure.row(piece.configuration, named[c].output).a, z));
                if (s < steps) z = E * z;
            }
            start += piece.duration;
        }
    }
};

bool same(const std::vector<CapacitorValues>& a, const std::vector<CapacitorValues>& b) {
    if (a.size() != b.size()) return false;
    for (std::size_t k = 0; k < a.size(); ++k)
        if (a[k].capacitance != b[k].capacitance || a[k].resistance != b[k].resistance) return false;
    return true;
}

/// Whether two circuits have the same state equations.
bool same_network(const Circuit& a, const Circuit& b) {
    return a.topology == b.topology && a.source == b.source && a.source_resistance == b.source_resistance &&
           a.source_inductance == b.source_inductance && a.primary.inductance == b.primary.inductance &&
           a.primary.resistance == b.primary.resistance && a.secondary.inductance == b.secondary.inductance &&
           a.secondary.resistance == b.secondary.resistance && a.coupling == b.coupling && a.turns_ratio == b.turns_ratio &&
           a.switch_resistance == b.switch_resistance && a.sense_resistance == b.sense_resistance &&
           a.rectifier_resistance == b.rectifier_resistance && same(a.input, b.input) &&
           same(a.coupling_capacitor, b.coupling_capacitor) && same(a.output, b.output);
}

using AnyCore = std::variant<std::monostate, Core<6>, Core<8>, Core<10>, Core<12>, Core<16>, Core<24>>;

}  // namespace

struct Solver::Inside {
    Circuit circuit;
    OperatingPoint point{};
    double conductance = -1;
    StateEquations equations;
    std::unique_ptr<AnyCore> core = std::make_unique<AnyCore>();
    SteadyState result;

    void solve(const Circuit& wanted, const OperatingPoint& at) {
        check_circuit(wanted);
        check_point(at);
        require(wanted.minimum_on_time * at.frequency < 1, "the shortest on-time", wanted.minimum_on_time,
                "less than one switching period");
        const double load_conductance = at.load == LoadKind::resistance ? 1 / at.load_value : 0;
        const int before = equations.states;
        if (!same_network(wanted, circuit) || load_conductance != conductance) {
            conductance = -1;
            circuit = wanted;
            derive(circuit, load_conductance, equations);
            conductance = load_conductance;
        } else {
            circuit = wanted;
        }
        point = at;
        const int size = equations.states + 2 + (circuit.source == SourceKind::mean && !circuit.input.empty() ? 2 : 0);
        const std::size_t index = size <= 6 ? 1 : size <= 8 ? 2 : size <= 10 ? 3 : size <= 12 ? 4 : size <= 16 ? 5 : 6;
        if (core->index() != index || before != equations.states) {
            switch (index) {
                case 1: core->emplace<1>(); break;
                case 2: core->emplace<2>(); break;
                case 3: core->emplace<3>(); break;
                case 4: core->emplace<4>(); break;
                case 5: core->emplace<5>(); break;
                default: core->emplace<6>(); break;
            }
        }
        std::visit(
            [&](auto& used) {
                if constexpr (!std::is_same_v<std::decay_t<decltype(used)>, std::monostate>)
                    try {
                        used.solve(circuit, point, equations, result);
                    } catch (...) {
                        used.forget();
                        throw;
                    }
            },
            *core);
    }
};

Solver::Solver() : inside_(std::make_unique<Inside>()) {}
Solver::~Solver() = default;
Solver::Solver(Solver&&) noexcept = default;
Solver& Solver::operator=(Solver&&) noexcept = default;

const SteadyState& Solver::solve(const Circuit& circuit, const OperatingPoint& point) {
    inside_->solve(circuit, point);
    return inside_->result;
}

SteadyState solve(const Circuit& circuit, const OperatingPoint& point) {
    Solver solver;
    return solver.solve(circuit, point);
}

Waveforms waveforms(const Circuit& circuit, const OperatingPoint& point, int samples) {
    Solver::Inside inside;
    inside.solve(circuit, point);
    Waveforms waves;
    std::visit(
        [&](auto& used) {
            if constexpr (!std::is_same_v<std::decay_t<decltype(used)>, std::monostate>) used.collect(samples, waves);
        },
        *inside.core);
    return waves;
}

std::string_view to_string(Mode mode) {
    switch (mode) {
        case Mode::continuous: return "continuous";
        case Mode::discontinuous: return "discontinuous";
        default: return "idle";
    }
}

}  // namespace binwright
