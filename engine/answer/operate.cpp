// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/operate.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "engine/loss/figures.hpp"
#include "engine/loss/winding_loss.hpp"

namespace binwright {
namespace {

/// Junction to case of everything in a seat together [K/W].
/// The busier of several counts: it stands above the case as if all carried as much as it does.
std::optional<double> junction_to_case(const Part& part, int count, int legs, End end, double sharing) {
    const double busier = end == End::worst && legs > 1 ? 1 + sharing : 1;
    for (const Figure& figure : part.figures)
        if (figure.symbol == Symbol::R_thjc) return busier * at_end(figure.value, end) / (figure.both_legs ? count : legs);
    const auto power = end_value(part, Symbol::P_tot, end), highest = end_value(part, Symbol::T_jmax, end);
    if (power && highest && *power > 0) return busier * (*highest - kCelsiusZero - 25) / *power / count;  // definition of P_tot
    return std::nullopt;
}

/// What a file says of a core. The ripple of one winding tells its flux where the windings are separate, or the only one.
CoreModel core_of(const WindingConfig& config, const Converter& converter) {
    CoreModel core;
    core.loss = config.core_loss;
    const auto& winding = converter.winding;
    // A transformer's core sees the magnetising current of its primary; what two coupled chokes do to one core is not told apart.
    const bool shared = has_secondary(*converter.topology) && !converter.topology->transformer &&
                        (winding.leakage || (winding.coupling && winding.coupling->highest > 0));
    if (shared || !(config.inductance > 0)) return core;
    core.inductance = config.inductance > 0 ? std::optional(config.inductance) : std::nullopt;
    core.turns = config.turns;
    core.area = config.core_area;
    core.volume = config.core_volume;
    core.steinmetz = config.steinmetz;
    return core;
}

void add_heat(Bench& bench, Seat seat, const Part& part, int count, int legs) {
    const SeatConfig& config = bench.setup->converter.seat(seat);
    const std::string name = bench.setup->converter.reference(seat);
    HeatSeat heat;
    if (config.heatsink.empty()) {
        const auto free = end_value(part, Symbol::R_thja, bench.end);
        if (!free) {
            bench.no_heat.emplace_back(seat, "R_th(j-a)");
            return;
        }
        heat.own = *free / count * (bench.end == End::worst && legs > 1 ? 1 + bench.allowances.sharing : 1);
        bench.assumptions.push_back(fmt::format("{} stands without a heatsink", name));
    } else {
        const auto inside = junction_to_case(part, count, legs, bench.end, bench.allowances.sharing);
        if (!inside) {
            bench.no_heat.emplace_back(seat, "R_th(j-c)");
            return;
        }
        double interface = bench.end == End::best ? 0.5 : bench.end == End::worst ? 2.0 : 1.2;
        if (config.interface_resistance) interface = *config.interface_resistance;
        else bench.assumptions.push_back(fmt::format("{}: case to sink taken as {:.1f} K/W", name, interface));
        heat.own = *inside + interface / count;
        int index = 0;
        for (const auto& [sink, resistance] : bench.setup->converter.heatsinks) {
            if (sink == config.heatsink) heat.sink = index;
            ++index;
        }
    }
    bench.heated.push_back(seat);
    bench.layout.seats.push_back(heat);
}

/// Highest drop at the peak current, as a share of the input voltage, by which losses are returned to the branches of switch,
/// rectifier and windings. The rectifier's is part of what the switch blocks.
constexpr double kMostDrop[] = {0.1, 0.02, 0.1, 0.1};

double rms_power(double power, double current) { return current > 0 ? std::max(0.0, power) / (current * current) : 0.0; }

}  // namespace

std::optional<double> Operated::junction(const Bench& bench, Seat seat) const {
    for (std::size_t k = 0; k < bench.heated.size(); ++k)
        if (bench.heated[k] == seat) return heat.junction[k];
    return std::nullopt;
}

double Operated::seat_power(Seat seat) const {
    double sum = 0;
    for (const Loss& loss : losses)
        if (loss.seat == seat) sum += loss.power;
    return sum;
}

Bench bench_of(const Setup& setup, End end, const Allowances& allowances) {
    Bench bench;
    bench.setup = &setup;
    bench.end = end;
    bench.allowances = allowances;
    bench.models = models_of(setup, end, allowances, setup.converter.operating.frequency.middle());
    bench.layout.enclosure = setup.converter.enclosure.value_or(0);
    if (!setup.converter.enclosure) bench.assumptions.push_back("open air: no enclosure is given");
    for (const auto& [name, resistance] : setup.converter.heatsinks) bench.layout.sinks.push_back(resistance);
    const auto not_included = [&](const std::vector<std::string>& missing, std::string_view symbol, std::string_view loss) {
        for (const std::string& one : missing)
            if (one == symbol) bench.not_included.push_back(fmt::format("{}: no {} on record", loss, symbol));
    };
    if (bench.models.switch_) {
        const SwitchModel& model = *bench.models.switch_;
        not_included(model.missing, "R_DS(on)", "switch conduction");
        not_included(model.missing, "Q_g", "switch overlap");
        not_included(model.missing, "C_oss", "switch output charge");
        if (model.switching_charge && (!setup.converter.drive.voltage || !setup.converter.drive.resistance))
            bench.not_included.push_back("switch overlap: [drive] gives no voltage or resistance");
        if (const auto& drive = setup.converter.drive.voltage; drive && model.switching_charge && model.plateau) {
            bench.drives_plateau = (end == End::best ? drive->highest : drive->lowest) > *model.plateau;
            if (!bench.drives_plateau)
                bench.not_included.push_back(fmt::format("switch overlap: the drive does not exceed the gate plateau of {}",
                                                         format_quantity(*model.plateau, Unit::volt)));
        }
        add_heat(bench, Seat::switch_, setup.fitted.at(Seat::switch_).front().lot.part, bench.models.switch_count, bench.models.switch_count);
    } else {
        bench.not_included.push_back("switch overlap and output charge: no part is fitted");
    }
    if (bench.models.rectifier) {
        const RectifierModel& model = *bench.models.rectifier;
        not_included(model.missing, "V_F", "rectifier forward");
        not_included(model.missing, "I_R", "rectifier leakage");
        not_included(model.missing, "C_j", "rectifier junction charge");
        not_included(model.missing, "Q_rr", "rectifier recovery");
        add_heat(bench, Seat::rectifier, setup.fitted.at(Seat::rectifier).front().lot.part, bench.models.rectifier_count, model.legs);
    } else {
        bench.not_included.push_back("rectifier leakage and junction charge: no part is fitted");
    }
    for (const auto& [seat, kinds] : bench.models.banks)
        for (const BankModel& kind : kinds)
            not_included(kind.model.missing, "ESR", fmt::format("{} ESR", bench.setup->converter.reference(seat)));
    bench.connected = connect(setup, bench.models, end);
    bench.beside = beside_of(setup.converter);
    const auto& winding = setup.converter.winding;
    const Topology& topology = *setup.converter.topology;
    const auto told = [&](const char* name, const std::optional<WindingConfig>& config) {
        if (!config) return;
        const CoreModel core = core_of(*config, setup.converter);
        if (!core_loss(core, {1, 1e5}))
            bench.not_included.push_back(fmt::format("core loss: none is given for the {} winding, nor turns, core_area, core_volume and steinmetz", name));
        if (!(config->resistance > 0)) bench.not_included.push_back(fmt::format("copper loss: no resistance is given for the {} winding", name));
    };
    told("primary", winding.primary);
    if (has_secondary(topology) && !topology.transformer) told("secondary", winding.secondary ? winding.secondary : winding.primary);
    if (has_secondary(topology) && !winding.coupling && !winding.leakage)
        bench.assumptions.push_back(topology.transformer ? "no coupling or leakage is given: the windings are taken as perfectly coupled"
                                                         : "no coupling is given: the windings are taken as separate chokes");
    return bench;
}

Operated operate(const Bench& bench, const At& at, Solver& solver, double nothing) {
    const Setup& setup = *bench.setup;
    const Models& models = bench.models;
    Operated result;
    Circuit circuit = circuit_of(setup, models, bench.end, at);
    circuit.primary.inductance *= bench.primary_factor;
    if (!circuit.topology->transformer) circuit.secondary.inductance *= bench.secondary_factor;
    if (bench.coupling) circuit.coupling = *bench.coupling;
    const OperatingPoint point = point_of(setup, at);
    HeatLayout layout = bench.layout;
    layout.ambient = at.ambient;

    const auto& drive = setup.converter.drive;
    std::optional<GateDrive> gate;
    if (drive.voltage && drive.resistance)
        // The lowest drive turns on most slowly; the highest costs most drive power: the former is the part's loss.
        gate = GateDrive{bench.end == End::best ? drive.voltage->highest : drive.voltage->lowest, *drive.resistance};
    SwitchModel switch_part = models.switch_.value_or(SwitchModel{});
    if (!gate) switch_part.switching_charge.reset(), switch_part.gate_charge.reset();
    const GateDrive used_gate = gate.value_or(GateDrive{12, 10});
    if (switch_part.plateau && !(used_gate.voltage > *switch_part.plateau)) switch_part.switching_charge.reset();

    const WindingConfig& first = *setup.converter.winding.primary;
    const WindingConfig* second = setup.converter.winding.secondary ? &*setup.converter.winding.secondary
                                  : has_secondary(*circuit.topology) && !circuit.topology->transformer ? &first : nullptr;
    const double copper_first = circuit.primary.resistance, copper_second = circuit.secondary.resistance;

    std::optional<double> junction_switch, junction_rectifier;
    double returned_switch = 0, returned_rectifier = 0, returned_first = 0, returned_second = 0;
    SwitchLoss switch_loss_now;
    RectifierLoss rectifier_loss_now;
    double on_resistance_now = circuit.switch_resistance;
    double drop_now = circuit.rectifier_drop, rectifier_resistance_now = circuit.rectifier_resistance;
    for (int round = 0; round < 80; ++round) {
        const double hot_switch = junction_switch.value_or(std::max(at.ambient, kCelsiusZero + 25));
        const double hot_rectifier = junction_rectifier.value_or(std::max(at.ambient, kCelsiusZero + 25));
        if (switch_part.resistance) on_resistance_now = on_resistance(switch_part, models.switch_count, hot_switch);
        if (models.rectifier && models.rectifier->threshold) {
            drop_now = forward_threshold(*models.rectifier, hot_rectifier);
            rectifier_resistance_now = forward_resistance(*models.rectifier, hot_rectifier);
        }
        circuit.switch_resistance = on_resistance_now + returned_switch;
        circuit.rectifier_drop = drop_now;
        circuit.rectifier_resistance = rectifier_resistance_now + returned_rectifier;
        circuit.primary.resistance = copper_first + returned_first;
        circuit.secondary.resistance = copper_second + returned_second;
        const SteadyState& state = solver.solve(circuit, point);

        const auto law = [&](const std::vector<double>& junction) {
            HeatSources sources;
            for (std::size_t k = 0; k < bench.heated.size(); ++k) {
                if (bench.heated[k] == Seat::switch_) {
                    const SwitchLoss loss = switch_loss(switch_part, models.switch_count, used_gate, state.switch_, at.frequency, junction[k]);
                    const double charge = models.rectifier ? rectifier_loss_now.junction + rectifier_loss_now.recovery : 0;
                    sources.power.push_back(loss.conduction + loss.overlap + loss.output + charge);
                    sources.slope.push_back(loss.conduction_slope);
                } else {
                    const RectifierLoss loss = rectifier_loss(*models.rectifier, state.rectifier, state.reverse_profile, at.frequency, junction[k]);
                    sources.power.push_back(loss.forward + loss.reverse);
                    sources.slope.push_back(loss.slope);
                }
            }
            return sources;
        };
        if (models.rectifier)
            rectifier_loss_now = rectifier_loss(*models.rectifier, state.rectifier, state.reverse_profile, at.frequency, hot_rectifier);
        // What else warms the inner air.
        layout.other_power = 0;
        if (layout.enclosure > 0) {
            double all = state.input_power - state.output_power;
            for (std::size_t k = 0; k < bench.heated.size(); ++k) all -= result.seat_power(bench.heated[k]);
            layout.other_power = round == 0 ? 0 : std::max(0.0, all);
        }
        HeatResult heat = settle_heat(layout, law);
        double moved = 0;
        for (std::size_t k = 0; k < bench.heated.size(); ++k) {
            std::optional<double>& junction = bench.heated[k] == Seat::switch_ ? junction_switch : junction_rectifier;
            if (heat.stable) {
                moved = std::max(moved, std::abs(junction.value_or(0) - heat.junction[k]) / 300);
                junction = heat.junction[k];
            }
        }
        if (models.switch_) {
            switch_loss_now = switch_loss(switch_part, models.switch_count, used_gate, state.switch_, at.frequency,
                                          junction_switch.value_or(hot_switch));
        }
        if (models.rectifier)
            rectifier_loss_now = rectifier_loss(*models.rectifier, state.rectifier, state.reverse_profile, at.frequency,
                                                junction_rectifier.value_or(hot_rectifier));
        const double charge = rectifier_loss_now.junction + rectifier_loss_now.recovery;
        const double extra_switch = switch_loss_now.overlap + switch_loss_now.output + charge;
        const double extra_rectifier = heat.stable || bench.heated.empty() ? rectifier_loss_now.reverse : 0;
        const auto core = [&](const WindingConfig& config, const WindingStress& stress, double inductance) {
            CoreModel model = core_of(config, setup.converter);
            if (model.inductance) model.inductance = inductance;
            return core_loss(model, {std::max(0.0, stress.current_peak - stress.current_min), at.frequency}).value_or(0);
        };
        const bool transformer = circuit.topology->transformer;
        const double core_first = core(first, transformer ? state.magnetising : state.primary, circuit.primary.inductance);
        const double core_second = second != nullptr && !transformer ? core(*second, state.secondary, circuit.secondary.inductance) : 0;
        const double extras[] = {extra_switch, extra_rectifier, core_first, core_second};
        const double currents[] = {state.switch_.current_rms, state.rectifier.current_rms, state.primary.current_rms, state.secondary.current_rms};
        const double peaks[] = {state.switch_.current_peak, state.rectifier.current_peak, state.primary.current_peak, state.secondary.current_peak};
        double* now[] = {&returned_switch, &returned_rectifier, &returned_first, &returned_second};
        double next[4], direct[4];
        for (int k = 0; k < 4; ++k) {
            // Where a branch carries next to nothing, a resistance that takes up the loss would bend the waveforms: what is
            // beyond a small drop is drawn from the input directly.
            next[k] = rms_power(extras[k], currents[k]);
            const double most = peaks[k] > 0 ? kMostDrop[k] * at.input_voltage / peaks[k] : 0.0;
            const bool capped = !(next[k] <= most && currents[k] > 0);
            next[k] = std::min(next[k], most);
            direct[k] = capped ? std::max(0.0, extras[k] - currents[k] * currents[k] * *now[k]) : 0.0;
        }
        for (int k = 0; k < 4; ++k) {
            const double difference = std::abs(next[k] - *now[k]) * currents[k] * currents[k];
            moved = std::max(moved, difference / std::max(1e-6, state.input_power));
            // Against swinging at light loads, where such a resistance is large.
            *now[k] = round < 8 ? next[k] : 0.5 * (next[k] + *now[k]);
        }
        result.heat = std::move(heat);
        result.stable = result.heat.stable || bench.heated.empty();

        // The losses as the network now has them: they add up exactly.
        result.losses.clear();
        const auto add = [&](std::string name, std::optional<Seat> seat, double power) {
            if (power != 0) result.losses.push_back({std::move(name), seat, power});
        };
        const double switch_square = state.switch_.current_rms * state.switch_.current_rms;
        const double rectifier_square = state.rectifier.current_rms * state.rectifier.current_rms;
        const double network_extra = switch_square * (circuit.switch_resistance - on_resistance_now) + direct[0];
        add("switch conduction", Seat::switch_, switch_square * on_resistance_now);
        if (extra_switch > 0) {
            add("switch overlap", Seat::switch_, network_extra * switch_loss_now.overlap / extra_switch);
            add("switch output charge", Seat::switch_, network_extra * switch_loss_now.output / extra_switch);
            add("rectifier junction charge", Seat::switch_, network_extra * rectifier_loss_now.junction / extra_switch);
            add("rectifier recovery", Seat::switch_, network_extra * rectifier_loss_now.recovery / extra_switch);
        }
        add("sense resistor", {}, switch_square * circuit.sense_resistance);
        add("rectifier forward", Seat::rectifier, drop_now * state.rectifier.current_average + rectifier_square * rectifier_resistance_now);
        add("rectifier leakage", Seat::rectifier, rectifier_square * (circuit.rectifier_resistance - rectifier_resistance_now) + direct[1]);
        const auto winding = [&](const std::string& name, const WindingStress& stress, double copper, double total, double beside) {
            add(name + " winding copper", {}, stress.current_rms * stress.current_rms * copper);
            add(name + " winding core", {}, stress.current_rms * stress.current_rms * (total - copper) + beside);
        };
        winding("primary", state.primary, copper_first, circuit.primary.resistance, direct[2]);
        if (has_secondary(*circuit.topology)) winding("secondary", state.secondary, copper_second, circuit.secondary.resistance, direct[3]);
        const auto bank = [&](Seat seat, const std::vector<CapacitorValues>& values, const CapacitorStress& stress) {
            double power = 0;
            for (std::size_t k = 0; k < values.size() && k < stress.branch_current_rms.size(); ++k)
                power += values[k].resistance * stress.branch_current_rms[k] * stress.branch_current_rms[k];
            add(fmt::format("{} ESR", setup.converter.reference(seat)), seat, power);
        };
        bank(Seat::input_capacitor, circuit.input, state.input);
        bank(Seat::coupling_capacitor, circuit.coupling_capacitor, state.coupling);
        bank(Seat::output_capacitor, circuit.output, state.output);
        if (circuit.topology->transformer && circuit.coupling < 1)
            add("leakage inductance", {}, 0.5 * circuit.primary.inductance * (1 - circuit.coupling * circuit.coupling) * state.switch_.current_turn_off *
                                              state.switch_.current_turn_off * at.frequency);
        if (moved < nothing || (!result.stable && round > 3) || round == 79) {
            result.state = state;
            const double beside = direct[0] + direct[1] + direct[2] + direct[3];
            result.state.input_power += beside;
            if (at.input_voltage > 0) result.state.input_current_average += beside / at.input_voltage;
            break;
        }
    }
    result.gate_power = switch_loss_now.gate;
    result.circuit = circuit;
    result.air = bench.heated.empty() ? at.ambient : result.heat.air;
    if (bench.heated.empty()) result.air += layout.enclosure * std::max(0.0, result.state.input_power - result.state.output_power);
    return result;
}

}  // namespace binwright
