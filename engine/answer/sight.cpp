// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/sight.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "engine/loss/figures.hpp"

namespace binwright {
namespace {

using Terms = std::vector<Term>;

constexpr double kNoSurge = 1e-3;  ///< a rectifier that carries less when the input is connected carries nothing [A]

double sum(const Terms& terms) {
    double total = 0;
    for (const Term& term : terms) total += term.value;
    return total;
}

/// The sum of input and output (the latter as the transformer shows it) that a blocking voltage is made of: whichever of the four
/// possible sums lies nearest, the rest being drops and ripple.
Terms blocking_terms(double voltage, double input, double output, double input_scale, double output_scale) {
    const double in = input * input_scale, out = output * output_scale;
    const Terms choices[] = {{{"input", in}}, {{"output", out}}, {{"input", in}, {"output", out}}};
    const Terms* best = &choices[0];
    for (const Terms& choice : choices)
        if (std::abs(sum(choice) - voltage) < std::abs(sum(*best) - voltage)) best = &choice;
    Terms terms = *best;
    terms.push_back({"drop and ripple", voltage - sum(terms)});
    return terms;
}

const Fitted* fitted_at(const Bench& bench, const StressKey& key) {
    const auto found = bench.setup->fitted.find(key.seat);
    return found == bench.setup->fitted.end() || key.entry >= found->second.size() ? nullptr : &found->second[key.entry];
}

const CapacitorModel* capacitor_at(const Bench& bench, const StressKey& key) {
    const auto found = bench.models.banks.find(key.seat);
    return found == bench.models.banks.end() || key.entry >= found->second.size() ? nullptr : &found->second[key.entry].model;
}

const CapacitorStress& bank_state(const SteadyState& state, Seat seat) {
    if (seat == Seat::input_capacitor) return state.input;
    return seat == Seat::coupling_capacitor ? state.coupling : state.output;
}

/// Ripple current of one of the parts of an entry.
double ripple_of_one(const Bench& bench, const StressKey& key, const Operated& operated) {
    const CapacitorStress& state = bank_state(operated.state, key.seat);
    const auto found = bench.models.banks.find(key.seat);
    if (found == bench.models.banks.end()) return state.current_rms;
    std::size_t branch = 0;  // entries without a capacitance are not in the network
    for (std::size_t k = 0; k < key.entry; ++k) branch += found->second[k].model.capacitance.has_value();
    if (branch >= state.branch_current_rms.size()) return 0;
    return state.branch_current_rms[branch] / found->second[key.entry].count;
}

double surge_of(const Bench& bench) {
    const auto& source = bench.setup->converter.source;
    return source && source->surge ? *source->surge : 0.0;
}

const Extreme* connected_capacitor(const Connected& connected, Seat seat) {
    if (seat == Seat::input_capacitor) return &connected.peaks.input;
    return seat == Seat::coupling_capacitor ? &connected.peaks.coupling : &connected.peaks.output;
}

/// What the hot connection does to a part, where it does more than the converter at work.
std::optional<Terms> connection_terms(const Bench& bench, const StressKey& key, double at_work) {
    if (!bench.connected || !bench.connected->not_computed.empty()) return std::nullopt;
    const ConnectionPeaks& peaks = bench.connected->peaks;
    double value = 0;
    switch (key.stress) {
        case Stress::voltage_peak_single:
            if (key.seat == Seat::switch_) value = peaks.switch_voltage.highest;
            else if (key.seat == Seat::rectifier) value = peaks.reverse_voltage;
            else {
                const Extreme* of = connected_capacitor(*bench.connected, key.seat);
                value = std::max(of->highest, -of->lowest);
            }
            break;
        case Stress::voltage_reverse: value = -connected_capacitor(*bench.connected, key.seat)->lowest; break;
        case Stress::current_surge: {
            const double legs = bench.models.rectifier ? bench.models.rectifier->legs : 1;
            value = peaks.rectifier_current * (legs > 1 ? (1 + bench.allowances.sharing) / legs : 1.0);
            break;
        }
        default: return std::nullopt;
    }
    if (!(value > at_work)) return std::nullopt;
    if (key.stress != Stress::voltage_peak_single) return Terms{{"hot connection", value}};
    const double in = bench.connected->input_voltage;
    if (value < in) return Terms{{"hot connection", value}};
    return Terms{{"input", in}, {"ring of the hot connection", value - in}};
}

/// Whether the input reaches the output through windings and rectifier alone: then a surge passes, whatever the switch does.
bool input_reaches_output(const Topology& topology) {
    int source = -1, load = -1;
    for (const Branch& branch : topology.branches) {
        if (branch.kind == BranchKind::source) source = branch.from;
        if (branch.kind == BranchKind::load) load = branch.from;
    }
    std::vector<bool> reached(topology.nodes.size(), false);
    reached[source] = true;
    reached[0] = false;
    for (std::size_t round = 0; round < topology.nodes.size(); ++round)
        for (const Branch& branch : topology.branches) {
            const bool winding = branch.kind == BranchKind::primary || (branch.kind == BranchKind::secondary && !topology.transformer);
            if (!winding && branch.kind != BranchKind::rectifier) continue;
            if (branch.from == 0 || branch.to == 0) continue;
            if (reached[branch.from]) reached[branch.to] = true;
            if (winding && reached[branch.to]) reached[branch.from] = true;
        }
    return load > 0 && reached[load];
}

/// What a surge adds to a voltage made of these terms: to its share of the input, or to an output that follows the input.
void add_surge(Terms& terms, const Bench& bench, const At& at, const Operated& operated) {
    const double surge = surge_of(bench);
    if (!(surge > at.input_voltage) || terms.empty()) return;
    const bool follows = input_reaches_output(*operated.circuit.topology);
    if (terms.front().name == "input" && at.input_voltage > 0)
        terms.push_back({"surge above the input", (surge - at.input_voltage) * terms.front().value / at.input_voltage});
    else if (terms.front().name == "output" && follows)
        terms.push_back({"surge above the output", std::max(0.0, surge - operated.state.output_voltage_average)});
}

Terms switch_voltage_terms(const Bench& bench, const At& at, const Operated& operated, bool with_surge, std::vector<std::string>& rests_on) {
    const SteadyState& state = operated.state;
    const bool transformer = operated.circuit.topology->transformer;
    Terms terms = blocking_terms(state.switch_.voltage_peak, at.input_voltage, state.output_voltage_average, 1,
                                 transformer ? 1 / operated.circuit.turns_ratio : 1);
    if (with_surge) add_surge(terms, bench, at, operated);
    const double blocked = sum(terms);
    const SeatConfig& config = bench.setup->converter.seat(Seat::switch_);
    if (config.overshoot) {
        double volts = config.overshoot->voltage;
        if (config.overshoot->at_current && *config.overshoot->at_current > 0)
            volts *= std::max(0.0, state.switch_.current_turn_off) / *config.overshoot->at_current;
        else
            rests_on.push_back("overshoot measured at an unstated current, taken as it is");
        terms.push_back({"overshoot, measured", volts});
    } else if (bench.setup->converter.clamp.voltage) {
        // A clamp below what the switch must block anyway does not hold it there: it only burns.
        const double above = *bench.setup->converter.clamp.voltage - blocked;
        terms.push_back({"up to the clamp", above > 0 ? above : bench.allowances.switch_overshoot * blocked});
        if (!(above > 0)) rests_on.push_back(fmt::format("the clamp of {} lies below the {} that the switch blocks: it is not counted", format_quantity(*bench.setup->converter.clamp.voltage, Unit::volt),
                                                         format_quantity(blocked, Unit::volt)));
    } else {
        const double share = bench.allowances.switch_overshoot;
        terms.push_back({"overshoot, assumed", share * blocked});
        rests_on.push_back(fmt::format("overshoot {} of {}, not measured", format_quantity(share, Unit::fraction),
                                       format_quantity(blocked, Unit::volt)));
    }
    return terms;
}

Terms rectifier_voltage_terms(const Bench& bench, const At& at, const Operated& operated, bool with_surge, std::vector<std::string>& rests_on) {
    const SteadyState& state = operated.state;
    const bool transformer = operated.circuit.topology->transformer;
    Terms terms = blocking_terms(state.rectifier.reverse_voltage_peak, at.input_voltage, state.output_voltage_average,
                                 transformer ? operated.circuit.turns_ratio : 1, 1);
    if (with_surge) add_surge(terms, bench, at, operated);
    const double blocked = sum(terms);
    const SeatConfig& config = bench.setup->converter.seat(Seat::rectifier);
    if (config.overshoot) {
        terms.push_back({"overshoot, measured", config.overshoot->voltage});
        rests_on.push_back("overshoot measured at an unstated reverse voltage, taken as it is");
    } else {
        const double share = bench.allowances.rectifier_overshoot;
        terms.push_back({"overshoot, assumed", share * blocked});
        rests_on.push_back(fmt::format("overshoot {} of {}, not measured", format_quantity(share, Unit::fraction),
                                       format_quantity(blocked, Unit::volt)));
    }
    return terms;
}

Terms capacitor_voltage_terms(Seat seat, const At& at, const Operated& operated) {
    const CapacitorStress& state = bank_state(operated.state, seat);
    const bool positive = std::abs(state.voltage_max) >= std::abs(state.voltage_min);
    const double peak = positive ? state.voltage_max : -state.voltage_min;
    if (seat == Seat::output_capacitor)
        return {{"output", state.voltage_average}, {"half of its ripple", peak - state.voltage_average}};
    if (seat == Seat::input_capacitor)
        return {{"input", state.voltage_average}, {"half of its ripple", peak - state.voltage_average}};
    Terms terms = blocking_terms(peak, at.input_voltage, operated.state.output_voltage_average, 1, 1);
    terms.back().name = "drop and half of its ripple";
    return terms;
}

double leg_share(const Bench& bench) {
    const int legs = bench.models.rectifier->legs;
    return legs > 1 ? (1 + bench.allowances.sharing) / legs : 1.0;
}

/// ½·L_lk·I²·f·V_c/(V_c − V_out/n), V_c what the clamp leaves above the input: while it resets the leakage, the magnetising
/// inductance goes on feeding it (any text on flyback converters). A clamp below what the switch must block takes what there is.
double clamp_power(const Bench& bench, const At& at, const Operated& operated) {
    const Circuit& circuit = operated.circuit;
    const Topology& topology = *circuit.topology;
    const double current = std::max(0.0, operated.state.switch_.current_turn_off);
    const double stored = 0.5 * circuit.primary.inductance * (1 - circuit.coupling * circuit.coupling) * current * current * at.frequency;
    const double blocked = operated.state.switch_.voltage_peak, clamped = *bench.setup->converter.clamp.voltage;
    if (!(clamped > blocked)) return operated.state.input_power;
    if (!topology.transformer) return stored;
    const double above_input = clamped - at.input_voltage, reflected = operated.state.output_voltage_average / circuit.turns_ratio;
    return above_input > reflected ? stored * above_input / (above_input - reflected) : operated.state.input_power;
}

constexpr std::size_t kNoEntry = static_cast<std::size_t>(-1);

Terms beside_terms(const Bench& bench, const StressKey& key, const At& at, const Operated& operated, std::vector<std::string>& rests_on) {
    const Beside& one = bench.beside[static_cast<std::size_t>(key.beside)];
    const SteadyState& state = operated.state;
    switch (one.what) {
        case Beside::What::fuse:
            if (key.stress == Stress::current_average) return {{"input current", state.input_current_average}};
            rests_on = bench.connected->rests_on;
            return {{"hot connection", bench.connected->peaks.source_charge_squared}};
        case Beside::What::first_core: return {{"winding current", state.primary.current_peak}};
        case Beside::What::second_core: return {{"winding current", std::max(state.secondary.current_peak, -state.secondary.current_min)}};
        case Beside::What::common_core: return {{"both windings' current", state.core_current_peak}};
        case Beside::What::sense: {
            double loss = 0;
            for (const Loss& part : operated.losses)
                if (part.name == "sense resistor") loss += part.power;
            return {{"loss", loss}};
        }
        case Beside::What::clamp: return {{"leakage energy", clamp_power(bench, at, operated)}};
        case Beside::What::across: break;
    }
    const bool single = key.stress == Stress::voltage_peak_single;
    if (one.between == "switch" || one.between == "rectifier") {
        const Seat seat = one.between == "switch" ? Seat::switch_ : Seat::rectifier;
        Terms terms = seat == Seat::switch_ ? switch_voltage_terms(bench, at, operated, single, rests_on) : rectifier_voltage_terms(bench, at, operated, single, rests_on);
        if (single)
            if (const auto scene = connection_terms(bench, {seat, 0, key.stress}, sum(terms))) return *scene;
        return terms;
    }
    const Seat seat = one.between == "input" ? Seat::input_capacitor : one.between == "coupling" ? Seat::coupling_capacitor : Seat::output_capacitor;
    Terms terms = capacitor_voltage_terms(seat, at, operated);
    if (!single) return terms;
    add_surge(terms, bench, at, operated);
    if (const auto scene = connection_terms(bench, {seat, 0, key.stress}, sum(terms))) {
        rests_on = bench.connected->rests_on;
        return *scene;
    }
    return terms;
}

/// The terms of any stress; the value is their sum.
Terms terms_of(const Bench& bench, const StressKey& key, const At& at, const Operated& operated, std::vector<std::string>& rests_on) {
    if (key.beside >= 0) return beside_terms(bench, key, at, operated, rests_on);
    const SteadyState& state = operated.state;
    const Converter& converter = bench.setup->converter;
    const double sharing = key.seat == Seat::switch_ && bench.models.switch_count > 1 ? (1 + bench.allowances.sharing) / bench.models.switch_count : 1;
    switch (key.stress) {
        case Stress::voltage_peak_repetitive:
            if (key.seat == Seat::switch_) return switch_voltage_terms(bench, at, operated, false, rests_on);
            if (key.seat == Seat::rectifier) return rectifier_voltage_terms(bench, at, operated, false, rests_on);
            return capacitor_voltage_terms(key.seat, at, operated);
        case Stress::voltage_peak_single: {
            Terms terms = key.seat == Seat::switch_     ? switch_voltage_terms(bench, at, operated, true, rests_on)
                          : key.seat == Seat::rectifier ? rectifier_voltage_terms(bench, at, operated, true, rests_on)
                                                        : capacitor_voltage_terms(key.seat, at, operated);
            if (key.seat != Seat::switch_ && key.seat != Seat::rectifier) add_surge(terms, bench, at, operated);
            if (const auto scene = connection_terms(bench, key, sum(terms))) {
                rests_on = bench.connected->rests_on;
                return *scene;
            }
            return terms;
        }
        case Stress::voltage_average: return {{"mean", bank_state(state, key.seat).voltage_average}};
        case Stress::voltage_reverse: {
            const double at_work = std::max(0.0, -bank_state(state, key.seat).voltage_min);
            if (const auto scene = connection_terms(bench, key, at_work)) {
                rests_on = bench.connected->rests_on;
                return *scene;
            }
            return {{"reverse", at_work}};
        }
        case Stress::current_surge:
            rests_on = bench.connected->rests_on;
            return connection_terms(bench, key, 0).value_or(Terms{{"hot connection", 0}});
        case Stress::gate_voltage: return {{"drive", converter.drive.voltage->highest}};
        case Stress::drive_voltage_lowest:
            return {{"lowest drive", converter.drive.voltage->lowest},
                    {"drop in the sense resistor", -operated.circuit.sense_resistance * state.switch_.current_peak}};
        case Stress::current_average:
            if (leg_share(bench) != 1)
                rests_on.push_back(fmt::format("the busier leg taken to carry {} more than its share", format_quantity(bench.allowances.sharing, Unit::fraction)));
            return {{"per leg", state.rectifier.current_average * leg_share(bench)}};
        case Stress::current_rms:
            if (sharing != 1) rests_on.push_back("the busiest of the paralleled parts taken above its share");
            return {{"switch current", state.switch_.current_rms * sharing}};
        case Stress::current_peak:
            if (key.seat == Seat::switch_) return {{"switch current", state.switch_.current_peak * sharing}};
            return {{"per leg", state.rectifier.current_peak * leg_share(bench)}};
        case Stress::ripple_current: return {{"ripple", ripple_of_one(bench, key, operated)}};
        case Stress::surge_integral: break;  // of a fuse alone
        case Stress::output_ripple: return {{"peak to peak", state.output_ripple}};
        case Stress::power: {
            Terms terms;
            for (const Loss& loss : operated.losses)
                if (loss.seat == key.seat) terms.push_back({loss.name, loss.power});
            return terms;
        }
        case Stress::junction_temperature: {
            if (!operated.stable) return {{"none", NAN}};
            const auto junction = operated.junction(bench, key.seat);
            return {{"ambient", at.ambient}, {"inner air above ambient", operated.air - at.ambient}, {"own and shared rise", *junction - operated.air}};
        }
        case Stress::runaway_gain: return {{"gain", operated.stable ? operated.heat.gain : std::max(1.0, operated.heat.gain) + 1e-9}};
        case Stress::hot_spot_temperature: {
            const auto rise = ripple_rise(*capacitor_at(bench, key), ripple_of_one(bench, key, operated));
            return {{"ambient", at.ambient},
                    {"inner air above ambient", operated.air - at.ambient},
                    {"warmer by", converter.seat(key.seat).warmer_by},
                    {"ripple", rise.value_or(0)}};
        }
        case Stress::life: {
            const auto rise = ripple_rise(*capacitor_at(bench, key), ripple_of_one(bench, key, operated));
            return {{"life", capacitor_life(*capacitor_at(bench, key), operated.air + converter.seat(key.seat).warmer_by + rise.value_or(0)).value_or(NAN)}};
        }
        case Stress::regulation: return {{"reached", state.reached ? 1.0 : 0.0}};
        case Stress::air_temperature:
        case Stress::series_resistance: break;  // of the place, not of the work: surroundings.hpp
    }
    return {};
}

}  // namespace

Sight sight_of(const Bench& bench) {
    Sight sight;
    const Setup& setup = *bench.setup;
    const Converter& converter = setup.converter;
    const auto see = [&](Seat seat, std::size_t entry, Stress stress) { sight.keys.push_back({seat, entry, stress}); };
    const auto lacks = [&](Seat seat, std::size_t entry, Stress stress, std::string figure) {
        sight.missing.push_back({seat, entry, stress, std::move(figure)});
    };
    for (const Seat seat : kSeats) {
        if (!has_seat(*converter.topology, seat)) continue;
        const auto fitted = setup.fitted.find(seat);
        const std::size_t entries = fitted == setup.fitted.end() ? 1 : fitted->second.size();
        for (std::size_t entry = 0; entry < entries; ++entry) {
            const bool part = fitted != setup.fitted.end();
            const bool heated = std::find(bench.heated.begin(), bench.heated.end(), seat) != bench.heated.end();
            const auto heat = [&](Stress stress) {
                if (heated) see(seat, entry, stress);
                const std::string& sink = converter.seat(seat).heatsink;
                for (const Seat other : {Seat::switch_, Seat::rectifier}) {
                    const bool counted = std::find(bench.heated.begin(), bench.heated.end(), other) != bench.heated.end();
                    if (other != seat && !sink.empty() && converter.seat(other).heatsink == sink && !counted)
                        lacks(seat, entry, stress, "the heat of " + converter.reference(other) + " on the same heatsink");
                }
                for (const auto& [where, figure] : bench.no_heat)
                    if (where == seat) lacks(seat, entry, stress, figure);
            };
            if (seat == Seat::switch_) {
                const bool held = converter.seat(seat).overshoot || converter.clamp.voltage;
                for (const Stress stress : {Stress::voltage_peak_repetitive, Stress::voltage_peak_single}) {
                    if (stress == Stress::voltage_peak_single && !(surge_of(bench) > 0) && !bench.connected) continue;
                    if (converter.topology->transformer && !held) lacks(seat, entry, stress, "a measured overshoot, or [clamp]");
                    else see(seat, entry, stress);
                }
                if (converter.drive.voltage) {
                    see(seat, entry, Stress::gate_voltage);
                    see(seat, entry, Stress::drive_voltage_lowest);
                } else {
                    lacks(seat, entry, Stress::gate_voltage, "drive.voltage");
                    lacks(seat, entry, Stress::drive_voltage_lowest, "drive.voltage");
                }
                see(seat, entry, Stress::current_rms);
                see(seat, entry, Stress::current_peak);
                if (!part) continue;
                const SwitchModel& model = *bench.models.switch_;
                if (!model.missing.empty() && !model.resistance) {
                    lacks(seat, entry, Stress::power, "R_DS(on)");
                    lacks(seat, entry, Stress::junction_temperature, "R_DS(on)");
                } else if (!model.switching_charge || !converter.drive.voltage || !converter.drive.resistance) {
                    const std::string what = !model.switching_charge ? "Q_g" : "drive.voltage and drive.resistance";
                    lacks(seat, entry, Stress::power, what);
                    lacks(seat, entry, Stress::junction_temperature, what);
                } else if (!bench.drives_plateau) {
                    for (const Stress stress : {Stress::power, Stress::junction_temperature})
                        lacks(seat, entry, stress, "a drive voltage above the gate plateau");
                } else {
                    see(seat, entry, Stress::power);
                    heat(Stress::junction_temperature);
                    // What is on record gives a lower bound: enough to reject, not to hold.
                    if (!model.output_capacitance)
                        for (const Stress stress : {Stress::power, Stress::junction_temperature}) lacks(seat, entry, stress, "C_oss");
                    if (bench.models.rectifier)
                        for (const std::string& figure : bench.models.rectifier->missing)
                            if (figure == "C_j" || figure == "Q_rr")
                                for (const Stress stress : {Stress::power, Stress::junction_temperature})
                                    lacks(seat, entry, stress, figure + " of the rectifier");
                }
            } else if (seat == Seat::rectifier) {
                see(seat, entry, Stress::voltage_peak_repetitive);
                if (surge_of(bench) > 0 || bench.connected) see(seat, entry, Stress::voltage_peak_single);
                if (!part) continue;
                if (bench.connected && bench.connected->peaks.rectifier_current > kNoSurge) see(seat, entry, Stress::current_surge);
                see(seat, entry, Stress::current_average);
                see(seat, entry, Stress::current_peak);
                const RectifierModel& model = *bench.models.rectifier;
                const std::string figure = !model.threshold ? "V_F" : !model.leakage ? "I_R" : model.recovers && !model.recovery_charge ? "Q_rr" : "";
                if (!figure.empty()) {
                    for (const Stress stress : {Stress::power, Stress::junction_temperature, Stress::runaway_gain}) lacks(seat, entry, stress, figure);
                } else {
                    see(seat, entry, Stress::power);
                    heat(Stress::junction_temperature);
                    heat(Stress::runaway_gain);
                }
            } else {
                see(seat, entry, Stress::voltage_average);
                see(seat, entry, Stress::voltage_peak_repetitive);
                see(seat, entry, Stress::voltage_peak_single);
                see(seat, entry, Stress::voltage_reverse);
                if (!part) continue;
                if (seat == Seat::output_capacitor && converter.operating.output_ripple) see(seat, entry, Stress::output_ripple);
                const CapacitorModel& model = bench.models.banks.at(seat)[entry].model;
                if (!model.capacitance) {
                    lacks(seat, entry, Stress::ripple_current, "C");
                    continue;
                }
                const bool shared = entries > 1 && !model.resistance;
                if (shared) lacks(seat, entry, Stress::ripple_current, "ESR");
                else see(seat, entry, Stress::ripple_current);
                if (ripple_rise(model, 0) && !shared) {
                    see(seat, entry, Stress::hot_spot_temperature);
                    if (model.life && model.highest_temperature && capacitor_life(model, 300)) see(seat, entry, Stress::life);
                    else lacks(seat, entry, Stress::life, model.life ? "T_max" : "life");
                } else {
                    lacks(seat, entry, Stress::hot_spot_temperature, shared ? "ESR" : "I_R~");
                    lacks(seat, entry, Stress::life, shared ? "ESR" : "I_R~");
                }
            }
        }
    }
    // A drop that is not on record is missing in every current: no seat holds on it, though it may break on what there is.
    const auto unsure = [&](Seat of, const std::string& figure) {
        const std::string what = figure + " of " + converter.reference(of);
        for (const StressKey& key : sight.keys) {
            const bool current = info(key.stress).unit == Unit::ampere || key.stress == Stress::power || key.stress == Stress::junction_temperature ||
                                 key.stress == Stress::hot_spot_temperature || key.stress == Stress::life || key.stress == Stress::output_ripple ||
                                 key.stress == Stress::runaway_gain;
            if (current && key.stress != Stress::current_surge && key.seat != of) lacks(key.seat, key.entry, key.stress, what);
        }
    };
    if (bench.models.rectifier && !bench.models.rectifier->threshold) unsure(Seat::rectifier, "V_F");
    if (bench.models.switch_ && !bench.models.switch_->resistance) unsure(Seat::switch_, "R_DS(on)");
    for (std::size_t k = 0; k < bench.beside.size(); ++k)
        for (const Stress stress : stresses_of(bench.beside[k])) {
            const bool once = stress == Stress::surge_integral;
            if (once && (!bench.connected || !bench.connected->not_computed.empty())) continue;
            const bool coupling = bench.beside[k].between == "coupling" && !has_seat(*converter.topology, Seat::coupling_capacitor);
            if (!coupling) sight.keys.push_back({Seat::switch_, kNoEntry, stress, static_cast<int>(k)});
        }
    if (bench.connected && !bench.connected->not_computed.empty())
        for (const StressKey& key : sight.keys)
            if (key.stress == Stress::voltage_peak_single && key.beside < 0) lacks(key.seat, key.entry, key.stress, "the hot connection (" + bench.connected->not_computed + ")");
    return sight;
}

std::vector<double> look(const Bench& bench, const Sight& sight, const At& at, const Operated& operated) {
    std::vector<double> values;
    values.reserve(sight.keys.size());
    std::vector<std::string> unused;
    for (const StressKey& key : sight.keys) {
        unused.clear();
        values.push_back(sum(terms_of(bench, key, at, operated, unused)));
    }
    return values;
}

StressValue explain(const Bench& bench, const StressKey& key, const At& at, const Operated& operated) {
    StressValue value;
    value.stress = key.stress;
    value.at = at;
    value.made_of = terms_of(bench, key, at, operated, value.rests_on);
    std::erase_if(value.made_of, [&](const Term& term) { return term.value == 0 && value.made_of.size() > 1; });
    const bool once = std::any_of(value.made_of.begin(), value.made_of.end(), [](const Term& term) { return term.name.ends_with("hot connection"); });
    if (once) {
        value.at = At{};
        value.at.input_voltage = bench.connected->input_voltage;
    }
    value.value = sum(value.made_of);
    const auto take = [&](const std::vector<std::string>& from) {
        value.rests_on.insert(value.rests_on.end(), from.begin(), from.end());
    };
    if (key.beside >= 0) return value;
    switch (key.stress) {
        case Stress::power:
        case Stress::junction_temperature:
        case Stress::runaway_gain:
            if (key.seat == Seat::switch_ && bench.models.switch_) take(bench.models.switch_->rests_on);
            if (key.seat == Seat::rectifier && bench.models.rectifier) take(bench.models.rectifier->rests_on);
            take(bench.assumptions);
            break;
        case Stress::ripple_current:
        case Stress::output_ripple:
        case Stress::hot_spot_temperature:
        case Stress::life:
            if (const CapacitorModel* model = capacitor_at(bench, key)) {
                take(model->rests_on);
                if (const double factor = cold_factor(*model, at.ambient, bench.end); factor > 1.02 && model->resistance)
                    value.rests_on.push_back(fmt::format("ESR at {} taken as {:.1f} times that at 20 °C", format_quantity(at.ambient, Unit::celsius), factor));
                if (model->aged) value.rests_on.push_back("end-of-life C and ESR: pulled, and not measured");
                if (!model->resistance) value.rests_on.push_back("ESR not on record, counted as 0");
            }
            break;
        default: break;
    }
    if (const Fitted* fitted = fitted_at(bench, key); fitted != nullptr && key.stress == Stress::voltage_peak_repetitive) {
        const CapacitorModel* model = capacitor_at(bench, key);
        if (model != nullptr && !model->resistance) value.rests_on.push_back("ESR not on record: its share of the ripple is not in");
        if (model != nullptr && model->kind == CapacitorKind::ceramic2) value.rests_on.push_back("capacitance at bias by planning figures");
    }
    return value;
}

}  // namespace binwright
