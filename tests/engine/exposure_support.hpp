// SPDX-License-Identifier: GPL-3.0-or-later
// A supply with every kind of loss in it, and parts to fit, for tests of what each position sees.
#pragma once
#include <string>

#include "engine/answer/operate.hpp"
#include "tests/engine/judge_support.hpp"

namespace binwright::test {

/// A sepic from a 12 V battery, everything known. {extra} lines are added at the end.
inline std::string supply_text(const std::string& topology = "sepic", const std::string& extra = "") {
    const bool four = topology == "sepic" || topology == "cuk" || topology == "zeta";
    return "kind = \"converter\"\nformat = 1\ntopology = \"" + topology + "\"\n" + R"(
[operating]
input_voltage  = ["10.5 V", "15 V"]
output_voltage = )" + (topology == "buck" ? R"(["3 V", "8 V"])" : topology == "boost" ? R"(["18 V", "26 V"])" : R"(["9 V", "15 V"])") + R"(
output_current = ["0.1 A", "2.5 A"]
frequency      = "100 kHz"
ambient        = ["-10 °C", "45 °C"]
output_tolerance = "3 %"
[source]
resistance = "30 mΩ"
inductance = "1 µH"
[winding]
)" + (four ? "coupling = 0.0\n" : "") + R"([winding.primary]
inductance = "33 µH"
tolerance  = "10 %"
resistance = "12 mΩ"
core_loss  = "0.4 W"
[drive]
voltage         = "12 V"
resistance      = "10 Ω"
maximum_duty    = "90 %"
minimum_on_time = "400 ns"
sense_resistance = "68 mΩ"
[heatsink.small]
resistance = "6 K/W"
[seat.switch]
reference = "Q1"
fitted    = "switch"
heatsink  = "small"
interface = "1.2 K/W"
overshoot = "4 V @ 9.5 A"
[seat.rectifier]
reference = "D1"
fitted    = "rectifier"
heatsink  = "small"
interface = "1.2 K/W"
[seat.input_capacitor]
fitted = "aluminium"
[seat.output_capacitor]
fitted = "polymer"
)" + (four ? "[seat.coupling_capacitor]\nfitted = \"film\"\n" : "") +
           extra;
}

inline std::optional<Lot> find_specimen(const std::string& name) {
    if (name == "switch")
        return lot_of("switch", {{"V_DSS", "75 V"}, {"V_GSS", "20 V"}, {"I_D", "70 A"}, {"R_DS(on)", "13 mΩ max @ 10 V"}, {"V_GS(th)", "3 V"},
                                 {"Q_g", "95 nC max"}, {"Q_gd", "32 nC max"}, {"Q_gs", "22 nC max"}, {"C_oss", "480 pF @ 25 V"}, {"R_g", "1.5 Ω"},
                                 {"T_jmax", "175 °C"}, {"R_th(j-c)", "1.1 K/W"}}, Known::datasheet, name);
    if (name == "rectifier" || name == "leaky") {
        Lot dual = lot_of("rectifier/schottky", {{"V_RRM", "60 V"}, {"I_F(AV)", "10 A"}, {"V_F", "0.63 V max @ 10 A, 25 °C"},
                                                 {"V_F", "0.57 V max @ 10 A, 125 °C"}, {"V_F", "0.42 V max @ 2 A, 125 °C"},
                                                 {"I_R", name == "leaky" ? "120 mA @ 45 V, 100 °C" : "15 mA @ 45 V, 100 °C"},
                                                 {"C_j", "380 pF @ 4 V"}, {"T_jmax", "150 °C"}, {"R_th(j-c)", "2.2 K/W"}}, Known::datasheet, name);
        dual.part.attributes["arrangement"] = "common cathode";
        return dual;
    }
    if (name == "polymer")
        return lot_of("capacitor/polymer", {{"C", "940 µF"}, {"U_R", "35 V"}, {"ESR", "6 mΩ"}, {"I_R~", "8 A @ 100 kHz"}, {"T_max", "105 °C"}, {"life", "5000 h"}},
                      Known::datasheet, name);
    if (name == "aluminium")
        return lot_of("capacitor/aluminium", {{"C", "680 µF"}, {"U_R", "35 V"}, {"ESR", "32 mΩ"}, {"I_R~", "1.9 A @ 100 kHz"}, {"T_max", "105 °C"}, {"life", "7000 h"}},
                      Known::datasheet, name);
    if (name == "film")
        return lot_of("capacitor/film", {{"C", "22 µF"}, {"U_R", "63 V"}, {"ESR", "8 mΩ"}, {"I_R~", "8 A @ 100 kHz"}, {"T_max", "105 °C"}}, Known::datasheet, name);
    return std::nullopt;
}

inline Setup setup_of(const std::string& text, const std::vector<std::string>& changes = {}) {
    return assemble(read_converter(text, "supply.toml", changes), find_specimen);
}

inline double total(const std::vector<Loss>& losses) {
    double sum = 0;
    for (const Loss& loss : losses) sum += loss.power;
    return sum;
}

}  // namespace binwright::test
