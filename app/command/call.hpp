// SPDX-License-Identifier: GPL-3.0-or-later
// A command as data (name, options, example, what it runs) and the values that one call gives it.
#pragma once
#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "engine/fault.hpp"

namespace binwright {

struct Session;

struct Option {
    std::string name;   ///< "--prefer", "-n,--most", or "FILE" for a positional argument
    std::string takes;  ///< what stands behind it: "KEY=VALUE"; empty for a flag
    std::string help;
    bool many = false;    ///< may be repeated (a positional one takes all that is left)
    bool needed = false;
};

/// The values of one call, by the option's last name ("--most") or the positional's name.
struct Call {
    std::map<std::string, std::vector<std::string>> values;
    [[nodiscard]] bool has(const std::string& name) const { return values.contains(name); }
    [[nodiscard]] std::optional<std::string> text(const std::string& name) const;
    [[nodiscard]] std::vector<std::string> list(const std::string& name) const;
    /// A whole number within lowest … highest. @throws InputError naming the option
    [[nodiscard]] std::optional<int> whole(const std::string& name, int lowest, int highest) const;
};

struct Command {
    std::string name;     ///< "check", "bin add"
    std::string summary;  ///< one line, for the list of commands
    std::string about;    ///< a paragraph for its own help; may be empty
    std::vector<Option> options;
    std::string example;  ///< one call that works
    std::string example_says;  ///< what that call does
    int (*run)(Session& session, const Call& call);
};

[[nodiscard]] const std::vector<Command>& commands();
[[nodiscard]] const Command* find_command(std::string_view name);
/// Options that every command takes.
[[nodiscard]] const std::vector<Option>& common_options();
/// The help of the whole program, or of one command.
[[nodiscard]] std::string help_text(const Command* command);
/// Of a group such as "bin": its commands.
[[nodiscard]] std::string group_help_text(std::string_view group);

/// The words of a call told apart from its options: "bin add" and the rest.
struct SplitCall {
    std::string command;            ///< "" when the call names none
    std::vector<std::string> rest;  ///< everything else, in order
    std::string first_word;         ///< the first argument that is no option, command or not
    std::vector<std::string> words; ///< every argument before a command that is neither an option nor its value
};
[[nodiscard]] SplitCall split_call(const std::vector<std::string>& arguments);

/// Reads the rest of a call for a command; common options come out among the values. @throws InputError
struct ParsedCall {
    Call call;
    bool help = false, version = false;
};
[[nodiscard]] ParsedCall parse_call(const Command* command, const std::vector<std::string>& rest);

}  // namespace binwright
