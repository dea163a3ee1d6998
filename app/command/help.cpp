// SPDX-License-Identifier: GPL-3.0-or-later
// `help`: of the program, of a command, and of the figures of parts.
#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

std::string usual_text(const Conditions& usual) {
    std::string text;
    const auto add = [&](const std::optional<double>& value, Unit unit) {
        if (value) text += (text.empty() ? "" : ", ") + format_quantity(*value, unit);
    };
    add(usual.voltage, Unit::volt);
    add(usual.current, Unit::ampere);
    add(usual.frequency, Unit::hertz);
    add(usual.temperature, Unit::celsius);
    return text;
}

int figures(Session& session) {
    if (session.json) {
        Json list = Json::array();
        for (const SymbolInfo& row : symbols()) {
            if (!row.in_switch && !row.in_rectifier && !row.in_capacitor) continue;  // of what stands in converter files only
            Json families = Json::array();
            if (row.in_switch) families.push_back("switch");
            if (row.in_rectifier) families.push_back("rectifier");
            if (row.in_capacitor) families.push_back("capacitor");
            list.push_back({{"symbol", std::string(row.name)}, {"plain", std::string(row.plain)}, {"meaning", std::string(row.meaning)},
                            {"unit", std::string(unit_symbol(row.unit))}, {"families", families}, {"rating", row.rating}, {"ages", row.ages}, {"usual", json_of(row.usual)}});
        }
        print_json(session, "help figures", {{"figures", list}});
        return 0;
    }
    for (const Family family : {Family::switch_, Family::rectifier, Family::capacitor}) {
        session.out << heading(to_string(family), session.colour) << '\n';
        Rows rows;
        rows.rows.push_back({"symbol", "plain", "unit", "usual conditions", "meaning"});
        for (const SymbolInfo& row : symbols())
            if (family == Family::switch_ ? row.in_switch : family == Family::rectifier ? row.in_rectifier : row.in_capacitor) {
                const std::string usual = usual_text(row.usual);
                rows.rows.push_back({std::string(row.name), std::string(row.plain), row.unit == Unit::none ? "1" : std::string(unit_symbol(row.unit)),
                                     usual.empty() ? "–" : usual, std::string(row.meaning)});
            }
        session.out << rows.text(2) << '\n';
    }
    session.out << folded("A figure may carry its column and its conditions: \"R_DS(on)=17.5 mΩ max @ 10 V\", \"V_F=0.62 V max @ 15 A, 25 °C\". Where it states no "
                          "conditions the usual ones are taken, and what rests on it says so. A rectifier's figures are per leg unless they say \"both legs\". "
                          "Case does not matter, nor which of the two spellings.")
                << '\n';
    return 0;
}

int run(Session& session, const Call& call) {
    std::string topic;
    for (const std::string& word : call.list("TOPIC")) topic += (topic.empty() ? "" : " ") + word;
    if (topic == "figures") return figures(session);
    std::vector<std::string> names = {"figures"};
    bool group = false;
    for (const Command& command : commands()) {
        names.push_back(command.name);
        group = group || command.name.starts_with(topic + " ");
    }
    if (topic.empty())
        session.out << help_text(nullptr);
    else if (const Command* command = find_command(topic))
        session.out << help_text(command);
    else if (group)
        session.out << group_help_text(topic);
    else {
        const std::string near = nearest_word(topic, names);
        throw InputError(Fault{{}, "TOPIC", "there is no help on \"" + topic + "\"; " + (near.empty() ? "it is on figures or on a command" : "did you mean \"" + near + "\"?"), "figures, or a command"});
    }
    return 0;
}

}  // namespace

Command help_command() {
    return {.name = "help",
            .summary = "help on a command, or on the figures of parts",
            .about = "",
            .options = {{"TOPIC", "", "a command, or figures", true}},
            .example = "binwright help figures",
            .example_says = "the symbols of parts' figures, their units and usual conditions",
            .run = run};
}

}  // namespace binwright
