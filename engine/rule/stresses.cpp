// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/rule/stresses.hpp"

#include <algorithm>
#include <stdexcept>

namespace binwright {
namespace {

constexpr Symbol kSwitchLoss[] = {Symbol::R_DSon, Symbol::R_thjc, Symbol::R_thja, Symbol::Q_g,
                                  Symbol::Q_gd,   Symbol::Q_gs,   Symbol::C_oss,  Symbol::R_g};
constexpr Symbol kHeat[] = {Symbol::R_DSon, Symbol::R_thjc, Symbol::R_thja, Symbol::Q_g, Symbol::Q_gd, Symbol::Q_gs,
                            Symbol::C_oss,  Symbol::R_g,    Symbol::I_R,    Symbol::V_F, Symbol::C_j,  Symbol::Q_rr,
                            Symbol::t_rr};
constexpr Symbol kRunaway[] = {Symbol::I_R, Symbol::R_thjc, Symbol::R_thja, Symbol::V_F};
constexpr Symbol kGate[] = {Symbol::R_DSon};
constexpr Symbol kCapacitor[] = {Symbol::ESR, Symbol::tan_delta, Symbol::C};
constexpr Symbol kWarm[] = {Symbol::ESR, Symbol::tan_delta, Symbol::C, Symbol::I_ripple};
constexpr Symbol kLife[] = {Symbol::ESR, Symbol::tan_delta, Symbol::C, Symbol::I_ripple, Symbol::life, Symbol::T_max};

constexpr Family kFuse[] = {Family::fuse}, kChoke[] = {Family::choke}, kResistor[] = {Family::resistor};

constexpr bool yes = true, no = false;
constexpr StressRow kRows[] = {
    // stress, name, meaning, unit; switch, rectifier, capacitor, converter; rests on; only where it occurs
    {{Stress::voltage_average, "voltage_average", "mean voltage", Unit::volt}, no, no, yes, no, {}, no},
    {{Stress::voltage_peak_repetitive, "voltage_peak_repetitive", "repetitive peak voltage", Unit::volt}, yes, yes, yes, no, kCapacitor, no},
    {{Stress::voltage_peak_single, "voltage_peak_single", "single peak voltage", Unit::volt}, yes, yes, yes, no, {}, yes},
    {{Stress::voltage_reverse, "voltage_reverse", "voltage in reverse", Unit::volt}, no, no, yes, no, {}, yes},
    {{Stress::gate_voltage, "gate_voltage", "gate voltage", Unit::volt}, yes, no, no, no, {}, no},
    {{Stress::drive_voltage_lowest, "drive_voltage_lowest", "lowest drive voltage", Unit::volt}, yes, no, no, no, kGate, no},
    {{Stress::current_average, "current_average", "average current", Unit::ampere}, yes, yes, no, no, {}, no, kFuse},
    {{Stress::current_rms, "current_rms", "RMS current", Unit::ampere}, yes, yes, no, no, {}, no},
    {{Stress::current_peak, "current_peak", "peak current", Unit::ampere}, yes, yes, no, no, {}, no, kChoke},
    {{Stress::surge_integral, "surge_integral", "I²t of the hot connection", Unit::ampere2_second}, no, no, no, no, {}, yes, kFuse},
    {{Stress::current_surge, "current_surge", "surge current", Unit::ampere}, no, yes, no, no, {}, yes},
    {{Stress::ripple_current, "ripple_current", "ripple current", Unit::ampere}, no, no, yes, no, kCapacitor, no},
    {{Stress::output_ripple, "output_ripple", "output ripple", Unit::volt}, no, no, yes, no, kCapacitor, yes},
    {{Stress::power, "power", "loss", Unit::watt}, yes, yes, yes, no, kSwitchLoss, no, kResistor},
    {{Stress::junction_temperature, "junction_temperature", "junction temperature", Unit::celsius}, yes, yes, no, no, kHeat, no},
    {{Stress::hot_spot_temperature, "hot_spot_temperature", "hot spot", Unit::celsius}, no, no, yes, no, kWarm, no},
    {{Stress::runaway_gain, "runaway_gain", "heat gain of the leakage", Unit::none}, no, yes, no, no, kRunaway, no},
    {{Stress::life, "life", "life", Unit::second}, no, no, yes, no, kLife, no},
    {{Stress::air_temperature, "air_temperature", "air temperature", Unit::celsius}, no, no, yes, no, {}, no},
    {{Stress::series_resistance, "series_resistance", "resistance of the charging path", Unit::ohm}, no, no, yes, no, {}, no},
    {{Stress::regulation, "regulation", "share of the operating range that is reached", Unit::fraction}, no, no, no, yes, {}, no},
};

const std::vector<StressInfo>& infos() {
    static const std::vector<StressInfo> table = [] {
        std::vector<StressInfo> out;
        for (const StressRow& row : kRows) out.push_back(row.info);
        return out;
    }();
    return table;
}

constexpr RequirementInfo kRequirements[] = {
    {"life", "the life required", Stress::life},
    {"output ripple", "the ripple allowed", Stress::output_ripple},
    {"voltage applied", "the voltage applied", Stress::series_resistance},
    {"R_DS(on) gate voltage", "the gate voltage at which R_DS(on) is guaranteed", Stress::drive_voltage_lowest},
};

}  // namespace

std::span<const StressRow> stress_rows() { return kRows; }

const StressRow& stress_row(Stress stress) {
    for (const StressRow& row : kRows)
        if (row.info.stress == stress) return row;
    throw std::logic_error("a stress without its row");
}

std::span<const StressInfo> stresses() { return infos(); }
const StressInfo& info(Stress stress) { return stress_row(stress).info; }

std::optional<Stress> find_stress(std::string_view name) {
    for (const StressRow& row : kRows)
        if (row.info.name == name) return row.info.stress;
    return std::nullopt;
}

std::span<const RequirementInfo> requirements() { return kRequirements; }

std::string id_stem(const Rule& rule) {
    std::string id = rule.id;
    std::string selector = rule.selects;
    std::replace(selector.begin(), selector.end(), ' ', '-');
    const auto slash = selector.find('/');
    const std::string words[] = {selector.substr(0, slash), slash == std::string::npos ? "" : selector.substr(slash + 1)};
    for (const std::string& word : words)
        if (!word.empty() && id.size() > word.size() + 1 && id.starts_with(word) && id[word.size()] == '-') id.erase(0, word.size() + 1);
    return id;
}

bool selects(std::string_view selector, std::string_view part_selector) {
    for (std::size_t from = 0; from <= selector.size();) {
        const std::size_t end = std::min(selector.find(", ", from), selector.size());
        const std::string_view one = selector.substr(from, end - from);
        if (one == part_selector || (part_selector.size() > one.size() && part_selector.starts_with(one) && part_selector[one.size()] == '/')) return true;
        from = end + 2;
    }
    return false;
}

}  // namespace binwright
