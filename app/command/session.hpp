// SPDX-License-Identifier: GPL-3.0-or-later
// What every command shares: streams, common options, files in and out, the converter, its bin and its rulebook.
#pragma once
#include <iosfwd>
#include <nlohmann/json_fwd.hpp>
#include <optional>
#include <string>
#include <vector>

#include "catalog/store.hpp"
#include "engine/answer/judge.hpp"

namespace binwright {

using Json = nlohmann::ordered_json;

struct Session {
    std::istream& in;
    std::ostream& out;
    std::ostream& err;
    bool json = false, dry_run = false, quiet = false, sure = false, colour = false;
    std::optional<std::string> bin{};     ///< --bin
    std::optional<std::string> rulebook{};///< --rulebook
    std::vector<std::string> with{};      ///< --with
    std::vector<std::string> notes{};     ///< said beside the answer
};

/// Says something beside the answer: on standard error, or among "notes" with --json; nothing with --quiet.
void note(Session& session, const std::string& text);

/// Whole contents of a file, or of standard input for "-". @throws InputError when it cannot be read
[[nodiscard]] std::string read_text(Session& session, const std::string& path);

/// Writes a file whole or not at all; "-" is standard output. An existing file is kept unless `replace`.
/// @throws InputError (exists, no such folder), std::runtime_error (disk)
void write_text(Session& session, const std::string& path, const std::string& text, bool replace);

/// Prints an answer: {"format": 1, "command": …} and what `body` holds, and the notes.
void print_json(Session& session, const std::string& command, const Json& body);

/// A bin that a command looks into; nothing is created on disk.
struct OpenBin {
    Store store;
    std::string name;     ///< its path, or what stands in its place
    bool on_disk = false;
};

struct ConverterText {
    std::string path, text;
};

/// The bin that a reading command uses: --bin; else, for a demo converter, the demo bin; else BINWRIGHT_BIN or the
/// person's own bin; where that does not exist, the starter part types alone. Says which where it is not what one expects.
[[nodiscard]] OpenBin bin_for_reading(Session& session, const ConverterText* converter = nullptr);

/// Whether this is one of the program's own demo converters: its text to the byte, or its name in a folder app/demo.
[[nodiscard]] bool is_demo_converter(const ConverterText& converter);

/// A bin in memory with the starter part types, and the demo's lots where wanted.
[[nodiscard]] OpenBin bin_in_memory(bool demo);

/// --rulebook: a shipped one by name, with or without its level, or a file; else house.
[[nodiscard]] Rulebook rulebook_for(Session& session);
/// A rulebook file ("mine.toml", "mine.toml:II", "-") with what it is based on: shipped ones by name, or files beside it.
[[nodiscard]] Rulebook rulebook_from(Session& session, const std::string& path);

/// A converter read with --with, and its fitted parts found in its bin.
struct Job {
    Setup setup;
    std::optional<OpenBin> bin;  ///< opened where the converter names parts of one, or the command needs one
};
[[nodiscard]] Job job_for(Session& session, const std::string& path, bool needs_bin = false);

/// A seat of this converter. @throws InputError naming those it has
[[nodiscard]] Seat seat_of(const Converter& converter, const std::string& text);

}  // namespace binwright
