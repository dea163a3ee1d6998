// SPDX-License-Identifier: GPL-3.0-or-later
// `new`: a commented converter file to start from.
#include <nlohmann/json.hpp>

#include "app/command/list.hpp"
#include "app/command/session.hpp"
#include "engine/quantity/quantity.hpp"

namespace binwright {
namespace {

Range asked(const Call& call, const std::string& option, Unit unit, Range otherwise) {
    const std::optional<std::string> text = call.text(option);
    if (!text) return otherwise;
    try {
        return parse_range(*text, unit);
    } catch (InputError& error) {
        for (Fault& fault : error.faults) {
            fault.field = option;
            fault.message = option + ": " + fault.message;
            fault.place = {};
        }
        throw InputError(error.faults);
    }
}

int run(Session& session, const Call& call) {
    const std::string name = call.text("TOPOLOGY").value_or("");
    const Topology* topology = find_topology(name);
    if (!topology) {
        std::vector<std::string> names;
        std::string list;
        for (const Topology& each : topologies()) {
            names.emplace_back(each.name);
            list += (list.empty() ? "" : ", ") + names.back();
        }
        const std::string near = nearest_word(name, names);
        throw InputError(Fault{{}, "TOPOLOGY", "there is no topology \"" + name + "\"" +
                                                   (near.empty() ? "; it is one of " + list : "; did you mean \"" + near + "\"?"),
                               "one of " + list});
    }
    const double output = topology->name == "buck" ? 5 : topology->name == "boost" ? 24 : 12;
    NewConverter wish;
    wish.title = call.text("--title").value_or("My " + std::string(topology->name));
    wish.input_voltage = asked(call, "--input", Unit::volt, {10.5, 15});
    wish.output_voltage = asked(call, "--output-voltage", Unit::volt, {output, output});
    wish.output_current = asked(call, "--current", Unit::ampere, {0.1, 1});
    wish.frequency = asked(call, "--frequency", Unit::hertz, {100e3, 100e3}).middle();
    const std::string text = new_converter_text(*topology, wish);
    const std::string path = call.text("--output").value_or("-");
    if (session.dry_run) {
        note(session, "would write " + std::to_string(text.size()) + " bytes to " + (path == "-" ? "standard output" : path));
        return 0;
    }
    if (session.json && path == "-") {
        print_json(session, "new", {{"topology", std::string(topology->name)}, {"text", text}});
        return 0;
    }
    write_text(session, path, text, session.sure);
    if (session.json)
        print_json(session, "new", {{"topology", std::string(topology->name)}, {"file", path}});
    else if (path != "-")
        note(session, "wrote " + path + "; next: binwright check " + path);
    return 0;
}

}  // namespace

Command new_command() {
    return {.name = "new",
            .summary = "write a commented converter file to start from",
            .about = "TOPOLOGY is buck, boost, inverting, sepic, cuk, zeta or flyback. Every value in the new file is a starting "
                     "point computed from the wishes below; change what you know better.",
            .options = {{"TOPOLOGY", "", "the kind of converter", false, true},
                        {"-o,--output", "FILE", "where to write it (else standard output)"},
                        {"--title", "TEXT", "its title"},
                        {"--input", "RANGE", "input voltage: \"10.5 V .. 15 V\""},
                        {"--output-voltage", "RANGE", "output voltage: \"24 V\""},
                        {"--current", "RANGE", "output current: \"0.1 A .. 1 A\""},
                        {"--frequency", "VALUE", "switching frequency: \"100 kHz\""},
                        {"--sure", "", "replace a file that is there already"}},
            .example = "binwright new boost --input \"10.5 V .. 15 V\" --output-voltage \"24 V\" -o lamp.toml",
            .example_says = "a boost converter from a 12 V battery to 24 V, in lamp.toml",
            .run = run};
}

}  // namespace binwright
