// SPDX-License-Identifier: GPL-3.0-or-later
// From argv to a command and its values, and the help texts made from the same table.
#include <CLI/CLI.hpp>
#include <algorithm>
#include <charconv>

#include "app/command/call.hpp"
#include "app/command/text.hpp"
#include "engine/quantity/quantity.hpp"

namespace binwright {
namespace {

bool is_positional(const Option& option) { return !option.name.starts_with('-'); }

/// A positional argument as help shows it.
std::string shown(const Option& option) { return option.takes.empty() ? option.name : option.takes; }

/// A call folded before its options, each line but the last ending in a backslash as a shell takes it.
std::string folded_call(const std::string& call) {
    std::string out, line = "example: ";
    std::string rest = call;
    while (!rest.empty()) {
        const std::size_t next = rest.find(" --", 1);
        const std::string piece = rest.substr(0, next);
        rest.erase(0, piece.size());
        if (text_width(line) + text_width(piece) > kTextWidth - 2) {
            out += line + " \\\n";
            line = "         ";
        }
        line += line == "         " ? piece.substr(1) : piece;
    }
    return out + line + "\n";
}

std::string last_name(const Option& option) {
    const std::size_t comma = option.name.rfind(',');
    return comma == std::string::npos ? option.name : option.name.substr(comma + 1);
}

Fault call_fault(std::string field, std::string message, std::string expected = {}) {
    return {{}, std::move(field), std::move(message), std::move(expected)};
}

std::vector<Option> options_of(const Command* command) {
    std::vector<Option> all = command ? command->options : std::vector<Option>{};
    all.insert(all.end(), common_options().begin(), common_options().end());
    return all;
}

std::string help_hint(const Command* command) {
    return "see `binwright " + (command ? command->name + " " : std::string()) + "--help`";
}

std::string option_rows(const std::vector<Option>& options) {
    Rows rows;
    for (const Option& option : options) {
        std::string name = is_positional(option) ? shown(option) : option.name;
        const std::size_t comma = name.find(',');
        if (comma != std::string::npos) name.insert(comma + 1, " ");
        if (!is_positional(option) && !option.takes.empty()) name += " " + option.takes;
        rows.rows.push_back({name, option.help});
    }
    return rows.text(2);
}

std::string usage(const Command& command) {
    std::string line = "binwright " + command.name;
    bool options = false;
    for (const Option& option : command.options) {
        if (!is_positional(option)) {
            options = true;
            continue;
        }
        line += option.needed ? " " + shown(option) : " [" + shown(option) + "]";
    }
    return line + (options ? " [options]" : "");
}

}  // namespace

std::optional<std::string> Call::text(const std::string& name) const {
    const auto found = values.find(name);
    if (found == values.end() || found->second.empty()) return std::nullopt;
    return found->second.back();
}

std::vector<std::string> Call::list(const std::string& name) const {
    const auto found = values.find(name);
    return found == values.end() ? std::vector<std::string>{} : found->second;
}

std::optional<int> Call::whole(const std::string& name, int lowest, int highest) const {
    const std::optional<std::string> given = text(name);
    if (!given) return std::nullopt;
    int value = 0;
    const auto [end, error] = std::from_chars(given->data(), given->data() + given->size(), value);
    if (error != std::errc() || end != given->data() + given->size() || value < lowest || value > highest)
        throw InputError(call_fault(name, name + " is \"" + *given + "\"; it must be a whole number between " + std::to_string(lowest) +
                                              " and " + std::to_string(highest),
                                    "a whole number"));
    return value;
}

const Command* find_command(std::string_view name) {
    for (const Command& command : commands())
        if (command.name == name) return &command;
    return nullptr;
}

const std::vector<Option>& common_options() {
    static const std::vector<Option> options = {
        {"--bin", "PATH", "the bin file, or `demo` for the demo's in memory (else BINWRIGHT_BIN, else in your data folder)"},
        {"--rulebook", "NAME|PATH", "a shipped rulebook or a file of your own (else house)"},
        {"--with", "KEY=VALUE", "the converter with one thing changed, not written back; may be repeated", true},
        {"--json", "", "answers and errors as JSON, in base SI units and °C"},
        {"--dry-run", "", "say what would change, and change nothing"},
        {"--quiet", "", "the answer alone, without notes beside it"},
        {"--color", "WHEN", "auto, always or never; NO_COLOR is heeded"},
        {"--version", "", "the version"},
        {"-h,--help", "", "this help"},
    };
    return options;
}

SplitCall split_call(const std::vector<std::string>& arguments) {
    SplitCall split;
    bool only_words = false;
    std::string group;
    for (std::size_t k = 0; k < arguments.size(); ++k) {
        const std::string& argument = arguments[k];
        if (!split.command.empty() || only_words || (argument.size() > 1 && argument.starts_with('-'))) {
            split.rest.push_back(argument);
            if (argument == "--") only_words = true;
            const bool takes = std::ranges::any_of(common_options(), [&](const Option& option) {
                return !option.takes.empty() && last_name(option) == argument;
            });
            if (split.command.empty() && takes && k + 1 < arguments.size()) split.rest.push_back(arguments[++k]);
            continue;
        }
        if (split.first_word.empty()) split.first_word = argument;
        const std::string name = group.empty() ? argument : group + " " + argument;
        if (find_command(name)) {
            split.command = name;
            split.words.clear();
            continue;
        }
        const bool is_group = group.empty() && std::ranges::any_of(commands(), [&](const Command& command) {
            return command.name.starts_with(name + " ");
        });
        if (is_group && split.words.empty()) group = argument;
        split.words.push_back(argument);
    }
    return split;
}

ParsedCall parse_call(const Command* command, const std::vector<std::string>& rest) {
    ParsedCall parsed;
    CLI::App app;
    app.set_help_flag();
    app.allow_extras();
    struct Slot {
        Option option;
        std::vector<std::string> texts;
        std::string text;
        bool flag = false;
        CLI::Option* handle = nullptr;
    };
    const std::vector<Option> options = options_of(command);
    std::vector<Slot> slots(options.size());
    for (std::size_t k = 0; k < options.size(); ++k) {
        Slot& slot = slots[k];
        slot.option = options[k];
        const bool positional = is_positional(slot.option);
        if (!positional && slot.option.takes.empty())
            slot.handle = app.add_flag(slot.option.name, slot.flag);
        else if (slot.option.many)
            slot.handle = app.add_option(slot.option.name, slot.texts)->allow_extra_args(positional);
        else
            slot.handle = app.add_option(slot.option.name, slot.text)->multi_option_policy(CLI::MultiOptionPolicy::TakeLast);
        if (positional && slot.option.many) slot.handle->expected(0, CLI::detail::expected_max_vector_size);
    }
    try {
        app.parse(std::vector<std::string>(rest.rbegin(), rest.rend()));
    } catch (const CLI::ArgumentMismatch&) {
        std::string name = rest.empty() ? "" : rest.back();
        const Option* option = nullptr;
        for (const Option& each : options)
            if (("," + each.name + ",").find("," + name + ",") != std::string::npos) option = &each;
        throw InputError(call_fault(name, name + " needs a value" + (option ? ": " + name + " " + option->takes : ""), option ? option->takes : ""));
    } catch (const CLI::ParseError& error) {
        throw InputError(call_fault("", std::string(error.what()) + "; " + help_hint(command)));
    }
    for (const Slot& slot : slots) {
        const std::string name = last_name(slot.option);
        if (slot.handle->count() == 0) continue;
        const bool flag = !is_positional(slot.option) && slot.option.takes.empty();
        if (!slot.option.many && !flag && slot.handle->count() > 1)
            throw InputError(call_fault(name, name + " is given " + std::to_string(slot.handle->count()) + " times"));
        parsed.call.values[name] = flag ? std::vector<std::string>{} : slot.option.many ? slot.texts : std::vector<std::string>{slot.text};
    }
    parsed.help = parsed.call.has("--help");
    parsed.version = parsed.call.has("--version");
    if (parsed.help || parsed.version) return parsed;

    std::vector<Fault> faults;
    std::vector<std::string> known;
    for (const Option& option : options)
        if (!is_positional(option)) known.push_back(last_name(option));
    for (const std::string& extra : app.remaining()) {
        if (extra == "--") continue;
        if (extra.starts_with('-')) {
            const std::string name = extra.substr(0, extra.find('='));
            const std::string near = nearest_word(name, known);
            faults.push_back(call_fault(name, "unknown option `" + name + "`" + (near.empty() ? "; " + help_hint(command) : "; did you mean `" + near + "`?")));
        } else {
            faults.push_back(call_fault("", "nothing is expected where `" + extra + "` stands; " + help_hint(command)));
        }
    }
    for (const Option& option : options)
        if (option.needed && !parsed.call.has(last_name(option)))
            faults.push_back(call_fault(last_name(option), "`binwright " + command->name + "` needs " + option.name + ", " + option.help +
                                                               "; " + help_hint(command), option.help));
    if (!faults.empty()) throw InputError(faults);
    return parsed;
}

std::string help_text(const Command* command) {
    if (!command) {
        std::string text =
            "binwright holds the power parts of a DC-DC converter to a rulebook: what each position really sees,\n"
            "which lots of your bin hold there, and in numbers why the others do not.\n\n"
            "  binwright [FILE]              the window, on a converter file where one is named\n"
            "  binwright COMMAND …           one answer on the command line\n\ncommands\n";
        Rows rows;
        for (const Command& each : commands()) rows.rows.push_back({each.name, each.summary});
        text += rows.text(2) + "\noptions of every command\n" + option_rows(common_options());
        text +=
            "\nexit status\n"
            "  0  everything holds, or done    1  something is rejected, or nothing was found\n"
            "  3  something is unproven        2  the input or the call is at fault    4  the machine failed\n"
            "\nexample: binwright --bin demo check app/demo/tide-gauge.toml\n"
            "         what is fitted in the demo's converter, judged by the house rulebook\n";
        return text;
    }
    std::string text = usage(*command) + "\n\n" + folded(command->summary) + "\n";
    if (!command->about.empty()) text += "\n" + folded(command->about) + "\n";
    if (!command->options.empty()) text += "\n" + option_rows(command->options);
    text += "\noptions of every command\n" + option_rows(common_options());
    text += "\n" + folded_call(command->example) + "         " + folded(command->example_says, 9, 9) + "\n";
    return text;
}

std::string group_help_text(std::string_view group) {
    std::string text = "binwright " + std::string(group) + " COMMAND …\n\n";
    Rows rows;
    const Command* first = nullptr;
    for (const Command& each : commands())
        if (each.name.starts_with(std::string(group) + " ")) {
            if (!first) first = &each;
            rows.rows.push_back({each.name, each.summary});
        }
    text += rows.text(2);
    if (first) text += "\n" + folded_call(first->example) + "         " + folded(first->example_says, 9, 9) + "\n";
    return text;
}

}  // namespace binwright
