// SPDX-License-Identifier: GPL-3.0-or-later
// One call: which command, with which options, and what its failures come to as messages and exit statuses.
#include "app/command/command.hpp"

#include <unistd.h>

#include <algorithm>
#include <cstdlib>
#include <iostream>
#include <nlohmann/json.hpp>

#include "app/command/call.hpp"
#include "app/command/session.hpp"
#include "engine/quantity/quantity.hpp"

namespace binwright {
namespace {

enum Status { kFaultyCall = 2, kMachineFailed = 4 };

void say_faults(Session& session, const std::vector<Fault>& faults) {
    if (!session.json) {
        for (const Fault& fault : faults) session.err << to_string(fault) << '\n';
        return;
    }
    Json errors = Json::array();
    for (const Fault& fault : faults) {
        Json entry;
        entry["file"] = fault.place.file.empty() ? Json() : Json(fault.place.file);
        entry["line"] = fault.place.line > 0 ? Json(fault.place.line) : Json();
        entry["column"] = fault.place.column > 0 ? Json(fault.place.column) : Json();
        entry["field"] = fault.field.empty() ? Json() : Json(fault.field);
        entry["message"] = fault.message;
        entry["expected"] = fault.expected.empty() ? Json() : Json(fault.expected);
        errors.push_back(std::move(entry));
    }
    session.err << Json{{"errors", errors}}.dump(2, ' ', false, Json::error_handler_t::replace) << '\n';
}

void set_colour(Session& session, const std::string& when) {
    const char* no_colour = std::getenv("NO_COLOR");
    if (when == "always")
        session.colour = true;
    else if (when == "never")
        session.colour = false;
    else if (when == "auto")
        session.colour = !(no_colour && *no_colour) && isatty(STDOUT_FILENO);
    else
        throw InputError(Fault{{}, "--color", "--color cannot be \"" + when + "\"; it is auto, always or never", "auto, always or never"});
}

void take_common(Session& session, const Call& call) {
    session.json = session.json || call.has("--json");
    session.dry_run = call.has("--dry-run");
    session.quiet = call.has("--quiet");
    session.sure = call.has("--sure");
    session.bin = call.text("--bin");
    session.rulebook = call.text("--rulebook");
    session.with = call.list("--with");
    if (session.bin && session.bin->empty())
        throw InputError(Fault{{}, "--bin", "--bin is given no path", "the path of a bin file, or demo"});
    set_colour(session, call.text("--color").value_or("auto"));
}

InputError unknown_command(const SplitCall& split) {
    std::vector<std::string> names;
    std::string word;
    for (const std::string& each : split.words) word += (word.empty() ? "" : " ") + each;
    for (const Command& command : commands()) names.push_back(command.name);
    std::string near = nearest_word(split.words.empty() ? std::string() : word, names);
    if (near.empty() && !split.words.empty()) {
        word = split.words.front();
        near = nearest_word(word, names);
    }
    return InputError(Fault{{}, "", "unknown command `" + word + "`; " + (near.empty() ? "see `binwright --help`" : "did you mean `" + near + "`?"),
                            "a command"});
}

bool is_group(const std::string& word) {
    return std::ranges::any_of(commands(), [&](const Command& command) { return command.name.starts_with(word + " "); });
}

int run(Session& session, const std::vector<std::string>& arguments) {
    const SplitCall split = split_call(arguments);
    const Command* command = split.command.empty() ? nullptr : find_command(split.command);
    const bool group = !command && split.words.size() == 1 && is_group(split.words.front());
    const ParsedCall parsed = parse_call(command, split.rest);
    if (parsed.version) {
        session.out << "binwright " BINWRIGHT_VERSION "\n";
        return 0;
    }
    if (parsed.help && (command || group || split.words.empty())) {
        session.out << (group ? group_help_text(split.words.front()) : help_text(command));
        return 0;
    }
    if (group)
        throw InputError(Fault{{}, "", "`binwright " + split.words.front() + "` needs to be told what to do; see `binwright " +
                                           split.words.front() + " --help`", "a command"});
    if (!command) throw unknown_command(split);
    take_common(session, parsed.call);
    return command->run(session, parsed.call);
}

}  // namespace

int run_command_line(int argc, char** argv, std::istream& in, std::ostream& out, std::ostream& err) {
    const std::vector<std::string> arguments(argv + std::min(argc, 1), argv + argc);
    Session session{.in = in, .out = out, .err = err};
    session.json = std::ranges::find(arguments, "--json") != arguments.end();
    const auto one = [&](const std::string& message) { say_faults(session, {Fault{{}, "", message, ""}}); };
    try {
        return run(session, arguments);
    } catch (const InputError& error) {
        say_faults(session, error.faults);
        return kFaultyCall;
    } catch (const EditRefused& error) {
        one(error.what());
        return kFaultyCall;
    } catch (const OutsideModel& error) {
        one(error.what());
        return kFaultyCall;
    } catch (const StoreError& error) {
        one(error.what());
        return kMachineFailed;
    } catch (const std::bad_alloc&) {
        one("there is not enough memory for this");
        return kMachineFailed;
    } catch (const std::exception& error) {
        one(error.what());
        return kMachineFailed;
    }
}

std::optional<WindowCall> window_call(int argc, char** argv) {
    const std::vector<std::string> arguments(argv + std::min(argc, 1), argv + argc);
    const SplitCall split = split_call(arguments);
    if (!split.command.empty() || split.words.size() > 1) return std::nullopt;
    WindowCall call;
    if (!split.words.empty()) {
        const std::string& word = split.words.front();
        if (is_group(word) || !(word.ends_with(".toml") || access(word.c_str(), F_OK) == 0)) return std::nullopt;
        call.converter_path = word;
    }
    try {
        const ParsedCall parsed = parse_call(nullptr, split.rest);
        for (const auto& [name, values] : parsed.call.values)
            if (name != "--bin") return std::nullopt;
        call.bin_path = parsed.call.text("--bin").value_or("");
    } catch (const InputError&) {
        return std::nullopt;
    }
    call.demo = call.bin_path == "demo";
    if (call.demo) call.bin_path.clear();
    return call;
}

}  // namespace binwright
