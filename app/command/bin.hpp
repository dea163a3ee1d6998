// SPDX-License-Identifier: GPL-3.0-or-later
// What the bin commands share: reading figures and dates as options, changing the bin in one step, printing lots.
#pragma once
#include <functional>
#include <string>
#include <vector>

#include "app/command/call.hpp"
#include "app/command/json.hpp"

namespace binwright {

/// Builds the edit from the bin as it is; throws what is wrong with the call. May be run more than once.
using EditOf = std::function<Edit(const Store&)>;

/// Changes the person's bin in one step, or says with --dry-run what would change. The edit is first built against the bin
/// as it is (or, where there is none yet, against one in memory), so that a faulty call neither makes nor touches a file.
/// `creates`: the command may make a new bin, with the starter part types in it.
/// @returns the exit status. @throws InputError, EditRefused, StoreError
int change_bin(Session& session, const std::string& command, bool creates, const EditOf& build);

/// The path that a changing command writes to. @throws InputError for the demo bin, unless it is a dry run
[[nodiscard]] std::string bin_to_change(Session& session);

struct NamedText {
    std::string name, text;
    int offset = 0;  ///< characters before `text` in the option's value
};
/// "NAME=TEXT". @throws InputError
[[nodiscard]] NamedText named_text(const std::string& option, const std::string& value);

/// "V_RRM=60 V" of --figure. @throws InputError with the option as its place
[[nodiscard]] Figure figure_of(const std::string& option, const std::string& value, Family family, Known known);
/// "technology=schottky" of --attribute, checked against the family's attributes. @throws InputError
[[nodiscard]] std::pair<std::string, std::string> attribute_of(const std::string& option, const std::string& value, Family family);
/// Refuses figures outside what their kind can be, unless --sure. @throws InputError
void refuse_implausible(const Session& session, const Part& part, const std::vector<Figure>& figures, const std::string& option);

/// "pulled" of --origin. @throws InputError
[[nodiscard]] Origin origin_of(const std::string& text);
/// "2026-03-01", not later than today. @throws InputError
[[nodiscard]] std::string date_of(const std::string& text);
[[nodiscard]] std::string today();

/// The lot of a label. @throws InputError when the bin has none
[[nodiscard]] LotRecord lot_of(const Store& store, const std::string& label);
[[nodiscard]] PartRecord part_of(const Store& store, const LotRecord& lot);
/// The part type of a name, case ignored; empty when there is none. `near`: the nearest name there is, or empty.
[[nodiscard]] std::string nearest_part(const Store& store, const std::string& name);

/// Lots as a table, one a line; or as JSON.
[[nodiscard]] std::string lot_rows(const Store& store, const std::vector<LotRecord>& lots);
[[nodiscard]] Json lot_list(const Store& store, const std::vector<LotRecord>& lots);

/// "12 mΩ max @ 100 kHz, 20 °C": as people read it.
[[nodiscard]] std::string figure_text(const Figure& figure);

}  // namespace binwright
